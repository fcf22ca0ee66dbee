//! The calculator of a column: figures as a person gives them, results with their reasoning as steps.

use super::STEAM_MJ_PER_KG;
use super::duty::{Column, FeedHeat, Task, column, percent};
use super::equilibrium::Activity;
use super::pinch::Pinch;
use super::ranges;
use crate::core::documents::assessment::Step;
use crate::core::models::alcoholometry;
use crate::core::models::factors::step;
use crate::core::models::refusal::Refusal;
use crate::core::units::rounding::{plain, round_half_away};

/// What the column is to do; ranges in [`ranges`].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Request {
    /// Ethanol in the wash, % vol at 20 degC.
    pub wash_percent_vol: f64,
    /// Ethanol in the product, % mass.
    pub product_percent_mass: f64,
    /// Ethanol in the stillage, % mass.
    pub stillage_percent_mass: f64,
    /// Reflux over the minimum.
    pub reflux_multiple: f64,
    /// How warm the wash enters.
    pub feed_heat: FeedHeat,
    /// External heat over reboiler duty: 1 for one pressure.
    pub coupling_factor: f64,
    /// Equation of the activity coefficients; the models take the default.
    pub activity: Activity,
}

impl Request {
    /// A wash brought to a product, all else at its default: 0.05 % in the stillage, 1.2 times the minimum reflux, the
    /// wash heated to 10 K below the stillage, no coupling. Design assumptions, not published figures.
    pub fn new(wash_percent_vol: f64, product_percent_mass: f64) -> Request {
        Request {
            wash_percent_vol,
            product_percent_mass,
            stillage_percent_mass: 0.05,
            reflux_multiple: 1.2,
            feed_heat: FeedHeat::BelowStillage(10.0),
            coupling_factor: 1.0,
            activity: Activity::Nrtl,
        }
    }
}

/// A column with its heat. Litres are of pure ethanol at 20 degC.
#[derive(Clone, Debug, PartialEq)]
pub struct Design {
    /// Ethanol mass fraction of the wash.
    pub wash_mass_fraction: f64,
    /// The column.
    pub column: Column,
    /// Reboiler duty, MJ per kg of pure ethanol.
    pub reboiler_mj_per_kg: f64,
    /// Reboiler duty, MJ per litre of pure ethanol.
    pub reboiler_mj_per_l: f64,
    /// Steam of 3.5 bar absolute for the reboiler, kg per litre of pure ethanol.
    pub steam_kg_per_l: f64,
    /// Heat from outside, after coupling, MJ per kg of pure ethanol: what is priced.
    pub external_mj_per_kg: f64,
    /// The same per litre of pure ethanol.
    pub external_mj_per_l: f64,
    /// Reboiler duty by the enthalpy method, MJ per kg of pure ethanol. Shown, never used.
    pub enthalpy_mj_per_kg: f64,
    /// The reasoning, in order.
    pub steps: Vec<Step>,
    /// Figures outside their usual range, in words.
    pub unusual: Vec<String>,
}

/// Designs a column.
///
/// # Errors
/// Everything that is outside its range or out of order, each in words.
pub fn design(request: &Request) -> Result<Design, Vec<Refusal>> {
    let mut refusals = Vec::new();
    let (heat_figure, heat) = match request.feed_heat {
        FeedHeat::BelowStillage(kelvin) => (ranges::FEED_APPROACH, kelvin),
        FeedHeat::At(celsius) => (ranges::FEED_TEMPERATURE, celsius),
    };
    let given = [
        (ranges::WASH, request.wash_percent_vol),
        (ranges::PRODUCT, request.product_percent_mass),
        (ranges::STILLAGE, request.stillage_percent_mass),
        (ranges::REFLUX_MULTIPLE, request.reflux_multiple),
        (heat_figure, heat),
        (ranges::COUPLING, request.coupling_factor),
    ];
    for (figure, value) in given {
        figure.check(value, &mut refusals);
    }
    if !refusals.is_empty() {
        return Err(refusals);
    }
    let wash = alcoholometry::mass_fraction(request.wash_percent_vol / 100.0);
    let task = Task {
        feed: wash,
        product: request.product_percent_mass / 100.0,
        stillage: request.stillage_percent_mass / 100.0,
        reflux_multiple: request.reflux_multiple,
        feed_heat: request.feed_heat,
        activity: request.activity,
    };
    let column = column(&task).map_err(|refusal| vec![refusal])?;
    let kg_per_l = alcoholometry::density(1.0, alcoholometry::REFERENCE_C) / 1000.0;
    let reboiler_mj_per_l = column.reboiler_mj * kg_per_l;
    let external_mj_per_kg = column.reboiler_mj * request.coupling_factor;
    let mut design = Design {
        wash_mass_fraction: wash,
        column,
        reboiler_mj_per_kg: column.reboiler_mj,
        reboiler_mj_per_l,
        steam_kg_per_l: reboiler_mj_per_l / STEAM_MJ_PER_KG,
        external_mj_per_kg,
        external_mj_per_l: external_mj_per_kg * kg_per_l,
        enthalpy_mj_per_kg: column.enthalpy_reboiler_mj,
        steps: Vec::new(),
        unusual: given
            .iter()
            .filter_map(|(figure, value)| figure.unusual(*value))
            .collect(),
    };
    design.steps = steps(request, &design);
    Ok(design)
}

const STRENGTH: &str = "OIML R 22 (1975)";
const EQUILIBRIUM: &str = "NRTL and Antoine constants, 101.325 kPa";
const VAN_LAAR: &str = "van Laar and Antoine constants, 101.325 kPa";
const OVERFLOW: &str = "equal molar overflow (McCabe and Thiele)";
const BALANCE: &str = "energy balance of the column; latent heats of the CRC Handbook";

fn steps(request: &Request, design: &Design) -> Vec<Step> {
    let column = &design.column;
    let equilibrium = match request.activity {
        Activity::Nrtl => EQUILIBRIUM,
        Activity::VanLaar => VAN_LAAR,
    };
    let warm = match request.feed_heat {
        FeedHeat::BelowStillage(kelvin) => format!(
            "wash heated to the lower of its bubble point, {} degC, and the stillage, {} degC, less {} K",
            short(column.bubble_celsius),
            short(column.stillage_celsius),
            plain(kelvin)
        ),
        FeedHeat::At(celsius) => format!(
            "wash at {} degC; its bubble point is {} degC",
            plain(celsius),
            short(column.bubble_celsius)
        ),
    };
    let ruling = match column.minimum.ruling {
        Pinch::Feed => "the feed pinch rules",
        Pinch::Tangent => "the tangent pinch rules",
    };
    let mut steps = vec![
        step(
            format!(
                "wash of {} % vol is {} % by mass",
                short(request.wash_percent_vol),
                percent(design.wash_mass_fraction)
            ),
            column.feed_x,
            "mol ethanol per mol",
            STRENGTH,
        ),
        step(
            format!("product of {} % by mass", short(request.product_percent_mass)),
            column.product_x,
            "mol ethanol per mol",
            "",
        ),
        step(
            format!("stillage of {} % by mass", short(request.stillage_percent_mass)),
            column.stillage_x,
            "mol ethanol per mol",
            "",
        ),
        step(warm, column.feed_celsius, "degC", equilibrium),
        step(
            "heat to boil the wash over its latent heat, q".to_owned(),
            column.q,
            "",
            "",
        ),
        step(
            "minimum reflux at the feed pinch".to_owned(),
            column.minimum.feed,
            "mol per mol product",
            OVERFLOW,
        ),
        step(
            "minimum reflux at the tangent pinch".to_owned(),
            column.minimum.tangent,
            "mol per mol product",
            OVERFLOW,
        ),
        step(
            format!(
                "reflux {} x {}: {ruling}",
                plain(request.reflux_multiple),
                short(column.minimum.reflux)
            ),
            column.reflux,
            "mol per mol product",
            "",
        ),
        step(
            "wash per kg of pure ethanol".to_owned(),
            column.feed_kg,
            "kg/kg",
            "",
        ),
        step(
            "stillage per kg of pure ethanol".to_owned(),
            column.stillage_kg,
            "kg/kg",
            "",
        ),
        step(
            "condenser per kg of pure ethanol".to_owned(),
            column.condenser_mj,
            "MJ/kg",
            BALANCE,
        ),
        step(
            "reboiler per kg of pure ethanol: condenser + product + stillage - wash".to_owned(),
            column.reboiler_mj,
            "MJ/kg",
            BALANCE,
        ),
        step(
            "reboiler per litre of pure ethanol at 20 degC".to_owned(),
            design.reboiler_mj_per_l,
            "MJ/L",
            STRENGTH,
        ),
        step(
            format!(
                "steam of 3.5 bar absolute: {} MJ/L / {} MJ/kg",
                short(design.reboiler_mj_per_l),
                plain(STEAM_MJ_PER_KG)
            ),
            design.steam_kg_per_l,
            "kg/L",
            "IAPWS-IF97",
        ),
    ];
    if request.coupling_factor != 1.0 {
        steps.push(step(
            format!(
                "heat from outside: {} MJ/kg x {} of coupling",
                short(column.reboiler_mj),
                plain(request.coupling_factor)
            ),
            design.external_mj_per_kg,
            "MJ/kg",
            "",
        ));
    }
    steps.push(step(
        "beside it, not used: reboiler by the enthalpy method".to_owned(),
        design.enthalpy_mj_per_kg,
        "MJ/kg",
        "difference points (Ponchon and Savarit)",
    ));
    steps
}

/// A figure inside a text: four decimals at most.
pub(super) fn short(x: f64) -> String {
    plain(round_half_away(x, 4))
}
