//! The rows of the sheet of inputs: what each rests on, so that a formula can follow it.

use super::factors::Factors;
use super::plan::{input_result, results};
use crate::core::documents::Assessment;
use crate::core::documents::assessment::InputResult;
use crate::core::documents::input::{FactorRef, Input as Entered, OneOrMany};
use crate::core::documents::pathway::Stage as StageDocument;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::{Book, Gas, GasVector};
use crate::core::engine::Resolved;
use crate::core::engine::resolved::{Input, Stage};
use crate::core::models::factors::{self, HeatingValue, Priced};
use crate::core::units::{Dimension, Unit, parse_unit};

/// One row: an input, or one factor of an input.
pub struct Row<'a> {
    /// Index of the stage; none for a published default.
    pub stage: Option<usize>,
    /// Title of the stage.
    pub stage_title: &'a str,
    /// The assessed input.
    pub result: &'a InputResult,
    /// The input of the engine's plan; none for a published default.
    pub input: Option<&'a Input>,
    /// The input as entered; none for defaults, stated terms and credits.
    pub entered: Option<&'a Entered>,
    /// What it rests on.
    pub basis: Basis,
    /// Gases of the row per recipe, kg; per MJ for a default.
    pub gases: GasVector,
}

/// What a row rests on.
pub enum Basis {
    /// An amount times a factor.
    Factor(Box<Conversion>),
    /// Gases as entered.
    Gases,
    /// A model that is so much per tonne of the stage's intakes, or per kilogram of the ethanol in its output.
    Scaled {
        /// What it is scaled with.
        by: Scale,
        /// The scale in the unit of the factor row: tonnes, or kilograms.
        amount: f64,
        /// Its row on the sheet of factors.
        factor: usize,
        /// Kind of the model.
        kind: String,
    },
    /// A model whose gases stand as values.
    Model {
        /// Kind of the model.
        kind: String,
        /// True if it reads amounts of its stage.
        reads_stage: bool,
    },
    /// A term stated for bought fuel.
    Stated {
        /// g CO2e per MJ as stated.
        g_per_mj: f64,
        /// The proof's heating value with its unit's size in J/kg; none for the rule set's.
        lhv: Option<(f64, f64)>,
    },
    /// A published default value, g CO2e/MJ.
    Default {
        /// The figure.
        g_per_mj: f64,
        /// Its row on the sheet of factors.
        factor: usize,
    },
}

/// What a model's gases are in proportion to.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Scale {
    /// Tonnes of the stage's intakes, wet.
    Intakes,
    /// Kilograms of pure ethanol in its output.
    Output,
}

/// From an amount as entered to the unit of a factor.
pub struct Conversion {
    /// As entered.
    pub amount: f64,
    /// Unit as entered.
    pub unit: Unit,
    /// Size of the factor's unit, in base units.
    pub factor_size: f64,
    /// Unit of the factor as printed.
    pub per: String,
    /// What else it is multiplied with.
    pub times: Times,
    /// The amount in the factor's unit.
    pub converted: f64,
    /// Row on the sheet of factors.
    pub factor: usize,
    /// -1 for a credit, else 1.
    pub sign: f64,
}

/// What an amount is multiplied with beside the sizes of units.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Times {
    /// Nothing.
    One,
    /// Net per gross heating value.
    NetPerGross(f64),
    /// The heating value in a row of the sheet of factors, for a mass.
    HeatingValue(usize),
    /// Density and heating value in a row of the sheet of factors, for a volume.
    DensityAndHeatingValue(usize),
}

/// Models that read amounts of their stage and are not in proportion to them.
const READ_THE_STAGE: &[&str] = &[
    "dehydration",
    "distillation",
    "fermentation_co2",
    "land_use_change",
    "soil_n2o",
];

/// Every row, stage by stage.
pub fn rows<'a>(
    resolved: &'a Resolved<'a>,
    book: &'a Book,
    assessment: &'a Assessment,
    factors: &mut Factors,
) -> Vec<Row<'a>> {
    let mut out = Vec::new();
    for (index, result) in results(resolved, assessment) {
        let Some(j) = index else {
            out.extend(default_row(resolved, result, factors));
            continue;
        };
        let stage = &resolved.stages[j];
        for (i, input) in stage.inputs.iter().enumerate() {
            let Some(assessed) = input_result(result, i) else {
                continue;
            };
            let entered = stage.document.inputs.get(i);
            let row = |basis, gases| Row {
                stage: Some(j),
                stage_title: stage.document.title(),
                result: assessed,
                input: Some(input),
                entered,
                basis,
                gases,
            };
            let priced = conversions(stage.document, entered, &input.key, book, factors);
            if priced.is_empty() {
                let basis = basis(stage, entered, input, assessed, factors);
                out.push(row(basis, assessed.recipe_gases_kg));
            }
            for (conversion, gases) in priced {
                out.push(row(Basis::Factor(Box::new(conversion)), gases));
            }
        }
    }
    out
}

fn default_row<'a>(
    resolved: &'a Resolved<'a>,
    result: &'a crate::core::documents::assessment::StageResult,
    factors: &mut Factors,
) -> Option<Row<'a>> {
    let assessed = input_result(result, 0)?;
    let default = resolved
        .defaults
        .iter()
        .find(|default| default.key == assessed.key)?;
    Some(Row {
        stage: None,
        stage_title: &result.name,
        result: assessed,
        input: None,
        entered: None,
        basis: Basis::Default {
            g_per_mj: default.g_per_mj,
            factor: factors.default(default),
        },
        gases: GasVector::of(Gas::Co2eUnsplit, default.g_per_mj / 1000.0),
    })
}

/// The amounts and factors of an input, or of the credit of a co-product; empty for an input of another kind.
fn conversions(
    stage: &StageDocument,
    entered: Option<&Entered>,
    key: &str,
    book: &Book,
    factors: &mut Factors,
) -> Vec<(Conversion, GasVector)> {
    if let Some(input) = entered {
        return match (input.amount, &input.unit, &input.factor) {
            (Some(amount), Some(unit), Some(refs)) => {
                priced(amount, unit, refs, input.net_per_gross, 1.0, book, factors)
            }
            _ => Vec::new(),
        };
    }
    let credited = key.strip_prefix("displaces:");
    let displaced = credited.and_then(|key| {
        let product = stage.co_products.iter().find(|product| product.key == key)?;
        product.displaces.as_ref()
    });
    match displaced {
        Some(d) => priced(d.amount, &d.unit, &d.factor, None, -1.0, book, factors),
        None => Vec::new(),
    }
}

fn priced(
    amount: f64,
    unit: &str,
    refs: &OneOrMany<FactorRef>,
    net_per_gross: Option<f64>,
    sign: f64,
    book: &Book,
    factors: &mut Factors,
) -> Vec<(Conversion, GasVector)> {
    let Ok(unit) = parse_unit(unit) else {
        return Vec::new();
    };
    let mut ignored = Problems::default();
    let list: Vec<Priced> = refs
        .list()
        .iter()
        .filter_map(|reference| factors::find(reference, book, &Place::ROOT, &mut ignored))
        .collect();
    let heating = HeatingValue::of(&list);
    let heating_row = list
        .iter()
        .find(|priced| priced.lhv_mj_per_kg.is_some())
        .map(|priced| factors.priced(priced, book));
    let convert = |factor: &Priced, row: usize| {
        let converted = factors::convert(amount, &unit, net_per_gross, &heating, factor).ok()?;
        let energy = factor.unit.dimension.is_energy();
        let times = match (unit.dimension, net_per_gross, heating_row) {
            (Dimension::ENERGY_GROSS, Some(ratio), _) if energy => Times::NetPerGross(ratio),
            (Dimension::MASS, _, Some(row)) if energy => Times::HeatingValue(row),
            (Dimension::VOLUME, _, Some(row)) if energy => Times::DensityAndHeatingValue(row),
            _ => Times::One,
        };
        let gases = factors::gases_of(converted.amount, factor) * sign;
        let conversion = Conversion {
            amount,
            unit: unit.clone(),
            factor_size: factor.unit.factor,
            per: factor.per.clone(),
            times,
            converted: converted.amount,
            factor: row,
            sign,
        };
        Some((conversion, gases))
    };
    let mut out = Vec::with_capacity(list.len());
    for factor in &list {
        let row = factors.priced(factor, book);
        out.extend(convert(factor, row));
    }
    out
}

/// What an input without a factor rests on.
fn basis(
    stage: &Stage,
    entered: Option<&Entered>,
    input: &Input,
    assessed: &InputResult,
    factors: &mut Factors,
) -> Basis {
    let stated = input
        .key
        .strip_prefix("stated:")
        .zip(stage.document.stated.as_ref());
    if let Some((term, stated)) = stated
        && let Some(term) = stated.terms.get(term)
    {
        let size = |unit: &str| parse_unit(unit).map(|unit| unit.factor).unwrap_or(1.0);
        return Basis::Stated {
            g_per_mj: term.g_co2e_per_mj,
            lhv: stated.lhv.as_ref().map(|lhv| (lhv.value, size(&lhv.unit))),
        };
    }
    let Some(models) = entered.and_then(|entered| entered.model.as_ref()) else {
        return Basis::Gases;
    };
    let kind = models.list().first().map_or("", |model| model.kind.as_str());
    let own_mass = models
        .list()
        .iter()
        .any(|model| model.parameters.get("mass").is_some_and(|mass| !mass.is_null()));
    let scale = match kind {
        "haul" if !own_mass => {
            let wet: Option<f64> = stage.intakes.iter().map(|intake| intake.flow.wet_kg).sum();
            wet.map(|kg| (Scale::Intakes, kg / 1000.0))
        }
        "combustion" => {
            let pure = stage.products.first().and_then(|output| output.flow.pure_kg);
            pure.map(|kg| (Scale::Output, kg))
        }
        _ => None,
    };
    match scale.filter(|(_, amount)| *amount > 0.0 && input.per_fuel.is_empty()) {
        Some((by, amount)) => {
            let per_one = input.gases * (1.0 / amount);
            let what = format!("{kind} of {}, {}", stage.document.title(), assessed.label);
            Basis::Scaled {
                by,
                amount,
                factor: factors.scaled(what, by, per_one),
                kind: kind.to_owned(),
            }
        }
        None => Basis::Model {
            kind: kind.to_owned(),
            reads_stage: READ_THE_STAGE.contains(&kind) || (kind == "haul" && models.list().len() > 1),
        },
    }
}
