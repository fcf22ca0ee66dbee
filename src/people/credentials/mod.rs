//! What people come in with: sessions of browsers, tokens of scripts. A session is our own rather than a library's, so that
//! it begins and ends in the transaction of its line in the audit trail, and is read together with whom it belongs to.

pub(super) mod recognise;
pub(super) mod sessions;
pub(super) mod sql;
pub(super) mod tokens;
