//! Where a pathway's process heat comes from, as far as its document tells: boilers, combined heat and power, bought heat,
//! and what nobody can tell from an amount of fuel alone.

use crate::core::documents::input::{FactorRef, Input, ModelUse};
use crate::core::documents::pathway::{Pathway, Stage};
use crate::core::domain::factor::Use;
use crate::core::domain::{Book, Counts, Gas, ProcessHeat, StageKind, Term};
use crate::core::units::{Dimension, parse_unit};
use serde_json::Value;

/// What burns.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Fuel {
    /// Natural gas.
    NaturalGas,
    /// Lignite.
    Lignite,
    /// Wood in some form: forest residue or not.
    Wood,
    /// Biogas.
    Biogas,
    /// A fuel of the library that is none of these.
    Other,
    /// An own factor, or none.
    Untold,
}

/// One thing that may give process heat.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct HeatSource {
    /// Where it stands: `input gas of works`.
    pub place: String,
    /// How heat is made; none where the document does not tell.
    pub heat: Option<ProcessHeat>,
    /// Words where `heat` is none: what keeps it untold.
    pub untold: &'static str,
    /// What burns.
    pub fuel: Fuel,
}

/// What the document tells of the works.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Works {
    /// Everything that may give process heat.
    pub sources: Vec<HeatSource>,
    /// Whether anything shows that stillage is digested to biogas.
    pub digestion: bool,
}

/// Reads the works of a pathway: every stage that feeds e_p.
pub fn works(pathway: &Pathway, book: &Book) -> Works {
    let mut works = Works::default();
    for stage in pathway
        .stages
        .iter()
        .filter(|stage| stage.kind.term() == Term::Ep)
    {
        if stage.kind == StageKind::Bought {
            works.sources.push(HeatSource {
                place: format!("the supplier's works of {}", stage.title()),
                heat: None,
                untold: "is behind the supplier's statement",
                fuel: Fuel::Untold,
            });
        }
        for input in &stage.inputs {
            read(stage, input, book, &mut works);
        }
    }
    works.digestion |= works.sources.iter().any(|source| source.fuel == Fuel::Biogas);
    works
}

fn read(stage: &Stage, input: &Input, book: &Book, works: &mut Works) {
    let place = format!("input {} of {}", input.key, stage.title());
    if let Some(models) = &input.model {
        for model in models.list() {
            read_model(&place, model, works);
        }
    }
    if let Some(factors) = &input.factor {
        let tagged_heat = input.unit.as_deref().is_some_and(is_heat);
        let references: Vec<Reference> = factors.list().iter().map(Reference::of_factor).collect();
        works
            .sources
            .extend(of_factors(&place, &references, tagged_heat, book));
    }
    let fossil = |gases: &crate::core::domain::GasVector| {
        gases[Gas::Co2Fossil] != 0.0 || gases[Gas::Co2eUnsplit] != 0.0
    };
    if input.gases.as_ref().is_some_and(fossil) {
        works
            .sources
            .push(untold(place, "is given as gases alone", Fuel::Untold));
    }
}

/// A factor as written: an id, or an own one with its unit.
enum Reference<'v> {
    Id(&'v str),
    Own { per: &'v str },
}

impl<'v> Reference<'v> {
    fn of_factor(reference: &'v FactorRef) -> Reference<'v> {
        match reference {
            FactorRef::Id(id) => Reference::Id(id),
            FactorRef::Inline(own) => Reference::Own { per: &own.per },
        }
    }

    fn of_value(value: &'v Value) -> Option<Reference<'v>> {
        match value {
            Value::String(id) => Some(Reference::Id(id)),
            Value::Object(own) => Some(Reference::Own {
                per: own.get("per").and_then(Value::as_str).unwrap_or_default(),
            }),
            _ => None,
        }
    }
}

/// An amount with factors: a stack row tells how the fuel is burnt, a fuel row alone does not.
fn of_factors(place: &str, references: &[Reference], tagged_heat: bool, book: &Book) -> Option<HeatSource> {
    let machine = |r: &Reference| matches!(r, Reference::Id(id) if row(id).starts_with("mach_"));
    if references.iter().any(machine) {
        return None;
    }
    let heat = references.iter().find_map(Reference::burner);
    let fuel = fuel_of(references);
    if heat.is_some() {
        return Some(HeatSource {
            place: place.to_owned(),
            heat,
            untold: "",
            fuel,
        });
    }
    let counts = |r: &Reference| match r {
        Reference::Id(id) => book
            .factor(id)
            .filter(|factor| factor.usage == Use::Amount)
            .map(|factor| factor.counts),
        Reference::Own { per } => parse_unit(per).ok().and_then(|unit| match unit.dimension {
            Dimension::HEAT => Some(Counts::Heat),
            Dimension::ENERGY | Dimension::ENERGY_NET => Some(Counts::Fuel),
            _ => None,
        }),
    };
    let any = |wanted: Counts| references.iter().any(|r| counts(r) == Some(wanted));
    if tagged_heat || any(Counts::Heat) {
        return Some(untold(place.to_owned(), "is heat bought ready", Fuel::Untold));
    }
    any(Counts::Fuel).then(|| {
        untold(
            place.to_owned(),
            "is fuel without a row that says how it is burnt",
            fuel,
        )
    })
}

/// Models that burn a fuel themselves (`chp`, `boiler`), or need heat and say where from (`heat_from`).
fn read_model(place: &str, model: &ModelUse, works: &mut Works) {
    works.digestion |= model.kind == "digester";
    let burns = match model.kind.as_str() {
        "chp" | "boiler" => Some(&model.parameters),
        _ => model.parameters.get("heat_from").and_then(Value::as_object),
    };
    let Some(fields) = burns else { return };
    if fields.contains_key("factor") {
        works
            .sources
            .push(untold(place.to_owned(), "is heat bought ready", Fuel::Untold));
        return;
    }
    let ordinary = match model.kind.as_str() {
        "chp" => ProcessHeat::Chp,
        _ => ProcessHeat::Boiler,
    };
    let mut burnt = |fuel: Option<&Value>, stack: Option<&Value>| {
        let references: Vec<Reference> = [fuel, stack]
            .into_iter()
            .flatten()
            .filter_map(Reference::of_value)
            .collect();
        let heat = match ordinary {
            ProcessHeat::Chp => ProcessHeat::Chp,
            // Heat for a column may be priced with the stack of the plant that makes heat and power.
            ProcessHeat::Boiler => references
                .iter()
                .find_map(Reference::burner)
                .unwrap_or(ProcessHeat::Boiler),
        };
        works.sources.push(HeatSource {
            place: place.to_owned(),
            heat: Some(heat),
            untold: "",
            fuel: fuel_of(&references),
        });
    };
    match fields.get("fuels").and_then(Value::as_array) {
        Some(rows) => {
            for row in rows {
                burnt(row.get("factor"), row.get("stack"));
            }
        }
        None => burnt(fields.get("fuel"), fields.get("stack")),
    }
}

impl Reference<'_> {
    /// What a stack row says about how the fuel is burnt.
    fn burner(&self) -> Option<ProcessHeat> {
        let Reference::Id(id) = self else { return None };
        let row = row(id);
        if !row.starts_with("comb_") {
            return None;
        }
        if row.contains("boiler") {
            Some(ProcessHeat::Boiler)
        } else if row.contains("chp") || row.contains("gas_engine") {
            Some(ProcessHeat::Chp)
        } else {
            None
        }
    }
}

fn fuel_of(references: &[Reference]) -> Fuel {
    let known = |r: &Reference| match r {
        Reference::Id(id) => Some(fuel_of_row(row(id))),
        Reference::Own { .. } => None,
    };
    // The fuel row comes first by habit; an own fuel with a published stack stays untold.
    match references.first() {
        Some(first) => known(first).unwrap_or(Fuel::Untold),
        None => Fuel::Untold,
    }
}

fn fuel_of_row(row: &str) -> Fuel {
    let word = |word: &str| row.split('_').any(|part| part == word);
    if row.contains("natural_gas") || word("ng") {
        Fuel::NaturalGas
    } else if word("lignite") {
        Fuel::Lignite
    } else if word("wood") || word("sawdust") {
        Fuel::Wood
    } else if word("biogas") {
        Fuel::Biogas
    } else {
        Fuel::Other
    }
}

fn untold(place: String, why: &'static str, fuel: Fuel) -> HeatSource {
    HeatSource {
        place,
        heat: None,
        untold: why,
        fuel,
    }
}

/// The row of a full factor id.
fn row(id: &str) -> &str {
    id.split_once('/').map_or(id, |(_, row)| row)
}

fn is_heat(unit: &str) -> bool {
    parse_unit(unit).is_ok_and(|unit| unit.dimension == Dimension::HEAT)
}

#[cfg(test)]
#[allow(clippy::unwrap_used, reason = "a test fails by panicking")]
mod tests {
    use super::*;
    use rstest::rstest;
    use serde_json::json;

    /// The works of a document with one input.
    fn seen(kind: &str, input: Value) -> Works {
        let mut input = input;
        input["key"] = json!("it");
        let pathway = Pathway::from_value(&json!({
            "format": "wheelwort.pathway/1", "name": "Heat", "feedstock": "sugar_beet",
            "period": { "from": "2026-01-01", "to": "2026-12-31" }, "rule_set": "eu-2018-2001",
            "stages": [ { "key": "works", "kind": kind, "inputs": [ input ],
                          "output": { "material": "ethanol", "amount": 1, "unit": "t" } } ] }))
        .unwrap();
        works(&pathway, &Book::default())
    }

    fn one(works: &Works) -> (Option<ProcessHeat>, Fuel) {
        assert_eq!(works.sources.len(), 1, "{works:?}");
        (works.sources[0].heat, works.sources[0].fuel)
    }

    const CHP: Option<ProcessHeat> = Some(ProcessHeat::Chp);
    const BOILER: Option<ProcessHeat> = Some(ProcessHeat::Boiler);

    #[rstest]
    #[case(json!({ "kind": "chp", "fuel": "eu-2022-996/fuel_natural_gas", "stack": "eu-2022-996/comb_ng_chp" }), CHP, Fuel::NaturalGas)]
    #[case(json!({ "kind": "chp", "fuel": { "gases": { "co2_fossil": 1 }, "per": "MJ", "citation": "own" } }), CHP, Fuel::Untold)]
    #[case(json!({ "kind": "boiler", "fuel": "ipcc-2006/lignite_2.2" }), BOILER, Fuel::Lignite)]
    #[case(json!({ "kind": "boiler", "factor": { "gases": { "co2_fossil": 1 }, "per": "MJ heat", "citation": "own" } }), None, Fuel::Untold)]
    #[case(json!({ "kind": "distillation", "heat_from": { "fuel": "eu-2022-996/fuel_natural_gas", "stack": "eu-2022-996/comb_ng_boiler" } }), BOILER, Fuel::NaturalGas)]
    #[case(json!({ "kind": "dryer", "heat_from": { "fuel": "eu-2022-996/fuel_lignite", "stack": "eu-2022-996/comb_lignite_chp" } }), CHP, Fuel::Lignite)]
    fn models_tell_how_heat_is_made(
        #[case] model: Value,
        #[case] heat: Option<ProcessHeat>,
        #[case] fuel: Fuel,
    ) {
        assert_eq!(one(&seen("processing", json!({ "model": model }))), (heat, fuel));
    }

    #[test]
    fn several_fuels_are_several_sources() {
        let model = json!({ "kind": "boiler", "fuels": [
            { "factor": "eu-2022-996/fuel_natural_gas", "stack": "eu-2022-996/comb_ng_boiler", "share_percent": 60 },
            { "factor": "eu-2022-996/comb_biogas_boiler", "share_percent": 40 } ] });
        let works = seen("utility", json!({ "model": model }));
        let fuels: Vec<Fuel> = works.sources.iter().map(|source| source.fuel).collect();
        assert_eq!(fuels, [Fuel::NaturalGas, Fuel::Biogas]);
        assert!(works.digestion);
    }

    #[rstest]
    #[case(json!({ "amount": 1, "unit": "GJ", "factor": "eu-2022-996/comb_ng_gas_engine" }), CHP, Fuel::NaturalGas)]
    #[case(json!({ "amount": 1, "unit": "GJ", "factor": "eu-2022-996/comb_wood_pellet_boiler" }), BOILER, Fuel::Wood)]
    #[case(json!({ "amount": 1, "unit": "GJ heat", "factor": { "gases": { "co2_fossil": 1 }, "per": "MJ heat", "citation": "own" } }), None, Fuel::Untold)]
    #[case(json!({ "amount": 1, "unit": "GJ", "factor": { "gases": { "co2_fossil": 1 }, "per": "MJ", "citation": "own" } }), None, Fuel::Untold)]
    #[case(json!({ "gases": { "co2_fossil": 3 } }), None, Fuel::Untold)]
    fn factors_tell_by_their_stack(
        #[case] input: Value,
        #[case] heat: Option<ProcessHeat>,
        #[case] fuel: Fuel,
    ) {
        assert_eq!(one(&seen("processing", input)), (heat, fuel));
    }

    #[rstest]
    #[case("processing", json!({ "amount": 1, "unit": "kg", "factor": { "gases": { "co2_fossil": 1 }, "per": "kg", "citation": "own" } }))]
    #[case("processing", json!({ "amount": 1, "unit": "GJ", "factor": ["eu-2022-996/fuel_diesel", "eu-2022-996/mach_diesel_agriculture"] }))]
    #[case("processing", json!({ "gases": { "ch4_biogenic": 3 } }))]
    #[case("cultivation", json!({ "amount": 1, "unit": "GJ", "factor": "eu-2022-996/comb_ng_boiler" }))]
    fn other_inputs_give_no_process_heat(#[case] kind: &str, #[case] input: Value) {
        assert_eq!(seen(kind, input), Works::default());
    }

    #[test]
    fn a_digester_shows_digestion() {
        assert!(seen("co_product_handling", json!({ "model": { "kind": "digester" } })).digestion);
    }
}
