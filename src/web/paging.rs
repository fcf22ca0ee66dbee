//! Lists a page at a time: `?limit=&after=`, and the address of the next page in `Link` (RFC 8288).

#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

use super::problem::Refusal;
use axum::Json;
use axum::http::header::LINK;
use axum::http::{HeaderValue, Uri};
use axum::response::{IntoResponse, Response};
use serde::{Deserialize, Serialize};
use utoipa::{IntoParams, ToSchema};

/// Entries of a page where no limit is asked for.
pub const USUAL: u32 = 50;
/// Entries of a page at most.
pub const MOST: u32 = 200;

/// Which page of a list.
#[derive(Debug, Deserialize, IntoParams)]
#[serde(deny_unknown_fields)]
#[into_params(parameter_in = Query)]
pub struct PageQuestion {
    /// Entries on the page.
    #[param(minimum = 1, maximum = 200, default = 50)]
    pub limit: Option<u32>,
    /// `next` of the page before.
    pub after: Option<String>,
}

/// One page of a list.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct Page<T> {
    /// The entries, in order.
    pub items: Vec<T>,
    /// What to send as `after` for the next page; null on the last one. `Link` holds the whole address.
    pub next: Option<String>,
}

/// The limit asked for.
///
/// # Errors
/// 400 when it is not 1 to [`MOST`].
pub fn limit(asked: Option<u32>) -> Result<u32, Refusal> {
    match asked {
        None => Ok(USUAL),
        Some(limit) if (1..=MOST).contains(&limit) => Ok(limit),
        Some(limit) => Err(Refusal::bad_request(format!(
            "The limit is {limit}. Ask for 1 to {MOST} entries."
        ))),
    }
}

impl<T> Page<T> {
    /// The page of a sorted list in memory that follows the entry `after`.
    pub fn cut(
        sorted: impl IntoIterator<Item = T>,
        id: impl Fn(&T) -> &str,
        after: Option<&str>,
        limit: u32,
    ) -> Page<T> {
        let limit = limit as usize;
        let mut items: Vec<T> = sorted
            .into_iter()
            .filter(|item| after.is_none_or(|after| id(item) > after))
            .take(limit + 1)
            .collect();
        let next = if items.len() > limit {
            items.truncate(limit);
            items.last().map(|last| id(last).to_owned())
        } else {
            None
        };
        Page { items, next }
    }

    /// The same page with every entry turned into something else.
    pub fn map<U>(self, turn: impl FnMut(T) -> U) -> Page<U> {
        Page {
            items: self.items.into_iter().map(turn).collect(),
            next: self.next,
        }
    }
}

impl<T: Serialize> Page<T> {
    /// The answer to a request for `uri`.
    pub fn answer(self, uri: &Uri) -> Response {
        let link = self.next.as_deref().and_then(|next| link(uri, next));
        let mut response = Json(self).into_response();
        if let Some(link) = link {
            response.headers_mut().insert(LINK, link);
        }
        response
    }
}

/// `<address>; rel="next"`: the address asked for with another `after`.
fn link(uri: &Uri, next: &str) -> Option<HeaderValue> {
    let mut address = uri.path().to_owned();
    let mut sign = '?';
    for pair in uri
        .query()
        .unwrap_or("")
        .split('&')
        .filter(|pair| !pair.is_empty())
    {
        if pair.split('=').next() != Some("after") {
            address.push(sign);
            address.push_str(pair);
            sign = '&';
        }
    }
    address.push(sign);
    address.push_str("after=");
    for byte in next.bytes() {
        if byte.is_ascii_alphanumeric() || b"-._~".contains(&byte) {
            address.push(char::from(byte));
        } else {
            address.push_str(&format!("%{byte:02X}"));
        }
    }
    HeaderValue::try_from(format!("<{address}>; rel=\"next\"")).ok()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn pages_of_a_list_are_the_list() {
        let all: Vec<String> = (0..25).map(|n| format!("row-{n:02}")).collect();
        for limit in 1..30 {
            let (mut seen, mut after, mut turns) = (Vec::new(), None, 0);
            loop {
                let page = Page::cut(all.clone(), |id| id.as_str(), after.as_deref(), limit);
                assert!(page.items.len() <= limit as usize);
                seen.extend(page.items);
                turns += 1;
                assert!(turns < 60);
                match page.next {
                    Some(next) => after = Some(next),
                    None => break,
                }
            }
            assert_eq!(seen, all);
        }
    }

    #[test]
    fn the_next_address_keeps_the_rest_of_the_query() {
        let uri: Uri = "/api/v1/factors?search=an%20b&after=x&limit=2"
            .parse()
            .expect("an address");
        let link = link(&uri, "eu/fert n").expect("a header");
        assert_eq!(
            link,
            "</api/v1/factors?search=an%20b&limit=2&after=eu%2Ffert%20n>; rel=\"next\""
        );
    }

    #[test]
    fn a_limit_is_1_to_200() {
        assert_eq!(limit(None).ok(), Some(50));
        assert_eq!(limit(Some(200)).ok(), Some(200));
        assert!(limit(Some(0)).is_err() && limit(Some(201)).is_err());
    }
}
