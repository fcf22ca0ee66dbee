//! Whoever changes a file is found out, with the key or without it, and told apart.

use super::made::{BYTES, again, bytes_of, changed, json_of_it, public};
use ed25519_dalek::SigningKey;
use proptest::prelude::*;
use serde_json::{Value, json};
use wheelwort::core::statement::seal::PublicKey;
use wheelwort::core::statement::verify::{Answer, Verdict, verify};
use wheelwort::library;

fn checked(bytes: &[u8]) -> Verdict {
    verify(bytes, &[public()], library::book())
}

fn answer(bytes: &[u8]) -> Answer {
    checked(bytes).answer.expect("something is wrong")
}

fn names(bytes: &[u8]) -> &'static str {
    answer(bytes).name()
}

const NET: &str = "/assessment/document/net/g_co2e_per_mj";

#[test]
fn a_tampered_figure_is_named_with_both_values() {
    let net = json_of_it().pointer(NET).and_then(Value::as_f64).expect("a net");
    for sealed_again in [false, true] {
        match answer(&changed(NET, json!(net - 1.5), sealed_again)) {
            Answer::Differs {
                pointer,
                stated,
                found,
            } => {
                assert_eq!(pointer, NET);
                assert_ne!(stated, found);
            }
            other => panic!("{other}"),
        }
    }
    // The last digit: dust to a machine, but not what was hashed.
    let bytes = changed(NET, json!(f64::from_bits(net.to_bits() + 1)), false);
    assert!(matches!(answer(&bytes), Answer::Differs { pointer, .. } if pointer == NET));
}

#[test]
fn a_tampered_step_of_the_workings_is_named() {
    let pointer = "/assessment/document/stages/0/inputs/0/workings/0/value";
    assert!(
        matches!(answer(&changed(pointer, json!(1.0), true)), Answer::Differs { pointer: p, .. } if p == pointer)
    );
}

#[test]
fn a_figure_of_the_statement_itself_is_worked_out_again() {
    let pointer = "/figures/energy/energy_mj";
    assert!(
        matches!(answer(&changed(pointer, json!(1.0), true)), Answer::Differs { pointer: p, .. } if p == pointer)
    );
}

#[test]
fn a_swapped_factor_is_named() {
    let document = json_of_it();
    let factors = document["data"]["factors"].as_array().expect("factors");
    let at = factors
        .iter()
        .position(|factor| factor["id"] == "eu-2022-996/fert_n_an")
        .expect("nitrate");
    let pointer = format!("/data/factors/{at}/gases/co2_fossil");
    match answer(&changed(&pointer, json!(0.5), true)) {
        Answer::Swapped {
            what,
            field,
            stated,
            published,
        } => {
            assert_eq!(what, "factor eu-2022-996/fert_n_an");
            assert_eq!(
                (field.as_str(), stated.as_str(), published.as_str()),
                ("gases/co2_fossil", "0.5", "2.671")
            );
        }
        other => panic!("{other}"),
    }
}

#[test]
fn a_swapped_comparator_weight_material_or_constant_is_named() {
    for (pointer, value, what) in [
        (
            "/data/rule_set/comparator/value",
            json!(120),
            "rule set eu-2018-2001",
        ),
        ("/data/gwp_set/n2o", json!(200), "set of gas weights eu-2018-2001"),
        ("/data/constants/0/value", json!(0.5), "figure "),
        ("/data/materials/0/name", json!("Gold"), "material "),
        ("/data/editions/0/title", json!("Mine"), "edition "),
    ] {
        match answer(&changed(pointer, value, true)) {
            Answer::Swapped { what: found, .. } => assert!(found.starts_with(what), "{found}"),
            other => panic!("{pointer}: {other}"),
        }
    }
}

#[test]
fn a_reordered_list_is_told_from_a_changed_one() {
    for pointer in [
        "/assessment/document/stages",
        "/figures/terms",
        "/data/factors",
        "/data/materials",
    ] {
        for sealed_again in [false, true] {
            let mut list = json_of_it()
                .pointer(pointer)
                .and_then(Value::as_array)
                .cloned()
                .expect("a list");
            list.swap(0, 1);
            match answer(&changed(pointer, Value::Array(list), sealed_again)) {
                Answer::Reordered { pointer: found } => assert_eq!(found, pointer),
                other => panic!("{pointer}: {other}"),
            }
        }
    }
}

#[test]
fn another_pathway_is_not_the_one_that_was_assessed() {
    let mut document = json_of_it();
    document["pathway"]["document"]["name"] = "Better wheat".into();
    assert_eq!(names(&again(document)), "pathway");
}

#[test]
fn what_no_figure_tells_is_told_by_the_hash() {
    let bytes = changed("/facts/recipient/name", json!("Somebody else"), false);
    assert_eq!(names(&bytes), "hash");
    // Whoever has the key issues another statement: that is what keys are for.
    assert!(checked(&changed("/facts/recipient/name", json!("Somebody else"), true)).is_verified());
}

#[test]
fn a_foreign_key_a_bad_one_and_a_false_signature_are_told_apart() {
    let other = PublicKey::of(&SigningKey::from_bytes(&[43; 32]));
    let verdict = verify(&BYTES, &[other], library::book());
    assert!(
        matches!(verdict.answer, Some(Answer::ForeignKey { .. })),
        "{verdict}"
    );
    let value = json!(other.hex());
    assert_eq!(names(&changed("/signature/public_key", value, false)), "bad_key");
    let mut document = json_of_it();
    document["signature"]["public_key"] = other.hex().into();
    document["signature"]["key_id"] = other.id().into();
    let verdict = verify(&bytes_of(&document), &[], library::book());
    assert!(
        matches!(verdict.answer, Some(Answer::Signature { .. })),
        "{verdict}"
    );
    assert_eq!(
        names(&changed("/signature/algorithm", json!("none"), false)),
        "bad_key"
    );
    assert_eq!(
        names(&changed("/signature/value", json!("0".repeat(128)), false)),
        "signature"
    );
}

#[test]
fn formats_and_fields_that_are_not_known_are_said_so() {
    assert_eq!(
        names(&changed("/format", json!("wheelwort.statement/2"), false)),
        "newer_format"
    );
    assert_eq!(
        names(&changed("/format", json!("wheelwort.pathway/1"), false)),
        "unreadable"
    );
    assert_eq!(names(b"{"), "unreadable");
    assert_eq!(names(b"{\"format\":\"wheelwort.statement/1\"}"), "unreadable");
    for place in [
        "",
        "/facts",
        "/facts/issuer",
        "/pathway/document",
        "/assessment/document/net",
        "/figures",
        "/data/factors/0",
    ] {
        let mut document = json_of_it();
        document.pointer_mut(place).expect("a place")["approved_of"] = json!("the best");
        match answer(&again(document)) {
            Answer::UnknownField { pointer } => assert_eq!(pointer, format!("{place}/approved_of")),
            other => panic!("{place}: {other}"),
        }
    }
    assert_eq!(
        names(&again({
            let mut d = json_of_it();
            d["previous"] = Value::Null;
            d
        })),
        "not_written"
    );
}

#[test]
fn a_file_that_was_written_anew_is_not_the_original() {
    let pretty = serde_json::to_vec_pretty(&json_of_it()).expect("json");
    assert_eq!(names(&pretty), "rewritten");
    let with_line_end = [&BYTES[..], b"\n"].concat();
    assert!(checked(&with_line_end).is_verified());
}

#[test]
fn an_example_cannot_pass_as_real_nor_one_person_as_two() {
    let mut document = json_of_it();
    document.as_object_mut().expect("an object").remove("example");
    assert!(matches!(answer(&again(document)), Answer::Differs { pointer, .. } if pointer == "/example"));
    assert_eq!(
        names(&changed("/approved_by/id", json!("person-1"), true)),
        "same_person"
    );
    assert!(matches!(
        answer(&changed("/status", json!("draft"), true)),
        Answer::Differs { .. }
    ));
}

#[test]
fn the_words_of_an_issuer_are_the_programs() {
    assert!(matches!(
        answer(&changed("/words/cautions/0", json!("All is well."), true)),
        Answer::Differs { .. }
    ));
}

#[test]
fn a_file_of_another_version_is_judged_by_its_figures() {
    let mut document = json_of_it();
    document["program"] = "9.9.9".into();
    document["words"]["rounding"] = "Other words.".into();
    let mut other = document.clone();
    other["assessment"]["document"]["program"] = "9.9.9".into();
    let assessment = other["assessment"]["document"].clone();
    other["assessment"]["hash"] = wheelwort::core::documents::canonical::hash(&bytes_of(&assessment)).into();
    let verdict = checked(&again(other.clone()));
    assert!(verdict.is_verified(), "{verdict}");
    assert!(verdict.notes.iter().any(|note| note.contains("9.9.9")));
    other["figures"]["saving_percent"] = json!(99.0);
    assert_eq!(names(&again(other)), "differs");
}

/// Every leaf of a document, by pointer.
fn leaves(value: &Value, at: &str, found: &mut Vec<String>) {
    match value {
        Value::Object(map) => map.iter().for_each(|(name, item)| {
            leaves(
                item,
                &format!("{at}/{}", name.replace('~', "~0").replace('/', "~1")),
                found,
            );
        }),
        Value::Array(items) => {
            items
                .iter()
                .enumerate()
                .for_each(|(index, item)| leaves(item, &format!("{at}/{index}"), found));
        }
        _ => found.push(at.to_owned()),
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 48, ..ProptestConfig::default() })]

    #[test]
    fn no_flipped_byte_is_verified(place in any::<prop::sample::Index>(), flip in 1u8..=255) {
        let mut bytes = BYTES.clone();
        let at = place.index(bytes.len());
        bytes[at] ^= flip;
        prop_assert!(!checked(&bytes).is_verified(), "byte {at}");
    }

    #[test]
    fn no_changed_leaf_is_verified(place in any::<prop::sample::Index>()) {
        let document = json_of_it();
        let mut all = Vec::new();
        leaves(&document, "", &mut all);
        let pointer = &all[place.index(all.len())];
        let value = match document.pointer(pointer) {
            Some(Value::Bool(flag)) => json!(!flag),
            Some(Value::Number(number)) => json!(number.as_f64().unwrap_or(0.0) * 1.25 + 1.0),
            Some(Value::String(text)) => json!(format!("{text}x")),
            _ => json!("x"),
        };
        prop_assert!(!checked(&changed(pointer, value, false)).is_verified(), "{pointer}");
    }

    #[test]
    fn no_bytes_make_the_reader_stop(bytes in prop::collection::vec(any::<u8>(), 0..400)) {
        prop_assert!(!checked(&bytes).is_verified());
    }
}
