//! The sheet of inputs: every amount as entered, brought to the unit of its factor, priced by gas, weighted, and carried to
//! one megajoule of fuel.

use super::chain;
use super::factors::{gas_column, weights};
use super::flows;
use super::look::{Digits, Part};
use super::page::{Layout, Page, cell, figure, on};
use super::plan::Plan;
use super::rows::{Basis, Conversion, Row, Scale, Times};
use super::workings::{self, Links};
use crate::core::domain::Gas;
use crate::core::engine::resolved::Input;
use rust_xlsxwriter::XlsxError;

/// Name of the sheet.
pub const NAME: &str = "Inputs";
/// First row of the table.
pub const FIRST: u32 = 5;
/// The term a row feeds.
pub const TERM: u16 = 3;
/// What a row rests on.
pub const HOW: u16 = 4;
const AMOUNT: u16 = 5;
const UNIT: u16 = 6;
const SIZE: u16 = 7;
const TIMES: u16 = 8;
const FACTOR_SIZE: u16 = 9;
const CONVERTED: u16 = 10;
const PER: u16 = 11;
const FACTOR: u16 = 12;
/// First of the gases, kg per recipe.
pub const GASES: u16 = 13;
const CO2E: u16 = 20;
/// Recipes per MJ that the fuel carries.
pub const SCALE: u16 = 21;
/// 1 where the row counts.
pub const COUNTS: u16 = 22;
/// g CO2e/MJ.
pub const NET: u16 = 23;
/// g CO2e/MJ with all shares 1.
pub const UNSHARED: u16 = 24;
/// g CO2e/MJ of use that the rule set counts as zero.
pub const MEMO: u16 = 25;
const ORIGIN: u16 = 26;
const EVIDENCE: u16 = 27;
const NOTE: u16 = 28;

/// Writes the sheet; `links` says where the workings of an input begin.
pub fn write(mut page: Page, plan: &Plan, links: &Links) -> Result<(), XlsxError> {
    let gases: Vec<String> = Gas::ALL
        .iter()
        .map(|gas| format!("{} kg/recipe", gas.words()))
        .collect();
    let mut columns = vec![
        ("Stage", 22.0),
        ("Input", 14.0),
        ("What", 26.0),
        ("Term", 6.0),
        ("Rests on", 16.0),
        ("Amount as entered", 12.0),
        ("Unit", 9.0),
        ("Base units in one unit", 9.0),
        ("Times", 9.0),
        ("Base units in one unit of the factor", 9.0),
        ("Amount in the factor's unit", 13.0),
        ("Factor's unit", 11.0),
        ("Factor", 28.0),
    ];
    columns.extend(gases.iter().map(|head| (head.as_str(), 11.0)));
    columns.extend([
        ("kg CO2e/recipe", 12.0),
        ("Carried by the fuel recipes/MJ", 13.0),
        ("Counts", 6.0),
        ("g CO2e/MJ", 10.0),
        ("g CO2e/MJ with all shares 1", 10.0),
        ("Memo g CO2e/MJ", 9.0),
        ("Origin", 10.0),
        ("Evidence", 14.0),
        ("Note", 60.0),
    ]);
    let layout = Layout {
        columns: &columns,
        head: FIRST - 1,
        fixed: 3,
        wide: true,
    };
    page.lay_out("Inputs: from amounts to g CO2e/MJ", &layout)?;
    page.text(
        1,
        0,
        "Amount x size of its unit x times / size of the factor's unit = amount in the factor's unit; x gases of the factor = kg \
         per recipe; weighted = kg CO2e; x recipes per MJ x 1000 = g CO2e/MJ. An input of several factors has a row for each.",
        Part::Text,
    )?;
    page.text(
        2,
        0,
        "Blue: as entered, may be changed. Grey italics: worked out by a model of the program, with its steps on Workings; such a \
         value does not follow when its stage changes.",
        Part::Text,
    )?;
    if plan.rows.is_empty() {
        page.text(FIRST, 2, "No inputs.", Part::Text)?;
    }
    for (row, planned) in (FIRST..).zip(&plan.rows) {
        one(&mut page, plan, row, planned, links)?;
    }
    let (first, last) = plan.all_inputs();
    let total = last + 1;
    page.text(total, 2, "All inputs", Part::Sum)?;
    for (column, found) in [
        (NET, plan.assessment.net.g_co2e_per_mj),
        (MEMO, plan.assessment.memo.e_u_not_counted_g_co2e_per_mj),
    ] {
        let formula = format!("=SUM({}:{})", cell(first, column), cell(last, column));
        page.formula(total, column, &formula, found, (Part::Sum, Digits::Four))?;
    }
    Ok(())
}

fn one(page: &mut Page, plan: &Plan, row: u32, planned: &Row, links: &Links) -> Result<(), XlsxError> {
    page.text(row, 0, planned.stage_title, Part::Text)?;
    page.text(row, 1, &planned.result.key, Part::Text)?;
    page.text(row, 2, &planned.result.label, Part::Text)?;
    page.text(row, TERM, planned.result.term.name(), Part::Text)?;
    let mut note = Vec::new();
    let rests_on = match &planned.basis {
        Basis::Factor(conversion) => {
            priced(page, plan, row, planned, conversion)?;
            if conversion.sign < 0.0 { "credit" } else { "factor" }.to_owned()
        }
        Basis::Gases => {
            given(page, row, planned, Part::Entered)?;
            "gases as entered".to_owned()
        }
        Basis::Model { kind, reads_stage } => {
            modelled(page, plan, row, planned)?;
            note.push(match reads_stage {
                true => {
                    "A value of the model, which reads amounts of its stage: assess again when they change."
                }
                false => "A value of the model.",
            });
            format!("model {kind}")
        }
        Basis::Scaled {
            by,
            amount,
            factor,
            kind,
        } => {
            scaled(page, plan, row, planned, (*by, *amount, *factor))?;
            note.push(match by {
                Scale::Intakes => "In proportion to the intakes of its stage; the figures per tonne are values of the model.",
                Scale::Output => "In proportion to the fuel burnt; the figures per kg are values of the model.",
            });
            format!("model {kind}")
        }
        Basis::Stated { g_per_mj, lhv } => {
            stated(page, plan, row, planned, (*g_per_mj, *lhv))?;
            "stated by the supplier".to_owned()
        }
        Basis::Default { g_per_mj, factor } => {
            let all = Digits::All;
            page.formula(
                row,
                AMOUNT,
                &format!("={}", plan.factors.size(*factor)),
                *g_per_mj,
                (Part::Formula, all),
            )?;
            page.text(row, UNIT, "g CO2e/MJ", Part::Text)?;
            let formula = format!("={}/1000", cell(row, AMOUNT));
            page.formula(row, CONVERTED, &formula, g_per_mj / 1000.0, (Part::Formula, all))?;
            page.text(row, PER, "kg CO2e/MJ", Part::Text)?;
            let formula = format!("={}", cell(row, CONVERTED));
            let column = gas_column(GASES, Gas::Co2eUnsplit);
            page.formula(row, column, &formula, g_per_mj / 1000.0, (Part::Formula, all))?;
            link(page, plan, row, *factor)?;
            "published default".to_owned()
        }
    };
    page.text(row, HOW, &rests_on, Part::Text)?;
    carried(page, plan, row, planned)?;
    if let Some(entered) = planned.entered {
        let origin = entered
            .origin
            .map_or("", crate::core::documents::amount::Origin::name);
        page.text(row, ORIGIN, origin, Part::Text)?;
        page.text(row, EVIDENCE, &entered.evidence.join(", "), Part::Text)?;
    }
    let own = planned.entered.and_then(|entered| entered.note.as_deref());
    let why = planned.result.replaced.as_deref();
    let words: Vec<&str> = why.into_iter().chain(note).chain(own).collect();
    let words = words.join(" ");
    match links.get(planned.stage, &planned.result.key) {
        Some(to) => {
            let text = if words.is_empty() { "Workings" } else { &words };
            page.link(row, NOTE, (workings::NAME, to, 0), text)
        }
        None => page.text(row, NOTE, &words, Part::Text),
    }
}

fn link(page: &mut Page, plan: &Plan, row: u32, factor: usize) -> Result<(), XlsxError> {
    let to = (super::factors::NAME, plan.factors.row(factor), 0);
    page.link(row, FACTOR, to, plan.factors.short(factor))
}

fn priced(
    page: &mut Page,
    plan: &Plan,
    row: u32,
    planned: &Row,
    conversion: &Conversion,
) -> Result<(), XlsxError> {
    let (all, factors) = (Digits::All, &plan.factors);
    page.number(row, AMOUNT, conversion.amount, Part::Entered, all)?;
    page.text(row, UNIT, &conversion.unit.symbol, Part::Text)?;
    page.number(row, SIZE, conversion.unit.factor, Part::Published, all)?;
    let sign = if conversion.sign < 0.0 { "-" } else { "" };
    let base = conversion.unit.to_base(conversion.amount).unwrap_or(0.0);
    let found = if base == 0.0 {
        conversion.sign
    } else {
        conversion.sign * conversion.converted * conversion.factor_size / base
    };
    let formula = match conversion.times {
        Times::One => format!("={sign}1"),
        Times::NetPerGross(ratio) => format!("={sign}{}", figure(ratio)),
        Times::HeatingValue(lhv) => format!("={sign}{}*1000000", factors.lhv(lhv)),
        Times::DensityAndHeatingValue(lhv) => {
            format!("={sign}{}*{}*1000000", factors.density(lhv), factors.lhv(lhv))
        }
    };
    match conversion.times {
        Times::NetPerGross(ratio) if sign.is_empty() => page.number(row, TIMES, ratio, Part::Entered, all)?,
        Times::One => page.number(row, TIMES, conversion.sign, Part::Formula, all)?,
        _ if base == 0.0 => page.formula(
            row,
            TIMES,
            &formula,
            heating(plan, conversion),
            (Part::Formula, all),
        )?,
        _ => page.formula(row, TIMES, &formula, found, (Part::Formula, all))?,
    }
    let size = factors.size(conversion.factor);
    page.formula(
        row,
        FACTOR_SIZE,
        &format!("={size}"),
        conversion.factor_size,
        (Part::Formula, all),
    )?;
    let offset = match conversion.unit.offset {
        0.0 => String::new(),
        offset => format!("+{}", figure(offset)),
    };
    let formula = format!(
        "=({}*{}{offset})*{}/{}",
        cell(row, AMOUNT),
        cell(row, SIZE),
        cell(row, TIMES),
        cell(row, FACTOR_SIZE)
    );
    let converted = conversion.converted * conversion.sign;
    page.formula(row, CONVERTED, &formula, converted, (Part::Formula, all))?;
    page.text(row, PER, &conversion.per, Part::Text)?;
    link(page, plan, row, conversion.factor)?;
    by_gas(page, plan, row, planned, conversion.factor)
}

/// What an amount of zero would be multiplied with.
fn heating(plan: &Plan, conversion: &Conversion) -> f64 {
    conversion.sign
        * match conversion.times {
            Times::One => 1.0,
            Times::NetPerGross(ratio) => ratio,
            Times::HeatingValue(row) => plan.factors.heating_value(row) * 1e6,
            Times::DensityAndHeatingValue(row) => {
                plan.factors.heating_value(row) * plan.factors.kg_per_m3(row) * 1e6
            }
        }
}

fn by_gas(page: &mut Page, plan: &Plan, row: u32, planned: &Row, factor: usize) -> Result<(), XlsxError> {
    for (gas, kg) in planned.gases.entries() {
        let formula = format!("={}*{}", cell(row, CONVERTED), plan.factors.gas(factor, gas));
        page.formula(
            row,
            gas_column(GASES, gas),
            &formula,
            kg,
            (Part::Formula, Digits::All),
        )?;
    }
    Ok(())
}

fn given(page: &mut Page, row: u32, planned: &Row, part: Part) -> Result<(), XlsxError> {
    for (gas, kg) in planned.gases.entries() {
        page.number(row, gas_column(GASES, gas), kg, part, Digits::All)?;
    }
    Ok(())
}

/// Gases of a model: values, but for the parts that count per MJ of fuel grown on an area.
fn modelled(page: &mut Page, plan: &Plan, row: u32, planned: &Row) -> Result<(), XlsxError> {
    given(page, row, planned, Part::Value)?;
    let (Some(j), Some(input)) = (planned.stage, planned.input) else {
        return Ok(());
    };
    if input.per_fuel.is_empty() {
        return Ok(());
    }
    let formula = land(plan, j, input);
    let column = gas_column(GASES, Gas::Co2Land);
    let found = planned.gases[Gas::Co2Land];
    page.formula(row, column, &formula, found, (Part::Formula, Digits::All))
}

/// The CO2 of land of an input whose claim is capped, or whose bonus counts, per MJ of fuel grown.
fn land(plan: &Plan, j: usize, input: &Input) -> String {
    let fuel = on(chain::NAME, plan.chain[j].stage, chain::FUEL);
    let named: f64 = input.per_fuel.iter().map(|part| part.area_ha).sum();
    let area = input.recipe_ha.unwrap_or(0.0).max(named);
    let mut formula = format!("={}", figure(input.gases[Gas::Co2Land]));
    for part in &input.per_fuel {
        let mj = format!("{fuel}*{}/{}", figure(part.area_ha), figure(area));
        if let Some(cap) = part.cap_g_per_mj {
            let (claim, limit) = (figure(part.claim_kg), format!("{}*{mj}/1000", figure(cap)));
            formula.push_str(&format!("+MIN({limit},MAX(-1*{limit},{claim}))-{claim}"));
        }
        if part.add_g_per_mj != 0.0 {
            formula.push_str(&format!("+{}*{mj}/1000", figure(part.add_g_per_mj)));
        }
    }
    formula
}

fn scaled(
    page: &mut Page,
    plan: &Plan,
    row: u32,
    planned: &Row,
    (by, amount, factor): (Scale, f64, usize),
) -> Result<(), XlsxError> {
    let Some(j) = planned.stage else { return Ok(()) };
    let stage = &plan.resolved.stages[j];
    let (formula, unit) = match by {
        Scale::Intakes => {
            let intakes = stage.intakes.iter().enumerate();
            let parts: Vec<String> = intakes
                .filter_map(|(k, intake)| {
                    let document = stage.document.intakes.get(k);
                    let entered = document.is_some_and(|intake| intake.flow.amount.is_some());
                    flows::wet(&intake.flow, entered, plan.chain[j].intake(k))
                })
                .collect();
            (format!("=({})/1000", parts.join("+")), "t")
        }
        Scale::Output => {
            let pure = on(chain::NAME, plan.chain[j].output, chain::DRY);
            (format!("={pure}"), "kg pure ethanol")
        }
    };
    page.formula(row, CONVERTED, &formula, amount, (Part::Formula, Digits::All))?;
    page.text(row, PER, unit, Part::Text)?;
    link(page, plan, row, factor)?;
    by_gas(page, plan, row, planned, factor)
}

fn stated(
    page: &mut Page,
    plan: &Plan,
    row: u32,
    planned: &Row,
    (g_per_mj, lhv): (f64, Option<(f64, f64)>),
) -> Result<(), XlsxError> {
    let Some(j) = planned.stage else { return Ok(()) };
    let all = Digits::All;
    page.number(row, AMOUNT, g_per_mj, Part::Entered, all)?;
    page.text(row, UNIT, "g CO2e/MJ", Part::Text)?;
    let output = plan.chain[j].output;
    let per_kg = match lhv {
        Some((value, size)) => format!("{}*{}/1000000", figure(value), figure(size)),
        None => {
            let share = format!("{}/100", on(chain::NAME, output, chain::STRENGTH));
            flows::ethanol_mj_per_kg(plan.resolved.rules, &share)
        }
    };
    let formula = format!(
        "={}*{}*{per_kg}/1000",
        cell(row, AMOUNT),
        on(chain::NAME, output, chain::DRY)
    );
    let kg = planned.gases[Gas::Co2eUnsplit];
    page.formula(row, CONVERTED, &formula, kg, (Part::Formula, all))?;
    page.text(row, PER, "kg CO2e/recipe", Part::Text)?;
    let column = gas_column(GASES, Gas::Co2eUnsplit);
    page.formula(
        row,
        column,
        &format!("={}", cell(row, CONVERTED)),
        kg,
        (Part::Formula, all),
    )
}

/// From kg per recipe to g CO2e/MJ.
fn carried(page: &mut Page, plan: &Plan, row: u32, planned: &Row) -> Result<(), XlsxError> {
    let formula_of = |digits| (Part::Formula, digits);
    let co2e = planned.gases.co2e(plan.resolved.gwp);
    let gases = format!("{}:{}", cell(row, GASES), cell(row, GASES + 6));
    let formula = format!("=SUMPRODUCT({gases},{})", weights());
    page.formula(row, CO2E, &formula, co2e, formula_of(Digits::All))?;
    let (scale, whole) = match planned.stage {
        Some(j) => {
            let stage = plan.chain[j].stage;
            let formula = format!("={}", on(chain::NAME, stage, chain::CARRIED));
            page.formula(
                row,
                SCALE,
                &formula,
                plan.demand.scale[j],
                formula_of(Digits::Power),
            )?;
            (
                plan.demand.scale[j],
                Some((on(chain::NAME, stage, chain::WHOLE), plan.demand.whole[j])),
            )
        }
        None => {
            page.number(row, SCALE, 1.0, Part::Formula, Digits::Power)?;
            (1.0, None)
        }
    };
    let counts = planned.result.replaced.is_none();
    page.number(
        row,
        COUNTS,
        f64::from(u8::from(counts)),
        Part::Formula,
        Digits::All,
    )?;
    let once = format!("{}*1000*{}", cell(row, CO2E), cell(row, SCALE));
    let net = if counts { co2e * 1000.0 * scale } else { 0.0 };
    let formula = format!("={}*{once}", cell(row, COUNTS));
    page.formula(row, NET, &formula, net, formula_of(Digits::Four))?;
    let (all_one, recipes) = whole.unwrap_or_else(|| (cell(row, SCALE), 1.0));
    let unshared = if counts { co2e * 1000.0 * recipes } else { 0.0 };
    let formula = format!("={}*{}*1000*{all_one}", cell(row, COUNTS), cell(row, CO2E));
    page.formula(row, UNSHARED, &formula, unshared, formula_of(Digits::Four))?;
    let replaced = planned.input.is_none_or(|input| input.replaced.is_some());
    if planned.result.term == crate::core::domain::Term::Eu && !counts && !replaced {
        page.formula(
            row,
            MEMO,
            &format!("={once}"),
            co2e * 1000.0 * scale,
            formula_of(Digits::Four),
        )?;
    }
    Ok(())
}
