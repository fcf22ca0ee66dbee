//! The sheet of stages: each recipe with its products and intakes, how the burden is shared, and how many recipes one
//! megajoule of fuel asks for.

use super::flows;
use super::look::{Digits, Part};
use super::page::{Layout, Page, cell, figure};
use super::plan::Plan;
use super::{inputs, sharing};
use crate::core::documents::pathway::{Flow, Role};
use crate::core::engine::resolved::Intake;
use crate::core::models::flow::Measured;
use crate::core::units::parse_unit;
use rust_xlsxwriter::XlsxError;

/// Name of the sheet.
pub const NAME: &str = "Chain";
/// First row of the table.
pub const FIRST: u32 = 5;
const AMOUNT: u16 = 3;
const UNIT: u16 = 4;
const SIZE: u16 = 5;
/// Amount in base units.
pub const BASE: u16 = 6;
/// Moisture, % of the wet mass.
pub const MOISTURE: u16 = 8;
/// Strength, % mass.
pub const STRENGTH: u16 = 9;
/// Density, kg/m3.
pub const DENSITY: u16 = 10;
/// Dry matter or pure ethanol, kg.
pub const DRY: u16 = 11;
/// Measure of sharing per unit.
pub const PER_UNIT: u16 = 12;
const MEASURE: u16 = 13;
const MEASURE_UNIT: u16 = 14;
const SHARE: u16 = 15;
const RECIPES: u16 = 16;
const ASKED: u16 = 17;
/// Recipes per MJ that the fuel carries.
pub const CARRIED: u16 = 18;
/// Recipes per MJ with all shares 1.
pub const WHOLE: u16 = 19;
/// g CO2e/MJ of a stage.
pub const NET: u16 = 20;
const UNSHARED: u16 = 21;
const CARRIED_SHARE: u16 = 22;
/// Fuel that the crop of one recipe makes, MJ.
pub const FUEL: u16 = 23;
const NOTE: u16 = 24;

const COLUMNS: [(&str, f64); 25] = [
    ("Stage", 22.0),
    ("Row", 11.0),
    ("What", 26.0),
    ("Amount per recipe", 11.0),
    ("Unit", 8.0),
    ("Base units in one unit", 9.0),
    ("In base units", 12.0),
    ("Base unit", 5.0),
    ("Moisture %", 9.0),
    ("Strength % mass", 9.0),
    ("Density kg/m3", 9.0),
    ("Dry matter or pure ethanol kg", 12.0),
    ("Sharing: measure per unit", 12.0),
    ("Sharing: measure", 12.0),
    ("Sharing: unit", 9.0),
    ("Share", 9.0),
    ("Recipes of the supplier per recipe", 12.0),
    ("Asked for recipes/MJ", 13.0),
    ("Carried by the fuel recipes/MJ", 13.0),
    ("All shares 1 recipes/MJ", 13.0),
    ("g CO2e/MJ", 10.0),
    ("g CO2e/MJ with all shares 1", 10.0),
    ("Carried share", 9.0),
    ("Fuel of one recipe's crop MJ", 12.0),
    ("Note", 44.0),
];

/// Writes the sheet.
pub fn write(mut page: Page, plan: &Plan) -> Result<(), XlsxError> {
    let layout = Layout {
        columns: &COLUMNS,
        head: FIRST - 1,
        fixed: 3,
        wide: true,
    };
    page.lay_out("Chain: from the wheel back to the field", &layout)?;
    page.text(
        1,
        0,
        "One megajoule of fuel asks for recipes of the last stage; each intake hands the demand on to its supplier. A product \
         asks for recipes (sum of its takers), the fuel carries its share of them. Dry matter is matched with dry matter where both \
         sides have a moisture, pure ethanol with pure ethanol, else as entered.",
        Part::Text,
    )?;
    page.text(
        2,
        0,
        "Blue figures may be changed: everything that follows from them by formula follows, also the net.",
        Part::Text,
    )?;
    for &j in &plan.resolved.order {
        stage(&mut page, plan, j)?;
        for index in 0..plan.resolved.stages[j].products.len() {
            product(&mut page, plan, j, index)?;
        }
        for (k, intake) in plan.resolved.stages[j].intakes.iter().enumerate() {
            taken(&mut page, plan, j, k, intake)?;
        }
    }
    Ok(())
}

fn stage(page: &mut Page, plan: &Plan, j: usize) -> Result<(), XlsxError> {
    let stage = &plan.resolved.stages[j];
    let rows = plan.chain[j];
    let row = rows.stage;
    for column in 0..=NOTE {
        page.text(row, column, "", Part::Band)?;
    }
    page.text(row, 0, stage.document.title(), Part::Band)?;
    page.text(row, 1, "stage", Part::Band)?;
    page.text(row, 2, stage.kind().words(), Part::Band)?;
    let (first, last) = (rows.output, rows.intakes - 1);
    let column = |column| format!("{}:{}", cell(first, column), cell(last, column));
    let band = |digits| (Part::Band, digits);
    let (scale, whole) = (plan.demand.scale[j], plan.demand.whole[j]);
    page.formula(
        row,
        CARRIED,
        &format!("=SUM({})", column(CARRIED)),
        scale,
        band(Digits::Power),
    )?;
    page.formula(
        row,
        WHOLE,
        &format!("=MAX({})", column(WHOLE)),
        whole,
        band(Digits::Power),
    )?;
    let result = plan
        .results()
        .find(|(index, _)| *index == Some(j))
        .map(|(_, result)| result);
    let Some(result) = result else { return Ok(()) };
    if let Some((first, last)) = plan.spans[j] {
        let sum = |from: u16| {
            format!(
                "=SUM({})",
                super::page::span(inputs::NAME, (first, from), (last, from))
            )
        };
        page.formula(
            row,
            NET,
            &sum(inputs::NET),
            result.g_co2e_per_mj,
            band(Digits::Four),
        )?;
        let unshared = result.unallocated_g_co2e_per_mj;
        page.formula(
            row,
            UNSHARED,
            &sum(inputs::UNSHARED),
            unshared,
            band(Digits::Four),
        )?;
    } else {
        page.number(row, NET, 0.0, Part::Band, Digits::Four)?;
        page.number(row, UNSHARED, 0.0, Part::Band, Digits::Four)?;
    }
    let (carried, all) = (cell(row, CARRIED), cell(row, WHOLE));
    let formula = format!("=IF({all}>0,{carried}/{all},0)");
    page.formula(
        row,
        CARRIED_SHARE,
        &formula,
        result.carried_share,
        band(Digits::Six),
    )?;
    if stage.inputs.iter().any(|input| !input.per_fuel.is_empty()) {
        let mj = plan.demand.fuel_mj[j];
        let part = figure(mj * whole);
        let formula = format!("=IF({all}>0,{part}/{all},0)");
        page.formula(row, FUEL, &formula, mj, band(Digits::All))?;
        page.text(
            row,
            NOTE,
            "Fuel of the crop: the part of the fuel that this stage grows, a value, over its recipes with all shares 1.",
            Part::Band,
        )?;
    }
    Ok(())
}

fn product(page: &mut Page, plan: &Plan, j: usize, index: usize) -> Result<(), XlsxError> {
    let resolved = plan.resolved;
    let stage = &resolved.stages[j];
    let product = &stage.products[index];
    let row = plan.chain[j].product(index);
    let (flow, role) = match index
        .checked_sub(1)
        .and_then(|k| stage.document.co_products.get(k))
    {
        None => (&stage.document.output.flow, "output"),
        Some(document) => (&document.flow, role(document.role)),
    };
    page.text(row, 0, stage.document.title(), Part::Text)?;
    page.text(row, 1, role, Part::Text)?;
    let name = match index {
        0 => resolved.materials.name(&product.flow.material),
        _ => product.name,
    };
    page.text(row, 2, name, Part::Text)?;
    entered(page, plan, row, flow, &product.flow)?;
    let mut note = flows::note(flow, &product.flow);
    match sharing::weigh(plan, j, index) {
        Some(weighed) => {
            let (formula, found) = &weighed.per_unit;
            page.formula(row, PER_UNIT, formula, *found, (Part::Formula, Digits::All))?;
            let (formula, found) = &weighed.measure;
            page.formula(row, MEASURE, formula, *found, (Part::Formula, Digits::All))?;
            page.text(row, MEASURE_UNIT, stage.measure_unit, Part::Text)?;
            let rows = plan.chain[j];
            let all = format!(
                "{}:{}",
                cell(rows.output, MEASURE),
                cell(rows.intakes - 1, MEASURE)
            );
            let formula = format!("={}/SUM({all})", cell(row, MEASURE));
            page.formula(row, SHARE, &formula, product.share, (Part::Formula, Digits::Six))?;
            if !note.is_empty() {
                note.push_str("; ");
            }
            note.push_str("shares by ");
            note.push_str(weighed.words);
        }
        None => page.number(row, SHARE, product.share, Part::Formula, Digits::Six)?,
    }
    page.text(row, NOTE, &note, Part::Text)?;
    let asked = |column: u16| {
        let mut parts: Vec<String> = takers(plan, j, index).map(|row| cell(row, column)).collect();
        if resolved.last == Some(j) && index == 0 {
            let share = flows::strength(row);
            let per_kg = flows::ethanol_mj_per_kg(resolved.rules, &share);
            parts.insert(0, format!("1/({}*{per_kg})", cell(row, DRY)));
        }
        match parts.len() {
            0 => "=0".to_owned(),
            1..200 => format!("={}", parts.join("+")),
            // A formula holds so many characters; a supplier of hundreds is summed over its row of the table.
            _ => {
                let chunks: Vec<String> = parts
                    .chunks(200)
                    .map(|chunk| format!("({})", chunk.join("+")))
                    .collect();
                format!("={}", chunks.join("+"))
            }
        }
    };
    let power = (Part::Formula, Digits::Power);
    let recipes = plan.demand.by_product[j][index];
    page.formula(row, ASKED, &asked(CARRIED), recipes, power)?;
    let formula = format!("={}*{}", cell(row, ASKED), cell(row, SHARE));
    page.formula(row, CARRIED, &formula, recipes * product.share, power)?;
    let whole = plan.demand.whole_by_product[j][index];
    page.formula(row, WHOLE, &asked(WHOLE), whole, power)
}

/// Rows of the intakes that take a product.
fn takers<'p>(plan: &'p Plan, j: usize, index: usize) -> impl Iterator<Item = u32> + 'p {
    plan.resolved.order.iter().flat_map(move |&t| {
        let intakes = plan.resolved.stages[t].intakes.iter().enumerate();
        intakes
            .filter(move |(_, intake)| intake.from == j && intake.product == index)
            .map(move |(k, _)| plan.chain[t].intake(k))
    })
}

fn taken(page: &mut Page, plan: &Plan, j: usize, k: usize, intake: &Intake) -> Result<(), XlsxError> {
    let resolved = plan.resolved;
    let stage = &resolved.stages[j];
    let row = plan.chain[j].intake(k);
    let supplier = &resolved.stages[intake.from];
    let product = &supplier.products[intake.product];
    let from_row = plan.chain[intake.from].product(intake.product);
    page.text(row, 0, stage.document.title(), Part::Text)?;
    page.text(row, 1, "intake", Part::Text)?;
    let what = match intake.product {
        0 => format!("from {}", supplier.document.title()),
        _ => format!("{} from {}", product.name, supplier.document.title()),
    };
    page.link(row, 2, (NAME, from_row, 2), &what)?;
    let own = stage.document.intakes.get(k).map(|intake| &intake.flow);
    let (taken, made) = (&intake.flow, &product.flow);
    match own.filter(|flow| flow.amount.is_some()) {
        Some(flow) => {
            entered(page, plan, row, flow, taken)?;
            page.text(row, NOTE, &flows::note(flow, taken), Part::Text)?;
        }
        None => {
            let output = cell(plan.chain[j].output, DRY);
            let pure = taken.pure_kg.unwrap_or(0.0);
            page.formula(
                row,
                DRY,
                &format!("={output}"),
                pure,
                (Part::Formula, Digits::All),
            )?;
            let strength = cell(from_row, STRENGTH);
            let percent = 100.0 * taken.strength.unwrap_or(1.0);
            page.formula(
                row,
                STRENGTH,
                &format!("={strength}"),
                percent,
                (Part::Formula, Digits::All),
            )?;
            page.text(row, NOTE, "the same pure ethanol as the fuel burnt", Part::Text)?;
        }
    }
    let both_dry = taken.moisture.is_some() && made.moisture.is_some();
    let both_pure = taken.pure_kg.is_some() && made.pure_kg.is_some();
    let by = if both_pure || both_dry { DRY } else { BASE };
    let formula = format!("={}/{}", cell(row, by), cell(from_row, by));
    let power = (Part::Formula, Digits::Power);
    page.formula(row, RECIPES, &formula, intake.recipes, power)?;
    let own_row = plan.chain[j].stage;
    for (column, scale) in [(CARRIED, plan.demand.scale[j]), (WHOLE, plan.demand.whole[j])] {
        let formula = format!("={}*{}", cell(row, RECIPES), cell(own_row, column));
        page.formula(row, column, &formula, scale * intake.recipes, power)?;
    }
    Ok(())
}

/// The columns of a flow as entered and what follows from it.
fn entered(
    page: &mut Page,
    plan: &Plan,
    row: u32,
    flow: &Flow,
    measured: &Measured,
) -> Result<(), XlsxError> {
    let all = Digits::All;
    let (Some(amount), Some(unit)) = (flow.amount, flow.unit.as_deref()) else {
        return Ok(());
    };
    page.number(row, AMOUNT, amount, Part::Entered, all)?;
    page.text(row, UNIT, unit, Part::Text)?;
    let size = parse_unit(unit).map_or(1.0, |unit| unit.factor);
    page.number(row, SIZE, size, Part::Published, all)?;
    let formula = format!("={}*{}", cell(row, AMOUNT), cell(row, SIZE));
    page.formula(row, BASE, &formula, measured.base, (Part::Formula, all))?;
    page.text(row, BASE + 1, flows::base_unit(measured), Part::Text)?;
    if let Some(percent) = flow.moisture_percent {
        page.number(row, MOISTURE, percent, Part::Entered, all)?;
    }
    match (flow.strength_percent_mass, measured.strength) {
        (Some(percent), _) => page.number(row, STRENGTH, percent, Part::Entered, all)?,
        (None, Some(share)) => page.number(row, STRENGTH, 100.0 * share, Part::Value, all)?,
        (None, None) => {}
    }
    if let Some(density) = flows::density(measured) {
        page.number(row, DENSITY, density, Part::Value, all)?;
    }
    if let Some((formula, found)) = flows::dry(measured, plan.resolved.rules, row) {
        page.formula(row, DRY, &formula, found, (Part::Formula, all))?;
    }
    Ok(())
}

fn role(role: Role) -> &'static str {
    match role {
        Role::CoProduct => "co-product",
        Role::Residue => "residue",
        Role::Waste => "waste",
    }
}
