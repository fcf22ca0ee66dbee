//! Group A: the figures redo themselves. Each function takes plain figures, so that a wrong one can be shown to it.

use super::settings::Settings;
use super::{Subject, finding};
use crate::core::documents::assessment::{Assessment, Finding, Severity};
use crate::core::domain::RuleSet;
use crate::core::units::rounding::{decimals_against, plain, plain_fixed, round_half_away};

/// Relative tolerance of sums (own).
const SUM: f64 = 1e-9;
/// Relative tolerance of a consignment's energy (own).
const ENERGY: f64 = 1e-6;

/// Runs the group.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    let assessment = subject.assessment;
    let rules = subject.resolved.rules;
    findings.extend(net_is_sum(assessment));
    findings.extend(saving(assessment));
    findings.extend(comparator(assessment, rules));
    findings.extend(threshold_unrounded(assessment));
    findings.extend(shown_verdict(assessment));
    findings.extend(shown_stages(assessment));
    findings.extend(gas_weights(assessment, rules));
    let net = assessment.net.g_co2e_per_mj;
    findings.extend(shown_rounding("net", &plain_fixed(net, 2), net, 2));
    bought(subject, findings);
}

fn near(a: f64, b: f64, relative: f64) -> bool {
    (a - b).abs() <= relative * a.abs().max(b.abs()).max(1.0)
}

/// the net equals the sum of its terms, and of its stages.
pub fn net_is_sum(assessment: &Assessment) -> Vec<Finding> {
    let net = assessment.net.g_co2e_per_mj;
    let stages: f64 = assessment.stages.iter().map(|stage| stage.g_co2e_per_mj).sum();
    [
        ("terms", assessment.terms_g_co2e_per_mj.sum()),
        ("stages", stages),
    ]
    .into_iter()
    .filter(|(_, sum)| !near(net, *sum, SUM))
    .map(|(parts, sum)| {
        let name = &assessment.pathway_name;
        let message = format!(
            "The net of {name} is {} g/MJ, but its {parts} add to {}.",
            plain(net),
            plain(sum)
        );
        finding(
            "A-01",
            Severity::Block,
            "",
            parts,
            message,
            "Work the assessment out again before issuing.",
        )
    })
    .collect()
}

/// the saving equals comparator minus net over comparator.
pub fn saving(assessment: &Assessment) -> Option<Finding> {
    let saving = assessment.saving_percent?;
    let (net, comparator) = (assessment.net.g_co2e_per_mj, assessment.comparator_g_co2e_per_mj);
    let expected = 100.0 * (comparator - net) / comparator;
    (!near(saving / 100.0, expected / 100.0, SUM)).then(|| {
        let message = format!(
            "The saving of {} is given as {} %; {} against {} g/MJ gives {} %.",
            assessment.pathway_name,
            plain(saving),
            plain(net),
            plain(comparator),
            plain(expected)
        );
        finding(
            "A-02",
            Severity::Block,
            "",
            "saving_percent",
            message,
            "Work the assessment out again.",
        )
    })
}

/// the comparator belongs to the rule set.
pub fn comparator(assessment: &Assessment, rules: &RuleSet) -> Option<Finding> {
    let (found, expected) = (assessment.comparator_g_co2e_per_mj, rules.comparator.value);
    (found != expected).then(|| {
        let message = format!(
            "{} is compared with {} g/MJ; rule set {} has {}.",
            assessment.pathway_name,
            plain(found),
            rules.id,
            plain(expected)
        );
        let remedy = "Choose the comparator of the rule set.";
        finding(
            "A-03",
            Severity::Block,
            "",
            "comparator_g_co2e_per_mj",
            message,
            remedy,
        )
    })
}

/// the threshold is missed, or was called met on a rounded saving.
pub fn threshold_unrounded(assessment: &Assessment) -> Vec<Finding> {
    let Some(saving) = assessment.saving_percent else {
        return Vec::new();
    };
    let [threshold] = &assessment.thresholds[..] else {
        return Vec::new();
    };
    if saving >= threshold.percent {
        return Vec::new();
    }
    let message = format!(
        "{} saves {} %, below the required {} %; rounding does not help.",
        assessment.pathway_name,
        plain_fixed(saving, decimals_against(saving, threshold.percent, 2)),
        plain(threshold.percent)
    );
    vec![finding(
        "A-04",
        Severity::Block,
        "",
        "thresholds",
        message,
        "Look at the stages that weigh most, and at checks that doubt their figures.",
    )]
}

/// shown with one decimal the saving would read the other verdict.
pub fn shown_verdict(assessment: &Assessment) -> Option<Finding> {
    let saving = assessment.saving_percent?;
    let [threshold] = &assessment.thresholds[..] else {
        return None;
    };
    let shown = round_half_away(saving, 1);
    ((shown >= threshold.percent) != (saving >= threshold.percent)).then(|| {
        let message = format!(
            "With 1 decimal the {} % of {} would read {} %, the wrong verdict.",
            plain(saving),
            assessment.pathway_name,
            plain_fixed(saving, 1)
        );
        finding(
            "A-05",
            Severity::Info,
            "",
            "saving_percent",
            message,
            "More decimals are shown: quote them too.",
        )
    })
}

/// a shown figure is the full one rounded, halves away from zero.
pub fn shown_rounding(field: &str, shown: &str, full: f64, decimals: u8) -> Option<Finding> {
    let expected = plain_fixed(full, decimals);
    (shown != expected).then(|| {
        let message = format!(
            "{field} is shown as {shown}, but {} rounds to {expected}.",
            plain(full)
        );
        finding(
            "A-06",
            Severity::Warn,
            "",
            field,
            message,
            "Correct the shown figure.",
        )
    })
}

/// the stages as shown miss the net as shown.
pub fn shown_stages(assessment: &Assessment) -> Option<Finding> {
    let shown: f64 = assessment
        .stages
        .iter()
        .map(|stage| round_half_away(stage.g_co2e_per_mj, 2))
        .sum();
    let (sum, net) = (
        plain_fixed(shown, 2),
        plain_fixed(assessment.net.g_co2e_per_mj, 2),
    );
    (sum != net).then(|| {
        let name = &assessment.pathway_name;
        let message =
            format!("The stages of {name} shown add to {sum}; the difference to {net} is rounding.");
        let remedy = "Take the full figures from the workings where it matters.";
        finding("A-07", Severity::Info, "", "stages", message, remedy)
    })
}

/// the energy of a consignment by the heating value of the rule set.
pub fn consignment_energy(name: &str, found: f64, expected: f64, rules: &RuleSet) -> Option<Finding> {
    (!near(found, expected, ENERGY)).then(|| {
        let message = format!(
            "The energy of consignment {name} should be {} MJ under {}, not {} MJ.",
            plain(expected),
            rules.id,
            plain(found)
        );
        let remedy = "Work it out with the heating value of the rule set.";
        finding("A-09", Severity::Block, "", "stated.covers", message, remedy)
    })
}

/// the energy of a consignment by mass and by volume differ by more than the setting.
pub fn mass_and_volume(name: &str, by_mass: f64, by_volume: f64, settings: &Settings) -> Option<Finding> {
    ((by_mass - by_volume).abs() > settings.mass_volume_percent / 100.0 * by_volume.abs()).then(|| {
        let message = format!(
            "By mass consignment {name} holds {} MJ, by volume {} MJ; 27 MJ/kg and 21 MJ/l are rounded and imply 0.778 kg/l.",
            plain(by_mass),
            plain(by_volume)
        );
        finding("A-10", Severity::Warn, "", "stated.covers", message, "State which one was used.")
    })
}

/// one set of gas weights, the rule set's.
pub fn gas_weights(assessment: &Assessment, rules: &RuleSet) -> Option<Finding> {
    (assessment.gwp_set != rules.gwp_set).then(|| {
        let message = format!(
            "{} mixes the gas weights of {} and {}.",
            assessment.pathway_name, assessment.gwp_set, rules.gwp_set
        );
        finding(
            "A-13",
            Severity::Block,
            "",
            "gwp_set",
            message,
            &format!("Choose the set of {}.", rules.id),
        )
    })
}

/// The energy that a supplier's proof covers, against the fuel it came with.
fn bought(subject: &Subject, findings: &mut Vec<Finding>) {
    use crate::core::units::{Dimension, Quantity};
    let rules = subject.resolved.rules;
    for stage in &subject.resolved.stages {
        let Some(stated) = &stage.document.stated else {
            continue;
        };
        let Some(covers) = &stated.covers else { continue };
        let Ok(covers) = Quantity::read(covers.value, &covers.unit) else {
            continue;
        };
        let flow = &stage.products[0].flow;
        let per_kg = rules.consignment_lhv_mass.as_ref().map(|lhv| lhv.value);
        let per_litre = rules.consignment_lhv_volume.as_ref().map(|lhv| lhv.value);
        let by_mass = flow.pure_kg.zip(per_kg).map(|(pure, lhv)| pure * lhv);
        let by_volume = per_litre
            .filter(|_| flow.dimension == Dimension::VOLUME)
            .map(|lhv| flow.base * 1000.0 * lhv);
        let name = stated.proof.as_deref().unwrap_or(&stage.document.key);
        let expected = by_volume.or(by_mass);
        if let (true, Some(expected)) = (covers.dimension == Dimension::ENERGY, expected) {
            findings.extend(consignment_energy(name, covers.value / 1e6, expected, rules));
        }
        if let (Dimension::MASS, Some(by_volume), Some(per_kg)) = (covers.dimension, by_volume, per_kg) {
            findings.extend(mass_and_volume(
                name,
                covers.value * per_kg,
                by_volume,
                subject.settings,
            ));
        }
    }
}
