//! Looking up a factor by words: editions in their order, best matches first, a short list.

use crate::core::domain::factor::Use;
use crate::core::domain::{Book, Factor};

/// Most candidates shown.
pub const MOST: usize = 12;

/// One candidate.
#[derive(Clone, Debug, PartialEq)]
pub struct Candidate {
    /// Full id.
    pub id: String,
    /// Name on pages.
    pub name: String,
    /// What one unit counts.
    pub per: String,
    /// True if nobody has read the figure at its source.
    pub memory: bool,
}

/// What a search found.
#[derive(Clone, Debug, PartialEq)]
pub struct Found {
    /// The words that were looked for.
    pub words: String,
    /// The best matches.
    pub candidates: Vec<Candidate>,
    /// How many more there are.
    pub more: usize,
}

/// Factors with all the words in name, id or group; with none, the words by themselves in order.
pub fn find(book: &Book, text: &str) -> Found {
    // Of several factors joined by +, the last is the one being typed.
    let words = text.rsplit('+').next().unwrap_or_default().trim().to_lowercase();
    let parts: Vec<&str> = words
        .split(|c: char| !c.is_alphanumeric())
        .filter(|part| !part.is_empty())
        .collect();
    let mut hits: Vec<(usize, &Factor)> = book
        .editions
        .values()
        .flat_map(|edition| edition.factors.values())
        .filter(|factor| !matches!(factor.usage, Use::Refused(_) | Use::HeatingValueOnly))
        .filter_map(|factor| Some((weight(factor, &parts)?, factor)))
        .collect();
    hits.sort_by(|(a, one), (b, other)| a.cmp(b).then_with(|| one.name.cmp(&other.name)));
    let more = hits.len().saturating_sub(MOST);
    let candidates = hits
        .into_iter()
        .take(MOST)
        .map(|(_, factor)| Candidate {
            id: factor.id.clone(),
            name: factor.name.clone(),
            per: factor.per.clone(),
            memory: factor.citation.status == crate::core::domain::Status::Memory,
        })
        .collect();
    Found {
        words,
        candidates,
        more,
    }
}

/// Smaller is better; none where a word is missing. Words of the name weigh less than those found elsewhere only.
fn weight(factor: &Factor, parts: &[&str]) -> Option<usize> {
    if parts.is_empty() {
        return None;
    }
    let name = factor.name.to_lowercase();
    let all = format!(
        "{name} {} {}",
        factor.id.to_lowercase(),
        factor.group.to_lowercase()
    );
    let mut weight = 0;
    for part in parts {
        if !all.contains(part) {
            return None;
        }
        weight += match name.find(part) {
            Some(0) => 0,
            Some(_) => 1,
            None => 3,
        };
    }
    Some(weight)
}

/// The text of a field with a candidate chosen: it takes the place of what was being typed.
pub fn chosen(text: &str, id: &str) -> String {
    match text.rsplit_once('+') {
        Some((before, _)) => format!("{} + {id}", before.trim()),
        None => id.to_owned(),
    }
}
