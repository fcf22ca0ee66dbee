//! A fermentation on a page: sugars, starch, and straw or wood after hydrolysis.

use crate::calculators::fermentation as work_out;
use crate::core::documents::Problems;
use crate::core::units::rounding::show;
use crate::web::calculator::{Answer, Asked, Calculator, Field, Group, Sheet, Wrong};
use serde_json::{Map, Value, json};

/// The substrates of the form: word of the API, field of the amount, field of the part that becomes sugar.
const SUBSTRATES: [(&str, &str, &str); 6] = [
    ("glucose", "glucose_kg", ""),
    ("sucrose", "sucrose_kg", ""),
    ("xylose", "xylose_kg", ""),
    ("starch", "starch_kg", "starch_released_percent"),
    ("cellulose", "cellulose_kg", "cellulose_released_percent"),
    ("xylan", "xylan_kg", "xylan_released_percent"),
];

/// Figures of the whole fermentation, named as in the API.
const FIGURES: [&str; 5] = [
    "feedstock_kg",
    "efficiency_percent",
    "ethanol_kg",
    "respired_percent",
    "yeast_percent",
];

/// The page.
pub fn page(asked: &Asked) -> Calculator {
    let page = Calculator::of(
        "Fermentation",
        "Sugars in; ethanol, CO2 and yeast out, by molar masses. One mole of CO2 stands with each mole of ethanol.",
        "/calculators/fermentation",
        groups(),
        asked,
    );
    if asked.is_empty() {
        page
    } else {
        page.with(answer(asked))
    }
}

fn groups() -> Vec<Group> {
    let part =
        |name: &'static str, label: &str| Field::number(name, label).hint("0 to 100 %. Left empty: 100 %.");
    vec![
        Group {
            title: "Sugars",
            words: "Dry, as they enter.",
            fields: vec![
                Field::number("glucose_kg", "Glucose or fructose, kg"),
                Field::number("sucrose_kg", "Sucrose or maltose, kg"),
                Field::number("xylose_kg", "Xylose, kg"),
            ],
        },
        Group {
            title: "Starch",
            words: "Enzymes turn it into glucose.",
            fields: vec![
                Field::number("starch_kg", "Starch, kg").begins("600"),
                part("starch_released_percent", "Part that becomes sugar, %"),
            ],
        },
        Group {
            title: "Hydrolysis",
            words: "Pretreatment and enzymes turn straw and wood into sugars.",
            fields: vec![
                Field::number("cellulose_kg", "Cellulose (glucan), kg"),
                part("cellulose_released_percent", "Part of it that becomes sugar, %"),
                Field::number("xylan_kg", "Xylan, kg"),
                part(
                    "xylan_released_percent",
                    "Part of the xylan that becomes sugar, %",
                ),
            ],
        },
        Group {
            title: "What came of it",
            words: "The efficiency or the ethanol measured; the other is worked out.",
            fields: vec![
                Field::number("efficiency_percent", "Efficiency, % of the most")
                    .begins("92")
                    .hint("Of the most that the released sugar can give."),
                Field::number("ethanol_kg", "Or ethanol made, kg pure"),
                Field::number("respired_percent", "Of the other sugar, breathed by yeast, %")
                    .hint("Left empty: 0 %."),
                Field::number(
                    "yeast_percent",
                    "Of the other sugar, become yeast, % of its carbon",
                )
                .hint("Left empty: 0 %. No source fixes it."),
                Field::number("feedstock_kg", "Feedstock they came in, kg as received")
                    .begins("1000")
                    .hint("For the yield per tonne; may be left empty."),
            ],
        },
    ]
}

/// The document of the form, and which substrate stands at which place of it.
fn document(asked: &Asked, wrong: &mut Vec<Wrong>) -> (Value, Vec<usize>) {
    let mut out = Map::new();
    let (mut substrates, mut places) = (Vec::new(), Vec::new());
    for (index, (word, kg, released)) in SUBSTRATES.iter().enumerate() {
        let part = asked.figure(released, wrong);
        let Some(figure) = asked.figure(kg, wrong) else {
            if part.is_some() && asked.text(kg).is_empty() {
                let detail = "A part is given, but no amount.";
                wrong.push(Wrong::new(kg, detail, "Give the amount, or empty the part."));
            }
            continue;
        };
        let mut item = json!({ "substrate": word, "kg": figure });
        if let (Some(part), Value::Object(item)) = (part, &mut item) {
            item.insert("released_percent".to_owned(), json!(part));
        }
        substrates.push(item);
        places.push(index);
    }
    out.insert("substrates".to_owned(), Value::Array(substrates));
    for name in FIGURES {
        if let Some(figure) = asked.figure(name, wrong) {
            out.insert(name.to_owned(), json!(figure));
        }
    }
    (Value::Object(out), places)
}

/// Problems of the document at the fields of the form.
fn at_fields(problems: &Problems, places: &[usize]) -> Vec<Wrong> {
    let field = |pointer: &str| -> String {
        let mut parts = pointer.split('/').skip(1);
        let (first, index, last) = (parts.next(), parts.next(), parts.next());
        if first != Some("substrates") {
            return first.unwrap_or_default().to_owned();
        }
        let place = index
            .and_then(|index| index.parse::<usize>().ok())
            .and_then(|index| SUBSTRATES.get(*places.get(index)?));
        match place {
            Some((_, _, released)) if last == Some("released_percent") => (*released).to_owned(),
            Some((_, kg, _)) => (*kg).to_owned(),
            None => "starch_kg".to_owned(),
        }
    };
    let rows = problems.list().iter();
    rows.map(|one| Wrong::new(&field(&one.pointer), one.detail.clone(), one.remedy.clone()))
        .collect()
}

fn answer(asked: &Asked) -> Result<Answer, Vec<Wrong>> {
    let mut wrong = Vec::new();
    let (document, places) = document(asked, &mut wrong);
    if places.is_empty() && wrong.is_empty() {
        wrong.push(Wrong::new(
            "starch_kg",
            "Nothing that ferments is given.",
            "Give the amount of at least one substrate.",
        ));
    }
    if !wrong.is_empty() {
        return Err(wrong);
    }
    let found =
        work_out(&document, crate::library::book()).map_err(|problems| at_fields(&problems, &places))?;
    let mut rows = vec![
        ("sugar that ferments", found.sugar_kg, "kg"),
        (
            "the most ethanol that the substrates can give",
            found.most_ethanol_kg,
            "kg",
        ),
        ("ethanol made", found.ethanol_kg, "kg"),
        ("ethanol made, at 20 degC", found.ethanol_litres_at_20, "L"),
        (
            "efficiency, of what the released sugar can give",
            found.efficiency_percent,
            "%",
        ),
        ("of what the substrates can give", found.overall_percent, "%"),
        (
            "ethanol per sugar that ferments",
            found.ethanol_kg_per_kg_sugar,
            "kg/kg",
        ),
    ];
    if let Some(litres) = found.litres_per_tonne {
        rows.push(("ethanol per tonne of feedstock", litres, "L/t"));
    }
    rows.extend([
        ("CO2 of the sugar split", found.split_co2_kg, "kg"),
        ("CO2 of breathing yeast", found.respired_co2_kg, "kg"),
        ("CO2 in all", found.co2_kg, "kg"),
        ("yeast, dry", found.yeast_kg, "kg"),
        ("sugar in none of these", found.other_sugar_kg, "kg"),
    ]);
    let parts = Sheet {
        title: "Substrate by substrate".to_owned(),
        head: ["Given", "Sugar", "Most ethanol", "Most of what is released"]
            .map(str::to_owned)
            .to_vec(),
        rows: found
            .substrates
            .iter()
            .map(|part| {
                let figures = [
                    part.kg,
                    part.sugar_kg,
                    part.most_ethanol_kg,
                    part.most_ethanol_of_released_kg,
                ];
                (part.substrate.clone(), figures.map(Some).to_vec(), "kg")
            })
            .collect(),
    };
    let mut headline = vec![
        (
            show(found.ethanol_litres_at_20, 2),
            "L of ethanol at 20 degC".to_owned(),
        ),
        (show(found.co2_kg, 2), "kg of CO2".to_owned()),
    ];
    if let Some(litres) = found.litres_per_tonne {
        headline.push((show(litres, 1), "L per tonne of feedstock".to_owned()));
    }
    let answer = Answer {
        headline,
        sheets: vec![Sheet::plain("The fermentation", &rows), parts],
        notes: found.notes,
        ..Answer::default()
    };
    Ok(answer.steps(&found.workings))
}
