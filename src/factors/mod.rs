//! Published factors: editions and their rows, materials, rule sets and models, as documents for reading.

pub mod api;
mod documents;
mod models;
pub mod pages;

pub use documents::{
    EditionDocument, EditionLine, FactorDocument, GroupLine, PathwayDefaultDocument, Split, Usage,
};
pub use models::{ModelDocument, ParameterDocument, SpanDocument, TakesDocument, models};
pub use pages::{ShowFactor, UseRow};

use crate::core::domain::{Book, Factor};

/// The rows that carry every word of `search`, in id, name, group, unit or note, and stand in `group`, if one is asked for.
/// In the order of their ids.
pub fn search<'b>(
    book: &'b Book,
    edition: Option<&'b str>,
    search: Option<&str>,
    group: Option<&'b str>,
) -> impl Iterator<Item = &'b Factor> {
    let words: Vec<String> = search
        .unwrap_or("")
        .split_whitespace()
        .map(str::to_lowercase)
        .collect();
    book.editions
        .values()
        .filter(move |candidate| edition.is_none_or(|id| id == candidate.id))
        .flat_map(|edition| edition.factors.values())
        .filter(move |factor| group.is_none_or(|group| factor.group == group))
        .filter(move |factor| {
            let note = factor.note.as_deref().unwrap_or("");
            let text = [&factor.id, &factor.name, &factor.group, &factor.per, note]
                .join("\n")
                .to_lowercase();
            words.iter().all(|word| text.contains(word.as_str()))
        })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::library;

    #[test]
    fn every_word_of_a_search_must_be_there() {
        let book = library::book();
        let found: Vec<&str> = search(book, None, Some("ammonium NITRATE"), None)
            .map(|factor| factor.id.as_str())
            .collect();
        assert!(found.contains(&"eu-2022-996/fert_n_an"), "{found:?}");
        assert!(search(book, None, Some("ammonium zzz"), None).next().is_none());
    }

    #[test]
    fn an_edition_and_a_group_narrow_the_search() {
        let book = library::book();
        let all = search(book, None, None, None).count();
        let by_edition: usize = book
            .editions
            .keys()
            .map(|edition| search(book, Some(edition), None, None).count())
            .sum();
        assert_eq!(all, by_edition);
        let factor = book.factor("eu-2022-996/fert_n_an").expect("published");
        let group = search(book, Some("eu-2022-996"), None, Some(&factor.group));
        assert!(
            group
                .map(|found| &found.group)
                .all(|group| *group == factor.group)
        );
    }
}
