//! What stands beside a file: the wished id, its name and kind as declared, a note. Names are shown and never a path.

use super::EvidenceError;
use crate::core::documents::Problems;
use crate::core::documents::read_input::is_evidence_id;

/// Letters of a file name that are kept.
const NAME: usize = 200;
/// Letters of a note.
const NOTE: usize = 1_000;
/// What a file is where nothing sensible was declared.
const UNKNOWN: &str = "application/octet-stream";

/// What stands beside a file.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Naming {
    /// The wished id; none to have one counted.
    pub id: Option<String>,
    /// Name of the file, as sent.
    pub file_name: String,
    /// Media type, as declared.
    pub media_type: String,
    /// In words, what it is.
    pub note: Option<String>,
}

impl Naming {
    /// The same, fit to be kept.
    ///
    /// # Errors
    /// Everything that is wrong with it, and a file without a byte.
    pub(super) fn checked(self, size: u64) -> Result<Naming, EvidenceError> {
        let mut problems = Problems::default();
        let id = self.id.map(|id| id.trim().to_owned()).filter(|id| !id.is_empty());
        if let Some(id) = &id {
            // "." and ".." are no addresses of anything.
            if !is_evidence_id(id) || id.bytes().all(|b| b == b'.') {
                let detail = "The id is not one that evidence can have.";
                problems.add(
                    "/id",
                    detail,
                    "Use 1 to 64 of A-Z a-z 0-9 . _ and -, or leave it out.",
                );
            }
        }
        let note = self.note.filter(|note| !note.trim().is_empty());
        if let Some(note) = &note {
            if note.chars().count() > NOTE {
                problems.add("/note", "The note is longer than 1000 letters.", "Shorten it.");
            }
            if note
                .chars()
                .any(|c| c.is_control() && !matches!(c, '\n' | '\r' | '\t'))
            {
                problems.add("/note", "The note holds control characters.", "Take them out.");
            }
        }
        if size == 0 {
            problems.add(
                "/file",
                "The file is empty.",
                "Choose the file that backs the figure.",
            );
        }
        if !problems.is_empty() {
            return Err(EvidenceError::Problems(problems));
        }
        Ok(Naming {
            id,
            file_name: name_of(&self.file_name),
            media_type: kind_of(&self.media_type),
            note,
        })
    }
}

/// The last part of a name, without signs that hide what it is: some browsers send whole paths, and marks of direction
/// turn `exe.pdf` about.
pub(super) fn name_of(sent: &str) -> String {
    let last = sent.rsplit(['/', '\\']).next().unwrap_or_default();
    let hides = |c: char| {
        c.is_control()
            || matches!(c, '\u{200b}'..='\u{200f}' | '\u{2028}'..='\u{202e}' | '\u{2060}'..='\u{2069}' | '\u{feff}')
    };
    let clean: String = last
        .chars()
        .map(|c| if hides(c) { '_' } else { c })
        .take(NAME)
        .collect();
    let clean = clean.trim();
    if clean.is_empty() || clean.chars().all(|c| c == '.') {
        "unnamed".to_owned()
    } else {
        clean.to_owned()
    }
}

fn kind_of(declared: &str) -> String {
    let fits = declared.len() <= 100
        && declared.contains('/')
        && declared.bytes().all(|byte| (b' '..=b'~').contains(&byte));
    if fits { declared } else { UNKNOWN }.to_owned()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_name_is_no_path_and_hides_nothing() {
        for (sent, kept) in [
            ("bill.pdf", "bill.pdf"),
            ("../../etc/passwd", "passwd"),
            ("C:\\bills\\gas, meter 3.pdf", "gas, meter 3.pdf"),
            ("..", "unnamed"),
            ("bills/", "unnamed"),
            ("", "unnamed"),
            ("a\r\nSet-Cookie: x=1", "a__Set-Cookie: x=1"),
            ("bill\u{202e}fdp.exe", "bill_fdp.exe"),
            ("Rübenschein 小麦.pdf", "Rübenschein 小麦.pdf"),
        ] {
            assert_eq!(name_of(sent), kept);
        }
        assert_eq!(name_of(&"x".repeat(1_000)).len(), 200);
    }

    #[test]
    fn everything_wrong_is_told_at_once() {
        let naming = Naming {
            id: Some("EV 1".into()),
            note: Some("x".repeat(1_001)),
            ..Naming::default()
        };
        let Err(EvidenceError::Problems(problems)) = naming.checked(0) else {
            panic!("refused");
        };
        let pointers: Vec<&str> = problems.list().iter().map(|p| p.pointer.as_str()).collect();
        assert_eq!(pointers, ["/id", "/note", "/file"]);
        let dots = Naming {
            id: Some("..".into()),
            ..Naming::default()
        };
        assert!(dots.checked(1).is_err());
    }

    #[test]
    fn a_kind_that_is_none_is_not_repeated() {
        let kept = |declared: &str| {
            let naming = Naming {
                media_type: declared.into(),
                ..Naming::default()
            };
            naming.checked(1).expect("holds").media_type
        };
        assert_eq!(kept("text/html"), "text/html");
        assert_eq!(kept("\u{1F33E}/x"), UNKNOWN);
        assert_eq!(kept(""), UNKNOWN);
    }
}
