//! The answer in words: the net, the saving, the required saving, and what weakens it. Decimals are added until the
//! verdict cannot look wrong; comparing is done unrounded by the engine, never here.

use crate::core::documents::assessment::{Assessment, Severity, ThresholdResult};
use crate::core::domain::RuleSet;
use crate::core::units::rounding::{decimals_against, show};

/// The answer of an assessment.
#[derive(Clone, Debug, PartialEq)]
pub struct Verdict {
    /// Net, g CO2e/MJ.
    pub net: String,
    /// How far the figure reaches, where that is not the wheel.
    pub basis: Option<String>,
    /// Saving in percent without its sign; none where no saving is printed.
    pub saving: Option<String>,
    /// `below` or `above`.
    pub side: &'static str,
    /// What the fuel is compared with.
    pub comparator: String,
    /// Required savings, met or not.
    pub required: Vec<Required>,
    /// Why the required saving is not known, where it is not.
    pub open: bool,
}

/// One required saving.
#[derive(Clone, Debug, PartialEq)]
pub struct Required {
    /// `meets` or `misses`; `needs` where it is not known which one applies.
    pub word: &'static str,
    /// The saving, %.
    pub percent: String,
    /// Why it applies.
    pub because: String,
}

impl Verdict {
    /// The answer of an assessment under its rule set (none if the rule set is not known here any more).
    pub fn of(assessment: &Assessment, rules: Option<&RuleSet>) -> Verdict {
        let basis = (assessment.basis != "to the wheel").then(|| assessment.basis.clone());
        let comparator = assessment.comparator_g_co2e_per_mj;
        let net = assessment.net.g_co2e_per_mj;
        Verdict {
            basis,
            ..Verdict::of_figures(
                net,
                assessment.saving_percent,
                comparator,
                &assessment.thresholds,
                rules,
            )
        }
    }

    /// The answer from its figures alone, as lists keep them.
    pub fn of_figures(
        net: f64,
        saving: Option<f64>,
        comparator: f64,
        thresholds: &[ThresholdResult],
        rules: Option<&RuleSet>,
    ) -> Verdict {
        let limits = thresholds.iter().map(|t| t.percent);
        let saving_decimals = saving.map_or(1, |saving| {
            limits
                .clone()
                .map(|limit| decimals_against(saving, limit, 1))
                .max()
                .unwrap_or(1)
        });
        let most = |percent: f64| comparator * (100.0 - percent) / 100.0;
        let net_decimals = limits
            .map(|limit| decimals_against(net, most(limit), 1))
            .max()
            .unwrap_or(1);
        let open = thresholds.len() > 1 && thresholds.iter().all(|t| !t.met);
        Verdict {
            net: show(net, net_decimals),
            basis: None,
            saving: saving.map(|saving| show(saving.abs(), saving_decimals)),
            side: if saving.is_some_and(|saving| saving < 0.0) {
                "above"
            } else {
                "below"
            },
            comparator: rules.map_or_else(|| "fossil baseline".to_owned(), |r| r.comparator_word.clone()),
            required: thresholds
                .iter()
                .map(|t| Required {
                    word: if open {
                        "needs"
                    } else if t.met {
                        "meets"
                    } else {
                        "misses"
                    },
                    percent: percent_words(t.percent),
                    because: t.because.clone(),
                })
                .collect(),
            open,
        }
    }

    /// What the fuel is compared with, as a sentence takes it: the comparator, but petrol.
    pub fn against(&self) -> String {
        if self.comparator.contains(' ') {
            format!("the {}", self.comparator)
        } else {
            self.comparator.clone()
        }
    }

    /// The answer as plain text, for titles and lists.
    pub fn text(&self) -> String {
        let mut out = format!("{} g CO2e/MJ", self.net);
        if let Some(basis) = &self.basis {
            out.push_str(&format!(" {basis}"));
        }
        if let Some(saving) = &self.saving {
            out.push_str(&format!(", {saving} % {} {}", self.side, self.comparator));
        }
        for required in self.required.iter().filter(|_| !self.open) {
            out.push_str(&format!(", {} {} %", required.word, required.percent));
        }
        out
    }
}

/// 60, 64.5: the figure without needless decimals.
pub fn percent_words(percent: f64) -> String {
    crate::core::units::rounding::show_all(percent)
}

/// How many findings of each severity.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Checks {
    /// Block a statement.
    pub blocks: usize,
    /// Need a written reason.
    pub warns: usize,
    /// For information.
    pub informs: usize,
}

impl Checks {
    /// Counted over an assessment.
    pub fn of(assessment: &Assessment) -> Checks {
        let count = |severity| {
            assessment
                .findings
                .iter()
                .filter(|f| f.severity == severity)
                .count()
        };
        Checks {
            blocks: count(Severity::Block),
            warns: count(Severity::Warn),
            informs: count(Severity::Info),
        }
    }

    /// The class of its mark: the worst there is.
    pub fn class(&self) -> &'static str {
        match self {
            Checks { blocks: 1.., .. } => "blocks",
            Checks { warns: 1.., .. } => "warns",
            _ => "meets",
        }
    }

    /// A few words for a list.
    pub fn words(&self) -> String {
        match (self.blocks, self.warns) {
            (0, 0) => "clear".to_owned(),
            (0, w) => format!("{w} to explain"),
            (b, 0) => format!("{b} {}", if b == 1 { "check blocks" } else { "checks block" }),
            (b, w) => format!(
                "{b} {}, {w} to explain",
                if b == 1 { "check blocks" } else { "checks block" }
            ),
        }
    }
}

/// The class of a severity: its mark and colour.
pub fn severity_class(severity: Severity) -> &'static str {
    match severity {
        Severity::Block => "blocks",
        Severity::Warn => "warns",
        Severity::Info => "informs",
    }
}

/// A severity in words.
pub fn severity_words(severity: Severity) -> &'static str {
    match severity {
        Severity::Block => "Blocks a statement",
        Severity::Warn => "Needs a reason",
        Severity::Info => "For information",
    }
}

/// Says so where shown parts miss the shown sum, as a sentence without its full stop.
pub fn rounding_note(what: &str, parts: &[f64], sum: f64, decimals: u8) -> Option<String> {
    use crate::core::units::rounding::round_half_away;
    let shown: f64 = parts.iter().map(|part| round_half_away(*part, decimals)).sum();
    let shown = round_half_away(shown, decimals);
    let total = round_half_away(sum, decimals);
    (shown != total).then(|| {
        format!(
            "{what} shown add to {}; the difference to {} is rounding.",
            show(shown, decimals),
            show(total, decimals)
        )
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::pathways::pages::samples;

    fn verdict(net: f64, percent: f64) -> String {
        let mut assessment = samples::assessment();
        let saving = (94.0 - net) / 94.0 * 100.0;
        assessment.net.g_co2e_per_mj = net;
        assessment.saving_percent = Some(saving);
        assessment.thresholds[0].percent = percent;
        assessment.thresholds[0].met = saving >= percent;
        Verdict::of(&assessment, samples::book().rule_sets.get("eu-2018-2001")).text()
    }

    #[test]
    fn decimals_are_added_until_the_verdict_cannot_look_wrong() {
        assert_eq!(
            verdict(31.41, 60.0),
            "31.4 g CO2e/MJ, 66.6 % below fossil fuel comparator, meets 60 %"
        );
        // 94 x 0.35 = 32.9 is the most that 65 % allows.
        assert_eq!(
            verdict(32.93, 65.0),
            "32.93 g CO2e/MJ, 64.97 % below fossil fuel comparator, misses 65 %"
        );
        assert_eq!(
            verdict(32.9, 65.0),
            "32.9 g CO2e/MJ, 65.0 % below fossil fuel comparator, meets 65 %"
        );
        assert_eq!(
            verdict(100.0, 60.0),
            "100.0 g CO2e/MJ, 6.4 % above fossil fuel comparator, misses 60 %"
        );
    }

    #[test]
    fn says_when_shown_parts_miss_the_sum() {
        assert_eq!(
            rounding_note("The terms", &[0.004, 0.004], 0.008, 2).as_deref(),
            Some("The terms shown add to 0.00; the difference to 0.01 is rounding.")
        );
        assert_eq!(rounding_note("The terms", &[1.0, 2.0], 3.0, 2), None);
    }
}
