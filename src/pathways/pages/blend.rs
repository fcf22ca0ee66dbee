//! Ethanol mixed with petrol, and a kilometre on it, as a calculator. The ethanol is a figure or a stored pathway.

use super::handlers::{lines, see};
use crate::app::App;
use crate::core::documents::blend::{
    Blend, BlendRequest, EnergyBasis, Intensity, OwnHeatingValues, PerKm, PerKmRequest,
};
use crate::core::documents::problem::Problems;
use crate::core::documents::{Assessment, Pathway};
use crate::core::domain::Book;
use crate::core::engine::blend::{NAMED, blend};
use crate::core::engine::per_km::per_km;
use crate::core::units::rounding::show;
use crate::rules::basis;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead};
use crate::web::calculator::{Answer, Asked, Calculator, Field, Group, Sheet, Wrong};
use crate::web::extract::Query;
use axum::response::Response;
use uuid::Uuid;

const BASES: [(&str, &str); 3] = [
    ("emission_arithmetic", "as the emission arithmetic counts"),
    ("consignment_energy", "as consignments are recorded"),
    ("own", "own figures"),
];

/// A stored pathway that the ethanol is taken from.
pub struct Taken<'a> {
    /// Its document.
    pub pathway: &'a Pathway,
    /// Its assessment.
    pub found: &'a Assessment,
}

/// The page. `stored` are the pathways that can be chosen: id, name; `taken` is the chosen one, or why there is none.
pub fn page(
    asked: &Asked,
    stored: &[(String, String)],
    taken: Option<Result<Taken, Wrong>>,
    book: &Book,
) -> Calculator {
    let groups = groups(stored, book);
    // An address that names a pathway alone asks with everything else as the form begins; a share stands for itself.
    let mut filled = asked.clone();
    if !asked.is_empty() {
        if !asked.text("ethanol_percent_vol").is_empty() {
            filled = filled.or("blend", "");
        }
        filled = filled.filled(&groups);
    }
    let mut page = Calculator::of(
        "Blend and kilometre",
        "Ethanol and petrol mix by energy: what a blend emits per MJ and per litre, and per kilometre driven on it.",
        "/calculators/blend",
        groups,
        &filled,
    );
    page.frame.data = vec!["POST /api/v1/blend".to_owned(), "POST /api/v1/per-km".to_owned()];
    if let Some(Ok(taken)) = &taken {
        page.frame = page.frame.partly_example(taken.pathway.example);
    }
    if asked.is_empty() {
        page
    } else {
        page.with(answer(&filled, taken, book))
    }
}

fn groups(stored: &[(String, String)], book: &Book) -> Vec<Group> {
    let mut pathways = vec![("", "none: the figure below")];
    pathways.extend(stored.iter().map(|(id, name)| (id.as_str(), name.as_str())));
    let rules: Vec<(&str, &str)> = book
        .offered_rule_sets()
        .into_iter()
        .map(|set| (set.id.as_str(), set.title.as_str()))
        .collect();
    let first = rules.first().map_or("", |(id, _)| *id);
    let mut blends = vec![("", "the share below")];
    blends.extend(NAMED.iter().map(|named| (named.name, named.name)));
    vec![
        Group {
            title: "The ethanol",
            words: "A stored pathway, or a figure with its source.",
            fields: vec![
                Field::choice("pathway", "Stored pathway", &pathways).required(),
                Field::number("ethanol_g_co2e_per_mj", "Or its figure, g CO2e/MJ"),
                Field::words("ethanol_source", "Source of the figure"),
                Field::choice("rule_set", "Rule set", &rules)
                    .required()
                    .begins(first)
                    .hint("Gives petrol and heating values; that of the pathway, where one is chosen."),
            ],
        },
        Group {
            title: "The blend",
            words: "A name at the pump, or the share of pure ethanol in the volumes before mixing.",
            fields: vec![
                Field::choice("blend", "Blend", &blends).required().begins("E10"),
                Field::number("ethanol_percent_vol", "Or ethanol, % vol").hint("0 to 100 %."),
                Field::number("temperature_c", "Volumes read at, °C")
                    .required()
                    .begins("15"),
                Field::choice("heating_values", "Heating values", &BASES)
                    .required()
                    .begins("emission_arithmetic"),
            ],
        },
        Group {
            title: "Own figures",
            words: "Few need these: petrol of one\u{2019}s own, and heating values where \u{201c}own figures\u{201d} is chosen.",
            fields: vec![
                Field::number("petrol_g_co2e_per_mj", "Petrol, g CO2e/MJ")
                    .hint("Left empty: the rule set\u{2019}s."),
                Field::words("petrol_source", "Source of the petrol\u{2019}s figure"),
                Field::number("ethanol_mj_per_l", "Ethanol, MJ/L"),
                Field::number("petrol_mj_per_l", "Petrol, MJ/L"),
                Field::number("ethanol_kg_per_m3", "Ethanol, kg/m3").hint("For the mass share only."),
                Field::number("petrol_kg_per_m3", "Petrol, kg/m3").hint("For the mass share only."),
                Field::words("heating_source", "Source of the heating values"),
            ],
        },
        Group {
            title: "A kilometre",
            words: "Left empty, no kilometre is worked out.",
            fields: vec![
                Field::number("l_per_100_km", "Use of the blend, L/100 km"),
                Field::number("mj_per_km", "Or energy use, MJ/km"),
                Field::words("km_source", "Source of the use"),
                Field::words("vehicle", "Vehicle").hint("For people; may be left empty."),
            ],
        },
    ]
}

/// A text that may be left out.
fn some(text: &str) -> Option<String> {
    (!text.is_empty()).then(|| text.to_owned())
}

/// Problems at the fields of the form. `own` is what a pointer without its own place is called.
fn at_fields(problems: &Problems, source: &'static str) -> Vec<Wrong> {
    let name = |pointer: &str| match pointer {
        "/ethanol/g_co2e_per_mj" => "ethanol_g_co2e_per_mj".to_owned(),
        "/ethanol/source" => "ethanol_source".to_owned(),
        "/petrol/g_co2e_per_mj" => "petrol_g_co2e_per_mj".to_owned(),
        "/petrol/source" => "petrol_source".to_owned(),
        "/own_heating_values/source" => "heating_source".to_owned(),
        "/own_heating_values" => "ethanol_mj_per_l".to_owned(),
        "/source" => source.to_owned(),
        other => other.rsplit('/').next().unwrap_or_default().to_owned(),
    };
    let rows = problems.list().iter();
    rows.map(|one| Wrong::new(&name(&one.pointer), one.detail.clone(), one.remedy.clone()))
        .collect()
}

/// The ethanol as the form gives it: of a pathway, or a figure with its source.
fn ethanol(
    asked: &Asked,
    taken: Option<Result<Taken, Wrong>>,
    wrong: &mut Vec<Wrong>,
) -> Option<(Intensity, String)> {
    let figure = asked.figure("ethanol_g_co2e_per_mj", wrong);
    match (taken, figure) {
        (Some(_), Some(_)) => {
            let detail = "The ethanol is given by a pathway and by a figure.";
            wrong.push(Wrong::new(
                "ethanol_g_co2e_per_mj",
                detail,
                "Keep one of the two.",
            ));
            None
        }
        (Some(Ok(taken)), None) => Some((
            Intensity::of_assessment(taken.found),
            taken.found.rule_set.clone(),
        )),
        (Some(Err(why)), None) => {
            wrong.push(why);
            None
        }
        (None, Some(figure)) => {
            let intensity = Intensity {
                g_co2e_per_mj: figure,
                source: asked.text("ethanol_source").to_owned(),
            };
            Some((intensity, asked.text("rule_set").to_owned()))
        }
        (None, None) => {
            if asked.text("ethanol_g_co2e_per_mj").is_empty() {
                let detail = "Nothing says what the ethanol emits.";
                let remedy = "Choose a pathway, or give a figure with its source.";
                wrong.push(Wrong::new("ethanol_g_co2e_per_mj", detail, remedy));
            }
            None
        }
    }
}

fn answer(asked: &Asked, taken: Option<Result<Taken, Wrong>>, book: &Book) -> Result<Answer, Vec<Wrong>> {
    let mut wrong = Vec::new();
    let ethanol = ethanol(asked, taken, &mut wrong);
    let share = asked.figure("ethanol_percent_vol", &mut wrong);
    let celsius = asked.need("temperature_c", &mut wrong);
    let petrol = asked.figure("petrol_g_co2e_per_mj", &mut wrong);
    let mut own = |name: &str| asked.figure(name, &mut wrong);
    let (lhv_e, lhv_p) = (own("ethanol_mj_per_l"), own("petrol_mj_per_l"));
    let (rho_e, rho_p) = (own("ethanol_kg_per_m3"), own("petrol_kg_per_m3"));
    let (mj, litres) = (own("mj_per_km"), own("l_per_100_km"));
    let word = asked.text("heating_values");
    let basis = EnergyBasis::WORDS
        .iter()
        .find(|(name, _)| *name == word)
        .map(|(_, basis)| *basis);
    if basis.is_none() {
        let detail = "There are no such heating values here.";
        wrong.push(Wrong::new("heating_values", detail, "Choose one of the list."));
    }
    let rules = ethanol.as_ref().and_then(|(_, id)| book.rule_sets.get(id));
    if ethanol.is_some() && rules.is_none() {
        wrong.push(Wrong::new(
            "rule_set",
            "There is no such rule set here.",
            "Choose one of the list.",
        ));
    }
    let given = lhv_e.is_some() || lhv_p.is_some() || rho_e.is_some() || rho_p.is_some();
    let (Some((ethanol, _)), Some(celsius), Some(basis), Some(rules), true) =
        (ethanol, celsius, basis, rules, wrong.is_empty())
    else {
        return Err(wrong);
    };
    let request = BlendRequest {
        blend: some(asked.text("blend")),
        ethanol_percent_vol: share,
        temperature_c: celsius,
        heating_values: basis,
        own_heating_values: given.then(|| OwnHeatingValues {
            ethanol_mj_per_l: lhv_e.unwrap_or(0.0),
            petrol_mj_per_l: lhv_p.unwrap_or(0.0),
            ethanol_kg_per_m3: rho_e,
            petrol_kg_per_m3: rho_p,
            source: asked.text("heating_source").to_owned(),
        }),
        ethanol,
        petrol: petrol.map(|figure| Intensity {
            g_co2e_per_mj: figure,
            source: asked.text("petrol_source").to_owned(),
        }),
    };
    let mixed = blend(&request, rules, book).map_err(|problems| at_fields(&problems, ""))?;
    let driven = if mj.is_some() || litres.is_some() {
        let use_of = PerKmRequest {
            vehicle: some(asked.text("vehicle")),
            mj_per_km: mj,
            l_per_100_km: litres,
            source: asked.text("km_source").to_owned(),
        };
        Some(per_km(&use_of, &mixed).map_err(|problems| at_fields(&problems, "km_source"))?)
    } else {
        None
    };
    Ok(told(&mixed, driven.as_ref()))
}

fn told(mixed: &Blend, driven: Option<&PerKm>) -> Answer {
    let both = |name: &str, ethanol: Option<f64>, petrol: Option<f64>, unit: &'static str| {
        (name.to_owned(), vec![ethanol, petrol], unit)
    };
    let (e, p) = (&mixed.ethanol, &mixed.petrol);
    let mut sheets = vec![
        Sheet::plain(
            "The blend",
            &[
                ("emissions", mixed.g_co2e_per_mj, "g CO2e/MJ"),
                ("emissions", mixed.g_co2e_per_l, "g CO2e/L"),
                ("energy", mixed.mj_per_l, "MJ/L"),
                (
                    "saved against petrol of the same energy",
                    mixed.saving_against_petrol_percent,
                    "%",
                ),
                (
                    "blend in place of a litre of petrol",
                    mixed.litres_per_litre_of_petrol,
                    "L/L",
                ),
            ],
        ),
        Sheet {
            title: "The two fuels in it".to_owned(),
            head: vec!["Ethanol".to_owned(), "Petrol".to_owned()],
            rows: vec![
                both(
                    "share of the volume",
                    Some(e.percent_vol),
                    Some(p.percent_vol),
                    "%",
                ),
                both(
                    "share of the energy",
                    Some(e.percent_energy),
                    Some(p.percent_energy),
                    "%",
                ),
                both("share of the mass", e.percent_mass, p.percent_mass, "%"),
                both("heating value", Some(e.mj_per_l), Some(p.mj_per_l), "MJ/L"),
                both(
                    "emissions",
                    Some(e.intensity.g_co2e_per_mj),
                    Some(p.intensity.g_co2e_per_mj),
                    "g CO2e/MJ",
                ),
            ],
        },
    ];
    let mut headline = vec![
        (
            show(mixed.g_co2e_per_mj, 1),
            format!("g CO2e/MJ of {}", mixed.name),
        ),
        (
            show(mixed.saving_against_petrol_percent, 1),
            "% below petrol".to_owned(),
        ),
    ];
    let mut notes = vec![
        format!("Ethanol: {}.", e.intensity.source),
        format!("Petrol: {}.", p.intensity.source),
        format!("Heating values: {}.", mixed.heating_values_words),
    ];
    notes.extend(mixed.notes.iter().cloned());
    let mut steps = mixed.workings.clone();
    if let Some(km) = driven {
        let what = km
            .vehicle
            .as_ref()
            .map_or_else(String::new, |name| format!(", {name}"));
        sheets.push(Sheet {
            title: format!("A kilometre{what}"),
            head: vec!["On the blend".to_owned(), "On petrol".to_owned()],
            rows: vec![
                both("energy", Some(km.mj_per_km), Some(km.mj_per_km), "MJ/km"),
                both(
                    "fuel",
                    Some(km.l_per_100_km),
                    Some(km.mj_per_km * 100.0 / p.mj_per_l),
                    "L/100 km",
                ),
                both(
                    "emissions",
                    Some(km.g_co2e_per_km),
                    Some(km.petrol_g_co2e_per_km),
                    "g CO2e/km",
                ),
                both("saved", Some(km.saved_g_co2e_per_km), None, "g CO2e/km"),
            ],
        });
        headline.push((show(km.g_co2e_per_km, 1), "g CO2e per kilometre".to_owned()));
        notes.extend(km.notes.iter().cloned());
        steps.extend(km.workings.iter().cloned());
    }
    if mixed.saving_against_petrol_percent < 0.0
        && let Some(words) = headline.get_mut(1)
    {
        *words = (
            show(-mixed.saving_against_petrol_percent, 1),
            "% above petrol".to_owned(),
        );
    }
    let answer = Answer {
        headline,
        sheets,
        notes,
        ..Answer::default()
    };
    answer.steps(&steps)
}

async fn worked(app: &App, pairs: Vec<(String, String)>) -> Result<Calculator, Refusal> {
    let asked = Asked::of(pairs);
    let all = lines(app, false).await?;
    let stored: Vec<(String, String)> = all
        .iter()
        .filter(|line| line.assessment.is_some())
        .map(|line| (line.id.to_string(), line.name.clone()))
        .collect();
    let basis = basis(app).await?;
    let id = asked.text("pathway");
    if id.is_empty() {
        return Ok(page(&asked, &stored, None, &basis.book));
    }
    let nothing = |detail: &str| Wrong::new("pathway", detail, "Choose one of the list, or give a figure.");
    let Ok(uuid) = id.parse::<Uuid>() else {
        let taken = Some(Err(nothing("There is no such pathway.")));
        return Ok(page(&asked, &stored, taken, &basis.book));
    };
    let seen = see(app, uuid, None).await.ok();
    let taken = match &seen {
        None => Err(nothing("There is no such pathway.")),
        Some(seen) => match seen.found() {
            Some(found) => Ok(Taken {
                pathway: &seen.pathway,
                found,
            }),
            None => Err(nothing("This pathway cannot be worked out yet.")),
        },
    };
    Ok(page(&asked, &stored, Some(taken), &basis.book))
}

/// The page.
pub(super) async fn show_blend(
    Actor { app, .. }: Actor<CanRead>,
    Query(pairs): Query<Vec<(String, String)>>,
) -> Result<Response, Refusal> {
    worked(&app, pairs).await?.answer()
}

/// The results as CSV.
pub(super) async fn file(
    Actor { app, .. }: Actor<CanRead>,
    Query(pairs): Query<Vec<(String, String)>>,
) -> Result<Response, Refusal> {
    worked(&app, pairs).await?.file("blend")
}
