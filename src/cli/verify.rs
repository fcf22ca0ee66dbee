//! `verify`: statement files in, a verdict each out. Works offline and looks at nothing but the files.

use super::evaluate::bytes_of;
use super::{COULD_NOT, WRONG, print, say};
use crate::core::documents::statement::{Statement, read};
use crate::core::statement::seal::PublicKey;
use crate::core::statement::verify::{Verdict, series, verify};
use crate::library;
use clap::Args;
use std::path::{Path, PathBuf};

#[derive(Debug, Args)]
pub(super) struct Verify {
    /// Statement files; `-` is standard input.
    #[arg(required = true, value_name = "FILE")]
    files: Vec<PathBuf>,
    /// A public key of the issuer that you trust: 64 hexadecimal digits, or a file with one a line. May be given again.
    #[arg(long = "key", value_name = "HEX|FILE")]
    keys: Vec<String>,
}

/// Checks every file, then the series they make.
pub(super) fn run(command: &Verify) -> u8 {
    let keys = match keys(&command.keys) {
        Ok(keys) => keys,
        Err(text) => {
            say(&format!("wheelwort: {text}"));
            return WRONG;
        }
    };
    let mut code = 0;
    let mut lines = Vec::new();
    let mut statements: Vec<Statement> = Vec::new();
    for file in &command.files {
        let bytes = match bytes_of(file) {
            Ok(bytes) => bytes,
            Err(error) => {
                say(&format!(
                    "wheelwort: the file {} cannot be read: {error}",
                    file.display()
                ));
                code = WRONG;
                continue;
            }
        };
        let verdict = verify(&bytes, &keys, library::book());
        code = code.max(code_of(&verdict));
        lines.push(line(file, &verdict, command.files.len() > 1));
        for note in &verdict.notes {
            say(note);
        }
        if let Ok((statement, _)) = read(&bytes) {
            statements.push(statement);
        }
    }
    if statements.len() > 1 {
        let (answer, notes) = series(&statements);
        if let Some(answer) = answer {
            lines.push(answer.to_string());
            code = code.max(COULD_NOT);
        }
        for note in notes {
            say(&note);
        }
    }
    if lines.is_empty() {
        return code;
    }
    code.max(print(lines.join("\n").as_bytes()))
}

/// 0 verified, 1 does not hold, 2 could not be judged.
fn code_of(verdict: &Verdict) -> u8 {
    match &verdict.answer {
        None => 0,
        Some(answer) if answer.is_unreadable() => WRONG,
        Some(_) => COULD_NOT,
    }
}

fn line(file: &Path, verdict: &Verdict, several: bool) -> String {
    let name = if several {
        format!("{}: ", file.display())
    } else {
        String::new()
    };
    let text: String = format!("{name}{verdict}")
        .chars()
        .map(|c| if c.is_control() { ' ' } else { c })
        .collect();
    text
}

fn keys(given: &[String]) -> Result<Vec<PublicKey>, String> {
    let mut keys = Vec::new();
    for text in given {
        if let Some(key) = PublicKey::from_hex(text) {
            keys.push(key);
            continue;
        }
        let read = std::fs::read_to_string(text).map_err(|error| {
            format!(
                "\"{text}\" is neither a key of 64 hexadecimal digits nor a file that can be read: {error}"
            )
        })?;
        let lines = read
            .lines()
            .map(str::trim)
            .filter(|line| !line.is_empty() && !line.starts_with('#'));
        for line in lines {
            let word = line.split_whitespace().next_back().unwrap_or_default();
            let key = PublicKey::from_hex(word);
            keys.push(key.ok_or_else(|| format!("the file {text} holds a line that is no key: \"{line}\""))?);
        }
    }
    Ok(keys)
}
