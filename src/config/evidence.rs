//! Where the files of evidence are kept: in the folder of the data, or in a store elsewhere that speaks the S3 protocol.

use super::{ConfigError, wrong};
use reqwest::Url;
use std::fmt;
use std::path::{Path, PathBuf};

/// Bytes of a file of evidence, unless told otherwise: 25 MB.
pub const USUAL_BYTES: usize = 25_000_000;

/// Region of a store unless told otherwise: stores of one's own mostly do not look at it.
const USUAL_REGION: &str = "us-east-1";

/// Where the files of evidence are kept.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub enum EvidenceStore {
    /// In the folder `evidence` of the folder of the data.
    #[default]
    Folder,
    /// In a bucket of a store that speaks the S3 protocol.
    Bucket(Bucket),
}

/// A bucket elsewhere.
#[derive(Clone, PartialEq, Eq, PartialOrd, Ord)]
pub struct Bucket {
    /// Address of the store: `https`, or `http` on this machine.
    pub endpoint: String,
    /// Name of the bucket.
    pub bucket: String,
    /// Region that requests are signed for.
    pub region: String,
    /// Id of the key that requests are signed with.
    pub key_id: String,
    /// The secret of that key.
    pub secret: String,
}

/// Without the secret: settings are shown and logged.
impl fmt::Debug for Bucket {
    fn fmt(&self, to: &mut fmt::Formatter<'_>) -> fmt::Result {
        to.debug_struct("Bucket")
            .field("endpoint", &self.endpoint)
            .field("bucket", &self.bucket)
            .field("region", &self.region)
            .field("key_id", &self.key_id)
            .finish_non_exhaustive()
    }
}

/// The settings of the store as given; nothing given is the folder of the data.
#[derive(Clone, Default)]
pub(super) struct Said {
    pub(super) endpoint: Option<String>,
    pub(super) bucket: Option<String>,
    pub(super) region: Option<String>,
    pub(super) key_id: Option<String>,
    pub(super) secret: Option<String>,
    pub(super) secret_file: Option<PathBuf>,
}

/// The store that settings name.
pub(super) fn checked(said: Said) -> Result<EvidenceStore, ConfigError> {
    let Said {
        endpoint,
        bucket,
        region,
        key_id,
        secret,
        secret_file,
    } = said;
    let secret = match (secret, secret_file) {
        (Some(_), Some(_)) => {
            let remedy = "give evidence_secret or evidence_secret_file, not both";
            return Err(wrong("evidence_secret", "hidden", remedy));
        }
        (Some(secret), None) => Some(secret),
        (None, Some(file)) => Some(secret_of(&file)?),
        (None, None) => None,
    };
    if [&endpoint, &bucket, &region, &key_id, &secret]
        .iter()
        .all(|given| given.is_none())
    {
        return Ok(EvidenceStore::Folder);
    }
    let needed = |name: &str, value: Option<String>, remedy| {
        value
            .filter(|value| !value.trim().is_empty())
            .ok_or_else(|| wrong(name, "", remedy))
    };
    let endpoint = needed(
        "evidence_endpoint",
        endpoint,
        "give the address of the store, such as https://files.example",
    )?;
    if !may_be_spoken_to(&endpoint) {
        let remedy = "give an https address; http is for a store on this machine alone";
        return Err(wrong("evidence_endpoint", &endpoint, remedy));
    }
    Ok(EvidenceStore::Bucket(Bucket {
        endpoint,
        bucket: needed("evidence_bucket", bucket, "give the name of the bucket")?,
        region: region.unwrap_or_else(|| USUAL_REGION.into()),
        key_id: needed("evidence_key_id", key_id, "give the id of the key to the store")?,
        secret: needed(
            "evidence_secret",
            secret,
            "give the secret of the key in the environment, or name a file that holds it in evidence_secret_file",
        )?,
    }))
}

/// True for `https` anywhere and for `http` on this machine: elsewhere a listener on the way would read every file.
fn may_be_spoken_to(endpoint: &str) -> bool {
    let Ok(url) = Url::parse(endpoint) else {
        return false;
    };
    let here = url.host_str().is_some_and(|host| {
        let host = host.trim_start_matches('[').trim_end_matches(']');
        let number = host.parse::<std::net::IpAddr>();
        host == "localhost" || number.is_ok_and(|number| number.is_loopback())
    });
    match url.scheme() {
        "https" => url.has_host(),
        "http" => here,
        _ => false,
    }
}

fn secret_of(file: &Path) -> Result<String, ConfigError> {
    let text = std::fs::read_to_string(file).map_err(|error| ConfigError::Unreadable(file.into(), error))?;
    Ok(text.trim_end_matches(['\r', '\n']).to_owned())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn said(endpoint: &str) -> Said {
        Said {
            endpoint: Some(endpoint.into()),
            bucket: Some("evidence".into()),
            key_id: Some("key".into()),
            secret: Some("hush".into()),
            ..Said::default()
        }
    }

    #[test]
    fn without_a_word_files_stay_beside_the_data() {
        assert_eq!(checked(Said::default()).expect("holds"), EvidenceStore::Folder);
    }

    #[test]
    fn http_is_for_this_machine() {
        for good in [
            "https://files.example",
            "http://127.0.0.1:9000",
            "http://[::1]:9000",
            "http://localhost:1",
        ] {
            assert!(checked(said(good)).is_ok(), "{good}");
        }
        for bad in [
            "http://files.example",
            "http://10.0.0.1",
            "ftp://127.0.0.1",
            "files.example",
            "http://127.0.0.1.example",
        ] {
            assert!(checked(said(bad)).is_err(), "{bad}");
        }
    }

    #[test]
    fn half_a_store_is_none_and_secrets_stay_hidden() {
        for half in [
            Said {
                bucket: None,
                ..said("https://files.example")
            },
            Said {
                secret: None,
                ..said("https://files.example")
            },
            Said {
                region: Some("x".into()),
                ..Said::default()
            },
            Said {
                secret_file: Some("x".into()),
                ..said("https://files.example")
            },
        ] {
            assert!(checked(half).is_err());
        }
        let store = checked(said("https://files.example")).expect("holds");
        assert!(!format!("{store:?}").contains("hush"));
    }
}
