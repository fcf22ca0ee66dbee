//! People: who belongs to the organisation, what they may do, how they sign in, and the tokens of their scripts. Whoever
//! signs in elsewhere comes in by [`sign_in_as`].

pub mod api;
mod change;
mod credentials;
mod error;
mod members;
pub mod pages;
pub mod password;
pub mod secrets;
mod sql;

pub use crate::app::who::Role;
pub use change::{Account, Change, change, change_password, disable, reset_password, set_theme};
pub use credentials::recognise::{recognise_session, recognise_token};
pub use credentials::sessions::{
    IDLE, LONGEST, Session, SignedIn, end_session, sessions, sign_in, sign_in_as, sign_out,
    sign_out_everywhere,
};
pub use credentials::tokens::{LONGEST_DAYS, NewToken, Token, TokenMade, make_token, revoke_token, tokens};
pub use error::{PeopleError, seconds};
pub use members::{
    Added, Audit, NewPerson, Person, add, anybody, by_sign_in_name, find, first_administrator, people,
};

use crate::store::StoreError;
use jiff::Timestamp;
use uuid::Uuid;

/// Every SQL text of people.
pub(crate) fn statements() -> Vec<&'static str> {
    [sql::STATEMENTS, credentials::sql::STATEMENTS].concat()
}

/// A name to sign in with as it is kept: small letters, nothing around it.
pub fn folded(name: &str) -> String {
    name.trim().to_lowercase()
}

fn time(millis: i64, table: &'static str, column: &'static str, row: i64) -> Result<Timestamp, StoreError> {
    Timestamp::from_millisecond(millis).map_err(|_| StoreError::Inconsistent { table, column, row })
}

fn public_id(text: &str, table: &'static str, row: i64) -> Result<Uuid, StoreError> {
    Uuid::parse_str(text).map_err(|_| StoreError::Inconsistent {
        table,
        column: "public_id",
        row,
    })
}
