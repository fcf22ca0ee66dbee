//! Files that pages need (style, fonts, marks), embedded in the program. The address of each carries a hash of its
//! bytes, so that browsers may keep it for ever and a new version is never mistaken for an old one.

use super::problem::Refusal;
use crate::core::documents::canonical;
use axum::Router;
use axum::body::Bytes;
use axum::extract::Path;
use axum::http::header::{CACHE_CONTROL, CONTENT_TYPE};
use axum::http::{HeaderValue, StatusCode};
use axum::response::{IntoResponse, Response};
use axum::routing::get;
use std::collections::BTreeMap;
use std::sync::LazyLock;

/// The embedded files by name. Files that others name (fonts, pictures) stand before those that name them (styles).
pub const FILES: &[(&str, &[u8])] = &[
    (
        "fonts/vollkorn-latin-wght-normal.woff2",
        include_bytes!("../../templates/assets/fonts/vollkorn-latin-wght-normal.woff2"),
    ),
    (
        "fonts/source-sans-3-latin-wght-normal.woff2",
        include_bytes!("../../templates/assets/fonts/source-sans-3-latin-wght-normal.woff2"),
    ),
    ("mark.svg", include_bytes!("../../templates/assets/mark.svg")),
    (
        "mark-dark.svg",
        include_bytes!("../../templates/assets/mark-dark.svg"),
    ),
    ("live.js", include_bytes!("../../templates/assets/live.js")),
    ("style.css", include_bytes!("../../templates/assets/style.css")),
];

static ASSETS: LazyLock<Assets> = LazyLock::new(|| Assets::of(FILES));

/// The address of an embedded file, such as `/assets/style.1f2e3d4c5b6a.css`; of a name that is not embedded, an
/// address that answers 404.
pub fn url(name: &str) -> &'static str {
    ASSETS
        .addresses
        .get(name)
        .map_or("/assets/missing", String::as_str)
}

/// The route that serves them.
pub fn routes<S: Clone + Send + Sync + 'static>() -> Router<S> {
    Router::new().route("/assets/{file}", get(file))
}

async fn file(Path(file): Path<String>) -> Response {
    match ASSETS.files.get(&file) {
        None => Refusal::of(StatusCode::NOT_FOUND).into_response(),
        Some((kind, bytes)) => {
            let headers = [
                (CONTENT_TYPE, HeaderValue::from_static(kind)),
                (
                    CACHE_CONTROL,
                    HeaderValue::from_static("public, max-age=31536000, immutable"),
                ),
            ];
            (headers, bytes.clone()).into_response()
        }
    }
}

#[derive(Default)]
struct Assets {
    /// Address by name.
    addresses: BTreeMap<&'static str, String>,
    /// Content type and bytes by the last part of the address.
    files: BTreeMap<String, (&'static str, Bytes)>,
}

impl Assets {
    fn of(files: &[(&'static str, &'static [u8])]) -> Assets {
        let mut assets = Assets::default();
        for (name, bytes) in files {
            let bytes = match std::str::from_utf8(bytes) {
                Ok(text) if name.ends_with(".css") => Bytes::from(assets.with_addresses(text)),
                _ => Bytes::from_static(bytes),
            };
            let hash = canonical::hash(&bytes);
            let digits = hash
                .strip_prefix("sha256:")
                .and_then(|digits| digits.get(..12))
                .unwrap_or("0");
            let base = name.rsplit('/').next().unwrap_or(name);
            let (stem, ending) = base.rsplit_once('.').unwrap_or((base, "bin"));
            let file = format!("{stem}.{digits}.{ending}");
            assets.addresses.insert(name, format!("/assets/{file}"));
            assets.files.insert(file, (content_type(ending), bytes));
        }
        assets
    }

    /// A style sheet with the names in its `url("...")` replaced by addresses.
    fn with_addresses(&self, style: &str) -> String {
        self.addresses
            .iter()
            .fold(style.to_owned(), |style, (name, address)| {
                style.replace(&format!("url(\"{name}\")"), &format!("url(\"{address}\")"))
            })
    }
}

fn content_type(ending: &str) -> &'static str {
    match ending {
        "css" => "text/css; charset=utf-8",
        "js" => "text/javascript; charset=utf-8",
        "svg" => "image/svg+xml",
        "woff2" => "font/woff2",
        "png" => "image/png",
        "txt" => "text/plain; charset=utf-8",
        _ => "application/octet-stream",
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    const SOME: &[(&str, &[u8])] = &[
        ("fonts/a.woff2", b"font"),
        ("style.css", b"@font-face { src: url(\"fonts/a.woff2\") }"),
    ];

    #[test]
    fn addresses_carry_a_hash_and_styles_follow() {
        let assets = Assets::of(SOME);
        let font = &assets.addresses["fonts/a.woff2"];
        let style = &assets.addresses["style.css"];
        assert!(
            font.starts_with("/assets/a.") && font.ends_with(".woff2"),
            "{font}"
        );
        let (kind, bytes) = &assets.files[style.trim_start_matches("/assets/")];
        assert_eq!(*kind, "text/css; charset=utf-8");
        assert!(std::str::from_utf8(bytes).expect("text").contains(font.as_str()));
    }

    #[test]
    fn another_content_has_another_address() {
        let other = Assets::of(&[("fonts/a.woff2", b"other")]);
        assert_ne!(
            Assets::of(SOME).addresses["fonts/a.woff2"],
            other.addresses["fonts/a.woff2"]
        );
    }
}
