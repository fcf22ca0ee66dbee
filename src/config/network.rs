//! Networks of addresses, and whose word about a client's address counts.

use std::fmt;
use std::net::IpAddr;

/// An address, or those that begin with the same bits.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Network {
    first: IpAddr,
    bits: u8,
}

impl Network {
    /// Reads `10.0.0.0/8`, `fd00::/8` or a single address.
    pub fn read(text: &str) -> Option<Network> {
        let (address, bits) = match text.split_once('/') {
            Some((address, bits)) => (address, Some(bits)),
            None => (text, None),
        };
        let first: IpAddr = address.parse().ok()?;
        let most = if first.is_ipv4() { 32 } else { 128 };
        let bits = match bits {
            // `+8` and `08` parse as numbers; no network is written so.
            Some(bits) if bits.bytes().all(|byte| byte.is_ascii_digit()) => bits.parse().ok()?,
            Some(_) => return None,
            None => most,
        };
        (bits <= most).then_some(Network { first, bits })
    }

    /// True if the address is in it. An IPv4 address that comes as an IPv6 one counts as what it is.
    pub fn contains(&self, address: IpAddr) -> bool {
        let unlike = match (self.first.to_canonical(), address.to_canonical()) {
            (IpAddr::V4(a), IpAddr::V4(b)) => {
                let bits = if self.first.is_ipv4() {
                    self.bits
                } else {
                    self.bits.saturating_sub(96)
                };
                return (a.to_bits() ^ b.to_bits())
                    .checked_shr(32 - u32::from(bits))
                    .unwrap_or(0)
                    == 0;
            }
            (IpAddr::V6(a), IpAddr::V6(b)) => a.to_bits() ^ b.to_bits(),
            _ => return false,
        };
        unlike.checked_shr(128 - u32::from(self.bits)).unwrap_or(0) == 0
    }
}

impl fmt::Display for Network {
    fn fmt(&self, to: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(to, "{}/{}", self.first, self.bits)
    }
}

/// Networks whose word counts; none to begin with.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Networks(Vec<Network>);

impl Networks {
    /// Reads networks with commas or spaces between them; the first that cannot be read comes back.
    ///
    /// # Errors
    /// The part that is no network.
    pub fn read(text: &str) -> Result<Networks, &str> {
        text.split([',', ' '])
            .filter(|part| !part.is_empty())
            .map(|part| Network::read(part).ok_or(part))
            .collect::<Result<_, _>>()
            .map(Networks)
    }

    /// True if the address is in one of them.
    pub fn contain(&self, address: IpAddr) -> bool {
        self.0.iter().any(|network| network.contains(address))
    }

    /// The address of the client behind a connection. `forwarded` are the values of `X-Forwarded-For` in their order; they
    /// are read from the right, and only as far as trusted proxies wrote them: what is left of the first stranger
    /// anybody may have made up.
    pub fn client<'h>(&self, peer: IpAddr, forwarded: impl IntoIterator<Item = &'h str>) -> IpAddr {
        let mut client = peer.to_canonical();
        if !self.contain(client) {
            return client;
        }
        let told: Vec<&str> = forwarded.into_iter().flat_map(|value| value.split(',')).collect();
        for word in told.into_iter().rev() {
            // Nothing beyond a word that is no address can be trusted.
            let Ok(address) = word.trim().parse::<IpAddr>() else {
                break;
            };
            client = address.to_canonical();
            if !self.contain(client) {
                break;
            }
        }
        client
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn ip(text: &str) -> IpAddr {
        text.parse().expect("an address")
    }

    #[test]
    fn networks_hold_what_begins_alike() {
        for (network, inside, outside) in [
            ("10.0.0.0/8", "10.255.0.1", "11.0.0.1"),
            ("192.0.2.7", "192.0.2.7", "192.0.2.8"),
            ("fd00::/8", "fd12::1", "fe80::1"),
            ("::1", "::1", "::2"),
            ("172.16.0.0/12", "::ffff:172.31.255.255", "172.32.0.0"),
            ("::ffff:192.0.2.0/120", "192.0.2.9", "192.0.3.9"),
        ] {
            let network = Network::read(network).expect("a network");
            assert!(network.contains(ip(inside)), "{network} {inside}");
            assert!(!network.contains(ip(outside)), "{network} {outside}");
        }
        assert!(Network::read("0.0.0.0/0").is_some_and(|all| all.contains(ip("198.51.100.1"))));
        assert!(Network::read("::/0").is_some_and(|all| all.contains(ip("2001:db8::1"))));
        for wrong in [
            "10.0.0.0/33",
            "proxy",
            "10.0.0.0/",
            "10.0.0.0/+8",
            "::/129",
            "10/8",
        ] {
            assert_eq!(Network::read(wrong), None, "{wrong}");
        }
    }

    #[test]
    fn only_trusted_proxies_are_believed() {
        let trusted = Networks::read("10.0.0.0/8, 127.0.0.1").expect("networks");
        for (peer, forwarded, client) in [
            // A stranger that claims to be another one.
            ("192.0.2.1", &["198.51.100.9"][..], "192.0.2.1"),
            ("10.0.0.1", &["198.51.100.9"], "198.51.100.9"),
            // The client wrote the left part itself.
            ("10.0.0.1", &["127.0.0.1, 198.51.100.9"], "198.51.100.9"),
            ("10.0.0.1", &["1.2.3.4", "198.51.100.9, 10.0.0.2"], "198.51.100.9"),
            ("10.0.0.1", &["198.51.100.9, nonsense"], "10.0.0.1"),
            ("10.0.0.1", &[], "10.0.0.1"),
            ("::ffff:10.0.0.1", &["2001:db8::1"], "2001:db8::1"),
        ] {
            let found = trusted.client(ip(peer), forwarded.iter().copied());
            assert_eq!(found, ip(client), "{peer} {forwarded:?}");
        }
        let nobody = Networks::default();
        assert_eq!(nobody.client(ip("127.0.0.1"), ["192.0.2.1"]), ip("127.0.0.1"));
    }
}
