//! Group C: matter and energy through the fence of a works. What a document cannot tell widens the balance on the safe
//! side, so that a finding is a contradiction and not a gap in our knowledge.

use super::parameters::{energy_mj, models};
use super::settings::Settings;
use super::works::{self, Works};
use super::{Subject, finding};
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::input::{FactorRef, Input, OneOrMany};
use crate::core::documents::pathway::Stage;
use crate::core::domain::Gas;
use crate::core::engine::carbon::{CO2_PER_C, FERMENTATION_CO2_PER_ETHANOL};
use crate::core::engine::demand::{Demand, demand};
use crate::core::engine::resolved::{Input as Priced, Product};
use crate::core::models::flow::Measured;
use crate::core::units::rounding::plain_fixed;
use crate::core::units::{Dimension, Quantity};

/// Water that a sugar takes up before it ferments, kg per kg of ethanol made, from molar masses (H2O 18.015, ethanol 46.068).
const WATER: [(&str, f64, f64); 3] = [
    ("starch", 18.015 / (2.0 * 46.068), 18.015 / (2.0 * 46.068)),
    ("sucrose", 18.015 / (4.0 * 46.068), 18.015 / (4.0 * 46.068)),
    (
        "xylan",
        3.0 * 18.015 / (5.0 * 46.068),
        3.0 * 18.015 / (5.0 * 46.068),
    ),
];
/// The same where the sugar is not known, or may have been cellulose before: from none to that of xylan.
const WATER_UNKNOWN: (f64, f64) = (0.0, 3.0 * 18.015 / (5.0 * 46.068));
/// No fuel or chemical of a works holds more, MJ/kg; used where a document gives a mass without a heating value.
const MOST_MJ_PER_KG: f64 = 50.0;
/// The same per volume of liquid, MJ/m3.
const MOST_MJ_PER_M3: f64 = 50_000.0;
/// Rounding that a sum of doubles may bring.
const SUM: f64 = 1e-9;

/// Runs the checks.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    let resolved = subject.resolved;
    let demand = demand(resolved);
    for works in works::find(resolved, works::handles_matter) {
        if let (Some(head), Some(matter)) = (works.head(resolved), matter(subject, &works, &demand)) {
            findings.extend(dry_matter(head.document, &matter, subject.settings));
        }
    }
    for works in works::find(resolved, works::with_boiler_house) {
        if let (Some(head), Some((into, out))) = (works.head(resolved), energy(subject, &works, &demand)) {
            findings.extend(energy_out(head.document, into, out));
        }
    }
}

/// Dry matter through the fence, each side between two bounds, in one and the same unit.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Matter {
    /// What comes in, without the water that sugars take up.
    pub crop: f64,
    /// Least and most that comes in, with that water.
    pub into: (f64, f64),
    /// Least and most that goes out.
    pub out: (f64, f64),
}

/// C-04: dry matter in equals out.
pub fn dry_matter(stage: &Stage, matter: &Matter, settings: &Settings) -> Option<Finding> {
    let missing = matter.into.0 - matter.out.1;
    let excess = matter.out.0 - matter.into.1;
    let percent = 100.0 * missing.max(excess) / matter.crop;
    if percent <= settings.dry_matter_percent {
        return None;
    }
    let (name, shown) = (stage.title(), plain_fixed(percent, 1));
    let message = match excess > missing {
        true => format!("{name} gives {shown} % more dry matter than it takes."),
        false => format!("{shown} % of the dry matter of {name} is unaccounted for."),
    };
    let remedy = "Check moistures and enter missing losses or co-products, or give the reason.";
    Some(finding(
        "C-04",
        Severity::Warn,
        &stage.key,
        "co_products",
        message,
        remedy,
    ))
}

/// The dry matter of a works; none where an amount is no mass or the crop has no moisture.
fn matter(subject: &Subject, works: &Works, demand: &Demand) -> Option<Matter> {
    let resolved = subject.resolved;
    let mut matter = Matter::default();
    for (flow, times) in works.incoming(resolved, demand) {
        if flow.is_heat_or_power() {
            continue;
        }
        let kg = match flow.pure_kg {
            Some(pure) => pure,
            None => flow.dry_kg().filter(|_| flow.moisture.is_some())?,
        };
        matter.crop += kg * times;
    }
    for (_, _, product, times) in works.leaving(resolved, demand) {
        if product.flow.is_heat_or_power() {
            continue;
        }
        matter.out.0 += product.flow.pure_kg.or(product.flow.dry_kg())? * times;
    }
    let (mut water, mut burnt) = ((0.0, 0.0), 0.0);
    for &j in &works.stages {
        let (stage, times) = (&resolved.stages[j], demand.whole[j]);
        let split = stage.inputs.iter().filter_map(|input| input.fermentation_kg);
        let modelled: f64 = split.clone().sum();
        let made: f64 = stage.products.iter().filter_map(|p| p.flow.pure_kg).sum();
        if split.count() > 0 {
            matter.out.0 += modelled * times;
        } else if works::makes_ethanol(stage) {
            matter.out.0 += made * FERMENTATION_CO2_PER_ETHANOL * times;
        }
        if works::makes_ethanol(stage) {
            let (low, high) = sugar_water(stage.document);
            water = (water.0 + low * made * times, water.1 + high * made * times);
        }
        let others = stage
            .inputs
            .iter()
            .filter(|input| input.fermentation_kg.is_none());
        burnt += others.map(|input| input.biogenic_kg).sum::<f64>() * times;
    }
    matter.into = (matter.crop + water.0, matter.crop + water.1);
    // Biogenic CO2 of a fuel may come from the crop itself (lignin, biogas) or be bought: from none to all of it.
    let most_burnt = burnt / CO2_PER_C / (subject.settings.least_carbon_percent / 100.0);
    matter.out.1 = matter.out.0 + most_burnt;
    (matter.crop > 0.0).then_some(matter)
}

fn sugar_water(stage: &Stage) -> (f64, f64) {
    let said = stage
        .inputs
        .iter()
        .flat_map(models)
        .find(|model| model.kind == "fermentation_co2");
    let sugar = said.and_then(|model| super::parameters::word(model, "sugar"));
    let row = sugar.and_then(|sugar| WATER.iter().find(|(name, ..)| *name == sugar));
    row.map_or(WATER_UNKNOWN, |(_, low, high)| (*low, *high))
}

/// C-06: no more energy leaves a works than enters it; both in MJ per MJ of fuel.
pub fn energy_out(stage: &Stage, into: f64, out: f64) -> Option<Finding> {
    if !(into > 0.0 && out > into * (1.0 + SUM)) {
        return None;
    }
    let message = format!(
        "{} reports more energy leaving ({} MJ per MJ of fuel) than entering ({} MJ at most).",
        stage.title(),
        plain_fixed(out, 3),
        plain_fixed(into, 3)
    );
    let remedy = "Check units and gross or net heating values.";
    Some(finding(
        "C-06",
        Severity::Block,
        &stage.key,
        "output",
        message,
        remedy,
    ))
}

/// Energy through the fence, MJ per MJ of fuel: the most that enters and the least that leaves. None where something
/// that enters cannot be told.
fn energy(subject: &Subject, works: &Works, demand: &Demand) -> Option<(f64, f64)> {
    let resolved = subject.resolved;
    let mut into = 0.0;
    for (flow, times) in works.incoming(resolved, demand) {
        into += held(subject, flow)? * times;
    }
    let mut out = 0.0;
    for &j in &works.stages {
        let stage = &resolved.stages[j];
        for (input, priced) in stage.document.inputs.iter().zip(&stage.inputs) {
            into += brought(subject, input, priced)? * demand.whole[j];
            out += sold(input) * demand.whole[j];
        }
    }
    for (j, index, product, times) in works.leaving(resolved, demand) {
        let document = &resolved.stages[j].document;
        let flow = match index {
            0 => &document.output.flow,
            _ => &document.co_products.get(index - 1)?.flow,
        };
        let entered = flow.lhv.as_ref().and_then(|lhv| {
            let per_kg =
                Quantity::read_as(lhv.value, &lhv.unit, Dimension::ENERGY.per(Dimension::MASS)).ok()?;
            Some(per_kg / 1e6 * product.flow.wet_kg?)
        });
        out += entered.unwrap_or_else(|| leaves(subject, product)) * times;
    }
    Some((into, out))
}

/// Energy that a flow brings, MJ: dry matter by its lower heating value.
fn held(subject: &Subject, flow: &Measured) -> Option<f64> {
    if let Some(pure) = flow.pure_kg {
        return Some(
            subject
                .resolved
                .rules
                .ethanol_mj(pure, flow.strength.unwrap_or(1.0)),
        );
    }
    let by_energy = flow.energy_j().map(|joules| joules / 1e6);
    by_energy.or_else(|| Some(flow.dry_kg()? * subject.resolved.lhv_dry(&flow.material)?))
}

/// Energy that a product takes along, MJ; what cannot be told takes none. The water in it costs its evaporation.
fn leaves(subject: &Subject, product: &Product) -> f64 {
    let flow = &product.flow;
    let water = match (flow.wet_kg, flow.dry_kg(), flow.is_ethanol()) {
        (Some(wet), Some(dry), false) => (wet - dry) * subject.resolved.rules.water_evaporation.value,
        _ => 0.0,
    };
    held(subject, flow).map_or(0.0, |mj| (mj - water).max(0.0))
}

/// Power of a heat and power plant that leaves the works, MJ.
fn sold(input: &Input) -> f64 {
    let plants = models(input).iter().filter(|model| model.kind == "chp");
    plants
        .map(|model| {
            let left = |made: &str, used: &str| match (energy_mj(model, made), energy_mj(model, used)) {
                (Some(made), Some(used)) => (made - used).max(0.0),
                _ => 0.0,
            };
            left("heat_made", "heat_used") + left("power_made", "power_used")
        })
        .sum()
}

/// The most energy that an input may bring, MJ per recipe; none where it cannot be told.
fn brought(subject: &Subject, input: &Input, priced: &Priced) -> Option<f64> {
    if !models(input).is_empty() {
        let burns = ["boiler", "chp", "distillation", "dehydration", "dryer"];
        let mut sum = 0.0;
        for model in models(input)
            .iter()
            .filter(|model| burns.contains(&model.kind.as_str()))
        {
            let known = ["fuel_used", "heat"]
                .into_iter()
                .filter_map(|name| energy_mj(model, name));
            sum += known.sum::<f64>();
        }
        let fuel = priced.steps.iter().filter(|step| step.unit == "MJ of fuel");
        sum += fuel.map(|step| step.value).sum::<f64>();
        let untold = sum == 0.0
            && models(input)
                .iter()
                .any(|model| burns.contains(&model.kind.as_str()));
        return (!untold).then_some(sum);
    }
    if let Some(gases) = &input.gases {
        let burnt = [Gas::Co2Fossil, Gas::Co2Biogenic, Gas::Co2eUnsplit];
        return burnt.iter().all(|gas| gases[*gas] == 0.0).then_some(0.0);
    }
    let (Some(amount), Some(unit)) = (input.amount, input.unit.as_deref()) else {
        return Some(0.0);
    };
    let read = Quantity::read(amount, unit).ok()?;
    if Dimension::ENERGIES.contains(&read.dimension) {
        return Some(read.value / 1e6);
    }
    let rows = input.factor.as_ref().map(OneOrMany::list).unwrap_or_default();
    let printed = rows.iter().find_map(|row| match row {
        FactorRef::Id(id) => subject.book.factor(id)?.lhv_mj_per_kg,
        FactorRef::Inline(_) => None,
    });
    Some(match read.dimension {
        Dimension::MASS => read.value * printed.unwrap_or(MOST_MJ_PER_KG),
        Dimension::VOLUME => read.value * MOST_MJ_PER_M3,
        _ => 0.0,
    })
}

#[cfg(test)]
mod tests {
    use super::super::tests::stage;
    use super::*;

    #[test]
    fn dry_matter_closes_between_its_bounds() {
        let (stage, settings) = (stage(), Settings::default());
        let check = |into, out| {
            dry_matter(
                &stage,
                &Matter {
                    crop: 100.0,
                    into,
                    out,
                },
                &settings,
            )
        };
        assert_eq!(check((100.0, 100.0), (100.0, 100.0)), None);
        assert_eq!(check((100.0, 100.0), (95.0, 95.0)), None);
        let missing = check((100.0, 107.0), (80.0, 92.0)).unwrap();
        assert!(missing.message.starts_with("8.0 %"), "{}", missing.message);
        // What may have been burnt widens the balance.
        assert_eq!(check((100.0, 107.0), (50.0, 99.0)), None);
        assert!(
            check((100.0, 107.0), (113.0, 120.0))
                .unwrap()
                .message
                .contains("more dry matter than it takes")
        );
    }

    #[test]
    fn no_more_energy_leaves_than_enters() {
        let stage = stage();
        assert_eq!(energy_out(&stage, 2.0, 2.0), None);
        assert_eq!(energy_out(&stage, 2.0, 2.1).unwrap().severity, Severity::Block);
        assert_eq!(energy_out(&stage, 0.0, 1.0), None);
    }
}
