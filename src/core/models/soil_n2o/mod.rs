//! `soil_n2o`: direct and indirect N2O of the soil from fertiliser, residues and lost soil carbon, by three published
//! methods whose constants are never mixed. Gas `n2o`, kg.

mod methods;
mod parameters;
mod residues;
#[cfg(test)]
mod tests;

use super::given::Given;
use super::{Model, Outcome};
use crate::core::documents::assessment::Severity;
use crate::core::domain::{Gas, GasVector};
use crate::core::models::parameter::Span;
use crate::core::units::rounding::{plain, plain_fixed};

/// The model.
pub const MODEL: Model = Model {
    kind: "soil_n2o",
    title: "Soil N2O",
    what: "Direct and indirect N2O of the soil from fertiliser, crop residues and lost soil carbon.",
    source: "Implementing Regulation (EU) 2022/996 Annex VII point 1.5; 2006 IPCC Guidelines and 2019 Refinement Vol. 4 \
             Ch. 11 Equations 11.1, 11.6 to 11.10",
    term: None,
    parameters: parameters::ALL,
    compute,
};

/// A published method with an edition of constants.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Method {
    Eu,
    Ipcc2006,
    Ipcc2019,
}

impl Method {
    fn of(word: &str) -> Option<Method> {
        [Method::Eu, Method::Ipcc2006, Method::Ipcc2019]
            .into_iter()
            .find(|method| method.edition() == word)
    }

    /// The edition its constants come from: also its name in documents.
    fn edition(self) -> &'static str {
        match self {
            Method::Eu => "eu-2022-996",
            Method::Ipcc2006 => "ipcc-2006",
            Method::Ipcc2019 => "ipcc-2019",
        }
    }
}

/// Whether nitrogen leaches.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Wetness {
    Wet,
    Dry,
}

/// What a grower did, checked.
struct Field {
    method: Method,
    area: f64,
    /// F_SN, kg N.
    synthetic: f64,
    by_type: Vec<(&'static str, f64)>,
    /// F_ON, kg N.
    organic: f64,
    /// F_CR, kg N.
    residues: f64,
    /// Drained organic soil, ha, and the symbol of its EF2.
    organic_soil: Option<(f64, &'static str)>,
    wetness: Option<Wetness>,
}

fn compute(given: &mut Given) -> Option<Outcome> {
    let method = given.word("method").and_then(Method::of);
    let crop = given.word("crop");
    let area = given.number("area_ha");
    let synthetic = given.number_or("synthetic_n_kg", 0.0);
    let by_type = by_type(given, synthetic);
    let organic = given.number_or("organic_n_kg", 0.0);
    let organic_soil = organic_soil(given, area);
    let wetness = climate(given);
    rates(given, area, synthetic, organic);
    remark(given, by_type.as_deref().unwrap_or_default());
    let (method, crop, area) = (method?, crop?, area?);
    let site = match method {
        Method::Eu => Some(methods::site(given, crop)),
        _ => None,
    };
    let carbon = methods::carbon_nitrogen(given, method);
    let residues = residues::nitrogen(given, method, crop, area);
    let field = Field {
        method,
        area,
        synthetic: synthetic?,
        by_type: by_type?,
        organic: organic?,
        residues: residues?,
        organic_soil: organic_soil?,
        wetness: wetness?,
    };
    let n2o = match site {
        Some(site) => methods::eu(given, &field, &site?)?,
        None => methods::ipcc(given, &field, carbon?)?,
    };
    if !n2o.is_finite() {
        let detail = "The amounts of nitrogen give no finite emission.";
        given.problem(
            "organic_n_kg",
            detail,
            "Give amounts of ordinary size per hectare.",
        );
        return None;
    }
    Some(Outcome {
        gases: GasVector::of(Gas::N2o, n2o),
        ..Outcome::default()
    })
}

/// Nitrogen by fertiliser, which must add up to the whole within 0.1 %.
fn by_type(given: &mut Given, synthetic: Option<f64>) -> Option<Vec<(&'static str, f64)>> {
    if !given.has("synthetic_n_by_type_kg") {
        return Some(Vec::new());
    }
    let before = given.problems.len();
    let types = given.nitrogen_by_type("synthetic_n_by_type_kg")?;
    if given.problems.len() > before {
        return None;
    }
    let (sum, whole) = (types.iter().map(|(_, n)| n).sum::<f64>(), synthetic?);
    if (sum - whole).abs() > 1e-3 * whole {
        let detail = format!(
            "The fertilisers add up to {} kg N, but synthetic_n_kg is {} kg N.",
            plain(sum),
            plain(whole)
        );
        given.problem(
            "synthetic_n_by_type_kg",
            detail,
            "Correct one of the two; they may differ by 0.1 %.",
        );
        return None;
    }
    Some(types)
}

fn organic_soil(given: &mut Given, area: Option<f64>) -> Option<Option<(f64, &'static str)>> {
    let climate = given.word("organic_soil_climate");
    let hectares = given.number_or("organic_soil_ha", 0.0)?;
    if hectares == 0.0 {
        return Some(None);
    }
    if let Some(area) = area.filter(|area| hectares > *area) {
        let detail = format!(
            "{} ha of organic soil are more than the area of {} ha.",
            plain(hectares),
            plain(area)
        );
        given.problem("organic_soil_ha", detail, "Give the organic part of the area.");
        return None;
    }
    if !given.has("organic_soil_climate") {
        given.problem(
            "organic_soil_climate",
            "Drained organic soil needs its climate.",
            "Add \"organic_soil_climate\": temperate or tropical.",
        );
    }
    let symbol = match climate? {
        "tropical" => "ef2_tropical",
        _ => "ef2_temperate",
    };
    Some(Some((hectares, symbol)))
}

/// The climate; the inner value is none where it is left out, the outer one where it is wrong.
fn climate(given: &mut Given) -> Option<Option<Wetness>> {
    if !given.has("climate") {
        return Some(None);
    }
    match given.word("climate")? {
        "dry" => Some(Some(Wetness::Dry)),
        _ => Some(Some(Wetness::Wet)),
    }
}

/// Limits per hectare: they catch kilograms of product entered as kilograms of nitrogen.
fn rates(given: &mut Given, area: Option<f64>, synthetic: Option<f64>, organic: Option<f64>) {
    let Some(area) = area else { return };
    if let Some(rate) = synthetic.map(|kg| kg / area) {
        if rate > 1000.0 {
            let detail = format!(
                "{} kg N per ha of synthetic fertiliser is outside the range of the model.",
                plain_fixed(rate, 1)
            );
            let remedy = "Give at most 1000 kg N per ha; check that kg N was entered, not kg of product.";
            given.problem("synthetic_n_kg", detail, remedy);
        } else if let Some(usual) = Span::of(0.0, 350.0) {
            given.usual("synthetic_n_kg", rate, "kg/ha", usual);
        }
    }
    if let (Some(rate), Some(usual)) = (organic.map(|kg| kg / area), Span::of(0.0, 250.0)) {
        given.usual("organic_n_kg", rate, "kg/ha", usual);
    }
}

/// Fertilisers whose acid nobody has published a figure for, where the rules count soil acidity.
fn remark(given: &mut Given, by_type: &[(&'static str, f64)]) {
    if given.setting.rules.soil_n2o_method != Method::Eu.edition() {
        return;
    }
    let without = [
        "ammonium_sulphate",
        "monoammonium_phosphate",
        "diammonium_phosphate",
    ];
    for (kind, _) in by_type
        .iter()
        .filter(|(kind, kg)| *kg > 0.0 && without.contains(kind))
    {
        let message = format!(
            "No soil-acidity figure is published for {}; zero is counted.",
            kind.replace('_', " ")
        );
        let remedy = "Enter an own figure with its source if you have one.";
        given.note("K-05", Severity::Info, "synthetic_n_by_type_kg", message, remedy);
    }
}
