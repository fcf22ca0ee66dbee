//! Published data, compiled into the program: editions of factors, materials, rule sets, gas weights and soil tables.
//! Each figure carries its source and whether anybody has read it there. The tables are the files beside this one.

mod checks;
mod editions;
mod elsewhere;
mod eu_defaults;
mod eu_electricity;
mod eu_factors;
mod eu_soils;
mod ipcc_fuels;
mod land;
mod materials;
mod reading;
mod rules;
mod soils;
mod statements;
#[cfg(test)]
mod tests;

use crate::core::domain::Book;
use crate::core::statement::items::Items;
pub use elsewhere::Elsewhere;
use reading::Reading;
use std::sync::LazyLock;

/// The published data and the list of what is from memory.
struct Loaded {
    book: Book,
    elsewhere: Vec<Elsewhere>,
    statement_items: Items,
    memory: Vec<String>,
}

#[expect(
    clippy::panic,
    reason = "the data are compiled in and a test loads them: no input can lead here"
)]
static LOADED: LazyLock<Loaded> = LazyLock::new(|| match read() {
    Ok(loaded) => loaded,
    Err(problems) => panic!("the published data are broken:\n{}", problems.join("\n")),
});

/// The published data. The first call reads and checks them.
pub fn book() -> &'static Book {
    &LOADED.book
}

/// Limits of other jurisdictions that were read and that no rule set here follows, with the reason.
pub fn limits_elsewhere() -> &'static [Elsewhere] {
    &LOADED.elsewhere
}

/// The items of a statement and the laws that ask for them.
pub fn statement_items() -> &'static Items {
    &LOADED.statement_items
}

/// Every figure that nobody has read at its source, with that source, in alphabetical order. Pages say so too.
pub fn figures_from_memory() -> Vec<String> {
    LOADED.memory.clone()
}

/// Reads and checks the published data anew.
///
/// # Errors
/// Everything that is wrong with the tables: a blank or repeated id, a missing source, an unknown status or unit, a sum
/// or printed saving that does not follow, a reference to something that is not there.
pub fn load() -> Result<Book, Vec<String>> {
    read().map(|loaded| loaded.book)
}

fn read() -> Result<Loaded, Vec<String>> {
    let mut reading = Reading::default();
    let editions = editions::read(&mut reading);
    let materials = materials::read(&mut reading, editions.get("eu-2022-996"));
    let mut rule_sets = rules::rule_sets(&mut reading);
    land::limits(&mut reading, &mut rule_sets);
    let book = Book {
        materials,
        rule_sets,
        gwp_sets: rules::gwp_sets(&mut reading),
        soils: soils::read(&mut reading),
        land: land::carbon(&mut reading),
        editions,
    };
    let elsewhere = elsewhere::read(&mut reading);
    let statement_items = statements::read(&mut reading);
    checks::run(&mut reading, &book);
    let Reading { problems, mut memory } = reading;
    if !problems.is_empty() {
        return Err(problems);
    }
    memory.sort();
    memory.dedup();
    Ok(Loaded {
        book,
        elsewhere,
        statement_items,
        memory,
    })
}
