//! Blends with petrol, and kilometres on them, of stored pathways or of figures.

use super::{PathwayError, assessment};
use crate::app::App;
use crate::core::documents::blend::{Blend, BlendRequest, Intensity, PerKm, PerKmRequest};
use crate::core::documents::{Assessment, Problem};
use crate::core::engine::{blend as engine, per_km};
use crate::rules::basis;
use uuid::Uuid;

/// The intensity of a stored pathway, and the rule set that it stands under, as it was asked for.
///
/// # Errors
/// `NotFound`, when the document cannot be evaluated under the rule set, or when the database fails.
pub async fn intensity(
    app: &App,
    id: Uuid,
    revision: Option<i64>,
    rule_set: Option<&str>,
) -> Result<(Intensity, String), PathwayError> {
    let found = assessment(app, id, revision, rule_set).await?;
    let assessment: Assessment = serde_json::from_slice(&found.bytes)
        .map_err(|error| PathwayError::defect("read an assessment", error))?;
    Ok((Intensity::of_assessment(&assessment), found.rule_set))
}

/// Works a blend out under a rule set.
///
/// # Errors
/// Every figure that is missing, given twice or outside its range; a rule set that is not there; or when the database fails.
pub async fn blend(app: &App, request: &BlendRequest, rule_set: &str) -> Result<Blend, PathwayError> {
    let basis = basis(app).await?;
    let Some(rules) = basis.book.rule_sets.get(rule_set) else {
        let problem = Problem {
            pointer: "/rule_set".to_owned(),
            detail: format!("There is no rule set \"{rule_set}\"."),
            remedy: "Take one from the list of rule sets.".to_owned(),
        };
        return Err(PathwayError::Problems(problem.into()));
    };
    Ok(engine::blend(request, rules, &basis.book)?)
}

/// Works a kilometre on a blend out.
///
/// # Errors
/// A missing, doubled or impossible energy use, or an empty source.
pub fn kilometre(request: &PerKmRequest, blend: &Blend) -> Result<PerKm, PathwayError> {
    Ok(per_km::per_km(request, blend)?)
}
