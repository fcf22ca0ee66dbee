//! Looks a factor up or reads one given in full, and prices an amount with it.

use super::flow::unit_words;
use crate::core::documents::assessment::Step;
use crate::core::documents::input::FactorRef;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::{Place, nearest};
use crate::core::domain::factor::Use;
use crate::core::domain::{Book, Counts, Gas, GasVector, PublishedGases, Status};
use crate::core::units::rounding::plain;
use crate::core::units::{Dimension, Unit, parse_unit};

/// A factor ready to price amounts.
#[derive(Clone, Debug)]
pub struct Priced {
    /// `edition/row`, or `own factor`.
    pub id: String,
    /// What one unit counts.
    pub counts: Counts,
    /// Unit as printed.
    pub per: String,
    /// The same, parsed.
    pub unit: Unit,
    /// kg of each gas per unit; blanks are not published.
    pub gases: PublishedGases,
    /// How a library row may be used; `Use::Amount` for an own factor.
    pub usage: Use,
    /// Group of a library row.
    pub group: String,
    /// Printed lower heating value, MJ/kg.
    pub lhv_mj_per_kg: Option<f64>,
    /// Printed density, kg/m3.
    pub density_kg_per_m3: Option<f64>,
    /// Where the figures come from.
    pub source: String,
    /// Whether they were read there.
    pub status: Status,
}

/// Finds a factor, whatever its use.
pub fn find(reference: &FactorRef, book: &Book, at: &Place, problems: &mut Problems) -> Option<Priced> {
    match reference {
        FactorRef::Id(id) => library(id, book, at, problems),
        FactorRef::Inline(own) => {
            let unit = match parse_unit(&own.per) {
                Ok(unit) => unit,
                Err(error) => {
                    let (detail, remedy) = unit_words(&error);
                    problems.add(at.field("per"), detail, remedy);
                    return None;
                }
            };
            let mut gases = PublishedGases::default();
            for (gas, amount) in own.gases.entries() {
                gases.set(gas, Some(amount));
            }
            let counts = match unit.dimension {
                Dimension::HEAT => Counts::Heat,
                Dimension::POWER => Counts::Power,
                Dimension::ENERGY_NET => Counts::Fuel,
                Dimension::ENERGY_GROSS => {
                    let remedy = "Give it per MJ on the net heating value.";
                    problems.add(at.field("per"), "A factor per gross energy is not taken.", remedy);
                    return None;
                }
                _ => Counts::Other,
            };
            Some(Priced {
                id: "own factor".to_owned(),
                counts,
                per: own.per.clone(),
                unit,
                gases,
                usage: Use::Amount,
                group: "own".to_owned(),
                lhv_mj_per_kg: None,
                density_kg_per_m3: None,
                source: own.citation.clone(),
                status: Status::Own,
            })
        }
    }
}

fn library(id: &str, book: &Book, at: &Place, problems: &mut Problems) -> Option<Priced> {
    let Some(factor) = book.factor(id) else {
        let (edition, row) = id.split_once('/').unwrap_or((id, ""));
        let (detail, remedy) = match book.editions.get(edition) {
            Some(known) => {
                let remedy = match nearest(row, known.factors.keys().map(String::as_str)) {
                    Some(near) => {
                        format!("Perhaps \"{edition}/{near}\" was meant; see the factors of the edition.")
                    }
                    None => {
                        "See the factors of the edition, or give an own factor with its source.".to_owned()
                    }
                };
                (
                    format!("There is no factor \"{row}\" in edition \"{edition}\"."),
                    remedy,
                )
            }
            None => {
                let known = book.editions.keys().cloned().collect::<Vec<_>>().join(", ");
                (
                    format!("There is no edition \"{edition}\"."),
                    format!("Editions here: {known}."),
                )
            }
        };
        problems.add(at, detail, remedy);
        return None;
    };
    Some(Priced {
        id: factor.id.clone(),
        counts: factor.counts,
        per: factor.per.clone(),
        unit: factor.unit.clone(),
        gases: factor.gases,
        usage: factor.usage.clone(),
        group: factor.group.clone(),
        lhv_mj_per_kg: factor.lhv_mj_per_kg,
        density_kg_per_m3: factor.density_kg_per_m3,
        source: factor.citation.source.clone(),
        status: factor.citation.status,
    })
}

/// Finds a factor that multiplies an amount; vehicles and rows without a figure are refused.
pub fn find_for_amount(
    reference: &FactorRef,
    book: &Book,
    at: &Place,
    problems: &mut Problems,
) -> Option<Priced> {
    let priced = find(reference, book, at, problems)?;
    let (detail, remedy) = match &priced.usage {
        Use::Amount => return Some(priced),
        Use::Haul(_) => (
            format!("\"{}\" is a vehicle, not a factor for an amount.", priced.id),
            "Use it as the vehicle of a model of kind haul.".to_owned(),
        ),
        Use::Engine(_) => (
            format!("\"{}\" is an engine, not a factor for an amount.", priced.id),
            "Use it as the vehicle of a model of kind combustion.".to_owned(),
        ),
        Use::HeatingValueOnly => (
            format!("\"{}\" prints a heating value but no emission.", priced.id),
            "Choose another factor, or give an own one with its source.".to_owned(),
        ),
        Use::Refused(why) => (
            format!("\"{}\" is not taken: {why}", priced.id),
            "Choose another factor.".to_owned(),
        ),
    };
    problems.add(at, detail, remedy);
    None
}

/// Finds a factor per fuel energy (or bare energy), for the fuels of a model.
pub fn find_per_energy(
    reference: &FactorRef,
    book: &Book,
    at: &Place,
    problems: &mut Problems,
) -> Option<Priced> {
    let priced = find_for_amount(reference, book, at, problems)?;
    let energy = matches!(priced.unit.dimension, Dimension::ENERGY | Dimension::ENERGY_NET);
    if energy && matches!(priced.counts, Counts::Fuel | Counts::Other) {
        return Some(priced);
    }
    let detail = format!(
        "\"{}\" counts per {}, but a fuel counts per MJ.",
        priced.id, priced.per
    );
    problems.add(
        at,
        detail,
        "Choose a factor per MJ of fuel, or give an own one per MJ.",
    );
    None
}

/// An amount brought to the unit of a factor.
pub struct Converted {
    /// Amount in the factor's unit.
    pub amount: f64,
    /// How it was reached, if anything had to be done.
    pub step: Option<Step>,
}

/// Why an amount does not fit a factor.
pub struct Unfit {
    /// What is so.
    pub detail: String,
    /// What to do.
    pub remedy: String,
}

/// Heating value and density that bring masses and volumes to fuel energy.
#[derive(Clone, Debug, Default)]
pub struct HeatingValue {
    /// MJ/kg.
    pub lhv: Option<f64>,
    /// kg/m3.
    pub density: Option<f64>,
    /// Row that prints them.
    pub row: String,
}

impl HeatingValue {
    /// The first row of a list that prints a heating value.
    pub fn of(list: &[Priced]) -> HeatingValue {
        list.iter()
            .find(|priced| priced.lhv_mj_per_kg.is_some())
            .map(|priced| HeatingValue {
                lhv: priced.lhv_mj_per_kg,
                density: priced.density_kg_per_m3,
                row: priced.id.clone(),
            })
            .unwrap_or_default()
    }
}

/// Brings an amount to the unit of a factor.
///
/// # Errors
/// In words, when the amount counts something else than the factor.
pub fn convert(
    amount: f64,
    unit: &Unit,
    net_per_gross: Option<f64>,
    heating: &HeatingValue,
    factor: &Priced,
) -> Result<Converted, Unfit> {
    let wanted = factor.unit.dimension;
    let energy_factor = wanted.is_energy();
    let found = unit.dimension;
    let base = unit.to_base(amount).map_err(|error| unfit_unit(&error))?;
    let entered = format!("{} {}", plain(amount), unit.symbol);
    let direct = |base: f64| base / factor.unit.factor;
    let as_it_is = || {
        let same = unit.factor == factor.unit.factor;
        let value = if same { amount } else { direct(base) };
        let step = (!same).then(|| {
            step(
                format!("{entered} in {}", factor.unit.symbol),
                value,
                &factor.per,
                "",
            )
        });
        Converted { amount: value, step }
    };
    if !energy_factor {
        return match unit.need(wanted) {
            Ok(()) => Ok(as_it_is()),
            Err(error) => Err(unfit_unit(&error)),
        };
    }
    let takes = match factor.counts {
        Counts::Power => matches!(found, Dimension::ENERGY | Dimension::POWER),
        Counts::Heat => matches!(found, Dimension::ENERGY | Dimension::HEAT),
        Counts::Fuel => matches!(found, Dimension::ENERGY | Dimension::ENERGY_NET),
        Counts::Other => {
            matches!(
                found,
                Dimension::ENERGY | Dimension::ENERGY_NET | Dimension::HEAT | Dimension::POWER
            )
        }
    };
    if takes {
        return Ok(as_it_is());
    }
    let fuel = matches!(factor.counts, Counts::Fuel | Counts::Other);
    if found == Dimension::ENERGY_GROSS && fuel {
        let Some(ratio) = net_per_gross else {
            return Err(Unfit {
                detail: format!("{} is on the gross heating value, but this factor counts per MJ net.", unit.symbol),
                remedy: "Add net_per_gross (for natural gas about 0.9) from the bill or the laboratory, or give the energy net.".to_owned(),
            });
        };
        let value = direct(base * ratio);
        let text = format!(
            "{entered} x {} net per gross, in {}",
            plain(ratio),
            factor.unit.symbol
        );
        return Ok(Converted {
            amount: value,
            step: Some(step(text, value, &factor.per, "")),
        });
    }
    if fuel && (found == Dimension::MASS || found == Dimension::VOLUME) {
        return by_heating_value(base, found, &entered, unit, heating, factor);
    }
    let counts = match factor.counts {
        Counts::Power => "electrical energy",
        Counts::Heat => "heat",
        Counts::Fuel | Counts::Other => "fuel energy",
    };
    let examples = match factor.counts {
        Counts::Power => "kWh, MWh or kWh power",
        Counts::Heat => "MJ, GJ or MJ heat",
        Counts::Fuel | Counts::Other => {
            "MJ, GJ, TJ or MWh (net), or the volume or mass with its heating value"
        }
    };
    Err(Unfit {
        detail: format!(
            "{} is {}, but this factor counts {counts} per {}.",
            unit.symbol,
            found.describe(),
            factor.per
        ),
        remedy: format!("Give it in {examples}."),
    })
}

fn by_heating_value(
    base: f64,
    found: Dimension,
    entered: &str,
    unit: &Unit,
    heating: &HeatingValue,
    factor: &Priced,
) -> Result<Converted, Unfit> {
    let missing = |what: &str| Unfit {
        detail: format!(
            "{} is {}, but this factor counts per {} and prints no {what}.",
            unit.symbol,
            found.describe(),
            factor.per
        ),
        remedy: "Give the energy in MJ, GJ, TJ or MWh.".to_owned(),
    };
    let lhv = heating.lhv.ok_or_else(|| missing("heating value"))?;
    let (mass, by_density) = if found == Dimension::VOLUME {
        let density = heating.density.ok_or_else(|| missing("density"))?;
        (base * density, format!(" x {} kg/m3", plain(density)))
    } else {
        (base, String::new())
    };
    let value = mass * lhv * 1e6 / factor.unit.factor;
    let text = format!(
        "{entered}{by_density} x {} MJ/kg of {}, in {}",
        plain(lhv),
        heating.row,
        factor.unit.symbol
    );
    Ok(Converted {
        amount: value,
        step: Some(step(text, value, &factor.per, "")),
    })
}

fn unfit_unit(error: &crate::core::units::UnitError) -> Unfit {
    let (detail, remedy) = unit_words(error);
    Unfit { detail, remedy }
}

/// The gases of an amount in the factor's unit.
pub fn gases_of(amount: f64, factor: &Priced) -> GasVector {
    factor.gases.vector() * amount
}

/// The gases of an amount in the factor's unit, with one step a gas.
pub fn price(amount: f64, factor: &Priced, steps: &mut Vec<Step>) -> GasVector {
    let gases = gases_of(amount, factor);
    for (gas, per_unit) in factor
        .gases
        .vector()
        .entries()
        .filter(|(_, per_unit)| *per_unit != 0.0)
    {
        steps.push(step(
            format!(
                "{} {} x {} kg {} per {}, {}",
                plain(amount),
                factor.unit.symbol,
                plain(per_unit),
                gas.name(),
                factor.per,
                factor.id
            ),
            gases[gas],
            &format!("kg {}", gas.name()),
            &sourced(factor),
        ));
    }
    gases
}

/// An energy unit that models work in: its symbol and its size, J.
pub type EnergyUnit = (&'static str, f64);
/// Megajoules.
pub const MJ: EnergyUnit = ("MJ", 1e6);
/// Kilowatt-hours.
pub const KWH: EnergyUnit = ("kWh", 3.6e6);

/// The gases of an energy, with a step to the factor's unit where that is another, and one step a gas.
pub fn price_energy(
    energy: f64,
    (symbol, joules): EnergyUnit,
    factor: &Priced,
    steps: &mut Vec<Step>,
) -> GasVector {
    if factor.unit.factor == joules {
        return price(energy, factor, steps);
    }
    let amount = energy * joules / factor.unit.factor;
    let text = format!("{} {symbol} in {}", plain(energy), factor.unit.symbol);
    steps.push(step(text, amount, &factor.unit.symbol, ""));
    price(amount, factor, steps)
}

/// The source of a factor for a step, with its status where nobody has read it.
pub fn sourced(factor: &Priced) -> String {
    source_words(&factor.source, factor.status)
}

/// A source for a step, with its status where nobody has read it.
pub fn source_words(source: &str, status: Status) -> String {
    match status {
        Status::Memory => format!("{source} (recalled, not read at its source)"),
        _ => source.to_owned(),
    }
}

/// A step of workings.
pub fn step(text: String, value: f64, unit: &str, source: &str) -> Step {
    Step {
        text,
        value,
        unit: unit.to_owned(),
        source: source.to_owned(),
    }
}

/// The fuel of a list of energy factors whose burning gases (CH4, N2O) neither it nor a companion publishes, with the
/// names of those gases in words.
pub fn unpublished<'p>(list: impl IntoIterator<Item = &'p Priced>) -> Option<(String, String)> {
    let list: Vec<&Priced> = list.into_iter().collect();
    let burns = |priced: &&Priced| priced.group == "fuel" && priced.gases.get(Gas::Co2eUnsplit).is_none();
    let fuel = list.iter().copied().find(burns)?;
    let published = |gas: Gas| list.iter().any(|priced| priced.gases.get(gas).is_some());
    gaps(
        published(Gas::Ch4Fossil) || published(Gas::Ch4Biogenic),
        published(Gas::N2o),
    )
    .map(|gases| (fuel.id.clone(), gases.to_owned()))
}

/// The burning gases that are not published, in words; none when both are.
pub fn gaps(ch4: bool, n2o: bool) -> Option<&'static str> {
    match (ch4, n2o) {
        (true, true) => None,
        (false, true) => Some("CH4"),
        (true, false) => Some("N2O"),
        (false, false) => Some("CH4 and N2O"),
    }
}
