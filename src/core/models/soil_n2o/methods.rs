//! The three methods: kg N2O from the nitrogen that reaches the soil.

use super::{Field, Method, Wetness};
use crate::core::models::constants::{Figure, constant, constants, sources};
use crate::core::models::given::Given;
use crate::core::units::rounding::plain;

const GRAIN: [&str; 12] = [
    "wheat",
    "winter_wheat",
    "spring_wheat",
    "barley",
    "oats",
    "rye",
    "triticale",
    "maize",
    "sorghum",
    "millet",
    "rice",
    "other_grain",
];
const CLASSES: [(&str, &str, &str); 4] = [
    (
        "soil_organic_carbon",
        "soil organic carbon",
        "below_1_percent, 1_to_3_percent or above_3_percent",
    ),
    ("soil_ph_class", "soil pH", "below_5.5, 5.5_to_7.3 or above_7.3"),
    ("soil_texture", "soil texture", "coarse, medium or fine"),
    (
        "climate_class",
        "climate",
        "subtropical, temperate_continental, temperate_oceanic or tropical",
    ),
];

/// The effect values of a site, summed.
pub(super) struct Site {
    /// Exponent without fertiliser.
    exponent: f64,
    /// Per kg N/ha.
    per_n: Figure,
    text: String,
    source: String,
}

/// Reads the classes of the site and sums their effect values (Annex VII Table 2). The value of a one-year experiment
/// belongs in: emissions are wanted per year.
pub(super) fn site(given: &mut Given, crop: &str) -> Option<Site> {
    let mut effects: Vec<Option<(String, Figure)>> = Vec::new();
    for (symbol, words) in [
        ("effect.constant", "constant"),
        ("effect.experiment_1_year", "one year"),
    ] {
        let figure = constant(given, Method::Eu.edition(), symbol);
        effects.push(figure.map(|figure| (words.to_owned(), figure)));
    }
    for (name, words, choices) in CLASSES {
        if !given.has(name) {
            let detail = format!("Method eu-2022-996 needs the class of {words}.");
            given.problem(name, detail, format!("Add \"{name}\": {choices}."));
        }
        effects.push(given.word(name).and_then(|class| effect(given, name, class)));
    }
    let vegetation = vegetation(given, crop);
    effects.push(vegetation.and_then(|class| effect(given, "vegetation", class)));
    let per_n = constant(given, Method::Eu.edition(), "effect.n_rate");
    let effects: Vec<(String, Figure)> = effects.into_iter().collect::<Option<_>>()?;
    let terms: Vec<String> = effects
        .iter()
        .map(|(words, figure)| format!("{} ({words})", plain(figure.value)))
        .collect();
    let figures: Vec<&Figure> = effects.iter().map(|(_, figure)| figure).collect();
    Some(Site {
        exponent: figures.iter().map(|figure| figure.value).sum(),
        per_n: per_n?,
        text: terms.join(" + "),
        source: sources(&figures),
    })
}

fn effect(given: &mut Given, name: &str, class: &str) -> Option<(String, Figure)> {
    let figure = constant(given, Method::Eu.edition(), &format!("effect.{name}.{class}"))?;
    Some((format!("{} {class}", name.replace('_', " ")), figure))
}

fn vegetation(given: &mut Given, crop: &str) -> Option<&'static str> {
    if given.has("vegetation") {
        return given.word("vegetation");
    }
    match crop {
        crop if GRAIN.contains(&crop) => Some("cereals"),
        "sugar_beet" | "sugar_cane" => Some("other"),
        _ => {
            let detail = format!("Method eu-2022-996 has no usual vegetation class for {crop}.");
            given.problem(
                "vegetation",
                detail,
                "Add \"vegetation\": cereals, grass, legume, none, other or wetland_rice.",
            );
            None
        }
    }
}

/// Nitrogen of lost soil carbon, F_SOM, kg N (Equation 11.8); IPCC methods only.
pub(super) fn carbon_nitrogen(given: &mut Given, method: Method) -> Option<f64> {
    let cause = given.word("soc_cause");
    let lost = given.number_or("soc_loss_t_c", 0.0)?;
    if lost == 0.0 {
        return Some(0.0);
    }
    if method == Method::Eu {
        given.problem(
            "soc_loss_t_c",
            "Method eu-2022-996 counts no nitrogen of lost soil carbon.",
            "Take it out, or choose an IPCC method.",
        );
        return None;
    }
    if !given.has("soc_cause") {
        given.problem(
            "soc_cause",
            "Lost soil carbon needs its cause.",
            "Add \"soc_cause\": land_use_change or management.",
        );
    }
    let [ratio] = constants(given, method.edition(), [&format!("c_to_n.{}", cause?)])?;
    let n = lost * 1000.0 / ratio.value;
    let text = format!(
        "lost soil carbon {} t C x 1000 / {} kg C per kg N",
        plain(lost),
        plain(ratio.value)
    );
    given.step(text, n, "kg N", &ratio.source);
    Some(n)
}

/// Annex VII point 1.5: the site factor for fertiliser, EF1 for residues and on organic soil.
pub(super) fn eu(given: &mut Given, field: &Field, site: &Site) -> Option<f64> {
    let symbols = ["ef1", "frac_gasf", "frac_gasm", "ef4", "frac_leach", "ef5"];
    let [ef1, gasf, gasm, ef4, leach, ef5] = constants(given, field.method.edition(), symbols)?;
    let spread = field.synthetic + field.organic;
    let ef1_site = site_factor(given, spread / field.area, site);
    let organic_share = field
        .organic_soil
        .map_or(0.0, |(hectares, _)| hectares / field.area);
    let mixed = ef1_site * (1.0 - organic_share) + ef1.value * organic_share;
    if organic_share > 0.0 {
        let text = format!(
            "{} x (1 - {share}) + {} x {share} on organic soil",
            plain(ef1_site),
            plain(ef1.value),
            share = plain(organic_share)
        );
        given.step(text, mixed, "kg N2O-N per kg N", &ef1.source);
    }
    let fertiliser = spread * mixed;
    let text = format!(
        "direct, fertiliser ({} + {}) kg N x {}",
        plain(field.synthetic),
        plain(field.organic),
        plain(mixed)
    );
    given.step(text, fertiliser, "kg N2O-N", "");
    let residues = field.residues * ef1.value;
    let text = format!(
        "direct, residues {} kg N x {}",
        plain(field.residues),
        plain(ef1.value)
    );
    given.step(text, residues, "kg N2O-N", &ef1.source);
    let drained = drained(given, field)?;
    let volatile = Volatile {
        synthetic: field.synthetic * gasf.value,
        words: format!("{} x {}", plain(field.synthetic), plain(gasf.value)),
        sources: gasf.source.clone(),
    };
    let volatile = volatilised(given, field, &volatile, &gasm, &ef4);
    let all = [field.synthetic, field.organic, field.residues];
    let leached = leached(given, field, &all, &leach, &ef5);
    total(given, field, &[fertiliser, residues, drained, volatile, leached])
}

/// EF1ij = (E(N) - E(0)) / N with E = exp(sum of effect values); nothing spread: zero.
fn site_factor(given: &mut Given, rate: f64, site: &Site) -> f64 {
    if rate == 0.0 {
        return 0.0;
    }
    given.step(
        format!("exponent of the site {}", site.text),
        site.exponent,
        "",
        &site.source,
    );
    let unfertilised = site.exponent.exp();
    given.step(
        format!("E(0) = exp({})", plain(site.exponent)),
        unfertilised,
        "kg N2O-N/ha",
        &site.source,
    );
    let by_n = site.per_n.value * rate;
    let text = format!(
        "E(N) = exp({} + {} x {} kg N/ha)",
        plain(site.exponent),
        plain(site.per_n.value),
        plain(rate)
    );
    given.step(
        text,
        (site.exponent + by_n).exp(),
        "kg N2O-N/ha",
        &site.per_n.source,
    );
    // The difference of two near-equal exponentials would lose digits at low rates.
    let factor = unfertilised * by_n.exp_m1() / rate;
    let text = format!("EF1ij = (E(N) - E(0)) / {}", plain(rate));
    given.step(text, factor, "kg N2O-N per kg N", &site.per_n.source);
    factor
}

/// Equations 11.1, 11.9 and 11.10 of Vol. 4 Ch. 11, `soil` being F_SOM in kg N.
pub(super) fn ipcc(given: &mut Given, field: &Field, soil: f64) -> Option<f64> {
    let (first, fourth, leach) = match (field.method, field.wetness) {
        (Method::Ipcc2019, None) => (["ef1.aggregated"; 2], "ef4.aggregated", "frac_leach.aggregated"),
        (Method::Ipcc2019, Some(Wetness::Wet)) => (
            ["ef1.wet.synthetic", "ef1.wet.other"],
            "ef4.wet",
            "frac_leach.wet",
        ),
        (Method::Ipcc2019, Some(Wetness::Dry)) => (["ef1.dry"; 2], "ef4.dry", "frac_leach.dry"),
        _ => (["ef1"; 2], "ef4", "frac_leach"),
    };
    let symbols = [first[0], first[1], fourth, leach, "ef5", "frac_gasm"];
    let [ef1, ef1_other, ef4, leach, ef5, gasm] = constants(given, field.method.edition(), symbols)?;
    let volatile = volatile(given, field)?;
    let direct = field.synthetic * ef1.value;
    let text = format!(
        "direct, synthetic {} kg N x {}",
        plain(field.synthetic),
        plain(ef1.value)
    );
    given.step(text, direct, "kg N2O-N", &ef1.source);
    let other = (field.organic + field.residues + soil) * ef1_other.value;
    let text = format!(
        "direct, organic, residues and soil ({} + {} + {}) kg N x {}",
        plain(field.organic),
        plain(field.residues),
        plain(soil),
        plain(ef1_other.value)
    );
    given.step(text, other, "kg N2O-N", &ef1_other.source);
    let drained = drained(given, field)?;
    let volatile = volatilised(given, field, &volatile, &gasm, &ef4);
    let all = [field.synthetic, field.organic, field.residues, soil];
    let leached = leached(given, field, &all, &leach, &ef5);
    total(given, field, &[direct, other, drained, volatile, leached])
}

/// Synthetic nitrogen that goes into the air.
struct Volatile {
    synthetic: f64,
    words: String,
    sources: String,
}

/// By fertiliser only where the method has a figure for each: ipcc-2019 with a climate.
fn volatile(given: &mut Given, field: &Field) -> Option<Volatile> {
    let by_type = field.method == Method::Ipcc2019 && field.wetness.is_some() && !field.by_type.is_empty();
    if !by_type {
        let gasf = constant(given, field.method.edition(), "frac_gasf")?;
        return Some(Volatile {
            synthetic: field.synthetic * gasf.value,
            words: format!("{} x {}", plain(field.synthetic), plain(gasf.value)),
            sources: gasf.source,
        });
    }
    let mut parts = Vec::new();
    for (kind, kg) in &field.by_type {
        let figure = constant(given, field.method.edition(), &format!("frac_gasf.{kind}"));
        parts.push(figure.map(|figure| (*kind, *kg, figure)));
    }
    let parts: Vec<(&str, f64, Figure)> = parts.into_iter().collect::<Option<_>>()?;
    let words: Vec<String> = parts
        .iter()
        .map(|(kind, kg, figure)| {
            format!(
                "{} x {} of {}",
                plain(*kg),
                plain(figure.value),
                kind.replace('_', " ")
            )
        })
        .collect();
    let figures: Vec<&Figure> = parts.iter().map(|(_, _, figure)| figure).collect();
    Some(Volatile {
        synthetic: parts.iter().map(|(_, kg, figure)| kg * figure.value).sum(),
        words: words.join(" + "),
        sources: sources(&figures),
    })
}

fn volatilised(given: &mut Given, field: &Field, volatile: &Volatile, gasm: &Figure, ef4: &Figure) -> f64 {
    let n = (volatile.synthetic + field.organic * gasm.value) * ef4.value;
    let text = format!(
        "from the air ({} + {} x {} organic) kg N x {}",
        volatile.words,
        plain(field.organic),
        plain(gasm.value),
        plain(ef4.value)
    );
    let gasf = Figure {
        value: volatile.synthetic,
        source: volatile.sources.clone(),
    };
    given.step(text, n, "kg N2O-N", &sources(&[&gasf, gasm, ef4]));
    n
}

fn leached(given: &mut Given, field: &Field, nitrogen: &[f64], leach: &Figure, ef5: &Figure) -> f64 {
    // One published figure holds where nitrogen leaches; in a dry climate nothing does. 2019 prints both.
    let dry = field.wetness == Some(Wetness::Dry);
    let share = if dry { 0.0 } else { leach.value };
    let n = nitrogen.iter().sum::<f64>() * share * ef5.value;
    let terms: Vec<String> = nitrogen.iter().map(|kg| plain(*kg)).collect();
    let text = format!(
        "leached ({}) kg N x {}{} x {}",
        terms.join(" + "),
        plain(share),
        if dry { " in a dry climate" } else { "" },
        plain(ef5.value)
    );
    given.step(text, n, "kg N2O-N", &sources(&[leach, ef5]));
    n
}

fn drained(given: &mut Given, field: &Field) -> Option<f64> {
    let Some((hectares, symbol)) = field.organic_soil else {
        return Some(0.0);
    };
    let ef2 = constant(given, field.method.edition(), symbol)?;
    let n = hectares * ef2.value;
    let text = format!(
        "drained organic soil {} ha x {}",
        plain(hectares),
        plain(ef2.value)
    );
    given.step(text, n, "kg N2O-N", &ef2.source);
    Some(n)
}

fn total(given: &mut Given, field: &Field, parts: &[f64]) -> Option<f64> {
    let ratio = constant(given, field.method.edition(), "n2o_per_n2o_n")?;
    let n: f64 = parts.iter().sum();
    let terms: Vec<String> = parts.iter().map(|part| plain(*part)).collect();
    given.step(terms.join(" + "), n, "kg N2O-N", "");
    let n2o = n * ratio.value;
    let text = format!("{} kg N2O-N x {}", plain(n), plain(ratio.value));
    given.step(text, n2o, "kg n2o", &ratio.source);
    Some(n2o)
}
