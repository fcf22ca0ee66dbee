//! Demonstration data: one invented company. Everything in these documents is made up; published factors keep their source.

mod evidence;

pub use evidence::evidence;

use crate::app::App;
use crate::core::documents::{Pathway, Problems};
use crate::evidence::load_examples;
use crate::pathways::{self, PathwayError, Saved};

/// The documents of the demonstration, by file name.
pub const PATHWAYS: &[(&str, &str)] = &[
    (
        "a_wheat_chp_rail.json",
        include_str!("pathways/a_wheat_chp_rail.json"),
    ),
    (
        "b_maize_truck_and_barge.json",
        include_str!("pathways/b_maize_truck_and_barge.json"),
    ),
    (
        "c_beet_campaign_biogas.json",
        include_str!("pathways/c_beet_campaign_biogas.json"),
    ),
    (
        "d_straw_lignin.json",
        include_str!("pathways/d_straw_lignin.json"),
    ),
    (
        "e_cane_imported.json",
        include_str!("pathways/e_cane_imported.json"),
    ),
    (
        "f_wheat_with_errors.json",
        include_str!("pathways/f_wheat_with_errors.json"),
    ),
    (
        "g_wheat_converted_grassland.json",
        include_str!("pathways/g_wheat_converted_grassland.json"),
    ),
    (
        "h_wheat_co2_capture.json",
        include_str!("pathways/h_wheat_co2_capture.json"),
    ),
];

/// The pathways of the demonstration.
///
/// # Errors
/// When a document does not hold: a test reads them all.
pub fn documents() -> Result<Vec<Pathway>, Problems> {
    PATHWAYS
        .iter()
        .map(|(_, text)| Pathway::from_bytes(text.as_bytes()))
        .collect()
}

/// Stores the demonstration with its evidence; what is there already stays as it is.
///
/// # Errors
/// When the database fails.
pub async fn load(app: &App) -> Result<Vec<Saved>, PathwayError> {
    let documents = documents()?;
    load_examples(app, evidence()).await?;
    pathways::load_examples(app, documents).await
}

/// Takes the demonstration out again, with what was changed in it and the evidence that nothing else names; how many
/// pathways went.
///
/// # Errors
/// When the database fails.
pub async fn remove(app: &App) -> Result<u64, PathwayError> {
    pathways::remove_examples(app, &documents()?).await
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::collections::BTreeSet;

    #[test]
    fn evidence_is_there_for_whatever_the_documents_name_and_for_nothing_else() {
        let documents = documents().expect("they hold");
        let named: BTreeSet<String> = documents
            .iter()
            .flat_map(|document| pathways::rows::Rows::of(document).evidence)
            .map(|place| place.evidence)
            .collect();
        let there: Vec<String> = evidence().into_iter().map(|example| example.id).collect();
        assert_eq!(there, named.into_iter().collect::<Vec<_>>());
        for example in evidence() {
            assert!(
                example.text.starts_with("Invented for demonstration"),
                "{}",
                example.id
            );
        }
    }

    #[test]
    fn every_document_holds_and_is_marked() {
        let documents = documents().expect("they hold");
        assert_eq!(documents.len(), PATHWAYS.len());
        assert!(documents.iter().all(|document| document.example));
    }
}
