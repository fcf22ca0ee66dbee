//! What moves the figure: comparisons, and later sensitivities, targets, scenarios. Pure functions over assessments.

pub mod compare;
pub mod defaults;
