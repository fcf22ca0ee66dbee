//! Every setting there is: name, meaning, default, range, whether it is secret, and what its value does. Files, the
//! environment, the command line and the printed table all go by this.

use super::kinds::{self, Remedy};
use super::{
    Config, ConfigError, EvidenceStore, FirstAdministrator, LogFormat, Networks, Oidc, S3, Secret,
    SecureCookies, USUAL_ADDRESS,
};
use std::net::{Ipv4Addr, SocketAddr};
use std::time::Duration;

/// One setting.
#[derive(Clone, Copy)]
pub struct Setting {
    /// Its name in a file; in the environment with the prefix and in capitals.
    pub name: &'static str,
    /// What it means, with its unit.
    pub meaning: &'static str,
    /// What is in force without a word; empty: nothing.
    pub usual: &'static str,
    /// What may be given.
    pub range: &'static str,
    /// Never shown. It may also be given as `<name>_file`, the file that holds it.
    pub secret: bool,
    pub(super) set: fn(&mut Draft, &str) -> Result<(), Remedy>,
}

/// Settings half way: those that belong together may not all be there yet.
pub(super) struct Draft {
    config: Config,
    s3: bool,
    s3_endpoint: Option<String>,
    s3_bucket: Option<String>,
    s3_region: Option<String>,
    s3_key_id: Option<String>,
    s3_secret: Option<Secret>,
    administrator: Option<String>,
    administrator_password: Option<Secret>,
    oidc_issuer: Option<String>,
    oidc_client_id: Option<String>,
    oidc_client_secret: Option<Secret>,
    oidc_name: Option<String>,
}

const fn open(
    name: &'static str,
    usual: &'static str,
    range: &'static str,
    meaning: &'static str,
    set: fn(&mut Draft, &str) -> Result<(), Remedy>,
) -> Setting {
    Setting {
        name,
        meaning,
        usual,
        range,
        secret: false,
        set,
    }
}

const fn secret(
    name: &'static str,
    range: &'static str,
    meaning: &'static str,
    set: fn(&mut Draft, &str) -> Result<(), Remedy>,
) -> Setting {
    Setting {
        name,
        meaning,
        usual: "",
        range,
        secret: true,
        set,
    }
}

/// Every setting, in the order in which they are printed.
#[rustfmt::skip]
pub const SETTINGS: &[Setting] = &[
    open("data", "data", "a folder", "folder of the data; made where there is none",
        |d, text| kinds::word(text).map(|folder| d.config.data = folder.into())),
    open("listen", USUAL_ADDRESS, "address:port", "where pages and the API are served; port 0 takes a free one",
        |d, text| kinds::listen(text).map(|address| d.config.listen = address)),
    open("public_address", "", "http(s)://...", "what people type to get here: links and QR codes begin with it",
        |d, text| kinds::web_address(text).map(|address| d.config.public_address = Some(address))),
    open("trusted_proxies", "", "networks", "proxies whose X-Forwarded-For counts, with commas between them",
        |d, text| kinds::networks(text).map(|networks| d.config.trusted_proxies = networks)),
    open("secure_cookies", "auto", "auto, yes, no", "cookies for encrypted connections alone; auto: if public_address is https",
        |d, text| kinds::choice(text, &[("auto", SecureCookies::Auto), ("yes", SecureCookies::Yes), ("no", SecureCookies::No)])
            .map(|choice| d.config.secure_cookies = choice)),
    open("body_bytes", "4194304", "1024 to 1073741824", "bytes of a request's body, and of a line of a batch",
        |d, text| kinds::whole(text, 1 << 10, 1 << 30).map(|bytes| d.config.body_bytes = bytes)),
    open("batch_lines", "100000", "1 to 100000000", "lines of a batch",
        |d, text| kinds::whole(text, 1, 100_000_000).map(|lines| d.config.batch_lines = lines)),
    open("requests_at_once", "256", "1 to 100000", "requests worked on at once; more are answered 503",
        |d, text| kinds::whole(text, 1, 100_000).map(|count| d.config.requests_at_once = count)),
    open("connections", "1024", "1 to 1000000", "connections open at once; more wait",
        |d, text| kinds::whole(text, 1, 1_000_000).map(|count| d.config.connections = count)),
    open("request_timeout_seconds", "30", "1 to 3600", "seconds an answer may take to begin",
        |d, text| kinds::seconds(text).map(|time| d.config.request_timeout = time)),
    open("stop_within_seconds", "30", "1 to 3600", "seconds a stop waits for requests that run",
        |d, text| kinds::seconds(text).map(|time| d.config.stop_within = time)),
    open("log", "info", "level or filter", "what is logged: info, or wheelwort=debug,info",
        |d, text| kinds::word(text).map(|filter| d.config.log = filter)),
    open("log_format", "text", "text, json", "how log lines look",
        |d, text| kinds::choice(text, &[("text", LogFormat::Text), ("json", LogFormat::Json)])
            .map(|format| d.config.log_format = format)),
    open("metrics_listen", "", "address:port", "where /metrics is served, for Prometheus; without it nowhere",
        |d, text| kinds::listen(text).map(|address| d.config.metrics_listen = Some(address))),
    open("evidence_bytes", "25000000", "1024 to 1073741824", "bytes of one file of evidence",
        |d, text| kinds::whole(text, 1 << 10, 1 << 30).map(|bytes| d.config.evidence_bytes = bytes)),
    open("evidence_store", "local", "local, s3", "where evidence is kept: the folder of the data, or an S3 store",
        |d, text| kinds::choice(text, &[("local", false), ("s3", true)]).map(|s3| d.s3 = s3)),
    open("s3_endpoint", "", "https://...", "address of the S3 store; http on this machine alone",
        |d, text| kinds::store_address(text).map(|address| d.s3_endpoint = Some(address))),
    open("s3_bucket", "", "a name", "its bucket",
        |d, text| kinds::word(text).map(|name| d.s3_bucket = Some(name))),
    open("s3_region", "us-east-1", "a name", "region in its signatures",
        |d, text| kinds::word(text).map(|name| d.s3_region = Some(name))),
    open("s3_key_id", "", "a name", "name of the key to it",
        |d, text| kinds::word(text).map(|name| d.s3_key_id = Some(name))),
    secret("s3_secret", "a text", "the key to it",
        |d, text| kinds::word(text).map(|key| d.s3_secret = Some(Secret::new(key)))),
    open("administrator", "", "a name", "who is made administrator when the data hold nobody yet",
        |d, text| kinds::word(text).map(|name| d.administrator = Some(name))),
    secret("administrator_password", "a text", "password of that administrator's first sign-in",
        |d, text| kinds::word(text).map(|password| d.administrator_password = Some(Secret::new(password)))),
    open("oidc_issuer", "", "http(s)://...", "provider of sign-in by OpenID Connect: serve refuses it until that is built",
        |d, text| kinds::web_address(text).map(|address| {
            // An issuer is compared as it is written: a slash at its end stays.
            d.oidc_issuer = Some(if text.ends_with('/') { format!("{address}/") } else { address });
        })),
    open("oidc_client_id", "", "a text", "what the provider calls this service",
        |d, text| kinds::word(text).map(|id| d.oidc_client_id = Some(id))),
    secret("oidc_client_secret", "a text", "what proves this service to the provider",
        |d, text| kinds::word(text).map(|key| d.oidc_client_secret = Some(Secret::new(key)))),
    open("oidc_name", "single sign-on", "a text", "what the sign-in page calls the provider",
        |d, text| kinds::word(text).map(|name| d.oidc_name = Some(name))),
];

impl Setting {
    /// The setting of a name.
    pub fn of(name: &str) -> Option<&'static Setting> {
        SETTINGS.iter().find(|setting| setting.name == name)
    }
}

impl Draft {
    /// Everything as it is without a word. The defaults of the table are put on it before anything else.
    pub(super) fn new() -> Draft {
        let nothing = Duration::ZERO;
        Draft {
            config: Config {
                data: "data".into(),
                listen: SocketAddr::from((Ipv4Addr::LOCALHOST, 0)),
                public_address: None,
                trusted_proxies: Networks::default(),
                secure_cookies: SecureCookies::default(),
                body_bytes: 0,
                batch_lines: 0,
                requests_at_once: 0,
                connections: 0,
                request_timeout: nothing,
                stop_within: nothing,
                log: String::new(),
                log_format: LogFormat::default(),
                metrics_listen: None,
                evidence_bytes: 0,
                evidence_store: EvidenceStore::default(),
                first_administrator: None,
                oidc: None,
            },
            s3: false,
            s3_endpoint: None,
            s3_bucket: None,
            s3_region: None,
            s3_key_id: None,
            s3_secret: None,
            administrator: None,
            administrator_password: None,
            oidc_issuer: None,
            oidc_client_id: None,
            oidc_client_secret: None,
            oidc_name: None,
        }
    }

    /// Puts together what belongs together.
    pub(super) fn whole(self) -> Result<Config, ConfigError> {
        let mut config = self.config;
        if self.s3 {
            const WHY: &str = "evidence_store = \"s3\" needs it";
            config.evidence_store = EvidenceStore::S3(S3 {
                endpoint: there(self.s3_endpoint, "s3_endpoint", WHY)?,
                bucket: there(self.s3_bucket, "s3_bucket", WHY)?,
                region: there(self.s3_region, "s3_region", WHY)?,
                key_id: there(self.s3_key_id, "s3_key_id", WHY)?,
                secret: there(
                    self.s3_secret,
                    "s3_secret",
                    "evidence_store = \"s3\" needs it, or s3_secret_file",
                )?,
            });
        }
        config.first_administrator = match (self.administrator, self.administrator_password) {
            (None, None) => None,
            (Some(name), Some(password)) => Some(FirstAdministrator { name, password }),
            (None, Some(_)) => {
                return Err(ConfigError::Missing {
                    name: "administrator",
                    remedy: "administrator_password is the password of nobody without it",
                });
            }
            (Some(_), None) => {
                return Err(ConfigError::Missing {
                    name: "administrator_password",
                    remedy: "administrator needs it, or administrator_password_file; there is no default password",
                });
            }
        };
        if let Some(issuer) = self.oidc_issuer {
            const WHY: &str = "oidc_issuer needs it";
            if config.public_address.is_none() {
                return Err(ConfigError::Missing {
                    name: "public_address",
                    remedy: "oidc_issuer needs it: the provider sends people back there",
                });
            }
            config.oidc = Some(Oidc {
                issuer,
                client_id: there(self.oidc_client_id, "oidc_client_id", WHY)?,
                client_secret: there(
                    self.oidc_client_secret,
                    "oidc_client_secret",
                    "oidc_issuer needs it, or oidc_client_secret_file",
                )?,
                name: there(self.oidc_name, "oidc_name", WHY)?,
            });
        }
        Ok(config)
    }
}

fn there<T>(value: Option<T>, name: &'static str, remedy: &'static str) -> Result<T, ConfigError> {
    value.ok_or(ConfigError::Missing { name, remedy })
}
