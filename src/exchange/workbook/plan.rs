//! Where everything stands: which row of which sheet holds which figure. Made before anything is written, for the sheets
//! point at each other.

use super::WorkbookError;
use super::factors::Factors;
use super::rows::{Row, rows};
use crate::core::documents::Assessment;
use crate::core::documents::assessment::{InputResult, StageResult};
use crate::core::domain::Book;
use crate::core::engine::Resolved;
use crate::core::engine::demand::Demand;

/// Most rows of a sheet, less a margin.
const MOST_ROWS: u32 = 1_048_000;

/// Everything the sheets are made from.
pub struct Plan<'a> {
    /// The plan of the engine.
    pub resolved: &'a Resolved<'a>,
    /// How many recipes a megajoule asks for.
    pub demand: &'a Demand,
    /// The assessment.
    pub assessment: &'a Assessment,
    /// The published data.
    pub book: &'a Book,
    /// Rows of the sheet of stages, by stage.
    pub chain: Vec<ChainRows>,
    /// Rows of the sheet of inputs, from the top.
    pub rows: Vec<Row<'a>>,
    /// First and last row of each stage's inputs; none for a stage without.
    pub spans: Vec<Option<(u32, u32)>>,
    /// Rows of the sheet of factors.
    pub factors: Factors,
}

/// Rows of one stage on the sheet of stages, counted from zero.
#[derive(Clone, Copy, Debug, Default)]
pub struct ChainRows {
    /// The stage itself.
    pub stage: u32,
    /// Its output; co-products follow.
    pub output: u32,
    /// Its first intake; the others follow.
    pub intakes: u32,
}

impl ChainRows {
    /// Row of a product, the output first.
    pub fn product(&self, index: usize) -> u32 {
        self.output + count(index)
    }

    /// Row of an intake.
    pub fn intake(&self, index: usize) -> u32 {
        self.intakes + count(index)
    }
}

/// A number of rows; more than a sheet holds is refused when the plan is made.
pub fn count(length: usize) -> u32 {
    u32::try_from(length).unwrap_or(u32::MAX / 4)
}

impl<'a> Plan<'a> {
    /// Lays everything out.
    ///
    /// # Errors
    /// When it does not fit on a sheet.
    pub fn new(
        resolved: &'a Resolved<'a>,
        demand: &'a Demand,
        assessment: &'a Assessment,
        book: &'a Book,
    ) -> Result<Plan<'a>, WorkbookError> {
        let mut chain = vec![ChainRows::default(); resolved.stages.len()];
        let mut row = super::chain::FIRST;
        for &j in &resolved.order {
            let stage = &resolved.stages[j];
            let output = row + 1;
            let intakes = output + count(stage.products.len());
            chain[j] = ChainRows {
                stage: row,
                output,
                intakes,
            };
            row = intakes + count(stage.intakes.len());
        }
        let mut factors = Factors::new(resolved);
        let rows = rows(resolved, book, assessment, &mut factors);
        let steps: usize = assessment
            .stages
            .iter()
            .map(|stage| {
                let inputs = stage.inputs.iter().map(|input| input.workings.len() + 1);
                stage.workings.len() + 1 + inputs.sum::<usize>()
            })
            .sum();
        let longest = rows.len().max(steps).max(assessment.findings.len());
        if row.max(count(longest)) > MOST_ROWS {
            return Err(WorkbookError::TooLarge);
        }
        let mut spans = vec![None; resolved.stages.len()];
        for (k, planned) in rows.iter().enumerate() {
            if let Some(j) = planned.stage {
                let at = super::inputs::FIRST + count(k);
                let first = spans[j].map_or(at, |(first, _)| first);
                spans[j] = Some((first, at));
            }
        }
        Ok(Plan {
            resolved,
            demand,
            assessment,
            book,
            chain,
            rows,
            spans,
            factors,
        })
    }

    /// First and last row of the sheet of inputs; one empty row where there is none.
    pub fn all_inputs(&self) -> (u32, u32) {
        let first = super::inputs::FIRST;
        (first, first + count(self.rows.len().max(1)) - 1)
    }

    /// The assessed stages with their index in the plan of the engine; none for a published default.
    pub fn results(&self) -> impl Iterator<Item = (Option<usize>, &'a StageResult)> {
        results(self.resolved, self.assessment)
    }
}

/// The assessed stages with their index in the plan of the engine; none for a published default.
pub fn results<'a>(
    resolved: &'a Resolved<'a>,
    assessment: &'a Assessment,
) -> impl Iterator<Item = (Option<usize>, &'a StageResult)> {
    let order = resolved.order.iter().copied().map(Some);
    order.chain(std::iter::repeat(None)).zip(&assessment.stages)
}

/// The assessed input at a place of a stage.
pub fn input_result(result: &StageResult, index: usize) -> Option<&InputResult> {
    result.inputs.get(index)
}
