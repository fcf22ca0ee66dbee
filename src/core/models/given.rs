//! Reads the parameters of one model against its table: units, ranges and words; notes problems and findings.

use super::factors::{self, Priced, step};
use super::flow::unit_words;
use super::parameter::{Parameter, Takes};
use super::{Note, Setting};
use crate::core::documents::amount::Origin;
use crate::core::documents::assessment::{Severity, Step};
use crate::core::documents::input::FactorRef;
use crate::core::documents::problem::Problems;
use crate::core::documents::read_input;
use crate::core::documents::reader::{Place, day_of, nearest, number_of, shape, text_of};
use crate::core::domain::GasVector;
use crate::core::units::rounding::plain;
use crate::core::units::{Dimension, parse_unit};
use jiff::civil::Date;
use serde_json::{Map, Value};

/// The parameters of one model while it is computed.
pub struct Given<'a> {
    map: &'a Map<String, Value>,
    table: &'static [Parameter],
    at: Place<'a>,
    /// Where evaluation happens.
    pub setting: &'a Setting<'a>,
    /// What is wrong.
    pub problems: &'a mut Problems,
    /// What the model did, for its workings and findings.
    pub record: &'a mut Record,
}

/// What a model leaves behind beside its gases.
#[derive(Clone, Debug, Default)]
pub struct Record {
    /// The arithmetic.
    pub steps: Vec<Step>,
    /// What checks have to say.
    pub notes: Vec<Note>,
    /// Origin of each amount given, in order; `None` where the amount states none.
    pub origins: Vec<Option<Origin>>,
    /// Full ids of the library factors used.
    pub factors: Vec<String>,
}

impl<'a> Given<'a> {
    /// Opens the parameters of a model; unknown names are noted at once.
    pub fn open(
        map: &'a Map<String, Value>,
        table: &'static [Parameter],
        at: Place<'a>,
        setting: &'a Setting<'a>,
        problems: &'a mut Problems,
        record: &'a mut Record,
    ) -> Given<'a> {
        for name in map
            .keys()
            .filter(|name| !table.iter().any(|row| row.name == name.as_str()))
        {
            let remedy = match nearest(name, table.iter().map(|row| row.name)) {
                Some(near) => format!("Take it out, or write \"{near}\" if that was meant."),
                None => {
                    let known = table.iter().map(|row| row.name).collect::<Vec<_>>().join(", ");
                    format!("Take it out; known here: {known}.")
                }
            };
            problems.add(
                at.field(name),
                format!("There is no parameter \"{name}\" here."),
                remedy,
            );
        }
        for row in table.iter().filter(|row| row.required) {
            if map.get(row.name).is_none_or(Value::is_null) {
                let detail = format!("\"{}\" is missing: {}", row.name, row.meaning);
                problems.add(at.field(row.name), detail, format!("Add \"{}\".", row.name));
            }
        }
        Given {
            map,
            table,
            at,
            setting,
            problems,
            record,
        }
    }

    fn row(&self, name: &str) -> Option<&'static Parameter> {
        let row = self.table.iter().find(|row| row.name == name);
        debug_assert!(row.is_some(), "parameter {name} has no row in its table");
        row
    }

    fn value(&self, name: &str) -> Option<&'a Value> {
        self.map.get(name).filter(|value| !value.is_null())
    }

    /// True if the parameter is given.
    pub fn has(&self, name: &str) -> bool {
        self.value(name).is_some()
    }

    /// Notes a problem at a parameter.
    pub fn problem(&mut self, name: &str, detail: impl Into<String>, remedy: impl Into<String>) {
        self.problems.add(self.at.field(name), detail, remedy);
    }

    /// Notes a finding about a parameter.
    pub fn note(&mut self, id: &'static str, severity: Severity, field: &str, message: String, remedy: &str) {
        self.record.notes.push(Note {
            id,
            severity,
            field: field.to_owned(),
            message,
            remedy: remedy.to_owned(),
        });
    }

    /// Notes a step of the arithmetic.
    pub fn step(&mut self, text: String, value: f64, unit: &str, source: &str) {
        self.record.steps.push(step(text, value, unit, source));
    }

    /// A figure in the unit of its row, range checked.
    pub fn number(&mut self, name: &str) -> Option<f64> {
        let row = self.row(name)?;
        let value = self.value(name)?;
        let unit = row.unit();
        let must = matches!(row.takes, Takes::Amount(_));
        let figure = self.figure(name, value, unit, must)?;
        self.within(name, figure, unit, row)
    }

    /// A figure in the unit of its row, or what stands in where it is left out; none if it is wrong.
    pub fn number_or(&mut self, name: &str, absent: f64) -> Option<f64> {
        if self.has(name) {
            self.number(name)
        } else {
            Some(absent)
        }
    }

    fn within(&mut self, name: &str, figure: f64, unit: &str, row: &Parameter) -> Option<f64> {
        if let Some(hard) = row.hard.filter(|hard| !hard.holds(figure)) {
            let unit_word = if unit.is_empty() {
                String::new()
            } else {
                format!(" {unit}")
            };
            let detail = format!("{}{unit_word} is outside the range of the model.", plain(figure));
            self.problem(name, detail, format!("Give {}.", hard.words(unit)));
            return None;
        }
        if let Some(usual) = row.usual {
            self.usual(name, figure, unit, usual);
        }
        Some(figure)
    }

    /// Notes finding K-01 where a figure is outside its usual span.
    pub fn usual(&mut self, name: &str, figure: f64, unit: &str, usual: super::parameter::Span) {
        if usual.holds(figure) {
            return;
        }
        let unit_word = if unit.is_empty() {
            String::new()
        } else {
            format!(" {unit}")
        };
        let message = format!(
            "{name} is {}{unit_word}; usual is {}.",
            plain(figure),
            usual.words(unit)
        );
        self.note(
            "K-01",
            Severity::Warn,
            name,
            message,
            "Check figure and unit, or give the reason.",
        );
    }

    fn figure(&mut self, name: &str, value: &Value, unit: &str, must: bool) -> Option<f64> {
        let at = self.at.field(name);
        match value {
            Value::Object(object) => read_amount(&at, object, unit, self.problems, self.record),
            Value::Number(_) if !must => {
                self.record.origins.push(None);
                number_of(value, &at, self.problems)
            }
            other => {
                let detail = format!("An amount belongs here, not {}.", shape(other));
                let remedy = format!("Give {{ \"value\": ..., \"unit\": \"{unit}\" }}.");
                self.problems.add(at, detail, remedy);
                None
            }
        }
    }

    /// One of the words of its row.
    pub fn word(&mut self, name: &str) -> Option<&'static str> {
        let Takes::Word(words) = self.row(name)?.takes else {
            return None;
        };
        let value = self.value(name)?;
        let pairs: Vec<(&str, &'static str)> = words.iter().map(|word| (*word, *word)).collect();
        crate::core::documents::reader::word_of(value, &pairs, &self.at.field(name), self.problems)
    }

    /// True or false; false where left out.
    pub fn flag(&mut self, name: &str) -> bool {
        match self.value(name) {
            None => false,
            Some(Value::Bool(flag)) => *flag,
            Some(other) => {
                let detail = format!("true or false belongs here, not {}.", shape(other));
                self.problem(name, detail, "Give true or false without quotes.");
                false
            }
        }
    }

    /// A calendar day.
    pub fn day(&mut self, name: &str) -> Option<Date> {
        let value = self.value(name)?;
        day_of(value, &self.at.field(name), self.problems)
    }

    /// A text.
    pub fn text(&mut self, name: &str) -> Option<String> {
        let value = self.value(name)?;
        text_of(value, &self.at.field(name), self.problems).map(str::to_owned)
    }

    /// A factor as referred to, not yet looked up.
    pub fn reference(&mut self, name: &str) -> Option<FactorRef> {
        let value = self.value(name)?;
        read_input::factor_ref(value, &self.at.field(name), self.problems)
    }

    /// A factor per fuel energy.
    pub fn fuel_factor(&mut self, name: &str) -> Option<Priced> {
        let reference = self.reference(name)?;
        let priced =
            factors::find_per_energy(&reference, self.setting.book, &self.at.field(name), self.problems)?;
        self.record.factors.push(priced.id.clone());
        Some(priced)
    }

    /// A factor that multiplies an amount, whatever it counts.
    pub fn amount_factor(&mut self, name: &str) -> Option<Priced> {
        let reference = self.reference(name)?;
        let priced =
            factors::find_for_amount(&reference, self.setting.book, &self.at.field(name), self.problems)?;
        self.record.factors.push(priced.id.clone());
        Some(priced)
    }

    /// Any row, vehicles included.
    pub fn any_factor(&mut self, name: &str) -> Option<Priced> {
        let reference = self.reference(name)?;
        let priced = factors::find(&reference, self.setting.book, &self.at.field(name), self.problems)?;
        self.record.factors.push(priced.id.clone());
        Some(priced)
    }

    /// An object of gases, kg each.
    pub fn gases(&mut self, name: &str) -> Option<GasVector> {
        let value = self.value(name)?;
        read_input::gases(value, &self.at.field(name), self.problems)
    }

    /// True if the parameter is an object.
    pub fn is_object(&self, name: &str) -> bool {
        matches!(self.value(name), Some(Value::Object(_)))
    }

    /// Reads an object with parameters of its own.
    pub fn nested<T>(&mut self, name: &'static str, read: impl FnOnce(&mut Given) -> Option<T>) -> Option<T> {
        let table = match self.row(name)?.takes {
            Takes::Object(table) | Takes::Vehicle(table) => table,
            _ => return None,
        };
        let value = self.value(name)?;
        let at = self.at.field(name);
        let Value::Object(map) = value else {
            self.problems.add(
                at,
                format!("An object belongs here, not {}.", shape(value)),
                "Give `{ ... }`.",
            );
            return None;
        };
        let mut inner = Given::open(map, table, at, self.setting, self.problems, self.record);
        read(&mut inner)
    }

    /// Reads a list of objects with parameters of their own.
    pub fn nested_list<T>(
        &mut self,
        name: &'static str,
        table: &'static [Parameter],
        mut read: impl FnMut(&mut Given) -> Option<T>,
    ) -> Option<Vec<T>> {
        let value = self.value(name)?;
        let at = self.at.field(name);
        let Value::Array(items) = value else {
            self.problems.add(
                at,
                format!("A list belongs here, not {}.", shape(value)),
                "Give `[ ... ]`.",
            );
            return None;
        };
        let mut out = Vec::with_capacity(items.len());
        for (index, item) in items.iter().enumerate() {
            let place = at.item(index);
            let Value::Object(map) = item else {
                self.problems.add(
                    place,
                    format!("An object belongs here, not {}.", shape(item)),
                    "Give `{ ... }`.",
                );
                continue;
            };
            let mut inner = Given::open(map, table, place, self.setting, self.problems, self.record);
            out.extend(read(&mut inner));
        }
        (out.len() == items.len()).then_some(out)
    }

    /// Kilograms of nitrogen by fertiliser type, in the order of the row's words.
    pub fn nitrogen_by_type(&mut self, name: &str) -> Option<Vec<(&'static str, f64)>> {
        let Takes::NitrogenByType(types) = self.row(name)?.takes else {
            return None;
        };
        let value = self.value(name)?;
        let Value::Object(map) = value else {
            self.problem(
                name,
                format!("An object belongs here, not {}.", shape(value)),
                "Give `{ \"urea\": 40 }`.",
            );
            return None;
        };
        let mut out = Vec::new();
        for (key, amount) in map {
            let Some(kind) = types.iter().find(|kind| *kind == key) else {
                let remedy = format!("Use one of: {}.", types.join(", "));
                let at = self.at.field(name);
                self.problems.add(
                    at.field(key),
                    format!("There is no fertiliser type \"{key}\" here."),
                    remedy,
                );
                continue;
            };
            let at = self.at.field(name);
            let figure = match amount {
                Value::Object(object) => {
                    read_amount(&at.field(key), object, "kg N", self.problems, self.record)
                }
                other => {
                    self.record.origins.push(None);
                    number_of(other, &at.field(key), self.problems)
                }
            };
            match figure {
                Some(figure) if figure < 0.0 => {
                    let at = self.at.field(name);
                    self.problems.add(
                        at.field(key),
                        format!("{figure} kg N is negative."),
                        "Give zero or more.",
                    );
                }
                Some(figure) => out.push((*kind, figure)),
                None => {}
            }
        }
        Some(out)
    }

    /// The word `none` (as `Some(None)`), or an amount in the unit of its row.
    pub fn none_or_amount(&mut self, name: &str) -> Option<Option<f64>> {
        let row = self.row(name)?;
        match self.value(name)? {
            Value::String(word) if word == "none" => Some(None),
            value => {
                let figure = self.figure(name, value, row.unit(), true)?;
                self.within(name, figure, row.unit(), row).map(Some)
            }
        }
    }
}

/// Reads `{ "value", "unit", ... }` in the wanted unit, and records the origin it states.
fn read_amount(
    at: &Place,
    object: &Map<String, Value>,
    unit: &str,
    problems: &mut Problems,
    record: &mut Record,
) -> Option<f64> {
    let known = ["value", "unit", "uncertainty", "origin", "evidence", "note"];
    for field in object.keys().filter(|field| !known.contains(&field.as_str())) {
        let remedy = format!("Known here: {}.", known.join(", "));
        problems.add(
            at.field(field),
            format!("There is no field \"{field}\" here."),
            remedy,
        );
    }
    let origin = object.get("origin").and_then(|v| {
        crate::core::documents::reader::word_of(v, &read_input::origins(), &at.field("origin"), problems)
    });
    record.origins.push(origin);
    if let Some(distribution) = object.get("uncertainty") {
        read_input::uncertainty(distribution, &at.field("uncertainty"), problems);
    }
    let Some(value) = object.get("value") else {
        problems.add(at.field("value"), "\"value\" is missing.", "Add \"value\".");
        return None;
    };
    let value = number_of(value, &at.field("value"), problems)?;
    let Some(given) = object.get("unit") else {
        problems.add(at.field("unit"), "\"unit\" is missing.", "Add \"unit\".");
        return None;
    };
    let given = text_of(given, &at.field("unit"), problems)?;
    match to_unit(value, given, unit) {
        Ok(figure) => Some(figure),
        Err((detail, remedy)) => {
            problems.add(at.field("unit"), detail, remedy);
            None
        }
    }
}

/// Brings an amount to a unit of the same dimension; tags of net energy, heat and power are taken off where the wanted
/// unit has none, gross energy is refused.
fn to_unit(value: f64, given: &str, wanted: &str) -> Result<f64, (String, String)> {
    if given == wanted {
        return Ok(value);
    }
    let words = |error: crate::core::units::UnitError| unit_words(&error);
    let given = parse_unit(given).map_err(words)?;
    let target = parse_unit(if wanted.is_empty() { "percent" } else { wanted }).map_err(words)?;
    let tag_fits = target.dimension == Dimension::ENERGY
        && matches!(
            given.dimension,
            Dimension::ENERGY_NET | Dimension::HEAT | Dimension::POWER
        );
    if given.dimension == Dimension::ENERGY_GROSS && target.dimension == Dimension::ENERGY {
        return Err((
            format!(
                "{} is on the gross heating value; energy in a model is net.",
                given.symbol
            ),
            "Give the energy on the net heating value.".to_owned(),
        ));
    }
    if !tag_fits {
        given.need(target.dimension).map_err(words)?;
    }
    if given.factor == target.factor && given.offset == target.offset {
        return Ok(value);
    }
    let base = given.to_base(value).map_err(words)?;
    target.from_base(base).map_err(words)
}
