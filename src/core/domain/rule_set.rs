//! A published calculation rule as data: gases, allocation, terms, comparator, thresholds. The engine asks what a
//! rule set says, never which one it is.

use super::citation::{Citation, Cited};
use super::stage_kind::Term;
use crate::core::units::rounding::plain;
use jiff::civil::Date;
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;
use utoipa::ToSchema;

/// How a stage shares its burden between its products.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum AllocationMethod {
    /// Lower heating value of the products.
    Energy,
    /// Dry mass.
    Mass,
    /// Economic value.
    Economic,
    /// Avoided burden, shown apart.
    Substitution,
    /// Heat by its Carnot factor, power by 1.
    Exergy,
}

impl AllocationMethod {
    /// Every method.
    pub const ALL: [AllocationMethod; 5] = [
        AllocationMethod::Energy,
        AllocationMethod::Mass,
        AllocationMethod::Economic,
        AllocationMethod::Substitution,
        AllocationMethod::Exergy,
    ];

    /// The name used in documents.
    pub fn name(self) -> &'static str {
        match self {
            AllocationMethod::Energy => "energy",
            AllocationMethod::Mass => "mass",
            AllocationMethod::Economic => "economic",
            AllocationMethod::Substitution => "substitution",
            AllocationMethod::Exergy => "exergy",
        }
    }

    /// The method of a document name, if there is one.
    pub fn from_name(name: &str) -> Option<AllocationMethod> {
        AllocationMethod::ALL
            .into_iter()
            .find(|method| method.name() == name)
    }
}

/// Whether a rule set may be relied on, in the order in which lists offer them.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Standing {
    /// Published and in force.
    InForce,
    /// Drawn up for a purpose of one's own: it proves compliance with nothing.
    Own,
    /// Published, but what it fixes was read in part only: for drafts.
    Unconfirmed,
    /// Published and repealed: for old statements only.
    Repealed,
}

impl Standing {
    /// Every standing.
    pub const ALL: [Standing; 4] = [
        Standing::InForce,
        Standing::Own,
        Standing::Unconfirmed,
        Standing::Repealed,
    ];

    /// The name used in documents.
    pub fn name(self) -> &'static str {
        match self {
            Standing::InForce => "in_force",
            Standing::Repealed => "repealed",
            Standing::Unconfirmed => "unconfirmed",
            Standing::Own => "own",
        }
    }

    /// Words for a page.
    pub fn words(self) -> &'static str {
        match self {
            Standing::InForce => "in force",
            Standing::Repealed => "repealed: for old statements only",
            Standing::Unconfirmed => "read in part only: for drafts",
            Standing::Own => "drawn up for a purpose of one's own: proves no compliance",
        }
    }
}

/// What the heating value of ethanol makes of the water in it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum EthanolWater {
    /// Pure ethanol counts, whatever the water.
    Ignored,
    /// The heat that evaporates the water is taken off.
    Evaporated,
}

impl EthanolWater {
    /// Both ways.
    pub const ALL: [EthanolWater; 2] = [EthanolWater::Ignored, EthanolWater::Evaporated];

    /// The name used in documents.
    pub fn name(self) -> &'static str {
        match self {
            EthanolWater::Ignored => "ignored",
            EthanolWater::Evaporated => "evaporated",
        }
    }

    /// Words for a page.
    pub fn words(self) -> &'static str {
        match self {
            EthanolWater::Ignored => "counts for nothing: energy is that of the pure ethanol",
            EthanolWater::Evaporated => "takes its heat of evaporation off the energy of the fuel",
        }
    }
}

/// Where the crop's own CO2 stands in the presentation that the rule set asks for. The net is the same in both.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum BiogenicCo2 {
    /// Beside the account, in no row of it.
    #[default]
    Apart,
    /// In the account: uptake negative, releases positive.
    InLine,
}

impl BiogenicCo2 {
    /// Both presentations.
    pub const ALL: [BiogenicCo2; 2] = [BiogenicCo2::Apart, BiogenicCo2::InLine];

    /// The name used in documents.
    pub fn name(self) -> &'static str {
        match self {
            BiogenicCo2::Apart => "apart",
            BiogenicCo2::InLine => "in_line",
        }
    }

    /// Words for a page.
    pub fn words(self) -> &'static str {
        match self {
            BiogenicCo2::Apart => "beside the account",
            BiogenicCo2::InLine => "in the account: uptake negative, releases positive",
        }
    }
}

/// The minimum saving for plants that started within a span of days, for fuel of a span of days.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct Threshold {
    /// Minimum saving, %.
    pub percent: f64,
    /// First day of the span; none = from the beginning.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = Date)]
    pub started_from: Option<Date>,
    /// Last day of the span; none = open.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = Date)]
    pub started_to: Option<Date>,
    /// First day of the fuel it is asked of; none = from the beginning.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = Date)]
    pub applies_from: Option<Date>,
    /// Last day of the fuel it is asked of; none = open.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = Date)]
    pub applies_to: Option<Date>,
    /// Document and point.
    pub source: String,
    /// Whether it was read there.
    pub status: super::Status,
}

impl Threshold {
    /// True if a plant that started on `day` falls under this threshold.
    pub fn covers(&self, day: Date) -> bool {
        self.started_from.is_none_or(|from| from <= day) && self.started_to.is_none_or(|to| day <= to)
    }

    /// True if it is asked of fuel of any day from `first` to `last`.
    pub fn asked_within(&self, first: Date, last: Date) -> bool {
        self.applies_from.is_none_or(|from| from <= last) && self.applies_to.is_none_or(|to| first <= to)
    }
}

/// A calculation rule.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct RuleSet {
    /// Id as used in documents.
    pub id: String,
    /// Title on pages.
    pub title: String,
    /// Version of the rule set's data here.
    pub version: String,
    /// Whether it may be relied on.
    pub standing: Standing,
    /// Id of the set of gas weights.
    pub gwp_set: String,
    /// The comparator's word on pages, such as `fossil fuel comparator`.
    pub comparator_word: String,
    /// The fossil baseline, g CO2e/MJ.
    pub comparator: Cited,
    /// Petrol itself, g CO2e/MJ, for display.
    pub petrol: Cited,
    /// Lower heating value of pure ethanol in the arithmetic, MJ/kg.
    pub ethanol_lhv: Cited,
    /// What becomes of the water in it.
    pub ethanol_water: EthanolWater,
    /// Heating value of ethanol on consignment records, MJ/kg; none where the rule fixes none.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub consignment_lhv_mass: Option<Cited>,
    /// Heating value of ethanol on consignment records, MJ/L; none where the rule fixes none.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub consignment_lhv_volume: Option<Cited>,
    /// CO2 per carbon in the rule's formulas, kg/kg.
    pub co2_per_carbon: Cited,
    /// Heat of evaporation taken off the heating value of wet co-products (and of hydrous ethanol where its water counts),
    /// MJ per kg of water.
    pub water_evaporation: Cited,
    /// The temperature of the surroundings in the Carnot factor, K.
    pub ambient: Cited,
    /// Carnot factor that heat for buildings below 150 degC may use.
    pub building_heat_carnot: Cited,
    /// The sharing method without a stage's own word.
    pub allocation: AllocationMethod,
    /// The methods a stage may ask for.
    pub allocation_allowed: Vec<AllocationMethod>,
    /// Sharing of a stage that gives only heat and power.
    pub allocation_heat_and_power: AllocationMethod,
    /// Terms that are zero by rule: computed, shown as memo, in no total.
    pub terms_not_counted: Vec<Term>,
    /// The presentation of the crop's own CO2.
    pub biogenic_co2: BiogenicCo2,
    /// The edition of standard factors; none where the rule names none.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub standard_factors: Option<String>,
    /// The edition whose published pathways may stand in for a term; none where the rule knows no such values.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub default_values: Option<String>,
    /// The soil N2O method that needs no written reason.
    pub soil_n2o_method: String,
    /// Years over which land-use change is spread.
    pub land_use_years: Cited,
    /// Months of data that an actual value asks for; none where the rule names none (the EU texts read name none).
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub data_months: Option<Cited>,
    /// Limits and bonuses of deductions by symbol (`soil_carbon_cap`, ...); what is not here, the rule does not have.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub limits: BTreeMap<String, Cited>,
    /// Built-in materials that are residues whatever a file says.
    pub residues_by_law: Vec<String>,
    /// Source of the residue list; none for an empty list.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub residues_source: Option<String>,
    /// Minimum savings.
    pub thresholds: Vec<Threshold>,
    /// The document.
    pub source: String,
    /// Whether it was read.
    pub status: super::Status,
    /// What a reader should know, one note a line.
    pub notes: Vec<String>,
}

impl RuleSet {
    /// The document behind the rule set.
    pub fn citation(&self) -> Citation {
        Citation {
            source: self.source.clone(),
            status: self.status,
        }
    }

    /// Energy of a kilogram of pure ethanol in ethanol of a strength (mass fraction, above 0 to 1), MJ. Where the water
    /// counts it falls with it and is below zero for ethanol of less than about 8 % mass.
    pub fn ethanol_mj_per_kg(&self, strength: f64) -> f64 {
        match self.ethanol_water {
            EthanolWater::Ignored => self.ethanol_lhv.value,
            EthanolWater::Evaporated => {
                self.ethanol_lhv.value - self.water_evaporation.value * (1.0 / strength - 1.0)
            }
        }
    }

    /// Energy of an amount of pure ethanol (kg) in ethanol of a strength (mass fraction), MJ.
    pub fn ethanol_mj(&self, pure_kg: f64, strength: f64) -> f64 {
        pure_kg * self.ethanol_mj_per_kg(strength)
    }

    /// The energy per kilogram of pure ethanol in words, for workings.
    pub fn ethanol_words(&self, strength: f64) -> String {
        let lhv = plain(self.ethanol_lhv.value);
        match self.ethanol_water {
            EthanolWater::Evaporated if strength < 1.0 => {
                let water = 1.0 / strength - 1.0;
                format!(
                    "({lhv} - {} x {}) MJ/kg",
                    plain(self.water_evaporation.value),
                    plain(water)
                )
            }
            _ => format!("{lhv} MJ/kg"),
        }
    }

    /// The minimum saving that a plant's start asks of fuel made from `first` to `last`: the strictest where the days
    /// span several; none where no threshold covers them.
    pub fn threshold(&self, started: Date, first: Date, last: Date) -> Option<&Threshold> {
        self.thresholds
            .iter()
            .filter(|threshold| threshold.covers(started) && threshold.asked_within(first, last))
            .max_by(|a, b| a.percent.total_cmp(&b.percent))
    }

    /// Whether figures in g CO2e/MJ under the two rule sets may be compared.
    ///
    /// # Errors
    /// Every reason why not: other gas weights, or a megajoule of fuel that is another amount of ethanol.
    pub fn comparable_with(&self, other: &RuleSet) -> Result<(), String> {
        let mut reasons = Vec::new();
        if self.gwp_set != other.gwp_set {
            reasons.push(format!(
                "the gases weigh differently ({} and {})",
                self.gwp_set, other.gwp_set
            ));
        }
        let heating = |set: &RuleSet| {
            let water = match set.ethanol_water {
                EthanolWater::Ignored => "whatever the water".to_owned(),
                EthanolWater::Evaporated => {
                    format!("less {} MJ per kg of water", plain(set.water_evaporation.value))
                }
            };
            format!("{} MJ/kg {water}", plain(set.ethanol_lhv.value))
        };
        let (mine, theirs) = (heating(self), heating(other));
        if mine != theirs {
            reasons.push(format!("ethanol has another heating value ({mine} and {theirs})"));
        }
        if reasons.is_empty() {
            return Ok(());
        }
        Err(format!(
            "Figures under {} and {} cannot be compared: {}.",
            self.id,
            other.id,
            reasons.join("; ")
        ))
    }

    /// A limit or bonus of deductions; none where the rule has no such thing.
    pub fn limit(&self, symbol: &str) -> Option<&Cited> {
        self.limits.get(symbol)
    }

    /// Its figures by field name, those it lacks as none.
    pub fn figures(&self) -> [(&'static str, Option<&Cited>); 11] {
        [
            ("comparator", Some(&self.comparator)),
            ("petrol", Some(&self.petrol)),
            ("ethanol_lhv", Some(&self.ethanol_lhv)),
            ("consignment_lhv_mass", self.consignment_lhv_mass.as_ref()),
            ("consignment_lhv_volume", self.consignment_lhv_volume.as_ref()),
            ("co2_per_carbon", Some(&self.co2_per_carbon)),
            ("water_evaporation", Some(&self.water_evaporation)),
            ("ambient", Some(&self.ambient)),
            ("building_heat_carnot", Some(&self.building_heat_carnot)),
            ("land_use_years", Some(&self.land_use_years)),
            ("data_months", self.data_months.as_ref()),
        ]
    }

    /// True if the rule says the term is zero.
    pub fn leaves_out(&self, term: Term) -> bool {
        self.terms_not_counted.contains(&term)
    }

    /// True if the material is a residue whatever the file says. Ids that end in `*` stand for all that begin so.
    pub fn is_residue_by_law(&self, material: &str) -> bool {
        self.residues_by_law.iter().any(|id| match id.strip_suffix('*') {
            Some(stem) => material.starts_with(stem),
            None => id == material,
        })
    }
}
