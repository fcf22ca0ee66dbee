//! A card worked out as it is typed, without saving it: the new net, what moved, and the arithmetic of its inputs.

use crate::app::App;
use crate::core::documents::assessment::{Assessment, Severity};
use crate::core::documents::{Pathway, Problems};
use crate::core::units::rounding::{show, show_change};
use crate::rules::basis;
use crate::web::{Refusal, blocking};

/// What trying gave, in words.
#[derive(Clone, Debug, PartialEq)]
pub struct Tried {
    /// The figures.
    pub what: String,
    /// What weakens them.
    pub then: String,
}

/// One step of the arithmetic of an input.
#[derive(Clone, Debug, PartialEq)]
pub struct StepLine {
    /// What is done.
    pub text: String,
    /// Its result.
    pub value: f64,
    /// Unit of the result.
    pub unit: String,
    /// Where a figure of it comes from.
    pub source: String,
}

/// Works a document out and stores nothing.
///
/// # Errors
/// When the database fails. What is wrong with the document is the inner error.
pub(super) async fn work_out(app: &App, document: Pathway) -> Result<Result<Assessment, Problems>, Refusal> {
    let basis = basis(app).await?;
    let evaluate = app.evaluate;
    blocking::run(move || evaluate(&document, &basis.book, basis.options(None))).await
}

impl Tried {
    /// What trying gave, beside the last good assessment.
    pub(super) fn of(now: &Assessment, before: Option<&Assessment>, stage: &str) -> Tried {
        let net = now.net.g_co2e_per_mj;
        let here = |found: &Assessment| {
            let stage = found.stages.iter().find(|result| result.key == stage)?;
            Some(stage.g_co2e_per_mj)
        };
        let mut what = format!("Worked out, not saved: {} g CO2e/MJ", show(net, 2));
        if let Some(stage) = here(now) {
            what.push_str(&format!(", of it this stage {}", show(stage, 2)));
        }
        what.push('.');
        let mut then = String::new();
        if let Some(before) = before {
            let change = net - before.net.g_co2e_per_mj;
            then = match show_change(change, 2) {
                _ if change == 0.0 => "As the revision that the form began from.".to_owned(),
                words => format!("{words} against the revision that the form began from."),
            };
        }
        if let Some(saving) = now.saving_percent {
            then.push_str(&format!(" Saving {} %.", show(saving, 1)));
        }
        let count = |severity| {
            let here = now.findings.iter();
            here.filter(|finding| finding.stage == stage && finding.severity == severity)
                .count()
        };
        let (blocks, warns) = (count(Severity::Block), count(Severity::Warn));
        if blocks + warns > 0 {
            then.push_str(&format!(" Checks of this stage: {blocks} block, {warns} warn."));
        }
        Tried {
            what,
            then: then.trim().to_owned(),
        }
    }
}
