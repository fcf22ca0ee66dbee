//! What a rule set must mean: units and spans of its figures, references that exist, thresholds that do not overlap, a source
//! everywhere. The published ones are held to the same.

use crate::core::documents::problem::Problems;
use crate::core::documents::reader::{Place, nearest};
use crate::core::domain::rule_set::{AllocationMethod, Standing, Threshold};
use crate::core::domain::{Book, Cited, RuleSet};
use crate::core::units::rounding::plain;
use jiff::civil::Date;

/// A figure of a rule set: its field, the unit the arithmetic takes it in, and the span in which it can be.
pub struct Figure {
    /// Field name.
    pub name: &'static str,
    /// The only unit.
    pub unit: &'static str,
    /// Least value.
    pub least: f64,
    /// Largest value.
    pub most: f64,
}

const fn figure(name: &'static str, unit: &'static str, least: f64, most: f64) -> Figure {
    Figure {
        name,
        unit,
        least,
        most,
    }
}

/// Every figure, in the order of [`RuleSet::figures`]. Spans are ours: wide enough for any rule, too narrow for a higher
/// heating value, a figure in kg or one of another field.
pub const FIGURES: [Figure; 11] = [
    figure("comparator", "g CO2e/MJ", 1.0, 300.0),
    figure("petrol", "g CO2e/MJ", 1.0, 300.0),
    figure("ethanol_lhv", "MJ/kg", 25.0, 28.0),
    figure("consignment_lhv_mass", "MJ/kg", 25.0, 28.0),
    figure("consignment_lhv_volume", "MJ/L", 19.0, 22.5),
    figure("co2_per_carbon", "kg/kg", 3.6, 3.7),
    figure("water_evaporation", "MJ/kg", 2.2, 2.6),
    figure("ambient", "K", 250.0, 320.0),
    figure("building_heat_carnot", "1", 0.01, 0.99),
    figure("land_use_years", "years", 1.0, 100.0),
    figure("data_months", "months", 1.0, 120.0),
];

/// Limits and bonuses of deductions that models ask for: what is not listed here is no limit. Spans are ours.
pub const LIMITS: [Figure; 12] = [
    figure("land_use_since", "year", 1900.0, 2200.0),
    figure("degraded_land_bonus", "g CO2e/MJ", 0.0, 300.0),
    figure("degraded_land_years", "years", 1.0, 100.0),
    figure("iluc_cereals", "g CO2e/MJ", 0.0, 300.0),
    figure("iluc_none", "g CO2e/MJ", 0.0, 300.0),
    figure("iluc_sugars", "g CO2e/MJ", 0.0, 300.0),
    figure("soil_carbon_cap", "g CO2e/MJ", 0.0, 300.0),
    figure("soil_carbon_cap_biochar", "g CO2e/MJ", 0.0, 300.0),
    figure("soil_carbon_practice_years", "years", 0.0, 100.0),
    figure("soil_carbon_commitment_years", "years", 0.0, 100.0),
    figure("soil_carbon_ban_years", "years", 0.0, 100.0),
    figure("replacement_last_year", "year", 1900.0, 2200.0),
];

/// Longest list of thresholds.
const MOST_THRESHOLDS: usize = 100;

/// Checks what an own rule set must keep to beside [`check`]: an id of its own, its own standing.
pub fn own(set: &RuleSet, book: &Book, problems: &mut Problems) {
    let at = &Place::ROOT;
    let letters = set
        .id
        .chars()
        .all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '-');
    if !letters || set.id.len() > 64 || !set.id.starts_with(|c: char| c.is_ascii_lowercase()) {
        let detail = format!("\"{}\" is no id.", set.id.chars().take(80).collect::<String>());
        problems.add(
            at.field("id"),
            detail,
            "Give 1 to 64 of a-z 0-9 -, starting with a letter.",
        );
    } else if book.rule_sets.contains_key(&set.id) {
        let detail = format!("\"{}\" is a built-in rule set.", set.id);
        problems.add(at.field("id"), detail, "Choose an id of your own.");
    }
    if set.standing != Standing::Own {
        let detail = format!("A rule set of one's own is not {}.", set.standing.name());
        problems.add(at.field("standing"), detail, "Write \"own\", or leave it out.");
    }
}

/// Checks what any rule set must mean.
pub fn check(set: &RuleSet, book: &Book, problems: &mut Problems) {
    let at = &Place::ROOT;
    for (name, text) in [
        ("title", &set.title),
        ("version", &set.version),
        ("comparator_word", &set.comparator_word),
        ("source", &set.source),
    ] {
        if text.trim().is_empty() || text.chars().count() > 1_000 {
            let detail = format!("\"{name}\" is empty or longer than 1000 letters.");
            problems.add(at.field(name), detail, "Give 1 to 1000 letters.");
        }
    }
    figures(set, problems);
    references(set, book, problems);
    sharing(set, problems);
    residues(set, book, problems);
    thresholds(&set.thresholds, problems);
}

fn cite(source: &str, at: &Place, problems: &mut Problems) {
    if source.trim().is_empty() {
        problems.add(
            at.field("source"),
            "The figure has no source.",
            "Name the document, table and point.",
        );
    }
}

fn figures(set: &RuleSet, problems: &mut Problems) {
    let root = Place::ROOT;
    for (wanted, (name, cited)) in FIGURES.iter().zip(set.figures()) {
        if let Some(cited) = cited {
            one(wanted, cited, &root.field(name), problems);
        }
    }
    let limits = root.field("limits");
    for (name, cited) in &set.limits {
        let at = limits.field(name);
        if let Some(wanted) = LIMITS.iter().find(|limit| limit.name == name) {
            one(wanted, cited, &at, problems);
            continue;
        }
        let known = LIMITS.map(|limit| limit.name);
        let remedy = match nearest(name, known.into_iter()) {
            Some(near) => format!("Perhaps \"{near}\" was meant."),
            None => format!("Take it out; known here: {}.", known.join(", ")),
        };
        problems.add(at, format!("Nothing asks for a limit \"{name}\"."), remedy);
    }
}

fn one(wanted: &Figure, cited: &Cited, at: &Place, problems: &mut Problems) {
    let name = wanted.name;
    if cited.unit != wanted.unit {
        let detail = format!(
            "{name} is given in {}, but counts in {}.",
            cited.unit, wanted.unit
        );
        problems.add(at.field("unit"), detail, format!("Give it in {}.", wanted.unit));
    } else if !(wanted.least..=wanted.most).contains(&cited.value) {
        let detail = format!(
            "{name} of {} {} is outside {} to {}.",
            plain(cited.value),
            cited.unit,
            plain(wanted.least),
            plain(wanted.most)
        );
        problems.add(
            at.field("value"),
            detail,
            "Check the figure: heating values are lower ones.",
        );
    }
    cite(&cited.source, at, problems);
}

fn references(set: &RuleSet, book: &Book, problems: &mut Problems) {
    let mut one_of = |name: &'static str, what: &str, found: &str, known: Vec<&str>| {
        if known.contains(&found) {
            return;
        }
        let remedy = match nearest(found, known.iter().copied()) {
            Some(near) => format!("Perhaps \"{near}\" was meant."),
            None => format!("Choose one of: {}.", known.join(", ")),
        };
        problems.add(
            Place::ROOT.field(name),
            format!("There {what} \"{found}\"."),
            remedy,
        );
    };
    let weights = book.gwp_sets.keys().map(String::as_str).collect();
    one_of("gwp_set", "are no gas weights", &set.gwp_set, weights);
    let soils = book.soils.keys().map(String::as_str).collect();
    one_of(
        "soil_n2o_method",
        "is no soil method",
        &set.soil_n2o_method,
        soils,
    );
    if let Some(edition) = &set.standard_factors {
        let with = book
            .editions
            .values()
            .filter(|edition| !edition.factors.is_empty());
        let known = with.map(|edition| edition.id.as_str()).collect();
        one_of("standard_factors", "is no edition of factors", edition, known);
    }
    if let Some(edition) = &set.default_values {
        let with = book
            .editions
            .values()
            .filter(|edition| !edition.pathways.is_empty());
        let known = with.map(|edition| edition.id.as_str()).collect();
        one_of(
            "default_values",
            "is no edition of default values",
            edition,
            known,
        );
    }
}

fn sharing(set: &RuleSet, problems: &mut Problems) {
    let at = &Place::ROOT;
    if !set.allocation_allowed.contains(&set.allocation) {
        problems.add(
            at.field("allocation_allowed"),
            format!("Its own allocation, {}, is not allowed.", set.allocation.name()),
            format!("Add \"{}\".", set.allocation.name()),
        );
    }
    if let Some(k) = set
        .allocation_allowed
        .iter()
        .position(|method| *method == AllocationMethod::Exergy)
    {
        let list = at.field("allocation_allowed");
        problems.add(
            list.item(k),
            "Only heat and power have an exergy here.",
            "Name it as allocation_heat_and_power.",
        );
    }
    if set.allocation_heat_and_power == AllocationMethod::Mass {
        problems.add(
            at.field("allocation_heat_and_power"),
            "Heat and power have no mass.",
            "Choose exergy, energy, economic or substitution.",
        );
    }
    for (k, term) in set.terms_not_counted.iter().enumerate() {
        if set.terms_not_counted.iter().take(k).any(|other| other == term) {
            let list = at.field("terms_not_counted");
            let detail = format!("{} stands here twice.", term.name());
            problems.add(list.item(k), detail, "Take one of them out.");
        }
    }
}

fn residues(set: &RuleSet, book: &Book, problems: &mut Problems) {
    let at = &Place::ROOT;
    let blank = |source: &Option<String>| source.as_deref().is_none_or(|text| text.trim().is_empty());
    if !set.residues_by_law.is_empty() && blank(&set.residues_source) {
        problems.add(
            at.field("residues_source"),
            "The residue list has no source.",
            "Name the document and point that lists them.",
        );
    }
    let list = at.field("residues_by_law");
    for (k, id) in set.residues_by_law.iter().enumerate() {
        let meant = match id.strip_suffix('*') {
            Some(stem) => book.materials.keys().any(|material| material.starts_with(stem)),
            None => book.materials.contains_key(id),
        };
        if !meant {
            problems.add(
                list.item(k),
                format!("No material is meant by the residue \"{id}\"."),
                "Use ids of built-in materials; one that ends in * stands for all that begin so.",
            );
        }
    }
}

fn thresholds(thresholds: &[Threshold], problems: &mut Problems) {
    let at = Place::ROOT.field("thresholds");
    if thresholds.len() > MOST_THRESHOLDS {
        let detail = format!("There are {} thresholds.", thresholds.len());
        problems.add(at, detail, format!("Give at most {MOST_THRESHOLDS}."));
        return;
    }
    for (k, threshold) in thresholds.iter().enumerate() {
        let at = at.item(k);
        if !(threshold.percent > 0.0 && threshold.percent <= 100.0) {
            let detail = format!(
                "A minimum saving of {} % is not possible.",
                plain(threshold.percent)
            );
            problems.add(at.field("percent"), detail, "Give it above 0 and at most 100 %.");
        }
        for (name, from, to) in [
            ("started_to", threshold.started_from, threshold.started_to),
            ("applies_to", threshold.applies_from, threshold.applies_to),
        ] {
            if let (Some(from), Some(to)) = (from, to)
                && to < from
            {
                let detail = format!("The span from {from} to {to} holds no day.");
                problems.add(at.field(name), detail, "Give the last day, not before the first.");
            }
        }
        cite(&threshold.source, &at, problems);
        let overlaps = |other: &Threshold| {
            let started = (threshold.started_from, threshold.started_to);
            let asked = (threshold.applies_from, threshold.applies_to);
            meet(started, (other.started_from, other.started_to))
                && meet(asked, (other.applies_from, other.applies_to))
        };
        if let Some(first) = thresholds.iter().take(k).position(overlaps) {
            let detail = format!(
                "The thresholds {} and {} overlap: some plants fall under both.",
                first + 1,
                k + 1
            );
            problems.add(at, detail, "Let each begin on the day after the other ends.");
        }
    }
}

/// First and last day; an absent end is open.
type Span = (Option<Date>, Option<Date>);

/// True if two spans of days have a day in common.
fn meet(a: Span, b: Span) -> bool {
    let begins_in_time = |from: Option<Date>, to: Option<Date>| match (from, to) {
        (Some(from), Some(to)) => from <= to,
        _ => true,
    };
    begins_in_time(a.0, b.1) && begins_in_time(b.0, a.1)
}

/// A start of a plant and a day of fuel that no threshold covers; none where every plant and every day is covered, or there
/// are no thresholds at all.
pub fn gap(thresholds: &[Threshold]) -> Option<(Date, Date)> {
    if thresholds.is_empty() {
        return None;
    }
    let first_days = |spans: &dyn Fn(&Threshold) -> Span| {
        let mut days = vec![Date::MIN];
        for threshold in thresholds {
            let (from, to) = spans(threshold);
            days.extend(from);
            days.extend(to.and_then(|to| to.tomorrow().ok()));
        }
        days
    };
    let starts = first_days(&|t| (t.started_from, t.started_to));
    let fuels = first_days(&|t| (t.applies_from, t.applies_to));
    starts
        .iter()
        .flat_map(|start| fuels.iter().map(|fuel| (*start, *fuel)))
        .find(|(start, fuel)| {
            !thresholds
                .iter()
                .any(|t| t.covers(*start) && t.asked_within(*fuel, *fuel))
        })
}
