//! Holds figures against the meters they are read from: an amount, or a parameter of a model, is what went through them in
//! the period of the pathway.

use crate::core::documents::input::{Input, ModelUse, OneOrMany};
use crate::core::documents::pathway::{Pathway, Stage};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::documents::records::Meter;
use crate::core::models;
use crate::core::units::rounding::plain;
use crate::core::units::{Dimension, Quantity};
use serde_json::Value;

/// A figure typed off from its meters may differ from them by this part of itself: rounding, no more. Our own judgement.
const ROUNDING: f64 = 1e-3;

/// Notes figures that are not what their meters give. A meter whose readings do not cover the period is a finding (C-14)
/// and says nothing here.
pub fn agree(pathway: &Pathway, problems: &mut Problems) {
    let stages_at = Place::ROOT.field("stages");
    for (j, stage) in pathway.stages.iter().enumerate() {
        let at = stages_at.item(j);
        let inputs_at = at.field("inputs");
        for (k, input) in stage.inputs.iter().enumerate() {
            if input.meter.is_some() {
                input_agrees(pathway, stage, input, &inputs_at.item(k), problems);
            }
        }
    }
}

fn input_agrees(pathway: &Pathway, stage: &Stage, input: &Input, at: &Place, problems: &mut Problems) {
    let named = input.meter.as_ref().map(OneOrMany::list).unwrap_or_default();
    let meters: Vec<&Meter> = named
        .iter()
        .filter_map(|id| stage.meters.iter().find(|meter| meter.id == *id))
        .collect();
    let Some(models) = &input.model else {
        if let (Some(amount), Some(unit)) = (input.amount, input.unit.as_deref()) {
            compare(pathway, &meters, (amount, unit), &at.field("amount"), problems);
        }
        return;
    };
    let [model] = models.list() else {
        let detail = "Several models stand here, and nobody can tell which of them the meter belongs to.";
        problems.add(
            at.field("meter"),
            detail,
            "Give each model an input of its own, or take \"meter\" out.",
        );
        return;
    };
    let mut done: Vec<&str> = Vec::new();
    for meter in &meters {
        let Some(parameter) = meter.parameter.as_deref() else {
            let detail = format!(
                "Meter {} does not say which parameter of the model it gives.",
                meter.id
            );
            problems.add(at.field("meter"), detail, "Add \"parameter\" to the meter.");
            continue;
        };
        if done.contains(&parameter) {
            continue;
        }
        done.push(parameter);
        let place = at.field("model");
        let place = place.field(parameter);
        let Some((amount, unit)) = figure(model, parameter) else {
            let detail = format!(
                "Meter {} gives \"{parameter}\", which is no amount here.",
                meter.id
            );
            problems.add(place, detail, "Enter the amount, or name another parameter.");
            continue;
        };
        let same: Vec<&Meter> = meters
            .iter()
            .filter(|other| other.parameter.as_deref() == Some(parameter))
            .copied()
            .collect();
        compare(pathway, &same, (amount, unit), &place, problems);
    }
}

/// A parameter as entered: an amount, or a plain figure in the unit of the model's table.
fn figure<'m>(model: &'m ModelUse, name: &str) -> Option<(f64, &'m str)> {
    match model.parameters.get(name)? {
        Value::Object(amount) => Some((amount.get("value")?.as_f64()?, amount.get("unit")?.as_str()?)),
        Value::Number(figure) => {
            let table = models::find(&model.kind)?.parameters;
            let row = table.iter().find(|row| row.name == name)?;
            Some((figure.as_f64()?, row.unit()))
        }
        _ => None,
    }
}

fn compare(
    pathway: &Pathway,
    meters: &[&Meter],
    (amount, unit): (f64, &str),
    at: &Place,
    problems: &mut Problems,
) {
    let period = &pathway.period;
    let Ok(entered) = Quantity::read(amount, unit) else {
        return;
    };
    let mut given = 0.0;
    let mut words = Vec::new();
    for meter in meters {
        let Some(dial) = meter.amount(period.from, period.to) else {
            return;
        };
        let per_unit = meter.per_unit.as_ref();
        let (figure, counted) = match per_unit {
            Some(per_unit) => (dial * per_unit.value, per_unit.unit.as_str()),
            None => (dial, meter.unit.as_str()),
        };
        let Ok(read) = Quantity::read(figure, counted) else {
            return;
        };
        if !alike(read.dimension, entered.dimension) {
            let detail = format!(
                "The figure is {}, but meter {} gives {}.",
                entered.dimension.describe(),
                meter.id,
                read.dimension.describe()
            );
            let remedy =
                "Say with \"per_unit\" of the meter what one unit of its dial is, such as 35.9 MJ a m3.";
            problems.add(at, detail, remedy);
            return;
        }
        given += read.value;
        words.push(match per_unit {
            Some(per_unit) => format!(
                "{} {} of {} at {} {} each",
                plain(dial),
                meter.unit,
                meter.id,
                plain(per_unit.value),
                per_unit.unit
            ),
            None => format!("{} {} of {}", plain(dial), meter.unit, meter.id),
        });
    }
    if meters.is_empty() || (given - entered.value).abs() <= ROUNDING * given.abs().max(entered.value.abs()) {
        return;
    }
    let shown = match crate::core::units::parse_unit(unit).and_then(|unit| unit.from_base(given)) {
        Ok(figure) => format!("{} {unit}", plain(figure)),
        Err(_) => "another figure".to_owned(),
    };
    let detail = format!(
        "{} {unit} is entered, but the meter gives {shown} from {} to {}: {}.",
        plain(amount),
        period.from,
        period.to,
        words.join(" and ")
    );
    problems.add(at, detail, "Correct the figure or the readings.");
}

/// Bare energy may be what a meter or a figure calls net: which of the two counts is the factor's matter.
fn alike(a: Dimension, b: Dimension) -> bool {
    let net = |dimension| match dimension {
        Dimension::ENERGY_NET => Dimension::ENERGY,
        other => other,
    };
    net(a) == net(b)
        || (a == Dimension::ENERGY && b.is_energy() && b != Dimension::ENERGY_GROSS)
        || (b == Dimension::ENERGY && a.is_energy() && a != Dimension::ENERGY_GROSS)
}
