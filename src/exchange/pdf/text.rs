//! Makes text fit for paper: what people typed may hold anything, and a paper must come out all the same.

use super::fonts;
use serde_json::Value;

/// Stands for a character that the faces lack.
pub(super) const LACKING: char = '\u{25a1}';

/// The longest text that is printed, in characters; the file has the rest.
const LONGEST: usize = 1_500;

/// Runs without a space that are longer get places where they may break.
const LONGEST_RUN: usize = 20;

/// A place where a line may break and nothing shows.
const BREAK: char = '\u{200b}';

/// Cleans every text in `value`, save those under the keys in `exact`. True if a character was lacking.
pub(super) fn clean_all(value: &mut Value, exact: &[&str]) -> bool {
    match value {
        Value::String(text) => {
            let (cleaned, lacking) = clean(text);
            *text = cleaned;
            lacking
        }
        // no short circuit: every text is to be cleaned
        Value::Array(items) => items
            .iter_mut()
            .fold(false, |lacking, item| clean_all(item, exact) | lacking),
        Value::Object(fields) => fields
            .iter_mut()
            .filter(|(key, _)| !exact.contains(&key.as_str()))
            .fold(false, |lacking, (_, item)| clean_all(item, exact) | lacking),
        Value::Null | Value::Bool(_) | Value::Number(_) => false,
    }
}

/// `text` as it can be printed, and whether a character was lacking.
fn clean(text: &str) -> (String, bool) {
    let (mut printable, mut lacking) = printable(text);
    if printable.trim().is_empty() && !text.trim().is_empty() {
        // A text of marks that show nothing: an empty heading or label would be worse than a square.
        printable = LACKING.to_string();
        lacking = true;
    }
    let mut cut: String = printable.chars().take(LONGEST).collect();
    if cut.len() < printable.len() {
        cut.push_str("\u{2026} (cut here; the statement file has the whole text)");
    }
    (breakable(&cut), lacking)
}

/// `text` without what cannot be printed: control characters and marks of direction go, since they show nothing and
/// can make a figure look like another; characters that the faces lack become a hollow square.
pub(super) fn printable(text: &str) -> (String, bool) {
    let mut lacking = false;
    let out = text
        .chars()
        .filter_map(|c| match c {
            '\n' => Some('\n'),
            '\t' => Some(' '),
            c if c.is_control() || is_silent(c) => None,
            c if is_private(c) || !fonts::has(c) => {
                lacking = true;
                Some(LACKING)
            }
            c => Some(c),
        })
        .collect();
    (out, lacking)
}

/// Joiners, marks of direction, selectors of variants, tags: no glyph of their own.
fn is_silent(c: char) -> bool {
    matches!(c,
        '\u{200b}'..='\u{200f}' | '\u{2028}'..='\u{202e}' | '\u{2060}'..='\u{206f}' | '\u{fe00}'..='\u{fe0f}'
        | '\u{feff}' | '\u{fff9}'..='\u{fffb}' | '\u{e0000}'..='\u{e0fff}')
}

/// Code points without a meaning of their own; the archive standard refuses them.
fn is_private(c: char) -> bool {
    matches!(c, '\u{e000}'..='\u{f8ff}' | '\u{f0000}'..='\u{10ffff}')
}

/// Gives long runs places to break: after marks inside them, and wherever one has gone on for too long.
fn breakable(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for piece in text.split_inclusive(char::is_whitespace) {
        let long = piece.chars().count() > LONGEST_RUN;
        let mut since = 0;
        for c in piece.chars() {
            if long && since >= LONGEST_RUN && !c.is_whitespace() {
                out.push(BREAK);
                since = 0;
            }
            out.push(c);
            since += 1;
            if long && matches!(c, '/' | '_' | '.' | ',' | ';' | ':' | '&' | '?' | '=' | '@') && since > 3 {
                out.push(BREAK);
                since = 0;
            }
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    #[test]
    fn what_shows_nothing_goes_and_what_is_lacking_becomes_a_square() {
        let hostile = "a\u{202e}b\u{0}c\tdé\u{5d0}\u{1f33e}\u{fe0f}\u{e000}";
        assert_eq!(printable(hostile), ("abc dé□□□".to_owned(), true));
        assert_eq!(clean("\u{200b}\u{202e}"), ("□".to_owned(), true));
        assert_eq!(clean(""), (String::new(), false));
        assert_eq!(printable("#let x = [*_$"), ("#let x = [*_$".to_owned(), false));
    }

    #[test]
    fn long_runs_may_break_and_short_ones_stay_whole() {
        assert_eq!(clean("EV-0031 wheat").0, "EV-0031 wheat");
        let run = "x".repeat(50);
        let broken = clean(&run).0;
        assert!(
            broken
                .split(BREAK)
                .all(|part| part.chars().count() <= LONGEST_RUN)
        );
        assert_eq!(broken.replace(BREAK, ""), run);
    }

    #[test]
    fn texts_are_cut_and_say_so() {
        let (cut, _) = clean(&"word ".repeat(1_000));
        assert!(
            cut.chars().count() < 1_600 && cut.ends_with("(cut here; the statement file has the whole text)")
        );
    }

    #[test]
    fn every_text_is_cleaned_save_the_exact_ones() {
        let mut value = json!({ "a": ["\u{5d0}"], "b": { "hash": "\u{5d0}", "n": 1 } });
        assert!(clean_all(&mut value, &["hash"]));
        assert_eq!(value, json!({ "a": ["□"], "b": { "hash": "\u{5d0}", "n": 1 } }));
    }
}
