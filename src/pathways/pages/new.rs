//! A new pathway: from a few facts, with a chain to start from, or from a document as it is.

use super::Fault;
use crate::core::documents::pathway::{Flow, Intake, Output, Period, Stage};
use crate::core::documents::{Pathway, pathway};
use crate::core::domain::{Book, Material, StageKind};
use crate::web::filters;
use crate::web::frame::{Frame, Section};
use askama::Template;
use jiff::civil::Date;
use std::collections::BTreeMap;

/// The page that begins a pathway, or puts another document in place of one.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "new.html")]
pub struct NewPathway {
    /// Round the page.
    pub frame: Frame,
    /// What was typed.
    pub typed: Start,
    /// Feedstocks: id, name.
    pub feedstocks: Vec<(String, String)>,
    /// Rule sets: id, title.
    pub rule_sets: Vec<(String, String)>,
    /// What is wrong with the short form.
    pub faults: Vec<Fault>,
    /// The document as typed.
    pub document: String,
    /// What is wrong with the document.
    pub document_faults: Vec<Fault>,
}

/// The page of a pathway's whole document.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "document.html")]
pub struct ShowDocument {
    /// Round the page.
    pub frame: Frame,
    /// Which pathway, which revision the form began from.
    pub head: super::Head,
    /// Name of the pathway.
    pub name: String,
    /// The document as typed or stored.
    pub document: String,
    /// Why, as typed.
    pub why: String,
    /// What is wrong with the document.
    pub document_faults: Vec<Fault>,
    /// Number of the revision that the form is saved on top of.
    pub expected: u64,
    /// Who saved meanwhile.
    pub meeting: Option<super::meeting::Meeting>,
    /// What they changed.
    pub met: Vec<super::card::merge::Met>,
    /// How many fields differ, as a sentence.
    pub differ: String,
}

/// The facts a pathway starts from, as typed.
#[derive(Clone, Debug, Default, PartialEq, Eq, serde::Deserialize)]
#[serde(default)]
pub struct Start {
    /// Name.
    pub name: String,
    /// Material id.
    pub feedstock: String,
    /// Id of the rule set.
    pub rule_set: String,
    /// First day.
    pub from: String,
    /// Last day.
    pub to: String,
    /// Day the plant started; may be empty.
    pub plant_started: String,
}

impl NewPathway {
    /// The page as typed.
    pub fn of(
        typed: Start,
        faults: Vec<Fault>,
        document: String,
        document_faults: Vec<Fault>,
        book: &Book,
    ) -> NewPathway {
        NewPathway {
            frame: Frame::new("New pathway", Section::Pathways, "POST /api/v1/pathways"),
            feedstocks: feedstocks(book),
            rule_sets: rule_sets(book),
            typed,
            faults,
            document,
            document_faults,
        }
    }

    /// What is wrong with a field of the short form.
    pub fn wrong(&self, id: &str) -> Vec<&Fault> {
        wrong(&self.faults, id)
    }
}

/// The faults that stand at a field of the short form.
pub fn wrong<'f>(faults: &'f [Fault], id: &str) -> Vec<&'f Fault> {
    let about = |fault: &&Fault| fault.href.as_deref().and_then(|href| href.strip_prefix('#')) == Some(id);
    faults.iter().filter(about).collect()
}

/// Feedstocks to choose from: id, name.
pub fn feedstocks(book: &Book) -> Vec<(String, String)> {
    let crops = book.materials.values().filter(|material| makes_ethanol(material));
    crops
        .map(|material| (material.id.clone(), material.name.clone()))
        .collect()
}

/// Rule sets to choose from: id, title.
pub fn rule_sets(book: &Book) -> Vec<(String, String)> {
    let offered = book.offered_rule_sets().into_iter();
    offered
        .map(|rules| (rules.id.clone(), rules.title.clone()))
        .collect()
}

/// True for what ethanol can be made of: crops, residues, intermediates and wood whose carbon, starch or sugar is
/// known. What a works leaves behind is none, even where its carbon is known.
fn makes_ethanol(material: &Material) -> bool {
    matches!(
        material.kind.as_str(),
        "crop" | "residue" | "intermediate" | "wood"
    ) && !matches!(
        material.id.as_str(),
        "thin_stillage" | "digestate" | "filter_cake" | "manure" | "animal_fat_tallow" | "waste_cooking_oil"
    ) && [
        "carbon_percent_dry",
        "carbon_percent_ash_free",
        "starch_percent_dry",
        "sugar_percent_dry",
    ]
    .iter()
    .any(|name| material.properties.contains_key(*name))
}

/// The field of the short form that a pointer into the document is about: its address and its name.
pub fn field(pointer: &str) -> (Option<String>, String) {
    let (id, name) = match pointer {
        "/name" => ("name", "Name"),
        "/feedstock" => ("feedstock", "Feedstock"),
        "/rule_set" => ("rule_set", "Rule set"),
        "/period" | "/period/from" => ("from", "First day"),
        "/period/to" => ("to", "Last day"),
        "/plant_started" => ("plant_started", "Plant started"),
        other => return (None, other.trim_start_matches('/').to_owned()),
    };
    (Some(format!("#{id}")), name.to_owned())
}

/// The facts that a short form gives, read.
pub struct Begun {
    /// Name.
    pub name: String,
    /// Material id.
    pub feedstock: String,
    /// Id of the rule set.
    pub rule_set: String,
    /// First and last day.
    pub period: Period,
    /// Day the plant started.
    pub plant_started: Option<Date>,
}

impl Start {
    /// The starter chain: field, haul, works, delivery, each with round figures to be replaced.
    ///
    /// # Errors
    /// What cannot be read, as fields and sentences.
    pub fn pathway(&self, book: &Book) -> Result<Pathway, Vec<Fault>> {
        let Begun {
            name,
            feedstock,
            rule_set,
            period,
            plant_started,
        } = self.facts(book, &[])?;
        Ok(Pathway {
            format: pathway::FORMAT.to_owned(),
            name,
            example: false,
            note: Some(
                "The amounts are a start, not data: put your own in their place, stage by stage.".to_owned(),
            ),
            stages: starter(&feedstock),
            feedstock,
            period,
            rule_set,
            plant_started,
            plant_capacity_per_year: None,
            materials: Vec::new(),
            defaults: BTreeMap::new(),
            not_covered: Vec::new(),
            audits: Vec::new(),
        })
    }

    /// The facts, read; `own` are the materials that the document itself describes.
    ///
    /// # Errors
    /// What cannot be read, as fields and sentences.
    pub fn facts(&self, book: &Book, own: &[pathway::OwnMaterial]) -> Result<Begun, Vec<Fault>> {
        let mut faults = Vec::new();
        let mut fault = |id: &str, place: &str, detail: &str, remedy: &str| {
            faults.push(Fault {
                href: Some(format!("#{id}")),
                place: place.to_owned(),
                detail: detail.to_owned(),
                remedy: remedy.to_owned(),
            });
        };
        let day = |text: &str| text.trim().parse::<Date>().ok();
        if self.name.trim().is_empty() {
            fault(
                "name",
                "Name",
                "The pathway has no name.",
                "Give it one that you will know it by.",
            );
        }
        let is_own = own.iter().any(|material| material.id == self.feedstock);
        if !is_own && !book.materials.contains_key(&self.feedstock) {
            fault(
                "feedstock",
                "Feedstock",
                "There is no such feedstock.",
                "Choose one of the list.",
            );
        }
        if !book.rule_sets.contains_key(&self.rule_set) {
            fault(
                "rule_set",
                "Rule set",
                "There is no such rule set.",
                "Choose one of the list.",
            );
        }
        let (from, to) = (day(&self.from), day(&self.to));
        if from.is_none() {
            fault(
                "from",
                "First day",
                "The first day is no day of the calendar.",
                "Give it as 2026-07-01.",
            );
        }
        if to.is_none() {
            fault(
                "to",
                "Last day",
                "The last day is no day of the calendar.",
                "Give it as 2027-06-30.",
            );
        }
        let started = match self.plant_started.trim() {
            "" => None,
            text => {
                let started = day(text);
                if started.is_none() {
                    fault(
                        "plant_started",
                        "Plant started",
                        "That is no day of the calendar.",
                        "Give it as 2017-05-01, or leave it empty.",
                    );
                }
                started
            }
        };
        let (Some(from), Some(to), true) = (from, to, faults.is_empty()) else {
            return Err(faults);
        };
        Ok(Begun {
            name: self.name.trim().to_owned(),
            feedstock: self.feedstock.clone(),
            rule_set: self.rule_set.clone(),
            period: Period { from, to, kind: None },
            plant_started: started,
        })
    }
}

fn starter(feedstock: &str) -> Vec<Stage> {
    let tonne = |amount: f64| Flow {
        amount: Some(amount),
        unit: Some("t".to_owned()),
        ..Flow::default()
    };
    let pure = |amount: f64| Flow {
        strength_percent_mass: Some(99.8),
        ..tonne(amount)
    };
    let stage =
        |key: &str, kind: StageKind, name: &str, material: &str, flow: Flow, intakes: Vec<(&str, Flow)>| {
            Stage {
                key: key.to_owned(),
                kind,
                name: Some(name.to_owned()),
                note: None,
                grown: None,
                output: Output {
                    material: material.to_owned(),
                    flow,
                },
                intakes: intakes
                    .into_iter()
                    .map(|(from, flow)| Intake {
                        from: from.to_owned(),
                        product: None,
                        flow,
                    })
                    .collect(),
                inputs: Vec::new(),
                co_products: Vec::new(),
                allocation: None,
                stated: None,
                meters: Vec::new(),
                earlier_periods: Vec::new(),
            }
        };
    vec![
        stage(
            "field",
            StageKind::Cultivation,
            "Growing",
            feedstock,
            tonne(8.0),
            vec![],
        ),
        stage(
            "haul-in",
            StageKind::FeedstockTransport,
            "Haul to works",
            feedstock,
            tonne(1.0),
            vec![("field", tonne(1.0))],
        ),
        stage(
            "works",
            StageKind::Processing,
            "Works",
            "ethanol",
            pure(30.0),
            vec![("haul-in", tonne(100.0))],
        ),
        stage(
            "delivery",
            StageKind::FuelTransport,
            "Delivery",
            "ethanol",
            pure(1.0),
            vec![("works", pure(1.0))],
        ),
    ]
}
