//! The calculator of alcoholic strength: one strength and one quantity in, all the others out.

use super::{REFERENCE_C, TEMPERATURE_RANGE_C, density, mass_fraction, volume_fraction};
use crate::core::models::refusal::Refusal;
use crate::core::units::rounding::{plain, round_half_away};

/// How strong the mixture is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Strength {
    /// % by mass, 0 to 100.
    PercentMass(f64),
    /// % by volume at 20 degC, 0 to 100.
    PercentVol(f64),
}

/// How much there is of it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Much {
    /// The mixture, kg.
    Kg(f64),
    /// The mixture, litres as read at the temperature of the request.
    Litres(f64),
    /// The pure ethanol in it, kg.
    PureKg(f64),
    /// The pure ethanol in it, litres at 20 degC.
    PureLitres(f64),
}

/// A mixture of ethanol and water with everything that follows from it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Mixture {
    /// % by mass.
    pub percent_mass: f64,
    /// % by volume at 20 degC.
    pub percent_vol: f64,
    /// Temperature of the volume, degC.
    pub celsius: f64,
    /// Density at that temperature, kg/m3.
    pub kg_per_m3: f64,
    /// Density at 20 degC, kg/m3.
    pub kg_per_m3_at_20: f64,
    /// The mixture, kg.
    pub kg: f64,
    /// The mixture, litres at that temperature.
    pub litres: f64,
    /// The mixture, litres at 20 degC.
    pub litres_at_20: f64,
    /// Pure ethanol in it, kg.
    pub pure_kg: f64,
    /// Pure ethanol in it, litres at 20 degC.
    pub pure_litres_at_20: f64,
    /// Water in it, kg.
    pub water_kg: f64,
}

/// Converts a strength and a quantity, whose volume is read at `celsius` (-20 to 40, the mixture liquid).
///
/// # Errors
/// Everything that is not possible, each in words.
pub fn convert(strength: Strength, much: Much, celsius: f64) -> Result<Mixture, Vec<Refusal>> {
    let mut refusals = Vec::new();
    let (name, percent) = match strength {
        Strength::PercentMass(percent) => ("strength_percent_mass", percent),
        Strength::PercentVol(percent) => ("strength_percent_vol", percent),
    };
    let possible = (0.0..=100.0).contains(&percent);
    if !possible {
        let detail = if percent.is_finite() {
            format!("A strength of {} % is not possible.", plain(percent))
        } else {
            "A finite number belongs here.".to_owned()
        };
        refusals.push(Refusal::new(name, detail, "Give 0 to 100 %."));
    }
    let w = match strength {
        Strength::PercentMass(percent) => percent / 100.0,
        Strength::PercentVol(percent) => mass_fraction(percent / 100.0),
    };
    temperature(celsius, possible.then_some(w), &mut refusals);
    amount(much, possible.then_some(w), &mut refusals);
    if !refusals.is_empty() {
        return Err(refusals);
    }
    let (here, at_20) = (density(w, celsius), density(w, REFERENCE_C));
    let pure_at_20 = density(1.0, REFERENCE_C);
    let kg = match much {
        Much::Kg(kg) => kg,
        Much::Litres(litres) => litres / 1000.0 * here,
        Much::PureKg(kg) => kg / w,
        Much::PureLitres(litres) => litres / 1000.0 * pure_at_20 / w,
    };
    if !(kg * 1000.0).is_finite() {
        let detail = "The quantity is too large for its strength.";
        return Err(vec![Refusal::new(
            amount_name(much),
            detail,
            "Give a figure of ordinary size.",
        )]);
    }
    Ok(Mixture {
        percent_mass: 100.0 * w,
        percent_vol: match strength {
            Strength::PercentVol(percent) => percent,
            Strength::PercentMass(_) => 100.0 * volume_fraction(w),
        },
        celsius,
        kg_per_m3: here,
        kg_per_m3_at_20: at_20,
        kg,
        litres: 1000.0 * kg / here,
        litres_at_20: 1000.0 * kg / at_20,
        pure_kg: kg * w,
        pure_litres_at_20: 1000.0 * kg * w / pure_at_20,
        water_kg: kg * (1.0 - w),
    })
}

fn temperature(celsius: f64, w: Option<f64>, refusals: &mut Vec<Refusal>) {
    let (low, high) = TEMPERATURE_RANGE_C;
    if !(low..=high).contains(&celsius) {
        let detail = if celsius.is_finite() {
            format!(
                "{} degC is outside {} to {} degC, the range of OIML R 22.",
                plain(celsius),
                plain(low),
                plain(high)
            )
        } else {
            "A finite number belongs here.".to_owned()
        };
        let remedy = "Give the volume at a temperature in the range.";
        refusals.push(Refusal::new("temperature_c", detail, remedy));
        return;
    }
    let Some(freezing) = w.map(freezes_at).filter(|freezing| celsius < *freezing) else {
        return;
    };
    let detail = format!(
        "At {} degC this mixture may be frozen; the formula is for liquids.",
        plain(celsius)
    );
    let remedy = format!("Give at least {} degC.", plain(round_half_away(freezing, 1)));
    refusals.push(Refusal::new("temperature_c", detail, remedy));
}

/// Where ice begins, degC, by the freezing-point depression of water, 1.86 K kg/mol (textbook figure, from memory).
/// Real mixtures freeze somewhat lower, so this refuses early, never late.
fn freezes_at(w: f64) -> f64 {
    const KELVIN_KG_PER_MOL: f64 = 1.86;
    const ETHANOL_KG_PER_MOL: f64 = 0.046_068_44;
    -KELVIN_KG_PER_MOL * w / (ETHANOL_KG_PER_MOL * (1.0 - w))
}

fn amount_name(much: Much) -> &'static str {
    match much {
        Much::Kg(_) => "kg",
        Much::Litres(_) => "litres",
        Much::PureKg(_) => "pure_kg",
        Much::PureLitres(_) => "pure_litres_at_20",
    }
}

fn amount(much: Much, w: Option<f64>, refusals: &mut Vec<Refusal>) {
    let name = amount_name(much);
    let (figure, pure) = match much {
        Much::Kg(figure) | Much::Litres(figure) => (figure, false),
        Much::PureKg(figure) | Much::PureLitres(figure) => (figure, true),
    };
    if !figure.is_finite() || figure < 0.0 {
        let detail = if figure.is_finite() {
            format!("{} is negative.", plain(figure))
        } else {
            "A finite number belongs here.".to_owned()
        };
        refusals.push(Refusal::new(name, detail, "Give zero or more."));
    } else if pure && w == Some(0.0) {
        refusals.push(Refusal::new(
            name,
            "Water holds no ethanol, so no quantity of it follows.",
            "Give a strength above 0 %, or the quantity of the mixture.",
        ));
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn fields(refused: Result<Mixture, Vec<Refusal>>) -> Vec<&'static str> {
        refused.unwrap_err().iter().map(|refusal| refusal.field).collect()
    }

    #[test]
    fn refuses_all_at_once_and_in_words() {
        let wrong = convert(Strength::PercentVol(120.0), Much::Litres(-1.0), 55.0);
        assert_eq!(fields(wrong), ["strength_percent_vol", "temperature_c", "litres"]);
        let wrong = convert(Strength::PercentMass(f64::NAN), Much::Kg(f64::INFINITY), f64::NAN);
        assert_eq!(fields(wrong), ["strength_percent_mass", "temperature_c", "kg"]);
        let water = convert(Strength::PercentMass(0.0), Much::PureKg(1.0), 20.0);
        assert_eq!(fields(water), ["pure_kg"]);
    }

    #[test]
    fn ice_is_refused() {
        // CRC Handbook, aqueous solutions (from memory): 10 % mass freezes at -4.5 degC, 20 % at -10.9, 30 % at about -20.
        for (percent, frozen, liquid) in [(0.0, -0.1, 0.0), (10.0, -4.6, -4.4), (20.0, -11.0, -10.0)] {
            let at = |celsius| convert(Strength::PercentMass(percent), Much::Kg(1.0), celsius);
            assert_eq!(fields(at(frozen)), ["temperature_c"]);
            assert!(at(liquid).is_ok(), "{percent} % at {liquid}");
        }
        assert!(convert(Strength::PercentMass(35.0), Much::Kg(1.0), -20.0).is_ok());
        assert!(convert(Strength::PercentMass(100.0), Much::Kg(1.0), -20.0).is_ok());
    }

    proptest! {
        /// Whichever way a mixture is described, it is the same mixture.
        #[test]
        fn every_description_gives_the_same_mixture(
            percent in 0.5f64..=100.0, kg in 0.0f64..1e6, celsius in 0.0f64..=40.0,
        ) {
            let whole = convert(Strength::PercentMass(percent), Much::Kg(kg), celsius).unwrap();
            prop_assert!((whole.pure_kg + whole.water_kg - kg).abs() <= 1e-12 * kg);
            for strength in [Strength::PercentMass(percent), Strength::PercentVol(whole.percent_vol)] {
                for much in [
                    Much::Litres(whole.litres),
                    Much::PureKg(whole.pure_kg),
                    Much::PureLitres(whole.pure_litres_at_20),
                ] {
                    let again = convert(strength, much, celsius).unwrap();
                    prop_assert!((again.kg - kg).abs() <= 1e-9 * kg, "{strength:?} {much:?}");
                    prop_assert!((again.percent_mass - percent).abs() < 1e-9);
                    prop_assert!((again.litres_at_20 - whole.litres_at_20).abs() <= 1e-9 * whole.litres_at_20);
                }
            }
        }

        /// Any figures at all are answered, by a result or by words.
        #[test]
        fn never_panics(percent: f64, much: f64, celsius: f64) {
            for strength in [Strength::PercentMass(percent), Strength::PercentVol(percent)] {
                for much in [Much::Kg(much), Much::Litres(much), Much::PureKg(much), Much::PureLitres(much)] {
                    if let Err(refusals) = convert(strength, much, celsius) {
                        prop_assert!(refusals.iter().all(|r| !r.detail.is_empty() && !r.remedy.is_empty()));
                    }
                }
            }
        }
    }
}
