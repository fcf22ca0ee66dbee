//! The published data load, hold what their sources print, and breakage is noticed.

mod broken;
mod defaults;
mod factors;
mod ipcc;
mod land;
mod materials;
mod rule_sets;
mod soils;

use crate::core::domain::{Gas, Status};
use crate::library::{book, figures_from_memory, load};

#[test]
fn the_data_load() {
    match load() {
        Ok(loaded) => assert_eq!(&loaded, book()),
        Err(problems) => panic!("{}", problems.join("\n")),
    }
}

/// The list of figures that nobody has read at their source. A change of the data shows here in review: put what the
/// test prints into the file.
#[test]
fn figures_from_memory_are_listed() {
    let listed: Vec<&str> = include_str!("../../../tests/snapshots/memory_figures.txt")
        .lines()
        .collect();
    let found = figures_from_memory();
    let new: Vec<&String> = found
        .iter()
        .filter(|figure| !listed.contains(&figure.as_str()))
        .collect();
    let gone: Vec<&&str> = listed
        .iter()
        .filter(|line| !found.iter().any(|figure| figure == *line))
        .collect();
    assert!(
        new.is_empty() && gone.is_empty(),
        "from memory now:\n{new:#?}\nno longer:\n{gone:#?}"
    );
    assert_eq!(listed, found, "the order differs");
}

/// The list is complete: what shows as from memory somewhere in the book is on it.
#[test]
fn whatever_is_from_memory_is_on_the_list() {
    let list = figures_from_memory().join("\n");
    for factor in book()
        .editions
        .values()
        .flat_map(|edition| edition.factors.values())
    {
        if factor.citation.status == Status::Memory {
            let row = factor.row().trim_end_matches("_2_2").trim_end_matches("_2_3");
            assert!(list.contains(row), "{} is missing", factor.id);
        }
    }
    for (edition, tables) in &book().soils {
        for (symbol, figure) in &tables.constants {
            let named = format!("{edition} soil constant {symbol} = ");
            assert_eq!(figure.status == Status::Memory, list.contains(&named), "{named}");
        }
    }
    for (symbol, figure) in &book().land {
        let named = format!("eu-2010-335 land carbon {symbol} = ");
        assert_eq!(figure.status == Status::Memory, list.contains(&named), "{named}");
    }
    for material in book().materials.values() {
        for (name, property) in &material.properties {
            let named = format!("material {} {name} = ", material.id);
            assert_eq!(
                property.figure.status == Status::Memory,
                list.contains(&named),
                "{named}"
            );
        }
    }
}

#[test]
fn every_figure_has_a_source() {
    let book = book();
    let factors = book
        .editions
        .values()
        .flat_map(|e| e.factors.values().map(|f| (&f.id, &f.citation)));
    let pathways = book
        .editions
        .values()
        .flat_map(|e| e.pathways.values().map(|p| (&p.id, &p.citation)));
    for (id, citation) in factors.chain(pathways) {
        assert!(
            citation.source.len() > 10 && citation.status != Status::Own,
            "{id}"
        );
    }
    for tables in book.soils.values() {
        assert!(tables.constants.values().all(|figure| figure.source.len() > 10));
        assert!(tables.residues.values().all(|row| row.citation.source.len() > 10));
    }
    let limits = book.rule_sets.values().flat_map(|set| set.limits.values());
    assert!(
        book.land
            .values()
            .chain(limits)
            .all(|figure| figure.source.len() > 10)
    );
    for material in book.materials.values() {
        assert!(
            material.properties.values().all(|p| p.figure.source.len() > 10),
            "{}",
            material.id
        );
    }
}

/// Directive (EU) 2018/2001, Annex V Part C point 4; IPCC AR6 WGI Ch. 7 Table 7.15.
#[test]
fn gas_weights_are_those_of_their_sources() {
    let weights = |id: &str| book().gwp_sets[id].weights();
    assert_eq!(weights("eu-2018-2001"), [1.0, 0.0, 1.0, 25.0, 25.0, 298.0, 1.0]);
    assert_eq!(weights("ar4"), [1.0, 0.0, 1.0, 25.0, 25.0, 298.0, 1.0]);
    assert_eq!(weights("ar5"), [1.0, 0.0, 1.0, 30.0, 28.0, 265.0, 1.0]);
    assert_eq!(weights("ar6"), [1.0, 0.0, 1.0, 29.8, 27.0, 273.0, 1.0]);
    assert_eq!(Gas::ALL.len(), 7);
}
