//! How a bar looks: its class in the stylesheet and its filling.

use super::model::Part;
use crate::charts::text::{coordinate, short};

/// Crop CO2 taken up: solid green.
pub(super) const UPTAKE: &str = "uptake";
/// Crop CO2 given back: striped green.
pub(super) const RELEASE: &str = "release";

/// A bar shorter than this is solid: its pattern would not be seen.
const SOLID: f64 = 4.0;

/// Class of a counted part of `g` grams.
pub(super) fn class(part: Part, g: f64) -> &'static str {
    match part {
        Part::Fossil => "co2_fossil",
        Part::N2o => "n2o",
        Part::Ch4 => "ch4",
        Part::Land => "co2_land",
        Part::Unsplit => "co2e_unsplit",
        Part::Biogenic if g < 0.0 => UPTAKE,
        Part::Biogenic => RELEASE,
    }
}

/// The fill attribute of a class; empty where the class alone makes it solid.
pub(super) fn fill(class: &str) -> String {
    match class {
        "co2_fossil" | UPTAKE => String::new(),
        class => format!(r##" fill="url(#g-{class})""##),
    }
}

/// The fill attribute of a bar of width `w`. Crop CO2 given back keeps its pattern at every width, as solid green
/// means taken up.
pub(super) fn fill_of_width(class: &str, w: f64) -> String {
    if w < SOLID && class != RELEASE {
        String::new()
    } else {
        fill(class)
    }
}

/// A bar with its left end at `x`, `w` wide and `h` high.
pub(super) fn bar(class: &str, fill: &str, x: &str, y: f64, w: f64, h: f64) -> String {
    let (y, w, h) = (short(y), coordinate(w, 2), short(h));
    format!(r#"<rect class="b {class}" x="{x}" y="{y}" width="{w}" height="{h}"{fill}/>"#)
}
