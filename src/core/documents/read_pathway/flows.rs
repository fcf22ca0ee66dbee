//! Reads what flows into and out of a stage: output, intakes, co-products and what they displace.

use crate::core::documents::pathway::{CoProduct, Displaces, Flow, Intake, Output, Role};
use crate::core::documents::problem::Problems;
use crate::core::documents::read_input::{amount, factor_ref, key, one_or_many};
use crate::core::documents::reader::{Fields, Place};
use serde_json::Value;

/// Reads what a stage gives.
pub fn output(value: &Value, at: &Place, problems: &mut Problems) -> Option<Output> {
    let mut fields = Fields::open(value, at, problems)?;
    let material = fields.required_text("material", at, problems);
    let flow = flow(&mut fields, at, problems);
    for name in ["amount", "unit"] {
        fields.need(name, at, problems);
    }
    fields.close(at, problems);
    Some(Output {
        material: material?,
        flow,
    })
}

/// Reads what a stage takes.
pub fn intake(value: &Value, at: &Place, problems: &mut Problems) -> Option<Intake> {
    let mut fields = Fields::open(value, at, problems)?;
    let from = fields.required_text("from", at, problems);
    let product = fields.text("product", at, problems);
    let flow = flow(&mut fields, at, problems);
    fields.close(at, problems);
    Some(Intake {
        from: from?,
        product,
        flow,
    })
}

/// Reads what a stage gives beside its output.
pub fn co_product(value: &Value, at: &Place, problems: &mut Problems) -> Option<CoProduct> {
    let mut fields = Fields::open(value, at, problems)?;
    let key = key(&mut fields, at, problems);
    let name = fields.required_text("name", at, problems);
    let roles = [
        ("co_product", Role::CoProduct),
        ("residue", Role::Residue),
        ("waste", Role::Waste),
    ];
    fields.need("role", at, problems);
    let role = fields.word("role", &roles, at, problems);
    let material = fields.required_text("material", at, problems);
    let flow = flow(&mut fields, at, problems);
    for name in ["amount", "unit"] {
        fields.need(name, at, problems);
    }
    let displaces = fields.part("displaces", at, problems, displaces);
    fields.close(at, problems);
    Some(CoProduct {
        key: key?,
        name: name?,
        role: role?,
        material: material?,
        flow,
        displaces,
    })
}

fn displaces(value: &Value, at: &Place, problems: &mut Problems) -> Option<Displaces> {
    let mut fields = Fields::open(value, at, problems)?;
    let figure = fields.amount("amount", at, problems);
    let unit = fields.required_text("unit", at, problems);
    let factor = fields.part("factor", at, problems, |v, place, problems| {
        one_or_many(v, place, problems, factor_ref)
    });
    fields.close(at, problems);
    Some(Displaces {
        amount: figure?,
        unit: unit?,
        factor: factor?,
    })
}

fn flow(fields: &mut Fields, at: &Place, problems: &mut Problems) -> Flow {
    Flow {
        amount: fields.amount("amount", at, problems),
        unit: fields.text("unit", at, problems),
        moisture_percent: fields.number("moisture_percent", at, problems),
        carbon_percent_dry: fields.percent("carbon_percent_dry", at, problems),
        lhv: fields.part("lhv", at, problems, amount),
        temperature_c: fields.number("temperature_c", at, problems),
        price: fields.part("price", at, problems, amount),
        strength_percent_mass: fields.number("strength_percent_mass", at, problems),
        strength_percent_vol: fields.number("strength_percent_vol", at, problems),
        note: fields.text("note", at, problems),
    }
}
