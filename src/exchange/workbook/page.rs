//! One sheet being written: text as text whatever it begins with, figures in full, formulas with the engine's figure.

use super::look::{Digits, Part, format};
use crate::core::units::rounding::plain;
use rust_xlsxwriter::utility::row_col_to_cell_absolute;
use rust_xlsxwriter::{Format, Formula, Url, Workbook, Worksheet, XlsxError};
use std::collections::BTreeMap;

/// Most characters a cell holds, less a margin; longer text is cut.
const LONGEST_TEXT: usize = 32_000;
/// Most links a sheet holds, less a margin; after that the text stands without its link.
const MOST_LINKS: u32 = 60_000;

/// A sheet being written.
pub struct Page<'w> {
    sheet: &'w mut Worksheet,
    looks: BTreeMap<(Part, Digits), Format>,
    links: u32,
    example: bool,
}

/// How a sheet is laid out on screen and paper.
pub struct Layout<'a> {
    /// Heads and widths of the columns.
    pub columns: &'a [(&'a str, f64)],
    /// Row of the heads.
    pub head: u32,
    /// Columns that stay in sight.
    pub fixed: u16,
    /// Wide sheets go on A3, others on A4.
    pub wide: bool,
}

/// Opens a sheet by name.
pub fn open<'w>(workbook: &'w mut Workbook, name: &str, example: bool) -> Result<Page<'w>, XlsxError> {
    Ok(Page {
        sheet: workbook.worksheet_from_name(name)?,
        looks: BTreeMap::new(),
        links: 0,
        example,
    })
}

/// The address of a cell, `$B$7`, from row and column counted from zero.
pub fn cell(row: u32, column: u16) -> String {
    row_col_to_cell_absolute(row, column)
}

/// The address of a cell on another sheet.
pub fn on(sheet: &str, row: u32, column: u16) -> String {
    format!("{sheet}!{}", cell(row, column))
}

/// A span of cells on a sheet, corners from zero.
pub fn span(sheet: &str, (row, column): (u32, u16), (last_row, last_column): (u32, u16)) -> String {
    format!(
        "{sheet}!{}:{}",
        cell(row, column),
        cell(last_row, last_column)
    )
}

/// A figure in a formula, all digits.
pub fn figure(x: f64) -> String {
    let text = plain(x).replace('e', "E");
    if x < 0.0 { format!("({text})") } else { text }
}

/// The beginning of a text, whole characters.
pub fn cut(text: &str, most: usize) -> String {
    if text.chars().count() <= most {
        return text.to_owned();
    }
    let mut short: String = text.chars().take(most).collect();
    short.push('…');
    short
}

impl Page<'_> {
    /// Sets widths, heads, what stays in sight, and the paper.
    pub fn lay_out(&mut self, title: &str, layout: &Layout) -> Result<(), XlsxError> {
        let sheet = &mut self.sheet;
        let mut last = 0;
        for (column, (_, width)) in (0u16..).zip(layout.columns) {
            sheet.set_column_width(column, *width)?;
            last = column;
        }
        sheet.set_freeze_panes(layout.head + 1, layout.fixed)?;
        sheet.set_landscape();
        sheet.set_paper_size(if layout.wide { 8 } else { 9 });
        sheet.set_print_fit_to_pages(1, 0);
        sheet.set_margins(0.4, 0.4, 0.5, 0.5, 0.2, 0.2);
        sheet.set_repeat_rows(layout.head, layout.head)?;
        let mark = if self.example { "&R&8&BEXAMPLE: invented data" } else { "" };
        sheet.set_header(format!("&L&8&A{mark}"));
        sheet.set_footer("&L&8&F&R&8&P / &N");
        if layout.columns.iter().any(|(head, _)| !head.is_empty()) {
            sheet.set_row_height(layout.head, 38)?;
        }
        self.text(0, 0, title, Part::Title)?;
        for (column, (head, _)) in (0..=last).zip(layout.columns) {
            self.text(layout.head, column, head, Part::Head)?;
        }
        Ok(())
    }

    fn look(&mut self, part: Part, digits: Digits) -> Format {
        let look = self.looks.entry((part, digits));
        look.or_insert_with(|| format(part, digits)).clone()
    }

    /// Writes words as words: what begins with `=`, `+`, `-` or `@` is no formula.
    pub fn text(&mut self, row: u32, column: u16, text: &str, part: Part) -> Result<(), XlsxError> {
        let look = self.look(part, Digits::All);
        let text = cut(text, LONGEST_TEXT);
        self.sheet.write_string_with_format(row, column, text, &look)?;
        Ok(())
    }

    /// Writes a figure in full.
    pub fn number(
        &mut self,
        row: u32,
        column: u16,
        x: f64,
        part: Part,
        digits: Digits,
    ) -> Result<(), XlsxError> {
        let look = self.look(part, digits);
        self.sheet.write_number_with_format(row, column, x, &look)?;
        Ok(())
    }

    /// Writes a formula and the figure that the engine found for it.
    pub fn formula(
        &mut self,
        row: u32,
        column: u16,
        formula: &str,
        found: f64,
        (part, digits): (Part, Digits),
    ) -> Result<(), XlsxError> {
        self.says(row, column, formula, &plain(found), (part, digits))
    }

    /// Writes a formula whose result is words.
    pub fn says(
        &mut self,
        row: u32,
        column: u16,
        formula: &str,
        found: &str,
        (part, digits): (Part, Digits),
    ) -> Result<(), XlsxError> {
        let look = self.look(part, digits);
        let formula = Formula::new(formula).set_result(found);
        self.sheet
            .write_formula_with_format(row, column, formula, &look)?;
        Ok(())
    }

    /// Writes a link to a cell of this workbook.
    pub fn link(
        &mut self,
        row: u32,
        column: u16,
        (sheet, to_row, to_column): (&str, u32, u16),
        text: &str,
    ) -> Result<(), XlsxError> {
        if self.links >= MOST_LINKS || text.is_empty() {
            return self.text(row, column, text, Part::Text);
        }
        self.links += 1;
        let look = self.look(Part::Link, Digits::All);
        let url = Url::new(format!("internal:{}", on(sheet, to_row, to_column).replace('$', "")))
            .set_text(cut(text, 2_000));
        self.sheet.write_url_with_format(row, column, url, &look)?;
        Ok(())
    }
}
