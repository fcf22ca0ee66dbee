//! `evaluate`: pathway files in, assessments out. Prints everything or nothing.

use super::{WRONG, print, say};
use crate::core::documents::{Assessment, Pathway, Problem, Problems, canonical};
use crate::core::evaluate::{Options, evaluate};
use crate::library;
use clap::Args;
use std::io::Read;
use std::path::{Path, PathBuf};

/// The largest file that is read: far above any real pathway.
const MOST_BYTES: u64 = 64 << 20;

#[derive(Debug, Args)]
pub(super) struct Evaluate {
    /// Pathway files; `-` is standard input.
    #[arg(required = true, value_name = "FILE")]
    files: Vec<PathBuf>,
    /// Evaluate under this rule set instead of the one each file names.
    #[arg(long, value_name = "ID")]
    rule_set: Option<String>,
}

/// Evaluates every file; prints only if all hold.
pub(super) fn run(command: &Evaluate) -> u8 {
    let mut assessments = Vec::with_capacity(command.files.len());
    let mut wrong = false;
    for file in &command.files {
        match evaluated(file, command.rule_set.as_deref()) {
            Ok(assessment) => assessments.push(assessment),
            Err(problems) => {
                wrong = true;
                for problem in problems.list() {
                    if command.files.len() > 1 {
                        say(&format!("{}: {problem}", file.display()));
                    } else {
                        say(&problem.to_string());
                    }
                }
            }
        }
    }
    if wrong {
        return WRONG;
    }
    let text = match &assessments[..] {
        // For people, in the order in which the document is described.
        [alone] => serde_json::to_vec_pretty(alone),
        // For programs: the bytes that the API answers, a line each.
        many => many
            .iter()
            .map(canonical::bytes)
            .collect::<Result<Vec<_>, _>>()
            .map(|lines| lines.join(&b'\n')),
    };
    match text {
        Ok(text) => print(&text),
        Err(error) => {
            say(&format!("wheelwort: the assessment cannot be written: {error}"));
            super::COULD_NOT
        }
    }
}

fn evaluated(file: &Path, rule_set: Option<&str>) -> Result<Assessment, Problems> {
    let bytes = bytes_of(file).map_err(|error| Problem {
        pointer: String::new(),
        detail: format!("The file {} cannot be read: {error}.", file.display()),
        remedy: "Check its name and its rights.".into(),
    })?;
    let pathway = Pathway::from_bytes(&bytes)?;
    evaluate(
        &pathway,
        library::book(),
        Options {
            rule_set,
            ..Options::default()
        },
    )
}

/// The bytes of a file, or of standard input for `-`.
pub(super) fn bytes_of(file: &Path) -> std::io::Result<Vec<u8>> {
    let source: Box<dyn Read> = if file.as_os_str() == "-" {
        Box::new(std::io::stdin().lock())
    } else {
        Box::new(std::fs::File::open(file)?)
    };
    let mut bytes = Vec::new();
    source.take(MOST_BYTES + 1).read_to_end(&mut bytes)?;
    if bytes.len() as u64 > MOST_BYTES {
        return Err(std::io::Error::other(format!(
            "it is larger than {MOST_BYTES} bytes"
        )));
    }
    Ok(bytes)
}
