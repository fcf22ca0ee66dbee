//! Which term a capture feeds, by the use its CO2 is put to.

use crate::core::documents::input::{ModelUse, OneOrMany};
use crate::core::documents::pathway::Stage;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::{StageKind, Term};
use serde_json::Value;

/// The term of a model of kind capture: storage is a term of its own, every other use takes the place of fossil CO2.
pub fn term(capture: &ModelUse) -> Term {
    match use_of(capture) {
        Some("store") => Term::Eccs,
        _ => Term::Eccr,
    }
}

/// The term of a capture stage's other inputs: that of its capture model.
pub fn stage_term(stage: &Stage) -> Term {
    if captures(stage).any(|capture| term(capture) == Term::Eccs) {
        Term::Eccs
    } else {
        Term::Eccr
    }
}

/// A capture stage has a capture model, and its uses are one: its other inputs stand in the term of that use.
pub fn one_use(stage: &Stage, at: &Place, problems: &mut Problems) {
    if stage.kind != StageKind::Capture {
        return;
    }
    let mut uses: Vec<Option<&str>> = captures(stage).map(use_of).collect();
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

fn captures(stage: &Stage) -> impl Iterator<Item = &ModelUse> {
    let models = stage.inputs.iter().filter_map(|input| input.model.as_ref());
    models
        .flat_map(OneOrMany::list)
        .filter(|model| model.kind == "capture")
}

fn use_of(capture: &ModelUse) -> Option<&str> {
    capture.parameters.get("use").and_then(Value::as_str)
}
