//! Reads published tables cell by cell. What is wrong is collected, so that one start reports everything.

use crate::core::domain::book::SoilTables;
use crate::core::domain::{Citation, Cited, Status};
use crate::core::units::{Unit, parse_unit};
use csv::StringRecord;
use std::collections::BTreeSet;
use std::rc::Rc;

/// What reading has found so far.
#[derive(Default)]
pub(super) struct Reading {
    /// What is wrong with the data, one sentence each.
    pub problems: Vec<String>,
    /// Every figure that nobody has read at its source.
    pub memory: Vec<String>,
}

/// A line of a published table.
pub(super) struct Row {
    table: &'static str,
    line: u64,
    head: Rc<StringRecord>,
    cells: StringRecord,
}

impl Row {
    /// The text of a column; empty for a blank.
    pub fn text(&self, column: &str) -> &str {
        let at = self.head.iter().position(|name| name == column);
        at.and_then(|at| self.cells.get(at)).unwrap_or("").trim()
    }

    /// The text of a column, if there is one.
    pub fn some(&self, column: &str) -> Option<String> {
        let text = self.text(column);
        (!text.is_empty()).then(|| text.to_owned())
    }

    /// The table and line, for people who look for a problem.
    pub fn place(&self) -> String {
        format!("{} line {}", self.table, self.line)
    }
}

impl Reading {
    /// Notes that something is wrong.
    pub fn problem(&mut self, place: &str, what: impl AsRef<str>) {
        self.problems.push(format!("{place}: {}", what.as_ref()));
    }

    /// The lines of a table that must have `columns` and a different `columns[0]` on every line.
    pub fn rows(&mut self, table: &'static str, text: &str, columns: &[&str]) -> Vec<Row> {
        let rows = self.lines(table, text, columns);
        let mut seen = BTreeSet::new();
        for row in &rows {
            let id = columns.first().map_or("", |first| row.text(first));
            if id.is_empty() || !seen.insert(id) {
                self.problem(&row.place(), format!("the id \"{id}\" is blank or used twice"));
            }
        }
        rows
    }

    /// The lines of a table that must have `columns`; several lines may share an id.
    pub fn lines(&mut self, table: &'static str, text: &str, columns: &[&str]) -> Vec<Row> {
        let mut reader = csv::Reader::from_reader(text.as_bytes());
        let head = match reader.headers() {
            Ok(head) => Rc::new(head.clone()),
            Err(error) => {
                self.problem(table, error.to_string());
                return Vec::new();
            }
        };
        for column in columns {
            if !head.iter().any(|name| name == *column) {
                self.problem(table, format!("there is no column \"{column}\""));
            }
        }
        let mut rows = Vec::new();
        for record in reader.records() {
            match record {
                Ok(cells) => rows.push(Row {
                    table,
                    line: cells.position().map_or(0, csv::Position::line),
                    head: Rc::clone(&head),
                    cells,
                }),
                Err(error) => self.problem(table, error.to_string()),
            }
        }
        rows
    }

    /// A figure; none for a blank.
    pub fn figure(&mut self, row: &Row, column: &str) -> Option<f64> {
        self.scaled(row, column, 0)
    }

    /// A figure times a power of ten, as the nearest number to the shifted digits: 6.9 g are then 0.0069 kg, which
    /// 6.9 / 1000 is not.
    pub fn scaled(&mut self, row: &Row, column: &str, power: i8) -> Option<f64> {
        let text = row.text(column);
        if text.is_empty() {
            return None;
        }
        match format!("{text}e{power}").parse::<f64>() {
            Ok(value) if value.is_finite() => Some(value),
            _ => {
                self.problem(&row.place(), format!("\"{text}\" in {column} is no figure"));
                None
            }
        }
    }

    /// A figure that must be there; zero, and a problem, where it is not.
    pub fn need(&mut self, row: &Row, column: &str) -> f64 {
        if row.text(column).is_empty() {
            self.problem(&row.place(), format!("{column} is blank"));
        }
        self.figure(row, column).unwrap_or(0.0)
    }

    /// Adds a constant of a soil method; a symbol has one value.
    pub fn constant(&mut self, tables: &mut SoilTables, symbol: String, figure: Cited) {
        if tables.constants.contains_key(&symbol) {
            self.problem("soils", format!("{symbol} is given twice"));
        }
        tables.constants.insert(symbol, figure);
    }

    /// A unit as a table prints it.
    pub fn unit(&mut self, place: &str, text: &str) -> Unit {
        match parse_unit(text) {
            Ok(unit) => unit,
            Err(error) => {
                self.problem(place, error.to_string());
                Unit {
                    symbol: text.to_owned(),
                    dimension: crate::core::units::Dimension::NONE,
                    factor: 1.0,
                    offset: 0.0,
                }
            }
        }
    }

    /// Source and status of a line. `figure` names what the line gives, for the list of figures from memory.
    pub fn citation(&mut self, row: &Row, figure: &str) -> Citation {
        self.cite(&row.place(), figure, row.text("source"), row.text("status"))
    }

    /// Source and status given as text.
    pub fn cite(&mut self, place: &str, figure: &str, source: &str, status: &str) -> Citation {
        let status = match status {
            "read" => Status::Read,
            "memory" => Status::Memory,
            "calculated" | "computed" => Status::Calculated,
            other => {
                self.problem(place, format!("\"{other}\" is no status of a published figure"));
                Status::Memory
            }
        };
        let citation = Citation {
            source: source.trim().to_owned(),
            status,
        };
        self.published(place, figure, &citation);
        citation
    }

    /// Checks a citation, and keeps the figure in mind if it is from memory.
    pub fn published(&mut self, place: &str, figure: &str, citation: &Citation) {
        if citation.source.trim().is_empty() {
            self.problem(place, "there is no source");
        }
        match citation.status {
            Status::Memory => self.memory.push(format!("{figure} ({})", citation.source)),
            Status::Own => self.problem(place, "a published figure cannot be somebody's own"),
            Status::Read | Status::Calculated => {}
        }
    }

    /// A line with `value`, unit, source, status and note as a cited figure.
    pub fn cited(&mut self, row: &Row, value: &str, named: &str) -> Cited {
        let figure = match row.text("unit") {
            "" | "1" | "-" => format!("{named} = {}", row.text(value)),
            unit => format!("{named} = {} {unit}", row.text(value)),
        };
        let Citation { source, status } = self.citation(row, &figure);
        let value = self.need(row, value);
        Cited {
            value,
            unit: row.text("unit").to_owned(),
            source,
            status,
            note: row.some("note"),
        }
    }
}

/// The status to show for figures taken together: from memory before worked out before read.
pub(super) fn weakest(statuses: impl IntoIterator<Item = Status>) -> Status {
    let rank = |status: &Status| match status {
        Status::Memory => 0,
        Status::Own => 1,
        Status::Calculated => 2,
        Status::Read => 3,
    };
    statuses.into_iter().min_by_key(rank).unwrap_or(Status::Memory)
}
