//! The two cookies of the service: that of a session, and that of a browser which has not signed in.

use axum::http::header::COOKIE;
use axum::http::{HeaderMap, HeaderValue};

/// The cookie of a session.
pub const SESSION: &str = "wheelwort";
/// The cookie of a browser that has not signed in: forms of strangers belong to it.
pub const VISIT: &str = "wheelwort_visit";

/// A cookie of a request.
pub fn read<'h>(headers: &'h HeaderMap, name: &str) -> Option<&'h str> {
    headers
        .get_all(COOKIE)
        .iter()
        .filter_map(|line| line.to_str().ok())
        .flat_map(|line| line.split(';'))
        .filter_map(|pair| pair.trim().split_once('='))
        .find(|(found, _)| *found == name)
        .map(|(_, value)| value)
}

/// Sets a cookie: for this host alone, out of reach of scripts, not sent along from other sites; over TLS only where the
/// browser came so. It ends with the browser's session or after `seconds`.
pub fn set(name: &str, value: &str, seconds: Option<u64>, secure: bool) -> Option<HeaderValue> {
    let age = seconds.map_or_else(String::new, |seconds| format!("; Max-Age={seconds}"));
    let secure = if secure { "; Secure" } else { "" };
    HeaderValue::try_from(format!(
        "{name}={value}; Path=/; HttpOnly; SameSite=Lax{age}{secure}"
    ))
    .ok()
}

/// Takes a cookie away.
pub fn clear(name: &str, secure: bool) -> Option<HeaderValue> {
    set(name, "", Some(0), secure)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_cookie_is_found_among_others() {
        let mut headers = HeaderMap::new();
        headers.append(COOKIE, HeaderValue::from_static("a=1; wheelwort_visit=v"));
        headers.append(COOKIE, HeaderValue::from_static("wheelwort=s=t"));
        assert_eq!(read(&headers, SESSION), Some("s=t"));
        assert_eq!(read(&headers, VISIT), Some("v"));
        assert_eq!(read(&headers, "b"), None);
    }

    #[test]
    fn a_cookie_says_what_may_be_done_with_it() {
        let cookie = set(SESSION, "x", Some(60), true).expect("a cookie");
        assert_eq!(
            cookie,
            "wheelwort=x; Path=/; HttpOnly; SameSite=Lax; Max-Age=60; Secure"
        );
        assert!(set(SESSION, "a\r\nb", None, false).is_none());
    }
}
