//! What stands on the paper: texts that are ready to print. Every figure was rounded before it came here.

use serde::{Deserialize, Serialize};

/// A statement as it is printed. A part that is empty has no heading on the paper.
///
/// Texts are plain: no markup is read in any of them. `CO2`, `CO2e`, `N2O`, `CH4` and the terms of the sum (`e_ec`) are
/// set with their subscripts; a line break in a value of a [`Fact`] is a line break on paper.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Sheet {
    /// The heading, such as "Greenhouse-gas statement for fuel ethanol".
    pub title: String,
    /// Number of the statement; never used again for another.
    pub number: String,
    /// Version of the statement, from 1.
    pub version: u32,
    /// SHA-256 of the statement's canonical bytes, 64 hexadecimal digits.
    pub hash: String,
    /// The day of issue; of the draft, where it is not issued.
    pub day: Day,
    /// The same day as words, with what it is: "issued 2 September 2026".
    pub dated: String,
    /// Version of the program that made the figures, such as "0.1.0".
    pub program: String,
    /// True for demonstration data: every page says EXAMPLE.
    pub example: bool,
    /// What a reader must know before any figure: a draft, replaced by another, withdrawn.
    pub notices: Vec<String>,
    /// The answer in one line.
    pub answer: Answer,
    /// Issuer, recipient, and the facts of the consignment.
    pub parties: Vec<Fact>,
    /// The fuel, its feedstock and the works.
    pub product: Vec<Fact>,
    /// The result by term.
    pub terms: Terms,
    /// Rule set and editions, gas weights, sharing, data quality, mass balance.
    pub method: Vec<Fact>,
    /// The ladder.
    pub ladder: Option<Picture>,
    /// The result by stage, wheel first.
    pub stages: Table,
    /// The crop's carbon, apart from the account.
    pub carbon: Table,
    /// What was declared for the land.
    pub land: Table,
    /// Factors used, with the numbers of their sources.
    pub factors: Table,
    /// The sources, in the order of their numbers from 1: each is printed once and named by its number elsewhere.
    pub sources: Vec<String>,
    /// Findings that needed a reason, with the reason, and those that inform.
    pub findings: Table,
    /// What the figure does not cover, a sentence each.
    pub not_covered: Vec<String>,
    /// Who verified, to which level.
    pub verification: Vec<Fact>,
    /// The people who signed; two of them on an issued statement.
    pub signatures: Vec<Signature>,
    /// How to check the paper.
    pub check: Check,
    /// Cautions, a sentence or two each.
    pub cautions: Vec<String>,
    /// The workings, stage by stage, field first.
    pub annex: Vec<Chapter>,
}

/// A day of the calendar.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Day {
    /// Year, 1 to 9999.
    pub year: u16,
    /// Month, 1 to 12.
    pub month: u8,
    /// Day of the month.
    pub day: u8,
}

impl Default for Day {
    fn default() -> Self {
        Day {
            year: 1970,
            month: 1,
            day: 1,
        }
    }
}

/// The answer: the net, the saving and whether it is enough.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Answer {
    /// The net: "32.89".
    pub net: String,
    /// Its unit: "g CO2e/MJ".
    pub unit: String,
    /// The saving, where one is printed: "65.01 % below petrol".
    pub saving: Option<String>,
    /// The verdict, where one is given: "meets 60 %".
    pub verdict: Option<String>,
    /// False if the verdict is that a required saving is missed.
    pub meets: bool,
    /// Basis, baseline, and how the verdict was reached.
    pub note: String,
}

/// One fact: a label and what holds for it.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Fact {
    /// Label, such as "Issued by".
    pub label: String,
    /// What holds.
    pub value: String,
}

impl Fact {
    /// A fact.
    pub fn new(label: impl Into<String>, value: impl Into<String>) -> Fact {
        Fact {
            label: label.into(),
            value: value.into(),
        }
    }
}

/// The sum by term.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Terms {
    /// The terms in the order of the sum.
    pub rows: Vec<TermRow>,
    /// The net in two decimals: "32.89".
    pub net: String,
    /// The unit of all figures: "g CO2e/MJ".
    pub unit: String,
    /// How the saving follows: "(94 - 32.89) / 94 = 65.01 %"; empty without one.
    pub saving: String,
    /// Rounding, and what stands beside the result.
    pub notes: Vec<String>,
}

/// One term.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct TermRow {
    /// Sign in the sum as printed: empty, "+" or a true minus.
    pub sign: String,
    /// The term: "e_ec".
    pub term: String,
    /// What it holds.
    pub holds: String,
    /// Kind of value: actual, regional, default, not claimed.
    pub kind: String,
    /// The figure.
    pub value: String,
}

/// A drawing and the words for those who do not see it.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Picture {
    /// SVG text.
    pub svg: String,
    /// The same in words.
    pub alt: String,
}

/// A table. Every row has as many cells as there are columns; shorter rows are filled with empty cells.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Table {
    /// The columns; the first holds the name of the row.
    pub columns: Vec<Column>,
    /// The rows.
    pub rows: Vec<Vec<String>>,
    /// The closing sum, under which the double rule stands.
    pub foot: Vec<String>,
    /// Remarks below.
    pub notes: Vec<String>,
}

/// A column of a table.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Column {
    /// The head, with the unit.
    pub head: String,
    /// How wide it is and where its text stands.
    pub kind: ColumnKind,
}

/// What a column holds.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum ColumnKind {
    /// Words: takes its part of the room that is left.
    #[default]
    Words,
    /// Sentences: takes twice as much.
    Prose,
    /// A short word or id: as wide as needed, at the left.
    Short,
    /// A figure: as wide as needed, at the right.
    Figure,
}

/// Who signed.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Signature {
    /// Name and function: "I. Marsh, sustainability officer".
    pub who: String,
    /// What she did and when: "prepared 1 September 2026, 16:42 UTC".
    pub did: String,
}

/// How the paper is checked.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Check {
    /// Where a statement is checked: "https://.../check-statement". Empty where the program has no public address.
    pub address: String,
    /// What to do with the file, in a sentence or two.
    pub how: String,
    /// Name of the key that signed; empty if none did.
    pub key: String,
    /// How long to keep it: "Keep until 2 September 2036"; empty where no rule says.
    pub keep: String,
}

/// The workings of one stage.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Chapter {
    /// The stage and its result: "Growing the wheat".
    pub name: String,
    /// Its contribution with unit: "20.55 g CO2e/MJ".
    pub result: String,
    /// Its inputs.
    pub workings: Vec<Working>,
}

/// The workings of one input.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Working {
    /// What it is.
    pub name: String,
    /// Its contribution with unit.
    pub result: String,
    /// The steps.
    pub steps: Vec<Step>,
}

/// One step of the arithmetic.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Step {
    /// What is done.
    pub text: String,
    /// The result of the step.
    pub value: String,
    /// Its unit.
    pub unit: String,
    /// Number of the source of a figure in it; empty where nothing new comes in.
    pub source: String,
}
