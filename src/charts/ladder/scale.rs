//! From grams to lengths: one scale for both sides, the two uprights, the ticks.

use super::form::Measures;
use super::model::{Ladder, NOTHING};
use std::iter::successors;

/// Where figures lie in the picture.
pub(super) struct Scale {
    /// Length of one gram; not rounded.
    pub k: f64,
    /// Zero of the crop's carbon; the narrow form has none.
    pub left: Option<f64>,
    /// Zero of what is counted.
    pub right: f64,
    /// Ends of the counted side, g CO2e/MJ.
    pub counted: (f64, f64),
    /// Ends of the crop's side, g CO2/MJ: lowest and highest running sum.
    pub crop: (f64, f64),
}

impl Scale {
    pub fn of(ladder: &Ladder, form: &Measures) -> Self {
        let counted = ladder.scale.unwrap_or_else(|| ladder.reach());
        let span = counted.1 - counted.0;
        let inner = form.width - 2.0 * form.pad - form.gutter;
        let crop = crop_ends(ladder);
        match form.names {
            Some(names) => {
                let k = (inner - names) / ((crop.1 - crop.0) + span);
                let left = form.pad - crop.0 * k;
                Scale {
                    k,
                    left: Some(left),
                    right: left + crop.1 * k + names - counted.0 * k,
                    counted,
                    crop,
                }
            }
            None => {
                let k = inner / span;
                Scale {
                    k,
                    left: None,
                    right: form.pad - counted.0 * k,
                    counted,
                    crop,
                }
            }
        }
    }

    /// Place of a counted figure.
    pub fn x(&self, g: f64) -> f64 {
        self.right + g * self.k
    }

    /// Where the names begin: at the left upright, or where too much crop carbon passes it.
    pub fn names(&self) -> Option<f64> {
        self.left.map(|left| left + self.crop.1 * self.k)
    }

    /// Ticks of both sides: place and figure, counted side first.
    pub fn ticks(&self, min_gap: f64) -> Vec<(f64, f64)> {
        let step = nice_step(self.k, min_gap);
        let mut out = ticks(self.counted, step, self.right, self.k);
        if let Some(left) = self.left.filter(|_| self.crop.1 - self.crop.0 > NOTHING) {
            out.extend(ticks(self.crop, step, left, self.k));
        }
        out
    }
}

fn crop_ends(ladder: &Ladder) -> (f64, f64) {
    let (mut sum, mut lowest, mut highest) = (0.0f64, 0.0f64, 0.0f64);
    for g in ladder.stages.iter().filter_map(|s| s.crop) {
        sum += g;
        lowest = lowest.min(sum);
        highest = highest.max(sum);
    }
    (lowest, highest)
}

/// Smallest of 1, 2, 5 x 10^n grams that is at least `min_gap` long.
pub(super) fn nice_step(k: f64, min_gap: f64) -> f64 {
    let raw = min_gap / k;
    let decade = 10f64.powf(raw.log10().floor());
    let steps = [1.0, 2.0, 5.0].map(|m| m * decade);
    let fits = steps.into_iter().find(|&step| step >= raw * (1.0 - 1e-12));
    fits.unwrap_or(10.0 * decade)
}

fn ticks((low, high): (f64, f64), step: f64, zero: f64, k: f64) -> Vec<(f64, f64)> {
    // the added zero turns a negative zero into a plain one
    let first = (low / step - 1e-9).ceil() + 0.0;
    let last = (high / step + 1e-9).floor();
    successors(Some(first), |i| Some(i + 1.0))
        .take_while(|i| *i <= last)
        .map(|i| i * step)
        .map(|g| (zero + g * k, g))
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn steps_are_one_two_five() {
        for (k, gap, step) in [
            (2.81735, 44.0, 20.0),
            (3.08511, 40.0, 20.0),
            (44.0, 44.0, 1.0),
            (43.9, 44.0, 2.0),
            (440.0, 44.0, 0.1),
            (4.9, 40.0, 10.0),
            (0.05, 40.0, 1000.0),
        ] {
            assert!((nice_step(k, gap) / step - 1.0).abs() < 1e-9, "{k} {gap}");
        }
    }
}
