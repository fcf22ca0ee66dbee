//! A workbook as bytes: reading its cells, and changing single ones the way a person would, without any other change.

use calamine::{Data, Range, Reader, Xlsx};
use std::io::{Cursor, Read, Write};
use zip::write::SimpleFileOptions;
use zip::{ZipArchive, ZipWriter};

/// Sheets in the order of the file.
pub const SHEETS: [&str; 9] = [
    "About", "Inputs", "Factors", "Chain", "Terms", "Totals", "Carbon", "Findings", "Workings",
];

/// The cells of a sheet, from its first one on.
pub fn sheet(bytes: &[u8], name: &str) -> Range<Data> {
    let mut book: Xlsx<_> = Xlsx::new(Cursor::new(bytes.to_vec())).expect("a workbook");
    book.worksheet_range(name).expect("the sheet")
}

/// A figure at a cell counted from zero.
pub fn figure(range: &Range<Data>, row: u32, column: u32) -> Option<f64> {
    match range.get_value((row, column))? {
        Data::Float(x) => Some(*x),
        #[allow(clippy::cast_precision_loss, reason = "whole figures of a workbook are small")]
        Data::Int(x) => Some(*x as f64),
        _ => None,
    }
}

/// Words at a cell counted from zero.
pub fn words(range: &Range<Data>, row: u32, column: u32) -> String {
    match range.get_value((row, column)) {
        Some(Data::String(text)) => text.clone(),
        _ => String::new(),
    }
}

/// The address of a cell counted from zero: `F7`.
pub fn address(row: u32, column: u32) -> String {
    assert!(column < 26);
    let letter = char::from(b'A' + u8::try_from(column).expect("a letter"));
    format!("{letter}{}", row + 1)
}

/// The same workbook with figures of a sheet's cells replaced.
pub fn with(bytes: &[u8], sheet: &str, cells: &[(String, f64)]) -> Vec<u8> {
    let number = SHEETS.iter().position(|name| *name == sheet).expect("the sheet") + 1;
    edit(bytes, &format!("xl/worksheets/sheet{number}.xml"), |xml| {
        let mut xml = xml;
        for (at, figure) in cells {
            let start = xml
                .find(&format!("<c r=\"{at}\""))
                .unwrap_or_else(|| panic!("no cell {at}"));
            let open = start + xml[start..].find("<v>").expect("a figure") + 3;
            let close = open + xml[open..].find("</v>").expect("its end");
            xml.replace_range(open..close, &figure.to_string());
        }
        xml
    })
}

/// The same workbook whose formulas carry wrong figures: a reader that does not calculate shows nonsense.
pub fn spoiled(bytes: &[u8]) -> Vec<u8> {
    let mut out = bytes.to_vec();
    for number in 1..=SHEETS.len() {
        out = edit(&out, &format!("xl/worksheets/sheet{number}.xml"), |xml| {
            let mut parts = xml.split("</f><v>");
            let mut spoiled = parts.next().unwrap_or_default().to_owned();
            for part in parts {
                let (_, rest) = part.split_once("</v>").expect("the end of a figure");
                spoiled.push_str("</f><v>-987654321</v>");
                spoiled.push_str(rest);
            }
            spoiled
        });
    }
    out
}

/// A part of the workbook as text.
pub fn part(bytes: &[u8], path: &str) -> String {
    let mut archive = ZipArchive::new(Cursor::new(bytes)).expect("an archive");
    let mut text = String::new();
    let mut file = archive.by_name(path).expect("the part");
    file.read_to_string(&mut text).expect("text");
    text
}

fn edit(bytes: &[u8], path: &str, change: impl FnOnce(String) -> String) -> Vec<u8> {
    let text = part(bytes, path);
    let mut archive = ZipArchive::new(Cursor::new(bytes)).expect("an archive");
    let mut writer = ZipWriter::new(Cursor::new(Vec::new()));
    let mut change = Some(change);
    for index in 0..archive.len() {
        let name = archive
            .by_index(index)
            .expect("a part")
            .name()
            .expect("a name")
            .into_owned();
        let mut content = Vec::new();
        archive
            .by_index(index)
            .expect("a part")
            .read_to_end(&mut content)
            .expect("bytes");
        if name == path
            && let Some(change) = change.take()
        {
            content = change(text.clone()).into_bytes();
        }
        writer
            .start_file(name, SimpleFileOptions::default())
            .expect("a part");
        writer.write_all(&content).expect("bytes");
    }
    writer.finish().expect("an archive").into_inner()
}
