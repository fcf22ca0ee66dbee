//! Every page with every sample: empty, full, hostile.

use super::list::Asked;
use super::{ListEvidence, ShowEvidence};
use crate::evidence::link::{short_hash, size_words};
use crate::evidence::{EvidenceLink, Record, RecordPage, Use};
use askama::Template;
use uuid::Uuid;

const HOSTILE: &str = "<script>alert('1')</script> \"x\" & <b>bold</b>";

fn record(text: &str) -> Record {
    Record {
        id: "EV-0001".into(),
        file_name: text.into(),
        media_type: text.into(),
        size: 1_234_567,
        hash: format!("sha256:{}", "0123456789abcdef".repeat(4)),
        note: Some(text.into()),
        example: true,
        attached_by: text.into(),
        attached_at: "2026-12-01T12:00:00Z".parse().expect("a time"),
        pathways: 2,
    }
}

fn used(text: &str, current: bool) -> Use {
    Use {
        pathway: Uuid::from_u128(7),
        pathway_name: text.into(),
        archived: false,
        revision: 3,
        current,
        pointer: "/stages/0/inputs/0/evidence/0".into(),
        stage: Some("field".into()),
        stage_name: Some(text.into()),
        input: Some("n-an".into()),
        input_label: None,
    }
}

#[test]
fn every_page_shows_every_sample_and_keeps_hostile_text_text() {
    let empty = RecordPage {
        records: Vec::new(),
        next: None,
    };
    let page = ListEvidence::of(&empty, Asked::default())
        .render()
        .expect("renders");
    assert!(page.contains("No file is attached yet"));
    for text in ["gas bill.pdf", HOSTILE] {
        let full = RecordPage {
            records: vec![record(text), record(text)],
            next: Some("EV-0001".into()),
        };
        let asked = Asked {
            id: text.into(),
            note: text.into(),
            wrong: vec![text.into()],
        };
        let list = ListEvidence::of(&full, asked).render().expect("renders");
        assert!(
            list.contains("/evidence?after=EV-0001")
                && list.contains("1.2 MB")
                && list.contains("0123456789ab<")
        );
        let uses = [used(text, true), used(text, false)];
        let show = ShowEvidence::of(&record(text), &uses).render().expect("renders");
        assert!(show.contains("/evidence/EV-0001/file"));
        let pathway = "/pathways/00000000-0000-0000-0000-000000000007";
        assert!(show.contains(&format!("{pathway}/stages/field#input-n-an")));
        assert!(show.contains(&format!("{pathway}/revisions/3")) && show.contains("no longer"));
        for page in [&list, &show] {
            assert!(!page.contains("<script>alert") && !page.contains("<b>bold"));
        }
    }
}

#[test]
fn sizes_are_words() {
    for (bytes, words) in [
        (0, "0 bytes"),
        (999, "999 bytes"),
        (1_000, "1 kB"),
        (12_345, "12.3 kB"),
        (123_456, "123 kB"),
        (25_000_000, "25 MB"),
    ] {
        assert_eq!(size_words(bytes), words);
    }
}

#[test]
fn a_short_hash_is_the_beginning_of_it() {
    assert_eq!(short_hash("sha256:0123456789abcdef"), "0123456789ab");
    assert!(!EvidenceLink::unknown("EV-1").is_known());
}
