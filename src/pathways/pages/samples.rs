//! Samples for the pages: a full pathway, one that lacks much, and one whose names are hostile.

use super::{Head, RevisionRow};
use crate::core::documents::{Assessment, Pathway};
use crate::core::domain::Book;
use crate::core::evaluate::{Options, evaluate};

/// A text that must never reach a page as markup.
pub const HOSTILE: &str = "<script>alert('1')</script> \"x\" & <b>bold</b>";

/// The published data.
pub fn book() -> &'static Book {
    crate::library::book()
}

/// A full pathway.
pub fn wheat() -> Pathway {
    Pathway::from_bytes(include_bytes!("samples/wheat.json")).expect("a readable sample")
}

/// The same with hostile names.
pub fn hostile() -> Pathway {
    let mut pathway = wheat();
    pathway.name = HOSTILE.to_owned();
    pathway.note = Some(HOSTILE.to_owned());
    for stage in &mut pathway.stages {
        stage.name = Some(HOSTILE.to_owned());
        stage.note = Some(HOSTILE.to_owned());
        for input in &mut stage.inputs {
            input.label = Some(HOSTILE.to_owned());
            input.note = Some(HOSTILE.to_owned());
        }
        for product in &mut stage.co_products {
            product.name = HOSTILE.to_owned();
        }
    }
    pathway
}

/// The assessment of a sample.
pub fn assess(pathway: &Pathway) -> Assessment {
    evaluate(pathway, book(), Options::default()).expect("a sample that can be worked out")
}

/// The assessment of the full pathway.
pub fn assessment() -> Assessment {
    assess(&wheat())
}

/// Revision 14 of a stored pathway.
pub fn head() -> Head {
    Head {
        id: "0197d3c8-5b9e-7cc1-9f5e-2a3b4c5d6e7f".to_owned(),
        revision: 14,
        saved: "12 Jul 2027".to_owned(),
        archived: false,
    }
}

/// Two revisions.
pub fn revisions() -> Vec<RevisionRow> {
    let row = |number: u64, why: &str, net: f64, change: Option<f64>| RevisionRow {
        number,
        href: format!("{}/revisions/{number}", head().href()),
        saved: "12 Jul 2027".to_owned(),
        why: why.to_owned(),
        net: Some(net),
        change,
    };
    vec![
        row(14, "Dryer gas taken to the June reading", 31.41, Some(-0.18)),
        row(13, HOSTILE, 31.59, None),
    ]
}

/// Lines of the list: one that passes, one that misses, one that cannot be worked out, one with a hostile name.
pub fn lines() -> Vec<crate::pathways::Line> {
    use crate::core::documents::assessment::ThresholdResult;
    use crate::pathways::{Line, Summary};
    let at = |day: &str| {
        format!("{day}T10:00:00Z")
            .parse::<jiff::Timestamp>()
            .expect("a moment")
    };
    let line = |number: u128, name: &str, figures: Option<(f64, bool, u32, u32)>, day: &str| Line {
        id: uuid::Uuid::from_u128(number),
        name: name.to_owned(),
        feedstock: "wheat".to_owned(),
        rule_set: "eu-2018-2001".to_owned(),
        example: number == 1,
        revision: 3,
        hash: String::new(),
        created_at: at(day),
        updated_at: at(day),
        archived_at: None,
        assessment: figures.map(|(net, met, blocks, warnings)| Summary {
            rule_set: "eu-2018-2001".to_owned(),
            net_g_co2e_per_mj: net,
            saving_percent: Some((94.0 - net) / 94.0 * 100.0),
            thresholds: vec![ThresholdResult {
                percent: 60.0,
                because: "plant started 2017-05-01".to_owned(),
                met,
            }],
            blocks,
            warnings,
            infos: 1,
            assessment_hash: String::new(),
        }),
        warnings_without_reason: figures.map_or(0, |(_, _, _, warnings)| warnings),
    };
    vec![
        line(
            1,
            "Autumn wheat, Tarn Bridge works",
            Some((31.41, true, 1, 2)),
            "2027-07-12",
        ),
        line(
            2,
            "Spring barley trial, Tarn Bridge works",
            Some((38.42, false, 0, 2)),
            "2027-06-30",
        ),
        line(3, "Winter rye, bought in", None, "2027-07-13"),
        line(4, HOSTILE, Some((-2.0, true, 0, 0)), "2027-07-01"),
    ]
}
