//! The sheet of workings: every step of the arithmetic as the program did it, with its source.

use super::look::{Digits, Part};
use super::page::{Layout, Page};
use super::plan::{Plan, count};
use crate::core::documents::assessment::Step;
use rust_xlsxwriter::XlsxError;
use std::collections::BTreeMap;

/// Name of the sheet.
pub const NAME: &str = "Workings";
const FIRST: u32 = 4;

/// Where the steps of an input begin, by stage and key of the input.
#[derive(Default)]
pub struct Links(BTreeMap<(Option<usize>, String), u32>);

impl Links {
    /// The row where the steps of an input begin.
    pub fn get(&self, stage: Option<usize>, key: &str) -> Option<u32> {
        self.0.get(&(stage, key.to_owned())).copied()
    }
}

/// Writes the sheet.
pub fn write(mut page: Page, plan: &Plan) -> Result<Links, XlsxError> {
    let layout = Layout {
        columns: &[
            ("Stage", 24.0),
            ("Input", 16.0),
            ("Step", 80.0),
            ("Result", 16.0),
            ("Unit", 20.0),
            ("Source", 60.0),
        ],
        head: FIRST - 1,
        fixed: 2,
        wide: false,
    };
    page.lay_out("Workings: the steps of the program, as values", &layout)?;
    page.text(
        1,
        0,
        "What Inputs and Chain work out by formula stands here once more in words, and so does the inside of the models.",
        Part::Text,
    )?;
    let mut links = Links::default();
    let mut row = FIRST;
    for (index, result) in plan.results() {
        row = steps(&mut page, row, (&result.name, ""), &result.workings)?;
        for input in &result.inputs {
            if !input.workings.is_empty() {
                links.0.insert((index, input.key.clone()), row);
            }
            row = steps(&mut page, row, (&result.name, &input.key), &input.workings)?;
        }
    }
    Ok(links)
}

fn steps(
    page: &mut Page,
    first: u32,
    (stage, input): (&str, &str),
    steps: &[Step],
) -> Result<u32, XlsxError> {
    for (row, step) in (first..).zip(steps) {
        page.text(row, 0, stage, Part::Text)?;
        page.text(row, 1, input, Part::Text)?;
        page.text(row, 2, &step.text, Part::Long)?;
        page.number(row, 3, step.value, Part::Value, Digits::All)?;
        page.text(row, 4, &step.unit, Part::Text)?;
        page.text(row, 5, &step.source, Part::Long)?;
    }
    Ok(first + count(steps.len()))
}
