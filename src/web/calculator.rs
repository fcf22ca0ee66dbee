//! A calculator as a page: a form whose fields stand in the address, so that a result has one, and what comes of them.
//! Figures that are refused stay as typed, with the reason at the field and in a summary.

use super::answers;
use super::csv::{Cell, Table};
use super::filters;
use super::frame::{Frame, Section};
use super::problem::Refusal;
use super::typed;
use crate::core::documents::assessment::Step;
use crate::core::models::still::CAUTION;
use askama::Template;
use axum::http::StatusCode;
use axum::response::Response;
use std::collections::BTreeMap;

/// What the address asks: texts by name of the field.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Asked(BTreeMap<String, String>);

/// A figure that is not taken.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Wrong {
    /// Name of the field.
    pub field: String,
    /// What is so.
    pub detail: String,
    /// What to do.
    pub remedy: String,
}

impl Wrong {
    /// In words.
    pub fn new(field: &str, detail: impl Into<String>, remedy: impl Into<String>) -> Wrong {
        Wrong {
            field: field.to_owned(),
            detail: detail.into(),
            remedy: remedy.into(),
        }
    }
}

impl Asked {
    /// The pairs of a query; of a name that stands twice the last counts.
    pub fn of(pairs: Vec<(String, String)>) -> Asked {
        Asked(pairs.into_iter().collect())
    }

    /// True if nothing is asked yet.
    pub fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// A text without space around it; empty if it is not there.
    pub fn text(&self, name: &str) -> &str {
        self.0.get(name).map_or("", |text| text.trim())
    }

    /// True if the address has the field, be it empty.
    pub fn has(&self, name: &str) -> bool {
        self.0.contains_key(name)
    }

    /// A figure; none where nothing is typed, and none, with the reason, where it is no figure.
    pub fn figure(&self, name: &str, wrong: &mut Vec<Wrong>) -> Option<f64> {
        let typed = self.text(name);
        if typed.is_empty() {
            return None;
        }
        match typed::figure(typed) {
            Ok(figure) => Some(figure),
            Err((detail, remedy)) => {
                wrong.push(Wrong::new(name, detail, remedy));
                None
            }
        }
    }

    /// A figure that has to be there.
    pub fn need(&self, name: &str, wrong: &mut Vec<Wrong>) -> Option<f64> {
        if self.text(name).is_empty() {
            wrong.push(Wrong::new(name, "This figure is missing.", "Give it in digits."));
        }
        self.figure(name, wrong)
    }

    /// The same with a text where nothing is said.
    #[must_use]
    pub fn or(mut self, name: &str, text: &str) -> Asked {
        self.0.entry(name.to_owned()).or_insert_with(|| text.to_owned());
        self
    }

    /// The same with what a form begins with, where nothing is said.
    #[must_use]
    pub fn filled(mut self, groups: &[Group]) -> Asked {
        for field in groups.iter().flat_map(|group| &group.fields) {
            self.0
                .entry(field.name.to_owned())
                .or_insert_with(|| field.text.clone());
        }
        self
    }

    /// The query again, escaped.
    fn query(&self) -> String {
        let pairs: Vec<String> = self
            .0
            .iter()
            .map(|(name, text)| format!("{}={}", super::links::segment(name), super::links::segment(text)))
            .collect();
        pairs.join("&")
    }
}

/// One field of the form.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Field {
    /// Name in the address.
    pub name: &'static str,
    /// Words above it, with the unit.
    pub label: String,
    /// `number`, `text` or `select`.
    pub kind: &'static str,
    /// What stands in it.
    pub text: String,
    /// Choices: value, words.
    pub choices: Vec<(String, String)>,
    /// Words below it.
    pub hint: String,
    /// True if it cannot be left empty.
    pub required: bool,
    /// What is wrong with it: fact, remedy.
    pub wrong: Vec<(String, String)>,
}

impl Field {
    /// A figure.
    pub fn number(name: &'static str, label: &str) -> Field {
        Field {
            name,
            label: label.to_owned(),
            kind: "number",
            ..Field::default()
        }
    }

    /// Words.
    pub fn words(name: &'static str, label: &str) -> Field {
        Field {
            kind: "text",
            ..Field::number(name, label)
        }
    }

    /// A choice.
    pub fn choice(name: &'static str, label: &str, choices: &[(&str, &str)]) -> Field {
        let owned = choices
            .iter()
            .map(|(value, words)| ((*value).to_owned(), (*words).to_owned()));
        Field {
            kind: "select",
            choices: owned.collect(),
            ..Field::number(name, label)
        }
    }

    /// What stands in it before anybody typed.
    #[must_use]
    pub fn begins(mut self, text: &str) -> Field {
        text.clone_into(&mut self.text);
        self
    }

    /// Words below it.
    #[must_use]
    pub fn hint(mut self, hint: impl Into<String>) -> Field {
        self.hint = hint.into();
        self
    }

    /// The same field, which cannot be left empty.
    #[must_use]
    pub fn required(mut self) -> Field {
        self.required = true;
        self
    }
}

/// Fields that belong together.
#[derive(Clone, Debug, PartialEq)]
pub struct Group {
    /// Heading in the margin.
    pub title: &'static str,
    /// Words below it.
    pub words: &'static str,
    /// The fields.
    pub fields: Vec<Field>,
}

/// Why nothing was worked out.
#[derive(Clone, Debug, PartialEq)]
pub struct Refused {
    /// Name of the field; empty where it is on no field.
    pub field: &'static str,
    /// Its words.
    pub place: String,
    /// What is so.
    pub detail: String,
    /// What to do.
    pub remedy: String,
}

/// One step of the workings, ready for the table of steps.
#[derive(Clone, Debug, PartialEq)]
pub struct StepRow {
    /// Its number.
    pub number: String,
    /// What is done.
    pub text: String,
    /// The result.
    pub value: Option<f64>,
    /// Unit of the result.
    pub unit: String,
    /// Where a figure comes from.
    pub source: String,
    /// Where the figure is worked out, on this page.
    pub href: Option<String>,
}

impl StepRow {
    /// What is done, as HTML.
    pub fn shown(&self) -> filters::Markup {
        filters::Markup(filters::chem_html(&self.text))
    }
}

/// A table of results.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Sheet {
    /// Heading.
    pub title: String,
    /// Names of the columns of figures.
    pub head: Vec<String>,
    /// Rows: name, figures, unit.
    pub rows: Vec<(String, Vec<Option<f64>>, &'static str)>,
}

impl Sheet {
    /// A table with one column of figures.
    pub fn plain(title: &str, rows: &[(&str, f64, &'static str)]) -> Sheet {
        let row = |(name, figure, unit): &(&str, f64, &'static str)| {
            ((*name).to_owned(), vec![Some(*figure)], *unit)
        };
        Sheet {
            title: title.to_owned(),
            head: vec!["Figure".to_owned()],
            rows: rows.iter().map(row).collect(),
        }
    }
}

/// What follows from the figures.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Answer {
    /// The answer in large type: figure and the words after it.
    pub headline: Vec<(String, String)>,
    /// Tables.
    pub sheets: Vec<Sheet>,
    /// The arithmetic.
    pub steps: Vec<StepRow>,
    /// What a reader should know.
    pub notes: Vec<String>,
}

impl Answer {
    /// The arithmetic, numbered.
    #[must_use]
    pub fn steps(mut self, steps: &[Step]) -> Answer {
        for step in steps {
            self.steps.push(StepRow {
                number: (self.steps.len() + 1).to_string(),
                text: step.text.clone(),
                value: Some(step.value),
                unit: step.unit.clone(),
                source: step.source.clone(),
                href: None,
            });
        }
        self
    }

    /// Results and workings as CSV.
    pub fn table(&self) -> Table {
        let wide = self
            .sheets
            .iter()
            .map(|sheet| sheet.head.len())
            .max()
            .unwrap_or(1);
        let mut head = vec!["part", "name", "unit", "source", "figure"];
        head.extend(std::iter::repeat_n("beside_it", wide.saturating_sub(1)));
        let mut table = Table::new(&head);
        let mut row = |part: &str, name: &str, unit: &str, source: &str, figures: &[Option<f64>]| {
            let mut cells: Vec<Cell> = vec![part.into(), name.into(), unit.into(), source.into()];
            cells.extend((0..wide).map(|at| Cell::from(figures.get(at).copied().flatten())));
            table.rows.push(cells);
        };
        for sheet in &self.sheets {
            for (name, figures, unit) in &sheet.rows {
                row(&sheet.title, name, unit, "", figures);
            }
        }
        for step in &self.steps {
            row("workings", &step.text, &step.unit, &step.source, &[step.value]);
        }
        table
    }
}

/// The page of a calculator.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "calculator.html")]
pub struct Calculator {
    /// Round the page.
    pub frame: Frame,
    /// Its name.
    pub title: &'static str,
    /// What it does, in a sentence.
    pub lead: String,
    /// Its address.
    pub action: &'static str,
    /// The form.
    pub groups: Vec<Group>,
    /// Why nothing was worked out.
    pub refused: Vec<Refused>,
    /// What follows.
    pub answer: Option<Answer>,
    /// What the figures are not for.
    pub caution: &'static str,
    /// Address of the results as CSV.
    pub csv: String,
}

impl Calculator {
    /// A calculator at `action` whose API has the same name. The form shows what was asked, else what it begins with.
    pub fn of(
        title: &'static str,
        lead: impl Into<String>,
        action: &'static str,
        mut groups: Vec<Group>,
        asked: &Asked,
    ) -> Calculator {
        for field in groups.iter_mut().flat_map(|group| &mut group.fields) {
            // A choice that the address does not name is the one the form begins with.
            let unsaid = !field.choices.is_empty() && !asked.has(field.name);
            if !asked.is_empty() && !unsaid {
                asked.text(field.name).clone_into(&mut field.text);
            }
            // A word that the list does not know is shown as such: nothing else is chosen silently.
            let known = field.choices.iter().any(|(value, _)| *value == field.text);
            if !field.choices.is_empty() && !known {
                let blank = field.text.is_empty() && !field.required;
                let words = if blank {
                    "\u{2013}".to_owned()
                } else {
                    field.text.clone()
                };
                field.choices.insert(0, (field.text.clone(), words));
            }
        }
        Calculator {
            frame: Frame::new(title, Section::Calculators, format!("POST /api/v1{action}")),
            title,
            lead: lead.into(),
            action,
            groups,
            refused: Vec::new(),
            answer: None,
            caution: CAUTION,
            csv: format!("{action}.csv?{}", asked.query()),
        }
    }

    /// The page with what came of it. A refusal stands at the field of its name, else in the summary alone.
    #[must_use]
    pub fn with(mut self, outcome: Result<Answer, Vec<Wrong>>) -> Calculator {
        let wrong = match outcome {
            Ok(answer) => {
                self.answer = Some(answer);
                return self;
            }
            Err(wrong) => wrong,
        };
        for one in wrong {
            let mut fields = self.groups.iter_mut().flat_map(|group| &mut group.fields);
            let at = fields.find(|field| field.name == one.field);
            let (field, place) = match at {
                Some(field) => {
                    field.wrong.push((one.detail.clone(), one.remedy.clone()));
                    (field.name, field.label.clone())
                }
                None => ("", one.field.replace('_', " ")),
            };
            self.refused.push(Refused {
                field,
                place,
                detail: one.detail,
                remedy: one.remedy,
            });
        }
        self
    }

    /// The page as an answer: 422 where something was refused.
    ///
    /// # Errors
    /// As [`answers::page`].
    pub fn answer(&self) -> Result<Response, Refusal> {
        let status = if self.refused.is_empty() {
            StatusCode::OK
        } else {
            StatusCode::UNPROCESSABLE_ENTITY
        };
        answers::with_status(status, self)
    }

    /// The results as a file.
    ///
    /// # Errors
    /// 400 where nothing was asked, or something was refused.
    pub fn file(&self, name: &str) -> Result<Response, Refusal> {
        match (&self.answer, self.refused.first()) {
            (Some(answer), _) => Ok(answers::csv(name, &answer.table())),
            (None, Some(first)) => Err(Refusal::bad_request(format!(
                "{}: {} {}",
                first.place, first.detail, first.remedy
            ))),
            (None, None) => Err(Refusal::bad_request(format!(
                "Nothing is asked. Fill in the form at {} first.",
                self.action
            ))),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn page(pairs: &[(&str, &str)]) -> Calculator {
        let pairs = pairs.iter().map(|(a, b)| ((*a).to_owned(), (*b).to_owned()));
        let asked = Asked::of(pairs.collect());
        let group = Group {
            title: "Known",
            words: "",
            fields: vec![
                Field::number("kg", "Mass, kg").required().begins("1"),
                Field::choice("is", "It is", &[("a", "one"), ("b", "other")]).begins("a"),
            ],
        };
        let page = Calculator::of("Sum", "Adds.", "/calculators/sum", vec![group], &asked);
        if asked.is_empty() {
            return page;
        }
        let mut wrong = Vec::new();
        let kg = asked.need("kg", &mut wrong);
        page.with(match kg {
            Some(kg) if wrong.is_empty() => Ok(Answer {
                headline: vec![(crate::core::units::rounding::show(kg, 2), "kg".to_owned())],
                sheets: vec![Sheet::plain("Sum", &[("mass", kg, "kg")])],
                ..Answer::default()
            }),
            _ => Err(wrong),
        })
    }

    #[test]
    fn a_refused_figure_stays_as_typed_and_is_named_twice() {
        let shown = page(&[("kg", "1,5"), ("is", "<c>")]);
        let html = shown.render().expect("renders");
        assert!(
            html.contains("value=\"1,5\"") && html.contains("href=\"#f-kg\""),
            "{html}"
        );
        assert_eq!(html.matches("Write a point, such as 1.5.").count(), 2, "{html}");
        assert!(html.contains("&#60;c&#62;") && !html.contains("<c>"), "{html}");
        assert!(shown.file("sum").is_err() && page(&[]).file("sum").is_err());
    }

    #[test]
    fn a_result_has_an_address_and_a_file() {
        let shown = page(&[("kg", "1 000"), ("is", "b")]);
        assert_eq!(shown.csv, "/calculators/sum.csv?is=b&kg=1%20000");
        let table = shown.answer.as_ref().expect("an answer").table();
        assert_eq!(
            table.csv(),
            "part,name,unit,source,figure\r\nSum,mass,kg,,1000\r\n"
        );
        assert!(page(&[]).answer.is_none() && page(&[]).refused.is_empty());
        assert_eq!(
            page(&[("is", "a")]).refused.len(),
            1,
            "a figure that is missing is named"
        );
    }
}
