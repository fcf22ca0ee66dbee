//! Every check the program runs: id, what it asks, how much it matters, where it runs. One table.

use crate::core::documents::assessment::Severity;

/// Where a check runs.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Runs {
    /// On every assessment.
    OnAssessment,
    /// While the figures are read: a finding of a model or of the chain.
    OnFigures,
    /// At entry: the document is refused with a problem.
    AtEntry,
}

/// One check.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Check {
    /// Id of the audit checklist.
    pub id: &'static str,
    /// What it asks.
    pub asks: &'static str,
    /// The most it can matter.
    pub severity: Severity,
    /// Where it runs.
    pub runs: Runs,
    /// Legal or published basis.
    pub source: &'static str,
}

const fn check(
    id: &'static str,
    asks: &'static str,
    severity: Severity,
    runs: Runs,
    source: &'static str,
) -> Check {
    Check {
        id,
        asks,
        severity,
        runs,
        source,
    }
}

use Runs::{AtEntry, OnAssessment, OnFigures};
use Severity::{Block, Info, Warn};

/// The checks, by id.
pub const CHECKS: &[Check] = &[
    check(
        "A-01",
        "Net equals the sum of its terms, and of its stages",
        Block,
        OnAssessment,
        "Dir. (EU) 2018/2001 Annex V C pt 1(a); own tolerance",
    ),
    check(
        "A-02",
        "Saving equals comparator minus net over comparator",
        Block,
        OnAssessment,
        "Dir. (EU) 2018/2001 Annex V C pt 3(a)",
    ),
    check(
        "A-03",
        "Comparator belongs to the rule set",
        Block,
        OnAssessment,
        "Dir. (EU) 2018/2001 Annex V C pt 19",
    ),
    check(
        "A-04",
        "Threshold test uses the unrounded saving",
        Block,
        OnAssessment,
        "own rule; the laws read give no rounding allowance",
    ),
    check(
        "A-05",
        "Shown figure must not flip the verdict",
        Info,
        OnAssessment,
        "own",
    ),
    check(
        "A-06",
        "Rounding rule stated and kept",
        Warn,
        OnAssessment,
        "own; Dir. (EU) 2018/2001 Annex V and IR (EU) 2022/996: no rule found",
    ),
    check(
        "A-07",
        "Shown stages need a note if they do not add up",
        Info,
        OnAssessment,
        "own",
    ),
    check(
        "A-08",
        "Units agree on both sides of every product",
        Block,
        AtEntry,
        "own",
    ),
    check(
        "A-09",
        "Energy of the consignment from the heating value of the rule set",
        Block,
        OnAssessment,
        "IR (EU) 2022/996 Annex I pt 2(f); Dir. (EU) 2018/2001 Annex III",
    ),
    check(
        "A-10",
        "Mass route and volume route are not mixed",
        Warn,
        OnAssessment,
        "Dir. (EU) 2018/2001 Annex III (27 and 21); computed",
    ),
    check(
        "A-11",
        "Heating-value basis does not change: gross is refused or converted",
        Block,
        AtEntry,
        "Dir. (EU) 2018/2001 Annex V C pt 2(a)",
    ),
    check(
        "A-12",
        "Volume carries its temperature",
        Block,
        AtEntry,
        "SOR/2022-140 (CA) s.1 and s.161(3); 40 CFR 80.1426(f)(8)",
    ),
    check(
        "A-13",
        "Gas weights come from one named set",
        Block,
        OnAssessment,
        "Dir. (EU) 2018/2001 Annex V C pt 4",
    ),
    check(
        "B-01",
        "Shares add to one",
        Block,
        OnAssessment,
        "own; ISO 14044:2006 4.3.4 (from memory)",
    ),
    check(
        "B-02",
        "No negative or above-one share",
        Block,
        OnAssessment,
        "own",
    ),
    check(
        "B-03",
        "Allocation allowed by the rule set",
        Block,
        AtEntry,
        "Dir. (EU) 2018/2001 Annex V C pt 16-18",
    ),
    check(
        "B-04",
        "Residue whatever the file says",
        Warn,
        OnFigures,
        "Dir. (EU) 2018/2001 Annex V C pt 18, Annex IX Part A",
    ),
    check(
        "B-05",
        "Stages after the split are not allocated backwards",
        Block,
        OnAssessment,
        "Dir. (EU) 2018/2001 Annex V C pt 18",
    ),
    check(
        "B-06",
        "Wet feed is valued as it leaves",
        Warn,
        OnAssessment,
        "Dir. (EU) 2018/2001 Annex V C pt 18; Real Decreto 1597/2011 (ES) Annex Part C pt 18",
    ),
    check(
        "B-07",
        "Shares recomputed from mass and heating value",
        Block,
        OnAssessment,
        "own",
    ),
    check(
        "C-01",
        "Ethanol yield below the chemical ceiling",
        Block,
        OnFigures,
        "computed from molar masses",
    ),
    check(
        "C-02",
        "Fermentation CO2 fits the ethanol",
        Warn,
        OnFigures,
        "computed from molar masses",
    ),
    check(
        "C-03",
        "Captured CO2 not above CO2 formed",
        Block,
        OnAssessment,
        "computed; IR (EU) 2022/996 Art. 14(3)",
    ),
    check("C-16", "Crop carbon closes", Block, OnAssessment, "own"),
    check("C-18", "Efficiency of heat and power", Warn, OnFigures, "own"),
    check(
        "E-01",
        "Measured and supplied figures have evidence",
        Block,
        OnAssessment,
        "IR (EU) 2022/996 Art. 14(1), Art. 10(5)(b)",
    ),
    check(
        "E-07",
        "Own method in place of the standard one is explained",
        Warn,
        OnAssessment,
        "IR (EU) 2022/996 Art. 20(2)(a)-(b), Annex VII 1.5",
    ),
    check(
        "E-10",
        "No estimate hidden as a reading",
        Info,
        OnAssessment,
        "SOR/2022-140 (CA) Sch. 21 pt 7(a)(iii),(v)",
    ),
    check(
        "F-08",
        "Soil-carbon credit conditions",
        Block,
        OnFigures,
        "Dir. (EU) 2018/2001 Annex V C pt 6; IR (EU) 2022/996 Annex V",
    ),
    check(
        "F-10",
        "Broken commitment is added back",
        Block,
        OnFigures,
        "IR (EU) 2022/996 Annex V",
    ),
    check(
        "G-01",
        "Replacement credit only for biogenic CO2 that displaces fossil CO2",
        Block,
        OnAssessment,
        "IR (EU) 2022/996 Art. 14(3); Dir. (EU) 2018/2001 Annex V C pt 15",
    ),
    check(
        "G-02",
        "Storage credit needs proof of storage",
        Block,
        OnAssessment,
        "IR (EU) 2022/996 Art. 20(4); Dir. (EU) 2018/2001 Annex V C pt 14",
    ),
    check(
        "G-04",
        "Credit shared the same way as the burden",
        Warn,
        OnAssessment,
        "Dir. (EU) 2018/2001 Annex V C pt 18",
    ),
    check(
        "H-01",
        "Threshold chosen by the plant's start",
        Block,
        OnFigures,
        "Dir. (EU) 2018/2001 Art. 29(10)(a)-(c)",
    ),
    check(
        "K-01",
        "Model parameter within its usual range",
        Warn,
        OnFigures,
        "own",
    ),
    check("K-02", "Gas missing in a factor", Warn, OnFigures, "own"),
    check("K-03", "Moisture on one side only", Warn, OnFigures, "own"),
    check("K-04", "Ethanol without strength", Warn, OnFigures, "own"),
    check(
        "K-05",
        "No published figure, counted as zero",
        Info,
        OnFigures,
        "IR (EU) 2022/996 Annex VII 1.4 (nitrate and urea only)",
    ),
    check(
        "K-06",
        "Chain is partial, no saving printed",
        Block,
        OnFigures,
        "own",
    ),
    check("K-07", "Typical carbon content used", Info, OnFigures, "own"),
];

/// The check of an id.
pub fn find(id: &str) -> Option<&'static Check> {
    CHECKS.iter().find(|check| check.id == id)
}
