//! The documents of `tests/cases/contract/`: invented data, each for one feature, with results worked out by an
//! independent program from the published rules. Agreement to 1e-6 relative.

use serde_json::Value;
use std::path::Path;
use wheelwort::core::documents::Pathway;
use wheelwort::core::domain::Term;
use wheelwort::core::evaluate::{Options, evaluate};

const TOLERANCE: f64 = 1e-6;

fn near(found: f64, expected: f64) -> bool {
    (found - expected).abs() <= TOLERANCE * expected.abs().max(1e-3)
}

fn check(path: &Path) -> Result<(), String> {
    let text = std::fs::read(path).expect("case file");
    let case: Value = serde_json::from_slice(&text).expect("case json");
    let expected = &case["expected"];
    let evaluated = Pathway::from_value(&case["document"])
        .and_then(|pathway| evaluate(&pathway, wheelwort::library::book(), Options::default()));
    if let Some(pointer) = expected.get("refused") {
        let problems = match evaluated {
            Ok(_) => return Err("was taken, but must be refused".to_owned()),
            Err(problems) => problems,
        };
        let found = problems
            .list()
            .iter()
            .map(|p| p.pointer.clone())
            .collect::<Vec<_>>();
        return match pointer.as_str() {
            Some(pointer) if !found.iter().any(|p| p == pointer) => {
                Err(format!("{pointer} not among {found:?}"))
            }
            _ => Ok(()),
        };
    }
    let assessment = evaluated.map_err(|problems| {
        problems
            .list()
            .iter()
            .map(ToString::to_string)
            .collect::<Vec<_>>()
            .join("\n    ")
    })?;
    let mut wrong = Vec::new();
    let mut compare = |what: String, found: f64, wanted: &Value| {
        let wanted = wanted.as_f64().expect("a figure");
        if !near(found, wanted) {
            wrong.push(format!("{what}: {found} instead of {wanted}"));
        }
    };
    compare("net".into(), assessment.net.g_co2e_per_mj, &expected["net"]);
    for term in Term::ALL {
        compare(
            term.name().into(),
            assessment.terms_g_co2e_per_mj.get(term),
            &expected["terms"][term.name()],
        );
    }
    for (key, share) in expected["shares"].as_object().expect("shares") {
        let stage = assessment
            .stages
            .iter()
            .find(|stage| stage.key == *key)
            .expect("stage");
        compare(format!("share of {key}"), stage.share, share);
    }
    match (assessment.saving_percent, expected["saving"].as_f64()) {
        (Some(_), Some(_)) => compare(
            "saving".into(),
            assessment.saving_percent.unwrap(),
            &expected["saving"],
        ),
        (None, None) => {}
        (found, wanted) => wrong.push(format!("saving: {found:?} instead of {wanted:?}")),
    }
    if wrong.is_empty() {
        Ok(())
    } else {
        Err(wrong.join("\n    "))
    }
}

#[test]
fn all_documents_agree() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/cases/contract");
    let mut files: Vec<_> = std::fs::read_dir(folder)
        .expect("cases")
        .map(|e| e.expect("entry").path())
        .collect();
    files.retain(|path| path.extension().is_some_and(|ending| ending == "json"));
    files.sort();
    assert!(files.len() >= 25, "the cases are missing");
    let failures: Vec<String> = files
        .iter()
        .filter_map(|path| {
            check(path)
                .err()
                .map(|why| format!("{}:\n    {why}", path.display()))
        })
        .collect();
    assert!(
        failures.is_empty(),
        "{} of {} cases differ:\n{}",
        failures.len(),
        files.len(),
        failures.join("\n")
    );
}
