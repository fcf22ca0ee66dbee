//! What checking a file can come to, in words for people.

use crate::core::documents::Problems;
use crate::core::documents::statement::Statement;
use std::fmt;

/// What was found.
#[derive(Clone, Debug, PartialEq)]
pub struct Verdict {
    /// Number of the statement; empty where the file could not be read.
    pub statement_no: String,
    /// Its hash as stated.
    pub hash: String,
    /// Id of the key that it names.
    pub key_id: String,
    /// True for demonstration data.
    pub example: bool,
    /// How the key stands.
    pub key: KeyStanding,
    /// The first thing that is not as it should be; none: verified.
    pub answer: Option<Answer>,
    /// What a reader should know beside that.
    pub notes: Vec<String>,
}

/// How a key stands with the reader.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize, utoipa::ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum KeyStanding {
    /// The reader trusts it.
    Known,
    /// The reader named none: the file vouches for itself.
    Unvouched,
    /// The reader named others.
    Foreign,
}

/// What is not as it should be.
#[derive(Clone, Debug, PartialEq)]
pub enum Answer {
    /// It is no statement that can be read.
    Unreadable(Problems),
    /// It is of a later format.
    NewerFormat {
        /// The format.
        found: String,
    },
    /// It has a field that the format does not have.
    UnknownField {
        /// Where.
        pointer: String,
    },
    /// Something stands there that no statement holds.
    NotWritten {
        /// Where.
        pointer: String,
    },
    /// A published figure is another than in this program's library.
    Swapped {
        /// What it is, such as `factor eu-2022-996/fert_n_an`.
        what: String,
        /// The field.
        field: String,
        /// In the file.
        stated: String,
        /// As published.
        published: String,
    },
    /// The pathway is not the one that the statement was made from.
    Pathway {
        /// Its hash as stated.
        stated: String,
        /// Its hash.
        found: String,
    },
    /// The figures cannot be worked out from the file.
    NotRecomputed {
        /// Why.
        why: String,
    },
    /// A value is another than the file leads to.
    Differs {
        /// Where.
        pointer: String,
        /// In the file.
        stated: String,
        /// As worked out.
        found: String,
    },
    /// A list holds what it should, in another order.
    Reordered {
        /// Where.
        pointer: String,
    },
    /// One person submitted and approved.
    SamePerson,
    /// The content is not the one that was hashed.
    Hash {
        /// As stated.
        stated: String,
        /// As found.
        found: String,
    },
    /// The key is none, or not the one that is named.
    BadKey,
    /// The signature is not this key's over this content.
    Signature {
        /// Id of the key.
        key_id: String,
    },
    /// The signature holds, by a key that the reader does not trust.
    ForeignKey {
        /// Id of the key.
        key_id: String,
    },
    /// The content holds, but the file was written anew.
    Rewritten,
    /// A statement names another one before it than the file that is there.
    BrokenSeries {
        /// The statement.
        statement_no: String,
        /// The one before it, by its name.
        previous_no: String,
        /// The hash it names.
        stated: String,
        /// The hash of the file.
        found: String,
    },
    /// Two statements name the same one before them, or two files share a number.
    ForkedSeries {
        /// The first.
        one: String,
        /// The second.
        other: String,
    },
}

impl Answer {
    /// True where the file could not be judged at all.
    pub fn is_unreadable(&self) -> bool {
        matches!(self, Answer::Unreadable(_) | Answer::NewerFormat { .. })
    }

    /// A short name for programs.
    pub fn name(&self) -> &'static str {
        match self {
            Answer::Unreadable(_) => "unreadable",
            Answer::NewerFormat { .. } => "newer_format",
            Answer::UnknownField { .. } => "unknown_field",
            Answer::NotWritten { .. } => "not_written",
            Answer::Swapped { .. } => "swapped",
            Answer::Pathway { .. } => "pathway",
            Answer::NotRecomputed { .. } => "not_recomputed",
            Answer::Differs { .. } => "differs",
            Answer::Reordered { .. } => "reordered",
            Answer::SamePerson => "same_person",
            Answer::Hash { .. } => "hash",
            Answer::BadKey => "bad_key",
            Answer::Signature { .. } => "signature",
            Answer::ForeignKey { .. } => "foreign_key",
            Answer::Rewritten => "rewritten",
            Answer::BrokenSeries { .. } => "broken_series",
            Answer::ForkedSeries { .. } => "forked_series",
        }
    }
}

impl fmt::Display for Answer {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Answer::Unreadable(problems) => match problems.list().first() {
                Some(problem) => write!(f, "This is no statement that can be read. {problem}"),
                None => write!(f, "This is no statement that can be read."),
            },
            Answer::NewerFormat { found } => write!(
                f,
                "The file is of the later format \"{found}\". Check it with a newer version of this program."
            ),
            Answer::UnknownField { pointer } => write!(
                f,
                "{pointer}: the file holds a field that a statement does not have. Somebody added it; ask the issuer for the original."
            ),
            Answer::NotWritten { pointer } => write!(
                f,
                "{}: this is not how a statement is written. Ask the issuer for the original.",
                if pointer.is_empty() { "/" } else { pointer }
            ),
            Answer::Swapped {
                what,
                field,
                stated,
                published,
            } => write!(
                f,
                "The {what} in the file is not the published one: {field} is {stated}, published is {published}."
            ),
            Answer::Pathway { stated, found } => write!(
                f,
                "/pathway/document: the pathway is not the one that the statement was made from. Its hash is {found}, the statement names {stated}."
            ),
            Answer::NotRecomputed { why } => {
                write!(
                    f,
                    "The figures cannot be worked out from what the file holds: {why}"
                )
            }
            Answer::Differs {
                pointer,
                stated,
                found,
            } => {
                write!(f, "{pointer}: the file says {stated}, worked out it is {found}.")
            }
            Answer::Reordered { pointer } => {
                write!(
                    f,
                    "{pointer}: the list holds what it should, but in another order."
                )
            }
            Answer::SamePerson => write!(f, "/approved_by: the same person submitted and approved."),
            Answer::Hash { stated, found } => write!(
                f,
                "The content was changed after it was hashed: its hash is {found}, the statement names {stated}. No figure tells where."
            ),
            Answer::BadKey => write!(
                f,
                "/signature: algorithm, key and key id do not belong together. Ask the issuer for the original."
            ),
            Answer::Signature { key_id } => {
                write!(
                    f,
                    "/signature/value: this is not the signature of key {key_id} over this content."
                )
            }
            Answer::ForeignKey { key_id } => write!(
                f,
                "The content holds, but it was signed with key {key_id}, which is none of the keys you named. Ask the issuer which keys are theirs."
            ),
            Answer::Rewritten => write!(
                f,
                "The content holds, but the file was written anew: spaces, order of fields or spelling of numbers are not the original's. Ask the issuer for the original."
            ),
            Answer::BrokenSeries {
                statement_no,
                previous_no,
                stated,
                found,
            } => write!(
                f,
                "Statement {statement_no} names {previous_no} before it with hash {stated}, but the file of {previous_no} has {found}."
            ),
            Answer::ForkedSeries { one, other } => write!(
                f,
                "Statements {one} and {other} cannot both stand in one series: they share a number, or name the same statement before them."
            ),
        }
    }
}

impl Verdict {
    /// Nothing is known of the file.
    pub(super) fn unread(answer: Answer) -> Verdict {
        Verdict {
            statement_no: String::new(),
            hash: String::new(),
            key_id: String::new(),
            example: false,
            key: KeyStanding::Foreign,
            answer: Some(answer),
            notes: Vec::new(),
        }
    }

    /// A statement that was read.
    pub(super) fn about(statement: &Statement) -> Verdict {
        let mut notes = Vec::new();
        if statement.is_example() {
            notes.push("EXAMPLE: the statement is about invented data.".to_owned());
        }
        Verdict {
            statement_no: statement.statement_no.clone(),
            hash: statement.hash.clone(),
            key_id: statement.signature.key_id.clone(),
            example: statement.is_example(),
            key: KeyStanding::Foreign,
            answer: None,
            notes,
        }
    }

    pub(super) fn because(self, answer: Answer) -> Verdict {
        Verdict {
            answer: Some(answer),
            ..self
        }
    }

    /// True if everything is as it should be.
    pub fn is_verified(&self) -> bool {
        self.answer.is_none()
    }
}

impl fmt::Display for Verdict {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match (&self.answer, self.key) {
            (Some(answer), _) if self.statement_no.is_empty() => write!(f, "{answer}"),
            (Some(answer), _) => write!(f, "Statement {} does not hold. {answer}", self.statement_no),
            (None, KeyStanding::Known) => write!(
                f,
                "Statement {} is verified: every figure follows from the file, and key {} signed it.",
                self.statement_no, self.key_id
            ),
            (None, _) => write!(
                f,
                "Statement {} is verified in itself: every figure follows from the file, and key {} signed it. Compare the key with the one its issuer publishes.",
                self.statement_no, self.key_id
            ),
        }
    }
}
