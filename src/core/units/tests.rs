//! Tests of the units.
