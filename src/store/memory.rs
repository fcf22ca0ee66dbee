//! Immutable bytes kept in memory, and which revision of a pathway is current, so that a hot read need not ask the
//! file. Assessments are found by the hash of their document and the rule set: they never go stale, only old.

use super::OrganisationId;
use std::collections::{BTreeMap, HashMap};
use std::sync::{Arc, Mutex, MutexGuard, PoisonError};
use uuid::Uuid;

/// Bytes of assessments that are kept at hand.
const MOST_BYTES: usize = 64 << 20;
/// Pathways whose current revision is kept at hand.
const MOST_HEADS: usize = 50_000;
/// For how long the current revision is trusted, ms: another program may write the same file.
const TRUST: i64 = 1_000;

/// Which revision of a pathway is current.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(crate) struct Head {
    pub(crate) revision: i64,
    pub(crate) hash: String,
    pub(crate) rule_set: String,
}

/// An assessment as bytes with their hash.
#[derive(Clone, Debug)]
pub(crate) struct Kept {
    pub(crate) hash: String,
    pub(crate) bytes: Arc<[u8]>,
}

/// The memory of a running program.
#[derive(Default)]
pub(crate) struct Memory(Mutex<Inner>);

#[derive(Default)]
struct Inner {
    heads: HashMap<(OrganisationId, Uuid), (Arc<Head>, i64)>,
    /// Counts writes: what was read before a write is not remembered after it.
    writes: u64,
    kept: HashMap<String, (Kept, u64)>,
    /// Keys of `kept` from the one used longest ago.
    order: BTreeMap<u64, String>,
    turn: u64,
    bytes: usize,
}

impl Memory {
    fn inner(&self) -> MutexGuard<'_, Inner> {
        self.0.lock().unwrap_or_else(PoisonError::into_inner)
    }

    /// The current revision, if it was learnt within the last second; and the count to give to [`Memory::learn`].
    pub(crate) fn head(&self, who: OrganisationId, id: Uuid, now: i64) -> Result<Arc<Head>, u64> {
        let inner = self.inner();
        match inner.heads.get(&(who, id)) {
            Some((head, since)) if (0..TRUST).contains(&now.saturating_sub(*since)) => Ok(head.clone()),
            _ => Err(inner.writes),
        }
    }

    /// Remembers a current revision that was read from the file, unless something was written since.
    pub(crate) fn learn(&self, who: OrganisationId, id: Uuid, head: Arc<Head>, now: i64, writes: u64) {
        let mut inner = self.inner();
        if inner.writes == writes {
            inner.remember(who, id, head, now);
        }
    }

    /// Remembers a current revision that has just become durable.
    pub(crate) fn wrote(&self, who: OrganisationId, id: Uuid, head: Head, now: i64) {
        let mut inner = self.inner();
        inner.writes += 1;
        inner.remember(who, id, Arc::new(head), now);
    }

    /// Forgets every current revision: many have changed.
    pub(crate) fn forget_heads(&self) {
        let mut inner = self.inner();
        inner.writes += 1;
        inner.heads.clear();
    }

    /// The assessment of a document under a rule set, if it is at hand.
    pub(crate) fn assessment(&self, document: &str, rule_set: &str) -> Option<Kept> {
        let mut inner = self.inner();
        let turn = inner.next_turn();
        let key = key(document, rule_set);
        let (kept, last) = inner.kept.get_mut(&key)?;
        let (kept, last) = (kept.clone(), std::mem::replace(last, turn));
        inner.order.remove(&last);
        inner.order.insert(turn, key);
        Some(kept)
    }

    /// Keeps an assessment at hand; the ones used longest ago give way.
    pub(crate) fn keep(&self, document: &str, rule_set: &str, kept: Kept) {
        let size = kept.bytes.len();
        if size > MOST_BYTES / 4 {
            return;
        }
        let mut inner = self.inner();
        let turn = inner.next_turn();
        let key = key(document, rule_set);
        inner.drop_kept(&key);
        inner.bytes += size;
        inner.kept.insert(key.clone(), (kept, turn));
        inner.order.insert(turn, key);
        while inner.bytes > MOST_BYTES {
            let Some((_, oldest)) = inner.order.pop_first() else {
                break;
            };
            inner.drop_kept(&oldest);
        }
    }
}

impl Inner {
    fn remember(&mut self, who: OrganisationId, id: Uuid, head: Arc<Head>, now: i64) {
        if self.heads.len() >= MOST_HEADS {
            self.heads.clear();
        }
        self.heads.insert((who, id), (head, now));
    }

    fn next_turn(&mut self) -> u64 {
        self.turn += 1;
        self.turn
    }

    fn drop_kept(&mut self, key: &str) {
        if let Some((kept, turn)) = self.kept.remove(key) {
            self.bytes -= kept.bytes.len();
            self.order.remove(&turn);
        }
    }
}

fn key(document: &str, rule_set: &str) -> String {
    format!("{document} {rule_set}")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn kept(size: usize) -> Kept {
        Kept {
            hash: "h".into(),
            bytes: vec![0; size].into(),
        }
    }

    #[test]
    fn the_oldest_bytes_give_way() {
        let memory = Memory::default();
        let big = MOST_BYTES / 4;
        for name in ["a", "b", "c", "d"] {
            memory.keep(name, "r", kept(big));
        }
        assert!(memory.assessment("a", "r").is_some(), "used last, so it stays");
        memory.keep("e", "r", kept(big));
        assert!(memory.assessment("b", "r").is_none());
        assert!(memory.assessment("a", "r").is_some());
        memory.keep("a", "r", kept(1));
        assert_eq!(memory.inner().bytes, 3 * big + 1);
        memory.keep("f", "r", kept(big + 1));
        assert!(memory.assessment("f", "r").is_none(), "too large to keep");
    }

    #[test]
    fn what_was_read_before_a_write_is_not_learnt_after_it() {
        let memory = Memory::default();
        let (who, id) = (OrganisationId(1), Uuid::nil());
        let head = |revision| Head {
            revision,
            hash: "h".into(),
            rule_set: "r".into(),
        };
        let writes = memory.head(who, id, 0).expect_err("empty");
        memory.wrote(who, id, head(2), 0);
        memory.learn(who, id, Arc::new(head(1)), 0, writes);
        assert_eq!(memory.head(who, id, TRUST - 1).expect("fresh").revision, 2);
        assert!(memory.head(who, id, TRUST).is_err(), "too old to be trusted");
        assert!(memory.head(OrganisationId(2), id, 0).is_err());
    }
}
