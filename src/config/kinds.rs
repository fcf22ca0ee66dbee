//! What values may be, as functions of their text: each sets one thing, or says what to give instead.

use super::Networks;
use std::net::SocketAddr;
use std::time::Duration;

/// What to give instead of a value that is wrong.
pub(super) type Remedy = String;

/// A whole number within bounds.
pub(super) fn whole(text: &str, least: usize, most: usize) -> Result<usize, Remedy> {
    match text.parse() {
        Ok(number) if (least..=most).contains(&number) => Ok(number),
        _ => Err(format!("give a whole number from {least} to {most}")),
    }
}

/// Seconds, at most an hour.
pub(super) fn seconds(text: &str) -> Result<Duration, Remedy> {
    match text.parse() {
        Ok(seconds @ 1..=3_600) => Ok(Duration::from_secs(seconds)),
        _ => Err("give 1 to 3600 seconds".into()),
    }
}

/// An address to listen on.
pub(super) fn listen(text: &str) -> Result<SocketAddr, Remedy> {
    text.parse()
        .map_err(|_| "give an IP address and a port, such as 127.0.0.1:8080".into())
}

/// The base of an address on the web; without the slash at its end.
pub(super) fn web_address(text: &str) -> Result<String, Remedy> {
    let remedy = "give an address that begins with https:// or http://, without spaces, question mark or #";
    let rest = text
        .strip_prefix("https://")
        .or_else(|| text.strip_prefix("http://"))
        .ok_or(remedy)?;
    let host = rest.split('/').next().unwrap_or("");
    let odd = |c: char| c.is_whitespace() || c.is_control() || matches!(c, '?' | '#' | '@' | '"' | '<' | '>');
    if host.is_empty() || rest.contains(odd) {
        return Err(remedy.into());
    }
    Ok(text.trim_end_matches('/').to_owned())
}

/// The address of a store of files: `https`, or `http` on this machine. Elsewhere whoever listens on the way would read
/// every file.
pub(super) fn store_address(text: &str) -> Result<String, Remedy> {
    let address = web_address(text)?;
    match address.strip_prefix("http://") {
        Some(rest) if !is_here(rest) => {
            Err("give an https address; http is for a store on this machine alone".into())
        }
        _ => Ok(address),
    }
}

/// True if what follows `http://` begins with a name of this machine.
fn is_here(rest: &str) -> bool {
    let place = rest.split('/').next().unwrap_or_default();
    let host = match place.strip_prefix('[') {
        Some(number) => number.split(']').next().unwrap_or_default(),
        None => place.split(':').next().unwrap_or_default(),
    };
    let number = host.parse::<std::net::IpAddr>();
    host == "localhost" || number.is_ok_and(|number| number.is_loopback())
}

/// Networks with commas between them.
pub(super) fn networks(text: &str) -> Result<Networks, Remedy> {
    Networks::read(text).map_err(|part| {
        format!(
            "\"{part}\" is no network: give addresses or networks such as 127.0.0.1, 10.0.0.0/8, with commas"
        )
    })
}

/// A short text of one line, not empty.
pub(super) fn word(text: &str) -> Result<String, Remedy> {
    let text = text.trim();
    if text.is_empty() || text.len() > 500 || text.contains(char::is_control) {
        return Err("give a text of one line, not empty".into());
    }
    Ok(text.to_owned())
}

/// One of a few names.
pub(super) fn choice<T: Copy>(text: &str, choices: &[(&str, T)]) -> Result<T, Remedy> {
    let found = choices.iter().find(|(name, _)| *name == text);
    found.map(|(_, value)| *value).ok_or_else(|| {
        let names: Vec<&str> = choices.iter().map(|(name, _)| *name).collect();
        format!("give {}", names.join(" or "))
    })
}

#[cfg(test)]
mod tests {
    use super::store_address;

    #[test]
    fn http_is_for_a_store_on_this_machine() {
        for good in [
            "https://files.example",
            "http://127.0.0.1:9000",
            "http://[::1]:9000/",
            "http://localhost:1",
        ] {
            assert!(store_address(good).is_ok(), "{good}");
        }
        for bad in [
            "http://files.example",
            "http://10.0.0.1",
            "ftp://127.0.0.1",
            "files.example",
            "http://127.0.0.1.example",
            "http://localhost@files.example",
            "http://localhost.example:80",
        ] {
            assert!(store_address(bad).is_err(), "{bad}");
        }
    }
}
