//! Tolerances and usual ranges that no source fixes, as named settings with unit, limits and meaning. Purely numerical
//! tolerances (the last digits of a sum) are no settings.

use crate::core::documents::pointer;
use crate::core::documents::problem::Problems;
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;
use std::sync::LazyLock;
use utoipa::ToSchema;

/// A usual range, both ends inside.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct Range {
    /// Lower end.
    pub low: f64,
    /// Upper end, above the lower one.
    pub high: f64,
}

impl Range {
    /// True if the figure is inside.
    pub fn holds(&self, figure: f64) -> bool {
        (self.low..=self.high).contains(&figure)
    }
}

/// What the checks tolerate. A document may leave any of them out.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
#[serde(default, deny_unknown_fields)]
pub struct Settings {
    /// C-04: dry matter that may be unaccounted for, % of what enters.
    pub dry_matter_percent: f64,
    /// C-04: least carbon in crop matter that is burnt at the works, mass % of dry.
    pub least_carbon_percent: f64,
    /// C-16: distance of the carbon closure from 100 that warns, points.
    pub closure_warn_points: f64,
    /// C-16: distance of the carbon closure from 100 that blocks, points.
    pub closure_block_points: f64,
    /// A-10: energy by mass and by volume may differ by this, %.
    pub mass_volume_percent: f64,
    /// A-11: a heating value this far above the lower one counts as the higher one, %.
    pub higher_basis_percent: f64,
    /// A-14: an outside recalculation may differ by this, g CO2e/MJ.
    pub recalculation_g_per_mj: f64,
    /// C-08: yield against the median of the last earlier periods, %.
    pub yield_shift_percent: f64,
    /// C-07: output over the capacity of the same days, %.
    pub capacity_percent: f64,
    /// C-10: delivery over area times yield, %.
    pub delivery_percent: f64,
    /// K-01: harvest that soil models count against what the stage gives, %.
    pub harvest_percent: f64,
    /// C-11: net over typical value below which a reason is asked.
    pub typical_low: f64,
    /// C-11: net over typical value above which a reason is asked.
    pub typical_high: f64,
    /// C-17: most nitrogen given, kg N/ha.
    pub nitrogen_kg_per_ha: f64,
    /// C-17: nitrogen that soil and air give without fertiliser, kg N/ha.
    pub nitrogen_of_soil_kg_per_ha: f64,
    /// C-17: most nitrogen in the harvest per nitrogen given, beside what soil and air give.
    pub nitrogen_removed: f64,
    /// E-08: an own factor may pass the edition's rows of its unit by this, times.
    pub own_factor_times: f64,
    /// C-12: useful heat of a whole works, MJ per litre of pure ethanol.
    pub steam_works_mj_per_l: Range,
    /// C-12: the same of a works on straw, wood or another residue.
    pub steam_residue_works_mj_per_l: Range,
    /// C-12: useful heat of a distillation section, MJ per litre.
    pub steam_distillation_mj_per_l: Range,
    /// C-12: useful heat of a dehydration section, MJ per litre.
    pub steam_dehydration_mj_per_l: Range,
    /// C-09: usual harvest by crop as the soil model names it, t/ha wet.
    pub usual_yield_t_per_ha: BTreeMap<String, Range>,
}

/// Usual harvests, t/ha wet: own, from general knowledge of national means and good fields; a region's own statistics
/// belong here in their place.
const YIELDS: [(&str, f64, f64); 19] = [
    ("wheat", 1.0, 12.0),
    ("winter_wheat", 1.5, 12.0),
    ("spring_wheat", 1.0, 9.0),
    ("barley", 1.0, 11.0),
    ("oats", 1.0, 9.0),
    ("rye", 1.0, 9.0),
    ("triticale", 1.5, 10.0),
    ("maize", 1.5, 16.0),
    ("sorghum", 0.7, 10.0),
    ("millet", 0.5, 5.0),
    ("rice", 1.5, 11.0),
    ("rapeseed", 1.0, 5.5),
    ("sunflower", 0.8, 4.5),
    ("soya", 0.8, 5.0),
    ("potato", 12.0, 70.0),
    ("cassava", 5.0, 45.0),
    ("sugar_beet", 30.0, 110.0),
    ("sugar_cane", 35.0, 130.0),
    ("other_grain", 0.7, 12.0),
];

impl Default for Settings {
    fn default() -> Settings {
        Settings {
            dry_matter_percent: 5.0,
            least_carbon_percent: 40.0,
            closure_warn_points: 1.0,
            closure_block_points: 5.0,
            mass_volume_percent: 2.5,
            higher_basis_percent: 5.0,
            recalculation_g_per_mj: 0.005,
            yield_shift_percent: 5.0,
            capacity_percent: 110.0,
            delivery_percent: 105.0,
            harvest_percent: 5.0,
            typical_low: 0.7,
            typical_high: 1.3,
            nitrogen_kg_per_ha: 350.0,
            nitrogen_of_soil_kg_per_ha: 30.0,
            nitrogen_removed: 1.5,
            own_factor_times: 2.0,
            steam_works_mj_per_l: Range { low: 3.0, high: 14.0 },
            steam_residue_works_mj_per_l: Range { low: 6.0, high: 30.0 },
            steam_distillation_mj_per_l: Range { low: 1.0, high: 8.0 },
            steam_dehydration_mj_per_l: Range { low: 0.1, high: 4.0 },
            usual_yield_t_per_ha: YIELDS
                .into_iter()
                .map(|(crop, low, high)| (crop.to_owned(), Range { low, high }))
                .collect(),
        }
    }
}

static STANDARD: LazyLock<Settings> = LazyLock::new(Settings::default);

/// One setting as forms and help show it.
pub struct Setting {
    /// Name in documents; a range is two settings, `name.low` and `name.high`.
    pub name: &'static str,
    /// Id of the check that uses it.
    pub check: &'static str,
    /// Unit; empty for a plain ratio.
    pub unit: &'static str,
    /// Least and greatest figure it may have.
    pub limits: (f64, f64),
    /// What it means.
    pub meaning: &'static str,
    /// Reads it.
    pub value: fn(&Settings) -> f64,
}

macro_rules! settings {
    ($($name:literal $check:literal $unit:literal $low:literal $high:literal $($field:ident).+ : $meaning:literal;)*) => {
        &[$(Setting {
            name: $name,
            check: $check,
            unit: $unit,
            limits: ($low, $high),
            meaning: $meaning,
            value: |settings| settings.$($field).+,
        }),*]
    };
}

/// Every single setting. Defaults are those of [`Settings::default`]; all are ours, no source fixes them.
pub const SETTINGS: &[Setting] = settings! {
    "dry_matter_percent" "C-04" "percent" 0.1 50.0 dry_matter_percent: "dry matter that may be unaccounted for, of what enters the works";
    "least_carbon_percent" "C-04" "percent" 10.0 100.0 least_carbon_percent: "least carbon in crop matter burnt at the works, of dry";
    "closure_warn_points" "C-16" "points" 0.1 50.0 closure_warn_points: "distance of the carbon closure from 100 that warns";
    "closure_block_points" "C-16" "points" 0.1 50.0 closure_block_points: "distance of the carbon closure from 100 that blocks";
    "mass_volume_percent" "A-10" "percent" 0.1 20.0 mass_volume_percent: "energy by mass and by volume may differ by this; 27 MJ/kg and 21 MJ/l are rounded";
    "higher_basis_percent" "A-11" "percent" 1.0 10.0 higher_basis_percent: "a heating value this far above the lower one counts as the higher one; ethanol's differ by 11 %";
    "recalculation_g_per_mj" "A-14" "g CO2e/MJ" 0.0 1.0 recalculation_g_per_mj: "an outside recalculation may differ by this";
    "yield_shift_percent" "C-08" "percent" 0.1 50.0 yield_shift_percent: "how far a yield may move from the median of the last four earlier periods";
    "capacity_percent" "C-07" "percent" 100.0 200.0 capacity_percent: "output over the capacity of the same days";
    "delivery_percent" "C-10" "percent" 100.0 200.0 delivery_percent: "delivery over area times yield";
    "harvest_percent" "K-01" "percent" 0.1 50.0 harvest_percent: "how far the harvest of the soil models may be from what the stage gives";
    "typical_low" "C-11" "" 0.0 1.0 typical_low: "net over typical value below which a reason is asked";
    "typical_high" "C-11" "" 1.0 10.0 typical_high: "net over typical value above which a reason is asked";
    "nitrogen_kg_per_ha" "C-17" "kg N/ha" 50.0 1000.0 nitrogen_kg_per_ha: "most nitrogen given, synthetic and organic together";
    "nitrogen_of_soil_kg_per_ha" "C-17" "kg N/ha" 0.0 200.0 nitrogen_of_soil_kg_per_ha: "nitrogen that soil and air give without fertiliser";
    "nitrogen_removed" "C-17" "" 0.5 10.0 nitrogen_removed: "most nitrogen in the harvest per nitrogen given, beside what soil and air give";
    "own_factor_times" "E-08" "" 1.0 100.0 own_factor_times: "an own factor may pass the edition's rows of its unit by so many times";
    "steam_works_mj_per_l.low" "C-12" "MJ/L" 0.0 100.0 steam_works_mj_per_l.low: "least useful heat of a whole works per litre of pure ethanol";
    "steam_works_mj_per_l.high" "C-12" "MJ/L" 0.0 100.0 steam_works_mj_per_l.high: "most useful heat of a whole works per litre of pure ethanol";
    "steam_residue_works_mj_per_l.low" "C-12" "MJ/L" 0.0 100.0 steam_residue_works_mj_per_l.low: "least useful heat of a works on straw, wood or another residue";
    "steam_residue_works_mj_per_l.high" "C-12" "MJ/L" 0.0 100.0 steam_residue_works_mj_per_l.high: "most useful heat of a works on straw, wood or another residue";
    "steam_distillation_mj_per_l.low" "C-12" "MJ/L" 0.0 100.0 steam_distillation_mj_per_l.low: "least useful heat of a distillation section";
    "steam_distillation_mj_per_l.high" "C-12" "MJ/L" 0.0 100.0 steam_distillation_mj_per_l.high: "most useful heat of a distillation section";
    "steam_dehydration_mj_per_l.low" "C-12" "MJ/L" 0.0 100.0 steam_dehydration_mj_per_l.low: "least useful heat of a dehydration section";
    "steam_dehydration_mj_per_l.high" "C-12" "MJ/L" 0.0 100.0 steam_dehydration_mj_per_l.high: "most useful heat of a dehydration section";
};

/// Least and greatest usual harvest that may be set, t/ha.
const YIELD_LIMITS: (f64, f64) = (0.0, 500.0);

impl Settings {
    /// The settings in force where an organisation has none of its own.
    pub fn standard() -> &'static Settings {
        &STANDARD
    }

    /// Checks every setting against its limits, and that each range has its lower end below its upper one.
    ///
    /// # Errors
    /// Everything that is wrong, each with JSON pointer and remedy.
    pub fn check(&self) -> Result<(), Problems> {
        let mut problems = Problems::default();
        for setting in SETTINGS {
            let pointer = format!("/{}", setting.name.replace('.', "/"));
            within(
                (setting.value)(self),
                setting.limits,
                &pointer,
                setting.unit,
                &mut problems,
            );
        }
        let mut ranges: Vec<(String, Range)> = [
            ("steam_works_mj_per_l", self.steam_works_mj_per_l),
            ("steam_residue_works_mj_per_l", self.steam_residue_works_mj_per_l),
            ("steam_distillation_mj_per_l", self.steam_distillation_mj_per_l),
            ("steam_dehydration_mj_per_l", self.steam_dehydration_mj_per_l),
        ]
        .map(|(name, range)| (format!("/{name}"), range))
        .into();
        for (crop, range) in &self.usual_yield_t_per_ha {
            let pointer = format!("/usual_yield_t_per_ha/{}", pointer::step(crop));
            for (end, figure) in [("low", range.low), ("high", range.high)] {
                within(
                    figure,
                    YIELD_LIMITS,
                    &format!("{pointer}/{end}"),
                    "t/ha",
                    &mut problems,
                );
            }
            ranges.push((pointer, *range));
        }
        ranges.push((
            "/closure_block_points".to_owned(),
            Range {
                low: self.closure_warn_points,
                high: self.closure_block_points,
            },
        ));
        for (pointer, range) in ranges.into_iter().filter(|(_, range)| range.low >= range.high) {
            let detail = format!("{} is not below {}.", range.low, range.high);
            problems.add(pointer, detail, "Give a lower end below the upper one.");
        }
        match problems.is_empty() {
            true => Ok(()),
            false => Err(problems),
        }
    }
}

fn within(figure: f64, (low, high): (f64, f64), pointer: &str, unit: &str, problems: &mut Problems) {
    if !(low..=high).contains(&figure) {
        let unit = if unit.is_empty() {
            String::new()
        } else {
            format!(" {unit}")
        };
        let detail = format!("{figure}{unit} is outside {low} to {high}.");
        problems.add(pointer, detail, format!("Give a figure from {low} to {high}."));
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_defaults_are_good_and_round_trip() {
        let standard = Settings::standard();
        assert!(standard.check().is_ok());
        let text = serde_json::to_string(standard).unwrap();
        assert_eq!(&serde_json::from_str::<Settings>(&text).unwrap(), standard);
        assert_eq!(&serde_json::from_str::<Settings>("{}").unwrap(), standard);
        assert!(serde_json::from_str::<Settings>(r#"{ "typical_lo": 1 }"#).is_err());
    }

    #[test]
    fn every_setting_has_its_row() {
        let value = serde_json::to_value(Settings::default()).unwrap();
        for (name, part) in value.as_object().unwrap() {
            let names: Vec<String> = match part.as_object() {
                _ if name == "usual_yield_t_per_ha" => continue,
                Some(_) => ["low", "high"].map(|end| format!("{name}.{end}")).into(),
                None => vec![name.clone()],
            };
            for name in names {
                let row = SETTINGS
                    .iter()
                    .find(|row| row.name == name)
                    .unwrap_or_else(|| panic!("{name}"));
                let shown = value.pointer(&format!("/{}", name.replace('.', "/"))).unwrap();
                assert_eq!(Some((row.value)(&Settings::default())), shown.as_f64(), "{name}");
            }
        }
    }

    #[test]
    fn wrong_settings_are_all_named() {
        let mut wrong = Settings {
            typical_low: f64::NAN,
            closure_warn_points: 6.0,
            ..Settings::default()
        };
        wrong.steam_works_mj_per_l = Range { low: 9.0, high: 2.0 };
        wrong
            .usual_yield_t_per_ha
            .insert("a/b".to_owned(), Range { low: -1.0, high: 3.0 });
        let problems = wrong.check().unwrap_err();
        let pointers: Vec<&str> = problems.list().iter().map(|p| p.pointer.as_str()).collect();
        assert_eq!(
            pointers,
            [
                "/typical_low",
                "/usual_yield_t_per_ha/a~1b/low",
                "/steam_works_mj_per_l",
                "/closure_block_points"
            ]
        );
    }
}
