//! Tables as CSV (RFC 4180): figures plain, texts that a spreadsheet would take for a formula made harmless.

/// One table: the head and its rows.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Table {
    /// Names of the columns.
    pub head: Vec<String>,
    /// The rows, each as long as the head.
    pub rows: Vec<Vec<Cell>>,
}

/// One field of a table.
#[derive(Clone, Debug, PartialEq)]
pub enum Cell {
    /// Words of people: made harmless.
    Text(String),
    /// A figure, in full.
    Figure(f64),
    /// Nothing.
    Empty,
}

impl From<&str> for Cell {
    fn from(text: &str) -> Cell {
        Cell::Text(text.to_owned())
    }
}

impl From<String> for Cell {
    fn from(text: String) -> Cell {
        Cell::Text(text)
    }
}

impl From<f64> for Cell {
    fn from(figure: f64) -> Cell {
        Cell::Figure(figure)
    }
}

impl From<Option<f64>> for Cell {
    fn from(figure: Option<f64>) -> Cell {
        figure.map_or(Cell::Empty, Cell::Figure)
    }
}

impl Table {
    /// A table with its head.
    pub fn new(head: &[&str]) -> Table {
        Table {
            head: head.iter().map(|&name| name.to_owned()).collect(),
            rows: Vec::new(),
        }
    }

    /// The table as CSV text, lines ended by CR LF.
    pub fn csv(&self) -> String {
        let mut out = String::new();
        line(&mut out, self.head.iter().map(|name| quoted(&harmless(name))));
        out.push_str(&self.csv_rows());
        out
    }

    /// Its rows without the head, for a table that is sent in pieces.
    pub fn csv_rows(&self) -> String {
        let mut out = String::new();
        for row in &self.rows {
            line(
                &mut out,
                row.iter().map(|cell| match cell {
                    Cell::Text(text) => quoted(&harmless(text)),
                    Cell::Figure(figure) => crate::core::units::rounding::plain(*figure),
                    Cell::Empty => String::new(),
                }),
            );
        }
        out
    }
}

fn line(out: &mut String, cells: impl Iterator<Item = String>) {
    for (index, cell) in cells.enumerate() {
        if index > 0 {
            out.push(',');
        }
        out.push_str(&cell);
    }
    out.push_str("\r\n");
}

/// A text that begins like a formula gets an apostrophe in front, so that no spreadsheet runs it.
fn harmless(text: &str) -> String {
    match text.trim_start().chars().next() {
        Some('=' | '+' | '-' | '@') => format!("'{text}"),
        _ if text.starts_with(['\t', '\r', '\n']) => format!("'{text}"),
        _ => text.to_owned(),
    }
}

fn quoted(text: &str) -> String {
    if text.contains([',', '"', '\r', '\n', '\'']) || text.starts_with(' ') || text.ends_with(' ') {
        format!("\"{}\"", text.replace('"', "\"\""))
    } else {
        text.to_owned()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn formulas_are_made_harmless_and_figures_stay_figures() {
        let mut table = Table::new(&["name", "g"]);
        table.rows.push(vec!["=1+1".into(), (-2.01).into()]);
        table.rows.push(vec![" @x".into(), Cell::Empty]);
        table.rows.push(vec!["a, \"b\"".into(), (0.1 + 0.2).into()]);
        assert_eq!(
            table.csv(),
            "name,g\r\n\"'=1+1\",-2.01\r\n\"' @x\",\r\n\"a, \"\"b\"\"\",0.30000000000000004\r\n"
        );
    }
}
