//! Why a calculator does not take a figure, in words: the same for pages, scripts and models.

use super::parameter::Span;
use crate::core::units::rounding::plain;

/// A figure that is not taken.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Refusal {
    /// Name of the figure, as in documents.
    pub field: &'static str,
    /// What is so.
    pub detail: String,
    /// What to do.
    pub remedy: String,
}

impl Refusal {
    /// A refusal in words.
    pub fn new(field: &'static str, detail: impl Into<String>, remedy: impl Into<String>) -> Refusal {
        Refusal {
            field,
            detail: detail.into(),
            remedy: remedy.into(),
        }
    }
}

/// A figure of a calculator: its name, unit and the spans it may and usually does lie in.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Figure {
    /// Name, as in documents.
    pub name: &'static str,
    /// Unit in words, empty for a plain number.
    pub unit: &'static str,
    /// Outside is refused.
    pub hard: Span,
    /// Outside deserves a second look.
    pub usual: Option<Span>,
}

impl Figure {
    /// Refuses a figure outside the hard span; a figure that is no number is outside.
    pub fn check(&self, figure: f64, refusals: &mut Vec<Refusal>) {
        if self.hard.holds(figure) && figure.is_finite() {
            return;
        }
        let unit = if self.unit.is_empty() {
            String::new()
        } else {
            format!(" {}", self.unit)
        };
        let detail = if figure.is_finite() {
            format!("{}{unit} is outside the range of the model.", plain(figure))
        } else {
            "A finite number belongs here.".to_owned()
        };
        let remedy = format!("Give {}.", self.hard.words(self.unit));
        refusals.push(Refusal::new(self.name, detail, remedy));
    }

    /// What is unusual about a figure, in words; `None` if nothing.
    pub fn unusual(&self, figure: f64) -> Option<String> {
        let usual = self.usual.filter(|usual| !usual.holds(figure))?;
        let unit = if self.unit.is_empty() {
            String::new()
        } else {
            format!(" {}", self.unit)
        };
        Some(format!(
            "{} is {}{unit}; usual is {}.",
            self.name,
            plain(figure),
            usual.words(self.unit)
        ))
    }
}

/// Both ends inside.
pub(super) const fn span(low: f64, high: f64) -> Span {
    Span {
        low,
        high,
        above: false,
    }
}
