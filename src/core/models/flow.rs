//! A flow as measured: wet and dry mass, pure ethanol, energy, area, from the figures a person entered.

use super::alcoholometry;
use crate::core::documents::pathway::Flow;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::RuleSet;
use crate::core::units::rounding::plain;
use crate::core::units::{Dimension, UnitError, parse_unit};

/// Id of the built-in material that is the fuel.
pub const ETHANOL: &str = "ethanol";
/// Id of the built-in material heat.
pub const HEAT: &str = "heat";
/// Id of the built-in material power.
pub const POWER: &str = "power";

/// A flow in base units. What does not apply is absent.
#[derive(Clone, Debug, PartialEq)]
pub struct Measured {
    /// Material id.
    pub material: String,
    /// Dimension as entered; tags of heat and power taken off.
    pub dimension: Dimension,
    /// Amount as entered, in SI base units.
    pub base: f64,
    /// Mass with its water, kg.
    pub wet_kg: Option<f64>,
    /// Water, fraction of the wet mass, as given.
    pub moisture: Option<f64>,
    /// Pure ethanol, kg.
    pub pure_kg: Option<f64>,
    /// Ethanol mass fraction; 1 where none is given.
    pub strength: Option<f64>,
    /// True if the strength was given.
    pub strength_given: bool,
    /// Temperature as given, degC.
    pub celsius: Option<f64>,
}

impl Measured {
    /// True if the flow is ethanol.
    pub fn is_ethanol(&self) -> bool {
        self.material == ETHANOL
    }

    /// True if the flow is heat or power.
    pub fn is_heat_or_power(&self) -> bool {
        self.material == HEAT || self.material == POWER
    }

    /// Mass without water, kg; a flow without a moisture counts as dry.
    pub fn dry_kg(&self) -> Option<f64> {
        self.wet_kg.map(|wet| wet * (1.0 - self.moisture.unwrap_or(0.0)))
    }

    /// Gives ethanol entered as energy its strength (mass fraction), and with it its pure and wet mass.
    ///
    /// Ethanol whose water takes more heat than it holds is noted as a problem.
    pub fn take_strength(&mut self, strength: f64, rules: &RuleSet, at: &Place, problems: &mut Problems) {
        self.strength = Some(strength);
        let per_kg = rules.ethanol_mj_per_kg(strength);
        if per_kg <= 0.0 {
            no_heat(strength, rules, at, problems);
            return;
        }
        let pure = self.base / 1e6 / per_kg;
        self.pure_kg = Some(pure);
        self.wet_kg = Some(pure / strength);
    }

    /// Energy, J, where the flow was entered as energy.
    pub fn energy_j(&self) -> Option<f64> {
        (self.dimension == Dimension::ENERGY).then_some(self.base)
    }

    /// Area, m2, where the flow was entered as area.
    pub fn area_m2(&self) -> Option<f64> {
        (self.dimension == Dimension::AREA).then_some(self.base)
    }
}

/// Notes that ethanol of a strength (mass fraction) holds no heat under a rule set that counts its water.
pub fn no_heat(strength: f64, rules: &RuleSet, at: &Place, problems: &mut Problems) {
    let detail = format!(
        "Ethanol of {} % mass holds no heat under {}: its water takes more than it gives.",
        plain(100.0 * strength),
        rules.id
    );
    problems.add(
        at.field("strength_percent_mass"),
        detail,
        "Check the strength: fuel ethanol has more than 90 %.",
    );
}

/// Detail and remedy of a unit error.
pub fn unit_words(error: &UnitError) -> (String, String) {
    match error {
        UnitError::Unknown { unit, suggestion } => (
            format!("\"{unit}\" is not a known unit."),
            match suggestion {
                Some(text) => format!("Write {text}."),
                None => "Units look like kg, t, MJ, kWh power, m3, t km or kg N.".to_owned(),
            },
        ),
        UnitError::Mismatch {
            found,
            found_is,
            expected,
            examples,
        } => (
            format!("{found} is {found_is}, but {expected} is wanted here."),
            format!("Give it in {examples}."),
        ),
        UnitError::NotFinite => (
            "The figure is not a finite number in this unit.".to_owned(),
            "Give a figure of ordinary size.".to_owned(),
        ),
    }
}

/// Notes a unit error at the unit of the thing at `at`.
pub fn note_unit_error(error: &UnitError, at: &Place, problems: &mut Problems) {
    let (detail, remedy) = unit_words(error);
    problems.add(at.field("unit"), detail, remedy);
}

/// Measures a flow with its amount present.
///
/// Everything that is wrong with it is noted; `None` if it cannot be measured.
pub fn measure(
    flow: &Flow,
    material: &str,
    rules: &RuleSet,
    at: &Place,
    problems: &mut Problems,
) -> Option<Measured> {
    let before = problems.len();
    let (Some(amount), Some(unit)) = (flow.amount, flow.unit.as_deref()) else {
        let absent = if flow.amount.is_none() { "amount" } else { "unit" };
        problems.add(
            at.field(absent),
            format!("\"{absent}\" is missing."),
            format!("Add \"{absent}\"."),
        );
        return None;
    };
    if amount <= 0.0 {
        let detail = format!("An amount of {amount} {unit} makes nothing.");
        problems.add(at.field("amount"), detail, "Give an amount above zero.");
    }
    let unit = match parse_unit(unit) {
        Ok(unit) => unit,
        Err(error) => {
            note_unit_error(&error, at, problems);
            return None;
        }
    };
    let base = match unit.to_base(amount) {
        Ok(base) => base,
        Err(error) => {
            note_unit_error(&error, at, problems);
            return None;
        }
    };
    let dimension = match (material, unit.dimension) {
        (HEAT, Dimension::HEAT) | (POWER, Dimension::POWER) => Dimension::ENERGY,
        (_, Dimension::ENERGY_NET) if !matches!(material, HEAT | POWER) => Dimension::ENERGY,
        (_, other) => other,
    };
    check_dimension(material, dimension, &unit.symbol, at, problems);
    let mut measured = Measured {
        material: material.to_owned(),
        dimension,
        base,
        wet_kg: (dimension == Dimension::MASS).then_some(base),
        moisture: moisture(flow, dimension, at, problems),
        pure_kg: None,
        strength: None,
        strength_given: flow.strength_percent_mass.is_some() || flow.strength_percent_vol.is_some(),
        celsius: temperature(flow, at, problems),
    };
    if material == ETHANOL {
        ethanol(flow, rules, at, problems, &mut measured);
    } else if measured.strength_given {
        let name = if flow.strength_percent_mass.is_some() {
            "strength_percent_mass"
        } else {
            "strength_percent_vol"
        };
        let detail = format!("Only ethanol has a strength, this is {material}.");
        problems.add(
            at.field(name),
            detail,
            "Take it out, or set the material to ethanol.",
        );
    }
    (problems.len() == before).then_some(measured)
}

fn check_dimension(material: &str, dimension: Dimension, unit: &str, at: &Place, problems: &mut Problems) {
    let fits = match material {
        HEAT | POWER => dimension == Dimension::ENERGY,
        ETHANOL => [Dimension::MASS, Dimension::VOLUME, Dimension::ENERGY].contains(&dimension),
        _ => [
            Dimension::MASS,
            Dimension::VOLUME,
            Dimension::ENERGY,
            Dimension::AREA,
        ]
        .contains(&dimension),
    };
    if !fits {
        let (wanted, examples) = match material {
            HEAT => ("heat", "MJ heat, GJ or MWh"),
            POWER => ("power", "kWh power, MWh or GJ"),
            ETHANOL => ("ethanol", "t, kg, m3, L or MJ"),
            _ => ("a product", "t, kg, m3, L or MJ"),
        };
        let detail = format!(
            "{unit} is {}, but {wanted} is measured otherwise.",
            dimension.describe()
        );
        problems.add(at.field("unit"), detail, format!("Give it in {examples}."));
    }
}

fn moisture(flow: &Flow, dimension: Dimension, at: &Place, problems: &mut Problems) -> Option<f64> {
    let percent = flow.moisture_percent?;
    let place = at.field("moisture_percent");
    if !(0.0..100.0).contains(&percent) {
        let detail = format!("A moisture of {percent} % leaves no dry matter or is no moisture.");
        problems.add(
            place,
            detail,
            "Give the water in % of the wet mass, from 0 to below 100.",
        );
        return None;
    }
    if dimension != Dimension::MASS {
        problems.add(
            place,
            "Only a mass has a moisture.",
            "Give the amount as a mass, or take the moisture out.",
        );
        return None;
    }
    Some(percent / 100.0)
}

fn temperature(flow: &Flow, at: &Place, problems: &mut Problems) -> Option<f64> {
    let celsius = flow.temperature_c?;
    if !(-50.0..=1_000.0).contains(&celsius) {
        let detail = format!("{celsius} degC is not a temperature of a flow.");
        problems.add(at.field("temperature_c"), detail, "Give degrees Celsius.");
        return None;
    }
    Some(celsius)
}

fn ethanol(flow: &Flow, rules: &RuleSet, at: &Place, problems: &mut Problems, measured: &mut Measured) {
    if flow.moisture_percent.is_some() {
        let remedy = "Give strength_percent_mass or strength_percent_vol instead.";
        problems.add(
            at.field("moisture_percent"),
            "Ethanol has a strength, not a moisture.",
            remedy,
        );
    }
    if flow.lhv.is_some() {
        let remedy = "Take it out: the rule set fixes the heating value of ethanol.";
        problems.add(
            at.field("lhv"),
            "Ethanol takes no heating value of its own.",
            remedy,
        );
    }
    let strength = match (flow.strength_percent_mass, flow.strength_percent_vol) {
        (Some(_), Some(_)) => {
            let detail = "The strength is given twice, by mass and by volume.";
            problems.add(at.field("strength_percent_vol"), detail, "Keep one of the two.");
            return;
        }
        (Some(percent), None) => percent_of("strength_percent_mass", percent, at, problems),
        (None, Some(percent)) => {
            percent_of("strength_percent_vol", percent, at, problems).map(alcoholometry::mass_fraction)
        }
        (None, None) => Some(1.0),
    };
    let Some(strength) = strength else { return };
    measured.strength = Some(strength);
    match measured.dimension {
        Dimension::MASS => measured.pure_kg = Some(measured.base * strength),
        Dimension::ENERGY => measured.take_strength(strength, rules, at, problems),
        Dimension::VOLUME => {
            let Some(celsius) = flow.temperature_c else {
                let remedy = "Add temperature_c, the temperature it was read at, such as 15 or 20.";
                problems.add(
                    at.field("temperature_c"),
                    "A volume of ethanol has no temperature.",
                    remedy,
                );
                return;
            };
            let (low, high) = alcoholometry::TEMPERATURE_RANGE_C;
            if !(low..=high).contains(&celsius) {
                let detail =
                    format!("{celsius} degC is outside {low} to {high} degC, the range of OIML R 22.");
                problems.add(
                    at.field("temperature_c"),
                    detail,
                    "Give the volume at a temperature in the range.",
                );
                return;
            }
            let mass = measured.base * alcoholometry::density(strength, celsius);
            measured.wet_kg = Some(mass);
            measured.pure_kg = Some(mass * strength);
        }
        _ => {}
    }
}

fn percent_of(name: &'static str, percent: f64, at: &Place, problems: &mut Problems) -> Option<f64> {
    if percent > 0.0 && percent <= 100.0 {
        return Some(percent / 100.0);
    }
    let detail = format!("A strength of {percent} % is not possible.");
    problems.add(
        at.field(name),
        detail,
        "Give a strength above 0 and at most 100 %.",
    );
    None
}
