//! Reads a JSON object field by field and notes everything that is wrong, each with its pointer.

use super::pointer;
use super::problem::{Problem, Problems};
use crate::core::units::rounding::plain;
use jiff::civil::Date;
use serde_json::{Map, Value};
use std::collections::BTreeSet;
use std::fmt;

/// A place in a document, built up as the reading goes down; printed only when a problem needs it.
#[derive(Clone, Copy)]
pub struct Place<'p> {
    parent: Option<&'p Place<'p>>,
    step: Step<'p>,
}

#[derive(Clone, Copy)]
enum Step<'p> {
    Root,
    Field(&'p str),
    Item(usize),
}

impl<'p> Place<'p> {
    /// The whole document.
    pub const ROOT: Place<'static> = Place {
        parent: None,
        step: Step::Root,
    };

    /// A field of the object at this place.
    pub fn field(&'p self, name: &'p str) -> Place<'p> {
        Place {
            parent: Some(self),
            step: Step::Field(name),
        }
    }

    /// An item of the array at this place.
    pub fn item(&'p self, index: usize) -> Place<'p> {
        Place {
            parent: Some(self),
            step: Step::Item(index),
        }
    }
}

impl fmt::Display for Place<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if let Some(parent) = self.parent {
            parent.fmt(f)?;
        }
        match self.step {
            Step::Root => Ok(()),
            Step::Field(name) => write!(f, "/{}", pointer::step(name)),
            Step::Item(index) => write!(f, "/{index}"),
        }
    }
}

/// How the detail of a problem with a field that nobody knows begins.
const UNKNOWN: &str = "There is no field";

/// True for a problem that [`Fields::close`] noted.
pub fn is_unknown_field(problem: &Problem) -> bool {
    problem.detail.starts_with(UNKNOWN)
}

/// No amount of a pathway is larger, in whatever unit: there is less of anything in the world, and products of a few such
/// figures would leave what a double holds. Smaller slips are the matter of checks (C-11 and its like). Our own judgement.
const LARGEST: f64 = 1e60;

/// The fields of one object while they are being read.
pub struct Fields<'v> {
    map: &'v Map<String, Value>,
    known: Vec<&'static str>,
}

impl<'v> Fields<'v> {
    /// Opens an object.
    pub fn open(value: &'v Value, at: &Place, problems: &mut Problems) -> Option<Fields<'v>> {
        match value {
            Value::Object(map) => Some(Fields {
                map,
                known: Vec::with_capacity(16),
            }),
            other => {
                problems.add(
                    at,
                    format!("An object belongs here, not {}.", shape(other)),
                    "Give `{ ... }`.",
                );
                None
            }
        }
    }

    /// The value of a field; `null` counts as absent.
    pub fn take(&mut self, name: &'static str) -> Option<&'v Value> {
        self.known.push(name);
        self.map.get(name).filter(|value| !value.is_null())
    }

    /// True if the object has the field; does not count as reading it.
    pub fn has(&self, name: &str) -> bool {
        self.map.get(name).is_some_and(|value| !value.is_null())
    }

    /// Notes a required field that is absent; does not count as reading it.
    pub fn need(&self, name: &str, at: &Place, problems: &mut Problems) {
        if !self.has(name) {
            Self::missing(name, at, problems);
        }
    }

    /// Notes that a required field is absent.
    pub fn missing(name: &str, at: &Place, problems: &mut Problems) {
        problems.add(
            at.field(name),
            format!("\"{name}\" is missing."),
            format!("Add \"{name}\"."),
        );
    }

    /// An optional text.
    pub fn text(&mut self, name: &'static str, at: &Place, problems: &mut Problems) -> Option<String> {
        let value = self.take(name)?;
        text_of(value, &at.field(name), problems).map(str::to_owned)
    }

    /// A required text.
    pub fn required_text(
        &mut self,
        name: &'static str,
        at: &Place,
        problems: &mut Problems,
    ) -> Option<String> {
        if !self.has(name) {
            self.known.push(name);
            Self::missing(name, at, problems);
            return None;
        }
        self.text(name, at, problems)
    }

    /// An optional number.
    pub fn number(&mut self, name: &'static str, at: &Place, problems: &mut Problems) -> Option<f64> {
        let value = self.take(name)?;
        number_of(value, &at.field(name), problems)
    }

    /// An optional amount of something: a number that somebody can have measured.
    pub fn amount(&mut self, name: &'static str, at: &Place, problems: &mut Problems) -> Option<f64> {
        let figure = self.number(name, at, problems)?;
        if figure.abs() > LARGEST {
            let detail = format!("{} is more than there is of anything.", plain(figure));
            problems.add(at.field(name), detail, "Check the figure and its unit.");
            return None;
        }
        Some(figure)
    }

    /// An optional share in %.
    pub fn percent(&mut self, name: &'static str, at: &Place, problems: &mut Problems) -> Option<f64> {
        let figure = self.number(name, at, problems)?;
        if !(0.0..=100.0).contains(&figure) {
            problems.add(
                at.field(name),
                format!("{figure} % is outside 0 to 100 %."),
                "Check the figure.",
            );
            return None;
        }
        Some(figure)
    }

    /// A required number.
    pub fn required_number(
        &mut self,
        name: &'static str,
        at: &Place,
        problems: &mut Problems,
    ) -> Option<f64> {
        self.need(name, at, problems);
        self.number(name, at, problems)
    }

    /// The one of several numbers that is given, by its position in `names`. None, with a problem, where none or more than
    /// one is.
    pub fn one_number(
        &mut self,
        names: &[&'static str],
        what: &str,
        at: &Place,
        problems: &mut Problems,
    ) -> Option<(usize, f64)> {
        let given: Vec<(usize, &'static str)> = names
            .iter()
            .copied()
            .enumerate()
            .filter(|(_, name)| self.has(name))
            .collect();
        let figures: Vec<Option<f64>> = names.iter().map(|name| self.number(name, at, problems)).collect();
        match given[..] {
            [(index, _)] => figures
                .get(index)
                .copied()
                .flatten()
                .map(|figure| (index, figure)),
            [] => {
                let first = names.first().copied().unwrap_or("");
                let remedy = format!("Give one of: {}.", names.join(", "));
                problems.add(at.field(first), format!("The {what} is missing."), remedy);
                None
            }
            [.., (_, last)] => {
                let remedy = format!("Keep one of: {}.", names.join(", "));
                problems.add(
                    at.field(last),
                    format!("The {what} is given more than once."),
                    remedy,
                );
                None
            }
        }
    }

    /// An optional truth value.
    pub fn flag(&mut self, name: &'static str, at: &Place, problems: &mut Problems) -> Option<bool> {
        match self.take(name)? {
            Value::Bool(flag) => Some(*flag),
            other => {
                let detail = format!("true or false belongs here, not {}.", shape(other));
                problems.add(at.field(name), detail, "Give true or false without quotes.");
                None
            }
        }
    }

    /// An optional day.
    pub fn day(&mut self, name: &'static str, at: &Place, problems: &mut Problems) -> Option<Date> {
        let value = self.take(name)?;
        day_of(value, &at.field(name), problems)
    }

    /// One of a fixed set of words.
    pub fn word<T: Copy>(
        &mut self,
        name: &'static str,
        words: &[(&'static str, T)],
        at: &Place,
        problems: &mut Problems,
    ) -> Option<T> {
        let value = self.take(name)?;
        word_of(value, words, &at.field(name), problems)
    }

    /// An optional field that `read` reads.
    pub fn part<T>(
        &mut self,
        name: &'static str,
        at: &Place,
        problems: &mut Problems,
        read: impl FnOnce(&'v Value, &Place, &mut Problems) -> Option<T>,
    ) -> Option<T> {
        let value = self.take(name)?;
        read(value, &at.field(name), problems)
    }

    /// A list; each item is read by `read`.
    pub fn list<T>(
        &mut self,
        name: &'static str,
        at: &Place,
        problems: &mut Problems,
        mut read: impl FnMut(&'v Value, &Place, &mut Problems) -> Option<T>,
    ) -> Vec<T> {
        match self.take(name) {
            None => Vec::new(),
            Some(Value::Array(items)) => {
                let place = at.field(name);
                items
                    .iter()
                    .enumerate()
                    .filter_map(|(i, item)| read(item, &place.item(i), problems))
                    .collect()
            }
            Some(other) => {
                let detail = format!("A list belongs here, not {}.", shape(other));
                problems.add(at.field(name), detail, "Give `[ ... ]`.");
                Vec::new()
            }
        }
    }

    /// Notes every field that nobody asked for.
    pub fn close(self, at: &Place, problems: &mut Problems) {
        for name in self
            .map
            .keys()
            .filter(|name| !self.known.contains(&name.as_str()))
        {
            let remedy = match nearest(name, self.known.iter().copied()) {
                Some(near) => format!("Take it out, or write \"{near}\" if that was meant."),
                None => format!("Take it out; known here: {}.", self.known.join(", ")),
            };
            problems.add(at.field(name), format!("{UNKNOWN} \"{name}\" here."), remedy);
        }
    }
}

/// Notes every key that stands twice in a list; `field` is its name in the items.
pub fn unique<'k>(keys: impl Iterator<Item = &'k str>, at: &Place, field: &str, problems: &mut Problems) {
    let mut seen = BTreeSet::new();
    for (index, key) in keys.enumerate() {
        if !key.is_empty() && !seen.insert(key) {
            problems.add(
                at.item(index).field(field),
                format!("\"{key}\" stands twice."),
                "Give each a name of its own.",
            );
        }
    }
}

/// Opens a whole document, reads it, and refuses unknown fields.
///
/// # Errors
/// Everything that is wrong with its shape, each with its pointer.
pub fn whole<'v, T>(
    value: &'v Value,
    read: impl FnOnce(&mut Fields<'v>, &Place, &mut Problems) -> Option<T>,
) -> Result<T, Problems> {
    let mut problems = Problems::default();
    match object(value, &Place::ROOT, &mut problems, read) {
        Some(read) if problems.is_empty() => Ok(read),
        _ => Err(problems),
    }
}

/// Opens an object inside a document, reads it, and refuses unknown fields.
pub fn object<'v, T>(
    value: &'v Value,
    at: &Place,
    problems: &mut Problems,
    read: impl FnOnce(&mut Fields<'v>, &Place, &mut Problems) -> Option<T>,
) -> Option<T> {
    let mut fields = Fields::open(value, at, problems)?;
    let out = read(&mut fields, at, problems);
    fields.close(at, problems);
    out
}

/// A text, kept as given; control characters other than tab and line ends are refused.
pub fn text_of<'v>(value: &'v Value, at: &Place, problems: &mut Problems) -> Option<&'v str> {
    match value {
        Value::String(text)
            if text
                .chars()
                .any(|c| c.is_control() && !matches!(c, '\n' | '\r' | '\t')) =>
        {
            problems.add(at, "The text holds control characters.", "Take them out.");
            None
        }
        Value::String(text) if text.len() > 20_000 => {
            problems.add(at, "The text is longer than 20 000 bytes.", "Shorten it.");
            None
        }
        Value::String(text) => Some(text),
        other => {
            problems.add(
                at,
                format!("A text belongs here, not {}.", shape(other)),
                "Put it in quotes.",
            );
            None
        }
    }
}

/// A finite number.
pub fn number_of(value: &Value, at: &Place, problems: &mut Problems) -> Option<f64> {
    match value.as_f64().filter(|number| number.is_finite()) {
        Some(number) => Some(number),
        None => {
            let detail = format!("A number belongs here, not {}.", shape(value));
            problems.add(at, detail, "Give a plain JSON number, without quotes or unit.");
            None
        }
    }
}

/// A calendar day.
pub fn day_of(value: &Value, at: &Place, problems: &mut Problems) -> Option<Date> {
    let text = text_of(value, at, problems)?;
    let day = if text.len() == 10 {
        text.parse::<Date>().ok()
    } else {
        None
    };
    if day.is_none() {
        problems.add(
            at,
            format!("\"{text}\" is not a day."),
            "Write it as year-month-day, such as 2026-10-01.",
        );
    }
    day
}

/// One of a fixed set of words.
pub fn word_of<T: Copy>(
    value: &Value,
    words: &[(&str, T)],
    at: &Place,
    problems: &mut Problems,
) -> Option<T> {
    let text = text_of(value, at, problems)?;
    let found = words
        .iter()
        .find(|(word, _)| *word == text)
        .map(|(_, meaning)| *meaning);
    if found.is_none() {
        let known = words.iter().map(|(word, _)| *word).collect::<Vec<_>>().join(", ");
        problems.add(
            at,
            format!("\"{text}\" is not known here."),
            format!("Choose one of: {known}."),
        );
    }
    found
}

/// What kind of JSON value stands somewhere, in words.
pub fn shape(value: &Value) -> &'static str {
    match value {
        Value::Null => "null",
        Value::Bool(_) => "true or false",
        Value::Number(_) => "a number",
        Value::String(_) => "a text",
        Value::Array(_) => "a list",
        Value::Object(_) => "an object",
    }
}

/// The known name nearest to a wrong one, if it is near at all (edit distance of at most a third).
pub fn nearest<'n>(wrong: &str, known: impl Iterator<Item = &'n str>) -> Option<&'n str> {
    if wrong.len() > 64 {
        return None;
    }
    known
        .map(|name| (distance(wrong, name), name))
        .filter(|(distance, name)| *distance <= (name.len().max(wrong.len()) / 3).max(1))
        .min()
        .map(|(_, name)| name)
}

fn distance(a: &str, b: &str) -> usize {
    let b: Vec<char> = b.chars().collect();
    let mut row: Vec<usize> = (0..=b.len()).collect();
    for (i, x) in a.chars().enumerate() {
        let mut diagonal = row[0];
        row[0] = i + 1;
        for (j, y) in b.iter().enumerate() {
            let replaced = diagonal + usize::from(x != *y);
            diagonal = row[j + 1];
            row[j + 1] = replaced.min(row[j] + 1).min(diagonal + 1);
        }
    }
    row[b.len()]
}
