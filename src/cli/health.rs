//! `health`: asks a running service whether it can do its work, with the little HTTP that takes.

use super::{COULD_NOT, Common, WRONG, given, print, say};
use clap::Args;
use std::io::{Read, Write};
use std::net::{IpAddr, Ipv4Addr, Ipv6Addr, TcpStream, ToSocketAddrs};
use std::time::Duration;

/// How long each step of asking may take.
const PATIENCE: Duration = Duration::from_secs(5);

#[derive(Debug, Args)]
pub(super) struct Health {
    /// What to ask. When left out: /health/ready where the settings say that the service listens.
    #[arg(long, value_name = "URL")]
    url: Option<String>,
    #[command(flatten)]
    common: Common,
}

/// Asks once.
pub(super) fn run(command: Health) -> u8 {
    let url = match command.url {
        Some(url) => url,
        None => match given(None, command.common).and_then(|given| given.checked()) {
            Ok(config) => usual(config.listen.ip(), config.listen.port()),
            Err(error) => {
                say(&format!("wheelwort: {:#}", anyhow::Error::from(error)));
                return WRONG;
            }
        },
    };
    let Some((host, path)) = parts(&url) else {
        say(&format!(
            "wheelwort: \"{url}\" cannot be asked: give an address such as http://127.0.0.1:8080/health/ready"
        ));
        return WRONG;
    };
    match ask(&host, &path) {
        Ok(status) if (200..300).contains(&status) => print(b"It can do its work."),
        Ok(status) => {
            say(&format!("wheelwort: {url} answers {status}"));
            COULD_NOT
        }
        Err(error) => {
            say(&format!("wheelwort: {url} does not answer: {error}"));
            COULD_NOT
        }
    }
}

/// The address of a service that listens there; one that listens everywhere listens here too.
fn usual(ip: IpAddr, port: u16) -> String {
    let ip = match ip {
        IpAddr::V4(ip) if ip.is_unspecified() => IpAddr::V4(Ipv4Addr::LOCALHOST),
        IpAddr::V6(ip) if ip.is_unspecified() => IpAddr::V6(Ipv6Addr::LOCALHOST),
        ip => ip,
    };
    format!("http://{}/health/ready", std::net::SocketAddr::new(ip, port))
}

/// Host with port, and path, of an `http` address.
fn parts(url: &str) -> Option<(String, String)> {
    let rest = url.strip_prefix("http://")?;
    let (host, path) = rest.split_once('/').unwrap_or((rest, ""));
    let plain = |text: &str| text.bytes().all(|byte| byte.is_ascii_graphic());
    if host.is_empty() || !plain(host) || !plain(path) {
        return None;
    }
    // `[::1]` ends in a bracket, `[::1]:80` and `host:80` do not.
    let has_port = host
        .rsplit_once(':')
        .is_some_and(|(_, port)| port.parse::<u16>().is_ok());
    let host = if has_port {
        host.to_owned()
    } else {
        format!("{host}:80")
    };
    Some((host, format!("/{path}")))
}

fn ask(host: &str, path: &str) -> std::io::Result<u16> {
    let mut last = std::io::Error::from(std::io::ErrorKind::AddrNotAvailable);
    for address in host.to_socket_addrs()? {
        match TcpStream::connect_timeout(&address, PATIENCE) {
            Ok(stream) => return status_of(stream, host, path),
            Err(error) => last = error,
        }
    }
    Err(last)
}

fn status_of(mut stream: TcpStream, host: &str, path: &str) -> std::io::Result<u16> {
    stream.set_read_timeout(Some(PATIENCE))?;
    stream.set_write_timeout(Some(PATIENCE))?;
    write!(
        stream,
        "GET {path} HTTP/1.1\r\nHost: {host}\r\nAccept: application/json\r\nConnection: close\r\n\r\n"
    )?;
    let mut head = [0; 12];
    stream.read_exact(&mut head)?;
    let status = std::str::from_utf8(&head)
        .ok()
        .and_then(|head| head.strip_prefix("HTTP/1.")?.split_once(' '));
    status
        .and_then(|(_, status)| status.parse().ok())
        .ok_or_else(|| std::io::Error::other("that is no answer of a web service"))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn addresses_are_taken_apart() {
        for (url, host, path) in [
            (
                "http://127.0.0.1:8080/health/ready",
                "127.0.0.1:8080",
                "/health/ready",
            ),
            ("http://wheelwort.example", "wheelwort.example:80", "/"),
            ("http://[::1]/x", "[::1]:80", "/x"),
            ("http://[::1]:81/x", "[::1]:81", "/x"),
        ] {
            assert_eq!(parts(url), Some((host.into(), path.into())), "{url}");
        }
        for wrong in [
            "https://a",
            "http://",
            "http://a b/",
            "http://a/b c",
            "127.0.0.1:8080",
        ] {
            assert_eq!(parts(wrong), None, "{wrong}");
        }
        assert_eq!(
            usual(Ipv4Addr::UNSPECIFIED.into(), 80),
            "http://127.0.0.1:80/health/ready"
        );
    }
}
