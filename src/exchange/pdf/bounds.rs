//! Keeps the paper short enough to be set in a moment: a works may have thousands of inputs, and the file has them all.

use super::sheet::{Sheet, Table};

/// The most rows of a table.
const ROWS: usize = 400;

/// The most steps of workings in the annex; about forty pages.
const STEPS: usize = 1_500;

/// The sheet with no more than fits; what was left out is said where it was.
pub(super) fn bounded(mut sheet: Sheet) -> Sheet {
    let tables = [
        &mut sheet.stages,
        &mut sheet.carbon,
        &mut sheet.land,
        &mut sheet.factors,
        &mut sheet.findings,
    ];
    for table in tables {
        shorten(table);
    }
    if let Some(more) = sheet.sources.len().checked_sub(ROWS).filter(|&more| more > 0) {
        sheet.sources.truncate(ROWS);
        sheet
            .sources
            .push(format!("and {more} more, in the statement file"));
    }
    let mut room = STEPS;
    let mut left_out = 0;
    for chapter in &mut sheet.annex {
        chapter.workings.retain(|working| {
            // an input costs a row of its own
            let cost = working.steps.len() + 1;
            let fits = cost <= room;
            if fits {
                room -= cost;
            } else {
                // the annex ends at the first that does not fit, so that it has no holes
                room = 0;
                left_out += cost;
            }
            fits
        });
    }
    sheet.annex.retain(|chapter| !chapter.workings.is_empty());
    if left_out > 0 {
        let rest = format!("{left_out} more lines of workings are in the statement file, not on this paper.");
        sheet.not_covered.push(rest);
    }
    sheet
}

fn shorten(table: &mut Table) {
    let width = table.columns.len();
    for row in &mut table.rows {
        row.resize(width, String::new());
    }
    if !table.foot.is_empty() {
        table.foot.resize(width, String::new());
    }
    if let Some(more) = table.rows.len().checked_sub(ROWS).filter(|&more| more > 0) {
        table.rows.truncate(ROWS);
        table.notes.push(format!(
            "{more} more rows are in the statement file, not on this paper."
        ));
    }
}

#[cfg(test)]
mod tests {
    use super::super::sheet::{Chapter, Column, Step, Working};
    use super::*;

    #[test]
    fn rows_are_filled_and_cut_and_the_rest_is_said() {
        let table = Table {
            columns: vec![Column::default(), Column::default()],
            rows: vec![vec!["a".to_owned()]; ROWS + 3],
            ..Table::default()
        };
        let sheet = bounded(Sheet {
            stages: table,
            ..Sheet::default()
        });
        assert_eq!(sheet.stages.rows.len(), ROWS);
        assert!(sheet.stages.rows.iter().all(|row| row.len() == 2));
        assert_eq!(
            sheet.stages.notes,
            ["3 more rows are in the statement file, not on this paper."]
        );
    }

    #[test]
    fn workings_end_where_the_room_ends() {
        let of = |steps| Working {
            steps: vec![Step::default(); steps],
            ..Working::default()
        };
        let sheet = bounded(Sheet {
            annex: vec![
                Chapter {
                    workings: vec![of(9), of(STEPS), of(1)],
                    ..Chapter::default()
                },
                Chapter {
                    workings: vec![of(1)],
                    ..Chapter::default()
                },
            ],
            ..Sheet::default()
        });
        assert_eq!(sheet.annex.len(), 1);
        assert_eq!(sheet.annex[0].workings.len(), 1);
        assert_eq!(
            sheet.not_covered,
            ["1505 more lines of workings are in the statement file, not on this paper."]
        );
    }
}
