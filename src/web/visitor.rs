//! What of a page belongs to the visitor: the token in its forms, who they are, light or dark. Templates leave slots, and
//! this layer fills them, so that no page has to carry it through. A slot holds a text drawn when the program starts:
//! nobody can write one into data.

use super::problem::escaped;
use crate::clock::Clock;
use crate::core::documents::canonical::hex;
use axum::body::{Body, to_bytes};
use axum::extract::Request;
use axum::http::header::{CONTENT_LENGTH, CONTENT_TYPE, SET_COOKIE};
use axum::http::{HeaderValue, StatusCode};
use axum::middleware::Next;
use axum::response::{IntoResponse, Response};
use std::sync::LazyLock;

/// The name of the hidden field that every posted form carries.
pub const FIELD: &str = "form_token";

/// Begins every slot; a letter and a point follow.
static SENTINEL: LazyLock<String> = LazyLock::new(|| {
    let secret = Clock::system().secret();
    let (half, _) = secret.split_at(16);
    format!("slot-{}-", hex(half))
});

/// The slot of the token in a form.
pub fn form_slot() -> String {
    format!("{}f.", *SENTINEL)
}

/// The slot of the attribute that makes a page light or dark.
pub fn theme_slot() -> String {
    format!("{}t.", *SENTINEL)
}

/// The slot of who the visitor is, in the head of a page; it says whether the page is `/me` or `/people`.
pub fn who_slot(place: Place) -> String {
    let letter = match place {
        Place::Elsewhere => 'w',
        Place::Me => 'm',
        Place::People => 'p',
        Place::SignIn => 's',
    };
    format!("{}{letter}.", *SENTINEL)
}

/// Where a page stands among those about people.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Place {
    /// The page is about something else.
    Elsewhere,
    /// `/me`.
    Me,
    /// `/people`.
    People,
    /// `/sign-in`.
    SignIn,
}

/// Whoever looks at a page. The layer that knows people puts it on the answer.
#[derive(Clone, Debug)]
pub struct Visitor {
    /// Their name; none for strangers.
    pub name: Option<String>,
    /// True if they name members.
    pub administers: bool,
    /// `light`, `dark`, or empty for what their machine says.
    pub theme: String,
    /// The token of their forms.
    pub form_token: String,
    /// A cookie that goes with the token, if the browser has none yet.
    pub cookie: Option<HeaderValue>,
}

/// The layer: fills the slots of an HTML answer. Without a [`Visitor`] on the answer they are emptied.
pub async fn fill(request: Request, next: Next) -> Response {
    let mut response = next.run(request).await;
    let visitor = response.extensions_mut().remove::<Visitor>();
    let is_page = response
        .headers()
        .get(CONTENT_TYPE)
        .is_some_and(|kind| kind.as_bytes().starts_with(b"text/html"));
    if !is_page {
        return response;
    }
    let (mut parts, body) = response.into_parts();
    // Pages are whole texts in memory already.
    let Ok(bytes) = to_bytes(body, usize::MAX).await else {
        return StatusCode::INTERNAL_SERVER_ERROR.into_response();
    };
    let Ok(page) = std::str::from_utf8(&bytes) else {
        return Response::from_parts(parts, Body::from(bytes));
    };
    let (filled, has_form) = filled(page, visitor.as_ref());
    parts.headers.remove(CONTENT_LENGTH);
    if has_form && let Some(cookie) = visitor.and_then(|visitor| visitor.cookie) {
        parts.headers.append(SET_COOKIE, cookie);
    }
    Response::from_parts(parts, Body::from(filled))
}

/// A page with its slots filled, and whether one was that of a form.
fn filled(page: &str, visitor: Option<&Visitor>) -> (String, bool) {
    let mut out = String::with_capacity(page.len() + 512);
    let mut has_form = false;
    let mut pieces = page.split(SENTINEL.as_str());
    out.push_str(pieces.next().unwrap_or_default());
    for piece in pieces {
        let Some((letter, rest)) = piece.split_once('.') else {
            out.push_str(piece);
            continue;
        };
        match (letter, visitor) {
            ("f", Some(visitor)) => {
                has_form = true;
                out.push_str(&visitor.form_token);
            }
            ("t", Some(visitor)) => out.push_str(&visitor.theme),
            ("w" | "m" | "p" | "s", Some(visitor)) => who(&mut out, letter, visitor),
            _ => {}
        }
        out.push_str(rest);
    }
    (out, has_form)
}

/// Who the visitor is, with the ways to what belongs to them. It stands in a comment that this closes and opens again.
fn who(out: &mut String, letter: &str, visitor: &Visitor) {
    let here = |is: bool| if is { " aria-current=\"page\"" } else { "" };
    out.push_str("--><ul class=\"who\">");
    match &visitor.name {
        Some(name) => {
            if visitor.administers {
                out.push_str(&format!(
                    "<li><a href=\"/people\"{}>People</a></li>",
                    here(letter == "p")
                ));
            }
            out.push_str(&format!(
                "<li><a href=\"/me\"{}>{}</a></li><li><form method=\"post\" action=\"/sign-out\"><input type=\"hidden\" \
                 name=\"{FIELD}\" value=\"{}\"><button class=\"text\">Sign out</button></form></li>",
                here(letter == "m"),
                escaped(name),
                escaped(&visitor.form_token),
            ));
        }
        None if letter != "s" => out.push_str("<li><a href=\"/sign-in\">Sign in</a></li>"),
        None => {}
    }
    out.push_str("</ul><!--");
}

#[cfg(test)]
mod tests {
    use super::*;

    fn visitor(name: Option<&str>) -> Visitor {
        Visitor {
            name: name.map(str::to_owned),
            administers: false,
            theme: "dark".into(),
            form_token: "abc".into(),
            cookie: None,
        }
    }

    #[test]
    fn slots_are_filled_and_nothing_else_is_touched() {
        let page = format!(
            "<html data-theme=\"{}\"><!--{}--><input value=\"{}\">slot-f. 3.5",
            theme_slot(),
            who_slot(Place::Me),
            form_slot()
        );
        let (html, has_form) = filled(&page, Some(&visitor(Some("I. <b>Marsh"))));
        assert!(
            has_form && html.starts_with("<html data-theme=\"dark\">"),
            "{html}"
        );
        assert!(
            html.contains("<a href=\"/me\" aria-current=\"page\">I. &lt;b&gt;Marsh</a>"),
            "{html}"
        );
        assert!(html.ends_with("<input value=\"abc\">slot-f. 3.5"), "{html}");
        assert!(!html.contains("People"), "{html}");
        let (html, _) = filled(&page, None);
        assert!(
            !html.contains("slot-f.-") && html.contains("value=\"\"") && !html.contains(SENTINEL.as_str())
        );
    }

    #[test]
    fn a_stranger_is_shown_the_way_in() {
        let (html, has_form) = filled(
            &format!("<!--{}-->", who_slot(Place::Elsewhere)),
            Some(&visitor(None)),
        );
        assert!(
            html.contains("href=\"/sign-in\"") && !html.contains("sign-out"),
            "{html}"
        );
        assert!(!has_form);
        let (html, _) = filled(
            &format!("<!--{}-->", who_slot(Place::SignIn)),
            Some(&visitor(None)),
        );
        assert!(!html.contains("href"), "{html}");
    }
}
