//! Renders the pages of settings and own rule sets: empty, full, with hostile text.

use super::*;
use crate::core::checks::settings::{Range, Settings};
use crate::core::documents::rule_set::{from_toml, toml_of};
use crate::core::domain::rule_set::Standing;
use askama::Template;

const HOSTILE: &str = "<script>alert('1')</script>";

fn sound(name: &str, html: &str) {
    for banned in ["<script>", " style=\"", "-0.00", "{{"] {
        assert!(!html.contains(banned), "{name} holds {banned}");
    }
}

#[test]
fn settings_take_what_was_typed_and_keep_it() {
    let standard = Settings::standard();
    let mut page = SettingsPage::of(standard, "abc", true);
    sound("settings", &page.render().unwrap());
    let empty = page.take(&BTreeMap::new()).expect("a document");
    assert_eq!(&serde_json::from_value::<Settings>(empty).unwrap(), standard);
    let typed = |pairs: &[(&str, &str)]| {
        pairs
            .iter()
            .map(|(name, text)| ((*name).to_owned(), (*text).to_owned()))
            .collect::<BTreeMap<_, _>>()
    };
    let mut page = SettingsPage::of(standard, "abc", true);
    let document = page
        .take(&typed(&[
            ("capacity_percent", "105"),
            ("steam_works_mj_per_l/high", "9.5"),
            ("new-crop", "hemp"),
            ("new-low", "2"),
            ("new-high", "9"),
        ]))
        .expect("a document");
    let settings: Settings = serde_json::from_value(document).unwrap();
    assert_eq!(
        (settings.capacity_percent, settings.steam_works_mj_per_l),
        (105.0, Range { low: 3.0, high: 9.5 })
    );
    assert_eq!(
        settings.usual_yield_t_per_ha["hemp"],
        Range { low: 2.0, high: 9.0 }
    );
    assert_eq!(
        settings.usual_yield_t_per_ha.len(),
        standard.usual_yield_t_per_ha.len() + 1
    );
    let mut page = SettingsPage::of(&settings, "abc", true);
    let wrong = typed(&[
        ("capacity_percent", HOSTILE),
        ("usual_yield_t_per_ha/hemp/low", ""),
        ("usual_yield_t_per_ha/hemp/high", ""),
    ]);
    assert_eq!(page.take(&wrong), None);
    assert_eq!(page.refused, 1);
    let html = page.render().unwrap();
    sound("refused", &html);
    assert!(html.contains("aria-invalid=\"true\""));
}

#[test]
fn problems_stand_at_their_fields() {
    let mut page = SettingsPage::of(Settings::standard(), "abc", true);
    let problem = |pointer: &str| crate::core::documents::Problem {
        pointer: pointer.to_owned(),
        detail: HOSTILE.to_owned(),
        remedy: "Mend it.".to_owned(),
    };
    page.refuse(&[
        problem("/typical_low"),
        problem("/steam_works_mj_per_l"),
        problem(""),
    ]);
    assert_eq!((page.refused, page.faults.len()), (2, 1));
    sound("refused", &page.render().unwrap());
    let other = Settings {
        typical_low: 0.5,
        ..Settings::default()
    };
    page.stale(&other, "def".to_owned());
    let theirs: Vec<_> = page.rows.iter().filter_map(|row| row.theirs.clone()).collect();
    assert_eq!((theirs, page.seen.as_str()), (vec!["0.5".to_owned()], "def"));
}

#[test]
fn every_rule_set_begins_one_of_ones_own_that_holds() {
    let book = crate::library::book();
    for rules in book.rule_sets.values() {
        let page = NewVersion::begin(rules, true);
        let html = page.render().unwrap();
        sound(&rules.id, &html);
        let read =
            from_toml(&page.text, book).unwrap_or_else(|problems| panic!("{}: {problems:?}", rules.id));
        assert_eq!(
            (read.id.as_str(), read.standing),
            (format!("own-{}", rules.id).as_str(), Standing::Own)
        );
        assert_eq!(read.limits, rules.limits, "{}", rules.id);
        assert_eq!(from_toml(&toml_of(&read).unwrap(), book).unwrap(), read);
        let all = [super::super::RuleSetVersion {
            version: HOSTILE.to_owned(),
            hash: "sha256:0".to_owned(),
            saved_at: None,
        }];
        sound(
            "versions",
            &Versions::of(&read, &all, false, true, Some(HOSTILE.to_owned()))
                .render()
                .unwrap(),
        );
    }
    let rules = &book.rule_sets["eu-2018-2001"];
    let refused = NewVersion::refused(rules, HOSTILE, vec![own::said("/id", HOSTILE)]);
    sound("refused", &refused.render().unwrap());
}
