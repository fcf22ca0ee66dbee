//! Prices an input by its models.

use super::capture;
use super::entry::Entry;
use crate::core::documents::amount::Origin;
use crate::core::documents::assessment::Finding;
use crate::core::documents::input::{ModelUse, OneOrMany};
use crate::core::documents::pathway::Stage;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::{Place, nearest};
use crate::core::domain::{Gas, GasVector, StageKind, Term};
use crate::core::engine::resolved::Input;
use crate::core::models::given::{Given, Record};
use crate::core::models::{self, Model, Note};

/// What the models tell of an input beside its figures.
#[derive(Default)]
pub struct FromModels {
    /// The term that they fix, if they do.
    pub term: Option<Term>,
    /// Where each of their figures comes from.
    pub origins: Vec<Option<Origin>>,
}

/// Adds what each of `uses` gives to `input`.
pub fn by_model(
    entry: &Entry,
    uses: &OneOrMany<ModelUse>,
    input: &mut Input,
    problems: &mut Problems,
    findings: &mut Vec<Finding>,
) -> FromModels {
    let model_at = entry.at.field("model");
    let kind = uses
        .list()
        .first()
        .map(|model| model.kind.as_str())
        .unwrap_or_default();
    let mut told = FromModels::default();
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
        if !fits_stage(model, entry.stage, &place, problems) {
            continue;
        }
        told.term = match model.kind {
            "capture" => Some(capture::term(given)),
            _ => model.term,
        };
        let mut record = Record::default();
        let outcome = {
            let mut parameters = Given::open(
                &given.parameters,
                model.parameters,
                place,
                entry.setting,
                problems,
                &mut record,
            );
            (model.compute)(&mut parameters)
        };
        let noted = record.notes.into_iter();
        findings.extend(noted.map(|note| finding(entry, &input.label, note)));
        input.steps.extend(record.steps);
        told.origins.extend(record.origins);
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
            entry.at.field("model"),
            "The model gives no finite figure.",
            "Check the size of its figures.",
        );
        input.gases = GasVector::ZERO;
    }
    told
}

fn finding(entry: &Entry, label: &str, note: Note) -> Finding {
    let key = &entry.document.key;
    let field = match note.field.as_str() {
        "" => format!("inputs.{key}"),
        field => format!("inputs.{key}.{field}"),
    };
    Finding {
        id: note.id.to_owned(),
        severity: note.severity,
        stage: entry.stage.key.clone(),
        field,
        message: format!("{label}: {}", note.message),
        remedy: note.remedy,
        reason: None,
    }
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
