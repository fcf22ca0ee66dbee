//! The token of posted forms: found in the body, taken out of it, and compared, before any handler reads the form. That
//! the token is missing is told by [`Actor`](super::actor::Actor), after it has told who may not do it at all.

use super::extract::{Limits, is_of_type, next_piece, whole_body};
use super::problem::Refusal;
use super::visitor::FIELD;
use axum::body::{Body, Bytes};
use axum::extract::Request;
use axum::http::header::{CONTENT_LENGTH, CONTENT_TYPE};
use axum::http::{HeaderMap, HeaderValue};
use tokio_stream::StreamExt;

/// A token stands within so many bytes of the beginning of a form with files.
const WITHIN: usize = 4_096;

/// Whether a request that changes something was sent from a page of ours, or needs no such proof.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FormCheck {
    /// It was, or it came with a token for scripts.
    Passed,
    /// It was not, or nothing shows it.
    Missing,
}

/// The request without the token of its form, and the token.
///
/// # Errors
/// When the body is too large, too slow or breaks off.
pub async fn taken_out(request: Request) -> Result<(Request, Option<String>), Refusal> {
    let limits = Limits::of(request.extensions());
    if is_of_type(request.headers(), |kind| {
        kind == "application/x-www-form-urlencoded"
    }) {
        let (mut parts, body) = request.into_parts();
        let mut whole = Request::new(body);
        *whole.headers_mut() = parts.headers.clone();
        let bytes = whole_body(whole, &limits).await?;
        let (rest, token) = from_fields(&bytes);
        parts
            .headers
            .insert(CONTENT_LENGTH, HeaderValue::from(rest.len()));
        return Ok((Request::from_parts(parts, Body::from(rest)), token));
    }
    let Some(boundary) = boundary(request.headers()) else {
        return Ok((request, None));
    };
    let (mut parts, body) = request.into_parts();
    let mut pieces = body.into_data_stream();
    let mut begin = Vec::new();
    let mut found = None;
    while begin.len() < WITHIN {
        let Some(piece) = next_piece(&mut pieces, &limits).await? else {
            break;
        };
        begin.extend_from_slice(&piece);
        found = from_first_part(&begin, &boundary);
        if found.is_some() {
            break;
        }
    }
    let (token, at) = match found {
        Some((token, at)) => (Some(token), at),
        None => (None, 0),
    };
    // What is left is shorter than was told.
    parts.headers.remove(CONTENT_LENGTH);
    let rest = Bytes::from(begin.split_off(at));
    let body = Body::from_stream(tokio_stream::once(Ok(rest)).chain(pieces));
    Ok((Request::from_parts(parts, body), token))
}

/// The fields of a form without the token, and the token.
fn from_fields(body: &[u8]) -> (Vec<u8>, Option<String>) {
    let mut rest = Vec::with_capacity(body.len());
    let mut token = None;
    for field in body.split(|byte| *byte == b'&') {
        let value = field
            .strip_prefix(FIELD.as_bytes())
            .and_then(|value| value.strip_prefix(b"="));
        match value {
            Some(value) => {
                token.get_or_insert_with(|| String::from_utf8_lossy(value).into_owned());
            }
            None => {
                if !rest.is_empty() {
                    rest.push(b'&');
                }
                rest.extend_from_slice(field);
            }
        }
    }
    (rest, token)
}

/// What parts the fields of a form with files.
fn boundary(headers: &HeaderMap) -> Option<Vec<u8>> {
    let kind = headers.get(CONTENT_TYPE)?.to_str().ok()?;
    let (kind, parameters) = kind.split_once(';')?;
    if !kind.trim().eq_ignore_ascii_case("multipart/form-data") {
        return None;
    }
    parameters.split(';').find_map(|parameter| {
        let (name, value) = parameter.trim().split_once('=')?;
        let value = value.trim_matches('"');
        (name.eq_ignore_ascii_case("boundary") && !value.is_empty())
            .then(|| format!("--{value}").into_bytes())
    })
}

/// The token in the first part of a form with files, and where the second begins.
fn from_first_part(body: &[u8], boundary: &[u8]) -> Option<(String, usize)> {
    let head = body.strip_prefix(boundary)?.strip_prefix(b"\r\n")?;
    let end_of_head = find(head, b"\r\n\r\n")?;
    let words = std::str::from_utf8(head.get(..end_of_head)?)
        .ok()?
        .to_ascii_lowercase();
    let named = format!("name=\"{FIELD}\"");
    if words.contains("\r\n")
        || !words.starts_with("content-disposition: form-data;")
        || !words.ends_with(&named)
    {
        return None;
    }
    let value = head.get(end_of_head + 4..)?;
    let close = [b"\r\n", boundary].concat();
    let end = find(value, &close)?;
    let token = std::str::from_utf8(value.get(..end)?).ok()?.to_owned();
    let at = body.len() - value.len() + end + 2;
    Some((token, at))
}

fn find(text: &[u8], part: &[u8]) -> Option<usize> {
    text.windows(part.len()).position(|window| window == part)
}

#[cfg(test)]
mod tests {
    use super::*;
    use axum::body::to_bytes;

    async fn of(kind: &str, body: &str) -> (String, Option<String>) {
        let request = Request::builder()
            .header(CONTENT_TYPE, kind)
            .body(Body::from(body.to_owned()))
            .expect("a request");
        let (request, token) = taken_out(request).await.expect("reads");
        let rest = to_bytes(request.into_body(), usize::MAX).await.expect("a body");
        (String::from_utf8(rest.to_vec()).expect("text"), token)
    }

    #[tokio::test]
    async fn the_token_is_taken_out_of_fields() {
        let kind = "application/x-www-form-urlencoded";
        let token = Some("abc".to_owned());
        assert_eq!(
            of(kind, "form_token=abc&a=1&b=").await,
            ("a=1&b=".into(), token.clone())
        );
        assert_eq!(
            of(kind, "a=1&form_token=abc").await,
            ("a=1".into(), token.clone())
        );
        assert_eq!(of(kind, "form_token=abc").await, (String::new(), token));
        assert_eq!(
            of(kind, "a=form_token%3Dabc").await,
            ("a=form_token%3Dabc".into(), None)
        );
        assert_eq!(
            of("text/plain", "form_token=abc").await,
            ("form_token=abc".into(), None)
        );
    }

    #[tokio::test]
    async fn the_token_is_taken_out_of_a_form_with_files() {
        let kind = "multipart/form-data; boundary=x1";
        let part = |name: &str, value: &str| {
            format!("--x1\r\nContent-Disposition: form-data; name=\"{name}\"\r\n\r\n{value}\r\n")
        };
        let rest = format!("{}--x1--\r\n", part("file", "form_token"));
        let whole = format!("{}{rest}", part("form_token", "abc"));
        assert_eq!(of(kind, &whole).await, (rest.clone(), Some("abc".into())));
        assert_eq!(of(kind, &rest).await, (rest, None));
        let long = part("file", &"y".repeat(10_000));
        assert_eq!(of(kind, &long).await, (long, None));
    }
}
