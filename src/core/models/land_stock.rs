//! Carbon stock of land, t C/ha in the top 30 cm of soil and in vegetation: measured, or SOC_ST F_LU F_MG F_I + C_VEG of
//! Decision 2010/335/EU (form and figures recalled, not read at their source).

use super::factors::source_words;
use super::given::Given;
use super::parameter::{Parameter, Span, Takes};
use crate::core::documents::reader::nearest;
use crate::core::domain::Cited;
use crate::core::units::rounding::plain;

/// Climate regions of the standard soil stocks.
pub const REGIONS: &[&str] = &[
    "boreal",
    "cold_temperate_dry",
    "cold_temperate_moist",
    "warm_temperate_dry",
    "warm_temperate_moist",
    "tropical_dry",
    "tropical_moist",
    "tropical_wet",
    "tropical_montane",
];
/// Soil types of the standard soil stocks.
pub const SOILS: &[&str] = &[
    "high_activity_clay",
    "low_activity_clay",
    "sandy",
    "spodic",
    "volcanic",
    "wetland",
];
const USES: &[&str] = &[
    "cropland_annual",
    "cropland_perennial",
    "grassland",
    "forest",
    "scrubland",
    "settlement",
];
const TILLAGE: &[&str] = &["full_tillage", "reduced_tillage", "no_tillage"];
const PASTURE: &[&str] = &[
    "improved",
    "nominally_managed",
    "moderately_degraded",
    "severely_degraded",
];

/// Parameters of `before` and `after`.
pub const STOCK: &[Parameter] = &[
    Parameter::optional(
        "use",
        Takes::Word(USES),
        "none; needed unless measured",
        "use of the land, F_LU.",
    ),
    Parameter::optional(
        "management",
        Takes::Word(&[
            "full_tillage",
            "reduced_tillage",
            "no_tillage",
            "improved",
            "nominally_managed",
            "moderately_degraded",
            "severely_degraded",
        ]),
        "none; needed for cropland, grassland and scrubland",
        "tillage of cropland or state of grassland, F_MG.",
    ),
    Parameter::optional(
        "input",
        Takes::Word(&["low", "medium", "high_with_manure", "high_without_manure"]),
        "medium",
        "carbon input of the management, F_I.",
    ),
    Parameter::optional(
        "vegetation",
        Takes::Text,
        "none; needed unless measured",
        "row of the vegetation carbon, C_VEG, such as cropland_annual or grassland_cool_temperate_wet.",
    ),
    Parameter::optional(
        "carbon_t_per_ha",
        Takes::Number("t/ha"),
        "from the four above",
        "carbon of soil and vegetation, measured or cited, in place of management, input and vegetation.",
    )
    .hard(Span::of(0.0, 500.0)),
];

/// A carbon stock.
#[derive(Clone, Debug, PartialEq)]
pub struct Stock {
    /// The use of the land, where it is told.
    pub land: Option<&'static str>,
    /// t C/ha.
    pub carbon: f64,
    published: bool,
}

impl Stock {
    /// True if the stock came from published tables.
    pub fn is_published(&self) -> bool {
        self.published
    }

    /// True if the land is cropland, annual or perennial.
    pub fn is_cropland(&self) -> bool {
        self.land.is_some_and(|land| land.starts_with("cropland"))
    }

    /// Reads `before` or `after`; `ground` is climate region and soil. Without them a published stock is 0, and the
    /// caller says that they are missing.
    pub fn read(given: &mut Given, when: &str, ground: Option<(&str, &str)>) -> Option<Stock> {
        if given.has("carbon_t_per_ha") {
            return measured(given, when);
        }
        given.need(&["use", "vegetation"], "\"carbon_t_per_ha\" for a measured stock");
        let land = given.word("use");
        let management = land.and_then(|land| management(given, land));
        let input = if given.has("input") {
            given.word("input")
        } else {
            Some("medium")
        };
        let vegetation = vegetation(given);
        let (land, management, input, vegetation) = (land?, management?, input?, vegetation?);
        let published = |carbon| Stock {
            land: Some(land),
            carbon,
            published: true,
        };
        let Some((region, soil)) = ground else {
            return Some(published(0.0));
        };
        let soil = soil_carbon(given, land, management, input, (region, soil))?;
        let carbon = soil.iter().map(|figure| figure.value).product::<f64>() + vegetation.value;
        let [stock, factors @ ..] = &soil[..] else {
            return None;
        };
        let names = ["F_LU", "F_MG", "F_I"];
        let factors: Vec<String> = factors
            .iter()
            .zip(names)
            .map(|(figure, name)| format!(" x {name} {}", plain(figure.value)))
            .collect();
        let text = format!(
            "{when}: SOC {}{} + C_VEG {}",
            plain(stock.value),
            factors.concat(),
            plain(vegetation.value)
        );
        let mut sources: Vec<String> = Vec::new();
        for figure in soil.iter().copied().chain([vegetation]) {
            let words = source_words(&figure.source, figure.status);
            if !sources.contains(&words) {
                sources.push(words);
            }
        }
        given.step(text, carbon, "t C/ha", &sources.join("; "));
        Some(published(carbon))
    }
}

fn measured(given: &mut Given, when: &str) -> Option<Stock> {
    let beside: Vec<&str> = ["management", "input", "vegetation"]
        .into_iter()
        .filter(|name| given.has(name))
        .collect();
    for name in &beside {
        given.problem(
            name,
            format!("\"{name}\" stands beside a measured stock."),
            "Keep one of the two.",
        );
    }
    let land = match given.has("use") {
        true => Some(given.word("use")?),
        false => None,
    };
    let carbon = given.number("carbon_t_per_ha")?;
    given.step(format!("{when}: as measured or cited"), carbon, "t C/ha", "");
    beside.is_empty().then_some(Stock {
        land,
        carbon,
        published: false,
    })
}

/// The management of a use; the inner value is none where the use has none.
fn management(given: &mut Given, land: &str) -> Option<Option<&'static str>> {
    let words = match land {
        "cropland_annual" | "cropland_perennial" => TILLAGE,
        "grassland" | "scrubland" => PASTURE,
        "forest" => &[],
        _ => {
            let detail = format!("No carbon of {land} is published here.");
            given.problem("use", detail, "Give \"carbon_t_per_ha\", measured or cited.");
            return None;
        }
    };
    if !given.has("management") {
        if words.is_empty() {
            return Some(None);
        }
        given.problem(
            "management",
            format!("The management of {land} is missing."),
            format!("Use one of: {}.", words.join(", ")),
        );
        return None;
    }
    let management = given.word("management")?;
    if words.contains(&management) {
        return Some(Some(management));
    }
    let remedy = match words {
        [] => "Take it out.".to_owned(),
        words => format!("Use one of: {}.", words.join(", ")),
    };
    given.problem(
        "management",
        format!("{management} is no management of {land}."),
        remedy,
    );
    None
}

fn vegetation<'a>(given: &mut Given<'a>) -> Option<&'a Cited> {
    let name = given.text("vegetation")?;
    let row = match name.as_str() {
        "cropland_annual" => "annual_cropland",
        other => other,
    };
    let book = given.setting.book;
    let found = book.land.get(&format!("c_veg.{row}"));
    if found.is_none() {
        let known = book
            .land
            .keys()
            .filter_map(|symbol| symbol.strip_prefix("c_veg."));
        let remedy = match nearest(&name, known) {
            Some(near) => format!("Perhaps \"{near}\" was meant; else give \"carbon_t_per_ha\"."),
            None => "Choose a row of the vegetation table, or give \"carbon_t_per_ha\".".to_owned(),
        };
        given.problem(
            "vegetation",
            format!("There is no vegetation \"{name}\" here."),
            remedy,
        );
    }
    found
}

/// SOC_ST, F_LU, F_MG and F_I, as far as the use has them.
fn soil_carbon<'a>(
    given: &mut Given<'a>,
    land: &str,
    management: Option<&str>,
    input: &str,
    (region, soil): (&str, &str),
) -> Option<Vec<&'a Cited>> {
    // Dry and moist boreal soils share a row of SOC_ST; the factors of the moist ones lose more.
    let crop = match region {
        "cold_temperate_dry" | "warm_temperate_dry" => "temperate_dry",
        "tropical_dry" | "tropical_montane" => region,
        "tropical_moist" | "tropical_wet" => "tropical_moist",
        _ => "temperate_moist",
    };
    let pasture = match region {
        "tropical_dry" | "tropical_moist" | "tropical_wet" => "tropical",
        "tropical_montane" => region,
        _ => "temperate",
    };
    let (symbols, field): (Vec<String>, _) = match (land, management) {
        ("cropland_annual" | "cropland_perennial", Some(management)) => {
            let use_factor = match land {
                "cropland_annual" => format!("f_lu.cropland_annual.{crop}"),
                _ => "f_lu.cropland_perennial.all".to_owned(),
            };
            let managed = format!("f_mg.cropland_annual.{crop}.{management}");
            (
                vec![use_factor, managed, format!("f_i.cropland_annual.{crop}.{input}")],
                "management",
            )
        }
        ("forest", _) if input == "medium" => (vec!["f_lu.forest.all".to_owned()], "use"),
        // Scrubland stands with grassland in the Decision (recalled).
        ("grassland" | "scrubland", Some(management)) => {
            let input = match (management, input) {
                (_, "medium") => "medium",
                ("improved", "high_with_manure" | "high_without_manure") => "improved_high",
                _ => "",
            };
            let symbols = vec![
                format!("f_lu.grassland.{pasture}"),
                format!("f_mg.grassland.{pasture}.{management}"),
                format!("f_i.grassland.all.{input}"),
            ];
            (symbols, "input")
        }
        _ => (vec![String::new()], "input"),
    };
    let book = given.setting.book;
    let Some(stock) = book.land.get(&format!("soc.{region}.{soil}")) else {
        given.problem(
            "use",
            format!("No carbon of {soil} soil in the region {region} is published here."),
            "Correct soil or climate region, or give \"carbon_t_per_ha\".",
        );
        return None;
    };
    let factors: Option<Vec<&Cited>> = symbols.iter().map(|symbol| book.land.get(symbol)).collect();
    if factors.is_none() {
        given.problem(
            field,
            format!("{land} has no published factor for this {field} in {region}."),
            "Correct it, or give \"carbon_t_per_ha\".",
        );
    }
    let mut all = vec![stock];
    all.extend(factors?);
    Some(all)
}
