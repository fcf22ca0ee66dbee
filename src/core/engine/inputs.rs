//! Prices the inputs of a stage: amounts with factors, given gases, models, and the stated terms of bought fuel.

use super::resolved::Input;
use crate::core::documents::amount::Origin;
use crate::core::documents::assessment::{Finding, Severity, Step};
use crate::core::documents::input::{FactorRef, Input as InputDocument, ModelUse, OneOrMany};
use crate::core::documents::pathway::{Stage, ValueKind};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::{Place, nearest};
use crate::core::domain::{Gas, GasVector, StageKind, Term};
use crate::core::models::factors::{self, HeatingValue, Priced, step};
use crate::core::models::flow::{Measured, no_heat, unit_words};
use crate::core::models::given::{Given, Record};
use crate::core::models::{self, Model, Setting};
use crate::core::units::rounding::plain;
use crate::core::units::{Dimension, Quantity, parse_unit};

/// Prices every input of a stage.
pub fn inputs(
    stage: &Stage,
    setting: &Setting,
    at: &Place,
    problems: &mut Problems,
    findings: &mut Vec<Finding>,
) -> Vec<Input> {
    let capture_term = capture_term(stage);
    one_use(stage, at, problems);
    let inputs_at = at.field("inputs");
    let mut out = Vec::with_capacity(stage.inputs.len());
    for (index, document) in stage.inputs.iter().enumerate() {
        let place = inputs_at.item(index);
        check_extras(document, &place, problems);
        let mut input = Input {
            key: document.key.clone(),
            label: document.label.clone().unwrap_or_else(|| document.key.clone()),
            origin: document.origin,
            ..Input::default()
        };
        let mut fixed_term = None;
        let mut origins = Vec::new();
        if let Some(uses) = &document.model {
            fixed_term = by_model(
                stage,
                document,
                uses,
                setting,
                &place,
                problems,
                findings,
                &mut input,
                &mut origins,
            );
        } else if let Some(gases) = document.gases {
            input.gases = gases;
            input.biogenic_kg = gases[Gas::Co2Biogenic];
            for (gas, kg) in gases.entries().filter(|(_, kg)| *kg != 0.0) {
                let unit = format!("kg {}", gas.name());
                input
                    .steps
                    .push(step("as entered, per recipe".to_owned(), kg, &unit, ""));
            }
        } else {
            by_factor(stage, document, setting, &place, problems, findings, &mut input);
        }
        input.term = Some(fixed_term.unwrap_or(match stage.kind {
            StageKind::Capture => capture_term,
            kind => kind.term(),
        }));
        input.biogenic_kg = if input.fermentation_kg.is_some() {
            0.0
        } else {
            input.biogenic_kg
        };
        trust(document, &origins, &mut input);
        out.push(input);
    }
    if out.iter().any(|input| !input.per_fuel.is_empty()) {
        let area = recipe_ha(stage, setting);
        out.iter_mut().for_each(|input| input.recipe_ha = area);
    }
    out
}

/// Area of one recipe, ha: the largest that the output, an intake or the models of one input name.
fn recipe_ha(stage: &Stage, setting: &Setting) -> Option<f64> {
    let flows = setting.output.into_iter().chain(setting.intakes);
    let flows = flows.filter_map(Measured::area_m2).map(|m2| m2 / 1e4);
    let area = |model: &ModelUse| match model.parameters.get("area_ha")? {
        serde_json::Value::Object(amount) => {
            let (value, unit) = (amount.get("value")?.as_f64()?, amount.get("unit")?.as_str()?);
            Quantity::read_as(value, unit, Dimension::AREA)
                .ok()
                .map(|m2| m2 / 1e4)
        }
        plain => plain.as_f64(),
    };
    let inputs = stage.inputs.iter().filter_map(|input| input.model.as_ref());
    let named = inputs.map(|uses| uses.list().iter().filter_map(area).sum::<f64>());
    flows.chain(named).reduce(f64::max)
}

/// The term of a capture stage's other inputs: that of its capture model.
fn capture_term(stage: &Stage) -> Term {
    let stored = stage
        .inputs
        .iter()
        .filter_map(|input| input.model.as_ref())
        .flat_map(OneOrMany::list)
        .any(|model| {
            model.kind == "capture"
                && model.parameters.get("use").and_then(serde_json::Value::as_str) == Some("store")
        });
    if stored { Term::Eccs } else { Term::Eccr }
}

/// A capture stage has a capture model, and its uses are one: its other inputs stand in the term of that use.
fn one_use(stage: &Stage, at: &Place, problems: &mut Problems) {
    if stage.kind != StageKind::Capture {
        return;
    }
    let models = stage.inputs.iter().filter_map(|input| input.model.as_ref());
    let captures = models
        .flat_map(OneOrMany::list)
        .filter(|model| model.kind == "capture");
    let mut uses: Vec<Option<&str>> = captures
        .map(|model| model.parameters.get("use").and_then(serde_json::Value::as_str))
        .collect();
    uses.dedup();
    let (detail, remedy) = match uses[..] {
        [_] => return,
        [] => (
            "A stage of kind capture has no model of kind capture.",
            "Add an input with a model of kind capture.",
        ),
        _ => (
            "The CO2 of one stage is both stored and in place of fossil CO2.",
            "Give each use a capture stage of its own.",
        ),
    };
    problems.add(at.field("inputs"), detail, remedy);
}

fn check_extras(document: &InputDocument, at: &Place, problems: &mut Problems) {
    if let Some(percent) = document
        .estimated_percent
        .filter(|percent| !(0.0..=100.0).contains(percent))
    {
        let detail = format!("{percent} % is outside 0 to 100 %.");
        problems.add(
            at.field("estimated_percent"),
            detail,
            "Give the estimated part of the figure in %.",
        );
    }
    if let Some(ratio) = document
        .net_per_gross
        .filter(|ratio| !(*ratio > 0.0 && *ratio <= 1.0))
    {
        let detail = format!("{ratio} is no ratio of net to gross heating value.");
        problems.add(
            at.field("net_per_gross"),
            detail,
            "Give it above 0 and at most 1, such as 0.9.",
        );
    }
}

/// How much of a figure is primary data and how much an estimate.
fn trust(document: &InputDocument, origins: &[Option<Origin>], input: &mut Input) {
    let estimated = document.estimated_percent.unwrap_or(0.0) / 100.0;
    match document.origin {
        Some(origin) if origin.is_primary() => {
            input.primary = 1.0 - estimated;
            input.estimated = estimated;
        }
        Some(Origin::Calculated) => {
            let all = !origins.is_empty()
                && origins
                    .iter()
                    .all(|origin| origin.is_some_and(Origin::is_primary));
            input.primary = if all { 1.0 - estimated } else { 0.0 };
            input.estimated = estimated;
        }
        Some(Origin::Estimated) => input.estimated = 1.0,
        _ => input.estimated = estimated,
    }
}

#[allow(clippy::too_many_arguments)] // one call, and each is a different thing
fn by_model(
    stage: &Stage,
    document: &InputDocument,
    uses: &OneOrMany<ModelUse>,
    setting: &Setting,
    at: &Place,
    problems: &mut Problems,
    findings: &mut Vec<Finding>,
    input: &mut Input,
    origins: &mut Vec<Option<Origin>>,
) -> Option<Term> {
    let model_at = at.field("model");
    let kind = uses
        .list()
        .first()
        .map(|model| model.kind.as_str())
        .unwrap_or_default();
    let mut term = None;
    for (index, given) in uses.list().iter().enumerate() {
        let place = if uses.is_list() {
            model_at.item(index)
        } else {
            model_at
        };
        if given.kind != kind {
            let detail = format!(
                "A list of models is of one kind, but this is {} beside {kind}.",
                given.kind
            );
            problems.add(
                place.field("kind"),
                detail,
                "Give models of another kind an input of their own.",
            );
            continue;
        }
        let Some(model) = model_of(&given.kind, &place, problems) else {
            continue;
        };
        if !fits_stage(model, stage, &place, problems) {
            continue;
        }
        term = model_term(model, given);
        let mut record = Record::default();
        let outcome = {
            let mut parameters = Given::open(
                &given.parameters,
                model.parameters,
                place,
                setting,
                problems,
                &mut record,
            );
            (model.compute)(&mut parameters)
        };
        for note in record.notes {
            let field = match note.field.as_str() {
                "" => format!("inputs.{}", document.key),
                field => format!("inputs.{}.{field}", document.key),
            };
            findings.push(Finding {
                id: note.id.to_owned(),
                severity: note.severity,
                stage: stage.key.clone(),
                field,
                message: format!("{}: {}", input.label, note.message),
                remedy: note.remedy,
                reason: None,
            });
        }
        input.steps.extend(record.steps);
        origins.extend(record.origins);
        let Some(outcome) = outcome else { continue };
        if let Some(kg) = outcome.fermentation_kg {
            *input.fermentation_kg.get_or_insert(0.0) += kg;
        }
        input.biogenic_kg += outcome.biogenic_kg.unwrap_or(outcome.gases[Gas::Co2Biogenic]);
        if let Some(kg) = outcome.captured_kg {
            *input.captured_kg.get_or_insert(0.0) += kg;
        }
        input.per_fuel.extend(outcome.per_fuel);
        input.gases += outcome.gases;
        input.is_soil_n2o |= model.kind == "soil_n2o";
    }
    if !input.gases.is_finite() {
        problems.add(
            at.field("model"),
            "The model gives no finite figure.",
            "Check the size of its figures.",
        );
        input.gases = GasVector::ZERO;
    }
    term
}

fn model_of(kind: &str, at: &Place, problems: &mut Problems) -> Option<&'static Model> {
    let model = models::find(kind);
    if model.is_none() {
        let known = models::ALL
            .iter()
            .map(|model| model.kind)
            .collect::<Vec<_>>()
            .join(", ");
        let remedy = match nearest(kind, models::ALL.iter().map(|model| model.kind)) {
            Some(near) => format!("Perhaps \"{near}\" was meant."),
            None => format!("Choose one of: {known}."),
        };
        problems.add(at.field("kind"), format!("There is no model \"{kind}\"."), remedy);
    }
    model
}

/// A model whose term is use or capture stands in a stage of that kind and in no other.
fn fits_stage(model: &Model, stage: &Stage, at: &Place, problems: &mut Problems) -> bool {
    let wanted = match model.kind {
        "capture" => StageKind::Capture,
        "combustion" => StageKind::Combustion,
        _ => return true,
    };
    if stage.kind == wanted {
        return true;
    }
    let detail = format!(
        "A model of kind {} does not belong in a stage of kind {}.",
        model.kind,
        stage.kind.name()
    );
    problems.add(
        at.field("kind"),
        detail,
        format!("Put it in a stage of kind {}.", wanted.name()),
    );
    false
}

fn model_term(model: &Model, given: &ModelUse) -> Option<Term> {
    if model.kind != "capture" {
        return model.term;
    }
    match given.parameters.get("use").and_then(serde_json::Value::as_str) {
        Some("store") => Some(Term::Eccs),
        _ => Some(Term::Eccr),
    }
}

pub(super) fn by_factor(
    stage: &Stage,
    document: &InputDocument,
    setting: &Setting,
    at: &Place,
    problems: &mut Problems,
    findings: &mut Vec<Finding>,
    input: &mut Input,
) {
    let (Some(amount), Some(unit), Some(refs)) =
        (document.amount, document.unit.as_deref(), &document.factor)
    else {
        return;
    };
    if amount < 0.0 {
        let detail = format!("An amount of {amount} {unit} is negative.");
        problems.add(
            at.field("amount"),
            detail,
            "Give zero or more; what leaves is a co-product or an output.",
        );
        return;
    }
    let unit = match parse_unit(unit) {
        Ok(unit) => unit,
        Err(error) => {
            let (detail, remedy) = unit_words(&error);
            problems.add(at.field("unit"), detail, remedy);
            return;
        }
    };
    let list = price_list(refs, setting, &at.field("factor"), problems);
    if list.len() < refs.list().len() {
        return;
    }
    let heating = HeatingValue::of(&list);
    for factor in &list {
        match factors::convert(amount, &unit, document.net_per_gross, &heating, factor) {
            Ok(converted) => {
                input.steps.extend(converted.step);
                input.gases += factors::price(converted.amount, factor, &mut input.steps);
            }
            Err(unfit) => {
                problems.add(at.field("unit"), unfit.detail, unfit.remedy);
                return;
            }
        }
    }
    if !input.gases.is_finite() {
        problems.add(
            at.field("amount"),
            "The amount gives no finite figure.",
            "Check its size and unit.",
        );
        input.gases = GasVector::ZERO;
    }
    input.biogenic_kg = input.gases[Gas::Co2Biogenic];
    let alone = factors::unpublished(&list);
    let gap =
        alone.and_then(|_| factors::unpublished(list.iter().chain(&burning_rows(stage, document, setting))));
    if let Some((factor, gas)) = gap {
        findings.push(Finding {
            id: "K-02".to_owned(),
            severity: Severity::Warn,
            stage: stage.key.clone(),
            field: format!("inputs.{}", document.key),
            message: format!(
                "{factor} of {} has no published {gas}; nothing is counted for it.",
                input.label
            ),
            remedy: "Choose a factor that has one, or give the reason.".to_owned(),
            reason: None,
        });
    }
}

/// Rows of burning emissions that another input of the stage counts for the same amount of energy.
fn burning_rows(stage: &Stage, document: &InputDocument, setting: &Setting) -> Vec<Priced> {
    let same = |other: &&InputDocument| {
        other.key != document.key && other.amount == document.amount && other.unit == document.unit
    };
    let at = Place::ROOT;
    stage
        .inputs
        .iter()
        .filter(same)
        .filter_map(|other| other.factor.as_ref())
        .flat_map(OneOrMany::list)
        .filter_map(|reference| factors::find(reference, setting.book, &at, &mut Problems::default()))
        .filter(|row| row.group == "combustion non-CO2")
        .collect()
}

fn price_list(
    refs: &OneOrMany<FactorRef>,
    setting: &Setting,
    at: &Place,
    problems: &mut Problems,
) -> Vec<Priced> {
    let find = |(index, reference): (usize, &FactorRef)| {
        let item = at.item(index);
        let place = if refs.is_list() { &item } else { at };
        factors::find_for_amount(reference, setting.book, place, problems)
    };
    refs.list().iter().enumerate().filter_map(find).collect()
}

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
