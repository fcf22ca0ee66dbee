//! A fermentation as documents.

use crate::core::documents::Problems;
use crate::core::documents::assessment::Step;
use crate::core::documents::reader::{Fields, Place, object, whole};
use crate::core::domain::Book;
use crate::core::models::factors::source_words;
use crate::core::models::fermentation::{
    Came, Fermentation, Given, Part, Refused, Request, Route, Substrate, ferment,
};
use serde::Serialize;
use serde_json::Value;
use utoipa::ToSchema;

/// Most substrates of a question.
const MOST_SUBSTRATES: usize = 50;

/// Sugars, and what came of them: exactly one of `efficiency_percent` and `ethanol_kg`.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct FermentationRequest {
    /// What ferments, or gives sugars that do.
    #[schema(min_items = 1, max_items = 50)]
    pub substrates: Vec<SubstrateRequest>,
    /// The feedstock that they came in, kg as received: for the yield per tonne.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub feedstock_kg: Option<f64>,
    /// Ethanol made of the most that the released sugar can give, %, 0 to 100.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub efficiency_percent: Option<f64>,
    /// Ethanol made, kg of pure ethanol, as measured: then the efficiency is worked out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub ethanol_kg: Option<f64>,
    /// Part of the sugar without ethanol that yeast breathed to CO2, %; 0 when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub respired_percent: Option<f64>,
    /// Part of the sugar without ethanol that became yeast, % of its carbon; 0 when left out. No source fixes it.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub yeast_percent: Option<f64>,
}

/// A substrate.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct SubstrateRequest {
    /// What it is.
    pub substrate: SubstrateWord,
    /// How much of it, kg dry.
    pub kg: f64,
    /// Part of starch, cellulose or xylan that becomes sugar, %; 100 when left out. Not for sugars.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub released_percent: Option<f64>,
}

/// A substance that ferments, or that gives sugars which do.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum SubstrateWord {
    /// Glucose or fructose.
    Glucose,
    /// Sucrose or maltose.
    Sucrose,
    /// Starch.
    Starch,
    /// Cellulose (glucan).
    Cellulose,
    /// Xylose.
    Xylose,
    /// Xylan.
    Xylan,
}

/// A fermentation worked out.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct FermentationAnswer {
    /// Substrate by substrate.
    pub substrates: Vec<SubstrateAnswer>,
    /// Sugar that ferments, kg of hexose and pentose.
    pub sugar_kg: f64,
    /// The most ethanol that the substrates can give, kg.
    pub most_ethanol_kg: f64,
    /// Ethanol made, kg.
    pub ethanol_kg: f64,
    /// Ethanol made, litres at 20 degC.
    pub ethanol_litres_at_20: f64,
    /// Of the most that the released sugar can give, %.
    pub efficiency_percent: f64,
    /// Of the most that the substrates can give, %.
    pub overall_percent: f64,
    /// Ethanol per sugar that ferments, kg/kg.
    pub ethanol_kg_per_kg_sugar: f64,
    /// Ethanol per tonne of feedstock, L/t; null without a feedstock.
    pub litres_per_tonne: Option<f64>,
    /// CO2 of the sugar split, kg.
    pub split_co2_kg: f64,
    /// CO2 of breathing yeast, kg.
    pub respired_co2_kg: f64,
    /// Both, kg.
    pub co2_kg: f64,
    /// Yeast grown, kg of dry matter.
    pub yeast_kg: f64,
    /// Sugar in none of these, kg: unfermented, or in glycerol and acids.
    pub other_sugar_kg: f64,
    /// The arithmetic, step by step.
    pub workings: Vec<Step>,
    /// What a reader should know.
    pub notes: Vec<String>,
}

/// What one substrate gives.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct SubstrateAnswer {
    /// What it is.
    pub substrate: String,
    /// How it becomes sugar: `sugar`, `starch` or `hydrolysis`.
    pub route: String,
    /// How much of it, kg dry.
    pub kg: f64,
    /// Part of it that becomes sugar, %.
    pub released_percent: f64,
    /// Sugar that ferments, kg.
    pub sugar_kg: f64,
    /// The most ethanol per substrate, kg/kg.
    pub most_kg_per_kg: f64,
    /// The most ethanol of all of it, kg.
    pub most_ethanol_kg: f64,
    /// The most ethanol of the part that becomes sugar, kg.
    pub most_ethanol_of_released_kg: f64,
}

/// Reads a question and answers it. The carbon of yeast is the built-in material's.
///
/// # Errors
/// Everything that is wrong with it, each with its pointer.
pub fn fermentation(body: &Value, book: &Book) -> Result<FermentationAnswer, Problems> {
    let request = whole(body, |fields, at, problems| read(fields, at, problems, book))?;
    ferment(&request).map(answer).map_err(problems_of)
}

fn read(fields: &mut Fields, at: &Place, problems: &mut Problems, book: &Book) -> Option<Request> {
    fields.need("substrates", at, problems);
    let before = problems.len();
    let mut substrates = fields.list("substrates", at, problems, substrate);
    if substrates.len() > MOST_SUBSTRATES {
        let detail = format!("{} substrates are too many.", substrates.len());
        problems.add(
            at.field("substrates"),
            detail,
            format!("Give at most {MOST_SUBSTRATES}."),
        );
        substrates.truncate(MOST_SUBSTRATES);
    }
    let unreadable = problems.len() > before;
    let feedstock = fields.number("feedstock_kg", at, problems);
    let came = fields.one_number(&["efficiency_percent", "ethanol_kg"], "efficiency", at, problems);
    let respired = fields.number("respired_percent", at, problems).unwrap_or(0.0);
    let yeast = fields.number("yeast_percent", at, problems).unwrap_or(0.0);
    let carbon = book
        .materials
        .get("yeast")
        .and_then(|material| material.properties.get("carbon_percent_dry"));
    if carbon.is_none() && yeast > 0.0 {
        let remedy = "Leave it out.";
        problems.add(
            at.field("yeast_percent"),
            "The carbon of yeast is not published here.",
            remedy,
        );
    }
    let came = match came? {
        (0, percent) => Came::Percent(percent),
        (_, kg) => Came::EthanolKg(kg),
    };
    (!unreadable).then(|| Request {
        substrates,
        feedstock_kg: feedstock,
        came,
        respired_percent: respired,
        yeast_percent: yeast,
        yeast_carbon_percent: carbon.map_or(f64::NAN, |property| property.figure.value),
        yeast_source: carbon.map_or_else(String::new, |property| {
            source_words(&property.figure.source, property.figure.status)
        }),
    })
}

fn substrate(value: &Value, at: &Place, problems: &mut Problems) -> Option<Given> {
    object(value, at, problems, |fields, at, problems| {
        fields.need("substrate", at, problems);
        let substrate = fields.word("substrate", &Substrate::WORDS, at, problems);
        let kg = fields.required_number("kg", at, problems);
        let released = fields.number("released_percent", at, problems);
        Some(Given {
            substrate: substrate?,
            kg: kg?,
            released_percent: released.unwrap_or(100.0),
        })
    })
}

fn problems_of(refused: Vec<Refused>) -> Problems {
    let mut problems = Problems::default();
    let list = Place::ROOT.field("substrates");
    for Refused { substrate, refusal } in refused {
        match substrate {
            Some(index) => {
                let item = list.item(index);
                problems.add(item.field(refusal.field), refusal.detail, refusal.remedy);
            }
            None => problems.add(Place::ROOT.field(refusal.field), refusal.detail, refusal.remedy),
        }
    }
    problems
}

fn answer(found: Fermentation) -> FermentationAnswer {
    let mut notes = found.unusual;
    notes.push(
        "The CO2 of the sugar split is what a capture can take at most; glycerol, acids and yeast shift it by a few per cent."
            .to_owned(),
    );
    FermentationAnswer {
        substrates: found.parts.iter().map(line).collect(),
        sugar_kg: found.sugar_kg,
        most_ethanol_kg: found.most_kg,
        ethanol_kg: found.ethanol_kg,
        ethanol_litres_at_20: found.ethanol_litres,
        efficiency_percent: found.efficiency_percent,
        overall_percent: found.overall_percent,
        ethanol_kg_per_kg_sugar: found.yield_kg_per_kg,
        litres_per_tonne: found.litres_per_tonne,
        split_co2_kg: found.split_co2_kg,
        respired_co2_kg: found.respired_co2_kg,
        co2_kg: found.co2_kg,
        yeast_kg: found.yeast_kg,
        other_sugar_kg: found.other_kg,
        workings: found.steps,
        notes,
    }
}

fn line(part: &Part) -> SubstrateAnswer {
    let Given {
        substrate,
        kg,
        released_percent,
    } = part.given;
    let route = match substrate.route() {
        Route::Sugar => "sugar",
        Route::Starch => "starch",
        Route::Hydrolysis => "hydrolysis",
    };
    SubstrateAnswer {
        substrate: substrate.name().to_owned(),
        route: route.to_owned(),
        kg,
        released_percent,
        sugar_kg: part.sugar_kg,
        most_kg_per_kg: substrate.most(),
        most_ethanol_kg: part.most_kg,
        most_ethanol_of_released_kg: part.most_of_released_kg,
    }
}
