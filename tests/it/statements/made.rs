//! Statements made for tests: invented parties, a demo pathway, a key that everybody knows.

use ed25519_dalek::SigningKey;
use serde_json::{Value, json};
use std::sync::LazyLock;
use wheelwort::core::checks::reasons::apply;
use wheelwort::core::checks::settings::Settings;
use wheelwort::core::documents::statement::{EvidenceFile, Person, Previous, Statement, StatementFacts};
use wheelwort::core::documents::{Assessment, Pathway};
use wheelwort::core::evaluate::{Options, evaluate};
use wheelwort::core::statement::seal::{PublicKey, hex};
use wheelwort::core::statement::{Inputs, Refused, build, seal};
use wheelwort::library;

/// The key of the tests: it guards nothing.
pub fn key() -> SigningKey {
    SigningKey::from_bytes(&[42; 32])
}

pub fn public() -> PublicKey {
    PublicKey::of(&key())
}

/// A pathway of the demo.
pub fn demo(name: &str) -> Pathway {
    let path = format!("{}/src/demo/pathways/{name}.json", env!("CARGO_MANIFEST_DIR"));
    Pathway::from_bytes(&std::fs::read(path).expect("a demo pathway")).expect("a pathway")
}

/// Facts that leave nothing out that any law here asks for.
pub fn full_facts() -> Value {
    serde_json::from_str(include_str!("../../cases/statements/facts.json")).expect("json")
}

pub fn assessed(pathway: &Pathway) -> Assessment {
    evaluate(pathway, library::book(), Options::default()).expect("an assessment")
}

/// What a statement of a pathway is made of.
pub struct Made {
    pub number: String,
    pub previous: Option<Previous>,
    pub facts: StatementFacts,
    pub pathway: Pathway,
    pub assessment: Assessment,
}

impl Made {
    pub fn of(pathway: Pathway) -> Made {
        let assessment = assessed(&pathway);
        Made {
            number: "WW-2027-0031".to_owned(),
            previous: None,
            facts: StatementFacts::from_value(&full_facts()).expect("facts"),
            pathway,
            assessment,
        }
    }

    pub fn built(&self) -> Result<Statement, Refused> {
        let person = |id: &str, name: &str, at: &str| Person {
            id: id.to_owned(),
            name: name.to_owned(),
            role: None,
            at: at.parse().expect("an instant"),
        };
        let evidence = [EvidenceFile {
            id: "EV-PLOTS".to_owned(),
            file_name: "plots.geojson".to_owned(),
            size_bytes: 12,
            sha256: "0".repeat(64),
        }];
        build(Inputs {
            statement_no: &self.number,
            version: 1,
            supersedes: &[],
            previous: self.previous.as_ref(),
            issued_at: "2027-09-02T09:05:00Z".parse().expect("an instant"),
            submitted_by: &person("person-1", "I. Marsh", "2027-09-01T16:42:00Z"),
            approved_by: &person("person-2", "T. Hale", "2027-09-02T09:05:00Z"),
            facts: &self.facts,
            pathway_id: "pathway-1",
            revision: 3,
            pathway: &self.pathway,
            assessment: &self.assessment,
            reasons: &[],
            evidence: &evidence,
            uncertainty: None,
            book: library::book(),
            settings: Settings::standard(),
            items: library::statement_items(),
        })
    }

    pub fn sealed(&self) -> Statement {
        seal(self.built().expect("a statement"), &key()).expect("sealed")
    }
}

/// A sealed statement of the demo's first pathway, made once.
pub static STATEMENT: LazyLock<Statement> = LazyLock::new(|| Made::of(demo("a_wheat_chp_rail")).sealed());
/// The bytes of its file.
pub static BYTES: LazyLock<Vec<u8>> = LazyLock::new(|| STATEMENT.bytes().expect("bytes"));

/// The file as JSON.
pub fn json_of_it() -> Value {
    serde_json::from_slice(&BYTES).expect("json")
}

/// The file with one place changed; with `sealed_again`, by somebody who has the key.
pub fn changed(pointer: &str, value: Value, sealed_again: bool) -> Vec<u8> {
    let mut document = json_of_it();
    *document
        .pointer_mut(pointer)
        .unwrap_or_else(|| panic!("no {pointer}")) = value;
    if sealed_again {
        again(document)
    } else {
        bytes_of(&document)
    }
}

pub fn bytes_of(document: &Value) -> Vec<u8> {
    wheelwort::core::documents::canonical::bytes(document).expect("bytes")
}

/// Hash and signature put on anew.
pub fn again(mut document: Value) -> Vec<u8> {
    use ed25519_dalek::Signer;
    use wheelwort::core::documents::{canonical, statement::signed_bytes};
    let signed = signed_bytes(document.clone()).expect("bytes");
    document["hash"] = canonical::hash(&signed).into();
    document["signature"]["value"] = hex(&key().sign(&signed).to_bytes()).into();
    bytes_of(&document)
}

/// Findings of an assessment with a reason on every warning.
pub fn reasoned(assessment: &Assessment) -> Assessment {
    let reasons: Vec<wheelwort::core::checks::reasons::Reason> = assessment
        .findings
        .iter()
        .map(|finding| {
            serde_json::from_value(
                json!({ "id": finding.id, "stage": finding.stage, "field": finding.field,
                "text": "looked at" }),
            )
            .expect("a reason")
        })
        .collect();
    let mut assessment = assessment.clone();
    assessment.findings = apply(assessment.findings, &reasons).findings;
    assessment
}
