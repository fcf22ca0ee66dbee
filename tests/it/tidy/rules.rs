//! Applies the tables of `tidy.rs` to one file. Each finding is one line: `file:line: what is wrong`.

use super::paths::{Named, lines_with_word, module_of, named_in};
use super::{CORE, CRATE, CRATES, LONGEST_FILE, MORE, NOT_IN_CORE, NOWHERE, ROOMS, SAFE, THINGS};

/// Every finding in the file at `path` (from the root of the repository).
pub fn all(path: &str, text: &str) -> Vec<String> {
    let mut found = Vec::new();
    let mut say = |line: usize, what: String| found.push(format!("{path}:{line}: {what}"));
    let is_rust = path.ends_with(".rs");
    if is_rust && path.starts_with("src/") {
        imports(path, text, &mut say);
        if !text.starts_with("//!") {
            say(1, "a source file begins with `//!` and says its job".to_owned());
        }
    }
    if is_code(path) && text.lines().count() > LONGEST_FILE {
        say(
            LONGEST_FILE + 1,
            format!("a code file has at most {LONGEST_FILE} lines: split it"),
        );
    }
    nowhere(text, &mut say);
    if path.starts_with("templates/") {
        template(path, text, &mut say);
    }
    found
}

fn is_code(path: &str) -> bool {
    let folders = ["data", "snapshots", "assets", "cases"];
    let data = [".json", ".csv", ".toml", ".snap", ".svg", ".txt", ".md"];
    (path.starts_with("src/") || path.starts_with("tests/"))
        && !path.split('/').any(|part| folders.contains(&part))
        && !data.iter().any(|ending| path.ends_with(ending))
}

// ---- imports ------------------------------------------------------------------------------------------------------------------

fn imports(path: &str, text: &str, say: &mut impl FnMut(usize, String)) {
    let module = module_of(path);
    let in_core = module.first().is_some_and(|room| room == "core");
    for named in named_in(&module, text, CRATE) {
        let shown = named.path.join("::");
        if named.path[0] == "crate" {
            if let Some(why) = why_not(path, &module, &named) {
                say(named.line, format!("may not name {shown}: {why}"));
            }
            continue;
        }
        for (name, places) in CRATES.iter().filter(|(name, _)| *name == named.path[0]) {
            if !places.iter().any(|place| is_in(path, place)) {
                say(
                    named.line,
                    format!("may not name {shown}: {name} belongs in {}", places.join(", ")),
                );
            }
        }
        let starts = |banned: &&&str| shown == **banned || shown.starts_with(&format!("{banned}::"));
        if in_core && let Some(banned) = NOT_IN_CORE.iter().find(starts) {
            say(
                named.line,
                format!("may not name {shown}: core is pure, no {banned}"),
            );
        }
    }
    if in_core {
        for word in ["async", "await", "unsafe"] {
            for line in lines_with_word(text, word) {
                // The sampler's kernels are the one place that is compiled for several processors.
                if word != "unsafe" || !path.starts_with("src/core/uncertainty/") {
                    say(line, format!("core is pure: no `{word}`"));
                }
            }
        }
    }
    for (number, line) in text.lines().enumerate() {
        if line.contains("escape = \"none\"") {
            say(
                number + 1,
                "a template escapes what it shows: no `escape = \"none\"`".to_owned(),
            );
        }
    }
}

/// A place is a file name (`sql.rs`), a folder anywhere (`api/`), or the beginning of a path (`src/web/`).
fn is_in(path: &str, place: &str) -> bool {
    match (place.starts_with("src/"), place.strip_suffix('/')) {
        (true, _) => path.starts_with(place),
        (false, Some(folder)) => path.split('/').rev().skip(1).any(|part| part == folder),
        (false, None) => path.rsplit('/').next() == Some(place),
    }
}

/// Why the file at `path` may not name `named`, which is ours; `None` if it may.
fn why_not(path: &str, module: &[String], named: &Named) -> Option<String> {
    let here = module
        .first()
        .map_or(if path == "src/main.rs" { "main" } else { "lib" }, String::as_str);
    let there = named.path.get(1).map_or("", String::as_str);
    if there == here {
        return if here == "core" {
            why_not_in_core(module, named)
        } else {
            None
        };
    }
    let here_height = THINGS.iter().position(|thing| *thing == here);
    let there_height = THINGS.iter().position(|thing| *thing == there);
    let row = if here_height.is_some() { "things" } else { here };
    let Some((_, sees)) = ROOMS.iter().find(|(room, _)| *room == row) else {
        return Some(format!(
            "`{here}` is no room of the house: add it to the table in tests/it/tidy.rs"
        ));
    };
    let more = MORE
        .iter()
        .find(|(file, _)| *file == path)
        .map_or(&[][..], |(_, more)| more);
    let seen = |name: &str| sees.contains(&"*") || sees.contains(&name) || more.contains(&name);
    if there_height.is_none() && !ROOMS.iter().any(|(room, _)| *room == there) {
        return if here == "lib" {
            None
        } else {
            Some(format!("`{there}` is no room of the house"))
        };
    }
    if let Some(there_height) = there_height {
        if !seen("THINGS") {
            return Some(format!("`{here}` does not see the things"));
        }
        if here_height.is_some_and(|height| height < there_height) {
            return Some(format!("`{there}` stands above `{here}`: {}", THINGS.join(" < ")));
        }
        let part = named.path.get(2).map_or("", String::as_str);
        if matches!(part, "sql" | "api" | "pages") && !sees.contains(&"*") && !more.contains(&part) {
            return Some(format!(
                "another thing is used through its use cases, never its `{part}`"
            ));
        }
        return None;
    }
    (!seen(there)).then(|| {
        format!(
            "`{here}` sees only: {}",
            if sees.is_empty() {
                "itself".into()
            } else {
                sees.join(", ")
            }
        )
    })
}

fn why_not_in_core(module: &[String], named: &Named) -> Option<String> {
    let height = |name: &str| {
        CORE.iter()
            .find(|(room, _)| *room == name)
            .map(|(_, height)| *height)
    };
    let here = module.get(1)?; // core/mod.rs, which lays the rooms out, may name them all
    let Some(there) = named.path.get(2) else {
        return Some("name the room of core, not core as a whole".to_owned());
    };
    let (Some(from), Some(to)) = (height(here), height(there)) else {
        return (here != there)
            .then(|| format!("`{here}` or `{there}` is no room of core: see tests/it/tidy.rs"));
    };
    let order = "units < domain < documents < models < engine < uncertainty, levers, checks, ledger";
    (here != there && to >= from).then(|| format!("`{there}` does not stand below `{here}`: {order}"))
}

// ---- text ---------------------------------------------------------------------------------------------------------------------

fn nowhere(text: &str, say: &mut impl FnMut(usize, String)) {
    for (number, line) in text.lines().enumerate() {
        for banned in NOWHERE.iter().filter(|banned| holds(line, banned)) {
            say(
                number + 1,
                format!("holds `{banned}`, which belongs in no file of ours"),
            );
        }
    }
}

/// Whether `words` stand in `line` by themselves: `/a/b/` is not a path that begins with `/b/`.
fn holds(line: &str, words: &str) -> bool {
    let joins = |c: char| c.is_alphanumeric() || c == '_';
    line.match_indices(words).any(|(at, _)| {
        let before = line[..at].chars().next_back();
        let after = line[at + words.len()..].chars().next();
        let inside_path = before.is_some_and(|c| words.starts_with('/') && ".-})".contains(c));
        let runs_on = !words.ends_with('/') && after.is_some_and(joins);
        !(before.is_some_and(joins) || inside_path || runs_on)
    })
}

// ---- templates ----------------------------------------------------------------------------------------------------------------

fn template(path: &str, text: &str, say: &mut impl FnMut(usize, String)) {
    for (line, tag) in tags(text) {
        let (name, attributes) = (tag_name(&tag), attribute_names(&tag));
        let has = |wanted: &str| attributes.iter().any(|attribute| attribute == wanted);
        // A drawing served as a file of its own has no other place for its dark colours.
        if (name == "style" && !path.ends_with("assets/mark.svg")) || has("style") {
            say(
                line,
                "no style in a template: a class and the style sheet".to_owned(),
            );
        }
        if name == "script" && !has("src") {
            say(line, "no inline script: a file under templates/assets".to_owned());
        }
        if let Some(handler) = attributes.iter().find(|attribute| attribute.starts_with("on")) {
            say(
                line,
                format!("no `{handler}` attribute: the script finds its elements itself"),
            );
        }
        let address = tag.to_ascii_lowercase();
        let loads = name == "link"
            && ["href=\"http", "href=\"//"]
                .iter()
                .any(|begin| address.contains(begin));
        if loads
            || ["src=\"http", "src=\"//"]
                .iter()
                .any(|begin| address.contains(begin))
        {
            say(line, "a page asks no other host for anything".to_owned());
        }
    }
    for (line, expression) in safe_expressions(text) {
        if !SAFE.contains(&(path, expression.as_str())) {
            say(
                line,
                format!("`{expression}` is marked safe and is not on the list in tests/it/tidy.rs"),
            );
        }
    }
    for (number, line) in text.lines().enumerate() {
        let tight: String = line.split_whitespace().collect();
        if [
            "|escape(\"none\"",
            "|e(\"none\"",
            "|urlencode|safe",
            "{%autoescape",
        ]
        .iter()
        .any(|off| tight.contains(off))
        {
            say(number + 1, "a template escapes what it shows".to_owned());
        }
    }
}

/// Opening tags with the line they begin on; they may run over several lines.
fn tags(text: &str) -> Vec<(usize, String)> {
    let mut found = Vec::new();
    for (at, _) in text.match_indices('<') {
        let rest = &text[at + 1..];
        if rest.starts_with(|c: char| c.is_ascii_alphabetic()) {
            let line = text[..at].matches('\n').count() + 1;
            found.push((line, rest[..tag_end(rest)].to_owned()));
        }
    }
    found
}

/// Where a tag closes: the first `>` outside quotes and outside `{{ }}` and `{% %}`.
fn tag_end(rest: &str) -> usize {
    let (mut quote, mut braces) = (None, 0_u32);
    for (at, c) in rest.char_indices() {
        match c {
            '{' => braces += 1,
            '}' => braces = braces.saturating_sub(1),
            _ if braces > 0 => {}
            '"' | '\'' if quote.is_none() => quote = Some(c),
            _ if quote == Some(c) => quote = None,
            '>' if quote.is_none() => return at,
            _ => {}
        }
    }
    rest.len()
}

fn tag_name(tag: &str) -> String {
    tag.chars()
        .take_while(|c| c.is_ascii_alphanumeric() || *c == '-')
        .collect::<String>()
        .to_ascii_lowercase()
}

/// Names of a tag's attributes: words outside quotes and template code, without their values.
fn attribute_names(tag: &str) -> Vec<String> {
    let (mut plain, mut quote, mut braces) = (String::new(), None, 0_u32);
    for c in tag.chars() {
        match c {
            '{' => braces += 1,
            '}' => braces = braces.saturating_sub(1),
            _ if braces > 0 => {}
            '"' | '\'' if quote.is_none() => quote = Some(c),
            _ if quote == Some(c) => {
                quote = None;
                plain.push(' ');
            }
            _ if quote.is_none() => plain.push(c),
            _ => {}
        }
        if braces > 0 && quote.is_none() {
            plain.push(' ');
        }
    }
    let name = |word: &str| {
        word.split('=')
            .next()
            .unwrap_or_default()
            .trim_matches('/')
            .to_ascii_lowercase()
    };
    plain
        .split_whitespace()
        .skip(1)
        .map(name)
        .filter(|name| !name.is_empty())
        .collect()
}

/// What a template marks as safe: the expression before `|safe`, with its line.
pub fn safe_expressions(text: &str) -> impl Iterator<Item = (usize, String)> {
    text.match_indices('|').filter_map(|(at, _)| {
        let after = text[at + 1..].trim_start();
        let is_safe = after
            .strip_prefix("safe")
            .is_some_and(|rest| !rest.starts_with(|c: char| c.is_alphanumeric() || c == '_'));
        let before = text[..at].trim_end();
        let begin = before.rfind(['{', '(', ' ', '\n']).map_or(0, |at| at + 1);
        is_safe.then(|| (text[..at].matches('\n').count() + 1, before[begin..].to_owned()))
    })
}
