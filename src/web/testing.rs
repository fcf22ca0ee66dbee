//! What tests of pages share.

/// The words of a page without its markup, one line for each of its own.
pub fn words(html: &str) -> String {
    let mut out = String::new();
    let mut inside = false;
    for c in html.chars() {
        match c {
            '<' => inside = true,
            '>' => {
                inside = false;
                out.push(' ');
            }
            _ if !inside => out.push(c),
            _ => {}
        }
    }
    let lines = out
        .lines()
        .map(|line| line.split_whitespace().collect::<Vec<_>>().join(" "));
    lines
        .filter(|line| !line.is_empty())
        .collect::<Vec<_>>()
        .join("\n")
}
