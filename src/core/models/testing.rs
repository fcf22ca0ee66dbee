//! A bench for the unit tests of models: runs one model in a made-up stage. Its constants are typed here a second time,
//! from the sources named, so that two copies can disagree.

use super::flow::Measured;
use super::given::{Given, Record};
use super::{Outcome, Setting};
use crate::core::documents::pathway::Period;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::book::{ResidueRow, SoilTables};
use crate::core::domain::factor::{EngineVehicle, Use};
use crate::core::domain::{
    Book, Citation, Cited, Counts, Edition, Factor, Gas, GasVector, GwpSet, PublishedGases, RuleSet,
    StageKind, Status,
};
use crate::core::units::{Dimension, parse_unit};
use serde_json::Value;
use std::collections::BTreeMap;

/// Implementing Regulation (EU) 2022/996 Annex VII.
const EU: &[(&str, f64)] = &[
    ("ef1", 0.01),
    ("ef2_temperate", 8.0),
    ("ef2_tropical", 16.0),
    ("ef4", 0.01),
    ("ef5", 0.0075),
    ("frac_gasf", 0.1),
    ("frac_gasm", 0.2),
    ("frac_leach", 0.3),
    ("f_vf_per_kg_cane", 0.000508),
    ("n2o_per_n2o_n", 44.0 / 28.0),
    ("effect.constant", -1.516),
    ("effect.n_rate", 0.0038),
    ("effect.experiment_1_year", 1.991),
    ("effect.soil_organic_carbon.below_1_percent", 0.0),
    ("effect.soil_organic_carbon.1_to_3_percent", 0.0526),
    ("effect.soil_ph_class.5.5_to_7.3", -0.0693),
    ("effect.soil_texture.coarse", 0.0),
    ("effect.soil_texture.medium", -0.1528),
    ("effect.climate_class.temperate_oceanic", 0.0226),
    ("effect.vegetation.cereals", 0.0),
    ("effect.vegetation.other", 0.442),
    ("acidity.nitrate", 0.806),
    ("acidity.urea", 0.783),
    ("lime.acid", 0.44),
    ("lime.nonacid", 0.079),
    ("lime.ph_limit", 6.4),
];

/// 2006 IPCC Guidelines Vol. 4 Ch. 11 Tables 11.1, 11.3, sections 11.3 and 11.4.
const IPCC_2006: &[(&str, f64)] = &[
    ("ef1", 0.01),
    ("ef2_temperate", 8.0),
    ("ef2_tropical", 16.0),
    ("ef4", 0.01),
    ("ef5", 0.0075),
    ("frac_gasf", 0.1),
    ("frac_gasm", 0.2),
    ("frac_leach", 0.3),
    ("lime.limestone", 0.12),
    ("lime.dolomite", 0.13),
    ("urea", 0.2),
    ("n2o_per_n2o_n", 44.0 / 28.0),
    ("co2_per_c", 44.0 / 12.0),
    ("c_to_n.land_use_change", 15.0),
    ("c_to_n.management", 10.0),
];

/// 2019 Refinement Vol. 4 Ch. 11 Tables 11.1 and 11.3.
const IPCC_2019: &[(&str, f64)] = &[
    ("ef1.aggregated", 0.01),
    ("ef1.wet.synthetic", 0.016),
    ("ef1.wet.other", 0.006),
    ("ef1.dry", 0.005),
    ("ef2_temperate", 8.0),
    ("ef2_tropical", 16.0),
    ("ef4.aggregated", 0.01),
    ("ef4.wet", 0.014),
    ("ef4.dry", 0.005),
    ("ef5", 0.011),
    ("frac_gasf", 0.11),
    ("frac_gasf.urea", 0.15),
    ("frac_gasf.calcium_nitrate", 0.01),
    ("frac_gasf.npk", 0.11),
    ("frac_gasm", 0.21),
    ("frac_leach.aggregated", 0.24),
    ("frac_leach.wet", 0.24),
    ("frac_leach.dry", 0.0),
    ("n2o_per_n2o_n", 44.0 / 28.0),
    ("c_to_n.land_use_change", 15.0),
    ("c_to_n.management", 10.0),
];

type Row = (&'static str, &'static str, &'static [(&'static str, f64)]);

/// Annex VII Table 1, Table 11.2 of 2006, Table 11.1A of 2019; fire: Table 2.6 of Ch. 2.
const ROWS: &[Row] = &[
    (
        "eu-2022-996",
        "wheat",
        &[
            ("dry", 0.84),
            ("slope", 1.51),
            ("intercept", 0.52),
            ("n_ag", 0.006),
            ("r_bg_bio", 0.24),
            ("n_bg", 0.009),
            ("cf", 0.9),
        ],
    ),
    (
        "eu-2022-996",
        "sugar_cane",
        &[("dry", 0.275), ("r_ag", 0.43), ("n_ag", 0.004), ("cf", 0.8)],
    ),
    (
        "ipcc-2006",
        "maize",
        &[
            ("dry", 0.87),
            ("slope", 1.03),
            ("intercept", 0.61),
            ("n_ag", 0.006),
            ("r_bg_bio", 0.22),
            ("n_bg", 0.007),
            ("cf", 0.8),
        ],
    ),
    (
        "ipcc-2006",
        "rye",
        &[
            ("dry", 0.88),
            ("slope", 1.09),
            ("intercept", 0.88),
            ("n_ag", 0.005),
            ("n_bg", 0.011),
        ],
    ),
    (
        "ipcc-2019",
        "maize",
        &[
            ("dry", 0.87),
            ("r_ag", 1.0),
            ("n_ag", 0.006),
            ("rs", 0.22),
            ("n_bg", 0.007),
            ("cf", 0.8),
        ],
    ),
];

fn citation(status: Status) -> Citation {
    Citation {
        source: "typed for a test".to_owned(),
        status,
    }
}

fn tables(edition: &str, constants: &[(&str, f64)]) -> SoilTables {
    let recalled = ["lime.limestone", "lime.dolomite", "ef2_temperate", "ef2_tropical"];
    let cited = |symbol: &str, value: f64| Cited {
        value,
        unit: String::new(),
        source: "typed for a test".to_owned(),
        status: if recalled.contains(&symbol) {
            Status::Memory
        } else {
            Status::Read
        },
        note: None,
    };
    let rows = ROWS.iter().filter(|(of, ..)| *of == edition);
    SoilTables {
        constants: constants
            .iter()
            .map(|(symbol, value)| ((*symbol).to_owned(), cited(symbol, *value)))
            .collect(),
        residues: rows
            .map(|(_, crop, figures)| {
                let row = ResidueRow {
                    crop: (*crop).to_owned(),
                    figures: figures
                        .iter()
                        .map(|(name, value)| ((*name).to_owned(), *value))
                        .collect(),
                    citation: citation(Status::Read),
                };
                ((*crop).to_owned(), row)
            })
            .collect(),
    }
}

fn factor(row: &str, group: &str, gases: &[(Gas, f64)], usage: Use) -> (String, Factor) {
    let mut published = PublishedGases::default();
    for (gas, amount) in gases {
        published.set(*gas, Some(*amount));
    }
    let factor = Factor {
        id: format!("test/{row}"),
        name: row.to_owned(),
        group: group.to_owned(),
        counts: Counts::Fuel,
        per: "MJ".to_owned(),
        unit: parse_unit("MJ").unwrap(),
        gases: published,
        usage,
        printed_co2e_g: None,
        printed: BTreeMap::new(),
        lhv_mj_per_kg: None,
        density_kg_per_m3: None,
        note: None,
        citation: citation(Status::Read),
    };
    (row.to_owned(), factor)
}

fn edition() -> Edition {
    let engine = Use::Engine(EngineVehicle {
        ch4_kg_per_tj: Some(18.0),
        n2o_kg_per_tj: None,
    });
    let stack = [(Gas::Ch4Fossil, 1e-6), (Gas::N2o, 1e-6)];
    Edition {
        id: "test".to_owned(),
        title: "test".to_owned(),
        citation: citation(Status::Read),
        note: None,
        valid_from: None,
        valid_to: None,
        validity_source: None,
        factors: BTreeMap::from([
            factor("fuel", "fuel", &[(Gas::Co2Fossil, 0.06)], Use::Amount),
            factor("stack", "combustion", &stack, Use::Amount),
            factor("car", "vehicle", &[], engine),
        ]),
        aliases: BTreeMap::new(),
        fuel_splits: BTreeMap::new(),
        pathways: BTreeMap::new(),
    }
}

/// A stage to run a model in.
pub struct Bench {
    pub book: Book,
    pub rules: RuleSet,
    pub output: Option<Measured>,
    pub intakes: Vec<Measured>,
    pub neighbours: Vec<(String, String)>,
    pub period: Period,
}

impl Default for Bench {
    /// Rules of the Directive; the stage gives 10 t of grain with 13 % of water.
    fn default() -> Bench {
        let mut book = Book::default();
        book.editions.insert("test".to_owned(), edition());
        for (id, constants) in [
            ("eu-2022-996", EU),
            ("ipcc-2006", IPCC_2006),
            ("ipcc-2019", IPCC_2019),
        ] {
            book.soils.insert(id.to_owned(), tables(id, constants));
        }
        let rules = toml::from_str(include_str!("../../library/rule_sets/eu-2018-2001.toml")).unwrap();
        let day = |text: &str| text.parse().unwrap();
        Bench {
            book,
            rules,
            output: Some(Measured {
                material: "maize".to_owned(),
                dimension: Dimension::MASS,
                base: 10_000.0,
                wet_kg: Some(10_000.0),
                moisture: Some(0.13),
                pure_kg: None,
                strength: None,
                strength_given: false,
                celsius: None,
            }),
            intakes: Vec::new(),
            neighbours: Vec::new(),
            period: Period {
                from: day("2026-01-01"),
                to: day("2026-12-31"),
                kind: None,
            },
        }
    }
}

impl Bench {
    /// Rules whose standard soil method is of the Guidelines.
    pub fn ipcc() -> Bench {
        let mut bench = Bench::default();
        bench.rules.soil_n2o_method = "ipcc-2006".to_owned();
        bench
    }

    /// A stage that gives pure ethanol, kg.
    pub fn giving_ethanol(kg: f64) -> Bench {
        let output = Measured {
            material: "ethanol".to_owned(),
            base: kg,
            wet_kg: Some(kg),
            moisture: None,
            pure_kg: Some(kg),
            strength: Some(1.0),
            dimension: Dimension::MASS,
            strength_given: true,
            celsius: None,
        };
        Bench {
            output: Some(output),
            ..Bench::default()
        }
    }

    /// A stage that burns fuel, MJ.
    pub fn burning_mj(mj: f64) -> Bench {
        let mut bench = Bench::giving_ethanol(mj / 26.81);
        if let Some(output) = &mut bench.output {
            output.dimension = Dimension::ENERGY;
            output.base = mj * 1e6;
        }
        bench
    }

    /// Takes a constant out of the book.
    pub fn forget(&mut self, edition: &str, symbol: &str) {
        let tables = self.book.soils.get_mut(edition).unwrap();
        assert!(tables.constants.remove(symbol).is_some());
    }

    /// Weights of one for CO2 only.
    pub fn plain_weights() -> GwpSet {
        GwpSet {
            id: "test".to_owned(),
            title: "test".to_owned(),
            ch4_fossil: 0.0,
            ch4_biogenic: 0.0,
            n2o: 0.0,
            citation: citation(Status::Read),
            note: None,
        }
    }

    /// Runs a model.
    pub fn run(&self, kind: &str, parameters: &Value) -> Run {
        let model = super::find(kind).unwrap();
        let (mut problems, mut record) = (Problems::default(), Record::default());
        let setting = Setting {
            book: &self.book,
            rules: &self.rules,
            stage_kind: StageKind::Cultivation,
            output: self.output.as_ref(),
            intakes: &self.intakes,
            neighbours: &self.neighbours,
            period: &self.period,
            harvest_year: 2026,
            workings: true,
        };
        let map = parameters.as_object().unwrap();
        let mut given = Given::open(
            map,
            model.parameters,
            Place::ROOT,
            &setting,
            &mut problems,
            &mut record,
        );
        let outcome = (model.compute)(&mut given);
        Run {
            outcome,
            problems,
            record,
        }
    }

    /// Runs a model that must find nothing wrong, and gives its gases.
    pub fn gases(&self, kind: &str, parameters: &Value) -> GasVector {
        self.run(kind, parameters).gases()
    }
}

/// What a model left behind.
pub struct Run {
    pub outcome: Option<Outcome>,
    pub problems: Problems,
    pub record: Record,
}

impl Run {
    /// The gases; nothing may be wrong.
    pub fn gases(&self) -> GasVector {
        assert!(self.problems.is_empty(), "{:?}", self.problems.list());
        self.outcome.as_ref().unwrap().gases
    }

    /// Where the problems are.
    pub fn pointers(&self) -> Vec<String> {
        self.problems
            .list()
            .iter()
            .map(|problem| problem.pointer.clone())
            .collect()
    }

    /// Ids of the findings.
    pub fn findings(&self) -> Vec<&'static str> {
        self.record.notes.iter().map(|note| note.id).collect()
    }

    /// The figure of the first step that begins so.
    pub fn step(&self, begins: &str) -> f64 {
        let step = self
            .record
            .steps
            .iter()
            .find(|step| step.text.starts_with(begins));
        step.unwrap_or_else(|| panic!("no step {begins:?} in {:?}", self.record.steps))
            .value
    }
}

/// Agreement within a relative tolerance.
#[track_caller]
pub fn close(found: f64, expected: f64, relative: f64) {
    assert!(
        (found - expected).abs() <= relative * expected.abs(),
        "{found} instead of {expected}"
    );
}
