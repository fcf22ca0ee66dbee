//! Settings: defaults, then a file, then the environment, then the command line; each later one wins. All are checked
//! before the program does anything. The table of them is in `table.rs`; a setting is one row there.

mod given;
mod kinds;
mod network;
mod secret;
mod table;

pub use given::{Given, Origin};
pub use network::{Network, Networks};
pub use secret::Secret;
pub use table::{SETTINGS, Setting};

use std::net::SocketAddr;
use std::path::PathBuf;
use std::time::Duration;
use thiserror::Error;

/// Where the program listens unless told otherwise: this machine alone.
pub const USUAL_ADDRESS: &str = "127.0.0.1:8080";

/// Prefix of the names in the environment: `WHEELWORT_LISTEN` and so on.
pub const PREFIX: &str = "WHEELWORT_";

/// Checked settings. What belongs together is there as a whole or not at all.
#[derive(Clone, Debug, PartialEq)]
pub struct Config {
    /// Folder of the data.
    pub data: PathBuf,
    /// Address to listen on; port 0 takes a free one.
    pub listen: SocketAddr,
    /// The address people type, without a slash at its end, such as `https://wheelwort.example`: what links and QR codes
    /// begin with. None: the address that is listened on.
    pub public_address: Option<String>,
    /// Proxies whose word about a client's address counts.
    pub trusted_proxies: Networks,
    /// When cookies are marked for encrypted connections alone: see [`Config::cookies_are_secure`].
    pub secure_cookies: SecureCookies,
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
    /// Address on which measurements are served; none: nowhere.
    pub metrics_listen: Option<SocketAddr>,
    /// Bytes of a piece of evidence.
    pub evidence_bytes: usize,
    /// Where evidence is kept.
    pub evidence_store: EvidenceStore,
    /// Who is made administrator when the data hold nobody yet.
    pub first_administrator: Option<FirstAdministrator>,
    /// Sign-in at an OpenID Connect provider.
    pub oidc: Option<Oidc>,
}

/// When cookies are marked for encrypted connections alone.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum SecureCookies {
    /// Where the public address begins with `https`.
    #[default]
    Auto,
    /// Always.
    Yes,
    /// Never: for a network where nothing is encrypted.
    No,
}

/// How log lines look.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum LogFormat {
    /// For people.
    #[default]
    Text,
    /// One JSON object a line.
    Json,
}

/// Where evidence is kept.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub enum EvidenceStore {
    /// In the folder of the data.
    #[default]
    Local,
    /// In a store that speaks the S3 protocol.
    S3(S3),
}

/// A store that speaks the S3 protocol.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct S3 {
    /// Its address, `https://...` or `http://...`.
    pub endpoint: String,
    /// Name of the bucket.
    pub bucket: String,
    /// Region in its signatures.
    pub region: String,
    /// Name of the key.
    pub key_id: String,
    /// The key.
    pub secret: Secret,
}

/// Who is made administrator when the data hold nobody yet.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FirstAdministrator {
    /// Name to sign in with.
    pub name: String,
    /// Password for the first sign-in.
    pub password: Secret,
}

/// A provider of sign-in by OpenID Connect. There is a public address wherever there is one of these.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Oidc {
    /// Address of the provider.
    pub issuer: String,
    /// What it calls this service.
    pub client_id: String,
    /// What proves this service to it.
    pub client_secret: Secret,
    /// What the button of the sign-in page says after "Sign in with".
    pub name: String,
}

impl Config {
    /// True if cookies go out with `Secure`.
    pub fn cookies_are_secure(&self) -> bool {
        match self.secure_cookies {
            SecureCookies::Yes => true,
            SecureCookies::No => false,
            SecureCookies::Auto => self
                .public_address
                .as_deref()
                .is_some_and(|address| address.starts_with("https://")),
        }
    }
}

/// Why settings do not hold.
#[derive(Debug, Error)]
pub enum ConfigError {
    /// A file cannot be read.
    #[error("the file {file} of the setting {name} cannot be read")]
    Unreadable {
        /// The setting that names it.
        name: String,
        /// The file.
        file: PathBuf,
        /// Why.
        #[source]
        source: std::io::Error,
    },
    /// The file of settings is not TOML, or says something unknown.
    #[error("the settings file {0} is wrong: {1}")]
    File(PathBuf, String),
    /// A value is wrong. Secrets are not in it.
    #[error("the setting {name} is \"{value}\" (from {origin}): {remedy}")]
    Value {
        /// Name of the setting.
        name: String,
        /// What was given.
        value: String,
        /// Who gave it.
        origin: Origin,
        /// What to give.
        remedy: String,
    },
    /// A setting that another one needs is not there.
    #[error("the setting {name} is missing: {remedy}")]
    Missing {
        /// Name of the setting.
        name: &'static str,
        /// What to give, and why.
        remedy: &'static str,
    },
}

#[cfg(test)]
mod tests;
