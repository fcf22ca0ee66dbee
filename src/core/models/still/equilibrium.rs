//! Vapour-liquid equilibrium of ethanol and water: ideal vapour over a real liquid, y P = x gamma Psat(t).

use super::antoine::{ETHANOL, WATER};
use super::nrtl;
use super::root::root;

/// Pressure of every column here, kPa.
pub const PRESSURE_KPA: f64 = 101.325;

/// Which equation gives the activity coefficients.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Activity {
    /// NRTL with temperature: azeotrope at mole fraction 0.8975. Every result that counts uses it.
    #[default]
    Nrtl,
    /// Van Laar, for 101.325 kPa only: a second opinion. Azeotrope at 0.9008.
    VanLaar,
}

/// A boiling liquid and the vapour over it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Boiling {
    /// Temperature, degC.
    pub celsius: f64,
    /// Ethanol mole fraction of the vapour.
    pub vapour: f64,
}

impl Activity {
    fn coefficients(self, x: f64, celsius: f64) -> (f64, f64) {
        match self {
            Activity::Nrtl => nrtl::nrtl(x, celsius),
            Activity::VanLaar => nrtl::van_laar(x),
        }
    }

    /// Partial pressures, kPa, of ethanol and water over a liquid of ethanol mole fraction `x` (0 to 1) at `celsius`.
    pub fn partial_kpa(self, x: f64, celsius: f64) -> (f64, f64) {
        let (ethanol, water) = self.coefficients(x, celsius);
        (
            x * ethanol * ETHANOL.kpa(celsius),
            (1.0 - x) * water * WATER.kpa(celsius),
        )
    }

    /// The liquid of ethanol mole fraction `x` (taken into 0 to 1) as it boils at 101.325 kPa.
    pub fn boiling(self, x: f64) -> Boiling {
        let x = x.clamp(0.0, 1.0);
        let over = |celsius: f64| {
            let (ethanol, water) = self.partial_kpa(x, celsius);
            (ethanol + water) / PRESSURE_KPA - 1.0
        };
        // Every mixture boils between the azeotrope's 78 degC and water's 100, so the bracket always holds it.
        let celsius = root(over, 40.0, 140.0, 1e-12).unwrap_or(f64::NAN);
        let (ethanol, _) = self.partial_kpa(x, celsius);
        Boiling {
            celsius,
            vapour: ethanol / PRESSURE_KPA,
        }
    }

    /// Ethanol mole fraction at which liquid and vapour are alike: no column at this pressure gets past it.
    pub fn azeotrope(self) -> f64 {
        root(|x| self.boiling(x).vapour - x, 0.75, 0.99, 1e-12).unwrap_or(f64::NAN)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn pure_liquids_boil_where_antoine_says() {
        assert!((Activity::Nrtl.boiling(0.0).celsius - 99.997).abs() < 0.0005);
        assert!((Activity::Nrtl.boiling(1.0).celsius - 78.298).abs() < 0.0005);
        assert_eq!(Activity::Nrtl.boiling(0.0).vapour, 0.0);
        assert!((Activity::Nrtl.boiling(1.0).vapour - 1.0).abs() < 1e-12);
    }

    #[test]
    fn the_order_of_the_subscripts_is_right() {
        // The reference program gives 0.178926 here; with the taus exchanged it would be far off.
        assert!((Activity::Nrtl.boiling(0.019).vapour - 0.178_926).abs() < 1e-6);
        assert!((Activity::Nrtl.azeotrope() - 0.897_508).abs() < 1e-6);
    }

    proptest! {
        /// At boiling the two partial pressures make up the pressure.
        #[test]
        fn partial_pressures_close(x in 0.0f64..=1.0) {
            for activity in [Activity::Nrtl, Activity::VanLaar] {
                let (ethanol, water) = activity.partial_kpa(x, activity.boiling(x).celsius);
                prop_assert!((ethanol + water - PRESSURE_KPA).abs() < 1e-9);
            }
        }

        /// Gibbs and Duhem: x1 dln(gamma1) + x2 dln(gamma2) = 0 at one temperature.
        #[test]
        fn coefficients_obey_gibbs_and_duhem(x in 0.01f64..0.99, celsius in 20.0f64..110.0) {
            for activity in [Activity::Nrtl, Activity::VanLaar] {
                let step = 1e-5;
                let (a, b) = (activity.coefficients(x - step, celsius), activity.coefficients(x + step, celsius));
                let slope = (b.0.ln() - a.0.ln(), b.1.ln() - a.1.ln());
                let open = (x * slope.0 + (1.0 - x) * slope.1) / (2.0 * step);
                prop_assert!(open.abs() < 1e-6, "{open}");
            }
        }

        /// More ethanol in the liquid, more in the vapour; below the azeotrope the vapour is the richer one.
        #[test]
        fn vapour_rises_with_the_liquid(x in 0.0005f64..0.895, more in 1e-4f64..0.05) {
            let here = Activity::Nrtl.boiling(x).vapour;
            prop_assert!(here > x);
            prop_assert!(Activity::Nrtl.boiling((x + more).min(1.0)).vapour > here);
        }
    }
}
