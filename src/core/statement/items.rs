//! The items that a statement holds, each with the laws that ask for it: a table of `library`, with its sources.

use crate::core::documents::statement::facts::Law;
use crate::core::domain::Citation;

/// The items, and the laws.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Items {
    /// Every item, in the order of the sections.
    pub items: Vec<Item>,
    /// Every law.
    pub laws: Vec<LawLine>,
}

/// An item of a statement.
#[derive(Clone, Debug, PartialEq)]
pub struct Item {
    /// Id, such as `S-202`.
    pub id: String,
    /// Section of the statement.
    pub section: String,
    /// What it is.
    pub item: String,
    /// Who asks for it.
    pub must: Asked,
    /// True where it is good to have although nobody asks.
    pub good: bool,
    /// Why.
    pub why: String,
    /// Where it is entered.
    pub place: Place,
    /// Pointer to its field in the statement.
    pub pointer: String,
    /// Source and status.
    pub citation: Citation,
}

/// Who asks for an item.
#[derive(Clone, Debug, PartialEq)]
pub enum Asked {
    /// Every statement holds it.
    Always,
    /// These laws; none: nobody.
    By(Vec<Law>),
}

/// The kind of place where an item is entered.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize, utoipa::ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Place {
    /// The draft of the statement.
    Statement,
    /// The facts of the pathway.
    Pathway,
    /// A stage of the pathway.
    Stage,
    /// Nowhere: it comes about when the statement is issued.
    Issue,
}

/// A law.
#[derive(Clone, Debug, PartialEq)]
pub struct LawLine {
    /// The law.
    pub law: Law,
    /// Its name on pages.
    pub title: String,
    /// Rule sets under which it holds without being named.
    pub rule_sets: Vec<String>,
    /// Years for which it wants records kept, where it says.
    pub keep_years: Option<i64>,
    /// Source and status.
    pub citation: Citation,
}

impl Items {
    /// The laws that a statement answers to: those of its rule set, and those it names.
    pub fn laws_of(&self, rule_set: &str, named: &[Law]) -> Vec<Law> {
        let holds =
            |line: &&LawLine| named.contains(&line.law) || line.rule_sets.iter().any(|id| id == rule_set);
        self.laws.iter().filter(holds).map(|line| line.law).collect()
    }

    /// The most years for which any of these laws wants records kept.
    pub fn keep_years(&self, rule_set: &str, named: &[Law]) -> i64 {
        let laws = self.laws_of(rule_set, named);
        let years = self
            .laws
            .iter()
            .filter(|line| laws.contains(&line.law))
            .filter_map(|line| line.keep_years);
        years.max().unwrap_or(0)
    }

    /// The item of an id.
    pub fn find(&self, id: &str) -> Option<&Item> {
        self.items.iter().find(|item| item.id == id)
    }
}

impl Item {
    /// Which of the laws ask for it; none when nobody does.
    pub fn asked_by(&self, laws: &[Law]) -> Option<Vec<Law>> {
        match &self.must {
            Asked::Always => Some(Vec::new()),
            Asked::By(asking) => {
                let found: Vec<Law> = asking.iter().copied().filter(|law| laws.contains(law)).collect();
                (!found.is_empty()).then_some(found)
            }
        }
    }
}
