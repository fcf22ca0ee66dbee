//! The order of drawing, and what is refused before it begins.

use super::form::Form;
use super::model::{Ladder, NOTHING, Rung};
use super::picture::Picture;
use super::{counted, crop, key, labels, words};
use crate::charts::text::{coordinate, escape, plain, short};

/// Why there is no picture.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum NotDrawable {
    /// No stage besides the uptake, or every figure is zero: the page says what is missing.
    #[error("there is nothing to draw: no stage has a figure")]
    Nothing,
    /// A figure, or a sum of figures, is not a finite number: an error where the figures were made.
    #[error("{0} is not a finite number")]
    NotFinite(String),
    /// The baseline emits nothing, so no saving can be drawn against it.
    #[error("the baseline must be above zero")]
    NoBaseline,
    /// The uptake, or a stage that is absent, carries figures that its bar would hide.
    #[error("{0} must not count anything")]
    MustNotCount(String),
    /// The common scale of a comparison does not hold this pathway.
    #[error("the common scale is too short for this pathway")]
    ScaleTooShort,
}

/// Draws `ladder` as SVG text to stand in a page, without the pattern definitions (see [`super::defs`]).
///
/// # Errors
/// [`NotDrawable`] if there is nothing to draw, or if the figures cannot be right.
pub fn draw(ladder: &Ladder, form: Form) -> Result<String, NotDrawable> {
    refuse(ladder)?;
    Ok(compose(&Picture::of(ladder, form.measures()), form))
}

fn compose(p: &Picture, form: Form) -> String {
    let (w, id) = (short(p.form.width), escape(&p.ladder.id));
    let strip = crop::strip_height(p);
    let key_top = p.bottom + p.form.axis + strip;
    let height = key_top + key::height(p);
    let mut out = vec![
        format!(
            r#"<svg class="ladder {}" viewBox="0 0 {w} {}" role="img" aria-labelledby="{id}-t {id}-d">"#,
            form.class(),
            short(height)
        ),
        format!(r#"<title id="{id}-t">{}</title>"#, escape(&p.ladder.title)),
        format!(
            r#"<desc id="{id}-d">{}</desc>"#,
            escape(&words::describe(p.ladder, p.net))
        ),
    ];
    grid_and_rungs(p, &mut out);
    labels::verticals(p, &mut out);
    if p.form.names.is_some() {
        crop::waterfall(p, &mut out);
    }
    counted::bars(p, &mut out);
    counted::running_line_and_uprights(p, &mut out);
    labels::names_and_values(p, &mut out);
    labels::heads(p, &mut out);
    if strip > 0.0 {
        crop::strip(p, p.bottom + p.form.axis, &mut out);
    }
    key::draw(p, key_top, &mut out);
    out.push("</svg>".to_owned());
    out.join("\n")
}

/// Grid and figures of the axis, hairlines of the rows, rungs between the uprights.
fn grid_and_rungs(p: &Picture, out: &mut Vec<String>) {
    let (top, bottom) = (p.form.top, p.bottom);
    let ticks = p.scale.ticks(p.form.min_tick);
    let at = |x: f64| coordinate(x, 1);
    let grid: String = ticks
        .iter()
        .map(|&(x, _)| format!("M{} {}V{}", at(x), short(top), short(bottom + 4.0)))
        .collect();
    out.push(format!(r#"<path class="grid" d="{grid}"/>"#));
    out.extend(ticks.iter().map(|&(x, g)| {
        format!(
            r#"<text class="tick" x="{}" y="{}" text-anchor="middle">{}</text>"#,
            at(x),
            short(bottom + 17.0),
            plain(g)
        )
    }));
    let lines = |from: &str, to: &str| -> String {
        (0..=p.rungs.len())
            .map(|i| short(top + i as f64 * p.form.pitch))
            .map(|y| format!("M{from} {y}H{to}"))
            .collect()
    };
    let rows = lines("0", &short(p.form.width));
    out.push(format!(r#"<path class="row" d="{rows}"/>"#));
    if let Some(left) = p.scale.names() {
        let rungs = lines(&at(left), &at(p.scale.right));
        out.push(format!(r#"<path class="rung" d="{rungs}"/>"#));
    }
}

fn refuse(ladder: &Ladder) -> Result<(), NotDrawable> {
    let finite = |g: f64, what: &str| {
        let finite = g.is_finite().then_some(());
        finite.ok_or_else(|| NotDrawable::NotFinite(what.to_owned()))
    };
    finite(ladder.baseline.g, &ladder.baseline.word)?;
    if ladder.baseline.g <= NOTHING {
        return Err(NotDrawable::NoBaseline);
    }
    if let Some(required) = ladder.required {
        finite(required.g + required.percent, "the required saving")?;
    }
    for stage in &ladder.stages {
        // sums of finite parts may overflow; not finite is not finite
        let parts = stage.counted.parts();
        let size = parts.iter().map(|&(_, g)| g.abs()).sum::<f64>();
        let crop = stage.crop.unwrap_or(0.0);
        finite(size, &stage.name)?;
        finite(crop, &stage.name)?;
        let silent = if stage.absent { size + crop.abs() } else { size };
        if (stage.uptake || stage.absent) && silent > 0.0 {
            return Err(NotDrawable::MustNotCount(stage.name.clone()));
        }
    }
    let (low, high) = ladder.reach();
    let (taken_up, given_back) = ladder.crop_sums();
    finite((high - low) + taken_up + given_back, "the sum of the stages")?;
    if let Some((from, to)) = ladder.scale {
        finite(to - from, "the common scale")?;
        if from > low || to < high {
            return Err(NotDrawable::ScaleTooShort);
        }
    }
    let counts = |s: &Rung| s.counted.positive() - s.counted.negative() > NOTHING;
    let drawn = taken_up + given_back > NOTHING || ladder.stages.iter().any(counts);
    if drawn && ladder.stages.iter().any(|s| !s.uptake) {
        Ok(())
    } else {
        Err(NotDrawable::Nothing)
    }
}
