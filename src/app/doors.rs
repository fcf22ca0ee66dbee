//! What the running program remembers of those who come in: whom a session or token belongs to, for a second; how often
//! somebody tried to sign in; and how many passwords may be tried at once.

use super::who::Who;
use crate::clock::Clock;
use crate::store::OrganisationId;
use governor::clock::{Clock as Ticks, Reference};
use governor::middleware::NoOpMiddleware;
use governor::nanos::Nanos;
use governor::state::keyed::HashMapStateStore;
use governor::{Quota, RateLimiter};
use std::collections::{BTreeMap, HashMap};
use std::hash::Hash;
use std::num::NonZeroU32;
use std::ops::Add;
use std::sync::{Arc, Mutex, MutexGuard, PoisonError};
use std::time::Duration;
use tokio::sync::Semaphore;
use uuid::Uuid;

/// For how long what was read of a session or token is trusted, ms: another program may write the same file.
const TRUST: i64 = 1_000;
/// Sessions and tokens that are kept at hand.
const MOST_KNOWN: usize = 10_000;
/// Passwords that are tried at once: each takes 19 MiB and a thread.
const HASHED_AT_ONCE: usize = 2;
/// Names and addresses that are watched before those at rest are forgotten.
const MOST_WATCHED: usize = 10_000;

/// Somebody recognised by a session or token.
#[derive(Clone, Debug)]
pub(crate) struct Known {
    /// Whose records are meant.
    pub(crate) organisation: OrganisationId,
    /// Who they are; the address is that of the request that was asked first.
    pub(crate) who: Arc<Who>,
    /// Inner id of the session or token.
    pub(crate) credential: i64,
    /// When it stops being good, ms.
    pub(crate) expires_at: i64,
    /// When it was last seen used, ms; written to the file now and then.
    pub(crate) last_used_at: i64,
    /// They must choose a new password before anything else.
    pub(crate) must_change: bool,
    /// How they want pages: `light`, `dark` or empty.
    pub(crate) theme: String,
}

/// The memory of a running program of those who come in.
pub(crate) struct Doors {
    known: Mutex<Memory>,
    names: Limiter<String>,
    addresses: Limiter<String>,
    strangers: Limiter<String>,
    refused: Mutex<BTreeMap<Option<Uuid>, Refused>>,
    /// A place for each password that may be tried at once.
    pub(crate) hashing: Arc<Semaphore>,
}

#[derive(Default)]
struct Memory {
    found: HashMap<[u8; 32], (Arc<Known>, i64)>,
    /// Counts writes: what was read before a write is not remembered after it.
    writes: u64,
}

/// Refused sign-ins of a person since a line of the audit trail told of them.
#[derive(Clone, Copy, Default)]
struct Refused {
    times: u64,
    told_at: i64,
}

impl Doors {
    pub(crate) fn new(clock: &Clock) -> Doors {
        Doors {
            known: Mutex::default(),
            names: limiter(clock, 8, Duration::from_secs(30)),
            addresses: limiter(clock, 30, Duration::from_secs(5)),
            strangers: limiter(clock, 120, Duration::from_millis(500)),
            refused: Mutex::default(),
            hashing: Arc::new(Semaphore::new(HASHED_AT_ONCE)),
        }
    }

    fn memory(&self) -> MutexGuard<'_, Memory> {
        self.known.lock().unwrap_or_else(PoisonError::into_inner)
    }

    /// Whom a secret belongs to, if it was learnt within the last second; and the count to give to [`Doors::learn`].
    pub(crate) fn known(&self, hash: &[u8; 32], now: i64) -> Result<Arc<Known>, u64> {
        let memory = self.memory();
        match memory.found.get(hash) {
            Some((known, since))
                if (0..TRUST).contains(&now.saturating_sub(*since)) && now < known.expires_at =>
            {
                Ok(known.clone())
            }
            _ => Err(memory.writes),
        }
    }

    /// Remembers whom a secret belongs to, unless something was written since it was read.
    pub(crate) fn learn(&self, hash: [u8; 32], known: Arc<Known>, now: i64, writes: u64) {
        let mut memory = self.memory();
        if memory.writes == writes {
            if memory.found.len() >= MOST_KNOWN {
                memory.found.clear();
            }
            memory.found.insert(hash, (known, now));
        }
    }

    /// Forgets everybody: something was written about people, and it holds at once.
    pub(crate) fn forget(&self) {
        let mut memory = self.memory();
        memory.writes += 1;
        memory.found.clear();
    }

    /// May somebody try to sign in under a name, from an address? If not, how long to wait.
    pub(crate) fn may_try(&self, name: &str, address: &str) -> Result<(), Duration> {
        self.addresses.check(&address.to_owned())?;
        self.names.check(&name.to_owned())
    }

    /// May somebody with an unknown token come again from this address? If not, how long to wait.
    pub(crate) fn may_come(&self, address: &str) -> Result<(), Duration> {
        self.strangers.check(&address.to_owned())
    }

    /// Counts a refused sign-in of a person, or of an unknown name; how many to tell of now, if any: a line a minute.
    pub(crate) fn refused(&self, person: Option<Uuid>, now: i64) -> Option<u64> {
        let mut all = self.refused.lock().unwrap_or_else(PoisonError::into_inner);
        let refused = all.entry(person).or_default();
        refused.times += 1;
        if refused.told_at != 0 && now.saturating_sub(refused.told_at) < 60_000 {
            return None;
        }
        refused.told_at = now.max(1);
        Some(std::mem::take(&mut refused.times))
    }
}

/// How often each key may come.
struct Limiter<K: Hash + Eq + Clone>(RateLimiter<K, HashMapStateStore<K>, OurTicks, NoOpMiddleware<Tick>>);

fn limiter<K: Hash + Eq + Clone>(clock: &Clock, burst: u32, then_one_in: Duration) -> Limiter<K> {
    let burst = NonZeroU32::new(burst).unwrap_or(NonZeroU32::MIN);
    let quota = Quota::with_period(then_one_in)
        .unwrap_or(Quota::per_second(NonZeroU32::MIN))
        .allow_burst(burst);
    let ticks = OurTicks(clock.clone());
    Limiter(RateLimiter::new(quota, HashMapStateStore::default(), ticks))
}

impl<K: Hash + Eq + Clone> Limiter<K> {
    fn check(&self, key: &K) -> Result<(), Duration> {
        if self.0.len() > MOST_WATCHED {
            self.0.retain_recent();
        }
        self.0
            .check_key(key)
            .map_err(|early| early.wait_time_from(self.0.clock().now()))
    }
}

/// Our clock as the rate limiter reads it.
#[derive(Clone)]
struct OurTicks(Clock);

/// A time of our clock, ns since 1970.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
struct Tick(u64);

impl Ticks for OurTicks {
    type Instant = Tick;

    fn now(&self) -> Tick {
        Tick(
            u64::try_from(self.0.millis())
                .unwrap_or(0)
                .saturating_mul(1_000_000),
        )
    }
}

impl Add<Nanos> for Tick {
    type Output = Tick;

    fn add(self, other: Nanos) -> Tick {
        Tick(self.0.saturating_add(other.as_u64()))
    }
}

impl Reference for Tick {
    fn duration_since(&self, earlier: Tick) -> Nanos {
        self.0.saturating_sub(earlier.0).into()
    }

    fn saturating_sub(&self, duration: Nanos) -> Tick {
        Tick(self.0.checked_sub(duration.as_u64()).unwrap_or(self.0))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn clock() -> Clock {
        Clock::fixed("2026-12-01T12:00:00Z".parse().expect("a time"), 1)
    }

    #[test]
    fn a_name_may_be_tried_so_often_and_again_after_a_while() {
        let clock = clock();
        let doors = Doors::new(&clock);
        for turn in 0..8 {
            assert_eq!(doors.may_try("marsh", "192.0.2.1"), Ok(()), "{turn}");
        }
        let wait = doors.may_try("marsh", "192.0.2.1").expect_err("too often");
        assert!(
            wait > Duration::ZERO && wait <= Duration::from_secs(30),
            "{wait:?}"
        );
        assert_eq!(doors.may_try("other", "192.0.2.1"), Ok(()), "another name may");
        clock.advance(wait);
        assert_eq!(doors.may_try("marsh", "192.0.2.2"), Ok(()));
    }

    #[test]
    fn an_address_may_try_many_names_only_so_often() {
        let doors = Doors::new(&clock());
        for turn in 0..30 {
            assert_eq!(doors.may_try(&turn.to_string(), "192.0.2.1"), Ok(()));
        }
        assert!(doors.may_try("another", "192.0.2.1").is_err());
        assert_eq!(doors.may_try("another", "192.0.2.2"), Ok(()));
    }

    #[test]
    fn refusals_are_told_once_a_minute_with_their_count() {
        let doors = Doors::new(&clock());
        let told: Vec<_> = (0..5).map(|n| doors.refused(None, 1_000 + n)).collect();
        assert_eq!(told, [Some(1), None, None, None, None]);
        assert_eq!(doors.refused(None, 61_000), Some(5));
        assert_eq!(doors.refused(Some(Uuid::from_u128(1)), 61_000), Some(1));
    }
}
