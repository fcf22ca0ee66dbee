//! Finds the paths that a Rust file names (`crate::core::units`, `sqlx::query`, ...), each with its line and written out from
//! the root of the crate. A reader of tokens, not of grammar: enough for import rules, and it needs no parser crate.

use std::collections::BTreeMap;

/// A path as a file names it, with `crate`, `self`, `super` and the file's own imports written out.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Named {
    /// Line of the path's first word, from 1.
    pub line: usize,
    /// Segments. The first is `crate` for what is ours, or the name of another crate.
    pub path: Vec<String>,
}

/// A word or a sign of a source file.
#[derive(Debug, Clone, PartialEq, Eq)]
enum Token {
    Word(String),
    PathSep,
    Sign(char),
}

/// The module that a file under `src/` is: `src/core/engine/graph.rs` is `["core", "engine", "graph"]`.
pub fn module_of(file: &str) -> Vec<String> {
    let inner = file.trim_start_matches("src/").trim_end_matches(".rs");
    let mut parts: Vec<String> = inner.split('/').map(str::to_owned).collect();
    if matches!(parts.last().map(String::as_str), Some("mod" | "lib" | "main")) {
        parts.pop();
    }
    parts
}

/// All paths of two segments or more in `source`, and all that a `use` brings in. `crate_name` counts as `crate`.
pub fn named_in(module: &[String], source: &str, crate_name: &str) -> Vec<Named> {
    let tokens = tokens(source);
    let mut reader = Reader {
        tokens: &tokens,
        at: 0,
        inner: Vec::new(),
        module,
        crate_name,
    };
    let (used, mentioned) = reader.read();
    let mut imports: BTreeMap<String, Vec<String>> = BTreeMap::new();
    for (named, binding) in &used {
        imports.insert(binding.clone(), named.path.clone());
    }
    let mut found: Vec<Named> = used.into_iter().map(|(named, _)| named).collect();
    for named in mentioned {
        let path = match imports.get(&named.path[0]) {
            Some(full) if named.path[0] != "crate" => full.iter().chain(&named.path[1..]).cloned().collect(),
            _ => named.path,
        };
        found.push(Named {
            line: named.line,
            path,
        });
    }
    found.sort_by_key(|named| named.line);
    found
}

/// Lines on which `word` stands as a word of the code, outside comments and text.
pub fn lines_with_word(source: &str, word: &str) -> Vec<usize> {
    let hit = |(line, token): (usize, Token)| (token == Token::Word(word.to_owned())).then_some(line);
    tokens(source).into_iter().filter_map(hit).collect()
}

struct Reader<'a> {
    tokens: &'a [(usize, Token)],
    at: usize,
    /// Open braces; `Some` where the brace opens an inline module.
    inner: Vec<Option<String>>,
    module: &'a [String],
    crate_name: &'a str,
}

impl Reader<'_> {
    fn read(&mut self) -> (Vec<(Named, String)>, Vec<Named>) {
        let (mut used, mut mentioned) = (Vec::new(), Vec::new());
        while let Some((line, token)) = self.tokens.get(self.at) {
            match token {
                Token::Word(word) if word == "use" => {
                    self.at += 1;
                    self.tree(&[], &mut used);
                }
                Token::Word(word) if word == "mod" && self.is(2, &Token::Sign('{')) => {
                    let name = self.word(1).unwrap_or_default();
                    self.inner.push(Some(name));
                    self.at += 3;
                }
                Token::Word(word) => {
                    let path = self.segments(word);
                    if path.len() > 1 {
                        mentioned.push(Named {
                            line: *line,
                            path: self.written_out(&path),
                        });
                    }
                }
                Token::Sign('{') => {
                    self.inner.push(None);
                    self.at += 1;
                }
                Token::Sign('}') => {
                    self.inner.pop();
                    self.at += 1;
                }
                Token::PathSep | Token::Sign(_) => self.at += 1,
            }
        }
        (used, mentioned)
    }

    fn is(&self, ahead: usize, token: &Token) -> bool {
        self.tokens
            .get(self.at + ahead)
            .is_some_and(|(_, found)| found == token)
    }

    fn word(&self, ahead: usize) -> Option<String> {
        match self.tokens.get(self.at + ahead) {
            Some((_, Token::Word(word))) => Some(word.clone()),
            _ => None,
        }
    }

    /// Takes `first::second::...` and moves past it.
    fn segments(&mut self, first: &str) -> Vec<String> {
        let mut path = vec![first.to_owned()];
        self.at += 1;
        while self.is(0, &Token::PathSep) {
            let Some(word) = self.word(1) else { break };
            path.push(word);
            self.at += 2;
        }
        path
    }

    /// One branch of a `use` tree, with `prefix` before it.
    fn tree(&mut self, prefix: &[String], used: &mut Vec<(Named, String)>) {
        if self.is(0, &Token::PathSep) {
            self.at += 1;
        }
        let mut path = prefix.to_vec();
        let line = self.tokens.get(self.at).map_or(0, |(line, _)| *line);
        loop {
            if let Some(word) = self.word(0) {
                path.push(word);
                self.at += 1;
                if self.is(0, &Token::PathSep) {
                    self.at += 1;
                    continue;
                }
                let mut binding = path.last().cloned().unwrap_or_default();
                if binding == "self" {
                    path.pop();
                    binding = path.last().cloned().unwrap_or_default();
                }
                if self.word(0).as_deref() == Some("as") {
                    binding = self.word(1).unwrap_or_default();
                    self.at += 2;
                }
                used.push((
                    Named {
                        line,
                        path: self.written_out(&path),
                    },
                    binding,
                ));
            } else if self.is(0, &Token::Sign('*')) {
                self.at += 1;
                path.push("*".to_owned());
                used.push((
                    Named {
                        line,
                        path: self.written_out(&path),
                    },
                    "*".to_owned(),
                ));
            } else if self.is(0, &Token::Sign('{')) {
                self.at += 1;
                while self.at < self.tokens.len() && !self.is(0, &Token::Sign('}')) {
                    if self.is(0, &Token::Sign(',')) {
                        self.at += 1;
                    } else {
                        let before = self.at;
                        self.tree(&path, used);
                        // Whatever this is, it is no import: do not stand still on it.
                        self.at = self.at.max(before + 1);
                    }
                }
                self.at += 1;
            }
            return;
        }
    }

    /// Writes `crate`, `self`, `super` and the crate's own name out from the root. Other first words stay as they are.
    fn written_out(&self, path: &[String]) -> Vec<String> {
        let mut base: Vec<String> = vec!["crate".to_owned()];
        let mut rest = path;
        match path[0].as_str() {
            "crate" => rest = &path[1..],
            own if own == self.crate_name => rest = &path[1..],
            "self" | "super" => {
                base.extend(self.module.iter().cloned());
                base.extend(self.inner.iter().flatten().cloned());
                if path[0] == "self" {
                    rest = &path[1..];
                }
                while rest.first().is_some_and(|word| word == "super") {
                    base.pop();
                    rest = &rest[1..];
                }
            }
            _ => return path.to_vec(),
        }
        base.extend(rest.iter().cloned());
        base
    }
}

/// Words and signs of a Rust source with their lines; comments, text and character literals are left out.
fn tokens(source: &str) -> Vec<(usize, Token)> {
    let chars: Vec<char> = source.chars().collect();
    let (mut found, mut at, mut line) = (Vec::new(), 0, 1);
    let next = |at: usize| chars.get(at).copied().unwrap_or('\0');
    while at < chars.len() {
        let start = at;
        match chars[at] {
            '/' if next(at + 1) == '/' => at = line_end(&chars, at),
            '/' if next(at + 1) == '*' => at = comment_end(&chars, at),
            '"' => at = text_end(&chars, at + 1),
            '\'' if next(at + 1) == '\\' || next(at + 2) == '\'' => {
                at += if next(at + 1) == '\\' { 3 } else { 2 };
                while at < chars.len() && chars[at] != '\'' {
                    at += 1;
                }
                at += 1;
            }
            ':' if next(at + 1) == ':' => {
                found.push((line, Token::PathSep));
                at += 2;
            }
            c if c.is_alphabetic() || c == '_' => {
                while next(at).is_alphanumeric() || next(at) == '_' {
                    at += 1;
                }
                let word: String = chars[start..at].iter().collect();
                let raw = matches!(word.as_str(), "r" | "br" | "cr");
                if raw && (next(at) == '"' || (next(at) == '#' && matches!(next(at + 1), '"' | '#'))) {
                    at = raw_text_end(&chars, at);
                } else if word == "r" && next(at) == '#' {
                    at += 1; // r#type is the word after it
                } else {
                    found.push((line, Token::Word(word)));
                }
            }
            c => {
                if !c.is_whitespace() {
                    found.push((line, Token::Sign(c)));
                }
                at += 1;
            }
        }
        line += chars[start..at.min(chars.len())]
            .iter()
            .filter(|c| **c == '\n')
            .count();
    }
    found
}

fn line_end(chars: &[char], mut at: usize) -> usize {
    while at < chars.len() && chars[at] != '\n' {
        at += 1;
    }
    at
}

/// Past a block comment, which may hold others.
fn comment_end(chars: &[char], mut at: usize) -> usize {
    let mut depth = 0;
    while at < chars.len() {
        match (chars[at], chars.get(at + 1)) {
            ('/', Some('*')) => {
                depth += 1;
                at += 2;
            }
            ('*', Some('/')) => {
                depth -= 1;
                at += 2;
                if depth == 0 {
                    return at;
                }
            }
            _ => at += 1,
        }
    }
    at
}

fn text_end(chars: &[char], mut at: usize) -> usize {
    while at < chars.len() && chars[at] != '"' {
        at += if chars[at] == '\\' { 2 } else { 1 };
    }
    at + 1
}

fn raw_text_end(chars: &[char], mut at: usize) -> usize {
    let mut marks = 0;
    while chars.get(at) == Some(&'#') {
        marks += 1;
        at += 1;
    }
    at += 1;
    while at < chars.len() {
        if chars[at] == '"' && (1..=marks).all(|i| chars.get(at + i) == Some(&'#')) {
            return at + 1 + marks;
        }
        at += 1;
    }
    at
}
