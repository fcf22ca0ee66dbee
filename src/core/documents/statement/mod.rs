//! The statement document (`wheelwort.statement/1`): one file that states the figure of a fuel and holds everything the
//! figure came from, so that whoever has the file can work it out again.
//!
//! **Bytes.** The file is the canonical JSON of the document (RFC 8785), in UTF-8.
//! **Hash.** `hash` is `sha256:` and the SHA-256, in small hexadecimal, of the canonical JSON of the document without its
//! members `hash` and `signature`.
//! **Signature.** Ed25519 (RFC 8032) over those same bytes: the canonical JSON without `hash` and `signature`.
//! `signature.public_key` is the 32-byte key and `signature.value` the 64-byte signature, both in small hexadecimal;
//! `signature.key_id` is the first 16 hexadecimal digits of the SHA-256 of the 32 bytes of the key.

mod convert;
pub mod data;
pub mod facts;
pub mod figures;
pub mod part;
mod read;
mod read_facts;

use super::canonical;
use super::{Assessment, Pathway};
use jiff::Timestamp;
use jiff::civil::Date;
use serde::{Deserialize, Serialize};
use serde_json::Value;
use utoipa::ToSchema;

pub use data::Data;
pub use facts::StatementFacts;
pub use figures::{Figures, Words};
pub use read::{Unread, read};

/// The format name that every statement carries.
pub const FORMAT: &str = "wheelwort.statement/1";
/// What the format name begins with, whatever its version.
pub const FAMILY: &str = "wheelwort.statement/";

/// A statement as issued.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Statement {
    /// Always `wheelwort.statement/1`.
    pub format: String,
    /// `EXAMPLE` for demonstration data; absent on a real statement.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub example: Option<String>,
    /// Number, never used again.
    pub statement_no: String,
    /// 1 for the first, one more than the statement it replaces.
    pub version: u32,
    /// The statements that it replaces.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub supersedes: Vec<Superseded>,
    /// The statement that its issuer issued before; absent on the first.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub previous: Option<Previous>,
    /// Always `issued`: a file shows what was issued. Whether it holds still, its issuer tells.
    pub status: String,
    /// When it was issued, UTC.
    #[schema(value_type = String, format = DateTime)]
    pub issued_at: Timestamp,
    /// First day on which the figure may be used.
    #[schema(value_type = String, format = Date)]
    pub valid_from: Date,
    /// Last day on which the figure may be used.
    #[schema(value_type = String, format = Date)]
    pub valid_to: Date,
    /// Day up to which the records are kept.
    #[schema(value_type = String, format = Date)]
    pub keep_until: Date,
    /// Version of the program that made it.
    pub program: String,
    /// Who submitted it.
    pub submitted_by: Person,
    /// Who approved it: another person.
    pub approved_by: Person,
    /// What was declared.
    pub facts: StatementFacts,
    /// The pathway, in full.
    pub pathway: PathwayPart,
    /// The assessment, in full, with its workings.
    pub assessment: AssessmentPart,
    /// Written reasons for warnings of the assessment.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub reasons: Vec<ReasonGiven>,
    /// Files that back figures.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub evidence: Vec<EvidenceFile>,
    /// The published data that the figures rest on.
    pub data: Data,
    /// What is stated, worked out from all the above.
    pub figures: Figures,
    /// What is said beside the figures.
    pub words: Words,
    /// Hash of everything above.
    pub hash: String,
    /// Signature of everything above but the hash.
    pub signature: Signature,
}

/// A statement that is replaced.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Superseded {
    /// Its number.
    pub statement_no: String,
    /// Its hash.
    pub hash: String,
    /// Why it is replaced.
    pub reason: String,
}

/// The statement before this one in its issuer's series.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Previous {
    /// Its number.
    pub statement_no: String,
    /// Its hash.
    pub hash: String,
}

/// A person and when they acted.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Person {
    /// Public id.
    pub id: String,
    /// Name.
    pub name: String,
    /// What they are there.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub role: Option<String>,
    /// When, UTC.
    #[schema(value_type = String, format = DateTime)]
    pub at: Timestamp,
}

/// The pathway of a statement.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct PathwayPart {
    /// Public id.
    pub id: String,
    /// Number of the revision.
    pub revision: u32,
    /// Hash of its canonical bytes.
    pub hash: String,
    /// The document.
    pub document: Pathway,
}

/// The assessment of a statement.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct AssessmentPart {
    /// Hash of its canonical bytes.
    pub hash: String,
    /// The document; its findings carry no reasons, those stand beside it.
    pub document: Assessment,
}

/// Why a warning was accepted.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct ReasonGiven {
    /// Id of the check.
    pub id: String,
    /// Key of the stage; empty for the whole pathway.
    pub stage: String,
    /// Field of the finding.
    pub field: String,
    /// The reason.
    pub text: String,
    /// Who gave it.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub who: Option<String>,
    /// When, UTC.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = DateTime)]
    pub when: Option<Timestamp>,
}

/// A file that backs figures.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct EvidenceFile {
    /// Id as inputs name it.
    pub id: String,
    /// Name of the file.
    pub file_name: String,
    /// Size, bytes.
    pub size_bytes: u64,
    /// SHA-256 of its bytes, hexadecimal.
    pub sha256: String,
}

/// A signature.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Signature {
    /// Always `Ed25519`.
    pub algorithm: String,
    /// First 16 hexadecimal digits of the SHA-256 of the public key.
    pub key_id: String,
    /// The public key, hexadecimal.
    pub public_key: String,
    /// The signature, hexadecimal.
    pub value: String,
}

impl Statement {
    /// The bytes of the file: its canonical JSON.
    ///
    /// # Errors
    /// When a figure is not finite, which a statement that was built or read cannot hold.
    pub fn bytes(&self) -> Result<Vec<u8>, serde_json::Error> {
        canonical::bytes(self)
    }

    /// The bytes that are hashed and signed: its canonical JSON without `hash` and `signature`.
    ///
    /// # Errors
    /// When a figure is not finite, which a statement that was built or read cannot hold.
    pub fn signed_bytes(&self) -> Result<Vec<u8>, serde_json::Error> {
        signed_bytes(serde_json::to_value(self)?)
    }

    /// True for demonstration data.
    pub fn is_example(&self) -> bool {
        self.example.is_some()
    }
}

/// The bytes of a statement's JSON that are hashed and signed.
///
/// # Errors
/// When a figure is not finite.
pub fn signed_bytes(mut document: Value) -> Result<Vec<u8>, serde_json::Error> {
    if let Value::Object(fields) = &mut document {
        fields.remove("hash");
        fields.remove("signature");
    }
    canonical::bytes(&document)
}
