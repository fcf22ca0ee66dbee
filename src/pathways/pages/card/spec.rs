//! What fields a stage has: one row a field, with its pointer and what may stand in it. Fields of models follow from
//! their parameter tables; the rest stands here. Showing and reading both follow these rows, so they cannot differ.

use super::form::Form;
use crate::core::documents::amount::Origin;
use crate::core::domain::rule_set::AllocationMethod;
use crate::core::domain::{Gas, StageKind, Term};
use crate::core::models::{
    self,
    parameter::{Parameter, Takes},
};
use serde_json::Value;

/// What may stand in a field.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// A figure.
    Number,
    /// A figure in this unit, or with another unit of the same kind.
    Measured(&'static str),
    /// A figure that always carries its unit.
    Amount(&'static str),
    /// The word `none`, or a figure that carries its unit.
    NoneOrAmount(&'static str),
    /// One of these words: value, words for people.
    Word(Vec<(String, String)>),
    /// Yes or no.
    Flag,
    /// A line of text.
    Text,
    /// Several lines of text.
    Area,
    /// A calendar day.
    Day,
    /// Texts with commas between them.
    Texts,
    /// A factor of an edition.
    Factor,
    /// One factor of an edition, or several with ` + ` between them.
    Factors,
}

/// One field.
#[derive(Clone, Debug, PartialEq)]
pub struct Spec {
    /// Pointer into the stage.
    pub pointer: String,
    /// Words above it.
    pub label: String,
    /// What may stand in it.
    pub shape: Shape,
    /// Words below it.
    pub hint: String,
    /// True if it cannot be left empty.
    pub required: bool,
    /// True for fields that few need: they are folded away.
    pub rare: bool,
}

impl Spec {
    fn new(base: &str, name: &str, label: &str, shape: Shape) -> Spec {
        Spec {
            pointer: format!("{base}/{name}"),
            label: label.to_owned(),
            shape,
            hint: String::new(),
            required: false,
            rare: false,
        }
    }

    fn hint(self, hint: impl Into<String>) -> Spec {
        Spec {
            hint: hint.into(),
            ..self
        }
    }

    fn rare(self) -> Spec {
        Spec { rare: true, ..self }
    }
}

/// Where the fields of a stage get their shape from: the document as it was, and what was typed since.
#[derive(Clone, Copy)]
pub struct Ground<'a> {
    /// The stage.
    pub stage: &'a Value,
    /// What was typed.
    pub typed: &'a Form,
}

impl<'a> Ground<'a> {
    /// What stands at a pointer of the document.
    pub fn at(&self, pointer: &str) -> Option<&'a Value> {
        self.stage.pointer(pointer)
    }

    fn is_object(&self, pointer: &str) -> bool {
        self.at(pointer).is_some_and(Value::is_object) || self.typed.has_below(pointer)
    }

    /// The text of a field: as typed, else as it stands.
    pub fn word(&self, pointer: &str) -> String {
        match (self.typed.get(pointer), self.at(pointer)) {
            (Some(typed), _) => typed.trim().to_owned(),
            (None, Some(Value::String(text))) => text.clone(),
            _ => String::new(),
        }
    }
}

fn words(pairs: impl IntoIterator<Item = (&'static str, &'static str)>) -> Shape {
    Shape::Word(
        pairs
            .into_iter()
            .map(|(value, shown)| (value.to_owned(), shown.to_owned()))
            .collect(),
    )
}

/// A name of a document in words: `distance_km` is "distance km".
pub fn named(name: &str) -> String {
    crate::web::filters::capital(&name.replace('_', " "))
}

/// Name, kind, sharing and note of the stage itself.
pub fn stage(ground: Ground) -> Vec<Spec> {
    let mut out = vec![
        Spec::new("", "name", "Name", Shape::Text),
        Spec::new(
            "",
            "kind",
            "What the stage is for",
            words(StageKind::ALL.map(|kind| (kind.name(), kind.words()))),
        ),
        Spec::new(
            "",
            "allocation",
            "Shares its burden by",
            words(AllocationMethod::ALL.map(|m| (m.name(), m.name()))),
        )
        .hint("Left empty: as the rule set says."),
        Spec::new("", "note", "Note", Shape::Text).hint("For people; never computed with."),
    ];
    let kind = ground.word("/kind");
    if matches!(kind.as_str(), "cultivation" | "land") || ground.is_object("/grown") {
        out.extend([
            Spec::new("/grown", "country", "Country", Shape::Text).rare(),
            Spec::new("/grown", "region", "Region", Shape::Text)
                .hint("Such as a NUTS 2 code.")
                .rare(),
            Spec::new("/grown", "harvest_year", "Year of the harvest", Shape::Number).rare(),
            Spec::new(
                "/grown",
                "land_use_january_2008",
                "The land in January 2008",
                Shape::Text,
            )
            .rare(),
            Spec::new("/grown", "growers", "How many growers", Shape::Number).rare(),
            Spec::new(
                "/grown",
                "land_declarations",
                "Numbers of the land declarations",
                Shape::Texts,
            )
            .rare(),
        ]);
    }
    if kind == "bought" || ground.is_object("/stated") {
        out.extend(stated());
    }
    out
}

fn stated() -> Vec<Spec> {
    let mut out = vec![
        Spec::new("/stated", "proof", "Number of the proof", Shape::Text),
        Spec::new("/stated", "issuer", "Who issued it", Shape::Text),
        Spec::new("/stated", "rule_set", "Rule set of the proof", Shape::Text)
            .hint("Must be the pathway\u{2019}s."),
        Spec::new("/stated", "plant_started", "The stated works started", Shape::Day),
        Spec::new("/stated", "covers", "How much fuel it covers", Shape::Amount("t")),
        Spec::new(
            "/stated",
            "lhv",
            "Heating value it counts with",
            Shape::Amount("MJ/kg"),
        )
        .rare(),
        Spec::new("/stated", "evidence", "Documents that back it", Shape::Texts),
    ];
    let kinds = || {
        words([
            ("actual", "actual"),
            ("regional", "regional"),
            ("default", "default"),
        ])
    };
    for term in Term::ALL {
        let at = format!("/stated/terms/{}", term.name());
        let label = format!("{}, g CO2e/MJ", term.name());
        out.push(Spec::new(&at, "g_co2e_per_mj", &label, Shape::Number).hint(term.words()));
        out.push(Spec::new(
            &at,
            "value_kind",
            &format!("{} is", term.name()),
            kinds(),
        ));
    }
    out
}

/// Amount and quality of a flow. `material` decides what most people need.
fn flow(base: &str, material: &str) -> Vec<Spec> {
    let ethanol = material == "ethanol";
    let energy = matches!(material, "heat" | "power");
    let often = |spec: Spec, often: bool| if often { spec } else { spec.rare() };
    vec![
        Spec::new(base, "amount", "Amount", Shape::Number),
        Spec::new(base, "unit", "Unit", Shape::Text),
        often(
            Spec::new(base, "strength_percent_mass", "Strength, % mass", Shape::Number),
            ethanol,
        ),
        often(
            Spec::new(
                base,
                "strength_percent_vol",
                "Strength, % vol at 20 °C",
                Shape::Number,
            ),
            false,
        ),
        often(
            Spec::new(base, "temperature_c", "Read at, °C", Shape::Number),
            ethanol || energy,
        ),
        often(
            Spec::new(
                base,
                "moisture_percent",
                "Moisture, % of the wet mass",
                Shape::Number,
            ),
            !ethanol && !energy,
        ),
        often(
            Spec::new(
                base,
                "carbon_percent_dry",
                "Carbon, % of the dry mass",
                Shape::Number,
            ),
            false,
        ),
        often(
            Spec::new(base, "lhv", "Heating value as it leaves", Shape::Amount("MJ/kg")),
            false,
        ),
        often(Spec::new(base, "price", "Price", Shape::Amount("EUR/t")), false),
        often(Spec::new(base, "note", "Note", Shape::Text), false),
    ]
}

/// The main product.
pub fn output(ground: Ground) -> Vec<Spec> {
    let mut out = vec![Spec::new("/output", "material", "Main product", Shape::Text)];
    out.extend(flow("/output", &ground.word("/output/material")));
    out
}

/// One intake. `material` is that of its source.
pub fn intake(base: &str, sources: &[(String, String)], material: &str) -> Vec<Spec> {
    let mut out = vec![
        Spec::new(base, "from", "Taken from", Shape::Word(sources.to_vec())),
        Spec::new(base, "product", "Its co-product", Shape::Text)
            .hint("Left empty: the main product.")
            .rare(),
    ];
    out.extend(flow(base, material));
    out
}

/// One co-product.
pub fn co_product(base: &str, ground: Ground) -> Vec<Spec> {
    let mut out = vec![
        Spec::new(base, "name", "Co-product", Shape::Text),
        Spec::new(base, "material", "Material", Shape::Text).hint("An id such as ddgs_wheat."),
        Spec::new(
            base,
            "role",
            "Role",
            words([
                ("co_product", "co-product"),
                ("residue", "residue"),
                ("waste", "waste"),
            ]),
        ),
    ];
    out.extend(flow(base, &ground.word(&format!("{base}/material"))));
    if ground.is_object(&format!("{base}/displaces")) || ground.word("/allocation") == "substitution" {
        let at = format!("{base}/displaces");
        out.push(Spec::new(&at, "amount", "Displaces, amount", Shape::Number));
        out.push(Spec::new(&at, "unit", "Displaces, unit", Shape::Text));
        out.push(Spec::new(
            &at,
            "factor",
            "Factor of what it displaces",
            Shape::Factors,
        ));
    }
    out
}

/// What an input is: `factor`, `own`, `gases`, or the kind of a model.
pub fn input_as(item: &Value) -> String {
    let first = |value: &Value| match value {
        Value::Array(list) => list.first().cloned().unwrap_or(Value::Null),
        other => other.clone(),
    };
    if let Some(model) = item.get("model") {
        return first(model)
            .get("kind")
            .and_then(Value::as_str)
            .unwrap_or("model")
            .to_owned();
    }
    if item.get("gases").is_some() {
        return "gases".to_owned();
    }
    if item.get("factor").is_some_and(Value::is_object) {
        return "own".to_owned();
    }
    "factor".to_owned()
}

/// One input, of the kind that `is` names.
pub fn input(base: &str, is: &str, ground: Ground) -> Vec<Spec> {
    let mut out = vec![Spec::new(base, "label", "Input", Shape::Text)];
    match is {
        "factor" | "own" => {
            out.push(Spec::new(base, "amount", "Amount", Shape::Number));
            out.push(Spec::new(base, "unit", "Unit", Shape::Text));
            let at = format!("{base}/factor");
            if is == "own" {
                out.extend(own_factor(&at));
            } else {
                out.push(
                    Spec::new(base, "factor", "Factor", Shape::Factors)
                        .hint("Type a word and look it up; several are joined by +."),
                );
            }
            let gross = ground.word(&format!("{base}/unit")).contains("gross");
            let ratio = Spec::new(
                base,
                "net_per_gross",
                "Net per gross heating value",
                Shape::Number,
            );
            out.push(if gross { ratio } else { ratio.rare() });
        }
        "gases" => out.extend(gases(&format!("{base}/gases"), "kg per recipe")),
        kind => {
            let at = format!("{base}/model");
            let count = ground.at(&at).and_then(Value::as_array).map_or(0, Vec::len);
            let places: Vec<String> = if count > 0 {
                (0..count).map(|i| format!("{at}/{i}")).collect()
            } else {
                vec![at]
            };
            if let Some(model) = models::find(kind) {
                for place in places {
                    out.extend(model_fields(model.parameters, &place, "", ground));
                }
            }
        }
    }
    out.push(Spec::new(
        base,
        "origin",
        "Origin",
        words(Origin::ALL.map(|origin| (origin.name(), origin.name()))),
    ));
    out.push(
        Spec::new(base, "evidence", "Documents that back it", Shape::Texts)
            .hint("Ids of evidence, with commas between them.")
            .rare(),
    );
    out.push(Spec::new(base, "estimated_percent", "Estimated part, %", Shape::Number).rare());
    out.push(Spec::new(base, "note", "Note", Shape::Text).rare());
    out
}

fn own_factor(at: &str) -> Vec<Spec> {
    let mut out = vec![
        Spec::new(at, "per", "Own factor, per", Shape::Text).hint("Such as kg, kg N, MJ, kWh power."),
        Spec::new(at, "citation", "Where it comes from", Shape::Text),
    ];
    out.extend(gases(&format!("{at}/gases"), "kg per unit"));
    out
}

fn gases(at: &str, unit: &str) -> Vec<Spec> {
    let mut out: Vec<Spec> = Gas::ALL
        .into_iter()
        .map(|gas| {
            Spec::new(
                at,
                gas.name(),
                &format!("{}, {unit}", crate::web::filters::capital(gas.words())),
                Shape::Number,
            )
        })
        .collect();
    for spec in &mut out {
        spec.rare = spec.pointer.ends_with("co2_biogenic") || spec.pointer.ends_with("co2_land");
    }
    out
}

/// The fields of a model, by its table.
fn model_fields(table: &'static [Parameter], base: &str, before: &str, ground: Ground) -> Vec<Spec> {
    table
        .iter()
        .flat_map(|row| parameter(row, base, before, ground))
        .collect()
}

fn parameter(row: &'static Parameter, base: &str, before: &str, ground: Ground) -> Vec<Spec> {
    let at = format!("{base}/{}", row.name);
    let label = match (before.is_empty(), row.label()) {
        (true, label) => label,
        (false, label) => format!("{before}: {}", crate::web::filters::small(&label)),
    };
    let one = |shape: Shape| {
        vec![Spec {
            required: row.required,
            hint: hint(row),
            ..Spec::new(base, row.name, &label, shape)
        }]
    };
    match row.takes {
        Takes::Number("") => one(Shape::Number),
        Takes::Number(unit) => one(Shape::Measured(unit)),
        Takes::Amount(unit) => one(Shape::Amount(unit)),
        Takes::NoneOrAmount(unit) => one(Shape::NoneOrAmount(unit)),
        Takes::Word(list) => one(Shape::Word(
            list.iter()
                .map(|word| ((*word).to_owned(), word.replace('_', " ")))
                .collect(),
        )),
        Takes::Flag => one(Shape::Flag),
        Takes::Day => one(Shape::Day),
        Takes::Year => one(Shape::Number),
        Takes::Text => one(Shape::Text),
        Takes::Factor if ground.is_object(&at) => own_factor(&at),
        Takes::Factor => one(Shape::Factor),
        Takes::Vehicle(own) if ground.is_object(&at) => model_fields(own, &at, &label, ground),
        Takes::Vehicle(_) => one(Shape::Factor),
        Takes::Gases => gases(&at, "kg"),
        Takes::NitrogenByType(types) => types
            .iter()
            .map(|kind| Spec::new(&at, kind, &format!("{}, kg N", named(kind)), Shape::Number))
            .collect(),
        Takes::Object(inner) => model_fields(inner, &at, &label, ground),
        Takes::Fuels => {
            let stands = ground.at(&at).and_then(Value::as_array).map_or(0, Vec::len);
            (0..=stands.max(ground.typed.count(&at)).min(20))
                .flat_map(|index| {
                    let place = format!("{at}/{index}");
                    [
                        Spec::new(&place, "factor", &format!("Fuel {}", index + 1), Shape::Factor),
                        Spec::new(
                            &place,
                            "stack",
                            &format!("Fuel {}, its stack", index + 1),
                            Shape::Factor,
                        ),
                        Spec::new(
                            &place,
                            "share_percent",
                            &format!("Fuel {}, share, %", index + 1),
                            Shape::Number,
                        ),
                    ]
                })
                .collect()
        }
    }
}

fn hint(row: &Parameter) -> String {
    let mut out = crate::web::filters::capital(row.meaning);
    if !row.default.is_empty() {
        out.push_str(&format!(" Left empty: {}.", row.default));
    }
    if let Some(hard) = row.hard {
        out.push_str(&format!(
            " {}.",
            crate::web::filters::capital(&hard.words(row.unit()))
        ));
    }
    out
}
