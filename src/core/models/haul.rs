//! `haul`: mass x distance x energy per tonne-kilometre x fuel factor, and the exhaust of the vehicle.
//! Implementing Regulation (EU) 2022/996 Annex IX, transport efficiencies; Directive (EU) 2018/2001 Annex V C point 12.

use super::factors::{self, MJ, Priced, price_energy, sourced};
use super::flow::Measured;
use super::given::Given;
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome};
use crate::core::documents::assessment::Severity;
use crate::core::domain::factor::{HaulVehicle, Use};
use crate::core::domain::{Counts, Gas, GasVector, PublishedGases, StageKind};
use crate::core::units::Dimension;
use crate::core::units::rounding::plain;

const OWN_VEHICLE: &[Parameter] = &[
    Parameter::required(
        "energy",
        Takes::Amount("MJ/t/km"),
        "fuel energy per tonne-kilometre, e.",
    )
    .hard(Span::not_negative()),
    Parameter::required("fuel", Takes::Factor, "what drives it, per MJ or kWh."),
    Parameter::optional("gases", Takes::Gases, "none", "exhaust, kg of each gas per t km."),
    Parameter::required("citation", Takes::Text, "where the figures come from."),
];

/// The model.
pub const MODEL: Model = Model {
    kind: "haul",
    title: "Haul",
    what: "Fuel and exhaust of carrying a mass over a distance.",
    source: "Implementing Regulation (EU) 2022/996 Annex IX (transport efficiencies): m d e f + m d exhaust",
    term: None,
    parameters: &[
        Parameter::required(
            "vehicle",
            Takes::Vehicle(OWN_VEHICLE),
            "a vehicle of an edition, or an own one.",
        ),
        Parameter::optional(
            "mass",
            Takes::Amount("t"),
            "the intakes, wet as they travel",
            "mass on the vehicle, m.",
        )
        .hard(Span::positive()),
        Parameter::required("distance", Takes::Amount("km"), "one way, loaded, d.")
            .hard(Span::of(0.0, 25_000.0)),
        Parameter::optional(
            "fuel",
            Takes::Factor,
            "the vehicle's own",
            "what drives it, f; electric rail names its grid.",
        ),
        Parameter::optional(
            "empty_return",
            Takes::NoneOrAmount("km"),
            "in the published row",
            "own vehicles: the empty way back.",
        )
        .hard(Span::of(0.0, 25_000.0)),
        Parameter::optional(
            "empty_energy_percent",
            Takes::Number("percent"),
            "70",
            "energy of the empty vehicle per km, % of loaded.",
        )
        .hard(Span::of(0.0, 100.0)),
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let own = given.is_object("vehicle");
    let vehicle = if own {
        given.nested("vehicle", own_vehicle)
    } else {
        published(given)
    };
    let distance = given.number("distance");
    let mass = mass(given);
    let empty = empty_return(given, own, distance);
    let named = if given.has("fuel") {
        Some(driving(given, "fuel"))
    } else {
        None
    };
    let (name, row, own_fuel) = vehicle?;
    let fuel = match (named, own_fuel) {
        (Some(named), _) => Some(named?),
        (None, Some(fuel)) => Some(fuel),
        (None, None) => row_fuel(given, &name, &row)?,
    };
    let (distance, mass) = (distance?, mass?);
    if row.electric && fuel.as_ref().is_some_and(|fuel| fuel.counts == Counts::Fuel) {
        given.problem(
            "fuel",
            "An electric vehicle takes power, not fuel.",
            "Name the grid, such as elec_eu27_2019_mv.",
        );
        return None;
    }
    if is_truck(&name)
        && let Some(usual) = Span::of(0.0, 800.0)
    {
        given.usual("distance", distance, "km", usual);
    }
    let work = mass * distance;
    given.step(
        format!("{} t x {} km", plain(mass), plain(distance)),
        work,
        "t km",
        "",
    );
    let empty = empty?;
    let energy = work * row.energy_mj_per_tkm * empty;
    let back = if empty == 1.0 {
        String::new()
    } else {
        format!(" x {} for the empty way back", plain(empty))
    };
    let source = MODEL.source;
    given.step(
        format!(
            "{} t km x {} MJ per t km of {name}{back}",
            plain(work),
            plain(row.energy_mj_per_tkm)
        ),
        energy,
        "MJ",
        source,
    );
    let mut gases = GasVector::ZERO;
    if let Some(fuel) = &fuel {
        gases += price_energy(energy, MJ, fuel, &mut given.record.steps);
        gaps(given, fuel, &row);
    }
    for gas in Gas::ALL {
        let Some(per_tkm) = row.exhaust.get(gas).filter(|figure| *figure != 0.0) else {
            continue;
        };
        let exhaust = work * per_tkm;
        gases[gas] += exhaust;
        let text = format!(
            "{} t km x {} kg {} per t km of exhaust",
            plain(work),
            plain(per_tkm),
            gas.name()
        );
        given.step(text, exhaust, &format!("kg {}", gas.name()), source);
    }
    Some(Outcome {
        gases,
        ..Outcome::default()
    })
}

type Vehicle = (String, HaulVehicle, Option<Priced>);

fn published(given: &mut Given) -> Option<Vehicle> {
    let priced = given.any_factor("vehicle")?;
    match &priced.usage {
        Use::Haul(row) => {
            let source = sourced(&priced);
            given.step(
                format!("vehicle {}", priced.id),
                row.energy_mj_per_tkm,
                "MJ per t km",
                &source,
            );
            Some((priced.id.clone(), row.clone(), None))
        }
        _ => {
            let detail = format!("\"{}\" is no vehicle that carries goods.", priced.id);
            given.problem("vehicle", detail, "Choose a row of group transport, such as eu-2022-996/tr_truck_40_tonne_for_dry_product_diesel.");
            None
        }
    }
}

fn own_vehicle(given: &mut Given) -> Option<Vehicle> {
    let energy = given.number("energy");
    let fuel = driving(given, "fuel");
    let exhaust = given.gases("gases");
    let citation = given.text("citation");
    let mut published = PublishedGases::default();
    for (gas, amount) in exhaust
        .unwrap_or_default()
        .entries()
        .filter(|(_, amount)| *amount != 0.0)
    {
        published.set(gas, Some(amount));
    }
    let row = HaulVehicle {
        energy_mj_per_tkm: energy?,
        exhaust: published,
        fuel: None,
        electric: false,
    };
    citation?;
    Some(("own vehicle".to_owned(), row, Some(fuel?)))
}

/// A factor per fuel or electrical energy.
fn driving(given: &mut Given, name: &str) -> Option<Priced> {
    let priced = given.amount_factor(name)?;
    let energy = matches!(
        priced.unit.dimension,
        Dimension::ENERGY | Dimension::ENERGY_NET | Dimension::POWER
    );
    if energy && priced.counts != Counts::Heat {
        return Some(priced);
    }
    let detail = format!(
        "\"{}\" counts per {}; a vehicle is driven by MJ or kWh.",
        priced.id, priced.per
    );
    given.problem(name, detail, "Choose a fuel per MJ or power per kWh.");
    None
}

fn row_fuel(given: &mut Given, name: &str, row: &HaulVehicle) -> Option<Option<Priced>> {
    if row.electric {
        let remedy = "Name the grid in \"fuel\", such as eu-2022-996/elec_eu27_2019_mv.";
        given.problem(
            "fuel",
            format!("{name} is electric: it needs the grid that drives it."),
            remedy,
        );
        return None;
    }
    match &row.fuel {
        None => Some(None),
        Some(id) => {
            let reference = crate::core::documents::input::FactorRef::Id(id.clone());
            let at = crate::core::documents::reader::Place::ROOT;
            let fuel = factors::find_per_energy(&reference, given.setting.book, &at, given.problems)?;
            given.record.factors.push(fuel.id.clone());
            Some(Some(fuel))
        }
    }
}

fn mass(given: &mut Given) -> Option<f64> {
    let intakes: Option<f64> = given
        .setting
        .intakes
        .iter()
        .map(|flow: &Measured| flow.wet_kg)
        .sum();
    let intakes = intakes.filter(|kg| *kg > 0.0).map(|kg| kg / 1000.0);
    if !given.has("mass") {
        if intakes.is_none() {
            let detail = "The stage takes no mass that the haul could carry.";
            given.problem(
                "mass",
                detail,
                "Add \"mass\", or give the intakes as masses (ethanol: with its strength).",
            );
        }
        return intakes;
    }
    let mass = given.number("mass")?;
    let carries = matches!(
        given.setting.stage_kind,
        StageKind::FeedstockTransport | StageKind::FuelTransport
    );
    if let Some(intakes) = intakes.filter(|intakes| carries && (mass / intakes - 1.0).abs() > 0.2) {
        let message = format!(
            "mass is {} t, but the stage takes {} t; usual is within 20 %.",
            plain(mass),
            plain(intakes)
        );
        given.note(
            "K-01",
            Severity::Warn,
            "mass",
            message,
            "Check figure and unit, or give the reason.",
        );
    }
    Some(mass)
}

/// One plus the energy of the empty way back over the loaded one.
fn empty_return(given: &mut Given, own: bool, distance: Option<f64>) -> Option<f64> {
    let back = given
        .has("empty_return")
        .then(|| given.none_or_amount("empty_return"));
    let percent = if given.has("empty_energy_percent") {
        given.number("empty_energy_percent")?
    } else {
        70.0
    };
    match back {
        None => Some(1.0),
        Some(None) => None,
        Some(Some(None)) => Some(1.0),
        Some(Some(Some(_))) if !own => {
            let remedy = "Take it out; only own vehicles state their empty way back.";
            given.problem(
                "empty_return",
                "Published rows hold the empty way back already.",
                remedy,
            );
            None
        }
        Some(Some(Some(empty))) => {
            let loaded = distance.filter(|d| *d > 0.0)?;
            Some(1.0 + empty / loaded * percent / 100.0)
        }
    }
}

fn gaps(given: &mut Given, fuel: &Priced, row: &HaulVehicle) {
    let published = |gas: Gas| fuel.gases.get(gas).is_some() || row.exhaust.get(gas).is_some();
    if fuel.gases.get(Gas::Co2eUnsplit).is_some() || fuel.group != "fuel" {
        return;
    }
    if let Some(gas) = factors::gaps(published(Gas::Ch4Fossil), published(Gas::N2o)) {
        let message = format!(
            "{} and its vehicle have no published {gas}; nothing is counted for it.",
            fuel.id
        );
        given.note(
            "K-02",
            Severity::Warn,
            "vehicle",
            message,
            "Choose a factor that has one, or give the reason.",
        );
    }
}

fn is_truck(name: &str) -> bool {
    name.contains("truck")
}
