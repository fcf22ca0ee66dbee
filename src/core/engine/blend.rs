//! Blends of ethanol and petrol. Intensities mix by energy: with v the ethanol's part of the volumes before mixing and e
//! the heating values per litre, s = v e_E / (v e_E + (1 - v) e_P) and CI = s CI_E + (1 - s) CI_P. The litre that mixing
//! takes away (+0.1 to +0.3 % excess volume, recalled) is in no legal formula and is not modelled here.

use crate::core::documents::assessment::Step;
use crate::core::documents::blend::{Blend, BlendPart, BlendRequest, EnergyBasis, Intensity, share_words};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::{Book, Citation, RuleSet, Status};
use crate::core::models::alcoholometry::{TEMPERATURE_RANGE_C, density};
use crate::core::models::factors::step;
use crate::core::units::rounding::{plain, plain_fixed};

/// A blend with a name at the pump.
pub struct Named {
    /// The name.
    pub name: &'static str,
    /// Pure ethanol, % of the volume.
    pub percent_vol: f64,
    /// What the name promises, with its source and status.
    pub meaning: &'static str,
}

/// The blends that can be asked for by name.
pub const NAMED: [Named; 4] = [
    Named {
        name: "E5",
        percent_vol: 5.0,
        meaning: "E5 holds at most 5 % ethanol by volume (scope of EN 228, read in a factsheet): use the delivered share where it is known.",
    },
    Named {
        name: "E10",
        percent_vol: 10.0,
        meaning: "E10 holds at most 10 % ethanol by volume (scope of EN 228, read in a factsheet): use the delivered share where it is known.",
    },
    Named {
        name: "E27",
        percent_vol: 27.0,
        meaning: "E27 follows the share mandatory in Brazil since 2015 (read in a food-price bulletin of the United Nations' food organisation).",
    },
    Named {
        name: "E85",
        percent_vol: 85.0,
        meaning: "85 % is nominal: E85 as sold holds 51 to 83 % in the United States (read in a review) and 50 to 85 % by EN 15293 (from memory): use the delivered share.",
    },
];

/// Heating value of petrol on consignment records, MJ/L; that of ethanol is the rule set's.
const CONSIGNMENT_PETROL_MJ_PER_L: f64 = 32.0;
const CONSIGNMENT_PETROL_SOURCE: &str =
    "Directive (EU) 2018/2001, consolidated 16.07.2024, Annex III (as replaced by Directive (EU) 2023/2413)";

/// The row of the standard factors that holds heating value and density of petrol.
const PETROL_ROW: &str = "fuel_gasoline";
/// The row of the standard factors that holds the density of ethanol.
const ETHANOL_ROW: &str = "fuel_ethanol";

/// Beyond this an intensity is a slip of the pen, g CO2e/MJ.
const LARGEST_INTENSITY: f64 = 10_000.0;
/// Beyond this a heating value is none of a liquid, MJ/L.
const LARGEST_HEATING_VALUE: f64 = 100.0;
/// Beyond this a density is none of a liquid fuel, kg/m3.
const LARGEST_DENSITY: f64 = 2_000.0;

/// Heating values of both parts, and densities where they belong to the same source.
struct Heating {
    ethanol: f64,
    petrol: f64,
    /// kg/m3 of ethanol and of petrol.
    densities: Option<(f64, f64)>,
    words: String,
    steps: Vec<Step>,
}

/// Works a blend out under a rule set. The petrol is the rule set's unless the request brings its own; a saving that is
/// claimed stands against the rule set's comparator instead, and is the ethanol's alone.
///
/// # Errors
/// Every figure that is missing, given twice or outside its range, with its pointer.
pub fn blend(request: &BlendRequest, rules: &RuleSet, book: &Book) -> Result<Blend, Problems> {
    let mut problems = Problems::default();
    let root = Place::ROOT;
    let share = share(request, &mut problems);
    let (lowest, highest) = TEMPERATURE_RANGE_C;
    let celsius = request.temperature_c;
    if !(lowest..=highest).contains(&celsius) {
        let detail = format!(
            "{} degC is outside {} to {}.",
            plain(celsius),
            plain(lowest),
            plain(highest)
        );
        let remedy = "Give the temperature at which the volumes were read.";
        problems.add(root.field("temperature_c"), detail, remedy);
    }
    check_intensity(&request.ethanol, "ethanol", false, &mut problems);
    let petrol = match &request.petrol {
        Some(own) => {
            check_intensity(own, "petrol", true, &mut problems);
            own.clone()
        }
        None => Intensity {
            g_co2e_per_mj: rules.petrol.value,
            source: marked(&rules.petrol.source, rules.petrol.status),
        },
    };
    let heating = heating(request, rules, book, &mut problems);
    match (share, heating) {
        (Some((name, percent)), Some(heating)) if problems.is_empty() => {
            Ok(mixed(request, rules, name, percent, petrol, heating))
        }
        _ => Err(problems),
    }
}

fn mixed(
    request: &BlendRequest,
    rules: &RuleSet,
    name: String,
    percent: f64,
    petrol: Intensity,
    heating: Heating,
) -> Blend {
    let v = percent / 100.0;
    let ethanol = &request.ethanol;
    let (part_e, part_p) = (v * heating.ethanol, (1.0 - v) * heating.petrol);
    let energy = part_e + part_p;
    let (s_e, s_p) = (part_e / energy, part_p / energy);
    let intensity = s_e * ethanol.g_co2e_per_mj + s_p * petrol.g_co2e_per_mj;
    let per_l = energy * intensity;
    let saving = 100.0 * s_e * (1.0 - ethanol.g_co2e_per_mj / petrol.g_co2e_per_mj);
    let litres = heating.petrol / energy;
    let mass_e = heating.densities.map(|(rho_e, rho_p)| {
        let (kg_e, kg_p) = (v * rho_e, (1.0 - v) * rho_p);
        100.0 * kg_e / (kg_e + kg_p)
    });
    let mut workings = heating.steps;
    let mut add = |text: String, value: f64, unit: &str, source: &str| {
        workings.push(step(text, value, unit, source));
    };
    let (e, p) = (plain(heating.ethanol), plain(heating.petrol));
    let ethanol_g = plain(ethanol.g_co2e_per_mj);
    let petrol_g = plain(petrol.g_co2e_per_mj);
    let text = format!("{} x {e} MJ/L + {} x {p} MJ/L", plain(v), plain(1.0 - v));
    add(text, energy, "MJ/L of blend", "");
    let text = format!(
        "ethanol's part of the energy: {} / {}",
        plain(part_e),
        plain(energy)
    );
    add(text, s_e, "MJ/MJ", "");
    add(
        "intensity of the ethanol".to_owned(),
        ethanol.g_co2e_per_mj,
        "g CO2e/MJ",
        &ethanol.source,
    );
    add(
        "intensity of the petrol".to_owned(),
        petrol.g_co2e_per_mj,
        "g CO2e/MJ",
        &petrol.source,
    );
    let text = format!("{} x {ethanol_g} + {} x {petrol_g}", plain(s_e), plain(s_p));
    add(text, intensity, "g CO2e/MJ of blend", "");
    let text = format!("{} MJ/L x {}", plain(energy), plain(intensity));
    add(text, per_l, "g CO2e/L of blend", "");
    let text = format!("100 x {} x (1 - {ethanol_g} / {petrol_g})", plain(s_e));
    add(text, saving, "% saved against petrol", "");
    let text = format!("{p} MJ/L / {} MJ/L", plain(energy));
    add(text, litres, "L of blend per L of petrol", "");
    let notes = notes(request, rules);
    Blend {
        name,
        rule_set: rules.id.clone(),
        heating_values: request.heating_values,
        heating_values_words: heating.words,
        temperature_c: request.temperature_c,
        ethanol: BlendPart {
            percent_vol: percent,
            percent_energy: 100.0 * s_e,
            percent_mass: mass_e,
            mj_per_l: heating.ethanol,
            intensity: ethanol.clone(),
        },
        petrol: BlendPart {
            percent_vol: 100.0 - percent,
            percent_energy: 100.0 * s_p,
            percent_mass: mass_e.map(|mass| 100.0 - mass),
            mj_per_l: heating.petrol,
            intensity: petrol,
        },
        mj_per_l: energy,
        g_co2e_per_mj: intensity,
        g_co2e_per_l: per_l,
        saving_against_petrol_percent: saving,
        litres_per_litre_of_petrol: litres,
        workings,
        notes,
    }
}

fn notes(request: &BlendRequest, rules: &RuleSet) -> Vec<String> {
    let mut notes: Vec<String> = NAMED
        .iter()
        .filter(|named| request.blend.as_deref() == Some(named.name))
        .map(|named| named.meaning.to_owned())
        .collect();
    notes.push(
        "The volumes are those of pure ethanol and of petrol before mixing; the small change of volume on mixing is not counted."
            .to_owned(),
    );
    let celsius = request.temperature_c;
    match request.heating_values {
        EnergyBasis::EmissionArithmetic => notes.push(format!(
            "The printed densities name no temperature. Pure ethanol weighs {} kg/m3 at {} degC and {} at 15 degC (OIML R 22); no published expansion of petrol is held here, so neither is corrected: the shares hold, the MJ per litre are those of the printed densities.",
            plain_fixed(density(1.0, celsius), 1),
            plain(celsius),
            plain_fixed(density(1.0, 15.0), 1),
        )),
        EnergyBasis::ConsignmentEnergy => notes.push(format!(
            "The law's MJ per litre are rounded and name no temperature. The intensity of the ethanol was worked out with {} MJ/kg.",
            plain(rules.ethanol_lhv.value)
        )),
        EnergyBasis::Own => notes.push(format!(
            "The heating values are own figures and count as those at {} degC.",
            plain(celsius)
        )),
    }
    notes.push(format!(
        "The saving is against petrol of the same energy. A saving that is claimed is the ethanol's own, against the {} of {} g CO2e/MJ.",
        rules.comparator_word,
        plain(rules.comparator.value)
    ));
    notes
}

/// A source that says so when nobody has read the figure there.
fn marked(source: &str, status: Status) -> String {
    match status {
        Status::Memory => format!("{source} (from memory)"),
        Status::Read | Status::Calculated | Status::Own => source.to_owned(),
    }
}

/// Name and volume share, %.
fn share(request: &BlendRequest, problems: &mut Problems) -> Option<(String, f64)> {
    let root = Place::ROOT;
    match (&request.blend, request.ethanol_percent_vol) {
        (Some(_), Some(_)) => {
            let detail = "The blend has a name and a share.";
            problems.add(root.field("ethanol_percent_vol"), detail, "Keep one of the two.");
            None
        }
        (None, None) => {
            let detail = "Nothing says how much ethanol the blend holds.";
            let remedy = "Give \"blend\" or \"ethanol_percent_vol\".";
            problems.add(root.field("ethanol_percent_vol"), detail, remedy);
            None
        }
        (Some(name), None) => match NAMED.iter().find(|named| named.name == name) {
            Some(named) => Some((named.name.to_owned(), named.percent_vol)),
            None => {
                let known: Vec<&str> = NAMED.iter().map(|named| named.name).collect();
                let remedy = format!(
                    "Choose one of: {}; or give any share as \"ethanol_percent_vol\".",
                    known.join(", ")
                );
                problems.add(
                    root.field("blend"),
                    format!("\"{name}\" is no blend with a name here."),
                    remedy,
                );
                None
            }
        },
        (None, Some(percent)) => {
            if (0.0..=100.0).contains(&percent) {
                return Some((share_words(percent), percent));
            }
            let detail = format!("{} % is no share of a volume.", plain(percent));
            problems.add(root.field("ethanol_percent_vol"), detail, "Give 0 to 100.");
            None
        }
    }
}

fn check_intensity(given: &Intensity, name: &'static str, above_zero: bool, problems: &mut Problems) {
    let (root, figure) = (Place::ROOT, given.g_co2e_per_mj);
    let at = root.field(name);
    let holds = figure.is_finite() && figure.abs() <= LARGEST_INTENSITY && !(above_zero && figure <= 0.0);
    if !holds {
        let lowest = if above_zero { 0.0 } else { -LARGEST_INTENSITY };
        let remedy = format!(
            "Give g CO2e per MJ, {} {} to {}.",
            if above_zero { "above" } else { "from" },
            plain(lowest),
            plain(LARGEST_INTENSITY)
        );
        let detail = format!("{} g CO2e/MJ is no intensity of {name}.", plain(figure));
        problems.add(at.field("g_co2e_per_mj"), detail, remedy);
    }
    if given.source.trim().is_empty() {
        problems.add(
            at.field("source"),
            "The source is empty.",
            "Say where the figure comes from.",
        );
    }
}

fn heating(request: &BlendRequest, rules: &RuleSet, book: &Book, problems: &mut Problems) -> Option<Heating> {
    if request.own_heating_values.is_some() && request.heating_values != EnergyBasis::Own {
        problems.add(
            Place::ROOT.field("own_heating_values"),
            "Own heating values stand beside those of a published basis.",
            "Take them out, or say \"heating_values\": \"own\".",
        );
    }
    match request.heating_values {
        EnergyBasis::EmissionArithmetic => emission_arithmetic(rules, book, problems),
        EnergyBasis::ConsignmentEnergy => {
            let Some(ethanol) = &rules.consignment_lhv_volume else {
                let detail = format!("{} fixes no heating value for consignments.", rules.id);
                let remedy = "Use \"emission_arithmetic\" or \"own\".";
                problems.add(Place::ROOT.field("heating_values"), detail, remedy);
                return None;
            };
            let unit = "MJ/L";
            Some(Heating {
                ethanol: ethanol.value,
                petrol: CONSIGNMENT_PETROL_MJ_PER_L,
                densities: None,
                words: format!(
                    "energy of consignments: ethanol {} MJ/L, petrol {} MJ/L ({CONSIGNMENT_PETROL_SOURCE})",
                    plain(ethanol.value),
                    plain(CONSIGNMENT_PETROL_MJ_PER_L)
                ),
                steps: vec![
                    step("ethanol".to_owned(), ethanol.value, unit, &ethanol.source),
                    step(
                        "petrol".to_owned(),
                        CONSIGNMENT_PETROL_MJ_PER_L,
                        unit,
                        CONSIGNMENT_PETROL_SOURCE,
                    ),
                ],
            })
        }
        EnergyBasis::Own => own(request, problems),
    }
}

/// MJ/kg x kg/m3 of the rule set's standard factors.
fn emission_arithmetic(rules: &RuleSet, book: &Book, problems: &mut Problems) -> Option<Heating> {
    let edition = rules.standard_factors.as_deref();
    let row = |name: &str| book.factor(&format!("{}/{name}", edition?));
    let figures = row(ETHANOL_ROW)
        .zip(row(PETROL_ROW))
        .and_then(|(ethanol, petrol)| {
            Some((
                ethanol.density_kg_per_m3?,
                &ethanol.citation,
                petrol.lhv_mj_per_kg?,
                petrol.density_kg_per_m3?,
                &petrol.citation,
            ))
        });
    let Some((rho_e, cited_e, lhv_p, rho_p, cited_p)) = figures else {
        let detail = format!(
            "The standard factors of {} print no heating value and density of petrol and ethanol.",
            rules.id
        );
        let remedy = "Use \"consignment_energy\" or \"own\".";
        problems.add(Place::ROOT.field("heating_values"), detail, remedy);
        return None;
    };
    let lhv_e = rules.ethanol_lhv.value;
    let litre = |name: &str, lhv: f64, rho: f64, cited: &Citation| {
        step(
            format!("{name}: {} MJ/kg x {} kg/m3 / 1000", plain(lhv), plain(rho)),
            lhv * rho / 1000.0,
            "MJ/L",
            &marked(&cited.source, cited.status),
        )
    };
    Some(Heating {
        ethanol: lhv_e * rho_e / 1000.0,
        petrol: lhv_p * rho_p / 1000.0,
        densities: Some((rho_e, rho_p)),
        words: format!(
            "emission arithmetic: ethanol {} MJ/kg at {} kg/m3, petrol {} MJ/kg at {} kg/m3 ({})",
            plain(lhv_e),
            plain(rho_e),
            plain(lhv_p),
            plain(rho_p),
            cited_p.source
        ),
        steps: vec![
            litre("ethanol", lhv_e, rho_e, cited_e),
            litre("petrol", lhv_p, rho_p, cited_p),
        ],
    })
}

fn own(request: &BlendRequest, problems: &mut Problems) -> Option<Heating> {
    let root = Place::ROOT;
    let at = root.field("own_heating_values");
    let Some(own) = &request.own_heating_values else {
        let remedy = "Give MJ/L of both with their source.";
        problems.add(at, "The own heating values are missing.", remedy);
        return None;
    };
    let before = problems.len();
    let mut check = |name: &'static str, figure: f64, most: f64, unit: &str| {
        if !(figure > 0.0 && figure <= most) {
            let detail = format!("{} {unit} is outside its range.", plain(figure));
            let remedy = format!("Give {unit}, above 0 to {}.", plain(most));
            problems.add(at.field(name), detail, remedy);
        }
    };
    check(
        "ethanol_mj_per_l",
        own.ethanol_mj_per_l,
        LARGEST_HEATING_VALUE,
        "MJ/L",
    );
    check(
        "petrol_mj_per_l",
        own.petrol_mj_per_l,
        LARGEST_HEATING_VALUE,
        "MJ/L",
    );
    for (name, figure) in [
        ("ethanol_kg_per_m3", own.ethanol_kg_per_m3),
        ("petrol_kg_per_m3", own.petrol_kg_per_m3),
    ] {
        if let Some(figure) = figure {
            check(name, figure, LARGEST_DENSITY, "kg/m3");
        }
    }
    if own.source.trim().is_empty() {
        problems.add(
            at.field("source"),
            "The source is empty.",
            "Say where the figures come from.",
        );
    }
    let densities = match (own.ethanol_kg_per_m3, own.petrol_kg_per_m3) {
        (Some(ethanol), Some(petrol)) => Some((ethanol, petrol)),
        (None, None) => None,
        _ => {
            let remedy = "Give both densities, or none.";
            problems.add(at, "Only one of the two densities is given.", remedy);
            None
        }
    };
    (problems.len() == before).then(|| Heating {
        ethanol: own.ethanol_mj_per_l,
        petrol: own.petrol_mj_per_l,
        densities,
        words: format!(
            "own figures: ethanol {} MJ/L, petrol {} MJ/L ({})",
            plain(own.ethanol_mj_per_l),
            plain(own.petrol_mj_per_l),
            own.source
        ),
        steps: vec![
            step("ethanol".to_owned(), own.ethanol_mj_per_l, "MJ/L", &own.source),
            step("petrol".to_owned(), own.petrol_mj_per_l, "MJ/L", &own.source),
        ],
    })
}
