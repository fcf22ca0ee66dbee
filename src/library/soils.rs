//! Constants and crop-residue data of the soil models, by edition. The sets are whole: a figure of one edition
//! never stands in for one of another without saying so in its note.

use super::reading::{Reading, Row, weakest};
use crate::core::domain::book::{ResidueRow, SoilTables};
use crate::core::domain::{Citation, Cited, Status};
use std::collections::BTreeMap;

/// The tables of every soil method.
pub(super) fn read(reading: &mut Reading) -> BTreeMap<String, SoilTables> {
    let ipcc_2006 = Ipcc {
        edition: "ipcc-2006",
        soils: (
            "ipcc-2006/managed_soils.csv",
            include_str!("editions/ipcc-2006/managed_soils.csv"),
        ),
        constants: (
            "ipcc-2006/constants.csv",
            include_str!("editions/ipcc-2006/constants.csv"),
        ),
        residues: (
            "ipcc-2006/crop_residues.csv",
            include_str!("editions/ipcc-2006/crop_residues.csv"),
        ),
    };
    let ipcc_2019 = Ipcc {
        edition: "ipcc-2019",
        soils: (
            "ipcc-2019/managed_soils.csv",
            include_str!("editions/ipcc-2019/managed_soils.csv"),
        ),
        constants: (
            "ipcc-2019/constants.csv",
            include_str!("editions/ipcc-2019/constants.csv"),
        ),
        residues: (
            "ipcc-2019/crop_residues.csv",
            include_str!("editions/ipcc-2019/crop_residues.csv"),
        ),
    };
    let mut refined = ipcc_2019.read(reading);
    fertiliser_classes(reading, &mut refined);
    BTreeMap::from([
        ("eu-2022-996".to_owned(), super::eu_soils::read(reading)),
        ("ipcc-2006".to_owned(), ipcc_2006.read(reading)),
        ("ipcc-2019".to_owned(), refined),
    ])
}

/// The three tables of an IPCC edition: name and text.
struct Ipcc {
    edition: &'static str,
    soils: (&'static str, &'static str),
    constants: (&'static str, &'static str),
    residues: (&'static str, &'static str),
}

impl Ipcc {
    fn read(&self, reading: &mut Reading) -> SoilTables {
        let mut tables = SoilTables::default();
        for ((name, text), value) in [(self.soils, "default"), (self.constants, "value")] {
            for row in reading.rows(name, text, &["symbol", value, "unit", "source", "status", "note"]) {
                let symbol = row.text("symbol").to_owned();
                let figure = reading.cited(&row, value, &format!("{} soil constant {symbol}", self.edition));
                reading.constant(&mut tables, symbol, figure);
            }
        }
        self.residues(reading, &mut tables);
        tables
    }

    /// A line is one figure of one crop; `document_crops` are the names that documents use, one or more.
    fn residues(&self, reading: &mut Reading, tables: &mut SoilTables) {
        let columns = [
            "id",
            "document_crops",
            "figure",
            "crop",
            "value",
            "unit",
            "source",
            "status",
        ];
        let mut crops: BTreeMap<String, Vec<(Row, Citation)>> = BTreeMap::new();
        for row in reading.rows(self.residues.0, self.residues.1, &columns) {
            let figure = format!(
                "{} crop residue {} = {}",
                self.edition,
                row.text("id"),
                row.text("value")
            );
            let citation = reading.citation(&row, &figure);
            crops
                .entry(row.text("document_crops").to_owned())
                .or_default()
                .push((row, citation));
        }
        for (names, lines) in crops {
            for name in names.split(' ') {
                let row = residue_row(reading, tables, name, &lines);
                tables.residues.insert(name.to_owned(), row);
            }
        }
    }
}

fn residue_row(
    reading: &mut Reading,
    tables: &SoilTables,
    name: &str,
    lines: &[(Row, Citation)],
) -> ResidueRow {
    let mut figures = BTreeMap::new();
    let (mut recalled, mut missing) = (Vec::new(), Vec::new());
    for (row, citation) in lines {
        // Printed as not available: neither zero nor a neighbour's figure.
        if row.text("value") == "NA" {
            missing.push(row.text("figure"));
            continue;
        }
        if citation.status == Status::Memory {
            recalled.push(row.text("figure"));
        }
        figures.insert(row.text("figure").to_owned(), reading.need(row, "value"));
    }
    let fire = if name.ends_with("wheat") {
        "cf.wheat"
    } else {
        "cf.other"
    };
    if let Some(cf) = tables.constants.get(fire) {
        figures.insert("cf".to_owned(), cf.value);
    }
    let (crop, table) = lines
        .first()
        .map_or(("", ""), |(row, first)| (row.text("crop"), first.source.as_str()));
    let mut source = format!("{table}, {crop}");
    for (words, names) in [("from memory", &recalled), ("printed as NA (recalled)", &missing)] {
        if !names.is_empty() {
            source.push_str(&format!("; {words}: {}", names.join(", ")));
        }
    }
    source.push_str("; cf: 2006 IPCC Guidelines Vol. 4 Ch. 2 Table 2.6, from memory");
    let given = lines.iter().filter(|(row, _)| row.text("value") != "NA");
    let status = weakest(given.map(|(_, citation)| citation.status));
    ResidueRow {
        crop: crop.to_owned(),
        figures,
        citation: Citation { source, status },
    }
}

/// `frac_gasf.<fertiliser>`: the figure of the class that the fertiliser belongs to.
fn fertiliser_classes(reading: &mut Reading, tables: &mut SoilTables) {
    let text = include_str!("editions/ipcc-2019/fertiliser_classes.csv");
    let columns = ["fertiliser", "symbol", "source", "status", "note"];
    for row in reading.rows("ipcc-2019/fertiliser_classes.csv", text, &columns) {
        let Some(class) = tables.constants.get(row.text("symbol")).cloned() else {
            reading.problem(&row.place(), "there is no such class");
            continue;
        };
        let symbol = format!("frac_gasf.{}", row.text("fertiliser"));
        let named = format!(
            "ipcc-2019 soil constant {symbol} = that of {}",
            row.text("symbol")
        );
        let Citation { source, status } = reading.citation(&row, &named);
        let status = weakest([status, class.status]);
        reading.constant(
            tables,
            symbol,
            Cited {
                source,
                status,
                note: row.some("note"),
                ..class
            },
        );
    }
}
