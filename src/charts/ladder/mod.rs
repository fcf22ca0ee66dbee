//! The field-to-wheel ladder: stages as rungs between the zero of the crop's carbon and the zero of what is counted.
//!
//! Left of the left upright hangs the uptake, and each release walks it back; right of the right one lie the counted
//! gases of each stage, and a thin line climbs from rung to rung with the running total and ends in a small wheel at
//! the net. One gram is equally long on both sides. The picture knows no rule and no GWP; the table beside it is the
//! accessible truth. Inner lengths are SVG units, equal to CSS px at 16 px per rem; colours come from the stylesheet.

mod counted;
mod crop;
mod draw;
mod form;
mod key;
mod labels;
mod look;
mod model;
mod picture;
mod scale;
#[cfg(test)]
mod tests;
mod words;

pub use draw::{NotDrawable, draw};
pub use form::Form;
pub use model::{Baseline, Counted, Ladder, Required, Rung, common_scale, in_line};

/// The pattern definitions that the bars refer to. They stand once in a page, in an element that is never hidden by
/// `display: none`, or the bars would lose their filling.
pub fn defs() -> &'static str {
    PATTERNS
}

/// Tiles in user units, so that they never scale with the bars. The fill is an attribute of the bar, as a stylesheet
/// resolves `url()` differently from browser to browser.
const PATTERNS: &str = r#"<svg class="defs" width="0" height="0" aria-hidden="true" focusable="false"><defs>
<pattern id="g-n2o" width="5" height="5" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><rect class="p-bg" width="5" height="5"/><rect class="p-n2o" width="2.4" height="5"/></pattern>
<pattern id="g-ch4" width="4" height="4" patternUnits="userSpaceOnUse"><rect class="p-bg" width="4" height="4"/><rect class="p-ch4" width="4" height="2"/></pattern>
<pattern id="g-co2_land" width="6" height="6" patternUnits="userSpaceOnUse"><rect class="p-land" width="6" height="6"/><path class="p-land-x" d="M0 0L6 6M6 0L0 6"/></pattern>
<pattern id="g-co2e_unsplit" width="4" height="4" patternUnits="userSpaceOnUse"><rect class="p-bg" width="4" height="4"/><circle class="p-uns" cx="1" cy="1" r=".75"/><circle class="p-uns" cx="3" cy="3" r=".75"/></pattern>
<pattern id="g-release" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(-45)"><rect class="p-bg" width="6" height="6"/><rect class="p-crop" width="1.5" height="6"/></pattern>
</defs></svg>"#;
