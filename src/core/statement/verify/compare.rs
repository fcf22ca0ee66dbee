//! Compares what a file says with what was worked out, value by value in document order.

use crate::core::documents::pointer;
use serde_json::Value;

/// How closely to look.
#[derive(Clone, Copy, Debug)]
pub(super) struct Look {
    /// Compare wording too: texts, steps of workings, findings.
    pub words: bool,
    /// Compare the last digits too.
    pub dust: bool,
}

/// The first thing that is not the same.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Compared {
    /// A value.
    Value {
        /// Where.
        pointer: String,
        /// In the file.
        stated: Value,
        /// As worked out.
        found: Value,
    },
    /// The order of a list.
    Order {
        /// Where.
        pointer: String,
    },
}

/// Last digits that may differ between machines, whose exponentials are not the same to the last bit.
const RELATIVE: f64 = 1e-9;
/// What counts as nothing beside a figure that is zero.
const NOTHING: f64 = 1e-12;
/// Parts that another version of the program may word anew.
const WORDED: [&str; 2] = ["workings", "findings"];

/// The first difference.
pub(super) fn compare(at: &str, stated: &Value, found: &Value, look: Look) -> Option<Compared> {
    match (stated, found) {
        (Value::Object(theirs), Value::Object(ours)) => {
            let mut names: Vec<&String> = theirs.keys().chain(ours.keys()).collect();
            names.sort_unstable();
            names.dedup();
            let null = Value::Null;
            names.into_iter().find_map(|name| {
                if !look.words && WORDED.contains(&name.as_str()) {
                    return None;
                }
                let pointer = format!("{at}/{}", pointer::step(name));
                let (stated, found) = (theirs.get(name).unwrap_or(&null), ours.get(name).unwrap_or(&null));
                compare(&pointer, stated, found, look)
            })
        }
        (Value::Array(theirs), Value::Array(ours)) => lists(at, theirs, ours, look),
        (Value::Number(stated_number), Value::Number(found_number)) => {
            let (a, b) = (stated_number.as_f64()?, found_number.as_f64()?);
            let same = match look.dust {
                true => a == b,
                false => (a - b).abs() <= RELATIVE * a.abs().max(b.abs()) + NOTHING,
            };
            (!same).then(|| differ(at, stated, found))
        }
        (Value::String(_), Value::String(_)) if !look.words => None,
        (stated, found) => (stated != found).then(|| differ(at, stated, found)),
    }
}

fn differ(at: &str, stated: &Value, found: &Value) -> Compared {
    Compared::Value {
        pointer: at.to_owned(),
        stated: stated.clone(),
        found: found.clone(),
    }
}

fn lists(at: &str, theirs: &[Value], ours: &[Value], look: Look) -> Option<Compared> {
    let null = Value::Null;
    let item = |list: &[Value], index: usize| list.get(index).unwrap_or(&null).clone();
    let first = (0..theirs.len().max(ours.len())).find_map(|index| {
        let pointer = format!("{at}/{index}");
        compare(&pointer, &item(theirs, index), &item(ours, index), look)
    })?;
    let mut left: Vec<&Value> = ours.iter().collect();
    let all_there = theirs.len() == ours.len()
        && theirs.iter().all(|value| {
            let place = left
                .iter()
                .position(|found| compare(at, value, found, look).is_none());
            place.map(|place| left.swap_remove(place)).is_some()
        });
    Some(match all_there {
        true => Compared::Order {
            pointer: at.to_owned(),
        },
        false => first,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    const LOOSE: Look = Look {
        words: true,
        dust: false,
    };

    fn pointer(stated: &Value, found: &Value, look: Look) -> Option<String> {
        compare("", stated, found, look).map(|compared| match compared {
            Compared::Value { pointer, .. } => pointer,
            Compared::Order { pointer } => format!("order of {pointer}"),
        })
    }

    #[test]
    fn the_first_difference_is_named() {
        let ours = json!({ "a": 1.0, "b": { "c": [1, 2, 3] }, "d": "x" });
        assert_eq!(pointer(&ours, &ours, LOOSE), None);
        let stated = json!({ "a": 1.0, "b": { "c": [1, 5, 3] }, "d": "y" });
        assert_eq!(pointer(&stated, &ours, LOOSE).as_deref(), Some("/b/c/1"));
        let stated = json!({ "a": 1.0, "b": { "c": [3, 2, 1] }, "d": "x" });
        assert_eq!(pointer(&stated, &ours, LOOSE).as_deref(), Some("order of /b/c"));
        let stated = json!({ "a": 1.0, "b": { "c": [1, 2] }, "d": "x" });
        assert_eq!(pointer(&stated, &ours, LOOSE).as_deref(), Some("/b/c/2"));
        assert_eq!(
            pointer(&json!({ "a": 1.0, "b": { "c": [1, 2, 3] } }), &ours, LOOSE).as_deref(),
            Some("/d")
        );
    }

    #[test]
    fn dust_and_words_are_looked_at_when_asked() {
        let (stated, ours) = (json!({ "a": 30.000_000_001 }), json!({ "a": 30.0 }));
        assert_eq!(pointer(&stated, &ours, LOOSE), None);
        assert_eq!(
            pointer(&stated, &ours, Look { dust: true, ..LOOSE }).as_deref(),
            Some("/a")
        );
        assert_eq!(
            pointer(&json!({ "a": 30.01 }), &ours, LOOSE).as_deref(),
            Some("/a")
        );
        let (stated, ours) = (
            json!({ "a": "old", "workings": [1] }),
            json!({ "a": "new", "workings": [] }),
        );
        assert_eq!(
            pointer(
                &stated,
                &ours,
                Look {
                    words: false,
                    dust: false
                }
            ),
            None
        );
        assert_eq!(pointer(&stated, &ours, LOOSE).as_deref(), Some("/a"));
    }
}
