//! Calculators: small questions of the works and the laboratory, answered with their arithmetic. Nothing is stored.

mod alcoholometry;
pub mod api;
mod dehydration;
mod distillation;
mod fermentation;
pub mod pages;

pub use alcoholometry::{AlcoholometryAnswer, AlcoholometryRequest, alcoholometry};
pub use dehydration::{DehydrationAnswer, DehydrationRequest, dehydration};
pub use distillation::{
    ActivityWord, DistillationAnswer, DistillationRequest, MinimumRefluxAnswer, distillation,
};
pub use fermentation::{
    FermentationAnswer, FermentationRequest, SubstrateAnswer, SubstrateRequest, SubstrateWord, fermentation,
};

use crate::core::documents::Problems;
use crate::core::documents::reader::Place;
use crate::core::models::refusal::Refusal;

/// Refusals of a calculator as problems of the document: each points at its field.
fn problems(refusals: Vec<Refusal>) -> Problems {
    let mut problems = Problems::default();
    for refusal in refusals {
        problems.add(Place::ROOT.field(refusal.field), refusal.detail, refusal.remedy);
    }
    problems
}
