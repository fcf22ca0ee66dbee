//! Addresses: one place, so that pages and redirects agree. Ids and keys are escaped for a path.

use crate::core::documents::Pathway;
use crate::core::documents::pathway::Stage;
pub use crate::web::links::{factor, material, pathway, rule_set, segment};

/// The page of a pathway after a save, which tells once what it did.
pub fn saved(id: &str, revision: i64) -> String {
    format!("{}?saved={revision}", pathway(id))
}

/// The page of a stage.
pub fn stage(id: &str, key: &str) -> String {
    format!("/pathways/{}/stages/{}", segment(id), segment(key))
}

/// The workings of a pathway.
pub fn workings(id: &str) -> String {
    format!("/pathways/{}/workings", segment(id))
}

/// The request that gives the assessment of a revision.
pub fn data_assessment(id: &str, revision: u64) -> String {
    format!(
        "GET /api/v1/pathways/{}/assessment?revision={revision}",
        segment(id)
    )
}

/// The anchor of a workings entry: `#stage-input`, or `#stage` for a stage.
pub fn workings_anchor(stage: &str, input: &str) -> String {
    let clean = |text: &str| text.replace([':', '/'], "-");
    if input.is_empty() {
        clean(stage)
    } else {
        format!("{}-{}", clean(stage), clean(input))
    }
}

/// The anchor on a stage page of the field that a finding points at: `inputs.gas` stands at `#input-gas`.
pub fn field_anchor(field: &str) -> String {
    let mut parts = field.split('.');
    match (parts.next(), parts.next()) {
        (Some("inputs"), Some(key)) => format!("#input-{key}"),
        (Some("co_products"), Some(key)) => format!("#co-product-{key}"),
        (Some("output"), _) => "#output".to_owned(),
        (Some("intakes"), _) => "#intakes".to_owned(),
        _ => String::new(),
    }
}

/// The id of a form field by its JSON pointer inside the stage.
pub fn field_id(pointer: &str) -> String {
    let mut out = String::from("f");
    for part in pointer.split('/').filter(|part| !part.is_empty()) {
        out.push('-');
        out.extend(
            part.chars()
                .map(|c| if c.is_ascii_alphanumeric() { c } else { '-' }),
        );
    }
    out
}

/// The stage that a pointer into a pathway names, and the rest of the pointer.
pub fn stage_of<'p, 'q>(pathway: &'p Pathway, pointer: &'q str) -> Option<(&'p Stage, &'q str)> {
    let rest = pointer.strip_prefix("/stages/")?;
    let (index, rest) = match rest.find('/') {
        Some(slash) => rest.split_at(slash),
        None => (rest, ""),
    };
    Some((pathway.stages.get(index.parse::<usize>().ok()?)?, rest))
}

/// Where a pointer into a pathway can be mended: address and words.
pub fn place(id: &str, pathway: &Pathway, pointer: &str) -> (Option<String>, String) {
    match stage_of(pathway, pointer) {
        Some((at, "")) => (Some(stage(id, &at.key)), at.title().to_owned()),
        Some((at, rest)) => (
            Some(format!("{}#{}", stage(id, &at.key), field_id(rest))),
            at.title().to_owned(),
        ),
        None => (None, pointer.trim_start_matches('/').to_owned()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn addresses_escape_what_is_not_a_path() {
        assert_eq!(stage("a b", "x/y"), "/pathways/a%20b/stages/x%2Fy");
        assert_eq!(factor("eu-2022-996/fert_n_an"), "/factors/eu-2022-996/fert_n_an");
        assert_eq!(field_anchor("inputs.gas"), "#input-gas");
        assert_eq!(
            field_id("/inputs/0/model/distance/value"),
            "f-inputs-0-model-distance-value"
        );
        assert_eq!(workings_anchor("default:e_td", "e_td"), "default-e_td-e_td");
    }
}
