//! Walks every chain from its first line: is each line what its hash says, does it name the hash of the one before, is none
//! missing, do the columns say what the document says, and does the chain end where its head says.

use super::sql::{self, ChainRow, Row};
use super::{FORMAT, Line};
use crate::core::documents::canonical;
use crate::store::{Connection, Store, StoreError};
use jiff::Timestamp;

/// Lines that are read at once.
const TOGETHER: i64 = 500;

/// The chain of an organisation, as it was found.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Chain {
    /// Public id of the organisation.
    pub organisation: String,
    /// Its name.
    pub name: String,
    /// Number of the last line that holds; 0 where there is none.
    pub number: i64,
    /// Hash of that line. Noted elsewhere, it shows later whether the file was set back.
    pub hash: String,
    /// The first link that does not hold.
    pub broken: Option<Broken>,
}

/// A link that does not hold.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Broken {
    /// Number of the line.
    pub number: i64,
    /// What is wrong with it, as a sentence.
    pub what: String,
}

/// Every chain, as it stands at one moment. What was taken off the end of a chain together with its head leaves no mark:
/// compare number and hash with ones noted elsewhere.
///
/// # Errors
/// When the database fails.
pub async fn verify(store: &Store) -> Result<Vec<Chain>, StoreError> {
    let mut moment = store.moment().await?;
    let mut chains = Vec::new();
    for row in sql::chains(&mut moment).await? {
        chains.push(chain(&mut moment, row).await?);
    }
    Ok(chains)
}

async fn chain(c: &mut Connection, row: ChainRow) -> Result<Chain, StoreError> {
    let mut chain = Chain {
        organisation: row.public_id,
        name: row.name,
        number: 0,
        hash: String::new(),
        broken: None,
    };
    loop {
        let rows = sql::rows(c, row.id, chain.number, TOGETHER).await?;
        if rows.is_empty() {
            break;
        }
        for line in &rows {
            if let Err(what) = link(line, chain.number + 1, &chain.hash) {
                // A gap is the fault of the line that is not there.
                let number = line.number.min(chain.number + 1);
                chain.broken = Some(Broken { number, what });
                return Ok(chain);
            }
            chain.number = line.number;
            chain.hash.clone_from(&line.hash);
        }
    }
    chain.broken = end(&chain, row.number.unwrap_or(0), row.hash.as_deref().unwrap_or(""));
    Ok(chain)
}

/// Holds a line against what must come next.
fn link(row: &Row, number: i64, previous: &str) -> Result<(), String> {
    if row.number != number {
        return Err(format!(
            "Line {number} is missing: after line {} comes line {}.",
            number - 1,
            row.number
        ));
    }
    if canonical::hash(row.document.as_bytes()) != row.hash {
        return Err("Its text was changed: it has another hash than the one kept with it.".to_owned());
    }
    let line: Line = serde_json::from_str(&row.document)
        .map_err(|_| "Its text is no line of an audit trail.".to_owned())?;
    if line.format != FORMAT {
        return Err(format!("Its format is \"{}\", not \"{FORMAT}\".", line.format));
    }
    if canonical::bytes(&line).ok().as_deref() != Some(row.document.as_bytes()) {
        return Err("Its text is not in canonical form.".to_owned());
    }
    if line.previous != previous {
        return Err(match number {
            1 => "It names a line before it, but is the first.".to_owned(),
            _ => format!(
                "It names another hash than line {} has: one of the two was changed, or they were swapped.",
                number - 1
            ),
        });
    }
    let columns = [
        ("number", line.number == row.number),
        (
            "at",
            Timestamp::from_millisecond(row.at).is_ok_and(|at| at == line.at),
        ),
        (
            "person",
            line.by.person.map(|id| id.to_string()).as_deref() == row.person.as_deref(),
        ),
        ("thing", line.thing == row.thing),
        ("thing_id", line.id == row.thing_id),
        ("did", line.did == row.did),
    ];
    match columns.iter().find(|(_, holds)| !holds) {
        Some((column, _)) => Err(format!(
            "Its column \"{column}\" says something else than its text."
        )),
        None => Ok(()),
    }
}

/// Holds the end of a chain against its head.
fn end(chain: &Chain, number: i64, hash: &str) -> Option<Broken> {
    let last = chain.number;
    if number > last {
        return Some(Broken {
            number: last + 1,
            what: format!(
                "The chain ends at line {last}, but its head names line {number}: lines were taken off its end."
            ),
        });
    }
    if number < last {
        return Some(Broken {
            number: number + 1,
            what: format!("The head of the chain names line {number}, but it goes on to line {last}."),
        });
    }
    (hash != chain.hash).then(|| Broken {
        number: last,
        what: "The head of the chain names another hash than its last line has.".to_owned(),
    })
}
