//! `check`: is what is stored still what was stored? One line for each finding, and a closing line.

use super::{COULD_NOT, print, say};
use crate::app::App;
use crate::clock::Clock;
use crate::config::Config;
use crate::store::{FILE, StoreError};
use crate::{audit_trail, evidence, library, pathways};
use std::path::Path;

/// What was looked at, counted for the closing line.
#[derive(Debug, Default)]
struct Report {
    findings: usize,
    notes: Vec<String>,
}

impl Report {
    fn finding(&mut self, text: &str) {
        self.findings += 1;
        let plain: String = text
            .chars()
            .map(|c| if c.is_control() { ' ' } else { c })
            .collect();
        print(plain.as_bytes());
    }
}

/// Looks at the data in a folder; 0 if they are sound.
pub(super) fn run(config: &Config) -> u8 {
    let mut report = Report::default();
    let outcome = super::serve::running(async {
        look(config, &mut report).await;
        Ok(())
    });
    if let Err(error) = outcome {
        say(&format!("wheelwort: {error:#}"));
        return COULD_NOT;
    }
    let notes = report.notes.join("; ");
    match report.findings {
        0 => print(format!("Sound: {notes}.").as_bytes()),
        1 => print(b"Not sound: 1 finding. Keep the folder as it is, and restore the last backup into another one."),
        many => print(
            format!("Not sound: {many} findings. Keep the folder as it is, and restore the last backup into another one.")
                .as_bytes(),
        ),
    };
    u8::from(report.findings > 0)
}

async fn look(config: &Config, report: &mut Report) {
    let folder: &Path = &config.data;
    let file = folder.join(FILE);
    if !file.is_file() {
        report.finding(&format!("{}: there is no {FILE} in it", folder.display()));
        return;
    }
    let app = match App::open_to_read(&file, Clock::system(), library::book()).await {
        Ok(app) => app.keeping_evidence_in(config.evidence_store.clone()),
        Err(error) => {
            report.finding(&format!("{}: {error}", file.display()));
            return;
        }
    };
    if let Err(error) = parts(&app, report).await {
        report.finding(&format!("{}: {error}", file.display()));
    }
    app.close().await;
}

/// Every part in turn; what cannot be read at all ends it.
async fn parts(app: &App, report: &mut Report) -> Result<(), StoreError> {
    for line in app.store.unsound().await? {
        report.finding(&format!("data file: {line}"));
    }
    report.notes.push("the file".to_owned());
    trail(app, report).await?;
    for organisation in app.store.organisations().await? {
        documents(&app.on_behalf_of(organisation), report).await;
    }
    report.notes.push("every revision".to_owned());
    files(app, report).await;
    Ok(())
}

async fn trail(app: &App, report: &mut Report) -> Result<(), StoreError> {
    for chain in audit_trail::verify(&app.store).await? {
        match chain.broken {
            Some(broken) => report.finding(&format!(
                "audit trail of {} ({}), line {}: {}",
                chain.name, chain.organisation, broken.number, broken.what
            )),
            None if chain.number > 0 => report.notes.push(format!(
                "the audit trail of {}, which ends at line {} with {}",
                chain.name, chain.number, chain.hash
            )),
            None => {}
        }
    }
    Ok(())
}

async fn documents(app: &App, report: &mut Report) {
    match pathways::damaged(app).await {
        Err(error) => report.finding(&format!("pathways: {error}")),
        Ok(found) => {
            for damage in found {
                let revision = damage
                    .revision
                    .map_or_else(String::new, |number| format!(", revision {number}"));
                report.finding(&format!("pathway {}{revision}: {}", damage.pathway, damage.what));
            }
        }
    }
}

/// Every file of evidence against its hash. One that no record names is no finding: an interrupted upload leaves it.
async fn files(app: &App, report: &mut Report) {
    let faults = match evidence::verify(app).await {
        Ok(faults) => faults,
        Err(error) => return report.finding(&format!("evidence: {error}")),
    };
    let (serious, others): (Vec<_>, Vec<_>) = faults.into_iter().partition(evidence::Fault::is_serious);
    for fault in serious {
        report.finding(&format!("evidence of {fault}"));
    }
    report.notes.push("every file of evidence".to_owned());
    if !others.is_empty() {
        let names: Vec<&str> = others.iter().map(|fault| fault.id.as_str()).collect();
        report.notes.push(format!(
            "{} that no record names ({})",
            if names.len() == 1 {
                "1 file".to_owned()
            } else {
                format!("{} files", names.len())
            },
            names.join(", ")
        ));
    }
}
