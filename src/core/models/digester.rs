//! `digester`: methane that slips from a biogas plant and from the store of its digestate. Heating value of methane and
//! storage: Implementing Regulation (EU) 2022/996 Annex IX.

use super::factors::{MJ, price_energy};
use super::given::Given;
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome};
use crate::core::domain::{Gas, GasVector};
use crate::core::units::rounding::plain;

/// Row of Annex IX that prints the heating value of methane.
pub const METHANE: &str = "eu-2022-996/fuel_methane";
/// Molar masses of CO2 and CH4, g/mol.
const MOLAR: (f64, f64) = (44.0095, 16.0425);
const CLOSED: &str = "closed";

/// The model.
pub const MODEL: Model = Model {
    kind: "digester",
    title: "Digester",
    what: "Methane that slips from a biogas plant and from the store of its digestate.",
    source: "Implementing Regulation (EU) 2022/996 Annex IX: biogas / 50 MJ/kg x slip + biogas x storage",
    term: None,
    parameters: &[
        Parameter::required(
            "biogas_made",
            Takes::Amount("MJ"),
            "biogas made, net heating value.",
        )
        .hard(Span::positive()),
        Parameter::optional(
            "methane_percent",
            Takes::Number("percent"),
            "none; the CO2 of the gas is then not told",
            "methane in the biogas, % of volume: tells the biogenic CO2 of the gas, for its users.",
        )
        .hard(Span::above(0.0, 100.0))
        .usual(Span::of(45.0, 75.0)),
        Parameter::required(
            "slip_percent",
            Takes::Number("percent"),
            "methane lost, % of the methane made.",
        )
        .hard(Span::of(0.0, 100.0))
        .usual(Span::of(0.2, 3.0)),
        Parameter::required(
            "storage",
            Takes::Factor,
            "store of the digestate: the word closed, or a row such as eu-2022-996/digest_open_maize_digestate_storage, per MJ.",
        ),
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let biogas = given.number("biogas_made");
    let content = match given.has("methane_percent") {
        true => given.number("methane_percent").map(Some),
        false => Some(None),
    };
    let slip = given.number("slip_percent");
    let store = match given.is_word("storage", CLOSED) {
        true => Some(None),
        false => given.fuel_factor("storage").map(Some),
    };
    let (biogas, content, slip, store) = (biogas?, content?, slip?, store?);
    let row = given.setting.book.factor(METHANE);
    let Some((lhv, source)) = row.and_then(|row| Some((row.lhv_mj_per_kg?, row.citation.source.clone())))
    else {
        given.problem(
            "biogas_made",
            format!("The published data has no heating value of methane ({METHANE})."),
            "Enter the methane lost as given gases instead.",
        );
        return None;
    };
    let methane = biogas / lhv;
    given.step(
        format!("{} MJ / {} MJ/kg", plain(biogas), plain(lhv)),
        methane,
        "kg methane",
        &source,
    );
    let lost = methane * slip / 100.0;
    given.step(
        format!("{} kg x {} % slip", plain(methane), plain(slip)),
        lost,
        "kg ch4_biogenic",
        "",
    );
    let mut gases = GasVector::of(Gas::Ch4Biogenic, lost);
    match &store {
        None => given.step("closed store of digestate".to_owned(), 0.0, "kg ch4_biogenic", ""),
        Some(factor) => {
            gases += price_energy(biogas, MJ, factor, &mut given.record.steps);
        }
    }
    if let Some(percent) = content {
        // Burnt, a mole of methane gives a mole of CO2; the gas brings the rest of its volume as CO2.
        let co2 = MOLAR.0 / MOLAR.1 / lhv / (percent / 100.0);
        let text = format!(
            "biogenic CO2 of burning the gas, for its users: {} / {} / {} MJ/kg / {} %",
            plain(MOLAR.0),
            plain(MOLAR.1),
            plain(lhv),
            plain(percent)
        );
        given.step(text, co2, "kg co2_biogenic per MJ of biogas", "molar masses");
    }
    Some(Outcome {
        gases,
        ..Outcome::default()
    })
}
