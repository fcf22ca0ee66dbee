//! The real service on its own temporary data, with a clock that stands still; asked without a network.

use super::documents::chain;
use axum::Router;
use axum::body::{Body, to_bytes};
use axum::http::{HeaderMap, Method, Request, StatusCode};
use serde_json::Value;
use std::net::SocketAddr;
use std::sync::Arc;
use tempfile::TempDir;
use tower::ServiceExt;
use wheelwort::app::App;
use wheelwort::app::who::{Right, Via, Who};
use wheelwort::clock::Clock;
use wheelwort::core::documents::Pathway;
use wheelwort::evidence;
use wheelwort::library;
use wheelwort::pathways::rows::Rows;
use wheelwort::web::actor::Asking;
use wheelwort::web::{Shell, router};

/// The service under test.
pub struct TestApp {
    pub app: App,
    pub router: Router,
    _folder: TempDir,
}

/// What the service answered.
#[derive(Debug)]
pub struct Answer {
    pub status: StatusCode,
    pub headers: HeaderMap,
    pub bytes: Vec<u8>,
}

impl TestApp {
    pub async fn new() -> TestApp {
        TestApp::with(Shell::default()).await
    }

    pub async fn with(shell: Shell) -> TestApp {
        TestApp::on(tempfile::tempdir().expect("a folder"), shell).await
    }

    async fn on(folder: TempDir, shell: Shell) -> TestApp {
        let clock = Clock::fixed("2026-12-01T12:00:00Z".parse().expect("a time"), 7);
        let app = App::open(&folder.path().join("wheelwort.db"), clock, library::book())
            .await
            .expect("opens");
        let asking = Asking {
            organisation: app.organisation,
            who: Arc::new(preparer()),
        };
        let router = router(app.clone(), shell).layer(axum::Extension(asking));
        TestApp {
            app,
            router,
            _folder: folder,
        }
    }

    /// Closes the service and opens it again on the same data.
    pub async fn restarted(self) -> TestApp {
        self.app.close().await;
        TestApp::on(self._folder, Shell::default()).await
    }

    pub async fn send(&self, request: Request<Body>) -> Answer {
        answer_of(&self.router, request).await
    }

    pub async fn ask(
        &self,
        method: &str,
        path: &str,
        headers: &[(&str, &str)],
        body: impl Into<Body>,
    ) -> Answer {
        self.send(request(method, path, headers, body)).await
    }

    pub async fn get(&self, path: &str) -> Answer {
        self.ask("GET", path, &[], Body::empty()).await
    }

    pub async fn post(&self, path: &str, body: &Value) -> Answer {
        self.ask(
            "POST",
            path,
            &[("content-type", "application/json")],
            body.to_string(),
        )
        .await
    }

    pub async fn put(&self, path: &str, if_match: &str, body: &Value) -> Answer {
        let headers = [("content-type", "application/json"), ("if-match", if_match)];
        self.ask("PUT", path, &headers, body.to_string()).await
    }

    /// Stores the chain; its address and ETag.
    pub async fn stores_chain(&self) -> (String, String) {
        self.stores(&chain()).await
    }

    /// Stores a document, with the evidence it names; its address and ETag.
    pub async fn stores(&self, document: &Value) -> (String, String) {
        seed_evidence(&self.app, document).await;
        let answer = self.post("/api/v1/pathways", document).await;
        assert_eq!(answer.status, 201, "{}", answer.text());
        (
            answer.header("location").to_owned(),
            answer.header("etag").to_owned(),
        )
    }

    /// How many pathways are stored, archived ones too.
    pub async fn stored(&self) -> usize {
        let mut count = 0;
        for archived in ["false", "true"] {
            let answer = self
                .get(&format!("/api/v1/pathways?limit=200&archived={archived}"))
                .await;
            count += answer.json()["items"].as_array().expect("items").len();
        }
        count
    }

    /// The same service, asked by somebody else.
    pub fn asked_by(&self, who: Who) -> Router {
        let asking = Asking {
            organisation: self.app.organisation,
            who: Arc::new(who),
        };
        router(self.app.clone(), Shell::default()).layer(axum::Extension(asking))
    }

    /// Serves on a socket of this machine.
    pub async fn listens(&self) -> SocketAddr {
        let listener = tokio::net::TcpListener::bind("127.0.0.1:0").await.expect("binds");
        let address = listener.local_addr().expect("an address");
        let patient =
            wheelwort::web::patience::Patient::new(listener, 64, std::time::Duration::from_secs(30));
        tokio::spawn(wheelwort::web::serve(
            patient,
            self.router.clone(),
            std::future::pending(),
        ));
        address
    }
}

/// Attaches a short file under every id of evidence that a document names.
pub async fn seed_evidence(app: &App, document: &Value) {
    let Ok(pathway) = Pathway::from_value(document) else {
        return;
    };
    for place in Rows::of(&pathway).evidence {
        let id = place.evidence;
        if evidence::read(app, &id).await.is_err() {
            attach_text(app, Some(&id), "seed.txt", &format!("Backs what names {id}."))
                .await
                .expect("attached");
        }
    }
}

/// Attaches a file of text.
pub async fn attach_text(
    app: &App,
    id: Option<&str>,
    file_name: &str,
    text: &str,
) -> Result<evidence::Record, evidence::EvidenceError> {
    let mut incoming = evidence::Incoming::begin(app).await?;
    incoming.add(text.as_bytes()).await?;
    let naming = evidence::Naming {
        id: id.map(str::to_owned),
        file_name: file_name.to_owned(),
        media_type: "text/plain".to_owned(),
        note: None,
    };
    let attached = evidence::attach(app, incoming.arrived().await?, naming).await?;
    Ok(attached.record)
}

/// A client for sockets of this machine.
pub fn client() -> reqwest::Client {
    // It wants to know who would encrypt, also where nothing is encrypted.
    let _ = rustls::crypto::ring::default_provider().install_default();
    reqwest::Client::new()
}

/// Somebody signed in who may enter data, approve it and name members.
pub fn preparer() -> Who {
    Who {
        person: Some(uuid::Uuid::from_u128(7)),
        name: "I. Marsh".into(),
        sign_in_name: "marsh".into(),
        organisation_name: "Own organisation".into(),
        via: Via::Session("test".into()),
        rights: [Right::Read, Right::Write, Right::Approve, Right::Administer].into(),
        ..Who::stranger()
    }
}

pub fn request(method: &str, path: &str, headers: &[(&str, &str)], body: impl Into<Body>) -> Request<Body> {
    let method = Method::from_bytes(method.as_bytes()).expect("a method");
    let request = Request::builder().method(method).uri(path);
    let request = headers
        .iter()
        .fold(request, |request, (name, value)| request.header(*name, *value));
    request.body(body.into()).expect("a request")
}

pub async fn answer_of(router: &Router, request: Request<Body>) -> Answer {
    let response = router.clone().oneshot(request).await.expect("an answer");
    let (parts, body) = response.into_parts();
    let bytes = to_bytes(body, usize::MAX).await.expect("a body").to_vec();
    Answer {
        status: parts.status,
        headers: parts.headers,
        bytes,
    }
}

impl Answer {
    pub fn header(&self, name: &str) -> &str {
        self.headers
            .get(name)
            .map_or("", |value| value.to_str().expect("text"))
    }

    pub fn text(&self) -> String {
        String::from_utf8_lossy(&self.bytes).into_owned()
    }

    pub fn json(&self) -> Value {
        serde_json::from_slice(&self.bytes).unwrap_or_else(|error| panic!("{error}: {}", self.text()))
    }

    /// Asserts a refusal in its proper shape, with nothing of the machinery showing; its document.
    pub fn refused(&self, status: u16) -> Value {
        assert_eq!(self.status, status, "{}", self.text());
        assert_eq!(self.header("content-type"), "application/problem+json");
        let problem = self.json();
        assert_eq!(problem["status"], status);
        for field in ["type", "title", "detail", "request"] {
            assert!(
                problem[field].as_str().is_some_and(|text| !text.is_empty()),
                "{field}: {problem}"
            );
        }
        for word in [
            "SELECT",
            "INSERT",
            "sqlx",
            "sqlite",
            "panicked",
            ".rs:",
            "RUST_BACKTRACE",
        ] {
            assert!(!self.text().contains(word), "{word}: {problem}");
        }
        problem
    }
}

/// The pointers of a problem's errors.
pub fn pointers(problem: &Value) -> Vec<&str> {
    let errors = problem["errors"].as_array().map_or(&[][..], Vec::as_slice);
    errors
        .iter()
        .map(|error| error["pointer"].as_str().expect("a pointer"))
        .collect()
}
