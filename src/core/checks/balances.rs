//! Group C: balances. C-01, C-02 and C-18 are found by the models; C-16 needs the whole chain.

use super::{Subject, finding};
use crate::core::documents::assessment::{Carbon, Finding, Severity};
use crate::core::engine::carbon::Basis;
use crate::core::units::rounding::plain_fixed;

/// Closure outside this span warns, %.
pub const WARN: (f64, f64) = (99.0, 101.0);
/// Closure outside this span blocks where the contents are the pathway's own, %.
pub const BLOCK: (f64, f64) = (95.0, 105.0);

/// Runs the group.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    findings.extend(carbon_closes(
        &subject.assessment.carbon,
        subject.carbon_basis,
        &subject.assessment.pathway_name,
    ));
}

/// C-16: the crop's carbon closes.
pub fn carbon_closes(carbon: &Carbon, basis: Basis, pathway: &str) -> Option<Finding> {
    let closure = carbon.closure_percent?;
    if (WARN.0..=WARN.1).contains(&closure) {
        return None;
    }
    let own = basis.main_feed_own && basis.largest_co_product_own;
    let far = !(BLOCK.0..=BLOCK.1).contains(&closure);
    let severity = if far && own {
        Severity::Block
    } else {
        Severity::Warn
    };
    let then = match (far, own) {
        (true, true) => "outside 95 to 105 % it blocks",
        (true, false) => "the contents are typical ones, so it does not block",
        (false, _) => "99 to 101 % is expected",
    };
    let message = format!(
        "The crop's carbon of {pathway} closes to {} %; {then}.",
        plain_fixed(closure, 1)
    );
    let remedy = "Check moistures, carbon contents and co-products of the works, or give the reason.";
    Some(finding("C-16", severity, "", "carbon", message, remedy))
}
