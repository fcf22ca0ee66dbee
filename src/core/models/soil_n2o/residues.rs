//! Nitrogen of crop residues, F_CR: 2006 IPCC Guidelines Vol. 4 Ch. 11 Equations 11.6, 11.7 and 11.7A with Table 11.2;
//! 2019 Refinement Equation 11.6 with Table 11.1A; Implementing Regulation (EU) 2022/996 Annex VII point 1.5, Table 1.

use super::Method;
use crate::core::domain::book::ResidueRow;
use crate::core::models::constants::{Figure, constant, constants, sources};
use crate::core::models::factors::source_words;
use crate::core::models::given::Given;
use crate::core::models::parameter::Span;
use crate::core::units::rounding::plain;

const ROOTS: [&str; 2] = ["sugar_beet", "sugar_cane"];
const TUBERS: [&str; 2] = ["potato", "cassava"];

/// The harvest: tonnes wet and kilograms dry.
struct Harvest {
    wet_t: f64,
    dry_kg: f64,
}

/// F_CR, kg N.
pub(super) fn nitrogen(given: &mut Given, method: Method, crop: &'static str, area: f64) -> Option<f64> {
    let removed = given.number_or("residues_removed_percent", 0.0);
    let burnt = given.number_or("residues_burnt_percent", 0.0);
    let moisture = given.number_or("moisture_percent", f64::NAN);
    let tonnes = harvested(given, crop, area);
    if given.has("residue_n_kg") {
        return given.number("residue_n_kg");
    }
    let (removed, burnt, moisture) = (removed? / 100.0, burnt? / 100.0, moisture?);
    let row = row(given, method, crop)?;
    let source = source_words(&row.citation.source, row.citation.status);
    let Some(wet_t) = tonnes? else {
        let detail = "The stage's output is no mass, so it cannot stand in for the yield.";
        given.problem(
            "yield_t",
            detail,
            "Add \"yield_t\", the harvest of the area, wet.",
        );
        return None;
    };
    let moisture = match (
        moisture.is_nan(),
        given.setting.output.and_then(|output| output.moisture),
    ) {
        (false, _) => moisture / 100.0,
        (true, Some(of_output)) => of_output,
        (true, None) => 1.0 - figure(given, row, "dry", crop)?,
    };
    let dry_kg = wet_t * 1000.0 * (1.0 - moisture);
    let text = format!(
        "harvest {} t x 1000 x (1 - {} of water)",
        plain(wet_t),
        plain(moisture)
    );
    given.step(text, dry_kg, "kg dry", "");
    let harvest = Harvest { wet_t, dry_kg };
    let fire = fire(given, method, crop, row, burnt)?;
    match method {
        Method::Ipcc2019 => by_ratio(given, row, crop, &harvest, removed, &fire, &source),
        Method::Eu if ROOTS.contains(&crop) => root(given, row, crop, &harvest, removed, &fire, &source),
        _ => by_line(given, row, crop, area, &harvest, removed, &fire, &source),
    }
}

/// Tonnes harvested, wet: given, else the stage's output (`Some(None)` where that is no mass); checked per hectare.
fn harvested(given: &mut Given, crop: &str, area: f64) -> Option<Option<f64>> {
    let tonnes = if given.has("yield_t") {
        Some(given.number("yield_t")?)
    } else {
        let output = given.setting.output;
        output.and_then(|output| output.wet_kg).map(|kg| kg / 1000.0)
    };
    let span = match crop {
        crop if ROOTS.contains(&crop) => Span::of(20.0, 130.0),
        crop if TUBERS.contains(&crop) => None,
        _ => Span::of(0.5, 20.0),
    };
    if let (Some(tonnes), Some(span)) = (tonnes, span) {
        given.usual("yield_t", tonnes / area, "t/ha", span);
    }
    Some(tonnes)
}

fn row<'b>(given: &mut Given<'b>, method: Method, crop: &str) -> Option<&'b ResidueRow> {
    let book = given.setting.book;
    let tables = book.soils.get(method.edition());
    let row = tables.and_then(|tables| tables.residues.get(crop));
    if row.is_none() {
        let detail = format!("{} has no crop-residue figures for {crop}.", method.edition());
        given.problem(
            "crop",
            detail,
            "Add \"residue_n_kg\", or choose a method that has the crop.",
        );
    }
    row
}

/// A figure of a row; one that the table prints as not available is a problem.
fn figure(given: &mut Given, row: &ResidueRow, name: &str, crop: &str) -> Option<f64> {
    let found = row.figures.get(name).copied();
    if found.is_none() {
        let detail = format!("The crop-residue figures for {crop} have no {}.", words(name));
        given.problem(
            "crop",
            detail,
            "Add \"residue_n_kg\", or choose a method that has the figure.",
        );
    }
    found
}

fn words(name: &str) -> &str {
    match name {
        "dry" => "dry matter (DRY)",
        "slope" => "slope of the above-ground residue",
        "intercept" => "intercept of the above-ground residue",
        "r_ag" => "ratio of above-ground residue (R_AG)",
        "n_ag" => "nitrogen above ground (N_AG)",
        "n_bg" => "nitrogen below ground (N_BG)",
        "r_bg_bio" => "ratio of below-ground residue (R_BG-BIO)",
        "rs" => "ratio of root to shoot (RS)",
        other => other,
    }
}

/// What burns of the whole field's residue: Frac_Burnt x C_f, with its words and source; none without a fire.
struct Fire {
    share: f64,
    words: String,
    source: Option<Figure>,
}

fn fire(given: &mut Given, method: Method, crop: &str, row: &ResidueRow, burnt: f64) -> Option<Fire> {
    if burnt == 0.0 {
        return Some(Fire {
            share: 0.0,
            words: "0 burnt".to_owned(),
            source: None,
        });
    }
    let figure = match row.figures.get("cf") {
        Some(cf) => Figure {
            value: *cf,
            source: source_words(&row.citation.source, row.citation.status),
        },
        None => {
            let symbol = if crop.ends_with("wheat") {
                "cf.wheat"
            } else {
                "cf.other"
            };
            constant(given, method.edition(), symbol)?
        }
    };
    Some(Fire {
        share: burnt * figure.value,
        words: format!("{} burnt x {} C_f", plain(burnt), plain(figure.value)),
        source: Some(figure),
    })
}

fn with_fire(source: &str, fire: &Fire) -> String {
    match &fire.source {
        Some(figure) if figure.source != source => format!("{source}; {}", figure.source),
        _ => source.to_owned(),
    }
}

/// Above ground by slope and intercept, below ground by R_BG-BIO (Table 11.2, Annex VII Table 1).
#[expect(clippy::too_many_arguments, reason = "the terms of one published equation")]
fn by_line(
    given: &mut Given,
    row: &ResidueRow,
    crop: &str,
    area: f64,
    harvest: &Harvest,
    removed: f64,
    fire: &Fire,
    source: &str,
) -> Option<f64> {
    let read = ["slope", "intercept", "n_ag", "r_bg_bio", "n_bg"].map(|name| figure(given, row, name, crop));
    let [Some(slope), Some(intercept), Some(n_ag), Some(r_bg), Some(n_bg)] = read else {
        return None;
    };
    let crop_kg = harvest.dry_kg;
    let above = (crop_kg / 1000.0 * slope + intercept * area) * 1000.0;
    let text = format!(
        "above-ground residue ({} kg / 1000 x {} + {} t/ha x {} ha) x 1000",
        plain(crop_kg),
        plain(slope),
        plain(intercept),
        plain(area)
    );
    given.step(text, above, "kg dry", source);
    let n = above * n_ag * (1.0 - fire.share) * (1.0 - removed) + r_bg * (above + crop_kg) * n_bg;
    let text = format!(
        "residues {a} x {} x (1 - {}) x (1 - {} removed) + {} x ({a} + {}) x {}",
        plain(n_ag),
        fire.words,
        plain(removed),
        plain(r_bg),
        plain(crop_kg),
        plain(n_bg),
        a = plain(above)
    );
    given.step(text, n, "kg N", &with_fire(source, fire));
    Some(n)
}

/// Above ground by R_AG, below ground by RS (2019 Refinement Table 11.1A).
fn by_ratio(
    given: &mut Given,
    row: &ResidueRow,
    crop: &str,
    harvest: &Harvest,
    removed: f64,
    fire: &Fire,
    source: &str,
) -> Option<f64> {
    let read = ["r_ag", "n_ag", "rs", "n_bg"].map(|name| figure(given, row, name, crop));
    let [Some(r_ag), Some(n_ag), Some(rs), Some(n_bg)] = read else {
        return None;
    };
    let left = 1.0 - removed - fire.share;
    if left < -1e-12 {
        let detail = format!(
            "{} removed and {} leave less than nothing of the residue.",
            plain(removed),
            fire.words
        );
        given.problem(
            "residues_burnt_percent",
            detail,
            "Lower what is removed or burnt: together at most all of it.",
        );
        return None;
    }
    let crop_kg = harvest.dry_kg;
    let above = crop_kg * r_ag;
    given.step(
        format!("above-ground residue {} kg x {}", plain(crop_kg), plain(r_ag)),
        above,
        "kg dry",
        source,
    );
    let n = above * n_ag * left.max(0.0) + (crop_kg + above) * rs * n_bg;
    let text = format!(
        "residues {a} x {} x (1 - {} removed - {}) + ({} + {a}) x {} x {}",
        plain(n_ag),
        plain(removed),
        fire.words,
        plain(crop_kg),
        plain(rs),
        plain(n_bg),
        a = plain(above)
    );
    given.step(text, n, "kg N", &with_fire(source, fire));
    Some(n)
}

/// Beet and cane under Annex VII: above ground only; cane brings vinasse and filter cake back.
fn root(
    given: &mut Given,
    row: &ResidueRow,
    crop: &str,
    harvest: &Harvest,
    removed: f64,
    fire: &Fire,
    source: &str,
) -> Option<f64> {
    let read = ["r_ag", "n_ag"].map(|name| figure(given, row, name, crop));
    let [Some(r_ag), Some(n_ag)] = read else {
        return None;
    };
    let leaves = harvest.dry_kg * (1.0 - fire.share) * r_ag * n_ag * (1.0 - removed);
    let text = format!(
        "residues {} kg x (1 - {}) x {} x {} x (1 - {} removed)",
        plain(harvest.dry_kg),
        fire.words,
        plain(r_ag),
        plain(n_ag),
        plain(removed)
    );
    given.step(text, leaves, "kg N", &with_fire(source, fire));
    if crop != "sugar_cane" {
        return Some(leaves);
    }
    let [returned] = constants(given, Method::Eu.edition(), ["f_vf_per_kg_cane"])?;
    let n = leaves + harvest.wet_t * 1000.0 * returned.value;
    let text = format!(
        "residues {} + {} t x 1000 x {} kg N of vinasse and filter cake per kg of cane",
        plain(leaves),
        plain(harvest.wet_t),
        plain(returned.value)
    );
    given.step(text, n, "kg N", &sources(&[&returned]));
    Some(n)
}
