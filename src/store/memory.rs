//! Immutable bytes kept in memory, and which revision of a pathway is current, so that a hot read need not ask the
//! file. Assessments are found by the hash of their document, the rule set, and the hashes of what else they rest on: they
//! never go stale, only old.

use super::OrganisationId;
use crate::app::Basis;
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
    /// Hash of the reasons given for its warnings; empty where there are none.
    pub(crate) reasons: String,
    /// True if the pathway is hidden from lists.
    pub(crate) archived: bool,
}

/// What makes the bytes of an assessment: the same key, the same bytes.
#[derive(Clone, Copy, Debug)]
pub(crate) struct AssessmentKey<'k> {
    /// Hash of the document.
    pub(crate) document: &'k str,
    /// The rule set asked for.
    pub(crate) rule_set: &'k str,
    /// Hash of the basis.
    pub(crate) basis: &'k str,
    /// Hash of the reasons in its findings; empty for none.
    pub(crate) reasons: &'k str,
}

/// Bytes with their hash: an assessment, or a page of one.
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
    bases: HashMap<OrganisationId, (Arc<Basis>, i64)>,
    /// Counts writes to what bases are made of.
    basis_writes: u64,
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

    /// The basis of an organisation, if it was learnt within the last second. Else an older one, to be compared with the
    /// file, and the count to give to [`Memory::learn_basis`].
    pub(crate) fn basis(
        &self,
        who: OrganisationId,
        now: i64,
    ) -> Result<Arc<Basis>, (Option<Arc<Basis>>, u64)> {
        let inner = self.inner();
        match inner.bases.get(&who) {
            Some((basis, since)) if (0..TRUST).contains(&now.saturating_sub(*since)) => Ok(basis.clone()),
            older => Err((older.map(|(basis, _)| basis.clone()), inner.basis_writes)),
        }
    }

    /// Remembers a basis that was read from the file, unless one was written since.
    pub(crate) fn learn_basis(&self, who: OrganisationId, basis: Arc<Basis>, now: i64, writes: u64) {
        let mut inner = self.inner();
        if inner.basis_writes == writes {
            inner.bases.insert(who, (basis, now));
        }
    }

    /// Forgets the basis of an organisation: it has changed.
    pub(crate) fn forget_basis(&self, who: OrganisationId) {
        let mut inner = self.inner();
        inner.basis_writes += 1;
        inner.bases.remove(&who);
    }

    /// An assessment, if it is at hand.
    pub(crate) fn assessment(&self, key: AssessmentKey<'_>) -> Option<Kept> {
        self.kept(text_of(key))
    }

    /// Keeps an assessment at hand; the ones used longest ago give way.
    pub(crate) fn keep(&self, key: AssessmentKey<'_>, kept: Kept) {
        self.keep_under(text_of(key), kept);
    }

    /// A rendered page, if it is at hand. The key names all that the page shows.
    pub(crate) fn page(&self, key: &str) -> Option<Kept> {
        self.kept(page_key(key))
    }

    /// Keeps a rendered page at hand.
    pub(crate) fn keep_page(&self, key: &str, kept: Kept) {
        self.keep_under(page_key(key), kept);
    }

    fn kept(&self, key: String) -> Option<Kept> {
        let mut inner = self.inner();
        let turn = inner.next_turn();
        let (kept, last) = inner.kept.get_mut(&key)?;
        let (kept, last) = (kept.clone(), std::mem::replace(last, turn));
        inner.order.remove(&last);
        inner.order.insert(turn, key);
        Some(kept)
    }

    fn keep_under(&self, key: String, kept: Kept) {
        let size = kept.bytes.len();
        if size > MOST_BYTES / 4 {
            return;
        }
        let mut inner = self.inner();
        let turn = inner.next_turn();
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

fn text_of(key: AssessmentKey<'_>) -> String {
    let AssessmentKey {
        document,
        rule_set,
        basis,
        reasons,
    } = key;
    // Hashes hold no space, and the rule set comes last.
    format!("{document} {basis} {reasons} {rule_set}")
}

/// Hashes hold no such word, so that a page is never taken for an assessment.
fn page_key(key: &str) -> String {
    format!("page {key}")
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

    fn key(document: &str) -> AssessmentKey<'_> {
        AssessmentKey {
            document,
            rule_set: "r",
            basis: "",
            reasons: "",
        }
    }

    #[test]
    fn what_else_it_rests_on_tells_assessments_apart() {
        let memory = Memory::default();
        memory.keep(key("a"), kept(1));
        for other in [
            AssessmentKey {
                basis: "b",
                ..key("a")
            },
            AssessmentKey {
                reasons: "c",
                ..key("a")
            },
            AssessmentKey {
                rule_set: "s",
                ..key("a")
            },
        ] {
            assert!(memory.assessment(other).is_none(), "{other:?}");
        }
        assert!(memory.assessment(key("a")).is_some());
    }

    #[test]
    fn the_oldest_bytes_give_way() {
        let memory = Memory::default();
        let big = MOST_BYTES / 4;
        for name in ["a", "b", "c", "d"] {
            memory.keep(key(name), kept(big));
        }
        assert!(memory.assessment(key("a")).is_some(), "used last, so it stays");
        memory.keep(key("e"), kept(big));
        assert!(memory.assessment(key("b")).is_none());
        assert!(memory.assessment(key("a")).is_some());
        memory.keep(key("a"), kept(1));
        assert_eq!(memory.inner().bytes, 3 * big + 1);
        memory.keep(key("f"), kept(big + 1));
        assert!(memory.assessment(key("f")).is_none(), "too large to keep");
    }

    #[test]
    fn what_was_read_before_a_write_is_not_learnt_after_it() {
        let memory = Memory::default();
        let (who, id) = (OrganisationId(1), Uuid::nil());
        let head = |revision| Head {
            revision,
            hash: "h".into(),
            rule_set: "r".into(),
            reasons: String::new(),
            archived: false,
        };
        let writes = memory.head(who, id, 0).expect_err("empty");
        memory.wrote(who, id, head(2), 0);
        memory.learn(who, id, Arc::new(head(1)), 0, writes);
        assert_eq!(memory.head(who, id, TRUST - 1).expect("fresh").revision, 2);
        assert!(memory.head(who, id, TRUST).is_err(), "too old to be trusted");
        assert!(memory.head(OrganisationId(2), id, 0).is_err());
    }
}
