//! The published documents: one type each for the API, the command line, files, statements and tests.

pub mod amount;
pub mod assessment;
pub mod blend;
pub mod canonical;
pub mod input;
pub mod json;
pub mod pathway;
pub mod pointer;
pub mod problem;
pub mod read_input;
pub mod read_pathway;
pub mod reader;
pub mod records;
pub mod rule_set;
pub mod statement;

pub use amount::Amount;
pub use assessment::Assessment;
pub use pathway::Pathway;
pub use problem::{Problem, Problems};
pub use statement::{Statement, StatementFacts};
