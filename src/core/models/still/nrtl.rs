//! Activity coefficients of ethanol (1) and water (2) in the liquid: the NRTL equation with temperature, and van Laar's.

/// NRTL: tau = a + b/T, T in kelvin; alpha 0.30. Read in two public code records, one of which credits the DECHEMA
/// Chemistry Data Series, vol. I part 1, and states 298 to 373 K. Exchanging the two taus still gives plausible figures,
/// but an azeotrope in the wrong place.
const A12: f64 = -0.8009;
const B12: f64 = 246.18;
const A21: f64 = 3.4578;
const B21: f64 = -586.0809;
const ALPHA: f64 = 0.30;

/// Van Laar's constants as printed, with common logarithms: textbook constants for 101.325 kPa, read in a public code
/// record. The other pair in circulation (1.6790, 0.9450) is the same in natural logarithms.
const VAN_LAAR_A: f64 = 0.7292;
const VAN_LAAR_B: f64 = 0.4104;

/// Activity coefficients of ethanol and water by NRTL at ethanol mole fraction `x` (0 to 1) and `celsius`.
pub(super) fn nrtl(x: f64, celsius: f64) -> (f64, f64) {
    let kelvin = celsius + 273.15;
    let (x1, x2) = (x, 1.0 - x);
    let (tau12, tau21) = (A12 + B12 / kelvin, A21 + B21 / kelvin);
    let (g12, g21) = ((-ALPHA * tau12).exp(), (-ALPHA * tau21).exp());
    let (of_1, of_2) = (x1 + x2 * g21, x2 + x1 * g12);
    let ln_1 = x2 * x2 * (tau21 * (g21 / of_1).powi(2) + tau12 * g12 / of_2.powi(2));
    let ln_2 = x1 * x1 * (tau12 * (g12 / of_2).powi(2) + tau21 * g21 / of_1.powi(2));
    (ln_1.exp(), ln_2.exp())
}

/// Activity coefficients of ethanol and water by van Laar at ethanol mole fraction `x` (0 to 1), 101.325 kPa.
pub(super) fn van_laar(x: f64) -> (f64, f64) {
    let (a, b) = (
        VAN_LAAR_A * std::f64::consts::LN_10,
        VAN_LAAR_B * std::f64::consts::LN_10,
    );
    let both = a * x + b * (1.0 - x);
    let (of_1, of_2) = (b * (1.0 - x) / both, a * x / both);
    ((a * of_1 * of_1).exp(), (b * of_2 * of_2).exp())
}
