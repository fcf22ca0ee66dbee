//! Group C: the carbon balance of the whole chain (C-16). C-01, C-02 and C-18 are found by the models.

use super::settings::Settings;
use super::{Subject, finding};
use crate::core::documents::assessment::{Carbon, Finding, Severity};
use crate::core::engine::carbon::Basis;
use crate::core::units::rounding::{plain, plain_fixed};

/// Runs the group.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    findings.extend(carbon_closes(
        &subject.assessment.carbon,
        subject.carbon_basis,
        &subject.assessment.pathway_name,
        subject.settings,
    ));
}

/// C-16: the crop's carbon closes.
pub fn carbon_closes(carbon: &Carbon, basis: Basis, pathway: &str, settings: &Settings) -> Option<Finding> {
    let closure = carbon.closure_percent?;
    let around = |points: f64| (100.0 - points)..=(100.0 + points);
    let (warn, block) = (
        around(settings.closure_warn_points),
        around(settings.closure_block_points),
    );
    if warn.contains(&closure) {
        return None;
    }
    let own = basis.main_feed_own && basis.largest_co_product_own;
    let far = !block.contains(&closure);
    let severity = if far && own {
        Severity::Block
    } else {
        Severity::Warn
    };
    let then = match (far, own) {
        (true, true) => format!(
            "outside {} to {} % it blocks",
            plain(*block.start()),
            plain(*block.end())
        ),
        (true, false) => "the contents are typical ones, so it does not block".to_owned(),
        (false, _) => format!("{} to {} % is expected", plain(*warn.start()), plain(*warn.end())),
    };
    let message = format!(
        "The crop's carbon of {pathway} closes to {} %; {then}.",
        plain_fixed(closure, 1)
    );
    let remedy = "Check moistures, carbon contents and co-products of the works, or give the reason.";
    Some(finding("C-16", severity, "", "carbon", message, remedy))
}
