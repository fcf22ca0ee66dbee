//! Alcoholic strength: density of ethanol-water mixtures by the general formula of OIML R 22 (1975), which also stands
//! in Council Directive 76/766/EEC, Annex, point 4. Mass, volume and pure ethanol convert through it.

mod convert;

pub use convert::{Mixture, Much, Strength, convert};

/// Lowest and highest temperature of the formula, degC; the mixture must be liquid.
pub const TEMPERATURE_RANGE_C: (f64, f64) = (-20.0, 40.0);

/// The temperature that strength by volume refers to, degC.
pub const REFERENCE_C: f64 = 20.0;

const A: [f64; 12] = [
    9.982012300e2,
    -1.929769495e2,
    3.891238958e2,
    -1.668103923e3,
    1.352215441e4,
    -8.829278388e4,
    3.062874042e5,
    -6.138381234e5,
    7.470172998e5,
    -5.478461354e5,
    2.234460334e5,
    -3.903285426e4,
];

const B: [f64; 6] = [
    -2.0618513e-1,
    -5.2682542e-3,
    3.6130013e-5,
    -3.8957702e-7,
    7.1693540e-9,
    -9.9739231e-11,
];

const C1: [f64; 11] = [
    1.693443461530087e-1,
    -1.046914743455169e1,
    7.196353469546523e1,
    -7.047478054272792e2,
    3.924090430035045e3,
    -1.210164659068747e4,
    2.248646550400788e4,
    -2.605562982188164e4,
    1.852373922069467e4,
    -7.420201433430137e3,
    1.285617841998974e3,
];

const C2: [f64; 10] = [
    -1.193013005057010e-2,
    2.517399633803461e-1,
    -2.170575700536993,
    1.353034988843029e1,
    -5.029988758547014e1,
    1.096355666577570e2,
    -1.422753946421155e2,
    1.080435942856230e2,
    -4.414153236817392e1,
    7.442971530188783,
];

const C3: [f64; 9] = [
    -6.802995733503803e-4,
    1.876837790289664e-2,
    -2.002561813734156e-1,
    1.022992966719220,
    -2.895696483903638,
    4.810060584300675,
    -4.672147440794683,
    2.458043105903461,
    -5.411227621436812e-1,
];

const C4: [f64; 4] = [
    4.075376675622027e-6,
    -8.763058573471110e-6,
    6.515031360099368e-6,
    -1.515784836987210e-6,
];

const C5: [f64; 2] = [-2.788074354782409e-8, 1.345612883493354e-8];

/// `c1 x + c2 x^2 + ...` by Horner's rule.
fn without_constant(coefficients: &[f64], x: f64) -> f64 {
    coefficients.iter().rev().fold(0.0, |sum, c| (sum + c) * x)
}

/// Density, kg/m3, of a mixture of ethanol mass fraction `p` (0 to 1) at `celsius` (-20 to 40, liquid).
/// Outside the range the polynomial still gives a number: callers refuse such input first.
pub fn density(p: f64, celsius: f64) -> f64 {
    let d = celsius - REFERENCE_C;
    let at_reference = A[0] + without_constant(&A[1..], p);
    let water = without_constant(&B, d);
    let mixed = [&C1[..], &C2, &C3, &C4, &C5]
        .iter()
        .rev()
        .fold(0.0, |sum, row| (sum + without_constant(row, p)) * d);
    at_reference + water + mixed
}

/// Strength by volume at 20 degC (0 to 1) of a mixture of ethanol mass fraction `p` (0 to 1).
pub fn volume_fraction(p: f64) -> f64 {
    p * density(p, REFERENCE_C) / density(1.0, REFERENCE_C)
}

/// Ethanol mass fraction (0 to 1) of a mixture of strength by volume `q` at 20 degC (0 to 1).
/// By bisection down to neighbouring doubles: the relation rises strictly.
pub fn mass_fraction(q: f64) -> f64 {
    if q <= 0.0 {
        return 0.0;
    }
    if q >= 1.0 {
        return 1.0;
    }
    let (mut low, mut high) = (0.0, 1.0);
    loop {
        let middle = 0.5 * (low + high);
        if middle <= low || middle >= high {
            return middle;
        }
        if volume_fraction(middle) < q {
            low = middle;
        } else {
            high = middle;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn agrees_with_published_points() {
        // OIML R 22 table values as carried in public tables: pure ethanol at 20 and 15 degC; water at 20 degC.
        assert!((density(1.0, 20.0) - 789.24).abs() < 0.005);
        assert!((density(1.0, 15.0) - 793.51).abs() < 0.005);
        assert!((density(0.0, 20.0) - 998.2012).abs() < 0.0001);
        assert!((100.0 * mass_fraction(0.96) - 93.84).abs() < 0.005);
        assert!((100.0 * mass_fraction(0.40) - 33.30).abs() < 0.005);
        // USP 29 alcoholometric table at 15.56 degC: 30 % mass is 36.18 % vol there; by the legal definition at 20 degC:
        assert!((100.0 * mass_fraction(0.12) - 9.6410).abs() < 0.0001);
    }

    proptest! {
        #[test]
        fn strength_by_mass_and_by_volume_are_inverse(q in 0.0f64..=1.0) {
            // Terms of up to 7.5e5 cancel to about 800, so the formula itself is good to some 1e-13 of its value.
            prop_assert!((volume_fraction(mass_fraction(q)) - q).abs() < 1e-12);
        }

        #[test]
        fn strength_rises_with_mass_fraction(p in 0.0f64..0.999) {
            prop_assert!(volume_fraction(p + 0.001) > volume_fraction(p));
        }
    }
}
