//! Which source wins, which slips are told, and that secrets stay secret.

use super::*;
use std::path::Path;

fn environment(pairs: &[(&str, &str)]) -> Result<Given, ConfigError> {
    Given::from_environment(
        pairs
            .iter()
            .map(|(name, value)| ((*name).to_owned(), (*value).to_owned())),
    )
}

fn line(pairs: &[(&str, &str)]) -> Result<Given, ConfigError> {
    Given::from_line(pairs.iter().map(|(name, value)| (*name, (*value).to_owned())))
}

fn file(text: &str) -> Result<Given, ConfigError> {
    let folder = tempfile::tempdir().expect("a folder");
    let file = folder.path().join("settings.toml");
    std::fs::write(&file, text).expect("written");
    Given::from_file(&file)
}

#[test]
fn without_a_word_only_this_machine_is_served() {
    let config = Given::default().checked().expect("the defaults hold");
    assert!(config.listen.ip().is_loopback());
    assert_eq!((config.listen.port(), config.body_bytes), (8080, 4_194_304));
    assert_eq!(config.evidence_bytes, 25_000_000);
    assert_eq!(
        (config.metrics_listen, config.first_administrator, config.oidc),
        (None, None, None)
    );
    assert_eq!(config.trusted_proxies, Networks::default());
}

#[test]
fn what_comes_later_wins() {
    let given = file("listen = \"127.0.0.1:1\"\nlog = \"debug\"\nconnections = 7")
        .expect("reads")
        .overlaid(environment(&[("WHEELWORT_LISTEN", "127.0.0.1:2"), ("HOME", "x")]).expect("reads"))
        .overlaid(line(&[("connections", "9")]).expect("reads"));
    let config = given.checked().expect("holds");
    assert_eq!(
        (config.listen.port(), config.log.as_str(), config.connections),
        (2, "debug", 9)
    );
    let table = given.table();
    for (name, value, from) in [
        ("listen", "127.0.0.1:2", "environment"),
        ("log", "debug", "file"),
        ("connections", "9", "command line"),
        ("batch_lines", "100000", "default"),
    ] {
        let row = table
            .lines()
            .find(|line| line.split_whitespace().next() == Some(name))
            .expect("a row");
        assert!(row.contains(value) && row.contains(from), "{row}");
    }
    assert_eq!(table.lines().count(), SETTINGS.len() + 1);
}

#[test]
fn slips_are_told() {
    assert!(environment(&[("WHEELWORT_LISTNE", "x")]).is_err());
    assert!(file("listne = \"x\"").is_err());
    assert!(file("listen = { port = 1 }").is_err());
    assert!(Given::from_file(Path::new("no/such/file")).is_err());
    for (name, value) in [
        ("listen", "localhost"),
        ("listen", ""),
        ("body_bytes", "1"),
        ("stop_within_seconds", "0"),
        ("connections", "many"),
        ("connections", "-1"),
        ("log_format", "xml"),
        ("secure_cookies", "maybe"),
        ("trusted_proxies", "10.0.0.0/8, proxy"),
        ("public_address", "wheelwort.example"),
        ("public_address", "https://"),
        ("metrics_listen", "9090"),
    ] {
        let error = line(&[(name, value)]).expect("said").checked().expect_err(name);
        let told = error.to_string();
        assert!(
            told.contains(name) && told.contains("give") && told.contains("command line"),
            "{told}"
        );
    }
}

#[test]
fn what_belongs_together_is_asked_for_whole() {
    let missing = |pairs: &[(&str, &str)]| match environment(pairs).expect("said").checked() {
        Err(ConfigError::Missing { name, .. }) => name,
        other => panic!("{other:?}"),
    };
    assert_eq!(missing(&[("WHEELWORT_EVIDENCE_STORE", "s3")]), "s3_endpoint");
    assert_eq!(
        missing(&[("WHEELWORT_ADMINISTRATOR", "ada")]),
        "administrator_password"
    );
    assert_eq!(
        missing(&[("WHEELWORT_ADMINISTRATOR_PASSWORD", "x")]),
        "administrator"
    );
    let issuer = ("WHEELWORT_OIDC_ISSUER", "https://sign-in.example/");
    let public = ("WHEELWORT_PUBLIC_ADDRESS", "https://wheelwort.example/");
    assert_eq!(missing(&[issuer]), "public_address");
    assert_eq!(missing(&[issuer, public]), "oidc_client_id");
    let config = environment(&[
        issuer,
        public,
        ("WHEELWORT_OIDC_CLIENT_ID", "wheelwort"),
        ("WHEELWORT_OIDC_CLIENT_SECRET", "hush"),
    ])
    .expect("said")
    .checked()
    .expect("whole");
    assert!(config.cookies_are_secure());
    assert_eq!(
        config.public_address.as_deref(),
        Some("https://wheelwort.example")
    );
    let oidc = config.oidc.expect("a provider");
    assert_eq!(
        (oidc.issuer.as_str(), oidc.name.as_str()),
        ("https://sign-in.example/", "single sign-on")
    );
}

#[test]
fn lists_and_switches_of_a_file_are_read() {
    let config = file(
        "trusted_proxies = [\"127.0.0.1\", \"10.0.0.0/8\"]\nsecure_cookies = true\npublic_address = \"\"",
    )
    .expect("reads")
    .checked()
    .expect("holds");
    assert_eq!(
        config.trusted_proxies,
        Networks::read("127.0.0.1 10.0.0.0/8").expect("networks")
    );
    assert!(config.cookies_are_secure());
    assert_eq!(config.public_address, None);
}

/// Every secret of the table, by every way in: not in a table, not in `Debug`, not in an error.
#[test]
fn secrets_stay_secret() {
    const HUSH: &str = "hush-hush";
    let folder = tempfile::tempdir().expect("a folder");
    let kept = folder.path().join("secret");
    std::fs::write(&kept, format!("{HUSH}\n")).expect("written");
    let whole = "evidence_store = \"s3\"\ns3_endpoint = \"http://127.0.0.1:9\"\ns3_bucket = \"b\"\ns3_key_id = \"k\"\n\
                 administrator = \"ada\"\noidc_issuer = \"https://a.example\"\npublic_address = \"https://b.example\"\n\
                 oidc_client_id = \"c\"";
    let secrets: Vec<&Setting> = SETTINGS.iter().filter(|setting| setting.secret).collect();
    assert_eq!(secrets.len(), 3);
    for in_file in [false, true] {
        let pairs: Vec<(String, String)> = secrets
            .iter()
            .map(|setting| {
                let name = format!("WHEELWORT_{}", setting.name.to_uppercase());
                if in_file {
                    (format!("{name}_FILE"), kept.display().to_string())
                } else {
                    (name, HUSH.into())
                }
            })
            .collect();
        let given = file(whole)
            .expect("reads")
            .overlaid(Given::from_environment(pairs).expect("reads"));
        let config = given.checked().expect("whole");
        let EvidenceStore::S3(s3) = &config.evidence_store else {
            panic!("no store")
        };
        assert_eq!(s3.secret.reveal(), HUSH);
        let shown = format!("{} {given:?} {config:?} {config:#?}", given.table());
        assert!(!shown.contains(HUSH), "{shown}");
        assert_eq!(shown.contains(&kept.display().to_string()), in_file);
    }
    for setting in secrets {
        let name = setting.name;
        let wrong_value = format!("{HUSH}\u{7}");
        let both = format!("{name} = \"{HUSH}\"\n{name}_file = \"{}\"", kept.display());
        let broken = format!("{name} = \"{HUSH}");
        for error in [
            line(&[(name, HUSH)]).expect_err("on a command line"),
            environment(&[(&format!("WHEELWORT_{}", name.to_uppercase()), &wrong_value)])
                .expect("said")
                .checked()
                .expect_err("a control character"),
            environment(&[(&format!("WHEELWORT_X{}", name.to_uppercase()), HUSH)]).expect_err("no such name"),
            file(&both).expect_err("twice"),
            file(&broken).expect_err("no TOML"),
            file(&format!("x{name} = \"{HUSH}\"")).expect_err("no such name"),
            file(&format!(
                "{name}_file = \"{}\"",
                folder.path().join("none").display()
            ))
            .expect_err("no such file"),
        ] {
            assert!(!format!("{error} {error:?}").contains(HUSH), "{error:?}");
        }
    }
}

#[test]
fn names_are_told_apart() {
    for (n, setting) in SETTINGS.iter().enumerate() {
        assert!(SETTINGS[..n].iter().all(|other| other.name != setting.name));
        assert!(!setting.name.ends_with("_file"), "{}", setting.name);
        assert!(!setting.meaning.is_empty() && !setting.range.is_empty());
    }
}
