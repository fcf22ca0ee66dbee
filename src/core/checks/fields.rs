//! Group C: what a field stage says of its harvest and its nitrogen, from the parameters of its soil models.

use super::parameters::{figure, models, word};
use super::settings::{Range, Settings};
use super::{Subject, finding};
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::input::{Input, ModelUse};
use crate::core::documents::pathway::Stage;
use crate::core::engine::resolved::Stage as Planned;
use crate::core::units::rounding::{plain, plain_fixed};

/// Rounding that a sum of doubles may bring.
const SUM: f64 = 1e-9;

/// Runs the checks.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    for stage in &subject.resolved.stages {
        let output = &stage.products[0].flow;
        // By dry matter where the output has a moisture, else wet.
        let dry = output.moisture.is_some();
        let mut harvested = Some(0.0);
        let mut field = None;
        for input in &stage.document.inputs {
            let growers = growers(input, stage);
            if growers.is_empty() {
                continue;
            }
            findings.extend(usual_yield(stage.document, input, &growers, subject.settings));
            let content = nitrogen_content(subject, stage);
            findings.extend(nitrogen(
                stage.document,
                input,
                &growers,
                content,
                subject.settings,
            ));
            let here: Option<f64> = growers.iter().map(|grower| grower.stated_kg(dry)).sum();
            harvested = harvested.zip(here).map(|(sum, kg)| sum + kg);
            field = Some(input);
        }
        let delivered = if dry { output.dry_kg() } else { output.wet_kg };
        if let (Some(input), Some(most), Some(delivered)) = (field, harvested, delivered) {
            let over = delivery(stage.document, input, delivered, most, subject.settings);
            let apart = || same_harvest(stage.document, delivered, most, subject.settings);
            findings.extend(over.or_else(apart));
        }
    }
}

/// What a soil model says of one grower, or of all together, per recipe.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Grower {
    /// Crop as the soil model names it.
    pub crop: String,
    /// Area, ha.
    pub area_ha: f64,
    /// Harvest, t wet; the stage's output where the model states none.
    pub harvest_t: Option<f64>,
    /// True if the model states the harvest itself.
    pub stated: bool,
    /// Water in the harvest, fraction.
    pub moisture: Option<f64>,
    /// Synthetic and organic nitrogen, kg.
    pub nitrogen_kg: f64,
}

impl Grower {
    /// Dry harvest, kg; none where its water is not known.
    fn dry_kg(&self) -> Option<f64> {
        Some(1000.0 * self.harvest_t? * (1.0 - self.moisture?))
    }

    /// Harvest as the model states it, dry or wet, kg.
    fn stated_kg(&self, dry: bool) -> Option<f64> {
        match (self.stated, dry) {
            (false, _) => None,
            (true, true) => self.dry_kg(),
            (true, false) => Some(1000.0 * self.harvest_t?),
        }
    }
}

fn growers(input: &Input, stage: &Planned) -> Vec<Grower> {
    let soils = models(input).iter().filter(|model| model.kind == "soil_n2o");
    let alone = soils.clone().count() == 1;
    soils.filter_map(|model| grower(model, stage, alone)).collect()
}

fn grower(model: &ModelUse, stage: &Planned, alone: bool) -> Option<Grower> {
    let output = &stage.products[0].flow;
    let own = figure(model, "yield_t", "t");
    let of_output = output.wet_kg.filter(|_| alone).map(|kg| kg / 1000.0);
    let moisture = figure(model, "moisture_percent", "percent").map(|percent| percent / 100.0);
    Some(Grower {
        crop: word(model, "crop")?.to_owned(),
        area_ha: figure(model, "area_ha", "ha").filter(|area| *area > 0.0)?,
        harvest_t: own.or(of_output),
        stated: own.is_some(),
        moisture: moisture.or(output.moisture),
        nitrogen_kg: ["synthetic_n_kg", "organic_n_kg"]
            .into_iter()
            .filter_map(|name| figure(model, name, "kg N"))
            .sum(),
    })
}

/// Nitrogen in the dry harvest, fraction: the lower end of the library's figure, in the grower's favour.
fn nitrogen_content(subject: &Subject, stage: &Planned) -> Option<f64> {
    let material = subject.book.materials.get(&stage.products[0].flow.material)?;
    let property = material.properties.get("nitrogen_percent_dry")?;
    Some(property.lower.unwrap_or(property.figure.value) / 100.0)
}

/// C-09: the field yield is within the usual range of its crop.
pub fn usual_yield(stage: &Stage, input: &Input, growers: &[Grower], settings: &Settings) -> Option<Finding> {
    let mut odd = growers.iter().filter_map(|grower| {
        let range = settings.usual_yield_t_per_ha.get(&grower.crop)?;
        let per_ha = grower.harvest_t? / grower.area_ha;
        (!range.holds(per_ha)).then_some((grower, per_ha, *range))
    });
    let (grower, per_ha, Range { low, high }) = odd.next()?;
    let more = odd.count();
    let message = format!(
        "{} reports {} t/ha of {}; the usual range is {} to {}{}.",
        stage.title(),
        plain_fixed(per_ha, 2),
        grower.crop.replace('_', " "),
        plain(low),
        plain(high),
        if more > 0 {
            format!(" ({more} more are outside theirs)")
        } else {
            String::new()
        }
    );
    let remedy = "Check area and tonnes, or give the reason.";
    let field = format!("inputs.{}.yield_t", input.key);
    Some(finding(
        "C-09",
        Severity::Warn,
        &stage.key,
        &field,
        message,
        remedy,
    ))
}

/// C-10: area times yield covers what the stage delivers; both in kg per recipe, dry or both wet.
pub fn delivery(
    stage: &Stage,
    input: &Input,
    delivered: f64,
    most: f64,
    settings: &Settings,
) -> Option<Finding> {
    if delivered <= most * settings.delivery_percent / 100.0 * (1.0 + SUM) {
        return None;
    }
    let message = format!(
        "{} delivers {} t, but its area and yield give {} t.",
        stage.title(),
        plain_fixed(delivered / 1000.0, 1),
        plain_fixed(most / 1000.0, 1)
    );
    let remedy =
        "Correct area, yield or tonnes, and give all of them for the same harvest, or leave the rest out.";
    let field = format!("inputs.{}.yield_t", input.key);
    Some(finding(
        "C-10",
        Severity::Block,
        &stage.key,
        &field,
        message,
        remedy,
    ))
}

/// K-01: the harvest that soil models count is what the stage gives; both in kg per recipe, dry or both wet. More than area
/// times yield is C-10's matter; this is the harvest that is counted and not handed on, or a slip in a moisture.
pub fn same_harvest(stage: &Stage, given: f64, counted: f64, settings: &Settings) -> Option<Finding> {
    let apart = (given / counted - 1.0).abs();
    if apart.is_nan() || apart <= settings.harvest_percent / 100.0 * (1.0 + SUM) {
        return None;
    }
    let message = format!(
        "{} gives {} t, and its soil models count a harvest of {} t; within {} % is usual.",
        stage.title(),
        plain_fixed(given / 1000.0, 2),
        plain_fixed(counted / 1000.0, 2),
        plain(settings.harvest_percent)
    );
    let remedy = "Give area, yield, moisture and output of the same harvest, or give the reason.";
    Some(finding(
        "K-01",
        Severity::Warn,
        &stage.key,
        "output",
        message,
        remedy,
    ))
}

/// C-17: the nitrogen given is no more than usual, and the harvest holds no more than it can have taken from it.
pub fn nitrogen(
    stage: &Stage,
    input: &Input,
    growers: &[Grower],
    content: Option<f64>,
    settings: &Settings,
) -> Option<Finding> {
    let rate = |grower: &Grower| grower.nitrogen_kg / grower.area_ha;
    let most = growers.iter().map(rate).fold(0.0, f64::max);
    let area: f64 = growers.iter().map(|grower| grower.area_ha).sum();
    let given = growers.iter().map(|grower| grower.nitrogen_kg).sum::<f64>() / area;
    let dry: Option<f64> = growers.iter().map(Grower::dry_kg).sum();
    let removed = content.zip(dry).map(|(content, dry)| content * dry / area);
    let too_much = most > settings.nitrogen_kg_per_ha;
    let most_removed = settings.nitrogen_of_soil_kg_per_ha + settings.nitrogen_removed * given;
    let too_little = removed.is_some_and(|removed| removed > most_removed);
    if !too_much && !too_little {
        return None;
    }
    let name = stage.title();
    let message = match (too_much, removed) {
        (false, Some(removed)) => format!(
            "{name}: {} kg N/ha is given and the harvest holds at least {} kg N/ha.",
            plain_fixed(given, 1),
            plain_fixed(removed, 1)
        ),
        _ => format!(
            "{name}: {} kg N/ha is given; up to {} is usual.",
            plain_fixed(most, 1),
            plain(settings.nitrogen_kg_per_ha)
        ),
    };
    let remedy = "Check that kg N was entered, not kg of product, or give the reason.";
    let field = format!("inputs.{}.synthetic_n_kg", input.key);
    Some(finding(
        "C-17",
        Severity::Warn,
        &stage.key,
        &field,
        message,
        remedy,
    ))
}

/// Takes off K-01 of a figure where a check of this group says the same with more words.
pub fn drop_repeats(findings: &mut Vec<Finding>) {
    let said: Vec<(String, String)> = findings
        .iter()
        .filter(|f| ["C-09", "C-17"].contains(&f.id.as_str()))
        .map(|f| (f.stage.clone(), f.field.clone()))
        .collect();
    findings.retain(|f| {
        f.id != "K-01"
            || !said
                .iter()
                .any(|(stage, field)| *stage == f.stage && *field == f.field)
    });
}

#[cfg(test)]
mod tests {
    use super::super::tests::stage;
    use super::*;

    fn wheat(area_ha: f64, harvest_t: f64, nitrogen_kg: f64) -> Grower {
        Grower {
            crop: "wheat".to_owned(),
            area_ha,
            harvest_t: Some(harvest_t),
            stated: true,
            moisture: Some(0.14),
            nitrogen_kg,
        }
    }

    #[test]
    fn a_yield_is_usual_for_its_crop() {
        let (stage, settings) = (stage(), Settings::default());
        let check = |growers: &[Grower]| usual_yield(&stage, &stage.inputs[0], growers, &settings);
        assert_eq!(check(&[wheat(2.0, 16.0, 0.0)]), None);
        let found = check(&[wheat(2.0, 16.0, 0.0), wheat(1.0, 14.0, 0.0), wheat(1.0, 0.2, 0.0)]).unwrap();
        assert_eq!(
            (found.id.as_str(), found.field.as_str()),
            ("C-09", "inputs.n2o.yield_t")
        );
        assert!(found.message.contains("14.00 t/ha"));
        assert!(found.message.contains("1 more"));
        let unknown = Grower {
            crop: "nettle".to_owned(),
            ..wheat(1.0, 90.0, 0.0)
        };
        assert_eq!(check(&[unknown]), None);
    }

    #[test]
    fn area_times_yield_covers_the_delivery() {
        let (stage, settings) = (stage(), Settings::default());
        let check = |delivered, most| delivery(&stage, &stage.inputs[0], delivered, most, &settings);
        assert_eq!(check(100.0, 100.0), None);
        assert_eq!(check(105.0, 100.0), None);
        assert_eq!(check(105.1, 100.0).unwrap().severity, Severity::Block);
    }

    #[test]
    fn nitrogen_fits_the_harvest() {
        let (stage, settings) = (stage(), Settings::default());
        let check = |grower| nitrogen(&stage, &stage.inputs[0], &[grower], Some(0.0221), &settings);
        // 8 t/ha at 14 % water hold 152 kg N.
        assert_eq!(check(wheat(1.0, 8.0, 150.0)), None);
        assert_eq!(check(wheat(1.0, 8.0, 82.0)), None);
        assert!(
            check(wheat(1.0, 8.0, 80.0))
                .unwrap()
                .message
                .contains("at least 152")
        );
        assert_eq!(check(wheat(1.0, 8.0, 350.0)), None);
        assert!(
            check(wheat(1.0, 8.0, 351.0))
                .unwrap()
                .message
                .contains("up to 350")
        );
        let unknown = Grower {
            moisture: None,
            ..wheat(1.0, 8.0, 0.0)
        };
        assert_eq!(check(unknown), None);
    }

    #[test]
    fn k_01_gives_way_to_the_check_that_says_more() {
        let note = |id: &str, field: &str| finding(id, Severity::Warn, "field", field, String::new(), "");
        let mut findings = vec![
            note("K-01", "inputs.n2o.synthetic_n_kg"),
            note("K-01", "inputs.n2o.organic_n_kg"),
            note("C-17", "inputs.n2o.synthetic_n_kg"),
        ];
        drop_repeats(&mut findings);
        let left: Vec<&str> = findings.iter().map(|f| f.field.as_str()).collect();
        assert_eq!(left, ["inputs.n2o.organic_n_kg", "inputs.n2o.synthetic_n_kg"]);
    }

    #[test]
    fn soil_models_count_the_harvest_that_the_stage_gives() {
        let (stage, settings) = (stage(), Settings::default());
        assert_eq!(same_harvest(&stage, 8_200.0, 8_200.0, &settings), None);
        assert_eq!(same_harvest(&stage, 7_800.0, 8_200.0, &settings), None);
        let found = same_harvest(&stage, 6_000.0, 8_200.0, &settings).unwrap();
        assert_eq!((found.id.as_str(), found.field.as_str()), ("K-01", "output"));
        assert!(
            found.message.contains("6.00 t") && found.message.contains("8.20 t"),
            "{}",
            found.message
        );
    }
}
