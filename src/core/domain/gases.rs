//! The gas vector every emission is carried in, and the weights (GWP, 100 years) that turn it into CO2e.

use super::citation::Citation;
use serde::de::{Error as _, MapAccess, Visitor};
use serde::ser::SerializeMap;
use serde::{Deserialize, Deserializer, Serialize, Serializer};
use std::fmt;
use std::ops::{Add, AddAssign, Index, IndexMut, Mul};
use utoipa::ToSchema;

/// One entry of the gas vector. The order is fixed: sums run through it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Gas {
    /// CO2 of fossil carbon, and of minerals (lime).
    Co2Fossil,
    /// CO2 of carbon that a crop took up; weight 0 here, followed by the carbon balance.
    Co2Biogenic,
    /// CO2 of soil and vegetation carbon (land-use change, soil carbon).
    Co2Land,
    /// Methane of fossil origin.
    Ch4Fossil,
    /// Methane of biological origin.
    Ch4Biogenic,
    /// Nitrous oxide.
    N2o,
    /// CO2e that a source publishes only as a total.
    Co2eUnsplit,
}

impl Gas {
    /// All gases in the fixed order.
    pub const ALL: [Gas; 7] = [
        Gas::Co2Fossil,
        Gas::Co2Biogenic,
        Gas::Co2Land,
        Gas::Ch4Fossil,
        Gas::Ch4Biogenic,
        Gas::N2o,
        Gas::Co2eUnsplit,
    ];

    /// The name used in documents.
    pub fn name(self) -> &'static str {
        match self {
            Gas::Co2Fossil => "co2_fossil",
            Gas::Co2Biogenic => "co2_biogenic",
            Gas::Co2Land => "co2_land",
            Gas::Ch4Fossil => "ch4_fossil",
            Gas::Ch4Biogenic => "ch4_biogenic",
            Gas::N2o => "n2o",
            Gas::Co2eUnsplit => "co2e_unsplit",
        }
    }

    /// The gas of a document name, if there is one.
    pub fn from_name(name: &str) -> Option<Gas> {
        Gas::ALL.into_iter().find(|gas| gas.name() == name)
    }

    /// Words for a page.
    pub fn words(self) -> &'static str {
        match self {
            Gas::Co2Fossil => "fossil CO2",
            Gas::Co2Biogenic => "biogenic CO2",
            Gas::Co2Land => "CO2 of land",
            Gas::Ch4Fossil => "fossil CH4",
            Gas::Ch4Biogenic => "biogenic CH4",
            Gas::N2o => "N2O",
            Gas::Co2eUnsplit => "CO2e not split by gas",
        }
    }
}

/// Mass of each gas (kg, or g per MJ: the context says). Entries may be negative (credits).
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct GasVector([f64; 7]);

impl GasVector {
    /// No emission.
    pub const ZERO: GasVector = GasVector([0.0; 7]);

    /// A vector with one gas.
    pub fn of(gas: Gas, amount: f64) -> GasVector {
        let mut vector = GasVector::ZERO;
        vector[gas] = amount;
        vector
    }

    /// True if every entry is finite.
    pub fn is_finite(&self) -> bool {
        self.0.iter().all(|x| x.is_finite())
    }

    /// True if every entry is zero.
    pub fn is_zero(&self) -> bool {
        self.0.iter().all(|x| *x == 0.0)
    }

    /// CO2e under a set of weights, in the unit of the vector.
    pub fn co2e(&self, gwp: &GwpSet) -> f64 {
        self.0
            .iter()
            .zip(gwp.weights())
            .map(|(mass, weight)| mass * weight)
            .sum()
    }

    /// The entries in the fixed order.
    pub fn entries(&self) -> impl Iterator<Item = (Gas, f64)> + '_ {
        Gas::ALL.into_iter().map(|gas| (gas, self[gas]))
    }
}

impl Index<Gas> for GasVector {
    type Output = f64;
    fn index(&self, gas: Gas) -> &f64 {
        &self.0[gas as usize]
    }
}

impl IndexMut<Gas> for GasVector {
    fn index_mut(&mut self, gas: Gas) -> &mut f64 {
        &mut self.0[gas as usize]
    }
}

impl Add for GasVector {
    type Output = GasVector;
    fn add(mut self, other: GasVector) -> GasVector {
        self += other;
        self
    }
}

impl AddAssign for GasVector {
    fn add_assign(&mut self, other: GasVector) {
        for (mine, theirs) in self.0.iter_mut().zip(other.0) {
            *mine += theirs;
        }
    }
}

impl Mul<f64> for GasVector {
    type Output = GasVector;
    fn mul(mut self, by: f64) -> GasVector {
        for mine in &mut self.0 {
            *mine *= by;
        }
        self
    }
}

impl std::iter::Sum for GasVector {
    fn sum<I: Iterator<Item = GasVector>>(parts: I) -> GasVector {
        parts.fold(GasVector::ZERO, Add::add)
    }
}

/// In documents a vector is an object; a gas that is absent is zero.
impl Serialize for GasVector {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        for (gas, amount) in self.entries().filter(|(_, amount)| *amount != 0.0) {
            map.serialize_entry(gas.name(), &amount)?;
        }
        map.end()
    }
}

impl<'de> Deserialize<'de> for GasVector {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<GasVector, D::Error> {
        struct Gases;
        impl<'de> Visitor<'de> for Gases {
            type Value = GasVector;
            fn expecting(&self, f: &mut fmt::Formatter) -> fmt::Result {
                f.write_str("an object of gases")
            }
            fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<GasVector, A::Error> {
                let mut vector = GasVector::ZERO;
                while let Some((name, amount)) = map.next_entry::<String, f64>()? {
                    let gas = Gas::from_name(&name)
                        .ok_or_else(|| A::Error::custom(format!("there is no gas \"{name}\"")))?;
                    vector[gas] = amount;
                }
                Ok(vector)
            }
        }
        deserializer.deserialize_map(Gases)
    }
}

impl utoipa::PartialSchema for GasVector {
    fn schema() -> utoipa::openapi::RefOr<utoipa::openapi::schema::Schema> {
        let mut object = utoipa::openapi::ObjectBuilder::new()
            .description(Some("Mass of each gas; a gas that is absent is zero."))
            .additional_properties(Some(utoipa::openapi::schema::AdditionalProperties::<
                utoipa::openapi::schema::Schema,
            >::FreeForm(false)));
        for gas in Gas::ALL {
            object = object.property(
                gas.name(),
                utoipa::openapi::ObjectBuilder::new().schema_type(utoipa::openapi::schema::SchemaType::new(
                    utoipa::openapi::Type::Number,
                )),
            );
        }
        object.into()
    }
}

impl ToSchema for GasVector {
    fn name() -> std::borrow::Cow<'static, str> {
        "GasVector".into()
    }
}

/// Gases as a source publishes them: a blank is not published, never a measured zero.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct PublishedGases(pub [Option<f64>; 7]);

impl PublishedGases {
    /// The published amount of a gas.
    pub fn get(&self, gas: Gas) -> Option<f64> {
        self.0[gas as usize]
    }

    /// Sets one published amount.
    pub fn set(&mut self, gas: Gas, amount: Option<f64>) {
        self.0[gas as usize] = amount;
    }

    /// The vector with blanks as nothing added.
    pub fn vector(&self) -> GasVector {
        let mut vector = GasVector::ZERO;
        for gas in Gas::ALL {
            vector[gas] = self.get(gas).unwrap_or(0.0);
        }
        vector
    }

    /// True if no figure at all is published.
    pub fn is_blank(&self) -> bool {
        self.0.iter().all(Option::is_none)
    }
}

/// A named set of weights: CO2e in kg per kg of gas over 100 years.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct GwpSet {
    /// Id, such as `eu-2018-2001`, `ar4`, `ar5`, `ar6`.
    pub id: String,
    /// What it is called on pages.
    pub title: String,
    /// Weight of fossil methane.
    pub ch4_fossil: f64,
    /// Weight of methane of biological origin.
    pub ch4_biogenic: f64,
    /// Weight of nitrous oxide.
    pub n2o: f64,
    /// Source of the weights.
    pub citation: Citation,
    /// What a reader should know (a conflict between sources, feedback in or out).
    pub note: Option<String>,
}

impl GwpSet {
    /// The weights in the order of [`Gas::ALL`]. Biogenic CO2 weighs nothing, CO2 and CO2e weigh one by definition.
    pub fn weights(&self) -> [f64; 7] {
        [1.0, 0.0, 1.0, self.ch4_fossil, self.ch4_biogenic, self.n2o, 1.0]
    }
}
