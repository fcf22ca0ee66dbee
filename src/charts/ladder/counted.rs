//! The counted side: bars of the gases, the running line, the uprights, the wheel.

use super::look::{bar, class, fill_of_width};
use super::model::Rung;
use super::picture::Picture;
use crate::charts::text::{coordinate, short};

/// A part shorter than this is left out; up to 1 it is drawn 1 wide.
const LEFT_OUT: f64 = 0.25;

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
                let class = class(part, g);
                let fill = fill_of_width(class, w);
                let x = coordinate(x, 2);
                out.push(bar(class, &fill, &x, y, w.max(1.0), p.form.bar));
            }
        }
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
