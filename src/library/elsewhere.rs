//! Limits of other jurisdictions that were read, and why no rule set here follows them: shown, never computed with.

use super::reading::{Reading, Row};
use crate::core::domain::Citation;
use jiff::civil::Date;

/// A limit on the emissions of fuel ethanol that no rule set here follows.
#[derive(Clone, Debug, PartialEq)]
pub struct Elsewhere {
    /// Id of the row.
    pub id: String,
    /// Whose law.
    pub jurisdiction: String,
    /// Which law.
    pub instrument: String,
    /// Where in it.
    pub provision: String,
    /// Which fuels and plants it is asked of.
    pub condition: String,
    /// Minimum saving, %; none where another kind of limit, or none, is set.
    pub min_saving_percent: Option<f64>,
    /// Reference intensity, g CO2e/MJ, on the heating value of `heating_value`.
    pub reference_g_per_mj: Option<f64>,
    /// The intensity may be at most this part of the reference, %.
    pub at_most_percent_of_reference: Option<f64>,
    /// Fossil baseline, g CO2e/MJ, where it was read.
    pub baseline_g_per_mj: Option<f64>,
    /// `higher` (inferred from printed heating values), where it can be told.
    pub heating_value: Option<String>,
    /// First day of the construction; none = from the beginning.
    pub started_from: Option<Date>,
    /// Last day of the construction's start; none = open.
    pub started_to: Option<Date>,
    /// First day of the fuel; none = from the beginning.
    pub applies_from: Option<Date>,
    /// Last day of the fuel; none = open.
    pub applies_to: Option<Date>,
    /// Why no rule set follows it.
    pub why_no_rule_set: String,
    /// Source and status.
    pub citation: Citation,
}

/// Every limit, in the order of the table.
pub(super) fn read(reading: &mut Reading) -> Vec<Elsewhere> {
    let text = include_str!("rule_sets/elsewhere.csv");
    let columns = [
        "id",
        "jurisdiction",
        "instrument",
        "provision",
        "condition",
        "why_no_rule_set",
        "source",
        "status",
    ];
    let rows = reading.rows("rule_sets/elsewhere.csv", text, &columns);
    rows.iter().map(|row| limit(reading, row)).collect()
}

fn limit(reading: &mut Reading, row: &Row) -> Elsewhere {
    let text = |column: &str| row.text(column).to_owned();
    let mut figure = |column: &str| row.some(column).map(|_| reading.need(row, column));
    let (min_saving_percent, reference_g_per_mj) =
        (figure("min_saving_percent"), figure("reference_g_per_mj"));
    let at_most_percent_of_reference = figure("at_most_percent_of_reference");
    let baseline_g_per_mj = figure("baseline_g_per_mj");
    let mut day = |column: &str| {
        let text = row.some(column)?;
        let day = text.parse().ok();
        if day.is_none() {
            reading.problem(&row.place(), format!("{column} is no day"));
        }
        day
    };
    let (started_from, started_to) = (day("started_from"), day("started_to"));
    let (applies_from, applies_to) = (day("applies_from"), day("applies_to"));
    Elsewhere {
        id: text("id"),
        jurisdiction: text("jurisdiction"),
        instrument: text("instrument"),
        provision: text("provision"),
        condition: text("condition"),
        min_saving_percent,
        reference_g_per_mj,
        at_most_percent_of_reference,
        baseline_g_per_mj,
        heating_value: row.some("heating_value"),
        started_from,
        started_to,
        applies_from,
        applies_to,
        why_no_rule_set: text("why_no_rule_set"),
        citation: reading.citation(row, &format!("limit {}", row.text("id"))),
    }
}
