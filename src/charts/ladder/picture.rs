//! What every part of the drawing knows: the ladder, its rows, its lengths.

use super::form::Measures;
use super::model::{Ladder, NOTHING, Rung};
use super::scale::Scale;

/// All that the parts of the drawing need to know.
pub(super) struct Picture<'a> {
    pub ladder: &'a Ladder,
    pub form: &'static Measures,
    /// The stages that have a row, field first, each with the running sum after it.
    pub rungs: Vec<(&'a Rung, f64)>,
    pub scale: Scale,
    /// The figure at the end of the running line, g CO2e/MJ.
    pub net: f64,
    /// Below the last row.
    pub bottom: f64,
}

impl<'a> Picture<'a> {
    /// Lays out `ladder` in `form`.
    pub fn of(ladder: &'a Ladder, form: &'static Measures) -> Self {
        let rungs: Vec<(&Rung, f64)> = ladder
            .stages
            .iter()
            .zip(ladder.running())
            // narrow: the uptake has no rung, it lies in the strip below
            .filter(|(stage, _)| form.names.is_some() || !stage.uptake)
            .collect();
        Picture {
            bottom: form.top + rungs.len() as f64 * form.pitch,
            scale: Scale::of(ladder, form),
            net: rungs.last().map_or(0.0, |&(_, run)| run),
            form,
            ladder,
            rungs,
        }
    }

    /// Top of the row of stage `i`; the field is at the bottom.
    pub fn y(&self, i: usize) -> f64 {
        let above = self.rungs.len().saturating_sub(i + 1);
        self.form.top + above as f64 * self.form.pitch
    }

    /// True if the picture shows crop carbon apart from what is counted.
    pub fn shows_crop(&self) -> bool {
        let (taken_up, given_back) = self.ladder.crop_sums();
        let room = self.form.names.is_some() || self.ladder.scale.is_none();
        room && taken_up + given_back > NOTHING
    }
}
