//! The page of the settings of the checks: each with its meaning, unit, standard figure and the one in force.

use crate::core::checks::settings::{Range, SETTINGS, Settings};
use crate::core::documents::Problem;
use crate::core::documents::pointer;
use crate::core::units::rounding::{plain, show_all};
use crate::web::filters;
use crate::web::frame::{Frame, Section};
use crate::web::typed::figure;
use askama::Template;
use serde_json::{Map, Value, json};
use std::collections::BTreeMap;

/// Where the harvests stand in the document.
const HARVESTS: &str = "usual_yield_t_per_ha";

/// The page of the settings.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "rules/settings.html")]
pub struct SettingsPage {
    /// Round the page.
    pub frame: Frame,
    /// Hash of the settings that the form began from.
    pub seen: String,
    /// True after a save.
    pub saved: bool,
    /// True if the reader may change them.
    pub may_write: bool,
    /// What is wrong and belongs to no field: fact, remedy.
    pub faults: Vec<(String, String)>,
    /// How many fields are refused.
    pub refused: usize,
    /// True if somebody else saved meanwhile.
    pub stale: bool,
    /// Tolerances and ranges.
    pub rows: Vec<SettingRow>,
    /// Usual harvests by crop.
    pub harvests: Vec<SettingRow>,
    /// Another crop, as typed: name, least, most.
    pub crop: (String, String, String),
    /// What is wrong with it.
    pub crop_wrong: Vec<(String, String)>,
}

/// One figure.
#[derive(Clone, Debug, PartialEq)]
pub struct SettingRow {
    /// Name of its field, as its pointer in the document without the first slash.
    pub name: String,
    /// Id of its field.
    pub id: String,
    /// What it means.
    pub meaning: String,
    /// Id of the check that uses it.
    pub check: &'static str,
    /// Unit; empty for a plain ratio.
    pub unit: &'static str,
    /// The standard figure; empty for a crop of one's own.
    pub standard: String,
    /// What may be given.
    pub limits: String,
    /// The figure in force, or what was typed.
    pub text: String,
    /// True if it is not the standard one.
    pub own: bool,
    /// What is wrong: fact, remedy.
    pub wrong: Vec<(String, String)>,
    /// What somebody else saved meanwhile, where it differs from what was typed.
    pub theirs: Option<String>,
}

impl SettingsPage {
    /// The page of settings in force.
    pub fn of(settings: &Settings, seen: &str, may_write: bool) -> SettingsPage {
        let standard = Settings::standard();
        let rows = SETTINGS.iter().enumerate().map(|(k, setting)| {
            let (low, high) = setting.limits;
            row(
                setting.name.replace('.', "/"),
                format!("s-{k}"),
                setting.meaning,
                (setting.check, setting.unit),
                Some((setting.value)(standard)),
                (setting.value)(settings),
                format!("{} to {}", plain(low), plain(high)),
            )
        });
        let mut crops: BTreeMap<&String, (Option<Range>, Option<Range>)> = BTreeMap::new();
        for (crop, range) in &standard.usual_yield_t_per_ha {
            crops.entry(crop).or_default().0 = Some(*range);
        }
        for (crop, range) in &settings.usual_yield_t_per_ha {
            crops.entry(crop).or_default().1 = Some(*range);
        }
        let mut harvests = Vec::new();
        for (k, (crop, (standard, now))) in crops.into_iter().enumerate() {
            let words = filters::capital(&crop.replace('_', " "));
            let escaped = pointer::step(crop);
            for (end, word) in [("low", "least"), ("high", "most")] {
                let of = |range: Range| if end == "low" { range.low } else { range.high };
                let Some(figure) = now.or(standard).map(of) else {
                    continue;
                };
                let mut made = row(
                    format!("{HARVESTS}/{escaped}/{end}"),
                    format!("h-{k}-{end}"),
                    &format!("{words}, {word}"),
                    ("C-09", "t/ha"),
                    standard.map(of),
                    figure,
                    "0 to 500".to_owned(),
                );
                if now.is_none() {
                    made.text.clear();
                    made.own = true;
                }
                harvests.push(made);
            }
        }
        SettingsPage {
            frame: Frame::new("Settings of the checks", Section::Factors, "GET /api/v1/settings"),
            seen: seen.to_owned(),
            saved: false,
            may_write,
            faults: Vec::new(),
            refused: 0,
            stale: false,
            rows: rows.collect(),
            harvests,
            crop: Default::default(),
            crop_wrong: Vec::new(),
        }
    }

    /// Takes what was typed into the page; the document it makes, unless a text is no figure. What is left empty is at its
    /// standard; a crop of one's own whose two fields are empty is taken out.
    pub fn take(&mut self, typed: &BTreeMap<String, String>) -> Option<Value> {
        let mut document = Map::new();
        let mut harvests = Map::new();
        let mut well = true;
        for row in self.rows.iter_mut().chain(&mut self.harvests) {
            if let Some(text) = typed.get(&row.name) {
                row.text = text.trim().to_owned();
            }
            let text = match (row.text.is_empty(), row.standard.as_str()) {
                (false, _) => row.text.clone(),
                (true, "") => continue,
                (true, standard) => standard.to_owned(),
            };
            match figure(&text) {
                Err(wrong) => {
                    row.wrong.push(wrong);
                    well = false;
                }
                Ok(figure) => put(&mut document, &mut harvests, &row.name, figure),
            }
        }
        let of = |name: &str| typed.get(name).map_or("", |text| text.trim()).to_owned();
        self.crop = (of("new-crop"), of("new-low"), of("new-high"));
        let (crop, low, high) = self.crop.clone();
        if !(crop.is_empty() && low.is_empty() && high.is_empty()) {
            match (crop.is_empty(), figure(&low), figure(&high)) {
                (false, Ok(low), Ok(high)) => {
                    harvests.insert(crop, json!({ "low": low, "high": high }));
                }
                (true, ..) => self.crop_wrong.push((
                    "The crop has no name.".to_owned(),
                    "Name it as the soil model does, such as sugar_beet.".to_owned(),
                )),
                (_, Err(wrong), _) | (_, _, Err(wrong)) => self.crop_wrong.push(wrong),
            }
        }
        document.insert(HARVESTS.to_owned(), Value::Object(harvests));
        self.count();
        (well && self.crop_wrong.is_empty()).then_some(Value::Object(document))
    }

    /// Puts problems of the document at their fields.
    pub fn refuse(&mut self, problems: &[Problem]) {
        for problem in problems {
            let pointer = problem.pointer.trim_start_matches('/');
            let wrong = (problem.detail.clone(), problem.remedy.clone());
            let low = format!("{pointer}/low");
            let mut all = self.rows.iter_mut().chain(&mut self.harvests);
            match all.find(|row| row.name == pointer || row.name == low) {
                Some(row) => row.wrong.push(wrong),
                None if pointer.starts_with(HARVESTS) => self.crop_wrong.push(wrong),
                None => self.faults.push(wrong),
            }
        }
        self.count();
    }

    /// Somebody else saved meanwhile: what they saved stands beside what was typed.
    pub fn stale(&mut self, now: &Settings, hash: String) {
        let theirs = SettingsPage::of(now, &hash, true);
        let rows = |page: &SettingsPage| {
            let all = page.rows.iter().chain(&page.harvests);
            all.map(|row| (row.name.clone(), row.text.clone()))
                .collect::<BTreeMap<_, _>>()
        };
        let theirs = rows(&theirs);
        for row in self.rows.iter_mut().chain(&mut self.harvests) {
            row.theirs = theirs.get(&row.name).filter(|text| **text != row.text).cloned();
        }
        self.seen = hash;
        self.stale = true;
    }

    fn count(&mut self) {
        let all = self.rows.iter().chain(&self.harvests);
        self.refused =
            all.filter(|row| !row.wrong.is_empty()).count() + usize::from(!self.crop_wrong.is_empty());
    }
}

fn row(
    name: String,
    id: String,
    meaning: &str,
    (check, unit): (&'static str, &'static str),
    standard: Option<f64>,
    figure: f64,
    limits: String,
) -> SettingRow {
    SettingRow {
        name,
        id,
        meaning: filters::capital(meaning),
        check,
        unit: if unit == "percent" { "%" } else { unit },
        standard: standard.map_or_else(String::new, show_all),
        limits,
        text: plain(figure),
        own: standard != Some(figure),
        wrong: Vec::new(),
        theirs: None,
    }
}

fn put(document: &mut Map<String, Value>, harvests: &mut Map<String, Value>, name: &str, figure: f64) {
    let parts: Vec<String> = name.split('/').map(pointer::name).collect();
    let (into, first, end) = match parts.as_slice() {
        [only] => {
            document.insert(only.clone(), json!(figure));
            return;
        }
        [range, end] => (document, range, end),
        [_, crop, end] => (harvests, crop, end),
        _ => return,
    };
    let range = into.entry(first.clone()).or_insert_with(|| json!({}));
    if let Some(range) = range.as_object_mut() {
        range.insert(end.clone(), json!(figure));
    }
}
