//! Addresses of pages that several rooms name. Ids and keys are escaped for a path.

/// A text as one segment of a path.
pub fn segment(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for byte in text.bytes() {
        match byte {
            b'a'..=b'z' | b'A'..=b'Z' | b'0'..=b'9' | b'-' | b'_' | b'.' | b'~' => out.push(char::from(byte)),
            _ => {
                let digit = |half: u8| {
                    char::from_digit(u32::from(half), 16)
                        .unwrap_or('0')
                        .to_ascii_uppercase()
                };
                out.push('%');
                out.push(digit(byte >> 4));
                out.push(digit(byte & 15));
            }
        }
    }
    out
}

/// The page of a pathway.
pub fn pathway(id: &str) -> String {
    format!("/pathways/{}", segment(id))
}

/// The page of a material.
pub fn material(id: &str) -> String {
    format!("/materials/{}", segment(id))
}

/// The page of a rule set.
pub fn rule_set(id: &str) -> String {
    format!("/rule-sets/{}", segment(id))
}

/// The page of a factor by its full id.
pub fn factor(full: &str) -> String {
    let (edition, row) = full.split_once('/').unwrap_or((full, ""));
    format!("/factors/{}/{}", segment(edition), segment(row))
}

/// The page of a piece of evidence.
pub fn evidence(id: &str) -> String {
    format!("/evidence/{}", segment(id))
}

/// The page to sign in at, for somebody who then goes on to `next`.
pub fn sign_in(next: &str) -> String {
    match next {
        "/" => "/sign-in".into(),
        next => format!("/sign-in?next={}", segment(next)),
    }
}

/// An address of this service to go on to: never one of another site, whatever a link says.
pub fn local(next: &str) -> &str {
    let begins = next.starts_with('/') && !next.starts_with("//");
    let plain = next.bytes().all(|b| b.is_ascii_graphic() && b != b'\\');
    // Back to the door is no way on.
    let inside = !next.starts_with("/sign-in") && !next.starts_with("/sign-out");
    if begins && plain && inside && next.len() <= 2_000 {
        next
    } else {
        "/"
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_addresses_of_this_service_are_gone_on_to() {
        for here in ["/", "/pathways/x?carbon=in-line#checks", "/compare?ids=a,b"] {
            assert_eq!(local(here), here);
        }
        for elsewhere in [
            "",
            "pathways",
            "//example.org",
            "/\\example.org",
            "https://example.org/",
            "/a\r\nSet-Cookie: x=y",
            "/ x",
            "/sign-in?next=/",
            "javascript:alert(1)",
        ] {
            assert_eq!(local(elsewhere), "/", "{elsewhere}");
        }
        assert_eq!(sign_in("/a?b=1&c"), "/sign-in?next=%2Fa%3Fb%3D1%26c");
    }
}
