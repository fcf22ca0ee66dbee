//! What a statement says beside its figures.

use crate::core::documents::statement::Words;
use crate::core::documents::{Assessment, Pathway};
use crate::core::domain::RuleSet;
use crate::core::domain::rule_set::{BiogenicCo2, Standing};

/// How figures are rounded.
pub const ROUNDING: &str = "Figures are kept in full and never rounded between steps. They are shown with two decimals, \
halves away from zero; parts shown need not add to the total shown. Limits are decided on the unrounded figure.";

/// What holds for every statement.
const CAUTIONS: [&str; 3] = [
    "Figures for statutory reporting need verification by an accredited body.",
    "Distillation and CO2 handling carry hazards of fire, explosion and asphyxiation: these figures serve accounting \
     only, never the design or running of a plant; local codes and licensed practice come first.",
    "A figure of another rule set, heating value, set of gas weights or boundary cannot be compared with this one.",
];

/// The words of a statement.
pub fn words(pathway: &Pathway, assessment: &Assessment, rules: &RuleSet) -> Words {
    let mut boundary = format!("From the growing of the feedstock {}.", assessment.basis);
    if !pathway.not_covered.is_empty() {
        let left: Vec<&str> = pathway.not_covered.iter().map(|kind| kind.words()).collect();
        boundary.push_str(&format!(" Left out: {}.", left.join(", ")));
    }
    boundary.push_str(" The building of machines and plant is left out.");
    let uptake_note = match rules.biogenic_co2 {
        BiogenicCo2::Apart => {
            "CO2 that the crop took up and that fermentation and use give back is left out of the figure and stated beside it."
        }
        BiogenicCo2::InLine => {
            "CO2 that the crop took up stands in the account as negative, and as positive where it is given back; it adds to zero."
        }
    };
    let mut cautions: Vec<String> = CAUTIONS.map(str::to_owned).into();
    if rules.standing != Standing::InForce {
        cautions.insert(0, format!("{}: {}.", rules.title, rules.standing.words()));
    }
    if pathway.example {
        cautions.insert(
            0,
            "EXAMPLE: every name and amount is invented. This is no statement about any fuel.".to_owned(),
        );
    }
    Words {
        rule_set_text: format!("{}; data of version {}", rules.source, rules.version),
        boundary,
        uptake_note: uptake_note.to_owned(),
        rounding: ROUNDING.to_owned(),
        cautions,
    }
}
