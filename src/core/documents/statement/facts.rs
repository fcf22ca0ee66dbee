//! What a statement declares that no pathway holds: parties, consignment, land, plant, mass balance, verification. Every
//! field may be left out of a draft; the preflight says which the rule set asks for. Names and law: `statement_items.csv`.

use super::part::{parts, words};
use jiff::civil::Date;

words! {
    /// What the feedstock is before the law.
    FeedstockClass {
        /// Grown for it.
        Crop = "crop",
        /// Left over from farming, forestry or making something.
        Residue = "residue",
        /// Discarded.
        Waste = "waste",
    }
    /// Marketing category of the fuel.
    Category {
        /// From food and feed crops.
        FoodAndFeed = "food_and_feed",
        /// Advanced.
        Advanced = "advanced",
        /// Waste-based.
        WasteBased = "waste_based",
        /// From crops of high indirect land-use risk.
        HighIlucRisk = "high_iluc_risk",
    }
    /// Group of the provisional indirect land-use estimate, Directive (EU) 2018/2001 Annex VIII.
    IlucGroup {
        /// Cereals and other starch crops.
        Cereals = "cereals",
        /// Sugars.
        Sugars = "sugars",
        /// Outside Part A: zero.
        None = "none",
    }
    /// How sure a verifier is.
    Assurance {
        /// Limited.
        Limited = "limited",
        /// Reasonable.
        Reasonable = "reasonable",
    }
    /// What a verifier concludes.
    OpinionKind {
        /// Without reserve.
        Unqualified = "unqualified",
        /// With reserve.
        Qualified = "qualified",
        /// Against.
        Adverse = "adverse",
        /// None given.
        Disclaimer = "disclaimer",
    }
    /// Grade of an auditor's finding.
    Grade {
        /// Critical.
        Critical = "critical",
        /// Major.
        Major = "major",
        /// Minor.
        Minor = "minor",
    }
    /// What a declaration on land is about.
    LandCriterion {
        /// Land of high biodiversity value.
        Biodiversity = "biodiversity",
        /// Land with high carbon stock.
        CarbonStock = "carbon_stock",
        /// Peatland.
        Peatland = "peatland",
        /// All criteria of the rule set together.
        All = "all",
    }
    /// A law whose items the statement holds beside those of its rule set.
    Law {
        /// European Union.
        Eu = "EU",
        /// Germany.
        De = "DE",
        /// United Kingdom.
        Uk = "UK",
        /// Canada.
        Ca = "CA",
        /// Cyprus.
        Cy = "CY",
        /// ISO 14067.
        Iso = "ISO",
        /// Product Standard of the GHG Protocol.
        Ghgp = "GHGP",
    }
}

parts! {
    /// A company.
    Party {
        /// Name.
        name: Option<String>,
        /// Lines of the address.
        address: Vec<String>,
        /// Country, ISO 3166-1 alpha-2.
        country: Option<String>,
    }
    /// Whom to ask.
    Contact {
        /// Name.
        name: Option<String>,
        /// Mail.
        mail: Option<String>,
        /// Phone.
        phone: Option<String>,
    }
    /// A span of days, both inside.
    Days {
        /// First day.
        #[schema(value_type = Option<String>, format = Date)]
        from: Option<Date>,
        /// Last day.
        #[schema(value_type = Option<String>, format = Date)]
        to: Option<Date>,
        /// For a balance period: the rule that sets its length.
        rule: Option<String>,
    }
    /// Something somebody declares.
    Declaration {
        /// Whether it holds.
        given: Option<bool>,
        /// Who declares it.
        by: Option<String>,
        /// When.
        #[schema(value_type = Option<String>, format = Date)]
        on: Option<Date>,
        /// What else there is to say, such as the balance period or the kind of support.
        text: Option<String>,
    }
    /// A declaration on the status of land.
    LandDeclaration {
        /// Number of the declaration.
        number: Option<String>,
        /// What it is about.
        criterion: Option<LandCriterion>,
        /// Whether the criterion is met.
        met: Option<bool>,
        /// The day whose status counts, in January 2008.
        #[schema(value_type = Option<String>, format = Date)]
        reference_date: Option<Date>,
        /// Id of the file that backs it.
        evidence: Option<String>,
    }
    /// Another statement that this one rests on.
    Upstream {
        /// Its number.
        statement_no: Option<String>,
        /// Who issued it.
        issuer: Option<String>,
        /// Its hash.
        hash: Option<String>,
        /// Share of the consignment that it covers, %.
        share_percent: Option<f64>,
    }
    /// The works.
    Plant {
        /// Name.
        name: Option<String>,
        /// Lines of the address.
        address: Vec<String>,
        /// Country, ISO 3166-1 alpha-2.
        country: Option<String>,
        /// Degrees north.
        latitude: Option<f64>,
        /// Degrees east.
        longitude: Option<f64>,
    }
    /// A source of the works' heat or power.
    EnergySource {
        /// What it is.
        kind: Option<String>,
        /// Share of the heat and power, %.
        share_percent: Option<f64>,
    }
    /// Ratings of data quality, 1 (best) to 5.
    Ratings {
        /// Technology.
        technology: Option<f64>,
        /// Place.
        place: Option<f64>,
        /// Time.
        time: Option<f64>,
    }
    /// Who verified.
    Verification {
        /// Name of the body.
        by: Option<String>,
        /// Its accreditation.
        accreditation: Option<String>,
        /// Day of the report.
        #[schema(value_type = Option<String>, format = Date)]
        on: Option<Date>,
    }
    /// From what size on an error matters.
    Materiality {
        /// g CO2e/MJ.
        g_co2e_per_mj: Option<f64>,
        /// % of the figure.
        percent: Option<f64>,
    }
    /// What a verifier concludes.
    Opinion {
        /// In a word.
        kind: Option<OpinionKind>,
        /// Its limits.
        limits: Option<String>,
    }
    /// A finding of an auditor.
    AuditFinding {
        /// Number of the finding.
        number: Option<String>,
        /// Grade.
        grade: Option<Grade>,
        /// What it says.
        text: Option<String>,
        /// Raised on.
        #[schema(value_type = Option<String>, format = Date)]
        raised_on: Option<Date>,
        /// Closed on; none while open.
        #[schema(value_type = Option<String>, format = Date)]
        closed_on: Option<Date>,
    }
    /// An audit on record.
    Audit {
        /// Day on which it was passed.
        #[schema(value_type = Option<String>, format = Date)]
        passed_on: Option<Date>,
        /// Who audited.
        by: Option<String>,
        /// Which site.
        site: Option<String>,
        /// True if its scope covers actual values.
        actual_values: Option<bool>,
    }
    /// The facts of a statement.
    StatementFacts {
        /// Laws whose items the statement holds beside those of its rule set.
        laws: Vec<Law>,
        /// First day on which the figure may be used.
        #[schema(value_type = Option<String>, format = Date)]
        valid_from: Option<Date>,
        /// Last day on which the figure may be used.
        #[schema(value_type = Option<String>, format = Date)]
        valid_to: Option<Date>,
        /// Day up to which the records are kept; the longest rule that applies when left out.
        #[schema(value_type = Option<String>, format = Date)]
        keep_until: Option<Date>,
        /// Scheme under which the statement is made.
        scheme_name: Option<String>,
        /// Number of the issuer's certificate.
        certificate_no: Option<String>,
        /// First day of the certificate.
        #[schema(value_type = Option<String>, format = Date)]
        certificate_valid_from: Option<Date>,
        /// Last day of the certificate.
        #[schema(value_type = Option<String>, format = Date)]
        certificate_valid_to: Option<Date>,
        /// Day since which the certificate is suspended.
        #[schema(value_type = Option<String>, format = Date)]
        certificate_suspended_since: Option<Date>,
        /// Who issues.
        issuer: Option<Party>,
        /// Who receives.
        recipient: Option<Party>,
        /// Whom to ask.
        contact: Option<Contact>,
        /// The last carrier's declaration that it keeps a mass balance.
        last_supplier_confirmation: Option<Declaration>,
        /// Number of the consignment.
        consignment_id: Option<String>,
        /// Number of the consignment it was split from.
        parent_id: Option<String>,
        /// How much, in `quantity_unit`.
        quantity: Option<f64>,
        /// Unit: a volume, a mass or an energy.
        quantity_unit: Option<String>,
        /// How it was measured, such as a meter.
        quantity_measured_by: Option<String>,
        /// Temperature that a volume is stated at, degC.
        temperature_c: Option<f64>,
        /// Pressure that a volume is stated at, kPa.
        pressure_kpa: Option<f64>,
        /// Day of loading.
        #[schema(value_type = Option<String>, format = Date)]
        loaded_on: Option<Date>,
        /// Place of loading.
        loaded_at: Option<String>,
        /// Day of delivery.
        #[schema(value_type = Option<String>, format = Date)]
        delivered_on: Option<Date>,
        /// Place of delivery.
        delivered_at: Option<String>,
        /// Countries in which the fuel may be used without the figure being exceeded.
        use_regions: Vec<String>,
        /// Period in which the consignment was made.
        production_period: Option<Days>,
        /// What fuel it is.
        fuel_type: Option<String>,
        /// Country in which the feedstock grew or arose, where no stage of growing tells.
        feedstock_country: Option<String>,
        /// Country in which the fuel was made.
        production_country: Option<String>,
        /// What the feedstock is before the law.
        feedstock_class: Option<FeedstockClass>,
        /// Number of a waste permit.
        permit_no: Option<String>,
        /// Marketing category.
        category: Option<Category>,
        /// Ethanol, % mass.
        strength_percent_mass: Option<f64>,
        /// Denaturant, % volume.
        denaturant_percent: Option<f64>,
        /// Public support received: whether, and which.
        support: Option<Declaration>,
        /// Group of the indirect land-use estimate.
        iluc_group: Option<IlucGroup>,
        /// Why the figure is far from what is usual.
        deviation_reason: Option<String>,
        /// A margin added on purpose and shown apart, g CO2e/MJ.
        margin_g_per_mj: Option<f64>,
        /// Transport by air, kg CO2e per tonne of fuel.
        aircraft_kg_co2e: Option<f64>,
        /// Share of the emissions that was left out, %.
        cutoff_percent: Option<f64>,
        /// What was left out.
        cutoff_note: Option<String>,
        /// Ratings of data quality.
        dq: Option<Ratings>,
        /// How uncertainty was judged, in words.
        uncertainty_note: Option<String>,
        /// Standards followed.
        standards: Vec<String>,
        /// What changed since the earlier statement.
        change_note: Option<String>,
        /// Declarations on the status of land.
        land_declarations: Vec<LandDeclaration>,
        /// Id of the file with the soil and monitoring plan.
        soil_plan: Option<String>,
        /// Whether the criteria of low indirect land-use risk are met.
        low_iluc: Option<bool>,
        /// Ids of the files with the plots.
        plots: Vec<String>,
        /// That a mass balance was kept and closes; `text` names its period.
        mass_balance: Option<Declaration>,
        /// Balance period.
        balance_period: Option<Days>,
        /// Site to which the balance belongs.
        site_id: Option<String>,
        /// That the consignment was counted nowhere else.
        no_double_claim: Option<Declaration>,
        /// Statements that this one rests on.
        upstream_statements: Vec<Upstream>,
        /// The works.
        plant: Option<Plant>,
        /// Its heat and power.
        energy_sources: Vec<EnergySource>,
        /// Who verified.
        verification: Option<Verification>,
        /// How sure the verifier is.
        assurance_level: Option<Assurance>,
        /// Standards of the verification.
        verification_standards: Vec<String>,
        /// From what size on an error matters.
        materiality: Option<Materiality>,
        /// What the verifier concludes.
        opinion: Option<Opinion>,
        /// Findings of auditors.
        audit_findings: Vec<AuditFinding>,
        /// Audits on record.
        audits: Vec<Audit>,
    }
}
