//! The counted side: bars of the gases, the running line, the uprights, the wheel.

use super::model::{Part, Rung};
use super::picture::Picture;
use crate::charts::text::{coordinate, short};

/// A part shorter than this is left out; up to 1 it is drawn 1 wide.
const LEFT_OUT: f64 = 0.25;
/// A part shorter than this is solid: its pattern would not be seen.
const SOLID: f64 = 4.0;

/// Bars of all stages.
pub(super) fn bars(p: &Picture, out: &mut Vec<String>) {
    for (i, (stage, _)) in p.rungs.iter().enumerate() {
        row(p, stage, p.y(i) + p.form.bar_y, out);
    }
}

/// Bars of one stage, outwards from the upright: what is emitted to the right, credits to the left.
fn row(p: &Picture, stage: &Rung, y: f64, out: &mut Vec<String>) {
    for sign in [1.0, -1.0] {
        let mut at = p.scale.right;
        for (part, g) in stage.counted.parts() {
            if g * sign <= 0.0 {
                continue;
            }
            let w = g.abs() * p.scale.k;
            let x = if sign > 0.0 { at } else { at - w };
            at += w * sign;
            if w >= LEFT_OUT {
                out.push(format!(
                    r#"<rect class="b {}" x="{}" y="{}" width="{}" height="{}"{}/>"#,
                    class(part, g),
                    coordinate(x, 2),
                    short(y),
                    coordinate(w.max(1.0), 2),
                    short(p.form.bar),
                    fill(part, g, w)
                ));
            }
        }
    }
}

/// Class of a part in the stylesheet.
pub(super) fn class(part: Part, g: f64) -> &'static str {
    match part {
        Part::Fossil => "co2_fossil",
        Part::N2o => "n2o",
        Part::Ch4 => "ch4",
        Part::Land => "co2_land",
        Part::Unsplit => "co2e_unsplit",
        Part::Biogenic if g < 0.0 => "uptake",
        Part::Biogenic => "release",
    }
}

/// The fill attribute of a part of width `w`; empty where the class alone makes it solid.
/// Crop CO2 given back keeps its pattern at every width, as solid green means taken up.
pub(super) fn fill(part: Part, g: f64, w: f64) -> String {
    let class = class(part, g);
    match class {
        "co2_fossil" | "uptake" => String::new(),
        "release" => format!(r##" fill="url(#g-{class})""##),
        _ if w < SOLID => String::new(),
        _ => format!(r##" fill="url(#g-{class})""##),
    }
}

/// The running total: a step in every row, then straight up to the wheel. Its halo lies under the uprights and keeps
/// the line visible on dark bars.
pub(super) fn running_line_and_uprights(p: &Picture, out: &mut Vec<String>) {
    let line = running_line(p);
    out.push(format!(r#"<path class="halo" d="{line}"/>"#));
    let uprights = p.scale.left.into_iter().chain([p.scale.right]);
    out.extend(uprights.map(|x| {
        let (top, bottom) = (short(p.form.top), short(p.bottom));
        format!(r#"<path class="rail" d="M{} {top}V{bottom}"/>"#, coordinate(x, 1))
    }));
    out.push(format!(r#"<path class="run" d="{line}"/>"#));
    let (x, y) = (coordinate(p.scale.x(p.net), 1), short(p.form.top - 8.0));
    out.push(format!(
        r#"<g class="wheel"><circle cx="{x}" cy="{y}" r="6"/><circle class="hub" cx="{x}" cy="{y}" r="1.6"/></g>"#
    ));
}

fn running_line(p: &Picture) -> String {
    let mut line = String::new();
    for (i, (stage, run)) in p.rungs.iter().enumerate() {
        if stage.uptake {
            continue;
        }
        let y = short(p.y(i) + p.form.run_y);
        if line.is_empty() {
            line = format!("M{} {y}", coordinate(p.scale.right, 1));
        } else {
            line += &format!("V{y}");
        }
        line += &format!("H{}", coordinate(p.scale.x(*run), 1));
    }
    line + &format!("V{}", short(p.form.top - 8.0))
}
