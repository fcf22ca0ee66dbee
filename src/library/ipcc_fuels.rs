//! Engines and boilers of the 2006 IPCC Guidelines, Volume 2: kg of gas per TJ of fuel, net.

use super::reading::{Reading, Row, weakest};
use crate::core::domain::factor::{EngineVehicle, Use};
use crate::core::domain::{Citation, Counts, Edition, Factor, Gas, PublishedGases, Status};
use std::collections::BTreeMap;

/// As the EU table writes it, so that both kinds of fuel rows take the same amounts.
const PER: &str = "MJ fuel (LHV)";
/// From kg per TJ to kg per MJ, as a power of ten.
const TJ_TO_MJ: i8 = -6;
/// End of an id, category of the table, words.
const CATEGORIES: [(&str, &str, &str); 2] = [
    ("2_2", "2.2 energy industries", "energy industries"),
    ("2_3", "2.3 manufacturing", "manufacturing"),
];

/// Reads vehicles and stationary fuels.
pub(super) fn fill(reading: &mut Reading, edition: &mut Edition) {
    let text = include_str!("editions/ipcc-2006/mobile_combustion.csv");
    let columns = [
        "id",
        "mode",
        "fuel",
        "technology",
        "gas",
        "default",
        "unit",
        "source",
        "status",
        "note",
    ];
    let rows = reading.rows("ipcc-2006/mobile_combustion.csv", text, &columns);
    for (id, lines) in grouped(reading, rows, "gas") {
        let factor = vehicle(reading, &edition.id, &id, &lines.iter().collect::<Vec<_>>());
        edition.factors.insert(id, factor);
    }

    let text = include_str!("editions/ipcc-2006/stationary_combustion.csv");
    let columns = [
        "id",
        "ipcc_fuel",
        "parameter",
        "category",
        "default",
        "unit",
        "biogenic_co2",
        "source",
        "status",
        "note",
    ];
    let rows = reading.rows("ipcc-2006/stationary_combustion.csv", text, &columns);
    for (fuel, lines) in grouped(reading, rows, "parameter") {
        for (end, category, words) in CATEGORIES {
            let id = format!("{fuel}_{end}");
            let wanted = lines
                .iter()
                .filter(|(row, _)| [category, "all"].contains(&row.text("category")));
            let factor = burnt(reading, &edition.id, &id, &wanted.collect::<Vec<_>>(), words);
            edition.factors.insert(id, factor);
        }
    }
}

/// A line of a table and its citation.
type Line = (Row, Citation);

/// The lines of one factor together: ids without their gas, or whatever `column` names.
fn grouped(reading: &mut Reading, rows: Vec<Row>, column: &str) -> BTreeMap<String, Vec<Line>> {
    let mut groups: BTreeMap<String, Vec<Line>> = BTreeMap::new();
    for row in rows {
        let end = format!("_{}", row.text(column).to_lowercase());
        let Some(id) = row.text("id").rsplit_once(&end).map(|(id, _)| id.to_owned()) else {
            reading.problem(&row.place(), format!("the id does not name its {column}"));
            continue;
        };
        let figure = match row.text("default") {
            "" => "not printed".to_owned(),
            digits => format!("{digits} {}", row.text("unit")),
        };
        let citation = reading.citation(&row, &format!("ipcc-2006/{} = {figure}", row.text("id")));
        groups.entry(id).or_default().push((row, citation));
    }
    groups
}

/// The sources of all lines, each once, with the weakest status.
fn citation(lines: &[&Line]) -> Citation {
    let mut sources: Vec<&str> = Vec::new();
    for (_, citation) in lines {
        if !sources.contains(&citation.source.as_str()) {
            sources.push(&citation.source);
        }
    }
    Citation {
        source: sources.join("; "),
        status: weakest(lines.iter().map(|(_, citation)| citation.status)),
    }
}

/// A first word, the notes of the lines, and which of their figures are from memory.
fn note(first: Option<&str>, lines: &[&Line], column: &str) -> Option<String> {
    let mut notes: Vec<String> = first.map(str::to_owned).into_iter().collect();
    for (row, _) in lines {
        notes.extend(
            row.some("note")
                .map(|note| format!("{}: {note}.", row.text(column))),
        );
    }
    let recalled = lines
        .iter()
        .filter(|(_, citation)| citation.status == Status::Memory);
    let recalled: Vec<&str> = recalled.map(|(row, _)| row.text(column)).collect();
    if !recalled.is_empty() {
        notes.push(format!("From memory: {}.", recalled.join(", ")));
    }
    (!notes.is_empty()).then(|| notes.join(" "))
}

fn vehicle(reading: &mut Reading, edition: &str, id: &str, lines: &[&Line]) -> Factor {
    let mut engine = EngineVehicle {
        ch4_kg_per_tj: None,
        n2o_kg_per_tj: None,
    };
    let (mut gases, mut printed, mut name) = (PublishedGases::default(), BTreeMap::new(), String::new());
    for (row, _) in lines {
        let value = reading.figure(row, "default");
        let per_mj = reading.scaled(row, "default", TJ_TO_MJ);
        match row.text("gas") {
            "CH4" => {
                engine.ch4_kg_per_tj = value;
                let ethanol = row.text("fuel") == "Ethanol";
                gases.set(if ethanol { Gas::Ch4Biogenic } else { Gas::Ch4Fossil }, per_mj);
            }
            "N2O" => {
                engine.n2o_kg_per_tj = value;
                gases.set(Gas::N2o, per_mj);
            }
            other => reading.problem(
                &row.place(),
                format!("{other} is no exhaust gas of an engine row"),
            ),
        }
        if let Some(digits) = row.some("default") {
            printed.insert(format!("{}_kg_per_tj", row.text("gas").to_lowercase()), digits);
        }
        name = format!(
            "{}, {}, {}",
            row.text("mode"),
            row.text("fuel"),
            row.text("technology")
        );
    }
    Factor {
        id: format!("{edition}/{id}"),
        name,
        group: "engine".to_owned(),
        counts: Counts::Fuel,
        per: PER.to_owned(),
        unit: reading.unit(id, PER),
        gases,
        usage: Use::Engine(engine),
        printed_co2e_g: None,
        printed,
        lhv_mj_per_kg: None,
        density_kg_per_m3: None,
        note: note(None, lines, "gas"),
        citation: citation(lines),
    }
}

fn burnt(reading: &mut Reading, edition: &str, id: &str, lines: &[&Line], words: &str) -> Factor {
    let biogenic = lines
        .iter()
        .any(|(row, _)| row.text("biogenic_co2").starts_with("yes"));
    let (co2, ch4) = if biogenic {
        (Gas::Co2Biogenic, Gas::Ch4Biogenic)
    } else {
        (Gas::Co2Fossil, Gas::Ch4Fossil)
    };
    let (mut gases, mut printed) = (PublishedGases::default(), BTreeMap::new());
    let (mut name, mut lhv_mj_per_kg) = (String::new(), None);
    for (row, _) in lines {
        let value = reading.need(row, "default");
        let per_mj = reading.scaled(row, "default", TJ_TO_MJ);
        let column = match row.text("parameter") {
            "NCV" => {
                lhv_mj_per_kg = Some(value);
                "ncv_mj_per_kg"
            }
            "CO2" => {
                gases.set(co2, per_mj);
                "co2_kg_per_tj"
            }
            "CH4" => {
                gases.set(ch4, per_mj);
                "ch4_kg_per_tj"
            }
            "N2O" => {
                gases.set(Gas::N2o, per_mj);
                "n2o_kg_per_tj"
            }
            other => {
                reading.problem(
                    &row.place(),
                    format!("{other} is neither a gas nor a heating value"),
                );
                continue;
            }
        };
        printed.insert(column.to_owned(), row.text("default").to_owned());
        name = format!("{}, burnt in {words}", row.text("ipcc_fuel"));
    }
    if gases.0.iter().flatten().count() != 3 || lhv_mj_per_kg.is_none() {
        reading.problem(id, "three gases and a heating value are wanted");
    }
    let first =
        "Burning only, without the supply of the fuel. The heating value is of the fuel as it is used.";
    Factor {
        id: format!("{edition}/{id}"),
        name,
        group: "burning".to_owned(),
        counts: Counts::Fuel,
        per: PER.to_owned(),
        unit: reading.unit(id, PER),
        gases,
        usage: Use::Amount,
        printed_co2e_g: None,
        printed,
        lhv_mj_per_kg,
        density_kg_per_m3: None,
        note: note(Some(first), lines, "parameter"),
        citation: citation(lines),
    }
}
