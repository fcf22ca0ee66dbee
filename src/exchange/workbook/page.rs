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
    widths: Vec<f64>,
    heights: BTreeMap<u32, f64>,
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
        widths: Vec::new(),
        heights: BTreeMap::new(),
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
    format!("{sheet}!{}:{}", cell(row, column), cell(last_row, last_column))
}

/// A figure in a formula, all digits.
pub fn figure(x: f64) -> String {
    let text = plain(x).replace('e', "E");
    if x < 0.0 { format!("({text})") } else { text }
}

/// A number of characters as a figure.
fn count(characters: usize) -> f64 {
    u32::try_from(characters).map_or(1e6, f64::from)
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
        sheet.set_print_fit_to_pages(if layout.wide { 2 } else { 1 }, 0);
        sheet.set_margins(0.4, 0.4, 0.5, 0.5, 0.2, 0.2);
        let heads = layout.columns.iter().any(|(head, _)| !head.is_empty());
        if heads {
            sheet.set_repeat_rows(layout.head, layout.head)?;
            sheet.set_row_height(layout.head, if layout.wide { 50 } else { 26 })?;
        }
        if layout.wide && layout.fixed > 0 {
            sheet.set_repeat_columns(0, layout.fixed - 1)?;
        }
        sheet.set_row_height(0, 20)?;
        let mark = if self.example {
            "&R&8&BEXAMPLE: invented data"
        } else {
            ""
        };
        sheet.set_header(format!("&L&8&A{mark}"));
        sheet.set_footer("&L&8&F&R&8&P / &N");
        self.text(0, 0, title, Part::Title)?;
        self.widths = layout.columns.iter().map(|(_, width)| *width).collect();
        for (column, (head, _)) in (0..=last).zip(layout.columns).filter(|_| heads) {
            self.text(layout.head, column, head, Part::Head)?;
        }
        Ok(())
    }

    fn look(&mut self, part: Part, digits: Digits) -> Format {
        let look = self.looks.entry((part, digits));
        look.or_insert_with(|| format(part, digits)).clone()
    }

    /// Gives a row the height that wrapped words need: nothing but a person at a screen would do it later.
    fn make_room(&mut self, row: u32, column: u16, text: &str) -> Result<(), XlsxError> {
        let width = self.widths.get(usize::from(column)).copied().unwrap_or(10.0);
        let of = |line: &str| (count(line.chars().count()) / (width * 1.15)).ceil().max(1.0);
        let lines: f64 = text.lines().map(of).sum();
        if lines > 1.0 {
            let height = (12.5 * lines).min(400.0);
            let known = self.heights.entry(row).or_insert(0.0);
            if height > *known {
                *known = height;
                self.sheet.set_row_height(row, height)?;
            }
        }
        Ok(())
    }

    /// Writes words as words: what begins with `=`, `+`, `-` or `@` is no formula.
    pub fn text(&mut self, row: u32, column: u16, text: &str, part: Part) -> Result<(), XlsxError> {
        let look = self.look(part, Digits::Words);
        let text = cut(text, LONGEST_TEXT);
        if part == Part::Long {
            self.make_room(row, column, &text)?;
        }
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
        let look = self.look(Part::Link, Digits::Words);
        let url = Url::new(format!(
            "internal:{}",
            on(sheet, to_row, to_column).replace('$', "")
        ))
        .set_text(cut(text, 2_000));
        self.sheet.write_url_with_format(row, column, url, &look)?;
        Ok(())
    }
}
