//! What the checks have to say, in rows; and the figure that each finding questions.

use super::stage::{Entry, FieldView};
use super::verdict::{severity_class, severity_words};
use super::{Head, links};
use crate::core::documents::Pathway;
use crate::core::documents::assessment::{Finding, Severity};
use serde_json::Value;

/// One finding.
#[derive(Clone, Debug, PartialEq)]
pub struct FindingRow {
    /// Class of its severity.
    pub class: &'static str,
    /// Severity in words.
    pub severity: &'static str,
    /// Id of the check.
    pub id: String,
    /// What is so.
    pub message: String,
    /// What to do.
    pub remedy: String,
    /// The written reason why it is accepted; empty where there is none.
    pub reason: String,
    /// Where it points.
    pub href: Option<String>,
    /// The words of the link.
    pub place: String,
    /// Key of the stage; empty for the whole pathway.
    pub stage: String,
    /// Field of the finding.
    pub field: String,
    /// True if a written reason answers it.
    pub takes_reason: bool,
}

impl FindingRow {
    /// A finding of a pathway.
    pub fn of(head: &Head, pathway: &Pathway, finding: &Finding) -> FindingRow {
        let stage = pathway.stages.iter().find(|stage| stage.key == finding.stage);
        let (href, place) = match stage {
            Some(stage) => {
                let anchor = links::field_anchor(&finding.field);
                (
                    Some(format!("{}{anchor}", links::stage(&head.id, &stage.key))),
                    stage.title().to_owned(),
                )
            }
            None if finding.field == "carbon" => (Some("#carbon".to_owned()), "Carbon".to_owned()),
            None => (None, "the whole pathway".to_owned()),
        };
        FindingRow {
            class: severity_class(finding.severity),
            severity: severity_words(finding.severity),
            id: finding.id.clone(),
            message: finding.message.clone(),
            remedy: finding.remedy.clone(),
            reason: finding.reason.clone().unwrap_or_default(),
            href,
            place,
            stage: finding.stage.clone(),
            field: finding.field.clone(),
            takes_reason: finding.severity == Severity::Warn && head.revision > 0,
        }
    }
}

/// All findings of a pathway, worst first.
pub fn rows(head: &Head, pathway: &Pathway, findings: &[Finding]) -> Vec<FindingRow> {
    let mut sorted: Vec<&Finding> = findings.iter().collect();
    sorted.sort_by_key(|finding| finding.severity);
    sorted
        .into_iter()
        .map(|finding| FindingRow::of(head, pathway, finding))
        .collect()
}

/// The input of its stage that a finding is about: `inputs.gas` and `inputs.gas.amount` are about `gas`.
pub fn input_of(finding: &Finding) -> Option<&str> {
    let rest = finding.field.strip_prefix("inputs.")?;
    rest.split('.').next()
}

/// The pointer inside a stage that the field of a finding names, as far as the stage has it: `co_products.ddgs.lhv` is
/// `/co_products/0/lhv`.
fn pointer(stage: &Value, field: &str) -> String {
    let mut parts = field.split('.');
    let first = parts.next().unwrap_or_default();
    let mut at = format!("/{first}");
    if let Some(list) = stage.pointer(&at).and_then(Value::as_array)
        && let Some(key) = parts.next()
    {
        let name = if first == "intakes" { "from" } else { "key" };
        let place = list
            .iter()
            .position(|item| item.get(name).and_then(Value::as_str) == Some(key));
        match place {
            Some(place) => at.push_str(&format!("/{place}")),
            None => return at,
        }
    }
    for part in parts {
        at.push_str(&format!("/{part}"));
    }
    at
}

/// Puts a finding of a stage at the figure it questions: its field, else its entry, else the stage itself.
pub fn place(
    finding: &Finding,
    row: FindingRow,
    stage: &Value,
    about: &mut Entry,
    entries: &mut [&mut Entry],
) {
    let at = pointer(stage, &finding.field);
    let last = finding.field.split('.').nth(2);
    // The parameters of a model are named without the model.
    let names = |field: &FieldView, entry: &Entry| {
        field.name == at
            || last.is_some_and(|last| {
                entry.at.as_str() == parent(&at) && field.name == format!("{}/model/{last}", entry.at)
            })
    };
    for entry in entries.iter_mut() {
        let here = |field: &FieldView| names(field, entry);
        let (line, below, rare) = (
            entry.line.iter().position(here),
            entry.below.iter().position(here),
            entry.rare.iter().position(here),
        );
        let field = match (line, below, rare) {
            (Some(index), _, _) => entry.line.get_mut(index),
            (_, Some(index), _) => entry.below.get_mut(index),
            (_, _, Some(index)) => {
                entry.rare_open = true;
                entry.rare.get_mut(index)
            }
            _ => None,
        };
        if let Some(field) = field {
            field.findings.push(row);
            return;
        }
    }
    let inside = |entry: &Entry| {
        !entry.at.is_empty()
            && at
                .strip_prefix(entry.at.as_str())
                .is_some_and(|rest| rest.is_empty() || rest.starts_with('/'))
    };
    // A finding about all of a list stands at its first entry.
    let of_list = |entry: &Entry| entry.at.strip_prefix(at.as_str()) == Some("/0");
    let found = entries.iter().position(|entry| inside(entry));
    let found = found.or_else(|| entries.iter().position(|entry| of_list(entry)));
    match found.and_then(|index| entries.get_mut(index)) {
        Some(entry) => entry.findings.push(row),
        None => about.findings.push(row),
    }
}

fn parent(pointer: &str) -> &str {
    pointer.rsplit_once('/').map_or("", |(parent, _)| parent)
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    #[test]
    fn fields_of_findings_become_pointers() {
        let stage = json!({ "inputs": [{ "key": "gas" }, { "key": "power" }], "co_products": [{ "key": "ddgs" }],
            "intakes": [{ "from": "store" }] });
        for (field, at) in [
            ("inputs.power", "/inputs/1"),
            ("inputs.power.amount", "/inputs/1/amount"),
            ("co_products.ddgs.lhv", "/co_products/0/lhv"),
            ("intakes.store", "/intakes/0"),
            ("intakes", "/intakes"),
            ("inputs.gone.amount", "/inputs"),
            ("output", "/output"),
            ("stated.covers", "/stated/covers"),
        ] {
            assert_eq!(pointer(&stage, field), at, "{field}");
        }
    }
}
