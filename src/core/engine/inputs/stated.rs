//! The stated terms of bought fuel as inputs of its stage.

use crate::core::documents::assessment::Step;
use crate::core::documents::pathway::{Stage, ValueKind};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::{Gas, GasVector, Term};
use crate::core::engine::resolved::Input;
use crate::core::models::Setting;
use crate::core::models::factors::step;
use crate::core::models::flow::{Measured, no_heat, unit_words};
use crate::core::units::rounding::plain;
use crate::core::units::{Dimension, Quantity};

/// Turns the stated terms of bought fuel into inputs: g per MJ times the MJ of one recipe, by the proof's own heating
/// value (the rule set's without one).
pub fn stated(
    stage: &Stage,
    output: &Measured,
    setting: &Setting,
    at: &Place,
    problems: &mut Problems,
) -> Vec<Input> {
    let Some(stated) = &stage.stated else {
        problems.add(
            at.field("stated"),
            "Bought fuel has no statement.",
            "Add \"stated\" with the supplier's terms.",
        );
        return Vec::new();
    };
    let stated_at = at.field("stated");
    if stated.rule_set != setting.rules.id {
        let detail = format!(
            "The proof follows {}, the pathway {}.",
            stated.rule_set, setting.rules.id
        );
        problems.add(
            stated_at.field("rule_set"),
            detail,
            "Ask the supplier for a proof under the same rule set.",
        );
    }
    let lhv_at = stated_at.field("lhv");
    let lhv = match &stated.lhv {
        None => setting.rules.ethanol_mj_per_kg(output.strength.unwrap_or(1.0)),
        Some(own) => match Quantity::read_as(own.value, &own.unit, Dimension::ENERGY.per(Dimension::MASS)) {
            Ok(joules) if joules > 0.0 => joules / 1e6,
            Ok(_) => {
                problems.add(
                    lhv_at.field("value"),
                    "A heating value is above zero.",
                    "Check the figure.",
                );
                return Vec::new();
            }
            Err(error) => {
                let (detail, remedy) = unit_words(&error);
                problems.add(lhv_at.field("unit"), detail, remedy);
                return Vec::new();
            }
        },
    };
    let Some(pure) = output.pure_kg else {
        problems.add(
            at.field("output").field("material"),
            "Bought fuel is ethanol.",
            "Set the material to ethanol.",
        );
        return Vec::new();
    };
    if lhv <= 0.0 {
        let output_at = at.field("output");
        no_heat(
            output.strength.unwrap_or(1.0),
            setting.rules,
            &output_at,
            problems,
        );
        return Vec::new();
    }
    let mj = pure * lhv;
    let terms_at = stated_at.field("terms");
    let mut out = Vec::new();
    for (name, term) in &stated.terms {
        let Some(kind) = Term::from_name(name) else {
            continue;
        };
        let place = terms_at.field(name);
        if matches!(kind, Term::Eccr | Term::Eccs) && term.g_co2e_per_mj > 0.0 {
            let detail = format!("A deduction of {} g/MJ is positive.", term.g_co2e_per_mj);
            problems.add(
                place.field("g_co2e_per_mj"),
                detail,
                "Give deductions as negative figures.",
            );
            continue;
        }
        let kg = term.g_co2e_per_mj * mj / 1000.0;
        let steps: Vec<Step> = vec![
            step(
                format!(
                    "{} kg pure ethanol x {} MJ/kg of the proof",
                    plain(pure),
                    plain(lhv)
                ),
                mj,
                "MJ",
                "",
            ),
            step(
                format!(
                    "{} MJ x {} g CO2e per MJ as stated / 1000",
                    plain(mj),
                    plain(term.g_co2e_per_mj)
                ),
                kg,
                "kg co2e_unsplit",
                stated.proof.as_deref().unwrap_or("the supplier's proof"),
            ),
        ];
        out.push(Input {
            key: format!("stated:{name}"),
            label: format!(
                "{name} as stated by {}",
                stated.issuer.as_deref().unwrap_or("the supplier")
            ),
            term: Some(kind),
            gases: GasVector::of(Gas::Co2eUnsplit, kg),
            steps,
            primary: if term.value_kind == ValueKind::Actual {
                1.0
            } else {
                0.0
            },
            stated: Some(term.value_kind),
            ..Input::default()
        });
    }
    out
}
