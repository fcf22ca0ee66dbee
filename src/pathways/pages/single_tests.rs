//! What single pages have to hold: blends, findings at their figures, inventories, comparisons of unlike chains.

use super::card::Form;
use super::samples::{self, HOSTILE};
use super::tests::{card, words};
use super::{blend, compare, show, stage, workings};
use askama::Template;

/// The blend: empty, of a stored pathway, refused.
pub(super) fn blends(add: &mut impl FnMut(&str, askama::Result<String>)) {
    use crate::web::calculator::{Asked, Wrong};
    let asked = |pairs: &[(&str, &str)]| {
        Asked::of(
            pairs
                .iter()
                .map(|(a, b)| ((*a).to_owned(), (*b).to_owned()))
                .collect(),
        )
    };
    let book = samples::book();
    let pathway = samples::hostile();
    let found = samples::assess(&pathway);
    let stored = vec![("1".to_owned(), HOSTILE.to_owned())];
    let taken = || {
        Some(Ok(blend::Taken {
            pathway: &pathway,
            found: &found,
        }))
    };
    let empty = blend::page(&Asked::default(), &stored, None, book);
    assert!(empty.answer.is_none() && empty.refused.is_empty());
    add("blend_empty", empty.render());
    let of_pathway = blend::page(&asked(&[("pathway", "1")]), &stored, taken(), book);
    assert!(of_pathway.refused.is_empty(), "{:?}", of_pathway.refused);
    let answer = of_pathway.answer.as_ref().expect("an answer");
    // E10 of the standard factors: ethanol is 6.8 % of the energy or so.
    let energy = answer.sheets[1].rows[1].1[0].expect("a share");
    assert!(energy > 6.0 && energy < 7.5, "{energy}");
    add("blend_of_pathway", of_pathway.render());
    let driven = blend::page(
        &asked(&[
            ("pathway", "1"),
            ("l_per_100_km", "6"),
            ("km_source", HOSTILE),
            ("vehicle", HOSTILE),
        ]),
        &stored,
        taken(),
        book,
    );
    assert_eq!(driven.answer.as_ref().map(|answer| answer.sheets.len()), Some(3));
    add("blend_per_km", driven.render());
    let wrong = Wrong::new("pathway", HOSTILE, HOSTILE);
    let refused = blend::page(
        &asked(&[
            ("pathway", "1"),
            ("temperature_c", "1,5"),
            ("heating_values", HOSTILE),
            ("rule_set", HOSTILE),
        ]),
        &stored,
        Some(Err(wrong)),
        book,
    );
    let at: Vec<&str> = refused.refused.iter().map(|row| row.field).collect();
    assert_eq!(at, ["pathway", "temperature_c", "heating_values"]);
    add("blend_refused", refused.render());
    let figure = blend::page(
        &asked(&[
            ("ethanol_g_co2e_per_mj", "30"),
            ("rule_set", "eu-2018-2001"),
            ("blend", ""),
            ("ethanol_percent_vol", "120"),
            ("temperature_c", "15"),
            ("heating_values", "own"),
            ("ethanol_mj_per_l", "21"),
        ]),
        &stored,
        None,
        book,
    );
    let at: Vec<&str> = figure.refused.iter().map(|row| row.field).collect();
    assert_eq!(
        at,
        [
            "ethanol_percent_vol",
            "ethanol_source",
            "petrol_mj_per_l",
            "heating_source"
        ]
    );
}

#[test]
fn findings_stand_at_the_figure_they_question() {
    let mut pathway = samples::wheat();
    for stage in pathway.stages.iter_mut().filter(|stage| stage.key == "grains") {
        for input in &mut stage.inputs {
            input.evidence.clear();
        }
    }
    let found = samples::assess(&pathway);
    let about: Vec<_> = found
        .findings
        .iter()
        .filter(|finding| !finding.stage.is_empty())
        .collect();
    assert!(!about.is_empty(), "the sample has findings about stages");
    let mut at_inputs = 0;
    for stage in &pathway.stages {
        let value = serde_json::to_value(stage).expect("json");
        let page = stage::ShowStage::of(&card(
            &pathway,
            Some(&found),
            &stage.key,
            &value,
            &Form::default(),
        ));
        let entries = [&page.about, &page.output];
        let all = entries
            .into_iter()
            .chain(&page.intakes)
            .chain(&page.inputs)
            .chain(&page.co_products);
        let mut shown = Vec::new();
        for entry in all {
            shown.extend(entry.findings.iter().map(|row| row.message.clone()));
            let fields = entry.line.iter().chain(&entry.below).chain(&entry.rare);
            for field in fields {
                shown.extend(field.findings.iter().map(|row| row.message.clone()));
            }
        }
        let mut wanted: Vec<String> = about
            .iter()
            .filter(|finding| finding.stage == stage.key)
            .map(|finding| finding.message.clone())
            .collect();
        shown.sort();
        wanted.sort();
        assert_eq!(shown, wanted, "{}: each once", stage.key);
        at_inputs += page
            .inputs
            .iter()
            .filter(|entry| !entry.findings.is_empty())
            .count();
    }
    assert!(at_inputs > 0, "some stand at an input");
    let work = workings::ShowWorkings::of(samples::head(), &pathway, &found, samples::book(), true);
    let in_work: usize = work
        .stages
        .iter()
        .map(|stage| {
            stage.findings.len()
                + stage
                    .inputs
                    .iter()
                    .map(|input| input.findings.len())
                    .sum::<usize>()
        })
        .sum();
    assert_eq!(in_work, about.len(), "the workings tell each once too");
}

#[test]
fn an_inventory_reads_right() {
    let mut pathway = samples::wheat();
    pathway.rule_set = "inventory-ar6".to_owned();
    pathway.plant_started = None;
    let last = pathway.stages.last().cloned().expect("a last stage");
    pathway.stages.push(crate::core::documents::pathway::Stage {
        key: "engine".to_owned(),
        kind: crate::core::domain::StageKind::Combustion,
        name: Some("Engine".to_owned()),
        intakes: vec![crate::core::documents::pathway::Intake {
            from: last.key.clone(),
            product: None,
            flow: last.output.flow.clone(),
        }],
        inputs: Vec::new(),
        co_products: Vec::new(),
        ..last
    });
    let found = samples::assess(&pathway);
    let page = show::ShowPathway::of(
        samples::head(),
        &pathway,
        Ok(&found),
        samples::book(),
        Vec::new(),
        true,
    );
    let text = words(&page.render().expect("renders"));
    assert!(
        text.contains("below petrol") && text.contains("petrol is 93.3"),
        "{text}"
    );
    for wrong in ["meets", "misses", "required saving", "comparator"] {
        assert!(!text.contains(wrong), "{wrong} in {text}");
    }
    assert!(text.contains("With the crop\u{2019}s CO 2 in line"), "{text}");
    let sum: f64 = page
        .result
        .expect("a result")
        .crop_rows
        .iter()
        .map(|row| row.3)
        .sum();
    assert!(sum.abs() < 1e-9, "the rows in line add to zero: {sum}");
}

#[test]
fn unlike_chains_share_their_rungs_and_unlike_rules_print_no_difference() {
    let book = samples::book();
    let wheat = samples::wheat();
    let mut shorter = samples::wheat();
    shorter.rule_set = "inventory-ar6".to_owned();
    let last = shorter.stages.pop().expect("a last stage");
    let (one, other) = (samples::assess(&wheat), samples::assess(&shorter));
    let picked = [("1", &wheat, &one), ("2", &shorter, &other)].map(|(id, pathway, found)| compare::Picked {
        id,
        pathway,
        found,
    });
    let page = compare::Compare::of(&picked, book, Vec::new());
    let name = last.title();
    for column in &page.columns {
        assert!(
            column.ladder.0.contains(name),
            "{name} has a rung in {}",
            column.name
        );
    }
    assert!(page.columns[0].apart.is_none());
    let why = page.columns[1].apart.as_deref().expect("gases weigh differently");
    assert!(
        why.contains("cannot be compared") && page.lead.starts_with(why),
        "{why}"
    );
    let differences = page.stages.iter().chain(&page.terms).chain(&page.net);
    assert!(
        differences
            .flat_map(|row| &row.cells)
            .all(|(_, difference)| difference.is_none())
    );
    assert!(!page.render().expect("renders").contains(">Difference<"));
}

#[test]
fn a_difference_is_told_by_its_term_and_not_by_a_stage_of_one_side() {
    let book = samples::book();
    let wheat = samples::wheat();
    let mut other = samples::wheat();
    for stage in &mut other.stages {
        // The same works under other keys: every stage stands on one side only.
        stage.key.push_str("-b");
        for intake in &mut stage.intakes {
            intake.from.push_str("-b");
        }
        if stage.kind == crate::core::domain::StageKind::Cultivation {
            stage.inputs.clear();
        }
    }
    let (one, two) = (samples::assess(&wheat), samples::assess(&other));
    let picked = [("1", &wheat, &one), ("2", &other, &two)].map(|(id, pathway, found)| compare::Picked {
        id,
        pathway,
        found,
    });
    let page = compare::Compare::of(&picked, book, Vec::new());
    assert!(page.lead.contains("(e_ec) makes most of it"), "{}", page.lead);
}

#[test]
fn steps_lead_to_the_factors_they_name() {
    let pathway = samples::wheat();
    let found = samples::assess(&pathway);
    let page = workings::ShowWorkings::of(samples::head(), &pathway, &found, samples::book(), true);
    let html = page.render().expect("renders");
    assert!(
        html.contains("<a href=\"/factors/eu-2022-996/"),
        "no link to a factor"
    );
}
