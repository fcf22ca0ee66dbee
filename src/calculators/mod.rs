//! Calculators: strength, still, sieve and fermentation, each with figures of its own and no pathway.

pub mod pages;
