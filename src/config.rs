//! Settings: defaults, then a file, then the environment, then the command line; each later one wins. All are checked
//! before the program does anything.

mod evidence;

pub use evidence::{Bucket, EvidenceStore};

use serde::Deserialize;
use std::net::SocketAddr;
use std::path::{Path, PathBuf};
use std::time::Duration;
use thiserror::Error;

/// Where the program listens unless told otherwise: this machine alone, for there is no sign-in yet.
pub const USUAL_ADDRESS: &str = "127.0.0.1:8080";

/// Prefix of the names in the environment: `WHEELWORT_LISTEN` and so on.
const PREFIX: &str = "WHEELWORT_";

/// Checked settings.
#[derive(Clone, Debug, PartialEq)]
pub struct Config {
    /// Folder of the data.
    pub data: PathBuf,
    /// Address to listen on; port 0 takes a free one.
    pub listen: SocketAddr,
    /// Bytes of a body, and of one line of a batch.
    pub body_bytes: usize,
    /// Lines of a batch.
    pub batch_lines: usize,
    /// Requests that are worked on at once.
    pub requests_at_once: usize,
    /// Connections that are open at once.
    pub connections: usize,
    /// How long an answer may take to begin.
    pub request_timeout: Duration,
    /// How long a stop waits for requests that run.
    pub stop_within: Duration,
    /// What is logged, such as `info` or `wheelwort=debug,info`.
    pub log: String,
    /// How log lines look.
    pub log_format: LogFormat,
    /// Bytes of a file of evidence.
    pub evidence_bytes: usize,
    /// Where the files of evidence are kept.
    pub evidence_store: EvidenceStore,
}

/// How log lines look.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum LogFormat {
    /// For people.
    #[default]
    Text,
    /// One JSON object a line.
    Json,
}

/// Settings as one source gives them; what is absent is left to the others.
#[derive(Clone, Debug, Default, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Given {
    /// Folder of the data.
    pub data: Option<PathBuf>,
    /// Address to listen on.
    pub listen: Option<String>,
    /// Bytes of a body.
    pub body_bytes: Option<usize>,
    /// Lines of a batch.
    pub batch_lines: Option<usize>,
    /// Requests at once.
    pub requests_at_once: Option<usize>,
    /// Connections at once.
    pub connections: Option<usize>,
    /// Seconds an answer may take to begin.
    pub request_timeout_seconds: Option<u64>,
    /// Seconds a stop waits.
    pub stop_within_seconds: Option<u64>,
    /// What is logged.
    pub log: Option<String>,
    /// How log lines look.
    pub log_format: Option<LogFormat>,
    /// Bytes of a file of evidence.
    pub evidence_bytes: Option<usize>,
    /// Address of the store of evidence.
    pub evidence_endpoint: Option<String>,
    /// Bucket of that store.
    pub evidence_bucket: Option<String>,
    /// Region of that store.
    pub evidence_region: Option<String>,
    /// Id of the key to it.
    pub evidence_key_id: Option<String>,
    /// Secret of that key.
    pub evidence_secret: Option<String>,
    /// File that holds the secret.
    pub evidence_secret_file: Option<PathBuf>,
}

/// Why settings do not hold.
#[derive(Debug, Error)]
pub enum ConfigError {
    /// The file cannot be read.
    #[error("the settings file {0} cannot be read")]
    Unreadable(PathBuf, #[source] std::io::Error),
    /// The file is not TOML, or says something unknown.
    #[error("the settings file {0} is wrong: {1}")]
    File(PathBuf, String),
    /// A value is wrong.
    #[error("the setting {name} is \"{value}\": {remedy}")]
    Value {
        /// Name of the setting.
        name: String,
        /// What was given.
        value: String,
        /// What to give.
        remedy: &'static str,
    },
}

impl Given {
    /// The settings of a TOML file.
    ///
    /// # Errors
    /// When it cannot be read or says something unknown.
    pub fn from_file(file: &Path) -> Result<Given, ConfigError> {
        let text =
            std::fs::read_to_string(file).map_err(|error| ConfigError::Unreadable(file.into(), error))?;
        toml::from_str(&text).map_err(|error| ConfigError::File(file.into(), error.to_string()))
    }

    /// The settings among the variables of the environment.
    ///
    /// # Errors
    /// When a value is not of its kind, or a `WHEELWORT_` name is unknown: a slip should not pass in silence.
    pub fn from_environment(
        variables: impl IntoIterator<Item = (String, String)>,
    ) -> Result<Given, ConfigError> {
        let mut given = Given::default();
        for (variable, value) in variables {
            let Some(name) = variable.strip_prefix(PREFIX) else {
                continue;
            };
            let name = name.to_lowercase();
            match name.as_str() {
                "data" => given.data = Some(value.into()),
                "listen" => given.listen = Some(value),
                "body_bytes" => given.body_bytes = Some(number(&variable, &value)?),
                "batch_lines" => given.batch_lines = Some(number(&variable, &value)?),
                "requests_at_once" => given.requests_at_once = Some(number(&variable, &value)?),
                "connections" => given.connections = Some(number(&variable, &value)?),
                "request_timeout_seconds" => given.request_timeout_seconds = Some(number(&variable, &value)?),
                "stop_within_seconds" => given.stop_within_seconds = Some(number(&variable, &value)?),
                "log" => given.log = Some(value),
                "log_format" => {
                    given.log_format = Some(match value.as_str() {
                        "text" => LogFormat::Text,
                        "json" => LogFormat::Json,
                        _ => return Err(wrong(&variable, &value, "give text or json")),
                    });
                }
                "evidence_bytes" => given.evidence_bytes = Some(number(&variable, &value)?),
                "evidence_endpoint" => given.evidence_endpoint = Some(value),
                "evidence_bucket" => given.evidence_bucket = Some(value),
                "evidence_region" => given.evidence_region = Some(value),
                "evidence_key_id" => given.evidence_key_id = Some(value),
                "evidence_secret" => given.evidence_secret = Some(value),
                "evidence_secret_file" => given.evidence_secret_file = Some(value.into()),
                _ => return Err(wrong(&variable, &value, "there is no such setting")),
            }
        }
        Ok(given)
    }

    /// These settings, with those of `later` in place of them where it says something.
    #[must_use]
    pub fn overlaid(self, later: Given) -> Given {
        Given {
            data: later.data.or(self.data),
            listen: later.listen.or(self.listen),
            body_bytes: later.body_bytes.or(self.body_bytes),
            batch_lines: later.batch_lines.or(self.batch_lines),
            requests_at_once: later.requests_at_once.or(self.requests_at_once),
            connections: later.connections.or(self.connections),
            request_timeout_seconds: later.request_timeout_seconds.or(self.request_timeout_seconds),
            stop_within_seconds: later.stop_within_seconds.or(self.stop_within_seconds),
            log: later.log.or(self.log),
            log_format: later.log_format.or(self.log_format),
            evidence_bytes: later.evidence_bytes.or(self.evidence_bytes),
            evidence_endpoint: later.evidence_endpoint.or(self.evidence_endpoint),
            evidence_bucket: later.evidence_bucket.or(self.evidence_bucket),
            evidence_region: later.evidence_region.or(self.evidence_region),
            evidence_key_id: later.evidence_key_id.or(self.evidence_key_id),
            evidence_secret: later.evidence_secret.or(self.evidence_secret),
            evidence_secret_file: later.evidence_secret_file.or(self.evidence_secret_file),
        }
    }

    /// Fills in the defaults and checks everything.
    ///
    /// # Errors
    /// When a value is out of its range.
    pub fn checked(self) -> Result<Config, ConfigError> {
        let listen = self.listen.unwrap_or_else(|| USUAL_ADDRESS.into());
        let address = listen.parse().map_err(|_| {
            wrong(
                "listen",
                &listen,
                "give an IP address and a port, such as 127.0.0.1:8080",
            )
        })?;
        let within = |name: &str, value: Option<usize>, usual: usize, least: usize, most: usize, remedy| {
            let value = value.unwrap_or(usual);
            if (least..=most).contains(&value) {
                Ok(value)
            } else {
                Err(wrong(name, &value.to_string(), remedy))
            }
        };
        let seconds = |name: &str, value: Option<u64>, usual: u64| {
            let value = value.unwrap_or(usual);
            if (1..=3_600).contains(&value) {
                Ok(Duration::from_secs(value))
            } else {
                Err(wrong(name, &value.to_string(), "give 1 to 3600 seconds"))
            }
        };
        Ok(Config {
            data: self.data.unwrap_or_else(|| "data".into()),
            listen: address,
            body_bytes: within(
                "body_bytes",
                self.body_bytes,
                4 << 20,
                1 << 10,
                1 << 30,
                "give 1024 to 1073741824 bytes",
            )?,
            batch_lines: within(
                "batch_lines",
                self.batch_lines,
                100_000,
                1,
                100_000_000,
                "give 1 to 100000000 lines",
            )?,
            requests_at_once: within(
                "requests_at_once",
                self.requests_at_once,
                256,
                1,
                100_000,
                "give 1 to 100000",
            )?,
            connections: within(
                "connections",
                self.connections,
                1_024,
                1,
                1_000_000,
                "give 1 to 1000000",
            )?,
            request_timeout: seconds("request_timeout_seconds", self.request_timeout_seconds, 30)?,
            stop_within: seconds("stop_within_seconds", self.stop_within_seconds, 30)?,
            log: self.log.unwrap_or_else(|| "info".into()),
            log_format: self.log_format.unwrap_or_default(),
            evidence_bytes: within(
                "evidence_bytes",
                self.evidence_bytes,
                evidence::USUAL_BYTES,
                1 << 10,
                1 << 30,
                "give 1024 to 1073741824 bytes",
            )?,
            evidence_store: evidence::checked(evidence::Said {
                endpoint: self.evidence_endpoint,
                bucket: self.evidence_bucket,
                region: self.evidence_region,
                key_id: self.evidence_key_id,
                secret: self.evidence_secret,
                secret_file: self.evidence_secret_file,
            })?,
        })
    }
}

fn number<T: std::str::FromStr>(name: &str, value: &str) -> Result<T, ConfigError> {
    value
        .parse()
        .map_err(|_| wrong(name, value, "give a whole number"))
}

fn wrong(name: &str, value: &str, remedy: &'static str) -> ConfigError {
    ConfigError::Value {
        name: name.into(),
        value: value.into(),
        remedy,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn environment(pairs: &[(&str, &str)]) -> Result<Given, ConfigError> {
        Given::from_environment(
            pairs
                .iter()
                .map(|(name, value)| ((*name).to_owned(), (*value).to_owned())),
        )
    }

    #[test]
    fn without_a_word_only_this_machine_is_served() {
        let config = Given::default().checked().expect("the defaults hold");
        assert!(config.listen.ip().is_loopback());
        assert_eq!((config.listen.port(), config.body_bytes), (8080, 4_194_304));
    }

    #[test]
    fn what_comes_later_wins() {
        let file: Given = toml::from_str("listen = \"127.0.0.1:1\"\nlog = \"debug\"").expect("reads");
        let given =
            file.overlaid(environment(&[("WHEELWORT_LISTEN", "127.0.0.1:2"), ("HOME", "x")]).expect("reads"));
        let config = given.checked().expect("holds");
        assert_eq!((config.listen.port(), config.log.as_str()), (2, "debug"));
    }

    #[test]
    fn slips_are_told() {
        assert!(environment(&[("WHEELWORT_LISTNE", "x")]).is_err());
        assert!(environment(&[("WHEELWORT_CONNECTIONS", "many")]).is_err());
        assert!(toml::from_str::<Given>("listne = \"x\"").is_err());
        for wrong in [
            Given {
                listen: Some("localhost".into()),
                ..Given::default()
            },
            Given {
                body_bytes: Some(1),
                ..Given::default()
            },
            Given {
                stop_within_seconds: Some(0),
                ..Given::default()
            },
        ] {
            assert!(wrong.checked().is_err());
        }
    }
}
