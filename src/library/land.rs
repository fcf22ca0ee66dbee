//! Soil and vegetation carbon for land-use change, and the limits that rule sets put on deductions.

use super::reading::Reading;
use crate::core::domain::RuleSet;
use crate::core::domain::book::Constants;
use std::collections::BTreeMap;

/// Carbon of soil and vegetation and the factors of land use, management and input, by symbol.
pub(super) fn carbon(reading: &mut Reading) -> Constants {
    let text = include_str!("editions/eu-2010-335/land_carbon.csv");
    let columns = ["symbol", "value", "unit", "source", "status", "note"];
    let mut figures = Constants::new();
    for row in reading.rows("eu-2010-335/land_carbon.csv", text, &columns) {
        let symbol = row.text("symbol").to_owned();
        let figure = reading.cited(&row, "value", &format!("eu-2010-335 land carbon {symbol}"));
        figures.insert(symbol, figure);
    }
    figures
}

/// Puts limits and bonuses into their rule sets. What is not listed for one, it does not have.
pub(super) fn limits(reading: &mut Reading, sets: &mut BTreeMap<String, RuleSet>) {
    let text = include_str!("rule_sets/limits.csv");
    let columns = ["rule_set", "symbol", "value", "unit", "source", "status", "note"];
    for row in reading.lines("rule_sets/limits.csv", text, &columns) {
        let (set, symbol) = (row.text("rule_set").to_owned(), row.text("symbol").to_owned());
        let figure = reading.cited(&row, "value", &format!("{set} limit {symbol}"));
        match sets.get_mut(&set).map(|set| set.limits.insert(symbol, figure)) {
            None => reading.problem(&row.place(), "there is no such rule set"),
            Some(Some(_)) => reading.problem(&row.place(), "the limit is given twice"),
            Some(None) => {}
        }
    }
}
