//! A number in base units together with what it counts.

use super::{Dimension, UnitError, parse_unit};

/// An amount: a figure in base units and what it counts.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Quantity {
    /// The figure in SI base units: kg, m, s, K, J, kg of a substance, one of a currency. Finite if it was read.
    pub value: f64,
    /// What it counts.
    pub dimension: Dimension,
}

impl Quantity {
    /// Reads a figure in a unit as entered.
    ///
    /// # Errors
    /// [`UnitError::Unknown`] for the unit, [`UnitError::NotFinite`] for the figure.
    pub fn read(value: f64, unit: &str) -> Result<Quantity, UnitError> {
        let unit = parse_unit(unit)?;
        let value = unit.to_base(value)?;
        Ok(Quantity {
            value,
            dimension: unit.dimension,
        })
    }

    /// Reads a figure in a unit as entered and asks for a dimension; a mismatch names the unit as entered.
    ///
    /// # Errors
    /// As [`Quantity::read`], and [`UnitError::Mismatch`].
    pub fn read_as(value: f64, unit: &str, dimension: Dimension) -> Result<f64, UnitError> {
        let unit = parse_unit(unit)?;
        unit.need(dimension)?;
        unit.to_base(value)
    }

    /// The value in base units, if it counts what is wanted.
    ///
    /// # Errors
    /// [`UnitError::Mismatch`]; the entered unit is gone by now, so an everyday unit of the dimension
    /// stands for it. Prefer [`Quantity::read_as`] where the text is at hand.
    pub fn need(self, dimension: Dimension) -> Result<f64, UnitError> {
        if self.dimension == dimension {
            return Ok(self.value);
        }
        Err(mismatch(self.dimension.symbol(), self.dimension, dimension))
    }

    /// The value in a unit of the same dimension.
    ///
    /// # Errors
    /// [`UnitError::Unknown`], [`UnitError::Mismatch`], [`UnitError::NotFinite`].
    pub fn in_unit(&self, unit: &str) -> Result<f64, UnitError> {
        let unit = parse_unit(unit)?;
        self.need(unit.dimension)?;
        unit.from_base(self.value)
    }

    /// The product of two amounts: `kg N/ha` times `ha` is `kg N`.
    #[must_use]
    pub fn times(self, other: Quantity) -> Quantity {
        Quantity {
            value: self.value * other.value,
            dimension: self.dimension.times(other.dimension),
        }
    }

    /// The quotient of two amounts. Not finite when `other` is zero: the caller knows what to say then.
    #[must_use]
    pub fn per(self, other: Quantity) -> Quantity {
        Quantity {
            value: self.value / other.value,
            dimension: self.dimension.per(other.dimension),
        }
    }
}

pub(super) fn mismatch(found: String, is: Dimension, expected: Dimension) -> UnitError {
    UnitError::Mismatch {
        found,
        found_is: is.describe(),
        expected: expected.describe(),
        examples: expected.examples(),
    }
}
