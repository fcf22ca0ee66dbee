//! What files, the environment and the command line say, which of them wins, and the table of what is in force.

use super::table::{Draft, SETTINGS, Setting};
use super::{Config, ConfigError, PREFIX};
use std::collections::BTreeMap;
use std::fmt;
use std::path::{Path, PathBuf};

/// The largest file of settings or of a secret that is read, bytes.
const MOST_BYTES: u64 = 1 << 20;

/// Who gave a value.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Origin {
    /// Nobody: the program's own.
    Default,
    /// The file of settings.
    File,
    /// A variable of the environment.
    Environment,
    /// The command line.
    CommandLine,
}

impl fmt::Display for Origin {
    fn fmt(&self, to: &mut fmt::Formatter<'_>) -> fmt::Result {
        to.write_str(match self {
            Origin::Default => "default",
            Origin::File => "file",
            Origin::Environment => "environment",
            Origin::CommandLine => "command line",
        })
    }
}

/// A value as it was given.
#[derive(Clone, PartialEq, Eq)]
struct Said {
    text: String,
    origin: Origin,
    /// The file that held the secret.
    kept_in: Option<PathBuf>,
}

/// Settings as one source or several give them; what is absent is left to others. `Debug` names them without values.
#[derive(Clone, Default, PartialEq, Eq)]
pub struct Given(BTreeMap<&'static str, Said>);

impl fmt::Debug for Given {
    fn fmt(&self, to: &mut fmt::Formatter<'_>) -> fmt::Result {
        let named = self.0.iter().map(|(name, said)| (name, said.origin));
        to.debug_map().entries(named).finish()
    }
}

impl Given {
    /// The settings of a TOML file.
    ///
    /// # Errors
    /// When it cannot be read or says something unknown.
    pub fn from_file(file: &Path) -> Result<Given, ConfigError> {
        let text = text_of("config", file)?;
        Given::from_toml(&text, file)
    }

    /// The settings of a TOML text; `file` is what errors call it.
    ///
    /// # Errors
    /// When it says something unknown.
    pub fn from_toml(text: &str, file: &Path) -> Result<Given, ConfigError> {
        // The message of the reader may quote a line, and a line may hold a secret: only the place is told.
        let table: toml::Table = toml::from_str(text).map_err(|error| {
            let before = error.span().and_then(|span| text.get(..span.start));
            let line = before.map_or(1, |before| before.matches('\n').count() + 1);
            ConfigError::File(file.into(), format!("line {line}: {}", error.message()))
        })?;
        let mut given = Given::default();
        for (name, value) in &table {
            let text = as_text(value).ok_or_else(|| {
                let wrong = format!("{name}: give a text, a number, true or false, or a list of texts");
                ConfigError::File(file.into(), wrong)
            })?;
            if !given.say(name, text, Origin::File)? {
                return Err(ConfigError::File(
                    file.into(),
                    format!("there is no setting {name}; `wheelwort settings` lists those there are"),
                ));
            }
        }
        Ok(given)
    }

    /// The settings among the variables of the environment.
    ///
    /// # Errors
    /// When a `WHEELWORT_` name is unknown (a slip should not pass in silence), or a secret's file cannot be read.
    pub fn from_environment(
        variables: impl IntoIterator<Item = (String, String)>,
    ) -> Result<Given, ConfigError> {
        let mut given = Given::default();
        for (variable, value) in variables {
            let Some(name) = variable.strip_prefix(PREFIX) else {
                continue;
            };
            if !given.say(&name.to_lowercase(), value, Origin::Environment)? {
                // The value of an unknown name may be a secret.
                return Err(unknown(variable, Origin::Environment));
            }
        }
        Ok(given)
    }

    /// The settings of the command line, by name.
    ///
    /// # Errors
    /// When a name is unknown, or the value is a secret: other people of the machine can read command lines.
    pub fn from_line<N: AsRef<str>>(
        settings: impl IntoIterator<Item = (N, String)>,
    ) -> Result<Given, ConfigError> {
        let mut given = Given::default();
        for (name, value) in settings {
            let name = name.as_ref();
            if Setting::of(name).is_some_and(|setting| setting.secret) {
                let remedy = format!(
                    "everybody on the machine can read command lines: give {name}_file, the file that holds it"
                );
                return Err(wrong(name, "hidden", Origin::CommandLine, remedy));
            }
            if !given.say(name, value, Origin::CommandLine)? {
                return Err(unknown(name.into(), Origin::CommandLine));
            }
        }
        Ok(given)
    }

    /// Notes a value; false if there is no such setting.
    fn say(&mut self, name: &str, text: String, origin: Origin) -> Result<bool, ConfigError> {
        let of_secret = |setting: &&Setting| setting.secret;
        let said = if let Some(setting) = Setting::of(name) {
            let kept_in = None;
            (
                setting.name,
                Said {
                    text,
                    origin,
                    kept_in,
                },
            )
        } else if let Some(setting) = name.strip_suffix("_file").and_then(Setting::of).filter(of_secret) {
            let file = PathBuf::from(text);
            let text = text_of(name, &file)?.trim_end_matches(['\r', '\n']).to_owned();
            (
                setting.name,
                Said {
                    text,
                    origin,
                    kept_in: Some(file),
                },
            )
        } else {
            return Ok(false);
        };
        if self.0.insert(said.0, said.1).is_some() {
            let name = said.0;
            let remedy = format!("give {name} or {name}_file, not both");
            return Err(wrong(name, "hidden", origin, remedy));
        }
        Ok(true)
    }

    /// These settings, with those of `later` in place of them where it says something.
    #[must_use]
    pub fn overlaid(mut self, later: Given) -> Given {
        self.0.extend(later.0);
        self
    }

    /// Fills in the defaults and checks everything.
    ///
    /// # Errors
    /// When a value is out of its range, or one is missing that another needs.
    pub fn checked(&self) -> Result<Config, ConfigError> {
        let mut draft = Draft::new();
        for setting in SETTINGS {
            let (text, origin) = self.in_force(setting);
            // An empty value takes a setting back: containers cannot unset a variable.
            if text.is_empty() {
                if setting.usual.is_empty() {
                    continue;
                }
                return Err(wrong(setting.name, "", origin, format!("give {}", setting.range)));
            }
            (setting.set)(&mut draft, text).map_err(|remedy| {
                let shown = if setting.secret { "hidden" } else { text };
                wrong(setting.name, shown, origin, remedy)
            })?;
        }
        draft.whole()
    }

    fn in_force(&self, setting: &Setting) -> (&str, Origin) {
        self.0
            .get(setting.name)
            .map_or((setting.usual, Origin::Default), |said| (&said.text, said.origin))
    }

    /// The table of what is in force and who said so, a line each, secrets hidden.
    pub fn table(&self) -> String {
        let mut rows = vec![[
            "setting".to_owned(),
            "value".into(),
            "from".into(),
            "may be".into(),
            "meaning".into(),
        ]];
        for setting in SETTINGS {
            let (text, origin) = self.in_force(setting);
            let value = match text {
                "" => "-".to_owned(),
                _ if setting.secret => "(hidden)".into(),
                text => text
                    .chars()
                    .map(|c| if c.is_control() { ' ' } else { c })
                    .collect(),
            };
            let kept_in = self.0.get(setting.name).and_then(|said| said.kept_in.as_deref());
            let from = match kept_in {
                Some(file) => format!("{origin}, in {}", file.display()),
                None => origin.to_string(),
            };
            let meaning = if setting.secret {
                format!(
                    "{}; or {}_file, the file that holds it",
                    setting.meaning, setting.name
                )
            } else {
                setting.meaning.into()
            };
            rows.push([setting.name.into(), value, from, setting.range.into(), meaning]);
        }
        let mut widths = [0; 5];
        for row in &rows {
            for (width, cell) in widths.iter_mut().zip(row) {
                *width = (*width).max(cell.chars().count());
            }
        }
        let lines = rows.iter().map(|row| {
            let cells = row
                .iter()
                .zip(widths)
                .map(|(cell, width)| format!("{cell:<width$}"));
            cells.collect::<Vec<_>>().join("  ").trim_end().to_owned()
        });
        lines.collect::<Vec<_>>().join("\n")
    }
}

/// A plain value of TOML as text; a list as its parts with commas.
fn as_text(value: &toml::Value) -> Option<String> {
    match value {
        toml::Value::String(text) => Some(text.clone()),
        toml::Value::Integer(number) => Some(number.to_string()),
        toml::Value::Boolean(yes) => Some(if *yes { "yes" } else { "no" }.into()),
        toml::Value::Array(parts) => {
            let parts: Option<Vec<&str>> = parts.iter().map(toml::Value::as_str).collect();
            Some(parts?.join(","))
        }
        _ => None,
    }
}

fn text_of(name: &str, file: &Path) -> Result<String, ConfigError> {
    use std::io::Read;
    let read = || {
        let mut text = String::new();
        std::fs::File::open(file)?
            .take(MOST_BYTES)
            .read_to_string(&mut text)?;
        Ok(text)
    };
    read().map_err(|source| ConfigError::Unreadable {
        name: name.into(),
        file: file.into(),
        source,
    })
}

fn unknown(name: String, origin: Origin) -> ConfigError {
    let remedy = "there is no such setting; `wheelwort settings` lists those there are".into();
    ConfigError::Value {
        name,
        value: "...".into(),
        origin,
        remedy,
    }
}

fn wrong(name: &str, value: &str, origin: Origin, remedy: String) -> ConfigError {
    ConfigError::Value {
        name: name.into(),
        value: value.into(),
        origin,
        remedy,
    }
}
