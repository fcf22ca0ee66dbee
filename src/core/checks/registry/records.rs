//! Checks that look at what lies around a pathway: ledger, growers and land, thresholds, statements, exchange files.

use super::{Check, checks};

/// Mass balance and double counting.
pub const D: &[Check] = checks! {
    "D-01" Block Later("the ledger of sites and consignments"): "Balance never negative at the end of a period",
        "IR (EU) 2022/996 Art. 19(2)(j),(l); Dir. (EU) 2018/2001 Art. 30(1); SOR/2022-140 (CA) s.47(1)";
    "D-02" Block Later("the ledger of sites and consignments"): "Not negative at any delivery",
        "SOR/2022-140 (CA) s.47(1) (each removal) against IR (EU) 2022/996 Art. 19(2)(l) (period end)";
    "D-03" Block Later("the ledger of sites and consignments"): "Carried-forward data equals physical stock",
        "IR (EU) 2022/996 Art. 15(g), Art. 19(2)(l)";
    "D-04" Block Later("the ledger of sites and consignments"): "Period length right for the role",
        "IR (EU) 2022/996 Art. 19(2)(l)";
    "D-05" Block Later("the ledger of sites and consignments"): "Set of characteristics kept whole",
        "IR (EU) 2022/996 Art. 19(2)(j)";
    "D-06" Block Later("the ledger of sites and consignments"): "No transfer between separate balances",
        "IR (EU) 2022/996 Art. 19(2)(e)";
    "D-07" Block Later("the ledger of sites and consignments"): "Deliveries outside any scheme are booked out",
        "IR (EU) 2022/996 Art. 19(2)(g)";
    "D-08" Block Later("the ledger of sites and consignments"): "Material without characteristics is on the books too",
        "IR (EU) 2022/996 Art. 19(2)(f)";
    "D-09" Block Later("the ledger of sites and consignments"): "Statement number unique and used once",
        "IR (EU) 2022/996 Art. 10(3)(b)";
    "D-10" Block Later("the ledger of sites and consignments"): "Parts of a split add to the parent",
        "Biokraft-NachV 2021 (DE) §16";
    "D-11" Block Later("the ledger of sites and consignments"): "Not claimed in a second support scheme",
        "Dir. (EU) 2018/2001 Art. 30(1); SI 2007/3072 (UK) art. 16(2)(a)(ii) as replaced by SI 2021/1420 art. 10; SOR/2022-140 (CA) s.45(4)";
    "D-12" Block Later("the ledger of sites and consignments"): "Blend carries only the physical ethanol share",
        "IR (EU) 2022/996 Art. 19(2)(i)";
    "D-13" Block Later("the ledger of sites and consignments"): "Eligible output not above eligible feedstock share",
        "SOR/2022-140 (CA) s.45(1)";
    "D-14" Block Later("the ledger of sites and consignments"): "Every link dated, in order",
        "IR (EU) 2022/996 Annex I pt 2";
    "D-15" Block Later("the ledger of sites and consignments"): "Supplier's certificate valid on the day used",
        "Biokraft-NachV 2021 (DE) §9(1) no.1-2; IR (EU) 2022/996 Art. 4(2)";
    "D-16" Warn Later("the ledger of sites and consignments"): "Balance agrees with the sales ledger",
        "IR (EU) 2022/996 Art. 15(e)";
};

/// Feedstock and land.
pub const F: &[Check] = checks! {
    "F-01" Block Later("growers and their plots"): "Land declaration present for every farm feedstock",
        "IR (EU) 2022/996 Annex I pt 1(c)(i); Biokraft-NachV 2021 (DE) §4";
    "F-02" Block Later("growers and their plots"): "Reference day is in January 2008",
        "Biokraft-NachV 2021 (DE) §4(6)";
    "F-03" Block Later("growers and their plots"): "Barred land",
        "Dir. (EU) 2018/2001 Art. 29(3)-(5); Biokraft-NachV 2021 (DE) §4(2)-(4); SI 2021/1420 Sch. 2";
    "F-04" Warn Later("growers and their plots"): "Plot polygon valid and not counted twice",
        "Biokraft-NachV 2021 (DE) §19(1) no.4(c)";
    "F-05" Warn Later("growers and their plots"): "Sample size for a grower group",
        "IR (EU) 2022/996 Art. 12(3); Biokraft-NachV 2021 (DE) §33";
    "F-06" Warn Later("growers and their plots"): "Group members alike",
        "IR (EU) 2022/996 Art. 12(1)(b)-(c)";
    "F-07" Warn Later("declarations of origin"): "Waste or residue status set at the source",
        "IR (EU) 2022/996 Art. 21(2), Art. 15(d)";
    "F-08" Block OnFigures: "Soil-carbon credit conditions",
        "Dir. (EU) 2018/2001 Annex V C pt 6; IR (EU) 2022/996 Annex V";
    "F-09" Block AtEntry: "Soil-carbon factor",
        "IR (EU) 2022/996 Annex V; Dir. (EU) 2018/2001 Annex V C pt 7 (footnote)";
    "F-10" Block OnFigures: "Broken commitment is added back",
        "IR (EU) 2022/996 Annex V";
};

/// Threshold and materiality, life of a statement, exchange file.
pub const H_TO_J: &[Check] = checks! {
    "H-01" Block OnFigures: "Threshold chosen by the plant's start",
        "Dir. (EU) 2018/2001 Art. 29(10)(a)-(c)";
    "H-02" Warn Later("sites and their production records"): "Start is first physical production",
        "Dir. (EU) 2018/2001 Art. 29(10) second subparagraph; Biokraft-NachV 2021 (DE) §6(1)";
    "H-03" Warn Later("issued statements"): "Material error",
        "SOR/2022-140 (CA) s.150(a); Reg. (EU) 600/2012 art. 23(1) (5 %, 2 % for the largest) as kept on legislation.gov.uk";
    "H-04" Warn Later("issued statements"): "Small errors added up",
        "SOR/2022-140 (CA) s.153";
    "H-05" Block Later("issued statements"): "Error that crosses a legal limit is always material",
        "own";
    "H-06" Warn Later("samples of an audit"): "Systematic documentation faults",
        "IR (EU) 2022/996 Art. 10(3)(a) of the major list";
    "H-07" Warn Later("issued statements"): "Drift since the figure was fixed",
        "SOR/2022-140 (CA) s.86(1)(b)";
    "H-08" Info Later("the uncertainty of the net"): "Near the threshold",
        "own";
    "I-01" Block Later("issued statements"): "Issued statement cannot be edited",
        "PACT v3.0.3 lifecycle; DE §17(1)";
    "I-02" Block Later("issued statements"): "New statement points back and closes the old one",
        "PACT v3.0.3 lifecycle";
    "I-03" Warn Later("recipients of statements"): "Recipients told of a replacement",
        "PACT v3.0.3 PublishedEvent; CA s.156 (60 days to correct), s.157 (5 days to report over-credit)";
    "I-04" Block Later("issued statements"): "No field of the legal minimum is empty",
        "Biokraft-NachV 2021 (DE) §17(1) no.1; IR (EU) 2022/996 Annex I";
    "I-05" Block Later("issued statements"): "Validity not longer than allowed",
        "PACT v3.0.3 validity";
    "I-06" Block Later("records with keep-until days"): "Records kept long enough",
        "IR (EU) 2022/996 Art. 10(5)(c); Biokraft-NachV 2021 (DE) §19(1) no.2(c), §37(1); SOR/2022-140 (CA) s.166; 40 CFR 1090.1200(a)";
    "I-07" Block Later("issued statements"): "Signature and hash verify offline",
        "own";
    "I-08" Warn Later("audits on record"): "Annual audit not overdue",
        "IR (EU) 2022/996 Art. 10(2), Art. 13(7); Biokraft-NachV 2021 (DE) §32(1)";
    "I-09" Block Later("auditors' findings on record"): "Open major finding of an auditor",
        "IR (EU) 2022/996 Art. 10(4)(b)";
    "I-10" Block Later("certificates on record"): "Suspended issuer",
        "IR (EU) 2022/996 Art. 4(2)";
    "J-01" Block OnRequest: "Totals of the PACT file follow from its parts",
        "PACT v3.0.3 schema notes on the two totals";
    "J-02" Block OnRequest: "Sign of each field",
        "PACT v3.0.3 simple types (the published patterns are loose)";
    "J-03" Warn OnRequest: "Uptake fits carbon content",
        "computed; 3.664 read in IR 2022/996 Annex V";
    "J-04" Block OnRequest: "Decimals are strings without exponent",
        "PACT v3.0.3 Decimal";
    "J-05" Block OnRequest: "At most one geography field",
        "PACT v3.0.3 CarbonFootprint scope";
    "J-06" Block OnRequest: "Net of a rule set is not sent as a PACT total",
        "own; PACT v3.0.3 scope";
};
