//! The pictures of the paper: the ladder dressed for print, and the QR code.

use super::PdfError;
use super::sheet::{Check, Picture};
use super::text::printable;
use qrcode::render::svg;
use qrcode::{EcLevel, QrCode};

/// The light colours of the stylesheet, in the plain CSS that picture readers know.
const LOOK: &str = include_str!("../../../templates/print/ladder.css");

impl Picture {
    /// The print form of a ladder as `charts::ladder::draw` gives it, with the patterns of `charts::ladder::defs`, to
    /// stand by itself. The words are those of its description.
    pub fn of_ladder(drawn: &str, patterns: &str) -> Picture {
        let inside = between(patterns, "<defs>", "</defs>").unwrap_or_default();
        let alt = drawn
            .split_once("<desc")
            .and_then(|(_, rest)| between(rest, ">", "</desc>"))
            .map(unescape)
            .unwrap_or_default();
        let svg = match drawn.strip_prefix("<svg ").and_then(|rest| rest.split_once('>')) {
            Some((head, body)) => format!(
                "<svg xmlns=\"http://www.w3.org/2000/svg\" {head}><style>{LOOK}</style><defs>{inside}</defs>{body}"
            ),
            None => String::new(),
        };
        Picture { svg, alt }
    }
}

/// A drawing with texts that the faces can print.
pub(super) fn drawing(picture: &Picture) -> String {
    printable(&picture.svg).0
}

fn between<'a>(text: &'a str, from: &str, to: &str) -> Option<&'a str> {
    let (_, rest) = text.split_once(from)?;
    rest.split_once(to).map(|(inside, _)| inside)
}

fn unescape(text: &str) -> String {
    [
        ("&lt;", "<"),
        ("&gt;", ">"),
        ("&quot;", "\""),
        ("&#x27;", "'"),
        ("&amp;", "&"),
    ]
    .iter()
    .fold(text.to_owned(), |text, (from, to)| text.replace(from, to))
}

/// What the QR code says: the address where statements are checked, with the hash of this one; without a public
/// address the hash alone.
pub fn code_text(check: &Check, hash: &str) -> String {
    match (check.address.as_str(), check.address.contains('?')) {
        ("", _) => format!("sha256:{hash}"),
        (address, false) => format!("{address}?sha256={hash}"),
        (address, true) => format!("{address}&sha256={hash}"),
    }
}

/// The QR code of `text` as SVG.
pub(super) fn code(text: &str) -> Result<String, PdfError> {
    let code = QrCode::with_error_correction_level(text, EcLevel::M)
        .map_err(|problem| PdfError::Code(problem.to_string()))?;
    Ok(code
        .render::<svg::Color<'_>>()
        .min_dimensions(200, 200)
        .dark_color(svg::Color("#17211c"))
        .light_color(svg::Color("#ffffff"))
        .build())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_ladder_is_dressed_and_keeps_its_words() {
        let drawn =
            r#"<svg class="ladder print" viewBox="0 0 1 1"><desc id="d">a &lt; b &amp;amp; c</desc></svg>"#;
        let patterns = r#"<svg class="defs"><defs><pattern id="g-n2o"/></defs></svg>"#;
        let picture = Picture::of_ladder(drawn, patterns);
        assert_eq!(picture.alt, "a < b &amp; c");
        assert!(
            picture
                .svg
                .starts_with(r#"<svg xmlns="http://www.w3.org/2000/svg" class="ladder print""#)
        );
        assert!(picture.svg.contains(r#"<defs><pattern id="g-n2o"/></defs><desc"#));
        assert_eq!(Picture::of_ladder("no picture", patterns).svg, "");
    }

    #[test]
    fn the_code_names_address_and_hash() {
        let at = |address: &str| {
            let check = Check {
                address: address.to_owned(),
                ..Check::default()
            };
            code_text(&check, "ab12")
        };
        assert_eq!(
            at("https://a.example/check-statement"),
            "https://a.example/check-statement?sha256=ab12"
        );
        assert_eq!(at("https://a.example/?p=1"), "https://a.example/?p=1&sha256=ab12");
        assert_eq!(at(""), "sha256:ab12");
    }

    #[test]
    fn an_address_that_no_code_can_hold_is_refused() {
        assert!(matches!(code(&"x".repeat(5_000)), Err(PdfError::Code(_))));
    }
}
