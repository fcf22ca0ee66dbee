//! Built-in materials: the index says what each is and whether its carbon content may be a default, the table holds
//! its figures. `carbon_readings.csv` beside them lists the single analyses behind the means; nothing computes with it.

use super::reading::{Reading, Row};
use crate::core::domain::material::Property;
use crate::core::domain::{CarbonClass, Cited, Edition, Material};
use std::collections::BTreeMap;

/// Every built-in material. A material of the Regulation's list without a row of its own in the table takes its
/// heating value, and bulk density where one is printed, from the edition.
pub(super) fn read(reading: &mut Reading, law: Option<&Edition>) -> BTreeMap<String, Material> {
    let text = include_str!("materials/material_index.csv");
    let columns = [
        "material_id",
        "name",
        "kind",
        "eu_annex_ix",
        "carbon_default",
        "reason",
    ];
    let mut materials = BTreeMap::new();
    let mut listed = Vec::new();
    for row in reading.rows("materials/material_index.csv", text, &columns) {
        let material = indexed(reading, &row);
        if row.text("eu_annex_ix") == "yes" {
            listed.push(material.id.clone());
        }
        materials.insert(material.id.clone(), material);
    }
    properties(reading, &mut materials);
    for id in listed {
        if let Some(material) = materials.get_mut(&id) {
            from_law(reading, law, material);
        }
    }
    materials
}

fn indexed(reading: &mut Reading, row: &Row) -> Material {
    let carbon_class = match row.text("carbon_default") {
        "exact" => CarbonClass::Exact,
        "typical" => CarbonClass::Typical,
        "side" => CarbonClass::Side,
        other => {
            if other != "measure" {
                reading.problem(&row.place(), format!("\"{other}\" is no carbon class"));
            }
            CarbonClass::Measure
        }
    };
    Material {
        id: row.text("material_id").to_owned(),
        name: row.text("name").to_owned(),
        kind: row.text("kind").to_owned(),
        carbon_class,
        carbon_reason: row.text("reason").to_owned(),
        properties: BTreeMap::new(),
    }
}

fn properties(reading: &mut Reading, materials: &mut BTreeMap<String, Material>) {
    let text = include_str!("materials/materials.csv");
    let columns = [
        "material_id",
        "property",
        "value",
        "lower",
        "upper",
        "unit",
        "basis",
        "source",
        "status",
        "note",
    ];
    for row in reading.lines("materials/materials.csv", text, &columns) {
        let (id, name) = (
            row.text("material_id").to_owned(),
            row.text("property").to_owned(),
        );
        let mut figure = reading.cited(&row, "value", &format!("material {id} {name}"));
        if figure.unit == "-" {
            figure.unit = "1".to_owned();
        }
        reading.unit(&row.place(), &figure.unit);
        let property = Property {
            lower: reading.figure(&row, "lower"),
            upper: reading.figure(&row, "upper"),
            basis: row.text("basis").to_owned(),
            figure,
        };
        let value = property.figure.value;
        if property.lower.is_some_and(|lower| lower > value)
            || property.upper.is_some_and(|upper| upper < value)
        {
            reading.problem(&row.place(), "the figure is outside its own limits");
        }
        let Some(material) = materials.get_mut(&id) else {
            reading.problem(&row.place(), format!("{id} is not in the index"));
            continue;
        };
        if material.properties.insert(name, property).is_some() {
            reading.problem(&row.place(), "the property is given twice");
        }
    }
}

/// The law's row for a material is `lhv_` and the material's id.
fn from_law(reading: &mut Reading, law: Option<&Edition>, material: &mut Material) {
    let place = format!("material {}", material.id);
    let row = law.and_then(|edition| edition.factors.get(&format!("lhv_{}", material.id)));
    let Some((row, lhv)) = row.and_then(|row| Some((row, row.lhv_mj_per_kg?))) else {
        reading.problem(&place, "the Regulation's list has no such row");
        return;
    };
    if let Some(own) = material.lhv_dry() {
        if own != lhv {
            reading.problem(
                &place,
                format!("heating value {own} differs from the Regulation's {lhv}"),
            );
        }
        return;
    }
    let printed = [
        ("lhv_dry", Some(lhv), "MJ/kg"),
        ("bulk_density", row.density_kg_per_m3, "kg/m3"),
    ];
    for (name, value, unit) in printed {
        let Some(value) = value else { continue };
        let figure = Cited {
            value,
            unit: unit.to_owned(),
            source: row.citation.source.clone(),
            status: row.citation.status,
            note: None,
        };
        let property = Property {
            figure,
            lower: None,
            upper: None,
            basis: "dry matter".to_owned(),
        };
        material.properties.insert(name.to_owned(), property);
    }
}
