//! Demonstration data: one invented company. Everything in these documents is made up; published factors keep their source.

mod evidence;

pub use evidence::evidence;

use crate::app::App;
use crate::app::who::Right;
use crate::core::documents::{Pathway, Problems};
use crate::evidence::load_examples;
use crate::pathways::{self, PathwayError, Saved};
use crate::people::{self, NewPerson, NewToken, PeopleError, Role};
use uuid::Uuid;

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

/// The people of the demonstration.
#[derive(Clone, Debug)]
pub struct DemoPeople {
    /// Public id of each, with what they are, in words; the first is whom visitors are.
    pub ids: Vec<(Uuid, &'static str)>,
    /// A token that reads.
    pub token: String,
}

/// Adds the invented people of the demonstration. Nobody knows their passwords: they are signed in without.
///
/// # Errors
/// When the database fails.
pub async fn people(app: &App) -> Result<DemoPeople, PeopleError> {
    let invented = [
        ("Mara Ellgren", "mara.ellgren", Role::Preparer, "the preparer"),
        ("Tomas Quarnby", "tomas.quarnby", Role::Approver, "the approver"),
        (
            "Ida Rosswick",
            "ida.rosswick",
            Role::Administrator,
            "the administrator",
        ),
    ];
    let mut ids = Vec::new();
    for (name, sign_in_name, role, words) in invented {
        let new = NewPerson {
            name: name.into(),
            sign_in_name: sign_in_name.into(),
            roles: [role].into(),
            audit: None,
            password: Some(people::secrets::fresh(&app.clock)),
        };
        ids.push((people::add(app, new).await?.person.id, words));
    }
    let new = NewToken {
        label: "demonstration".into(),
        scopes: [Right::Read].into(),
        days: 30,
    };
    let preparer = ids.first().map(|(id, _)| *id);
    let token = people::make_token(app, preparer, new).await?.token;
    Ok(DemoPeople { ids, token })
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
