//! Who may do what with evidence, and what an auditor from outside sees of it.

use super::{attach, form};
use crate::support::documents::chain_with;
use crate::support::test_app::{answer_of, preparer, request};
use crate::support::{TestApp, attach_text};
use axum::body::Body;
use serde_json::json;
use std::sync::Arc;
use wheelwort::app::who::{Right, Sight, Who};
use wheelwort::web::actor::Asking;
use wheelwort::web::{Shell, router};

/// The service, asked by somebody else.
fn asked_by(app: &TestApp, who: Who) -> axum::Router {
    let asking = Asking {
        organisation: app.app.organisation,
        who: Arc::new(who),
    };
    router(app.app.clone(), Shell::default()).layer(axum::Extension(asking))
}

async fn status(router: &axum::Router, path: &str) -> u16 {
    answer_of(router, request("GET", path, &[], Body::empty()))
        .await
        .status
        .as_u16()
}

#[tokio::test]
async fn an_auditor_sees_what_the_chosen_pathways_name() {
    let app = TestApp::new().await;
    attach_text(&app.app, Some("EV-3"), "unused.txt", "c")
        .await
        .expect("attached");
    let (seen, _) = app
        .stores(&chain_with("/stages/0/inputs/0/evidence", json!(["EV-1"])))
        .await;
    app.stores(&chain_with(
        "/stages/1/inputs/0/evidence",
        json!(["EV-1", "EV-2"]),
    ))
    .await;
    let id = seen.rsplit('/').next().unwrap().parse().expect("an id");
    let auditor = asked_by(
        &app,
        Who {
            rights: [Right::Read].into(),
            sight: Sight::Chosen {
                pathways: [id].into(),
                statements: [].into(),
            },
            ..preparer()
        },
    );
    let list = answer_of(&auditor, request("GET", "/api/v1/evidence", &[], Body::empty()))
        .await
        .json();
    let ids: Vec<&str> = list["items"]
        .as_array()
        .unwrap()
        .iter()
        .map(|one| one["id"].as_str().unwrap())
        .collect();
    assert_eq!(ids, ["EV-1"]);
    let record = answer_of(
        &auditor,
        request("GET", "/api/v1/evidence/EV-1", &[], Body::empty()),
    )
    .await
    .json();
    assert_eq!(record["uses"].as_array().unwrap().len(), 1);
    assert_eq!(record["pathways"], 1);
    for (path, wanted) in [
        ("/api/v1/evidence/EV-1/file", 200),
        ("/api/v1/evidence/EV-2", 404),
        ("/api/v1/evidence/EV-2/file", 404),
        ("/api/v1/evidence/EV-3/file", 404),
        ("/evidence/EV-1", 200),
        ("/evidence/EV-2", 404),
        ("/evidence/EV-3/file", 404),
    ] {
        assert_eq!(status(&auditor, path).await, wanted, "{path}");
    }
}

#[tokio::test]
async fn readers_do_not_attach_and_strangers_see_nothing() {
    let app = TestApp::new().await;
    attach(&app, &[("file", Some("a.txt"), b"a")]).await;
    let reader = asked_by(
        &app,
        Who {
            rights: [Right::Read].into(),
            ..preparer()
        },
    );
    let stranger = asked_by(&app, Who::stranger());
    let kind = format!("multipart/form-data; boundary={}", super::BOUNDARY);
    for (router, wanted) in [(&reader, 403), (&stranger, 401)] {
        let body = form(&[("file", Some("b.txt"), b"b")]);
        for path in ["/api/v1/evidence", "/evidence"] {
            let posted = request("POST", path, &[("content-type", &kind)], body.clone());
            assert_eq!(answer_of(router, posted).await.status, wanted, "{path}");
        }
    }
    for path in [
        "/api/v1/evidence",
        "/api/v1/evidence/EV-0001",
        "/api/v1/evidence/EV-0001/file",
    ] {
        assert_eq!(status(&stranger, path).await, 401, "{path}");
        assert_eq!(status(&reader, path).await, 200, "{path}");
    }
    assert_eq!(super::count(&app).await, 1);
}
