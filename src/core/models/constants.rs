//! Published constants of the soil methods, looked up in the book by edition and symbol.

use super::factors::source_words;
use super::given::Given;
use crate::core::domain::citation::Cited;

/// A published constant, ready for a step of workings.
#[derive(Clone, Debug, PartialEq)]
pub struct Figure {
    /// The figure, in the unit it is printed in.
    pub value: f64,
    /// Document and table, with its status where nobody has read it.
    pub source: String,
}

impl Figure {
    fn of(cited: &Cited) -> Figure {
        Figure {
            value: cited.value,
            source: source_words(&cited.source, cited.status),
        }
    }
}

/// Constants of an edition, in the order asked for. Every one the book lacks is noted as a problem.
pub fn constants<const N: usize>(
    given: &mut Given,
    edition: &str,
    symbols: [&str; N],
) -> Option<[Figure; N]> {
    let found = symbols.map(|symbol| constant(given, edition, symbol));
    let all: Option<Vec<Figure>> = found.into_iter().collect();
    all?.try_into().ok()
}

/// One constant of an edition; noted as a problem where the book lacks it.
pub fn constant(given: &mut Given, edition: &str, symbol: &str) -> Option<Figure> {
    let book = given.setting.book;
    let found = book
        .soils
        .get(edition)
        .and_then(|tables| tables.constants.get(symbol));
    if found.is_none() {
        let detail = format!("The published data of \"{edition}\" has no figure \"{symbol}\".");
        given.problem(
            "method",
            detail,
            "Choose another method; the data of this one is incomplete here.",
        );
    }
    found.map(Figure::of)
}

/// The sources of several figures, each once, in order.
pub fn sources(figures: &[&Figure]) -> String {
    let mut seen: Vec<&str> = Vec::new();
    for figure in figures {
        if !seen.contains(&figure.source.as_str()) {
            seen.push(&figure.source);
        }
    }
    seen.join("; ")
}
