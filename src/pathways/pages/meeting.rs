//! Two people met: who saved while somebody typed, and, for whole documents, the choice of each field put into what was
//! typed. The joining itself is `card::merge`.

use super::card::merge::Met;
use crate::app::App;
use crate::audit_trail;
use crate::core::documents::pointer;
use crate::core::documents::{Problem, Problems};
use serde_json::Value;
use std::collections::BTreeMap;
use uuid::Uuid;

/// Who saved meanwhile, in words.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Meeting {
    /// Says what happened: "T. Hale saved revision 15 while you were typing".
    pub what: String,
    /// Head of the column of the revision that the form began from.
    pub started: String,
    /// Head of the column of the other version.
    pub theirs: String,
}

/// Who saved a revision while somebody typed on top of another.
pub(super) async fn meeting(app: &App, pathway: Uuid, started: i64, revision: i64) -> Meeting {
    // Who it was is a courtesy: without it the page still says everything else.
    let line = audit_trail::of_revision(app, pathway, revision)
        .await
        .ok()
        .flatten();
    let started = format!("You started from, {started}");
    let Some(line) = line else {
        return Meeting {
            what: format!("revision {revision} was saved while you were typing"),
            started,
            theirs: format!("Revision {revision}"),
        };
    };
    let time = line.at.strftime("%H:%M");
    if line.by.person.is_some() && line.by.person == app.who.person {
        return Meeting {
            what: format!("you saved revision {revision} elsewhere while this page was open"),
            started,
            theirs: format!("Saved elsewhere, {revision}, {time} UTC"),
        };
    }
    Meeting {
        what: format!("{} saved revision {revision} while you were typing", line.by.name),
        started,
        theirs: format!("{}, {revision}, {time} UTC", line.by.name),
    }
}

/// How many fields differ, as a sentence.
pub(super) fn differ(met: &[Met]) -> String {
    match met.len() {
        1 => "One field differs.".to_owned(),
        many => format!("{many} fields differ."),
    }
}

/// Puts the choices of a form into a document: `pick:` and a pointer says `other` where what could stand there instead is
/// to stand; `stands:` and `other:` hold both as JSON. A field that was changed by hand since is left, and told.
pub(super) fn choose(document: &mut Value, fields: &BTreeMap<String, String>) -> Problems {
    let mut problems = Problems::default();
    let pointers: Vec<&str> = fields
        .iter()
        .filter(|(_, choice)| choice.as_str() == "other")
        .filter_map(|(name, _)| name.strip_prefix("pick:"))
        .collect();
    // From the end, so that what is taken out of a list moves nothing that is still to be chosen.
    let mut ordered: Vec<(Vec<Step>, &str)> = pointers.into_iter().map(|p| (steps(p), p)).collect();
    ordered.sort_by(|a, b| b.0.cmp(&a.0));
    for (_, pointer) in ordered {
        let held = |name: &str| -> Result<Option<Value>, ()> {
            match fields.get(&format!("{name}:{pointer}")).map(String::as_str) {
                None | Some("") => Ok(None),
                Some(text) => serde_json::from_str(text).map(Some).map_err(|_| ()),
            }
        };
        let done = match (held("stands"), held("other")) {
            (Ok(stands), Ok(other)) => put(document, pointer, stands.as_ref(), other),
            _ => false,
        };
        if !done {
            let problem = Problem {
                pointer: pointer.to_owned(),
                detail: "This field was changed in the document as well, so the choice for it was not taken."
                    .into(),
                remedy: "Set it in the document below, then save.".into(),
            };
            problems.add(&problem.pointer, problem.detail, problem.remedy);
        }
    }
    problems
}

/// A step of a pointer; places in a list in the order of their numbers.
#[derive(PartialEq, Eq, PartialOrd, Ord)]
enum Step {
    Place(usize),
    Name(String),
}

fn steps(pointer: &str) -> Vec<Step> {
    let step = |text: &str| match text.parse() {
        Ok(place) => Step::Place(place),
        Err(_) => Step::Name(text.to_owned()),
    };
    pointer.split('/').skip(1).map(step).collect()
}

/// Puts a value where another stood; false if that is not there any more.
fn put(document: &mut Value, pointer: &str, stands: Option<&Value>, other: Option<Value>) -> bool {
    let Some((above, name)) = pointer.rsplit_once('/') else {
        return false;
    };
    let name = pointer::name(name);
    match (document.pointer_mut(above), stands, other) {
        (Some(Value::Object(fields)), stands, other) if fields.get(&name) == stands => {
            match other {
                Some(other) => fields.insert(name, other),
                None => fields.remove(&name),
            };
            true
        }
        (Some(Value::Array(items)), stands, other) => {
            let Ok(place) = name.parse::<usize>() else {
                return false;
            };
            match (stands, other) {
                (Some(stands), Some(other)) if items.get(place) == Some(stands) => {
                    items.splice(place..=place, [other]);
                    true
                }
                (Some(stands), None) if items.get(place) == Some(stands) => {
                    items.remove(place);
                    true
                }
                (None, Some(other)) if place <= items.len() && !items.contains(&other) => {
                    items.insert(place, other);
                    true
                }
                _ => false,
            }
        }
        _ => false,
    }
}

#[cfg(test)]
mod tests {
    use super::super::card::merge::join;
    use super::*;
    use proptest::prelude::*;
    use serde_json::json;

    /// The fields of a form in which every choice is for the other version.
    fn all_others(met: &[Met]) -> BTreeMap<String, String> {
        met.iter()
            .flat_map(|met| {
                [
                    (format!("pick:{}", met.pointer), "other".to_owned()),
                    (format!("stands:{}", met.pointer), met.stands_json()),
                    (format!("other:{}", met.pointer), met.other_json()),
                ]
            })
            .collect()
    }

    #[test]
    fn what_was_changed_by_hand_since_is_left_and_told() {
        let fields = BTreeMap::from(
            [
                ("pick:/a", "other"),
                ("stands:/a", "1"),
                ("other:/a", "2"),
                ("pick:/b", "stands"),
            ]
            .map(|(name, text)| (name.to_owned(), text.to_owned())),
        );
        let mut document = json!({ "a": 1, "b": 1 });
        assert!(choose(&mut document, &fields).is_empty());
        assert_eq!(document, json!({ "a": 2, "b": 1 }));
        assert_eq!(choose(&mut document, &fields).list()[0].pointer, "/a");
        assert_eq!(document, json!({ "a": 2, "b": 1 }));
    }

    fn stage() -> impl Strategy<Value = Value> {
        (0..4, proptest::option::of(0..3), "[a-c]{0,2}")
            .prop_map(|(amount, share, note)| json!({ "amount": amount, "share": share, "note": note }))
    }

    fn document() -> impl Strategy<Value = Value> {
        (proptest::collection::btree_map("[a-e]", stage(), 0..4), 0..3).prop_map(|(stages, year)| {
            let stages: Vec<Value> = stages
                .into_iter()
                .map(|(key, mut stage)| {
                    stage["key"] = json!(key);
                    stage
                })
                .collect();
            json!({ "year": year, "stages": stages })
        })
    }

    proptest! {
        /// Every row can be chosen the other way, whatever the other rows say.
        #[test]
        fn every_choice_can_be_taken(base in document(), theirs in document(), mine in document()) {
            let (joined, met) = join(&base, &theirs, &mine);
            let mut chosen = joined.clone();
            let problems = choose(&mut chosen, &all_others(&met));
            prop_assert!(problems.is_empty(), "{:?}", problems.list());
            for row in &met {
                prop_assert!(row.stands != row.other, "{row:?}");
                if let (Some(_), Some(other)) = (&row.stands, &row.other) {
                    // Lists that items come into or go from move; a key finds them.
                    prop_assert!(chosen.to_string().contains(&other.to_string()), "{row:?}: {chosen}");
                }
            }
        }

        /// What only one of them touched is as they left it.
        #[test]
        fn what_one_alone_changed_stands(base in document(), one in document()) {
            prop_assert_eq!(join(&base, &base, &one).0, one.clone());
            prop_assert_eq!(join(&base, &one, &one), (one, Vec::new()));
        }
    }
}
