//! The calculator of a fermentation: sugars in, ethanol, CO2 and yeast out. Most ethanol by molar masses, two moles a
//! hexose; the rest of the sugar becomes what the request says, and what is left is told.

mod substrate;
#[cfg(test)]
mod tests;

pub use substrate::{Route, Substrate};

use super::alcoholometry::{REFERENCE_C, density};
use super::factors::step;
use super::parameter::Span;
use super::refusal::{Figure, Refusal, span};
use super::still::ETHANOL_G_PER_MOL;
use crate::core::documents::assessment::Step;
use crate::core::units::rounding::{plain, round_half_away};
use substrate::HEXOSE;

/// Molar masses, g/mol.
const CO2: f64 = 44.0095;
const CARBON: f64 = 12.011;

const MOLAR: &str = "molar masses";
const SPLIT: &str = "molar masses: one mole of CO2 per mole of ethanol";
const STRENGTH: &str = "OIML R 22 (1975)";

/// One substrate of a fermentation.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Given {
    /// What it is.
    pub substrate: Substrate,
    /// How much, kg of the dry substance itself.
    pub kg: f64,
    /// Part of it that becomes sugar, %: 100 for sugars.
    pub released_percent: f64,
}

/// What came of the sugar.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Came {
    /// This part of the most that the released sugar can give, %.
    Percent(f64),
    /// This ethanol, kg, as measured.
    EthanolKg(f64),
}

/// What is asked.
#[derive(Clone, Debug, PartialEq)]
pub struct Request {
    /// The substrates.
    pub substrates: Vec<Given>,
    /// Feedstock they came in, kg as received; none where a yield per tonne is not wanted.
    pub feedstock_kg: Option<f64>,
    /// What came of the sugar.
    pub came: Came,
    /// Part of the sugar that made no ethanol and was breathed to CO2, %.
    pub respired_percent: f64,
    /// Part of the sugar that made no ethanol and became yeast, % of its carbon.
    pub yeast_percent: f64,
    /// Carbon of dry yeast, mass %, and where the figure comes from.
    pub yeast_carbon_percent: f64,
    /// Source of the carbon of dry yeast.
    pub yeast_source: String,
}

/// What one substrate gives.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Part {
    /// What was given.
    pub given: Given,
    /// Sugar that ferments, kg.
    pub sugar_kg: f64,
    /// The most ethanol of all of it, kg.
    pub most_kg: f64,
    /// The most ethanol of the part that became sugar, kg.
    pub most_of_released_kg: f64,
}

/// A fermentation worked out.
#[derive(Clone, Debug, PartialEq)]
pub struct Fermentation {
    /// Substrate by substrate.
    pub parts: Vec<Part>,
    /// Sugar that ferments, kg of hexose and pentose.
    pub sugar_kg: f64,
    /// The most ethanol that the substrates can give, kg.
    pub most_kg: f64,
    /// Ethanol made, kg.
    pub ethanol_kg: f64,
    /// Ethanol made, litres at 20 degC.
    pub ethanol_litres: f64,
    /// Of the most that the released sugar can give, %.
    pub efficiency_percent: f64,
    /// Of the most that the substrates can give, hydrolysis counted in, %.
    pub overall_percent: f64,
    /// Ethanol per kg of sugar that ferments, kg/kg.
    pub yield_kg_per_kg: f64,
    /// Litres per tonne of feedstock.
    pub litres_per_tonne: Option<f64>,
    /// CO2 of the sugar split, kg: what a works can capture at most, without the breath.
    pub split_co2_kg: f64,
    /// CO2 of breathing yeast, kg.
    pub respired_co2_kg: f64,
    /// Both, kg.
    pub co2_kg: f64,
    /// Yeast grown, kg of dry matter.
    pub yeast_kg: f64,
    /// Sugar in neither ethanol, CO2 nor yeast, kg: unfermented, or in glycerol and acids.
    pub other_kg: f64,
    /// The arithmetic, step by step.
    pub steps: Vec<Step>,
    /// Figures outside their usual range, in words.
    pub unusual: Vec<String>,
}

/// Part of the most that the sugar can give, %.
const EFFICIENCY: Figure = Figure {
    name: "efficiency_percent",
    unit: "percent",
    hard: span(0.0, 100.0),
    // Starch works 90 to 95, cane works 89 to 92, straw and wood 60 to 75 (general literature, recalled).
    usual: Some(span(60.0, 96.0)),
};
/// Part of a substrate that becomes sugar, %.
const RELEASED: Figure = Figure {
    name: "released_percent",
    unit: "percent",
    hard: span(0.0, 100.0),
    usual: None,
};
/// Part of the spare sugar that is breathed, %.
const RESPIRED: Figure = Figure {
    name: "respired_percent",
    unit: "percent",
    hard: span(0.0, 100.0),
    usual: None,
};
/// Part of the spare sugar that becomes yeast, %.
const YEAST: Figure = Figure {
    name: "yeast_percent",
    unit: "percent",
    hard: span(0.0, 100.0),
    usual: None,
};
/// Amounts of one substance or of the feedstock, kg.
const LARGEST_KG: f64 = 1e12;
const AMOUNT: Span = Span {
    low: 0.0,
    high: LARGEST_KG,
    above: true,
};

/// A refusal of one figure, with the substrate it belongs to.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Refused {
    /// Position in `substrates`; none for a figure of the whole request.
    pub substrate: Option<usize>,
    /// Why.
    pub refusal: Refusal,
}

/// Works a fermentation out.
///
/// # Errors
/// Everything that is not possible, each in words.
pub fn ferment(request: &Request) -> Result<Fermentation, Vec<Refused>> {
    check(request)?;
    let mut steps = Vec::new();
    let parts: Vec<Part> = request
        .substrates
        .iter()
        .map(|given| part(given, &mut steps))
        .collect();
    let sugar: f64 = parts.iter().map(|part| part.sugar_kg).sum();
    let most: f64 = parts.iter().map(|part| part.most_kg).sum();
    let released: f64 = parts.iter().map(|part| part.most_of_released_kg).sum();
    steps.push(step(
        "the most ethanol of the sugar".to_owned(),
        released,
        "kg",
        "",
    ));
    let (ethanol, efficiency) = match request.came {
        Came::Percent(percent) => {
            let ethanol = released * percent / 100.0;
            let text = format!("{} kg x {} %", short(released), plain(percent));
            steps.push(step(text, ethanol, "kg ethanol", ""));
            (ethanol, percent)
        }
        Came::EthanolKg(kg) => {
            let percent = 100.0 * kg / released;
            // What was measured may pass the most by the last digits of the published yields, no more.
            if percent > 100.0 + 1e-3 {
                let detail = format!(
                    "{} kg of ethanol is more than the sugar can give, {} kg.",
                    plain(kg),
                    short(released)
                );
                let remedy = "Check the ethanol, the sugar, and whether each is dry and pure.";
                return Err(vec![Refused {
                    substrate: None,
                    refusal: Refusal::new("ethanol_kg", detail, remedy),
                }]);
            }
            let text = format!("efficiency: {} kg / {} kg", plain(kg), short(released));
            steps.push(step(text, percent, "%", ""));
            (kg, percent)
        }
    };
    let pure = density(1.0, REFERENCE_C);
    let litres = 1000.0 * ethanol / pure;
    let text = format!("{} kg / {} kg/m3 x 1000", short(ethanol), short(pure));
    steps.push(step(text, litres, "L at 20 degC", STRENGTH));
    let litres_per_tonne = request.feedstock_kg.map(|kg| 1000.0 * litres / kg);
    if let (Some(kg), Some(figure)) = (request.feedstock_kg, litres_per_tonne) {
        let text = format!("{} L / {} t of feedstock", short(litres), plain(kg / 1000.0));
        steps.push(step(text, figure, "L/t", ""));
    }
    let split = ethanol * CO2 / ETHANOL_G_PER_MOL;
    let text = format!(
        "{} kg of ethanol x {} / {}",
        short(ethanol),
        plain(CO2),
        plain(ETHANOL_G_PER_MOL)
    );
    steps.push(step(text, split, "kg CO2", SPLIT));
    let spare = (sugar * (1.0 - efficiency / 100.0)).max(0.0);
    steps.push(step(
        format!(
            "sugar that made no ethanol: {} kg x (100 - {}) %",
            short(sugar),
            short(efficiency)
        ),
        spare,
        "kg",
        "",
    ));
    let respired = breathed(request, spare, &mut steps);
    let yeast = yeast(request, spare, &mut steps);
    let other = spare * (100.0 - request.respired_percent - request.yeast_percent).max(0.0) / 100.0;
    steps.push(step("in none of these".to_owned(), other, "kg sugar", ""));
    let unusual = EFFICIENCY.unusual(efficiency).into_iter().collect();
    Ok(Fermentation {
        parts,
        sugar_kg: sugar,
        most_kg: most,
        ethanol_kg: ethanol,
        ethanol_litres: litres,
        efficiency_percent: efficiency,
        overall_percent: 100.0 * ethanol / most,
        yield_kg_per_kg: ethanol / sugar,
        litres_per_tonne,
        split_co2_kg: split,
        respired_co2_kg: respired,
        co2_kg: split + respired,
        yeast_kg: yeast,
        other_kg: other,
        steps,
        unusual,
    })
}

fn part(given: &Given, steps: &mut Vec<Step>) -> Part {
    let Given {
        substrate,
        kg,
        released_percent,
    } = *given;
    let released = kg * released_percent / 100.0;
    let name = substrate.name();
    if released_percent < 100.0 {
        let text = format!(
            "{} kg of {name} x {} % become sugar",
            plain(kg),
            plain(released_percent)
        );
        steps.push(step(text, released, "kg", ""));
    }
    let text = format!(
        "{name}: {} kg x {} kg of sugar per kg",
        short(released),
        short(substrate.gain())
    );
    steps.push(step(text, released * substrate.gain(), "kg sugar", MOLAR));
    let text = format!(
        "{name}: {} kg x {} kg/kg",
        short(released),
        plain(substrate.most())
    );
    let source = format!("{MOLAR}: {}", substrate.equation());
    steps.push(step(
        text,
        released * substrate.most(),
        "kg ethanol at most",
        &source,
    ));
    Part {
        given: *given,
        sugar_kg: released * substrate.gain(),
        most_kg: kg * substrate.most(),
        most_of_released_kg: released * substrate.most(),
    }
}

/// Six moles of CO2 per mole of hexose; a pentose gives the same per kg.
fn breathed(request: &Request, spare: f64, steps: &mut Vec<Step>) -> f64 {
    if request.respired_percent <= 0.0 {
        return 0.0;
    }
    let co2 = spare * request.respired_percent / 100.0 * 6.0 * CO2 / HEXOSE;
    let text = format!(
        "breathed: {} kg x {} % x 6 x {} / {}",
        short(spare),
        plain(request.respired_percent),
        plain(CO2),
        plain(HEXOSE)
    );
    steps.push(step(
        text,
        co2,
        "kg CO2",
        "molar masses: six moles of CO2 per mole of hexose",
    ));
    co2
}

/// Carbon of the sugar over carbon of dry yeast.
fn yeast(request: &Request, spare: f64, steps: &mut Vec<Step>) -> f64 {
    if request.yeast_percent <= 0.0 {
        return 0.0;
    }
    let carbon = spare * request.yeast_percent / 100.0 * 6.0 * CARBON / HEXOSE;
    let text = format!(
        "carbon of the yeast: {} kg x {} % x 6 x {} / {}",
        short(spare),
        plain(request.yeast_percent),
        plain(CARBON),
        plain(HEXOSE)
    );
    steps.push(step(text, carbon, "kg C", MOLAR));
    let yeast = 100.0 * carbon / request.yeast_carbon_percent;
    let text = format!(
        "{} kg C / {} % carbon in dry yeast",
        short(carbon),
        plain(request.yeast_carbon_percent)
    );
    steps.push(step(text, yeast, "kg yeast, dry", &request.yeast_source));
    yeast
}

fn check(request: &Request) -> Result<(), Vec<Refused>> {
    let mut refused = Vec::new();
    let mut note = |substrate: Option<usize>, found: Vec<Refusal>| {
        refused.extend(found.into_iter().map(|refusal| Refused { substrate, refusal }));
    };
    if request.substrates.is_empty() {
        let remedy = "Give at least one, with its kilograms.";
        note(
            None,
            vec![Refusal::new("substrates", "No substrate is given.", remedy)],
        );
    }
    let amount = |name, figure, found: &mut Vec<Refusal>| {
        let hard = Figure {
            name,
            unit: "kg",
            hard: AMOUNT,
            usual: None,
        };
        hard.check(figure, found);
    };
    for (index, given) in request.substrates.iter().enumerate() {
        let mut found = Vec::new();
        amount("kg", given.kg, &mut found);
        RELEASED.check(given.released_percent, &mut found);
        if found.is_empty() && given.released_percent <= 0.0 {
            let detail = "Nothing of it becomes sugar.";
            found.push(Refusal::new(
                "released_percent",
                detail,
                "Give more than 0, or take the substrate out.",
            ));
        }
        if given.substrate.route() == Route::Sugar && given.released_percent < 100.0 {
            let detail = format!("{} is sugar already.", given.substrate.name());
            found.push(Refusal::new(
                "released_percent",
                detail,
                "Leave it out: the efficiency tells what ferments.",
            ));
        }
        note(Some(index), found);
    }
    let mut found = Vec::new();
    if let Some(kg) = request.feedstock_kg {
        amount("feedstock_kg", kg, &mut found);
        let dry: f64 = request.substrates.iter().map(|given| given.kg).sum();
        if found.is_empty() && dry > kg {
            let detail = format!(
                "{} kg of feedstock cannot hold {} kg of dry substance.",
                plain(kg),
                plain(dry)
            );
            found.push(Refusal::new(
                "feedstock_kg",
                detail,
                "Give the feedstock as received.",
            ));
        }
    }
    match request.came {
        Came::Percent(percent) => EFFICIENCY.check(percent, &mut found),
        Came::EthanolKg(kg) => amount("ethanol_kg", kg, &mut found),
    }
    RESPIRED.check(request.respired_percent, &mut found);
    YEAST.check(request.yeast_percent, &mut found);
    if request.respired_percent + request.yeast_percent > 100.0 {
        let detail = "More of the sugar is breathed and made into yeast than there is.";
        found.push(Refusal::new(
            "yeast_percent",
            detail,
            "Give both together at most 100 %.",
        ));
    }
    note(None, found);
    if refused.is_empty() { Ok(()) } else { Err(refused) }
}

/// A figure inside a text: four decimals at most.
fn short(x: f64) -> String {
    plain(round_half_away(x, 4))
}
