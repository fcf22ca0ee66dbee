//! The key: what each colour and pattern means. Gases that are empty everywhere are left out.

use super::look::{RELEASE, UPTAKE, fill};
use super::model::{NOTHING, Part};
use super::picture::Picture;
use super::words::part_words;
use crate::charts::text::{chem, coordinate, short, width};

const SIZE: f64 = 12.5;
/// Swatch and its gap, and the gap to the next item.
const SWATCH: f64 = 20.0;
const BETWEEN: f64 = 16.0;

/// One item of the key: class, words, place, line.
struct Item {
    class: &'static str,
    words: &'static str,
    x: f64,
    line: usize,
}

fn layout(p: &Picture) -> Vec<Item> {
    let seen = |part: Part| {
        let parts = p.rungs.iter().flat_map(|(s, _)| s.counted.parts());
        parts.into_iter().any(|(q, g)| q == part && g.abs() > NOTHING)
    };
    let mut items: Vec<_> = part_words()
        .into_iter()
        .filter(|q| seen(q.0))
        .map(|q| (q.1, q.2))
        .collect();
    if p.shows_crop() || seen(Part::Biogenic) {
        items.push((UPTAKE, "taken up by the crop"));
        items.push((RELEASE, "crop CO2 given back"));
    }
    let (mut x, mut line, mut out) = (p.form.pad, 0, Vec::new());
    for (class, words) in items {
        let w = SWATCH + width(words, SIZE);
        if x + w > p.form.width - p.form.pad + 2.0 && !out.is_empty() {
            x = p.form.pad;
            line += 1;
        }
        out.push(Item {
            class,
            words,
            x,
            line,
        });
        x += w + BETWEEN;
    }
    out
}

/// Height of the key with the free space below it.
pub(super) fn height(p: &Picture) -> f64 {
    let lines = layout(p).last().map_or(0, |item| item.line + 1);
    lines as f64 * p.form.key + 4.0
}

/// Draws the key with its first line at `y`.
pub(super) fn draw(p: &Picture, y: f64, out: &mut Vec<String>) {
    out.extend(layout(p).into_iter().map(|item| {
        let y = y + item.line as f64 * p.form.key;
        let fill = fill(item.class);
        format!(
            r#"<rect class="b {}" x="{}" y="{}" width="14" height="11"{fill}/><text class="keyt" x="{}" y="{}">{}</text>"#,
            item.class,
            coordinate(item.x, 1),
            short(y + 3.0),
            coordinate(item.x + 19.0, 1),
            short(y + 13.0),
            chem(item.words)
        )
    }));
}
