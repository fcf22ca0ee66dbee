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
