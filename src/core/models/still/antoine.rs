//! Vapour pressure of the pure liquids by Antoine's equation, log10(P/mmHg) = A - B/(t/degC + C).
//!
//! Constants read in public code records of textbook exercises and a web table credited to Perry's handbook; those of
//! water are meant for 1 to 100 degC. They boil at 78.298 and 99.997 degC under 101.325 kPa.

/// kPa per millimetre of mercury.
const KPA_PER_MMHG: f64 = 0.133_322_368;

/// Constants of one liquid.
pub(super) struct Antoine {
    a: f64,
    b: f64,
    c: f64,
}

/// Ethanol.
pub(super) const ETHANOL: Antoine = Antoine {
    a: 8.1122,
    b: 1592.864,
    c: 226.184,
};

/// Water.
pub(super) const WATER: Antoine = Antoine {
    a: 8.07131,
    b: 1730.63,
    c: 233.426,
};

impl Antoine {
    /// Vapour pressure, kPa, at `celsius`.
    pub(super) fn kpa(&self, celsius: f64) -> f64 {
        KPA_PER_MMHG * 10.0_f64.powf(self.a - self.b / (celsius + self.c))
    }
}
