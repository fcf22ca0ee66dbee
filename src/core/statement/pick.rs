//! Picks the published data that a pathway's figures rest on, and makes a book of them again: the file of a statement
//! must lead to the same assessment with nothing else at hand.

use super::build::Refused;
use crate::core::checks::own_factors::compared_rows;
use crate::core::checks::settings::Settings;
use crate::core::documents::statement::Data;
use crate::core::documents::statement::data::{
    ConstantUsed, DefaultUsed, EditionUsed, FactorUsed, GwpSetUsed, MaterialUsed, ResidueUsed,
};
use crate::core::documents::{Assessment, Pathway, canonical};
use crate::core::domain::book::{ResidueRow, SoilTables};
use crate::core::domain::factor::Use;
use crate::core::domain::{Book, Citation, Edition};
use crate::core::engine::{assess, resolve};
use crate::core::evaluate::{Options, evaluate};
use crate::core::models::digester::METHANE;
use serde::Serialize;
use serde_json::Value;
use std::collections::{BTreeMap, BTreeSet};

/// The data behind an assessment of a pathway.
///
/// # Errors
/// When the assessment is not what the pathway gives now, or the data do not lead to it.
pub fn pick(
    pathway: &Pathway,
    assessment: &Assessment,
    book: &Book,
    settings: &Settings,
) -> Result<Data, Refused> {
    let rules = book.rule_sets.get(&assessment.rule_set).ok_or(Refused::RuleSet)?;
    let weights = book.gwp_sets.get(&rules.gwp_set).ok_or(Refused::RuleSet)?;
    let whole = again(pathway, rules.id.as_str(), book, settings)?;
    if whole != *assessment {
        return Err(Refused::Stale);
    }
    let mut data = Data {
        rule_set: rules.clone(),
        gwp_set: GwpSetUsed::of(weights),
        check_settings: given(settings)?,
        editions: Vec::new(),
        factors: Vec::new(),
        default_values: Vec::new(),
        materials: Vec::new(),
        constants: Vec::new(),
        residues: Vec::new(),
    };
    named(pathway, book, &mut data);
    tables(book, &mut data);
    let leads = |data: &Data| {
        let found = self::book(data)
            .ok()
            .and_then(|book| again(pathway, &rules.id, &book, settings).ok());
        found.as_ref() == Some(assessment)
    };
    data.editions = editions(&data, book);
    if !leads(&data) {
        // Something looked further than the names in the pathway: take all there is.
        everything(book, &mut data);
        data.editions = editions(&data, book);
        if !leads(&data) {
            return Err(Refused::Incomplete);
        }
    }
    thin(pathway, assessment, &mut data);
    data.editions = editions(&data, book);
    match leads(&data) {
        true => Ok(data),
        false => Err(Refused::Incomplete),
    }
}

/// The assessment of a pathway, without reasons.
///
/// # Errors
/// When it has none any more.
pub fn again(
    pathway: &Pathway,
    rule_set: &str,
    book: &Book,
    settings: &Settings,
) -> Result<Assessment, Refused> {
    let options = Options {
        rule_set: Some(rule_set),
        settings,
        ..Options::default()
    };
    evaluate(pathway, book, options).map_err(Refused::Pathway)
}

fn given(settings: &Settings) -> Result<Option<serde_json::Map<String, Value>>, Refused> {
    if settings == Settings::standard() {
        return Ok(None);
    }
    match serde_json::to_value(settings) {
        Ok(Value::Object(map)) => Ok(Some(map)),
        _ => Err(Refused::Incomplete),
    }
}

/// The settings of the checks that a statement was made with.
///
/// # Errors
/// In words, where they are none.
pub fn settings(data: &Data) -> Result<Settings, String> {
    match &data.check_settings {
        None => Ok(Settings::standard().clone()),
        Some(map) => serde_json::from_value(Value::Object(map.clone())).map_err(|error| error.to_string()),
    }
}

/// Every factor, published pathway and material that the document names, and what belongs to them.
fn named(pathway: &Pathway, book: &Book, data: &mut Data) {
    let mut words = BTreeSet::new();
    collect(&serde_json::to_value(pathway).unwrap_or_default(), &mut words);
    if words.contains("digester") {
        words.insert(METHANE.to_owned());
    }
    let mut factors: BTreeMap<String, FactorUsed> = BTreeMap::new();
    let mut add = |word: &str| -> Option<String> {
        let factor = book.factor(word)?;
        let used = factors
            .entry(factor.id.clone())
            .or_insert_with(|| FactorUsed::of(factor));
        if factor.id != word && !used.also.iter().any(|also| also == word) {
            used.also.push(word.to_owned());
        }
        match &factor.usage {
            Use::Haul(vehicle) => vehicle.fuel.clone(),
            _ => None,
        }
    };
    for word in &words {
        if let Some(fuel) = add(word) {
            add(&fuel);
        }
    }
    // Own factors are held against rows of the standard edition.
    let standard = data.rule_set.standard_factors.as_deref().unwrap_or_default();
    for factor in compared_rows(pathway, book, standard) {
        factors.entry(factor.id.clone()).or_insert_with(|| FactorUsed {
            for_comparison: true,
            ..FactorUsed::of(factor)
        });
    }
    data.factors = factors.into_values().collect();
    let mut rows: BTreeMap<String, DefaultUsed> = BTreeMap::new();
    let comparable = data
        .rule_set
        .default_values
        .as_ref()
        .and_then(|id| book.editions.get(id));
    for row in comparable
        .into_iter()
        .flat_map(|edition| edition.pathways.values())
    {
        if row.feedstock_materials.contains(&pathway.feedstock) {
            rows.insert(
                row.id.clone(),
                DefaultUsed {
                    for_comparison: true,
                    ..DefaultUsed::of(row)
                },
            );
        }
    }
    for row in words.iter().filter_map(|word| book.pathway_default(word)) {
        rows.insert(row.id.clone(), DefaultUsed::of(row));
    }
    data.default_values = rows.into_values().collect();
    let materials = words.iter().filter_map(|word| book.materials.get(word));
    data.materials = materials.map(MaterialUsed::of).collect();
}

/// Every text and every field name of a document.
fn collect(value: &Value, words: &mut BTreeSet<String>) {
    match value {
        Value::String(text) => {
            words.insert(text.clone());
        }
        Value::Array(items) => items.iter().for_each(|item| collect(item, words)),
        Value::Object(map) => {
            for (name, item) in map {
                words.insert(name.clone());
                collect(item, words);
            }
        }
        _ => {}
    }
}

/// Tables of models.
fn tables(book: &Book, data: &mut Data) {
    for (edition, soil) in &book.soils {
        let table = format!("soils/{edition}");
        data.constants.extend(
            soil.constants
                .iter()
                .map(|(symbol, figure)| ConstantUsed::of(&table, symbol, figure)),
        );
        data.residues.extend(
            soil.residues
                .iter()
                .map(|(crop, row)| residue(edition, crop, row)),
        );
    }
    data.constants.extend(
        book.land
            .iter()
            .map(|(symbol, figure)| ConstantUsed::of("land", symbol, figure)),
    );
    data.constants
        .sort_by(|a, b| (&a.table, &a.symbol).cmp(&(&b.table, &b.symbol)));
}

/// A row of residues as the file carries it.
pub fn residue(edition: &str, crop: &str, row: &ResidueRow) -> ResidueUsed {
    ResidueUsed {
        edition: edition.to_owned(),
        crop: crop.to_owned(),
        printed: row.crop.clone(),
        figures: row.figures.clone(),
        source: row.citation.source.clone(),
        status: row.citation.status,
    }
}

fn everything(book: &Book, data: &mut Data) {
    let mut factors: BTreeMap<String, FactorUsed> = data
        .factors
        .drain(..)
        .map(|factor| (factor.id.clone(), factor))
        .collect();
    for factor in book
        .editions
        .values()
        .flat_map(|edition| edition.factors.values())
    {
        factors
            .entry(factor.id.clone())
            .or_insert_with(|| FactorUsed::of(factor));
    }
    data.factors = factors.into_values().collect();
    let rows = book
        .editions
        .values()
        .flat_map(|edition| edition.pathways.values());
    data.default_values = rows.map(DefaultUsed::of).collect();
    data.default_values.sort_by(|a, b| a.id.cmp(&b.id));
    data.materials = book.materials.values().map(MaterialUsed::of).collect();
}

/// Takes out every constant and row of residues that the figures do not rest on: a whole table first, then one by one.
fn thin(pathway: &Pathway, assessment: &Assessment, data: &mut Data) {
    let holds = |data: &Data| figures_hold(pathway, assessment, data);
    let tables: BTreeSet<String> = data
        .constants
        .iter()
        .map(|constant| constant.table.clone())
        .collect();
    for table in &tables {
        let mut less = data.clone();
        less.constants.retain(|constant| constant.table != *table);
        if let Some(edition) = table.strip_prefix("soils/") {
            less.residues.retain(|row| row.edition != edition);
        }
        if holds(&less) {
            *data = less;
        }
    }
    let mut at = 0;
    while at < data.constants.len() {
        let taken = data.constants.remove(at);
        if !holds(data) {
            data.constants.insert(at, taken);
            at += 1;
        }
    }
    let mut at = 0;
    while at < data.residues.len() {
        let taken = data.residues.remove(at);
        if !holds(data) {
            data.residues.insert(at, taken);
            at += 1;
        }
    }
}

/// True if data lead to the same figures: the quick test, without workings and checks.
fn figures_hold(pathway: &Pathway, assessment: &Assessment, data: &Data) -> bool {
    let Ok(book) = book(data) else { return false };
    let found = resolve(pathway, Some(&data.rule_set.id), &book, false).and_then(|plan| assess(&plan, false));
    found.is_ok_and(|found| {
        let found = found.assessment;
        found.net == assessment.net
            && found.terms_g_co2e_per_mj == assessment.terms_g_co2e_per_mj
            && found.memo == assessment.memo
            && found.carbon == assessment.carbon
    })
}

/// The editions that rows of the data come from, with their hashes.
fn editions(data: &Data, book: &Book) -> Vec<EditionUsed> {
    let ids = data.factors.iter().map(|factor| factor.id.as_str());
    let ids = ids.chain(data.default_values.iter().map(|row| row.id.as_str()));
    let mut used: BTreeSet<&str> = ids
        .filter_map(|id| id.split_once('/'))
        .map(|(edition, _)| edition)
        .collect();
    used.extend(
        data.constants
            .iter()
            .filter_map(|constant| constant.table.strip_prefix("soils/")),
    );
    used.extend(data.residues.iter().map(|row| row.edition.as_str()));
    let line = |edition: &Edition| EditionUsed {
        id: edition.id.clone(),
        title: edition.title.clone(),
        source: edition.citation.source.clone(),
        status: edition.citation.status,
        valid_from: edition.valid_from,
        valid_to: edition.valid_to,
        hash: edition_hash(edition, book),
    };
    used.into_iter()
        .filter_map(|id| book.editions.get(id))
        .map(line)
        .collect()
}

/// The hash of an edition: of all its rows and constants, written as a statement carries them.
pub fn edition_hash(edition: &Edition, book: &Book) -> String {
    #[derive(Serialize)]
    struct Rows {
        edition: String,
        source: String,
        factors: Vec<FactorUsed>,
        default_values: Vec<DefaultUsed>,
        constants: Vec<ConstantUsed>,
        residues: Vec<ResidueUsed>,
    }
    let empty = SoilTables::default();
    let soil = book.soils.get(&edition.id).unwrap_or(&empty);
    let table = format!("soils/{}", edition.id);
    let rows = Rows {
        edition: edition.id.clone(),
        source: edition.citation.source.clone(),
        factors: edition.factors.values().map(FactorUsed::of).collect(),
        default_values: edition.pathways.values().map(DefaultUsed::of).collect(),
        constants: soil
            .constants
            .iter()
            .map(|(symbol, figure)| ConstantUsed::of(&table, symbol, figure))
            .collect(),
        residues: soil
            .residues
            .iter()
            .map(|(crop, row)| residue(&edition.id, crop, row))
            .collect(),
    };
    // Published figures are finite: the library checks them as it reads them.
    canonical::hash(&canonical::bytes(&rows).unwrap_or_default())
}

/// The book that a statement carries.
///
/// # Errors
/// In words, where a row cannot be used.
pub fn book(data: &Data) -> Result<Book, String> {
    let mut book = Book::default();
    for edition in &data.editions {
        book.editions.insert(edition.id.clone(), empty(edition));
    }
    for used in &data.factors {
        let factor = used.factor().map_err(|error| format!("{}: {error}", used.id))?;
        let (edition, row) = split(&used.id)?;
        let edition = home(&mut book, edition);
        for also in &used.also {
            edition.aliases.insert(split(also)?.1.to_owned(), row.to_owned());
        }
        edition.factors.insert(row.to_owned(), factor);
    }
    for used in &data.default_values {
        let (edition, row) = split(&used.id)?;
        home(&mut book, edition)
            .pathways
            .insert(row.to_owned(), used.row());
    }
    for used in &data.materials {
        book.materials.insert(used.id.clone(), used.material());
    }
    for used in &data.constants {
        let (symbol, figure) = (used.symbol.clone(), used.figure());
        match used.table.split_once('/') {
            Some(("soils", edition)) => {
                book.soils
                    .entry(edition.to_owned())
                    .or_default()
                    .constants
                    .insert(symbol, figure);
            }
            None if used.table == "land" => {
                book.land.insert(symbol, figure);
            }
            _ => return Err(format!("there is no table \"{}\"", used.table)),
        }
    }
    for used in &data.residues {
        let row = ResidueRow {
            crop: used.printed.clone(),
            figures: used.figures.clone(),
            citation: Citation {
                source: used.source.clone(),
                status: used.status,
            },
        };
        book.soils
            .entry(used.edition.clone())
            .or_default()
            .residues
            .insert(used.crop.clone(), row);
    }
    book.gwp_sets.insert(data.gwp_set.id.clone(), data.gwp_set.set());
    book.rule_sets
        .insert(data.rule_set.id.clone(), data.rule_set.clone());
    Ok(book)
}

fn split(id: &str) -> Result<(&str, &str), String> {
    id.split_once('/')
        .ok_or_else(|| format!("\"{id}\" names no edition"))
}

fn home<'b>(book: &'b mut Book, edition: &str) -> &'b mut Edition {
    book.editions.entry(edition.to_owned()).or_insert_with(|| {
        let citation = Citation {
            source: String::new(),
            status: crate::core::domain::Status::Own,
        };
        bare(edition, String::new(), citation)
    })
}

fn empty(used: &EditionUsed) -> Edition {
    let citation = Citation {
        source: used.source.clone(),
        status: used.status,
    };
    Edition {
        valid_from: used.valid_from,
        valid_to: used.valid_to,
        ..bare(&used.id, used.title.clone(), citation)
    }
}

fn bare(id: &str, title: String, citation: Citation) -> Edition {
    Edition {
        id: id.to_owned(),
        title,
        citation,
        note: None,
        valid_from: None,
        valid_to: None,
        validity_source: None,
        factors: BTreeMap::new(),
        aliases: BTreeMap::new(),
        fuel_splits: BTreeMap::new(),
        pathways: BTreeMap::new(),
    }
}
