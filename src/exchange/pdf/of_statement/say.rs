//! Figures and days in the words of the paper.

use crate::core::documents::statement::figures::SharingStage;
use crate::core::domain::GasVector;
use crate::core::units::rounding::{show, show_all, significant};
use jiff::Timestamp;
use jiff::civil::Date;

/// "2 September 2026".
pub(super) fn day(date: Date) -> String {
    date.strftime("%-d %B %Y").to_string()
}

/// "2 September 2026, 09:05 UTC".
pub(super) fn instant(at: Timestamp) -> String {
    at.strftime("%-d %B %Y, %H:%M UTC").to_string()
}

/// g/MJ in the two decimals of a statement.
pub(super) fn grams(g: f64) -> String {
    show(g, 2)
}

/// A saving or share in two decimals.
pub(super) fn percent(share: f64) -> String {
    format!("{}\u{a0}%", show(share, 2))
}

/// A share in one decimal.
pub(super) fn tenth(share: f64) -> String {
    format!("{}\u{a0}%", show(share, 1))
}

/// A figure of the workings: four decimals, or four significant figures where it is small.
pub(super) fn worked(x: f64) -> String {
    if x != 0.0 && x.abs() < 0.01 {
        significant(x, 4, 12)
    } else {
        show(x, 4)
    }
}

/// One weight where both kinds of methane weigh the same, else both.
pub(super) fn either(fossil: f64, biogenic: f64) -> String {
    if fossil.total_cmp(&biogenic).is_eq() {
        show_all(fossil)
    } else {
        format!(
            "{} (fossil) and {} (biogenic)",
            show_all(fossil),
            show_all(biogenic)
        )
    }
}

/// The gases of a vector in g per MJ.
pub(super) fn gases(vector: &GasVector) -> String {
    let parts: Vec<String> = vector
        .entries()
        .filter(|&(_, g)| g != 0.0)
        .map(|(gas, g)| format!("{} {}", gas.words(), worked(g)))
        .collect();
    format!("{} g/MJ", parts.join("; "))
}

/// "Works: energy, ethanol 60.31 %, dried grains 39.69 %".
pub(super) fn sharing(stage: &SharingStage) -> String {
    let parts: Vec<String> = stage
        .products
        .iter()
        .map(|product| format!("{} {}", product.name, percent(product.share * 100.0)))
        .collect();
    format!("{}: by {}, {}", stage.name, stage.method.name(), parts.join(", "))
}

/// The sources of a sheet, each once.
#[derive(Default)]
pub(super) struct Sources(Vec<String>);

impl Sources {
    /// The number of a source, from 1; empty for none.
    pub fn number(&mut self, source: &str) -> String {
        if source.is_empty() {
            return String::new();
        }
        let at = self.0.iter().position(|known| known == source);
        let at = at.unwrap_or_else(|| {
            self.0.push(source.to_owned());
            self.0.len() - 1
        });
        (at + 1).to_string()
    }

    /// All of them, in the order of their numbers.
    pub fn list(self) -> Vec<String> {
        self.0
    }
}

/// `words` with a capital.
pub(super) fn capital(words: &str) -> String {
    let mut letters = words.chars();
    letters
        .next()
        .map(|first| first.to_uppercase().chain(letters).collect())
        .unwrap_or_default()
}

/// A published figure: as printed, unless it was worked out and has no end.
pub(super) fn published(x: f64) -> String {
    let all = show_all(x);
    if all.chars().count() > 12 {
        significant(x, 7, 12)
    } else {
        all
    }
}

/// A word of a document for people: its low lines are spaces.
pub(super) fn spaced(word: &str) -> String {
    word.replace('_', " ")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_source_has_one_number_and_none_has_none() {
        let mut sources = Sources::default();
        assert_eq!(
            ["a", "b", "", "a"].map(|one| sources.number(one)),
            ["1", "2", "", "1"]
        );
        assert_eq!(sources.list(), ["a", "b"]);
    }

    #[test]
    fn figures_and_days_read_as_on_a_statement() {
        assert_eq!(grams(32.885), "32.89");
        assert_eq!(percent(65.0147), "65.01\u{a0}%");
        assert_eq!(
            (worked(0.00012345), worked(1.5), worked(0.0)),
            ("0.0001235".to_owned(), "1.5000".to_owned(), "0.0000".to_owned())
        );
        assert_eq!(either(25.0, 25.0), "25");
        assert_eq!(either(29.8, 27.0), "29.8 (fossil) and 27 (biogenic)");
        assert_eq!(
            (published(44.0 / 28.0), published(0.0075)),
            ("1.571429".to_owned(), "0.0075".to_owned())
        );
        assert_eq!((capital("élan"), capital("")), ("Élan".to_owned(), String::new()));
        assert_eq!(day(jiff::civil::date(2026, 9, 2)), "2 September 2026");
        let at: Timestamp = "2026-09-02T09:05:59Z".parse().unwrap_or_default();
        assert_eq!(instant(at), "2 September 2026, 09:05 UTC");
    }
}
