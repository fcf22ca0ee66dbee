//! What the exchange file says beside the figures: who, what, where, and what is proven.

use jiff::Timestamp;

/// The facts of one record.
#[derive(Clone, Debug)]
pub struct PactFacts {
    /// Key of the record, a UUID: a new one for every correction.
    pub id: String,
    /// Keys of the records that this one replaces.
    pub replaces: Vec<String>,
    /// When it was made.
    pub made_at: Timestamp,
    /// False once it is superseded or withdrawn: the only change a record ever sees.
    pub active: bool,
    /// Name of the company that answers for it.
    pub company: String,
    /// Its identifiers as URNs, at least one.
    pub company_ids: Vec<String>,
    /// Trade name of the product.
    pub product: String,
    /// The product in words.
    pub description: String,
    /// Its identifiers as URNs, at least one.
    pub product_ids: Vec<String>,
    /// Its class codes as URNs.
    pub classifications: Vec<String>,
    /// Where the works stands; none for the whole world.
    pub geography: Option<Geography>,
    /// Standards that were truly followed, at least one, such as `ISO14067`.
    pub standards: Vec<String>,
    /// Share of the emissions that is left out, %, and why.
    pub left_out: (f64, Option<String>),
    /// Ratings of technology, geography and time, 1 to 5; none where nobody rated.
    pub ratings: Option<[f64; 3]>,
    /// How it was verified; none where it was not.
    pub verification: Option<Verification>,
    /// What else a receiver should know.
    pub remarks: Vec<String>,
    /// The denaturant of the product as sold; none for undenatured ethanol.
    pub denaturant: Option<Denaturant>,
    /// Papers prove that captured CO2 is stored for good.
    pub storage_proven: bool,
    /// Papers trace the carbon gained in soil.
    pub soil_carbon_traced: bool,
    /// The issuer pays for the transport to the customer.
    pub delivers: bool,
}

/// Where: one of three, never two.
#[derive(Clone, Debug, PartialEq)]
pub enum Geography {
    /// A country, two letters (ISO 3166-1).
    Country(String),
    /// A part of a country (ISO 3166-2).
    Subdivision(String),
    /// A region or sub-region of the United Nations.
    Region(String),
}

/// Verification by a third party.
#[derive(Clone, Debug, PartialEq)]
pub struct Verification {
    /// The verifier.
    pub by: String,
    /// When it was done.
    pub at: Timestamp,
    /// The standard of verification.
    pub standard: String,
    /// Assurance level and materiality in words.
    pub remarks: String,
}

/// What makes the product undrinkable.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Denaturant {
    /// Mass % of the product as sold, 0 to below 100.
    pub percent: f64,
    /// Fossil carbon in it, mass %.
    pub carbon_percent: f64,
    /// Its own cradle-to-gate emissions, kg CO2e/kg, fossil.
    pub kg_co2e_per_kg: f64,
}
