//! The list of all pathways: net, saving, threshold, open checks; sort, filter, compare the ticked ones.

use super::links;
use super::verdict::{Checks, Required, Verdict};
use crate::clock::day_of;
use crate::core::domain::Book;
use crate::core::units::rounding;
use crate::pathways::{Line, Summary};
use crate::web::csv::{Cell, Table};
use crate::web::filters;
use crate::web::frame::{Frame, Section};
use askama::Template;
use jiff::civil::Date;
use std::cmp::Ordering;
use std::collections::BTreeMap;

/// The page of all pathways.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "home.html")]
pub struct Home {
    /// Round the page.
    pub frame: Frame,
    /// What just happened.
    pub notice: Option<super::Notice>,
    /// How many there are and how they stand, in a sentence.
    pub lead: String,
    /// The rows that the filter lets through, sorted.
    pub rows: Vec<HomeRow>,
    /// True if there is no pathway at all.
    pub empty: bool,
    /// True if example data is there, which can be taken away.
    pub examples: usize,
    /// What was asked.
    pub asked: Asked,
    /// Feedstocks that can be asked for: id, name.
    pub feedstocks: Vec<(String, String)>,
    /// The columns that sort.
    pub columns: Vec<Column>,
    /// The words of the baselines on the scale.
    pub scale_words: String,
}

/// One pathway of the list.
#[derive(Clone, Debug, PartialEq)]
pub struct HomeRow {
    /// Id.
    pub id: String,
    /// Address.
    pub href: String,
    /// Name.
    pub name: String,
    /// Material id of the feedstock.
    pub feedstock: String,
    /// Feedstock and rule set, in words.
    pub about: String,
    /// Net, g CO2e/MJ.
    pub net: Option<f64>,
    /// Saving, %.
    pub saving: Option<f64>,
    /// Required savings, met or not.
    pub required: Vec<Required>,
    /// The short scale; none where there is no figure.
    pub scale: Option<Scale>,
    /// Open checks: class and words.
    pub checks: ChecksShort,
    /// How many findings block; the pathway cannot be worked out counts as most.
    pub weight: usize,
    /// Why it cannot be worked out.
    pub broken: Option<String>,
    /// Day of the last revision.
    pub revised: Date,
    /// Archived.
    pub archived: bool,
    /// Demonstration data.
    pub example: bool,
}

/// Open checks in a few words.
#[derive(Clone, Debug, PartialEq)]
pub struct ChecksShort {
    /// Class of the worst.
    pub class: &'static str,
    /// Words.
    pub words: String,
}

/// The short scale from zero to the baseline, in units of its drawing (150 wide).
#[derive(Clone, Debug, PartialEq)]
pub struct Scale {
    /// Where the bar begins.
    pub from: String,
    /// How wide it is.
    pub width: String,
    /// Where the required saving stands.
    pub required: Option<String>,
    /// True if the required saving is missed.
    pub over: bool,
}

/// What a person asked the list for.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Asked {
    /// Words of the name.
    pub q: String,
    /// Material id of the feedstock; empty for any.
    pub feedstock: String,
    /// `clear`, `open`, `misses`, `broken`, `archived`; empty for any that is not archived.
    pub state: String,
    /// Column, with `-` in front for descending.
    pub sort: String,
}

/// A column that sorts.
#[derive(Clone, Debug, PartialEq)]
pub struct Column {
    /// Address that sorts by it.
    pub href: String,
    /// Its words.
    pub words: &'static str,
    /// Class of its cells.
    pub class: &'static str,
    /// `ascending`, `descending` or empty.
    pub sorted: &'static str,
}

impl Home {
    /// The list as asked for.
    pub fn of(lines: &[Line], book: &Book, asked: Asked) -> Home {
        let all: Vec<HomeRow> = lines.iter().map(|line| HomeRow::of(line, book)).collect();
        let examples = all.iter().filter(|row| row.example).count();
        let feedstocks: BTreeMap<String, String> = all
            .iter()
            .map(|row| (row.feedstock.clone(), material_name(book, &row.feedstock)))
            .collect();
        let lead = lead(&all);
        let empty = all.is_empty();
        let mut rows: Vec<HomeRow> = all.into_iter().filter(|row| asked.lets(row)).collect();
        asked.order(&mut rows);
        let frame = Frame::new("Pathways", Section::Pathways, "GET /api/v1/pathways?limit=50")
            .partly_example(rows.iter().any(|row| row.example));
        Home {
            frame,
            notice: None,
            lead,
            rows,
            empty,
            examples,
            feedstocks: feedstocks.into_iter().collect(),
            columns: asked.columns(),
            asked,
            scale_words: "0 to the baseline".to_owned(),
        }
    }

    /// The list as CSV.
    pub fn table(&self) -> Table {
        let mut table = Table::new(&[
            "id",
            "name",
            "about",
            "net_g_co2e_per_mj",
            "saving_percent",
            "required",
            "checks",
            "revised",
        ]);
        for row in &self.rows {
            let required: Vec<String> = row
                .required
                .iter()
                .map(|asked| format!("{} {} %", asked.word, asked.percent))
                .collect();
            table.rows.push(vec![
                row.id.clone().into(),
                row.name.clone().into(),
                row.about.clone().into(),
                row.net.into(),
                row.saving.into(),
                required.join("; ").into(),
                row.checks.words.clone().into(),
                Cell::Text(row.revised.to_string()),
            ]);
        }
        table
    }
}

fn material_name(book: &Book, id: &str) -> String {
    book.materials
        .get(id)
        .map_or_else(|| id.to_owned(), |material| material.name.clone())
}

impl HomeRow {
    fn of(line: &Line, book: &Book) -> HomeRow {
        let found = line.assessment.as_ref();
        let rules = book.rule_sets.get(&line.rule_set);
        let comparator = rules.map(|rules| rules.comparator.value);
        let verdict = found.zip(comparator).map(|(found, comparator)| {
            let net = found.net_g_co2e_per_mj;
            Verdict::of_figures(net, found.saving_percent, comparator, &found.thresholds, rules)
        });
        let checks = found.map(|found| checks_of(found, line.warnings_without_reason));
        let title = rules.map_or(line.rule_set.as_str(), |rules| rules.title.as_str());
        HomeRow {
            id: line.id.to_string(),
            href: links::pathway(&line.id.to_string()),
            name: line.name.clone(),
            about: format!("{}, {title}", material_name(book, &line.feedstock)),
            feedstock: line.feedstock.clone(),
            net: found.map(|found| found.net_g_co2e_per_mj),
            saving: found.and_then(|found| found.saving_percent),
            required: verdict.map(|verdict| verdict.required).unwrap_or_default(),
            scale: found
                .zip(comparator)
                .map(|(found, comparator)| Scale::of(found, comparator)),
            checks: match &checks {
                Some(checks) => ChecksShort {
                    class: checks.class(),
                    words: checks.words(),
                },
                None => ChecksShort {
                    class: "blocks",
                    words: "cannot be worked out".to_owned(),
                },
            },
            weight: checks.map_or(usize::MAX, |checks| checks.blocks * 1000 + checks.warns),
            broken: found
                .is_none()
                .then(|| "this version of the program refuses the document".to_owned()),
            revised: day_of(line.updated_at),
            archived: line.archived_at.is_some(),
            example: line.example,
        }
    }
}

fn checks_of(found: &Summary, without_reason: u32) -> Checks {
    let count = |n: u32| usize::try_from(n).unwrap_or(usize::MAX);
    Checks {
        blocks: count(found.blocks),
        warns: count(without_reason),
        informs: count(found.infos),
    }
}

impl Scale {
    const WIDE: f64 = 150.0;

    fn of(found: &Summary, comparator: f64) -> Scale {
        let net = (found.net_g_co2e_per_mj / comparator * Self::WIDE).clamp(-12.0, 176.0);
        let strictest = found
            .thresholds
            .iter()
            .map(|t| t.percent)
            .fold(f64::NEG_INFINITY, f64::max);
        let show = |x: f64| rounding::plain_fixed(x, 1);
        Scale {
            from: show(net.min(0.0)),
            width: show(net.abs().max(0.5)),
            required: strictest
                .is_finite()
                .then(|| show(Self::WIDE * (100.0 - strictest) / 100.0)),
            over: found.thresholds.iter().any(|t| !t.met),
        }
    }
}

fn lead(rows: &[HomeRow]) -> String {
    let shown: Vec<&HomeRow> = rows.iter().filter(|row| !row.archived).collect();
    let count = |word: &str| {
        shown
            .iter()
            .filter(|row| row.required.iter().any(|required| required.word == word))
            .count()
    };
    let broken = shown.iter().filter(|row| row.broken.is_some()).count();
    let archived = rows.len() - shown.len();
    let (meets, misses) = (count("meets"), count("misses"));
    let mut parts = Vec::new();
    if meets > 0 {
        parts.push(format!(
            "{meets} {} the required saving",
            if meets == 1 { "meets" } else { "meet" }
        ));
    }
    if misses > 0 {
        parts.push(format!(
            "{misses} {} it",
            if misses == 1 { "misses" } else { "miss" }
        ));
    }
    if broken > 0 {
        parts.push(format!("{broken} cannot be worked out yet"));
    }
    if archived > 0 {
        parts.push(format!("{archived} more in the archive"));
    }
    let begin = match shown.len() {
        1 => "One pathway".to_owned(),
        many => format!("{many} pathways"),
    };
    if parts.is_empty() {
        format!("{begin}.")
    } else {
        format!("{begin}: {}.", parts.join(", "))
    }
}

impl Asked {
    fn lets(&self, row: &HomeRow) -> bool {
        let word = |word: &str| row.required.iter().any(|required| required.word == word);
        let state = match self.state.as_str() {
            "clear" => row.weight == 0,
            "open" => row.weight > 0,
            "misses" => word("misses"),
            "broken" => row.broken.is_some(),
            _ => true,
        };
        let named = row.name.to_lowercase().contains(&self.q.trim().to_lowercase());
        let fed = self.feedstock.is_empty() || self.feedstock == row.feedstock;
        state && named && fed && row.archived == (self.state == "archived")
    }

    fn order(&self, rows: &mut [HomeRow]) {
        let (down, column) = self.column();
        let by = |a: &HomeRow, b: &HomeRow| match column {
            "net" => a
                .net
                .unwrap_or(f64::INFINITY)
                .total_cmp(&b.net.unwrap_or(f64::INFINITY)),
            "saving" => a
                .saving
                .unwrap_or(f64::NEG_INFINITY)
                .total_cmp(&b.saving.unwrap_or(f64::NEG_INFINITY)),
            "checks" => a.weight.cmp(&b.weight),
            "name" => a.name.to_lowercase().cmp(&b.name.to_lowercase()),
            _ => a.revised.cmp(&b.revised),
        };
        rows.sort_by(|a, b| {
            let first = by(a, b);
            let first = if down { first.reverse() } else { first };
            if first == Ordering::Equal {
                a.name.cmp(&b.name).then_with(|| a.id.cmp(&b.id))
            } else {
                first
            }
        });
    }

    fn column(&self) -> (bool, &str) {
        match self.sort.strip_prefix('-') {
            Some(column) => (true, column),
            None if self.sort.is_empty() => (true, "revised"),
            None => (false, &self.sort),
        }
    }

    fn columns(&self) -> Vec<Column> {
        let (down, now) = self.column();
        [
            ("name", "Pathway", ""),
            ("net", "g CO2e/MJ", "n"),
            ("saving", "Saving, %", "n"),
            ("checks", "Checks", ""),
            ("revised", "Revised", ""),
        ]
        .into_iter()
        .map(|(column, words, class)| {
            let here = column == now;
            let sign = if here && !down { "-" } else { "" };
            let rest = format!(
                "{}{}{}",
                part("q", &self.q),
                part("feedstock", &self.feedstock),
                part("state", &self.state)
            );
            Column {
                href: format!("/?sort={sign}{column}{rest}"),
                words,
                class,
                sorted: match (here, down) {
                    (false, _) => "",
                    (true, true) => "descending",
                    (true, false) => "ascending",
                },
            }
        })
        .collect()
    }

    /// The states that can be asked for: value, words.
    pub fn states(&self) -> [(&'static str, &'static str); 6] {
        [
            ("", "any"),
            ("clear", "clear of checks"),
            ("open", "with open checks"),
            ("misses", "misses the required saving"),
            ("broken", "cannot be worked out"),
            ("archived", "archived"),
        ]
    }
}

fn part(name: &str, value: &str) -> String {
    if value.is_empty() {
        String::new()
    } else {
        format!("&{name}={}", links::segment(value))
    }
}
