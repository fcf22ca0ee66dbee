//! Evidence of the demonstration: short texts, each of which says that it is invented.

use crate::evidence::Example;

/// Id, name of the file, what it would be: a line each.
const LINES: &str = include_str!("evidence.csv");

/// The evidence that the documents of the demonstration name, in order of id.
pub fn evidence() -> Vec<Example> {
    LINES.lines().skip(1).filter_map(example).collect()
}

/// One line. What a file is about stands in quotes and holds none.
fn example(line: &str) -> Option<Example> {
    let (id, rest) = line.split_once(',')?;
    let (file_name, about) = rest.split_once(',')?;
    let about = about.trim_matches('"');
    Some(Example {
        id: id.to_owned(),
        file_name: file_name.to_owned(),
        text: format!(
            "Invented for demonstration: this stands where a real file would.\n\n{id}\n{about}\n\nNo field, works, \
             supplier or delivery in it is real.\n"
        ),
        note: about.to_owned(),
    })
}
