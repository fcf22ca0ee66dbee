//! Decimals of the exchange file: a fixed number of places, digits and a point only, sums that add exactly.

use crate::core::units::rounding::plain_fixed;
use serde::{Serialize, Serializer};
use std::fmt;
use std::ops::{Add, Neg};

/// Places behind the point.
const PLACES: u8 = 9;
const ONE: i128 = 1_000_000_000;

/// A decimal of nine places.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord)]
pub struct Decimal(i128);

impl Decimal {
    /// Nothing.
    pub const ZERO: Decimal = Decimal(0);
    /// One.
    pub const ONE: Decimal = Decimal(ONE);

    /// A figure, halves away from zero; none where it is not finite or beyond all sense.
    pub fn of(x: f64) -> Option<Decimal> {
        Decimal::read(&plain_fixed(x, PLACES))
    }

    /// Reads `[+-]digits[.digits]` and nothing else; places beyond the ninth must be zero.
    pub fn read(text: &str) -> Option<Decimal> {
        let (minus, digits) = match text.strip_prefix('-') {
            Some(rest) => (true, rest),
            None => (false, text.strip_prefix('+').unwrap_or(text)),
        };
        let (whole, part) = match digits.split_once('.') {
            Some((_, "")) => return None,
            Some((whole, part)) => (whole, part),
            None => (digits, ""),
        };
        let all_digits = |text: &str| text.bytes().all(|byte| byte.is_ascii_digit());
        if whole.is_empty() || !all_digits(whole) || !all_digits(part) {
            return None;
        }
        let places = usize::from(PLACES);
        let (kept, beyond) = part.split_at_checked(places).unwrap_or((part, ""));
        if beyond.bytes().any(|byte| byte != b'0') {
            return None;
        }
        let whole: i128 = whole.parse().ok()?;
        let padded = format!("{kept:0<places$}");
        let part: i128 = padded.parse().ok()?;
        let value = whole.checked_mul(ONE)?.checked_add(part)?;
        Some(Decimal(if minus { -value } else { value }))
    }
}

impl fmt::Display for Decimal {
    fn fmt(&self, f: &mut fmt::Formatter) -> fmt::Result {
        let sign = if self.0 < 0 { "-" } else { "" };
        let (whole, part) = (
            self.0.unsigned_abs() / ONE.unsigned_abs(),
            self.0.unsigned_abs() % ONE.unsigned_abs(),
        );
        if part == 0 {
            return write!(f, "{sign}{whole}");
        }
        let part = format!("{part:09}");
        write!(f, "{sign}{whole}.{}", part.trim_end_matches('0'))
    }
}

impl Serialize for Decimal {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_str(self)
    }
}

impl Add for Decimal {
    type Output = Decimal;
    fn add(self, other: Decimal) -> Decimal {
        Decimal(self.0.saturating_add(other.0))
    }
}

impl Neg for Decimal {
    type Output = Decimal;
    fn neg(self) -> Decimal {
        Decimal(self.0.saturating_neg())
    }
}

impl std::iter::Sum for Decimal {
    fn sum<I: Iterator<Item = Decimal>>(parts: I) -> Decimal {
        parts.fold(Decimal::ZERO, Add::add)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn writes_digits_and_a_point() {
        let shown = |x: f64| Decimal::of(x).unwrap().to_string();
        assert_eq!(shown(0.6), "0.6");
        assert_eq!(shown(-1.911), "-1.911");
        assert_eq!(shown(1e-7), "0.0000001");
        assert_eq!(shown(1e12), "1000000000000");
        assert_eq!(shown(-0.0), "0");
        assert_eq!(Decimal::of(f64::NAN), None);
    }

    #[test]
    fn reads_nothing_but_plain_decimals() {
        for text in [
            "1e3",
            "1.2345E+6",
            "",
            ".5",
            "5.",
            "1 000",
            "1,5",
            "0x10",
            "--1",
            "12abc",
            "NaN",
        ] {
            assert_eq!(Decimal::read(text), None, "{text}");
        }
        assert_eq!(Decimal::read("+5.0"), Some(Decimal(5 * ONE)));
    }

    proptest! {
        #[test]
        fn text_reads_back(units in -10_i128.pow(20)..10_i128.pow(20)) {
            let decimal = Decimal(units);
            prop_assert_eq!(Decimal::read(&decimal.to_string()), Some(decimal));
        }
    }
}
