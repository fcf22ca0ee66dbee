//! The paper as other programs read it: poppler its structure and text, qpdf its syntax, zbar its code.
#![cfg(feature = "pdf")]
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::panic,
    reason = "a test fails by panicking"
)]

use serde_json::Value;
use std::path::{Path, PathBuf};
use std::process::Command;
use std::sync::LazyLock;
use wheelwort::charts::ladder::{self, Baseline, Counted, Form, Ladder, Required, Rung};
use wheelwort::exchange::pdf::{Chapter, Day, PdfError, Picture, Sheet, code_text, write};

const CASE: &str = include_str!("../cases/print/statement.json");
/// Set in a child of these tests: the file that it writes.
const CHILD: &str = "WHEELWORT_PAPER_OF_CHILD";

fn sheet() -> Sheet {
    let sheet: Sheet = serde_json::from_str(CASE).expect("the case is a sheet");
    Sheet {
        ladder: Some(picture()),
        ..sheet
    }
}

fn picture() -> Picture {
    let rung = |name: &str, co2_fossil: f64, n2o: f64, crop: Option<f64>, uptake: bool| Rung {
        name: name.to_owned(),
        counted: Counted {
            co2_fossil,
            n2o,
            co2e_unsplit: co2_fossil / 10.0,
            ..Counted::default()
        },
        crop,
        uptake,
        absent: false,
    };
    let drawn = ladder::draw(
        &Ladder {
            title: "Field-to-wheel ladder of a statement".to_owned(),
            id: "lp".to_owned(),
            heading: None,
            baseline: Baseline {
                word: "petrol".to_owned(),
                g: 94.0,
            },
            required: Some(Required {
                percent: 60.0,
                g: 37.6,
            }),
            stages: vec![
                rung("Uptake by the crop", 0.0, 0.0, Some(-106.9), true),
                rung("Growing the wheat", 6.37, 13.66, None, false),
                rung("Fermentation", 4.0, 0.0, Some(35.6), false),
                rung("Burning in the engine", 0.0, 0.0, Some(71.3), false),
            ],
            scale: None,
        },
        Form::Print,
    );
    Picture::of_ladder(&drawn.expect("a ladder"), ladder::defs())
}

static PAPER: LazyLock<Vec<u8>> = LazyLock::new(|| write(&sheet()).expect("a paper"));

fn file(name: &str, bytes: &[u8]) -> PathBuf {
    let path = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    std::fs::write(&path, bytes).expect("a file in the folder of the tests");
    path
}

fn run(program: &str, arguments: &[&str]) -> String {
    let done = Command::new(program)
        .args(arguments)
        .output()
        .unwrap_or_else(|problem| panic!("{program}: {problem}; `bash tests/all debian` installs it"));
    assert!(
        done.status.success(),
        "{program} {arguments:?}: {}",
        String::from_utf8_lossy(&done.stderr)
    );
    // poppler prints some strings of the file as they are, which is not always UTF-8
    String::from_utf8_lossy(&done.stdout).into_owned()
}

fn pages(path: &Path) -> Vec<String> {
    let text = run("pdftotext", &["-layout", path.to_str().unwrap(), "-"]);
    text.split('\u{c}')
        .filter(|page| !page.trim().is_empty())
        .map(str::to_owned)
        .collect()
}

/// What a reader aloud gets: a line for each element, its kind and its text.
fn spoken(structure: &str) -> String {
    let mut lines: Vec<String> = Vec::new();
    for line in structure.lines().map(str::trim) {
        let kind = line.split([' ', ':']).next().unwrap_or_default();
        match (line.strip_prefix('"'), lines.last_mut()) {
            (Some(text), Some(last)) => last.push_str(text.strip_suffix('"').unwrap_or(text)),
            _ if kind.starts_with('/') || kind.is_empty() || ["Span", "TR", "Div"].contains(&kind) => {}
            _ => lines.push(format!("{kind:<6} ")),
        }
    }
    lines
        .join("\n")
        .lines()
        .map(str::trim_end)
        .collect::<Vec<_>>()
        .join("\n")
}

#[test]
fn the_text_reads_in_order_and_the_file_keeps_to_its_standards() {
    let path = file("statement.pdf", &PAPER);
    let told = run("pdfinfo", &[path.to_str().unwrap()]);
    for line in [
        "Tagged:          yes",
        "Title:           Greenhouse-gas statement for fuel ethanol WW-2026-0031",
    ] {
        assert!(told.contains(line), "{line} in\n{told}");
    }
    let raw = String::from_utf8_lossy(&PAPER);
    for mark in [
        "<pdfaid:part>2</pdfaid:part>",
        "<pdfaid:conformance>A</pdfaid:conformance>",
        "<pdfuaid:part>1</pdfuaid:part>",
    ] {
        assert!(raw.contains(mark), "{mark} is not in the metadata");
    }
    run("qpdf", &["--check", path.to_str().unwrap()]);
    let read = run("pdfinfo", &["-struct-text", path.to_str().unwrap()]);
    insta::assert_snapshot!("reading_order", spoken(&read));
}

#[test]
fn every_page_has_number_hash_page_and_example() {
    let path = file("pages.pdf", &PAPER);
    let (pages, sheet) = (pages(&path), sheet());
    assert!((3..=5).contains(&pages.len()), "{} pages", pages.len());
    for (at, page) in pages.iter().enumerate() {
        for mark in [
            format!("{}, version {}", sheet.number, sheet.version),
            format!("SHA-256 {}", sheet.hash),
            format!("page {} of {}", at + 1, pages.len()),
            "EXAMPLE".to_owned(),
        ] {
            assert!(page.contains(&mark), "no {mark} on page {}", at + 1);
        }
    }
}

#[test]
fn the_code_says_where_to_check_and_the_hash() {
    let path = file("code.pdf", &PAPER);
    let stem = path.with_extension("");
    let at = pages(&path)
        .iter()
        .position(|page| page.contains("Signed and checked"))
        .expect("a page with the code")
        + 1;
    let at = at.to_string();
    let (path, stem) = (path.to_str().unwrap(), stem.to_str().unwrap());
    run(
        "pdftoppm",
        &[
            "-r",
            "150",
            "-png",
            "-singlefile",
            "-f",
            &at,
            "-l",
            &at,
            path,
            stem,
        ],
    );
    let said = run("zbarimg", &["--quiet", "--raw", &format!("{stem}.png")]);
    let sheet = sheet();
    assert_eq!(said.trim(), code_text(&sheet.check, &sheet.hash));
}

#[test]
fn the_same_sheet_gives_the_same_bytes_whatever_the_number_of_threads() {
    if let Ok(path) = std::env::var(CHILD) {
        std::fs::write(path, &*PAPER).unwrap();
        return;
    }
    assert!(write(&sheet()).unwrap() == *PAPER, "a second writing differs");
    let path = file("child.pdf", b"");
    let name = "the_same_sheet_gives_the_same_bytes_whatever_the_number_of_threads";
    let done = Command::new(std::env::current_exe().unwrap())
        .args(["--exact", name])
        .env("RAYON_NUM_THREADS", "1")
        .env(CHILD, &path)
        .status()
        .unwrap();
    assert!(done.success());
    assert!(
        std::fs::read(&path).unwrap() == *PAPER,
        "one thread writes other bytes"
    );
}

/// Every text of a sheet by the same hostile one; day, version and kinds of columns stay.
fn spoil(value: &mut Value, with: &str) {
    match value {
        Value::String(text) => *text = with.to_owned(),
        Value::Array(items) => items.iter_mut().for_each(|item| spoil(item, with)),
        Value::Object(fields) => {
            for (name, field) in fields {
                if !["kind", "day", "ladder", "hash", "address"].contains(&name.as_str()) {
                    spoil(field, with);
                }
            }
        }
        _ => {}
    }
}

#[test]
fn hostile_text_is_printed_and_breaks_nothing() {
    let long = "Donaudampfschiff".repeat(12);
    let hostile = format!(
        "#panic(\"x\") $x^2$ *b* _i_ @ref <l> [c] \\ // `r` = h\n{long} \u{202e}\u{5e9}\u{5dc}\u{5d5}\u{5dd} \u{645}\u{631} \u{1f33e}\u{fe0f} \u{4e2d} \u{0} \u{e000}"
    );
    let mut value = serde_json::to_value(Sheet {
        annex: sheet().annex.into_iter().take(1).collect(),
        ..sheet()
    })
    .unwrap();
    spoil(&mut value, &hostile);
    let spoilt: Sheet = serde_json::from_value(value).unwrap();
    let path = file("hostile.pdf", &write(&spoilt).expect("a paper all the same"));
    run("qpdf", &["--check", path.to_str().unwrap()]);
    let text = pages(&path).concat();
    assert!(text.contains("#panic(\"x\") $x^2$ *b*"), "markup is text");
    assert!(text.contains("A hollow square (\u{25a1}) stands for a character"));
}

#[test]
fn an_empty_sheet_is_a_paper_and_a_day_that_is_none_is_refused() {
    let nameless = Sheet {
        ladder: Some(Picture::default()),
        annex: vec![Chapter::default()],
        ..Sheet::default()
    };
    let path = file("empty.pdf", &write(&nameless).expect("a paper"));
    let pages = pages(&path);
    assert_eq!(pages.len(), 1);
    assert!(
        !pages[0].contains("EXAMPLE"),
        "only demonstration data is an example"
    );
    let day = Day {
        month: 2,
        day: 31,
        ..Day::default()
    };
    let sheet = Sheet {
        day,
        ..Sheet::default()
    };
    assert_eq!(write(&sheet), Err(PdfError::Day(1970, 2, 31)));
}

/// By hand, as it takes its time: `cargo test --test pdf -- --ignored --nocapture memory`.
#[test]
#[ignore = "a measurement over fifty papers"]
fn memory_stays_flat_over_fifty_papers() {
    let resident = || -> u64 {
        let told = std::fs::read_to_string("/proc/self/statm").unwrap();
        told.split_whitespace().nth(1).unwrap().parse::<u64>().unwrap() * 4 / 1024
    };
    let mut after_ten = 0;
    for paper in 1..=50_u32 {
        let number = format!("WW-2026-{paper}");
        write(&Sheet { number, ..sheet() }).expect("a paper");
        if paper % 10 == 0 {
            println!("after {paper} papers: {} MB", resident());
        }
        if paper == 10 {
            after_ten = resident();
        }
    }
    assert!(
        resident() < after_ten + 40,
        "{} MB after ten papers, {} MB after fifty",
        after_ten,
        resident()
    );
}
