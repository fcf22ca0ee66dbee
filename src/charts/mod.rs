//! Pictures as SVG text, made from plain numbers; they know no rule, no unit and no page.

/// Where the carbon of the crop went: one bar, split.
pub mod carbon_split;
/// The field-to-wheel ladder, our main picture.
pub mod ladder;
/// Words and figures inside a picture: escaping, estimated widths, three significant figures.
mod text;
