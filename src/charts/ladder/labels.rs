//! Words that could collide: labels of the verticals, names, values, heads.

use super::model::Rung;
use super::picture::Picture;
use crate::charts::text::{chem, clip, coordinate, escape, figure, plain, short, width};

const LABEL: f64 = 12.5;
const HEAD: f64 = 13.5;
/// Between a label and its line, and between a label and the wheel.
const GAP: f64 = 4.0;
const WHEEL_GAP: f64 = 10.0;
/// Free space between two labels, and between a value and a line.
const CLEAR: f64 = 4.0;
const VALUE_CLEAR: f64 = 3.0;
/// A heading longer than this pushes its unit to the next line.
const SHORT_HEAD: usize = 9;

/// Side of a line on which a label stands.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Side {
    Left,
    Right,
}

impl Side {
    fn other(self) -> Self {
        match self {
            Side::Left => Side::Right,
            Side::Right => Side::Left,
        }
    }
}

/// A label above the picture, with the line it belongs to.
struct Label {
    x: f64,
    text: String,
    class: &'static str,
    gap: f64,
    /// Above the tier's baseline.
    lift: f64,
    wanted: Side,
}

/// The required saving and the baseline as lines, with the labels of both and of the net.
pub(super) fn verticals(p: &Picture, out: &mut Vec<String>) {
    let (from, to) = (short(p.form.top - 14.0), short(p.bottom));
    let mut line = |class: &str, g: f64| {
        let x = coordinate(p.scale.x(g), 1);
        out.push(format!(r#"<path class="{class}" d="M{x} {from}V{to}"/>"#));
    };
    if let Some(required) = p.ladder.required {
        line("req", required.g);
    }
    line("pet", p.ladder.baseline.g);
    let mut taken: [Vec<(f64, f64)>; 2] = Default::default();
    for label in labels(p) {
        out.extend(place(p, &label, &mut taken));
    }
}

/// Labels in the order in which they choose their place.
fn labels(p: &Picture) -> Vec<Label> {
    let meets = p.ladder.required.is_none_or(|r| p.net <= r.g);
    let label = |g: f64, text: String, class, wanted| Label {
        x: p.scale.x(g),
        text,
        class,
        gap: GAP,
        lift: 0.0,
        wanted,
    };
    let (net_side, required_side) = match meets {
        true => (Side::Left, Side::Right),
        false => (Side::Right, Side::Left),
    };
    let net = format!("net {}", figure(p.net));
    let mut out = vec![Label {
        gap: WHEEL_GAP,
        lift: -1.0,
        ..label(p.net, net, "net", net_side)
    }];
    if let Some(r) = p.ladder.required {
        let text = format!("{} % saving {}", plain(r.percent), figure(r.g));
        out.push(label(r.g, text, "req", required_side));
    }
    let baseline = &p.ladder.baseline;
    let text = format!("{} {}", baseline.word, figure(baseline.g));
    out.push(label(baseline.g, text, "pet", Side::Left));
    out
}

/// The label at the first free place: lower tier before upper, wanted side before the other; none if nothing is free.
fn place(p: &Picture, label: &Label, taken: &mut [Vec<(f64, f64)>; 2]) -> Option<String> {
    let w = width(&label.text, LABEL);
    let lowest = match (p.scale.names(), p.form.names) {
        (Some(names), Some(column)) => names + column,
        _ => 2.0,
    };
    for (tier, taken) in taken.iter_mut().enumerate() {
        for side in [label.wanted, label.wanted.other()] {
            let (x, span, anchor) = match side {
                Side::Right => {
                    let x = label.x + label.gap;
                    (x, (x, x + w), "start")
                }
                Side::Left => {
                    let x = label.x - label.gap;
                    (x, (x - w, x), "end")
                }
            };
            let inside = span.0 >= lowest && span.1 <= p.form.width - 2.0;
            let apart = |&(from, to): &(f64, f64)| span.1 + CLEAR <= from || span.0 - CLEAR >= to;
            if inside && taken.iter().all(apart) {
                taken.push(span);
                return Some(format!(
                    r#"<text class="vlab {}" x="{}" y="{}" text-anchor="{anchor}">{}</text>"#,
                    label.class,
                    coordinate(x, 1),
                    short(p.form.top - 5.0 - label.lift - tier as f64 * 16.0),
                    escape(&label.text)
                ));
            }
        }
    }
    None
}

/// Name and value of every row.
pub(super) fn names_and_values(p: &Picture, out: &mut Vec<String>) {
    for (i, (stage, run)) in p.rungs.iter().enumerate() {
        let y = p.y(i);
        out.push(name(p, stage, y));
        out.extend(value(p, stage, *run, y));
    }
}

fn name(p: &Picture, stage: &Rung, y: f64) -> String {
    let absent = if stage.absent { " absent" } else { "" };
    let (class, x, y, shown) = match (p.scale.names(), p.form.names) {
        (Some(names), Some(column)) => {
            let shown = clip(&stage.name, column - 14.0, 13.5);
            ("name", names + 8.0, y + p.form.pitch / 2.0 + 4.5, shown)
        }
        _ => {
            let credits = p.scale.counted.0 < 0.0;
            let x = if credits { p.form.pad } else { p.scale.right + 6.0 };
            let shown = clip(&stage.name, 230.0, 14.0);
            ("name halo-t", x, y + 16.0, shown)
        }
    };
    format!(
        r#"<text class="{class}{absent}" x="{}" y="{}">{}</text>"#,
        coordinate(x, 1),
        short(y),
        escape(&shown)
    )
}

/// The value of a row. Narrow: at the right edge. Else at the first free place after the bar, after the running line,
/// after a vertical; none if nothing is free, as the table has the figure.
fn value(p: &Picture, stage: &Rung, run: f64, y: f64) -> Option<String> {
    let text = if stage.absent {
        "not in this pathway".to_owned()
    } else if stage.uptake {
        "not counted".to_owned()
    } else {
        figure(stage.counted.sum())
    };
    let at = |class: &str, soft: bool, x: String, y: f64, rest: &str| {
        let absent = if soft { " absent" } else { "" };
        let y = short(y);
        format!(r#"<text class="{class}{absent}" x="{x}" y="{y}"{rest}>{text}</text>"#)
    };
    if p.form.names.is_none() {
        let x = short(p.form.width - p.form.pad);
        let end = r#" text-anchor="end""#;
        return Some(at("val halo-t", stage.absent, x, y + 16.0, end));
    }
    let mut verticals = vec![p.scale.x(p.ladder.baseline.g)];
    verticals.extend(p.ladder.required.map(|r| p.scale.x(r.g)));
    if !stage.uptake {
        verticals.push(p.scale.x(run));
    }
    verticals.sort_by(f64::total_cmp);
    let after_bar = p.scale.x(stage.counted.positive()) + 5.0;
    let places = [after_bar, p.scale.x(run) + 6.0]
        .into_iter()
        .chain(verticals.iter().map(|v| v + 5.0));
    let w = width(&text, p.form.value);
    let free = |&x: &f64| {
        let crosses = |&v: &f64| x - VALUE_CLEAR < v && v < x + w + VALUE_CLEAR;
        x >= after_bar - 1.0 && x + w <= p.form.width - 2.0 && !verticals.iter().any(crosses)
    };
    let x = coordinate(places.into_iter().find(free)?, 1);
    let y = y + p.form.bar_y + p.form.bar / 2.0 + 4.0;
    Some(at("val", stage.absent || stage.uptake, x, y, ""))
}

/// Heads of the two sides with their units, and the ends of the pathway.
pub(super) fn heads(p: &Picture, out: &mut Vec<String>) {
    let unit = chem("g CO2e per MJ of fuel");
    let (Some(names), Some(column)) = (p.scale.names(), p.form.names) else {
        out.push(format!(
            r#"<text class="unit" x="{}" y="{}" text-anchor="end">{unit}</text>"#,
            short(p.form.width - p.form.pad),
            short(p.bottom + 31.0)
        ));
        return;
    };
    if p.shows_crop() {
        let x = short(p.form.pad);
        out.push(format!(
            r#"<text class="head" x="{x}" y="16">The crop’s carbon</text><text class="unit" x="{x}" y="32">{}</text>"#,
            chem("g CO2 per MJ of fuel")
        ));
    }
    let head = p.ladder.heading.as_deref().unwrap_or("Counted");
    let beside = head.chars().count() <= SHORT_HEAD;
    let (dx, unit_y) = if beside { (57.0, 16.0) } else { (0.0, 32.0) };
    let longest = (dx + width("g CO2e per MJ of fuel", LABEL)).max(width(head, HEAD));
    // a long way below zero moves the upright so far right that the head would leave the picture
    let x = p.scale.right.min(p.form.width - p.form.pad - longest);
    out.push(format!(
        r#"<text class="head" x="{}" y="16">{}</text><text class="unit" x="{}" y="{}">{unit}</text>"#,
        coordinate(x, 1),
        escape(head),
        coordinate(x + dx, 1),
        short(unit_y)
    ));
    let middle = coordinate(names + column / 2.0, 1);
    let end = |y: f64, word: &str| {
        let y = short(y);
        format!(r#"<text class="end" x="{middle}" y="{y}" text-anchor="middle">{word}</text>"#)
    };
    out.push(end(p.form.top - 6.0, "wheel") + &end(p.bottom + 17.0, "field"));
}
