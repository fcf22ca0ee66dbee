//! Reads a stage: its kind, what it takes and gives, and where its crop grew.

use super::flows::{co_product, intake, output};
use super::records::{earlier_periods, known_meters, meters};
use super::stated::stated;
use crate::core::documents::pathway::{Grown, Stage};
use crate::core::documents::problem::Problems;
use crate::core::documents::read_input::{input, key};
use crate::core::documents::reader::{Fields, Place, text_of, unique};
use crate::core::domain::StageKind;
use crate::core::domain::rule_set::AllocationMethod;
use serde_json::Value;

/// At most this many inputs in a stage.
pub const MOST_INPUTS: usize = 2_000;

impl Stage {
    /// Reads one stage alone.
    ///
    /// # Errors
    /// Everything that is wrong with its shape; pointers begin at the stage.
    pub fn from_value(value: &Value) -> Result<Stage, Problems> {
        let mut problems = Problems::default();
        match stage(value, &Place::ROOT, &mut problems) {
            Some(stage) if problems.is_empty() => Ok(stage),
            _ => Err(problems),
        }
    }
}

/// Reads a stage of a pathway.
pub fn stage(value: &Value, at: &Place, problems: &mut Problems) -> Option<Stage> {
    let mut fields = Fields::open(value, at, problems)?;
    let key = key(&mut fields, at, problems);
    let kinds: Vec<_> = StageKind::ALL
        .into_iter()
        .map(|kind| (kind.name(), kind))
        .collect();
    for name in ["kind", "output"] {
        fields.need(name, at, problems);
    }
    let kind = fields.word("kind", &kinds, at, problems);
    let name = fields.text("name", at, problems);
    let note = fields.text("note", at, problems);
    let grown = fields.part("grown", at, problems, grown);
    let output = fields.part("output", at, problems, output);
    let intakes = fields.list("intakes", at, problems, intake);
    let count = value.get("inputs").and_then(Value::as_array).map_or(0, Vec::len);
    let inputs = if count > MOST_INPUTS {
        fields.take("inputs");
        let detail = format!("The stage has {count} inputs.");
        problems.add(
            at.field("inputs"),
            detail,
            format!("Give at most {MOST_INPUTS}; add like ones up."),
        );
        Vec::new()
    } else {
        fields.list("inputs", at, problems, input)
    };
    let co_products = fields.list("co_products", at, problems, co_product);
    let methods: Vec<_> = AllocationMethod::ALL
        .into_iter()
        .map(|method| (method.name(), method))
        .collect();
    let allocation = fields.word("allocation", &methods, at, problems);
    let stated = fields.part("stated", at, problems, stated);
    let meters = meters(&mut fields, at, problems);
    let earlier_periods = earlier_periods(&mut fields, output.as_ref(), &intakes, at, problems);
    fields.close(at, problems);
    unique(
        inputs.iter().map(|input| input.key.as_str()),
        &at.field("inputs"),
        "key",
        problems,
    );
    unique(
        co_products.iter().map(|product| product.key.as_str()),
        &at.field("co_products"),
        "key",
        problems,
    );
    let stage = Stage {
        key: key?,
        kind: kind?,
        name,
        note,
        grown,
        output: output?,
        intakes,
        inputs,
        co_products,
        allocation,
        stated,
        meters,
        earlier_periods,
    };
    known_meters(&stage, at, problems);
    Some(stage)
}

fn grown(value: &Value, at: &Place, problems: &mut Problems) -> Option<Grown> {
    let mut fields = Fields::open(value, at, problems)?;
    let year = fields.number("harvest_year", at, problems);
    let growers = fields.number("growers", at, problems);
    let grown = Grown {
        country: fields.text("country", at, problems),
        region: fields.text("region", at, problems),
        harvest_year: year.and_then(|year| whole(year, 9_999, &at.field("harvest_year"), problems)),
        land_use_january_2008: fields.text("land_use_january_2008", at, problems),
        land_declarations: fields.list("land_declarations", at, problems, |v, place, problems| {
            text_of(v, place, problems).map(str::to_owned)
        }),
        growers: growers.and_then(|growers| whole(growers, 1_000_000, &at.field("growers"), problems)),
    };
    fields.close(at, problems);
    Some(grown)
}

/// `figure` as a whole number of 0 to `most`.
fn whole<N: TryFrom<u32>>(figure: f64, most: u32, at: &Place, problems: &mut Problems) -> Option<N> {
    if figure.fract() != 0.0 || !(0.0..=f64::from(most)).contains(&figure) {
        let detail = format!("{figure} is not a whole number of 0 to {most}.");
        problems.add(at, detail, "Give a whole number.");
        return None;
    }
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "whole and within 0 and `most`, as just checked"
    )]
    let number = figure as u32;
    N::try_from(number).ok()
}
