//! What a product weighs in sharing: energy, exergy, dry mass or value.

use crate::core::documents::assessment::Step;
use crate::core::documents::pathway::Flow;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::RuleSet;
use crate::core::engine::materials::Materials;
use crate::core::models::factors::step;
use crate::core::models::flow::{HEAT, Measured, note_unit_error};
use crate::core::units::rounding::plain;
use crate::core::units::{Currency, Dimension, Quantity, parse_unit};

/// A product about to be weighed.
pub(super) struct Scene<'s> {
    pub flow: &'s Flow,
    pub rules: &'s RuleSet,
    pub materials: &'s Materials<'s>,
    /// Strength of the fuel at the wheel, mass fraction.
    pub wheel_strength: Option<f64>,
    pub at: &'s Place<'s>,
    pub is_output: bool,
    pub name: &'s str,
}

/// Energy of a product, MJ: ethanol by its pure mass, an intermediate by its dry matter, a co-product as it leaves.
pub(super) fn energy(
    measured: &Measured,
    scene: &Scene,
    problems: &mut Problems,
    steps: &mut Vec<Step>,
) -> Option<f64> {
    let Scene {
        flow,
        rules,
        materials,
        wheel_strength,
        at,
        is_output,
        name,
    } = scene;
    if let Some(pure) = measured.pure_kg {
        let own = measured.strength.unwrap_or(1.0);
        // Water that a later stage takes out is not counted, as with any main product that is not yet fuel.
        let strength = if *is_output {
            own.max(wheel_strength.unwrap_or(own))
        } else {
            own
        };
        let mj = rules.ethanol_mj(pure, strength).max(0.0);
        steps.push(step(
            format!(
                "{name}: {} kg pure ethanol x {}",
                plain(pure),
                rules.ethanol_words(strength)
            ),
            mj,
            "MJ",
            &rules.ethanol_lhv.source,
        ));
        return Some(mj);
    }
    if let Some(joules) = measured.energy_j() {
        return Some(joules / 1e6);
    }
    if let Some(own) = &flow.lhv {
        let unit = match parse_unit(&own.unit) {
            Ok(unit) => unit,
            Err(error) => {
                note_unit_error(&error, &at.field("lhv"), problems);
                return None;
            }
        };
        let value = unit.to_base(own.value).ok()? / 1e6;
        let per_mass = Dimension::ENERGY.per(Dimension::MASS);
        let per_volume = Dimension::ENERGY.per(Dimension::VOLUME);
        let mj = match (unit.dimension, measured.dimension) {
            (found, Dimension::MASS) if found == per_mass => measured.base * value,
            (found, Dimension::VOLUME) if found == per_volume => measured.base * value,
            (found, wanted) => {
                let words = wanted.describe();
                let detail = format!("{} is {}, but the amount is {words}.", own.unit, found.describe());
                problems.add(
                    at.field("lhv").field("unit"),
                    detail,
                    "Give MJ/kg for a mass or MJ/L for a volume.",
                );
                return None;
            }
        };
        let text = format!(
            "{name}: {} {} at {} {}",
            plain(flow.amount?),
            flow.unit.as_deref()?,
            plain(own.value),
            own.unit
        );
        steps.push(step(
            text,
            mj.max(0.0),
            "MJ",
            "heating value as entered, as it leaves",
        ));
        return Some(mj.max(0.0));
    }
    let (Some(wet), Some((lhv, source))) = (measured.wet_kg, materials.lhv_dry(&measured.material)) else {
        let detail = match measured.wet_kg {
            None => format!(
                "The {} is not given as a mass, so its energy is not known.",
                measured.material
            ),
            Some(_) => format!("No heating value of \"{}\" is known.", measured.material),
        };
        problems.add(
            at.field("lhv"),
            detail,
            "Add \"lhv\" to the flow (as it leaves), or \"lhv_dry\" to the material.",
        );
        return None;
    };
    let moisture = measured.moisture.unwrap_or(0.0);
    let water = rules.water_evaporation.value;
    if *is_output {
        let dry = wet * (1.0 - moisture);
        let mj = dry * lhv;
        steps.push(step(
            format!("{name}: {} kg dry x {} MJ/kg", plain(dry), plain(lhv)),
            mj,
            "MJ",
            &source,
        ));
        return Some(mj);
    }
    let as_it_leaves = (lhv * (1.0 - moisture) - water * moisture).max(0.0);
    steps.push(step(
        format!(
            "{name}, as it leaves: {} x (1 - {}) - {} x {}, at least 0",
            plain(lhv),
            plain(moisture),
            plain(water),
            plain(moisture)
        ),
        as_it_leaves,
        "MJ/kg",
        &source,
    ));
    let mj = wet * as_it_leaves;
    steps.push(step(
        format!("{name}: {} kg x {} MJ/kg", plain(wet), plain(as_it_leaves)),
        mj,
        "MJ",
        "",
    ));
    Some(mj)
}

/// Exergy of heat or power, MJ: heat by its Carnot factor, power by 1 (Annex V Part C points 1(b) and 16).
pub(super) fn exergy(
    measured: &Measured,
    scene: &Scene,
    problems: &mut Problems,
    steps: &mut Vec<Step>,
) -> Option<f64> {
    let Scene {
        flow,
        rules,
        at,
        name,
        ..
    } = scene;
    let Some(joules) = measured.energy_j() else {
        let detail = format!(
            "The {} has no exergy here: it is neither heat nor power.",
            measured.material
        );
        problems.add(
            at.field("material"),
            detail,
            "Share by energy, or leave the method out.",
        );
        return None;
    };
    let mj = joules / 1e6;
    if measured.material != HEAT {
        steps.push(step(
            format!("{name}: {} MJ of power x 1", plain(mj)),
            mj,
            "MJ of exergy",
            &rules.source,
        ));
        return Some(mj);
    }
    let Some(celsius) = flow.temperature_c else {
        let remedy = "Add temperature_c, the temperature at delivery.";
        problems.add(
            at.field("temperature_c"),
            "Heat shares by its temperature, and none is given.",
            remedy,
        );
        return None;
    };
    let ambient = rules.ambient.value;
    let kelvin = celsius + 273.15;
    let carnot = (kelvin - ambient) / kelvin;
    if carnot <= 0.0 {
        let detail = format!("Heat at {celsius} degC is not above the surroundings.");
        problems.add(
            at.field("temperature_c"),
            detail,
            "Give the temperature at delivery in degC.",
        );
        return None;
    }
    steps.push(step(
        format!(
            "{name}: Carnot factor ({} - {}) / {}",
            plain(kelvin),
            plain(ambient),
            plain(kelvin)
        ),
        carnot,
        "",
        &rules.ambient.source,
    ));
    let exergy = mj * carnot;
    steps.push(step(
        format!("{name}: {} MJ of heat x {}", plain(mj), plain(carnot)),
        exergy,
        "MJ of exergy",
        "",
    ));
    Some(exergy)
}

/// Dry mass of a product, kg: ethanol by its pure mass.
pub(super) fn mass(
    measured: &Measured,
    scene: &Scene,
    problems: &mut Problems,
    steps: &mut Vec<Step>,
) -> Option<f64> {
    let Some(kg) = measured.pure_kg.or_else(|| measured.dry_kg()) else {
        let detail = format!("The {} is not given as a mass.", measured.material);
        problems.add(scene.at.field("unit"), detail, "Give it in kg or t.");
        return None;
    };
    let what = if measured.pure_kg.is_some() {
        "pure ethanol"
    } else {
        "dry matter"
    };
    steps.push(step(format!("{}: {what}", scene.name), kg, "kg", ""));
    Some(kg)
}

/// Value of a product, in its currency.
pub(super) fn value(
    measured: &Measured,
    scene: &Scene,
    problems: &mut Problems,
    steps: &mut Vec<Step>,
) -> Option<(f64, Currency)> {
    let Some(own) = &scene.flow.price else {
        let detail = format!("Sharing by value needs the price of {}.", scene.name);
        problems.add(
            scene.at.field("price"),
            detail,
            "Add \"price\", such as 215 EUR/t.",
        );
        return None;
    };
    let price_at = scene.at.field("price");
    if own.value < 0.0 {
        problems.add(
            price_at.field("value"),
            "A price below zero is no value to share by.",
            "Give zero or more, or the role waste.",
        );
        return None;
    }
    let price = match Quantity::read(own.value, &own.unit) {
        Ok(price) => price,
        Err(error) => {
            note_unit_error(&error, &price_at, problems);
            return None;
        }
    };
    let money = price.times(Quantity {
        value: measured.base,
        dimension: measured.dimension,
    });
    let Some(currency) = money.dimension.as_currency() else {
        let detail = "This price times this amount is no money.".to_owned();
        problems.add(
            price_at.field("unit"),
            detail,
            "Give a price per mass for a mass, per volume for a volume.",
        );
        return None;
    };
    steps.push(step(
        format!(
            "{}: {} {} at {} {}",
            scene.name,
            plain(scene.flow.amount?),
            scene.flow.unit.as_deref()?,
            plain(own.value),
            own.unit
        ),
        money.value,
        currency.symbol(),
        "price as entered",
    ));
    Some((money.value, currency))
}
