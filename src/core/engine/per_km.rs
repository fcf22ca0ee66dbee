//! Grams per kilometre: a vehicle's energy use times the intensity of the blend it burns.

use crate::core::documents::blend::{Blend, PerKm, PerKmRequest};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::models::factors::step;
use crate::core::units::rounding::plain;

/// More MJ than this go into a kilometre of no road vehicle.
const MOST_MJ_PER_KM: f64 = 1_000.0;
/// More litres than this go into 100 km of no road vehicle.
const MOST_L_PER_100_KM: f64 = 5_000.0;

/// Works out a kilometre on a blend. The petrol beside it is burnt at the same MJ/km.
///
/// # Errors
/// A missing, doubled or impossible energy use, or an empty source, with its pointer.
pub fn per_km(request: &PerKmRequest, blend: &Blend) -> Result<PerKm, Problems> {
    let mut problems = Problems::default();
    let root = Place::ROOT;
    if request.source.trim().is_empty() {
        problems.add(
            root.field("source"),
            "The source is empty.",
            "Say where the energy use comes from.",
        );
    }
    let mut in_range = |name: &'static str, figure: f64, most: f64, unit: &str| {
        if figure > 0.0 && figure <= most {
            return Some(figure);
        }
        let detail = format!("{} {unit} is no energy use of a vehicle.", plain(figure));
        let remedy = format!("Give {unit}, above 0 to {}.", plain(most));
        problems.add(root.field(name), detail, remedy);
        None
    };
    let mut steps = Vec::new();
    let used = match (request.mj_per_km, request.l_per_100_km) {
        (Some(mj), None) => in_range("mj_per_km", mj, MOST_MJ_PER_KM, "MJ/km").map(|mj| {
            let litres = 100.0 * mj / blend.mj_per_l;
            steps.push(step("energy use".to_owned(), mj, "MJ/km", &request.source));
            let text = format!("100 x {} MJ/km / {} MJ/L", plain(mj), plain(blend.mj_per_l));
            steps.push(step(text, litres, "L/100 km", ""));
            (mj, litres)
        }),
        (None, Some(litres)) => {
            in_range("l_per_100_km", litres, MOST_L_PER_100_KM, "L/100 km").map(|litres| {
                let mj = litres * blend.mj_per_l / 100.0;
                let text = format!("use of {}", blend.name);
                steps.push(step(text, litres, "L/100 km", &request.source));
                let text = format!(
                    "{} L/100 km x {} MJ/L / 100",
                    plain(litres),
                    plain(blend.mj_per_l)
                );
                steps.push(step(text, mj, "MJ/km", ""));
                (mj, litres)
            })
        }
        (Some(_), Some(_)) => {
            let detail = "The energy use is given twice.";
            problems.add(root.field("l_per_100_km"), detail, "Keep one of the two.");
            None
        }
        (None, None) => {
            let remedy = "Give \"mj_per_km\" or \"l_per_100_km\".";
            problems.add(root.field("mj_per_km"), "The energy use is missing.", remedy);
            None
        }
    };
    let Some((mj, litres)) = used.filter(|_| problems.is_empty()) else {
        return Err(problems);
    };
    let petrol_g = blend.petrol.intensity.g_co2e_per_mj;
    let (on_blend, on_petrol) = (mj * blend.g_co2e_per_mj, mj * petrol_g);
    let text = format!(
        "{} MJ/km x {} g CO2e/MJ of blend",
        plain(mj),
        plain(blend.g_co2e_per_mj)
    );
    steps.push(step(text, on_blend, "g CO2e/km", ""));
    let text = format!("{} MJ/km x {} g CO2e/MJ of petrol", plain(mj), plain(petrol_g));
    steps.push(step(text, on_petrol, "g CO2e/km", &blend.petrol.intensity.source));
    let saved = on_petrol - on_blend;
    let text = format!("{} - {}", plain(on_petrol), plain(on_blend));
    steps.push(step(text, saved, "g CO2e/km saved", ""));
    Ok(PerKm {
        vehicle: request.vehicle.clone(),
        blend: blend.name.clone(),
        mj_per_km: mj,
        l_per_100_km: litres,
        g_co2e_per_km: on_blend,
        petrol_g_co2e_per_km: on_petrol,
        saved_g_co2e_per_km: saved,
        workings: steps,
        notes: vec![
            "The vehicle is taken to use the same MJ per kilometre on petrol as on the blend.".to_owned(),
            "CH4 and N2O of the exhaust count only as far as the two intensities hold them.".to_owned(),
        ],
    })
}
