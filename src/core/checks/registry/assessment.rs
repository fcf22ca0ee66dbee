//! Checks that look at figures, shares, balances, evidence and credits: groups A to C, E, G and K.

use super::{Check, checks};

/// Recompute, allocation, balance and plausibility.
pub const A_TO_C: &[Check] = checks! {
    "A-01" Block OnAssessment: "Net equals the sum of its terms, and of its stages",
        "Dir. (EU) 2018/2001 Annex V C pt 1(a); own tolerance";
    "A-02" Block OnAssessment: "Saving equals comparator minus net over comparator",
        "Dir. (EU) 2018/2001 Annex V C pt 3(a)";
    "A-03" Block OnAssessment: "Comparator belongs to the rule set",
        "Dir. (EU) 2018/2001 Annex V C pt 19";
    "A-04" Block OnAssessment: "Threshold test uses the unrounded saving",
        "own rule; the laws read give no rounding allowance";
    "A-05" Info OnAssessment: "Shown figure must not flip the verdict",
        "own";
    "A-06" Warn OnAssessment: "Rounding rule stated and kept",
        "own; Dir. (EU) 2018/2001 Annex V and IR (EU) 2022/996: no rule found";
    "A-07" Info OnAssessment: "Shown stages need a note if they do not add up",
        "own";
    "A-08" Block AtEntry: "Units agree on both sides of every product",
        "own";
    "A-09" Block OnAssessment: "Energy of the consignment from the heating value of the rule set",
        "IR (EU) 2022/996 Annex I pt 2(f); Dir. (EU) 2018/2001 Annex III";
    "A-10" Warn OnAssessment: "Mass route and volume route are not mixed",
        "Dir. (EU) 2018/2001 Annex III (27 and 21); computed";
    "A-11" Block OnAssessment: "Heating-value basis does not change inside one pathway",
        "Dir. (EU) 2018/2001 Annex V C pt 2(a)";
    "A-12" Block AtEntry: "Volume carries its temperature",
        "SOR/2022-140 (CA) s.1 and s.161(3); 40 CFR 80.1426(f)(8)";
    "A-13" Block OnAssessment: "Gas weights come from one named set",
        "Dir. (EU) 2018/2001 Annex V C pt 4";
    "A-14" Warn OnRequest: "Recalculation by the auditor's own script agrees, when the statement and the other figures are given",
        "IR (EU) 2022/996 Art. 14(1)-(2)";
    "B-01" Block OnAssessment: "Shares add to one",
        "own; ISO 14044:2006 4.3.4 (from memory)";
    "B-02" Block OnAssessment: "No negative or above-one share",
        "own";
    "B-03" Block AtEntry: "Allocation allowed by the rule set",
        "Dir. (EU) 2018/2001 Annex V C pt 16-18";
    "B-04" Warn OnFigures: "Residue whatever the file says",
        "Dir. (EU) 2018/2001 Annex V C pt 18, Annex IX Part A";
    "B-05" Block OnAssessment: "Stages after the split are not allocated backwards",
        "Dir. (EU) 2018/2001 Annex V C pt 18";
    "B-06" Warn OnAssessment: "Wet feed is valued as it leaves",
        "Dir. (EU) 2018/2001 Annex V C pt 18; Real Decreto 1597/2011 (ES) Annex Part C pt 18";
    "B-07" Block OnAssessment: "Shares recomputed from mass and heating value",
        "own";
    "C-01" Block OnFigures: "Ethanol yield below the chemical ceiling",
        "computed from molar masses";
    "C-02" Warn OnFigures: "Fermentation CO2 fits the ethanol",
        "computed from molar masses";
    "C-03" Block OnAssessment: "Captured CO2 not above CO2 formed",
        "computed; IR (EU) 2022/996 Art. 14(3)";
    "C-04" Warn OnAssessment: "Dry matter in equals out, works by works",
        "own";
    "C-05" Info Retired: "Retired: one check with C-16; the id is not used again",
        "own";
    "C-06" Block OnAssessment: "Energy leaving a works is not above the energy entering it",
        "own";
    "C-07" Warn OnAssessment: "Output within the capacity of the plant",
        "IR (EU) 2022/996 Art. 10(2)(c) (plausibility of capacity against declared quantities)";
    "C-08" Warn OnAssessment: "Conversion factor stable, where earlier periods are entered",
        "IR (EU) 2022/996 Art. 15(d)";
    "C-09" Warn OnAssessment: "Field yield within the usual range of its crop",
        "own ranges, until statistics of a region are held";
    "C-10" Block OnAssessment: "Area times yield covers the delivery",
        "IR (EU) 2022/996 Annex II A pt 1(e) (amount that could be harvested)";
    "C-11" Warn OnAssessment: "Far from typical or unusually good",
        "IR (EU) 2022/996 Art. 14(2) (no number given there; 30 % is our setting)";
    "C-12" Warn OnAssessment: "Steam use physically possible",
        "own";
    "C-13" Block OnAssessment: "Meter readings never run backwards",
        "own";
    "C-14" Block OnAssessment: "No gaps and no overlaps in meter periods, which cover the period",
        "own";
    "C-15" Warn OnAssessment: "Meter calibration in date, where its last day is entered",
        "SOR/2022-140 (CA) Sch. 21 pt 6(e)-(f); s.161(1)(a)";
    "C-16" Block OnAssessment: "Crop carbon closes",
        "own";
    "C-17" Warn OnAssessment: "Nitrogen fits the harvest",
        "own";
    "C-18" Warn OnFigures: "Efficiency of heat and power",
        "own";
};

/// Evidence, value kinds, factors.
pub const E: &[Check] = checks! {
    "E-01" Block OnAssessment: "Measured and supplied figures have evidence",
        "IR (EU) 2022/996 Art. 14(1), Art. 10(5)(b)";
    "E-02" Block AtIssue: "Actual values only after a passed audit of that skill",
        "IR (EU) 2022/996 Art. 14(4)";
    "E-03" Block OnAssessment: "Value kind recorded for each term",
        "IR (EU) 2022/996 Annex II A pt 3(g)";
    "E-04" Block OnRequest: "Total default only if land-use change is not above zero",
        "Dir. (EU) 2018/2001 Art. 31(1)(a); Biokraft-NachV 2021 (DE) §6(2) no.1";
    "E-05" Block OnAssessment: "One version of each edition",
        "IR (EU) 2022/996 Art. 14(1)";
    "E-06" Warn OnAssessment: "Edition valid on the date, where its document fixes days",
        "own";
    "E-07" Warn OnAssessment: "Own factor or method in place of the standard one is explained",
        "IR (EU) 2022/996 Art. 20(2)(a)-(b), Annex VII 1.5";
    "E-08" Warn OnAssessment: "Own factor within the span of the published rows of its unit",
        "own";
    "E-09" Warn OnAssessment: "Grid power uses the average of a region, as far as words tell",
        "Dir. (EU) 2018/2001 Annex V C pt 11; IR (EU) 2022/996 Annex VII, electricity section (farming operations)";
    "E-10" Info OnAssessment: "No estimate hidden as a reading",
        "SOR/2022-140 (CA) Sch. 21 pt 7(a)(iii),(v)";
    "E-11" Block OnRequest: "Evidence file unchanged",
        "own";
    "E-12" Block AtIssue: "Nothing changed after the assessment",
        "own";
    "E-13" Block AtIssue: "Who submitted and who approved differ",
        "own (four-eyes); compare IR Art. 11(2)";
    "E-14" Warn OnAssessment: "Data window long enough for an actual value, where the rule set asks for months (the EU texts read ask for none)",
        "SOR/2022-140 (CA) s.76(1), s.91(1)";
};

/// Capture credits.
pub const G: &[Check] = checks! {
    "G-01" Block OnAssessment: "Replacement credit only for biogenic CO2 that displaces fossil CO2",
        "IR (EU) 2022/996 Art. 14(3); Dir. (EU) 2018/2001 Annex V C pt 15";
    "G-02" Block OnAssessment: "Storage credit needs proof of storage",
        "IR (EU) 2022/996 Art. 20(4); Dir. (EU) 2018/2001 Annex V C pt 14";
    "G-03" Block OnAssessment: "The same tonne of CO2 is not in two credits",
        "own";
    "G-04" Warn OnAssessment: "Credit shared the same way as the burden",
        "Dir. (EU) 2018/2001 Annex V C pt 18";
};

/// Figures as entered.
pub const K: &[Check] = checks! {
    "K-01" Warn OnFigures: "Model parameter within its usual range",
        "own";
    "K-02" Warn OnFigures: "Gas missing in a factor",
        "own";
    "K-03" Warn OnFigures: "Moisture on one side only",
        "own";
    "K-04" Warn OnFigures: "Ethanol without strength",
        "own";
    "K-05" Info OnFigures: "No published figure, counted as zero",
        "IR (EU) 2022/996 Annex VII 1.4 (nitrate and urea only)";
    "K-06" Block OnFigures: "Chain is partial, no saving printed",
        "own";
    "K-07" Info OnFigures: "Typical carbon content used",
        "own";
};
