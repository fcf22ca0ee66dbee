//! Where heat comes from: fuels with their stacks burnt at an efficiency, or heat bought with a factor. Shared by every
//! model that needs heat; the fuels also serve combined heat and power.

use super::factors::{MJ, Priced, price_energy, unpublished};
use super::given::Given;
use super::parameter::{Parameter, Span, Takes};
use crate::core::documents::assessment::Severity;
use crate::core::domain::{Counts, GasVector};
use crate::core::units::Dimension;
use crate::core::units::rounding::plain;

const FUEL_ROW: &[Parameter] = &[
    Parameter::required("factor", Takes::Factor, "the fuel, per MJ."),
    Parameter::optional(
        "stack",
        Takes::Factor,
        "none",
        "CH4 and N2O of burning it, per MJ of fuel.",
    ),
    Parameter::required(
        "share_percent",
        Takes::Number("percent"),
        "its share of the fuel energy.",
    )
    .hard(Span::of(0.0, 100.0)),
];

/// `efficiency_percent`: useful heat per fuel energy, net.
pub const EFFICIENCY: Parameter = Parameter::optional(
    "efficiency_percent",
    Takes::Number("percent"),
    "none; needed with a fuel",
    "useful heat per fuel energy on the net heating value, losses of distribution in it.",
)
.hard(Span::of(30.0, 110.0))
.usual(Span::of(75.0, 98.0));
/// `fuel`: the only fuel.
pub const FUEL: Parameter =
    Parameter::optional("fuel", Takes::Factor, "none; or fuels", "the only fuel, per MJ.");
/// `stack`: its exhaust.
pub const STACK: Parameter = Parameter::optional(
    "stack",
    Takes::Factor,
    "none",
    "CH4 and N2O of burning the fuel, per MJ of fuel.",
);
/// `fuels`: several fuels.
pub const FUELS: Parameter = Parameter::optional(
    "fuels",
    Takes::Fuels,
    "one fuel, 100 %",
    "several fuels: factor, stack and share_percent of each; the shares sum to 100.",
);
/// `factor`: bought heat.
pub const FACTOR: Parameter = Parameter::optional(
    "factor",
    Takes::Factor,
    "none; instead of a fuel",
    "heat bought ready, per MJ of heat.",
);

/// The fields of the object `heat_from`.
pub const HEAT_FROM: &[Parameter] = &[EFFICIENCY, FUEL, STACK, FUELS, FACTOR];

/// A fuel with its stack and its share of the fuel energy.
#[derive(Clone, Debug)]
pub struct FuelShare {
    /// Share, 0 to 1.
    pub share: f64,
    /// The fuel, then its stack if it has one.
    pub factors: Vec<Priced>,
}

/// Where heat comes from.
#[derive(Clone, Debug)]
pub enum HeatFrom {
    /// Fuels burnt here.
    Burnt {
        /// Useful heat per fuel energy, 0.3 to 1.1.
        efficiency: f64,
        /// The fuels.
        fuels: Vec<FuelShare>,
    },
    /// Heat bought ready.
    Bought(Box<Priced>),
}

impl HeatFrom {
    /// Reads the fields of [`HEAT_FROM`]; what is wrong is noted.
    pub fn read(given: &mut Given) -> Option<HeatFrom> {
        if !given.has("factor") {
            if !given.has("efficiency_percent") {
                given.problem(
                    "efficiency_percent",
                    "Heat from a fuel needs its efficiency.",
                    "Add \"efficiency_percent\", on the net heating value, or \"factor\" for bought heat.",
                );
            }
            let efficiency = given.number("efficiency_percent");
            let fuels = fuels(given);
            return Some(HeatFrom::Burnt {
                efficiency: efficiency? / 100.0,
                fuels: fuels?,
            });
        }
        let beside: Vec<&str> = ["efficiency_percent", "fuel", "stack", "fuels"]
            .into_iter()
            .filter(|name| given.has(name))
            .collect();
        for name in &beside {
            let detail = format!("\"factor\" is heat bought ready; \"{name}\" belongs to a fuel burnt here.");
            given.problem(name, detail, "Keep one of the two.");
        }
        let bought = given.amount_factor("factor")?;
        let heat = matches!(bought.unit.dimension, Dimension::ENERGY | Dimension::HEAT)
            && matches!(bought.counts, Counts::Heat | Counts::Other);
        if !heat {
            let detail = format!(
                "\"{}\" counts per {}, but heat counts per MJ of heat.",
                bought.id, bought.per
            );
            let remedy = "Choose a factor per MJ heat, or give the fuel with its efficiency.";
            given.problem("factor", detail, remedy);
            return None;
        }
        beside.is_empty().then_some(HeatFrom::Bought(Box::new(bought)))
    }

    /// The gases of an amount of useful heat, MJ, with the steps and findings of pricing it.
    pub fn price(&self, heat_mj: f64, given: &mut Given) -> GasVector {
        match self {
            HeatFrom::Burnt { efficiency, fuels } => {
                let fuel_mj = heat_mj / efficiency;
                let text = format!(
                    "heat {} MJ / {} of efficiency",
                    plain(heat_mj),
                    plain(*efficiency)
                );
                given.step(text, fuel_mj, "MJ of fuel", "");
                burn(fuel_mj, fuels, given)
            }
            HeatFrom::Bought(factor) => price_energy(heat_mj, MJ, factor, &mut given.record.steps),
        }
    }
}

/// Reads `fuel` and `stack`, or `fuels`.
pub fn fuels(given: &mut Given) -> Option<Vec<FuelShare>> {
    if !given.has("fuels") {
        if !given.has("fuel") {
            given.problem(
                "fuel",
                "The fuel is missing.",
                "Add \"fuel\", or \"fuels\" with their shares.",
            );
        }
        let fuel = given.fuel_factor("fuel");
        let stack = stack(given);
        return Some(vec![FuelShare {
            share: 1.0,
            factors: std::iter::once(fuel?).chain(stack?).collect(),
        }]);
    }
    for name in ["fuel", "stack"]
        .into_iter()
        .filter(|name| given.has(name))
        .collect::<Vec<_>>()
    {
        let detail = format!("\"{name}\" stands beside \"fuels\".");
        given.problem(name, detail, "Keep one of the two.");
    }
    let rows = given.nested_list("fuels", FUEL_ROW, |row| {
        let fuel = row.fuel_factor("factor");
        let stack = stack(row);
        let share = row.number("share_percent");
        Some((share?, std::iter::once(fuel?).chain(stack?).collect::<Vec<_>>()))
    })?;
    let sum: f64 = rows.iter().map(|(share, _)| share).sum();
    if (sum - 100.0).abs() > 1e-9 {
        let detail = format!("The shares of the fuels sum to {} %.", plain(sum));
        given.problem("fuels", detail, "Correct them: together they are 100 %.");
        return None;
    }
    let shares = rows.into_iter().map(|(percent, factors)| FuelShare {
        share: percent / 100.0,
        factors,
    });
    Some(shares.collect())
}

/// The stack; the inner value is none where it is left out.
fn stack(given: &mut Given) -> Option<Option<Priced>> {
    if given.has("stack") {
        given.fuel_factor("stack").map(Some)
    } else {
        Some(None)
    }
}

/// The gases of fuel energy, MJ net: every fuel by its share, stacks included. A gas that neither fuel nor stack
/// publishes gives finding K-02.
pub fn burn(fuel_mj: f64, fuels: &[FuelShare], given: &mut Given) -> GasVector {
    let field = if given.has("fuels") { "fuels" } else { "fuel" };
    let mut gases = GasVector::ZERO;
    for fuel in fuels {
        let mut mj = fuel_mj;
        if fuel.share != 1.0 {
            mj = fuel_mj * fuel.share;
            let text = format!("{} MJ of fuel x {}", plain(fuel_mj), plain(fuel.share));
            given.step(text, mj, "MJ of fuel", "");
        }
        for factor in &fuel.factors {
            gases += price_energy(mj, MJ, factor, &mut given.record.steps);
        }
        if let Some((id, gas)) = unpublished(&fuel.factors) {
            let message = format!("{id} has no published {gas}; nothing is counted for it.");
            let remedy = "Choose a factor that has one, such as its stack, or give the reason.";
            given.note("K-02", Severity::Warn, field, message, remedy);
        }
    }
    gases
}
