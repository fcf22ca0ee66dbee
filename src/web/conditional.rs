//! Conditional requests (RFC 9110, 13): the entity tag is the hash of the bytes, a write names the one it read.

use super::problem::Refusal;
use axum::extract::FromRequestParts;
use axum::http::header::{CACHE_CONTROL, CONTENT_TYPE, ETAG, HeaderName, IF_MATCH, IF_NONE_MATCH};
use axum::http::request::Parts;
use axum::http::{HeaderMap, HeaderValue, StatusCode};
use axum::response::{IntoResponse, Response};

/// The entity tag of bytes with this hash (`sha256:...`): the hexadecimal digits in quotes.
pub fn etag(hash: &str) -> HeaderValue {
    let digits = hash.strip_prefix("sha256:").unwrap_or(hash);
    HeaderValue::try_from(format!("\"{digits}\"")).unwrap_or(HeaderValue::from_static("\"\""))
}

/// The tags of `If-Match` or `If-None-Match`.
#[derive(Clone, Debug, PartialEq, Eq)]
enum Tags {
    Absent,
    Any,
    /// Opaque parts with their quotes, and whether each was weak.
    These(Vec<(bool, String)>),
}

impl Tags {
    fn read(headers: &HeaderMap, name: &HeaderName) -> Result<Tags, Refusal> {
        let mut lines = headers.get_all(name).iter().peekable();
        if lines.peek().is_none() {
            return Ok(Tags::Absent);
        }
        let wrong = || {
            Refusal::bad_request(format!(
                "The header {name} is wrong. Send an ETag as it was given, with its quotes, or *."
            ))
        };
        let mut these = Vec::new();
        for line in lines {
            let line = line.to_str().map_err(|_| wrong())?;
            for item in line.split(',').map(str::trim) {
                if item == "*" {
                    return Ok(Tags::Any);
                }
                let (weak, tag) = item.strip_prefix("W/").map_or((false, item), |tag| (true, tag));
                let inner = tag
                    .strip_prefix('"')
                    .and_then(|tag| tag.strip_suffix('"'))
                    .ok_or_else(wrong)?;
                if inner.contains('"') {
                    return Err(wrong());
                }
                these.push((weak, tag.to_owned()));
            }
        }
        Ok(Tags::These(these))
    }
}

/// `If-Match` of a write.
#[derive(Clone, Debug)]
pub struct IfMatch(Tags);

impl<S: Send + Sync> FromRequestParts<S> for IfMatch {
    type Rejection = Refusal;

    async fn from_request_parts(parts: &mut Parts, _: &S) -> Result<IfMatch, Refusal> {
        Tags::read(&parts.headers, &IF_MATCH).map(IfMatch)
    }
}

impl IfMatch {
    /// The hashes (`sha256:...`) that the write may follow; none for any.
    ///
    /// # Errors
    /// 428 without the header.
    pub fn hashes(&self) -> Result<Option<Vec<String>>, Refusal> {
        match &self.0 {
            Tags::Absent => Err(Refusal::of(StatusCode::PRECONDITION_REQUIRED)),
            Tags::Any => Ok(None),
            // If-Match compares strongly: a weak tag never matches.
            Tags::These(tags) => {
                let strong = tags.iter().filter(|(weak, _)| !weak);
                Ok(Some(
                    strong
                        .map(|(_, tag)| format!("sha256:{}", tag.trim_matches('"')))
                        .collect(),
                ))
            }
        }
    }
}

/// `If-None-Match` of a read.
#[derive(Clone, Debug)]
pub struct IfNoneMatch(Tags);

impl<S: Send + Sync> FromRequestParts<S> for IfNoneMatch {
    type Rejection = Refusal;

    async fn from_request_parts(parts: &mut Parts, _: &S) -> Result<IfNoneMatch, Refusal> {
        // A tag that cannot be read matches nothing; the answer is then simply sent.
        Ok(IfNoneMatch(
            Tags::read(&parts.headers, &IF_NONE_MATCH).unwrap_or(Tags::Absent),
        ))
    }
}

impl IfNoneMatch {
    /// True if the reader already has these bytes.
    pub fn has(&self, hash: &str) -> bool {
        match &self.0 {
            Tags::Absent => false,
            Tags::Any => true,
            Tags::These(tags) => tags
                .iter()
                .any(|(_, tag)| tag.as_bytes() == etag(hash).as_bytes()),
        }
    }

    /// JSON bytes with their tag, or 304 where the reader has them.
    pub fn json(&self, hash: &str, bytes: impl Into<axum::body::Body>) -> Response {
        let headers = [
            (ETAG, etag(hash)),
            (CACHE_CONTROL, HeaderValue::from_static("private, no-cache")),
        ];
        if self.has(hash) {
            return (StatusCode::NOT_MODIFIED, headers).into_response();
        }
        let kind = [(CONTENT_TYPE, HeaderValue::from_static("application/json"))];
        (headers, kind, bytes.into()).into_response()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn tags(name: &HeaderName, values: &[&'static str]) -> Result<Tags, Refusal> {
        let headers = values.iter().map(|v| (name.clone(), HeaderValue::from_static(v)));
        let mut map = HeaderMap::new();
        headers.for_each(|(name, value)| {
            map.append(name, value);
        });
        Tags::read(&map, name)
    }

    #[test]
    fn a_write_must_name_what_it_read() {
        let hashes = |given: &[&'static str]| {
            IfMatch(tags(&IF_MATCH, given).expect("readable"))
                .hashes()
                .map_err(|refusal| refusal.status().as_u16())
        };
        assert_eq!(hashes(&[]), Err(428));
        assert_eq!(hashes(&["*"]), Ok(None));
        assert_eq!(hashes(&["\"ab\""]), Ok(Some(vec!["sha256:ab".into()])));
        assert_eq!(hashes(&["W/\"ab\""]), Ok(Some(vec![])));
        assert_eq!(
            hashes(&["\"ab\", W/\"cd\"", "\"ef\""]),
            Ok(Some(vec!["sha256:ab".into(), "sha256:ef".into()]))
        );
    }

    #[test]
    fn tags_without_quotes_are_refused() {
        for wrong in ["ab", "\"ab", "\"", "\"a\"b\"", ""] {
            assert!(tags(&IF_MATCH, &[wrong]).is_err(), "{wrong}");
        }
    }

    #[test]
    fn a_read_compares_weakly() {
        let none_match = |given: &[&'static str]| IfNoneMatch(tags(&IF_NONE_MATCH, given).expect("readable"));
        assert!(none_match(&["W/\"ab\""]).has("sha256:ab"));
        assert!(none_match(&["*"]).has("sha256:ab"));
        assert!(!none_match(&["\"cd\""]).has("sha256:ab"));
        assert!(!none_match(&[]).has("sha256:ab"));
    }
}
