//! The list: filters, orders, pages.

use super::support::{Bench, fertilised, read, wheat};
use serde_json::json;
use std::collections::BTreeSet;
use std::time::Duration;
use wheelwort::pathways::{self, PathwayError, Question, Sort};

const NAMES: [&str; 9] = [
    "Wheat 100 %",
    "wheat_b",
    "Äcker",
    "äcker süd",
    "Barley",
    "barley\\x",
    "Wheat 100 %",
    "zz",
    "a",
];

async fn filled() -> Bench {
    let bench = Bench::new().await;
    for (index, name) in NAMES.into_iter().enumerate() {
        let amount = [150.0, 20.0, 90.0, 10.0, 60.0, 60.0, 300.0, 0.0, 45.0][index];
        pathways::create(&bench.app, fertilised(name, amount), None)
            .await
            .expect("saved");
        if index % 3 != 1 {
            bench.app.clock.advance(Duration::from_millis(5)); // the others share a millisecond
        }
    }
    bench
}

#[tokio::test]
async fn pages_of_every_order_hold_each_line_once() {
    let bench = filled().await;
    for sort in [Sort::Updated, Sort::Name, Sort::Net, Sort::Saving] {
        let whole = Question {
            sort,
            ..Question::default()
        };
        let whole = pathways::list(&bench.app, &whole).await.expect("listed");
        assert_eq!((whole.lines.len(), whole.next.as_ref()), (9, None));
        let figure = |at: usize| whole.lines[at].assessment.as_ref().expect("assessed");
        for at in 1..9 {
            let (a, b) = (&whole.lines[at - 1], &whole.lines[at]);
            let in_order = match sort {
                Sort::Updated => a.updated_at >= b.updated_at,
                Sort::Name => a.name.to_lowercase() <= b.name.to_lowercase(),
                Sort::Net => figure(at - 1).net_g_co2e_per_mj <= figure(at).net_g_co2e_per_mj,
                Sort::Saving => figure(at - 1).saving_percent >= figure(at).saving_percent,
            };
            assert!(in_order, "{sort:?} at {at}");
        }
        for limit in [1, 2, 4, 8, 9] {
            let mut seen = Vec::new();
            let mut after = None;
            loop {
                let question = Question {
                    sort,
                    after,
                    limit: Some(limit),
                    ..Question::default()
                };
                let page = pathways::list(&bench.app, &question).await.expect("listed");
                assert!(!page.lines.is_empty() && page.lines.len() <= limit as usize);
                seen.extend(page.lines);
                after = page.next;
                if after.is_none() {
                    break;
                }
            }
            assert_eq!(seen, whole.lines, "{sort:?} by {limit}");
        }
    }
    bench.app.close().await;
}

#[tokio::test]
async fn filters_take_words_as_they_stand() {
    let bench = filled().await;
    let mut other = wheat("Rye, example");
    other["example"] = json!(true);
    other["feedstock"] = json!("rye");
    other["stages"][0]["output"]["material"] = json!("rye");
    pathways::create(&bench.app, read(&other), None)
        .await
        .expect("saved");
    let count = |question: Question| {
        let app = bench.app.clone();
        async move { pathways::list(&app, &question).await.expect("listed").lines.len() }
    };
    let named = |name: &str| Question {
        name: Some(name.into()),
        ..Question::default()
    };
    assert_eq!(count(named("WHEAT")).await, 3);
    assert_eq!(
        count(named("äcker")).await,
        2,
        "letters beyond ASCII have no case here either"
    );
    assert_eq!(count(named("%")).await, 2);
    assert_eq!(count(named("_")).await, 1);
    assert_eq!(count(named("\\")).await, 1);
    assert_eq!(count(named("' OR 1=1 --")).await, 0);
    assert_eq!(count(named("")).await, 10);
    assert_eq!(
        count(Question {
            feedstock: Some("rye".into()),
            ..Question::default()
        })
        .await,
        1
    );
    assert_eq!(
        count(Question {
            example: Some(true),
            ..Question::default()
        })
        .await,
        1
    );
    assert_eq!(
        count(Question {
            example: Some(false),
            ..Question::default()
        })
        .await,
        9
    );
    assert_eq!(
        count(Question {
            rule_set: Some("none".into()),
            ..Question::default()
        })
        .await,
        0
    );
    assert_eq!(
        count(Question {
            limit: Some(0),
            ..Question::default()
        })
        .await,
        1,
        "a page has a line"
    );
    bench.app.close().await;
}

#[tokio::test]
async fn a_place_of_another_order_is_a_problem() {
    let bench = filled().await;
    let question = Question {
        sort: Sort::Name,
        limit: Some(2),
        ..Question::default()
    };
    let place = pathways::list(&bench.app, &question)
        .await
        .expect("listed")
        .next
        .expect("more");
    let places = [
        place.as_str(),
        "",
        ".",
        "x.y",
        "u00000000-0000-7000-8000-000000000000.",
        "g00000000-0000-7000-8000-000000000000.7ff8000000000000",
        "é.é",
        &"f".repeat(9_000),
    ];
    for (sort, after) in [Sort::Updated, Sort::Net]
        .into_iter()
        .flat_map(|sort| places.map(|place| (sort, place)))
    {
        let question = Question {
            sort,
            after: Some(after.into()),
            ..Question::default()
        };
        match pathways::list(&bench.app, &question).await {
            Err(PathwayError::Problems(problems)) => assert_eq!(problems.len(), 1),
            other => panic!("{sort:?} {after}: {other:?}"),
        }
    }
    bench.app.close().await;
}

/// After the program has been brought up to date no assessment of its version is kept yet.
#[tokio::test]
async fn figures_are_made_where_none_are_kept() {
    let bench = filled().await;
    let before = pathways::list(&bench.app, &Question::default())
        .await
        .expect("listed");
    bench
        .force("UPDATE assessment SET program = '0.0.1', net = 0")
        .await
        .expect("aged");
    let after = pathways::list(&bench.app, &Question::default())
        .await
        .expect("listed");
    assert_eq!(after, before);
    assert_eq!(bench.number("SELECT count(*) FROM assessment").await, 18);
    let ids: BTreeSet<_> = after.lines.iter().map(|line| line.id).collect();
    assert_eq!(ids.len(), 9);
    bench.app.close().await;
}
