//! A posted form: names are JSON pointers into the stage (`/inputs/0/amount`), texts are kept as typed. A few names
//! without a slash steer: `expected`, `why`, `do`, `new`, `after`.

use std::collections::BTreeMap;

/// What a person typed, by name of the field.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Form(BTreeMap<String, String>);

/// The lists of a stage that a person can add to and take from.
pub const LISTS: [&str; 3] = ["/intakes", "/inputs", "/co_products"];

/// Items of a list that are read: one more than a document takes, so that too many are refused there and not lost here.
/// The number stands in a name of the form, so that a short one could ask for any number of items.
const MOST_ITEMS: usize = 2_001;

impl Form {
    /// The form of posted pairs; of a name that stands twice the first counts (a button's, before the field's).
    pub fn of(pairs: Vec<(String, String)>) -> Form {
        let mut form = Form::default();
        for (name, text) in pairs {
            form.0.entry(name).or_insert(text);
        }
        form
    }

    /// The text of a field, if the form had it.
    pub fn get(&self, name: &str) -> Option<&str> {
        self.0.get(name).map(String::as_str)
    }

    /// The text of a field without space around it; empty if the form did not have it.
    pub fn text(&self, name: &str) -> &str {
        self.get(name).map_or("", str::trim)
    }

    /// Sets a field.
    pub fn set(&mut self, name: impl Into<String>, text: impl Into<String>) {
        self.0.insert(name.into(), text.into());
    }

    /// True if any field lies below a pointer.
    pub fn has_below(&self, pointer: &str) -> bool {
        self.below(pointer).next().is_some()
    }

    fn below<'f>(&'f self, pointer: &str) -> impl Iterator<Item = (&'f String, &'f String)> + 'f {
        let prefix = format!("{pointer}/");
        self.0
            .range(prefix.clone()..)
            .take_while(move |(name, _)| name.starts_with(&prefix))
    }

    /// How many items of a list the form has.
    pub fn count(&self, list: &str) -> usize {
        self.below(list)
            .filter_map(|(name, _)| index_below(list, name))
            .max()
            .map_or(0, |last| last + 1)
    }

    /// Where two people met, `pick:` and a pointer says whose figure is to stand: `theirs`, `mine` (with what was typed in
    /// `mine:` and the pointer), or `as it is` in the form. Theirs stands in the revision that the
    /// form begins from, so what was typed over it is dropped. What was picked is told once.
    pub fn settle_picks(&mut self) {
        let picks: Vec<(String, String)> = self
            .0
            .range("pick:".to_owned()..)
            .take_while(|(name, _)| name.starts_with("pick:"))
            .map(|(name, text)| (name.clone(), text.clone()))
            .collect();
        for (name, text) in picks {
            self.0.remove(&name);
            let pointer = name.trim_start_matches("pick:");
            let mine = self.0.remove(&format!("mine:{pointer}"));
            if pointer.is_empty() || text == "as it is" {
                continue;
            }
            if text != "theirs" {
                // What was typed before the other's figure was taken over.
                if let Some(mine) = mine {
                    // The field of an amount carries its figure; the unit has a field of its own.
                    let field = pointer.strip_suffix("/value").unwrap_or(pointer);
                    self.0.insert(field.to_owned(), mine);
                }
                continue;
            }
            self.0.retain(|field, _| {
                let field = field.strip_suffix("/unit").unwrap_or(field);
                let inside = |whole: &str, part: &str| {
                    part.strip_prefix(whole)
                        .is_some_and(|rest| rest.is_empty() || rest.starts_with('/'))
                };
                !(field.starts_with('/') && (inside(field, pointer) || inside(pointer, field)))
            });
        }
    }

    /// Adds an item to a list, with its steering fields; gives its index.
    pub fn add(&mut self, list: &str, fields: &[(&str, &str)]) -> usize {
        let index = self.count(list);
        for (name, text) in fields {
            self.set(format!("{list}/{index}/{name}"), *text);
        }
        index
    }

    /// Takes an item out of a list; those after it move up.
    pub fn remove(&mut self, list: &str, index: usize) {
        let fields: Vec<(String, String)> = self
            .below(list)
            .map(|(name, text)| (name.clone(), text.clone()))
            .collect();
        for (name, text) in fields {
            let Some(at) = index_below(list, &name) else {
                continue;
            };
            if at < index {
                continue;
            }
            self.0.remove(&name);
            if at > index {
                let rest = name
                    .strip_prefix(&format!("{list}/{at}"))
                    .unwrap_or_default()
                    .to_owned();
                self.0.insert(format!("{list}/{}{rest}", at - 1), text);
            }
        }
    }
}

/// `/inputs`, `/inputs/3/amount` is 3.
fn index_below(list: &str, name: &str) -> Option<usize> {
    let rest = name.strip_prefix(list)?.strip_prefix('/')?;
    rest.split('/')
        .next()?
        .parse::<usize>()
        .ok()
        .filter(|index| *index < MOST_ITEMS)
}

/// What the pressed button asks for.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Do {
    /// Save and work out.
    Save,
    /// Work out and save nothing.
    Try,
    /// Add an item to a list.
    Add(&'static str),
    /// Take an item out of a list.
    Remove(&'static str, usize),
    /// Look up a factor for a field.
    Search(String),
    /// Put a factor into a field.
    Choose(String, String),
}

impl Do {
    /// Reads the value of the button; anything unknown saves nothing and only shows the form again as a search of
    /// nothing would.
    pub fn of(text: &str) -> Do {
        let list = |name: &str| LISTS.into_iter().find(|list| *list == name);
        match text.split_once(':') {
            None if text == "try" => Do::Try,
            None => Do::Save,
            Some(("add", name)) => list(name).map_or(Do::Search(String::new()), Do::Add),
            Some(("remove", rest)) => rest
                .rsplit_once('/')
                .and_then(|(name, index)| Some(Do::Remove(list(name)?, index.parse().ok()?)))
                .unwrap_or(Do::Search(String::new())),
            Some(("choose", rest)) => match rest.split_once('=') {
                Some((field, factor)) => Do::Choose(field.to_owned(), factor.to_owned()),
                None => Do::Search(String::new()),
            },
            Some((_, rest)) => Do::Search(rest.to_owned()),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn form(pairs: &[(&str, &str)]) -> Form {
        Form::of(
            pairs
                .iter()
                .map(|(a, b)| ((*a).to_owned(), (*b).to_owned()))
                .collect(),
        )
    }

    #[test]
    fn items_are_taken_out_and_the_rest_move_up() {
        let mut form = form(&[
            ("/inputs/0/key", "a"),
            ("/inputs/1/key", "b"),
            ("/inputs/2/key", "c"),
            ("/inputs/2/model/x", "1"),
            ("why", "w"),
        ]);
        form.remove("/inputs", 1);
        assert_eq!(form.count("/inputs"), 2);
        assert_eq!(form.get("/inputs/1/key"), Some("c"));
        assert_eq!(form.get("/inputs/1/model/x"), Some("1"));
        assert_eq!(form.get("/inputs/2/key"), None);
        assert_eq!(form.add("/inputs", &[("as", "factor")]), 2);
        assert_eq!(form.get("/inputs/2/as"), Some("factor"));
    }

    #[test]
    fn a_pick_of_theirs_drops_what_was_typed_over_it() {
        let mut form = form(&[
            ("/inputs/0/was", "0"),
            ("/inputs/0/amount", "1"),
            ("/inputs/0/model/distance", "2"),
            ("/inputs/0/model/distance/unit", "km"),
            ("/inputs/1/amount", "3"),
            ("pick:/inputs/0/model/distance/value", "theirs"),
            ("pick:/inputs/1/amount", "as it is"),
            ("pick:/inputs/2/model/distance/value", "mine"),
            ("mine:/inputs/2/model/distance/value", "7"),
            ("pick:", "theirs"),
        ]);
        form.settle_picks();
        let left: Vec<&str> = form.0.keys().map(String::as_str).collect();
        let expected = [
            "/inputs/0/amount",
            "/inputs/0/was",
            "/inputs/1/amount",
            "/inputs/2/model/distance",
        ];
        assert_eq!(left, expected);
        assert_eq!(form.get("/inputs/2/model/distance"), Some("7"));
    }

    #[test]
    fn buttons_are_read() {
        assert_eq!(Do::of("save"), Do::Save);
        assert_eq!(Do::of("add:/inputs"), Do::Add("/inputs"));
        assert_eq!(Do::of("remove:/co_products/3"), Do::Remove("/co_products", 3));
        assert_eq!(
            Do::of("search:/inputs/0/factor"),
            Do::Search("/inputs/0/factor".to_owned())
        );
        assert_eq!(
            Do::of("choose:/inputs/0/factor=eu-2022-996/fert_n_an"),
            Do::Choose("/inputs/0/factor".to_owned(), "eu-2022-996/fert_n_an".to_owned())
        );
        assert_eq!(Do::of("remove:/etc/passwd"), Do::Search(String::new()));
    }
}
