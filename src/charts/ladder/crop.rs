//! The crop's carbon: a waterfall hanging from the left upright, or in the narrow form a strip below the axis.

use super::look::{RELEASE, UPTAKE, bar, fill};
use super::model::NOTHING;
use super::picture::Picture;
use crate::charts::text::{coordinate, figure, short, width};

/// Carbon that is not given back is named when it passes this share of the uptake.
const OPEN_SHARE: f64 = 0.005;
/// Rows at least this high have room for the uptake's figure below its bar.
const ROOM_BELOW: f64 = 34.0;
const STRIP: f64 = 62.0;
const STRIP_BAR: f64 = 10.0;

/// Uptake from zero to its value, then each release from the running sum back towards zero.
pub(super) fn waterfall(p: &Picture, out: &mut Vec<String>) {
    let Some(left) = p.scale.left else { return };
    let x = |g: f64| left + g * p.scale.k;
    let (mut sum, mut last_y) = (0.0, None);
    for (i, (stage, _)) in p.rungs.iter().enumerate() {
        let g = stage.crop.unwrap_or(0.0);
        if g.abs() <= NOTHING {
            continue;
        }
        let y = p.y(i) + p.form.bar_y;
        let (a, b) = (x(sum).min(x(sum + g)), x(sum).max(x(sum + g)));
        if let Some(last_y) = last_y {
            out.push(format!(
                r#"<path class="crop-run" d="M{} {}V{}"/>"#,
                coordinate(x(sum), 1),
                short(last_y),
                short(y + p.form.bar)
            ));
        }
        let class = if g < 0.0 { UPTAKE } else { RELEASE };
        let w = (b - a).max(1.0);
        out.push(bar(class, &fill(class), &coordinate(a, 2), y, w, p.form.bar));
        out.push(value(p, g, (a, b), y));
        sum += g;
        last_y = Some(y);
    }
    let (taken_up, _) = p.ladder.crop_sums();
    if let Some(y) = last_y.filter(|_| sum.abs() > (OPEN_SHARE * taken_up).max(NOTHING)) {
        let words = if sum < 0.0 {
            "not given back"
        } else {
            "too much given back"
        };
        let text = format!("{} {words}", figure(sum.abs()));
        // left of the last bar, or from the edge of the picture if that would cut it
        let end = (x(sum) - 5.0).max(p.form.pad + width(&text, p.form.value));
        out.push(format!(
            r#"<text class="val warn" x="{}" y="{}" text-anchor="end">{text}</text>"#,
            coordinate(end, 1),
            short(y + p.form.bar + 11.5)
        ));
    }
}

/// The figure of a bar from `a` to `b`: left of it, else below or inside (uptake), else right of it.
fn value(p: &Picture, g: f64, (a, b): (f64, f64), y: f64) -> String {
    let text = format!("{}{}", if g < 0.0 { "\u{2212}" } else { "+" }, figure(g.abs()));
    let middle = y + p.form.bar / 2.0 + 4.0;
    let (class, x, y, anchor) = if a - 6.0 - width(&text, p.form.value) > p.form.pad {
        ("val", a - 5.0, middle, r#" text-anchor="end""#)
    } else if g > 0.0 {
        ("val", b + 5.0, middle, "")
    } else if p.form.pitch >= ROOM_BELOW {
        ("val", a + 1.0, y + p.form.bar + 11.5, "")
    } else {
        ("val on halo-t", a + 5.0, middle, "")
    };
    let (x, y) = (coordinate(x, 1), short(y));
    format!(r#"<text class="{class}" x="{x}" y="{y}"{anchor}>{text}</text>"#)
}

/// Height that the narrow form needs for its strip.
pub(super) fn strip_height(p: &Picture) -> f64 {
    match p.form.names {
        None if p.shows_crop() => STRIP,
        _ => 0.0,
    }
}

/// Two bars on the full width, the uptake above, the releases below laid end to end from the right.
pub(super) fn strip(p: &Picture, y: f64, out: &mut Vec<String>) {
    let (taken_up, given_back) = p.ladder.crop_sums();
    let (from, to) = (p.form.pad, p.form.width - p.form.pad);
    let k = (to - from) / taken_up.max(given_back);
    let line = short(y + 14.0);
    out.push(format!(
        r#"<text class="name" x="{}" y="{line}">The crop’s carbon</text><text class="val" x="{}" y="{line}" text-anchor="end">taken up {}, given back {}</text>"#,
        short(from),
        short(to),
        figure(taken_up),
        figure(given_back)
    ));
    if taken_up > NOTHING {
        let fill = fill(UPTAKE);
        out.push(bar(
            UPTAKE,
            &fill,
            &short(from),
            y + 21.0,
            taken_up * k,
            STRIP_BAR,
        ));
    }
    let (mut at, fill) = (to, fill(RELEASE));
    for g in p.ladder.stages.iter().filter_map(|s| s.crop) {
        if g > NOTHING {
            at -= g * k;
            out.push(bar(
                RELEASE,
                &fill,
                &coordinate(at, 2),
                y + 34.0,
                g * k,
                STRIP_BAR,
            ));
        }
    }
}
