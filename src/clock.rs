//! Time and ids for the whole program. The only file that may ask the machine for the time or for chance.

use jiff::Timestamp;
use std::sync::Arc;
use std::sync::atomic::{AtomicI64, AtomicU64, Ordering};
use std::time::Duration;
use uuid::Uuid;

/// The calendar day of a moment, UTC.
pub fn day_of(at: Timestamp) -> jiff::civil::Date {
    jiff::tz::Offset::UTC.to_datetime(at).date()
}

/// Where the time and new ids come from. Cheap to clone; clones share the time.
#[derive(Clone, Debug)]
pub struct Clock(Source);

#[derive(Clone, Debug)]
enum Source {
    System,
    Fixed {
        millis: Arc<AtomicI64>,
        drawn: Arc<AtomicU64>,
        seed: u64,
    },
}

impl Clock {
    /// The machine's clock and its random source.
    pub fn system() -> Clock {
        Clock(Source::System)
    }

    /// A clock that stands at `at` until it is moved, with ids drawn from `seed`: the same run gives the same bytes.
    pub fn fixed(at: Timestamp, seed: u64) -> Clock {
        let millis = Arc::new(AtomicI64::new(at.as_millisecond()));
        Clock(Source::Fixed {
            millis,
            drawn: Arc::new(AtomicU64::new(0)),
            seed,
        })
    }

    /// Now, UTC.
    pub fn now(&self) -> Timestamp {
        Timestamp::from_millisecond(self.millis()).unwrap_or(Timestamp::UNIX_EPOCH)
    }

    /// Now in milliseconds since 1970 UTC, as records keep it.
    pub fn millis(&self) -> i64 {
        match &self.0 {
            #[allow(
                clippy::disallowed_methods,
                reason = "this file is where the machine is asked"
            )]
            Source::System => Timestamp::now().as_millisecond(),
            Source::Fixed { millis, .. } => millis.load(Ordering::Relaxed),
        }
    }

    /// Moves a fixed clock; the system's clock cannot be moved.
    pub fn advance(&self, by: Duration) {
        if let Source::Fixed { millis, .. } = &self.0 {
            millis.fetch_add(
                i64::try_from(by.as_millis()).unwrap_or(i64::MAX),
                Ordering::Relaxed,
            );
        }
    }

    /// A new public id: UUID version 7 (RFC 9562) of the present millisecond.
    pub fn id(&self) -> Uuid {
        let millis = u64::try_from(self.millis()).unwrap_or(0);
        uuid::Builder::from_unix_timestamp_millis(millis, &self.ten_bytes()).into_uuid()
    }

    /// A new secret of 256 bits. Only a fixed clock's can be foretold.
    pub fn secret(&self) -> [u8; 32] {
        let mut secret = [0; 32];
        for part in secret.chunks_mut(8) {
            let drawn = self.ten_bytes();
            part.copy_from_slice(&drawn[..8]);
        }
        secret
    }

    fn ten_bytes(&self) -> [u8; 10] {
        match &self.0 {
            #[allow(
                clippy::disallowed_methods,
                reason = "this file is where the machine is asked"
            )]
            Source::System => rand::random(),
            Source::Fixed { drawn, seed, .. } => {
                let turn = drawn.fetch_add(1, Ordering::Relaxed);
                let mut bytes = [0; 10];
                bytes[..8]
                    .copy_from_slice(&mixed(seed.wrapping_add(turn.wrapping_mul(GOLDEN))).to_le_bytes());
                bytes[8..].copy_from_slice(&mixed(seed.wrapping_sub(turn)).to_le_bytes()[..2]);
                bytes
            }
        }
    }
}

/// Measures how long something takes; for measurements alone, never for records.
#[derive(Clone, Copy, Debug)]
pub struct Stopwatch(std::time::Instant);

impl Stopwatch {
    /// Begins to measure.
    #[allow(
        clippy::disallowed_methods,
        reason = "this file is where the machine is asked"
    )]
    pub fn start() -> Stopwatch {
        Stopwatch(std::time::Instant::now())
    }

    /// Seconds since the start.
    pub fn seconds(&self) -> f64 {
        self.0.elapsed().as_secs_f64()
    }
}

const GOLDEN: u64 = 0x9e37_79b9_7f4a_7c15;

/// The finalizer of SplitMix64: spreads neighbouring numbers over all bits.
fn mixed(mut x: u64) -> u64 {
    x = (x ^ (x >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    x = (x ^ (x >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    x ^ (x >> 31)
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::collections::BTreeSet;

    fn noon() -> Timestamp {
        "2026-12-01T12:00:00Z".parse().expect("a time")
    }

    #[test]
    fn a_fixed_clock_repeats_itself() {
        let ids = |seed| {
            let clock = Clock::fixed(noon(), seed);
            (0..1_000).map(|_| clock.id()).collect::<Vec<_>>()
        };
        assert_eq!(ids(7), ids(7));
        assert_ne!(ids(7), ids(8));
        assert_eq!(ids(7).into_iter().collect::<BTreeSet<_>>().len(), 1_000);
    }

    #[test]
    fn ids_are_version_7_of_the_present_time() {
        for clock in [Clock::fixed(noon(), 1), Clock::system()] {
            let before = clock.millis();
            let id = clock.id();
            assert_eq!(id.get_version_num(), 7);
            let (seconds, nanos) = id.get_timestamp().expect("has a time").to_unix();
            let millis = i64::try_from(seconds * 1_000 + u64::from(nanos) / 1_000_000).expect("fits");
            assert!((before..=clock.millis()).contains(&millis));
        }
    }

    #[test]
    fn a_fixed_clock_moves_when_told() {
        let clock = Clock::fixed(noon(), 1);
        let other = clock.clone();
        clock.advance(Duration::from_secs(90));
        assert_eq!(other.now().to_string(), "2026-12-01T12:01:30Z");
    }
}
