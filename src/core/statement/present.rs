//! Whether an item of a statement is there. One line an item; a test holds the list against the table.

use super::energy::energy;
use super::figures::iluc;
use super::preflight::Subject;
use crate::core::documents::StatementFacts;
use crate::core::documents::statement::facts::{Declaration, FeedstockClass, Party};
use crate::core::domain::StageKind;
use crate::core::units::{Dimension, Quantity};

/// How an item stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Standing {
    /// It is there, or comes about when the statement is issued.
    Here,
    /// It is not.
    Missing,
    /// This statement needs none.
    NotNeeded,
}

use Standing::{Here, Missing, NotNeeded};

fn here(is: bool) -> Standing {
    if is { Here } else { Missing }
}

fn when(needed: bool, is: bool) -> Standing {
    if needed { here(is) } else { NotNeeded }
}

fn party(party: Option<&Party>) -> Standing {
    here(
        party.is_some_and(|party| {
            party.name.is_some() && !party.address.is_empty() && party.country.is_some()
        }),
    )
}

fn said(declaration: Option<&Declaration>) -> Standing {
    here(declaration.is_some_and(|declaration| declaration.given.is_some()))
}

fn holds(declaration: Option<&Declaration>) -> bool {
    declaration.is_some_and(|declaration| declaration.given == Some(true))
}

/// How the item of an id stands; none for an id that the list does not have.
pub fn standing(id: &str, subject: &Subject) -> Option<Standing> {
    let facts = subject.facts;
    Some(match id {
        // Come about at issue, or stand in the assessment whatever it says.
        "S-101" | "S-102" | "S-103" | "S-104" | "S-105" | "S-107" | "S-203" | "S-305" | "S-402" | "S-501"
        | "S-502" | "S-504" | "S-508" | "S-509" | "S-601" | "S-602" | "S-603" | "S-606" | "S-607"
        | "S-701" | "S-703" | "S-704" | "S-707" | "S-711" | "S-1201" | "S-1202" => Here,
        // Asked of nobody: shown where given.
        "S-512" | "S-1106" => NotNeeded,
        "S-106" => here(facts.certificate_valid_from.is_some() && facts.certificate_valid_to.is_some()),
        "S-108" => here(facts.scheme_name.is_some()),
        "S-109" => here(facts.certificate_no.is_some()),
        "S-201" => party(facts.issuer.as_ref()),
        "S-202" => party(facts.recipient.as_ref()),
        "S-204" => here(facts.contact.as_ref().is_some_and(|contact| {
            contact.name.is_some() && (contact.mail.is_some() || contact.phone.is_some())
        })),
        "S-205" => here(holds(facts.last_supplier_confirmation.as_ref())),
        "S-301" => here(facts.consignment_id.is_some()),
        "S-302" => here(facts.quantity.is_some() && facts.quantity_unit.is_some()),
        "S-303" => when(is_volume(facts), facts.temperature_c.is_some()),
        "S-304" | "S-510" => here(energy(facts, &subject.rules).is_some()),
        "S-306" => here(facts.loaded_on.is_some()),
        "S-307" => here(facts.loaded_at.is_some()),
        "S-308" => here(facts.delivered_at.is_some()),
        "S-309" => here(!facts.use_regions.is_empty()),
        "S-310" => here(
            facts
                .production_period
                .as_ref()
                .is_some_and(|days| days.from.is_some() && days.to.is_some()),
        ),
        "S-401" => here(facts.fuel_type.is_some()),
        "S-403" => here(one_feedstock(subject)),
        "S-404" => here(origin_known(subject)),
        "S-405" => here(facts.production_country.is_some()),
        "S-406" => here(
            facts
                .feedstock_class
                .is_some_and(|class| class != FeedstockClass::Waste || facts.permit_no.is_some()),
        ),
        "S-407" => here(facts.category.is_some()),
        "S-408" => here(facts.strength_percent_mass.is_some()),
        "S-409" => said(facts.support.as_ref()),
        "S-503" => here(
            !subject
                .assessment
                .findings
                .iter()
                .any(|finding| finding.id == "E-03"),
        ),
        "S-505" => here(subject.assessment.saving_percent.is_some()),
        "S-506" => when(
            !subject.rules.thresholds.is_empty(),
            !subject.assessment.thresholds.is_empty(),
        ),
        "S-507" => here(
            facts
                .iluc_group
                .and_then(|group| iluc(group, &subject.rules))
                .is_some(),
        ),
        "S-511" => when(
            subject
                .assessment
                .findings
                .iter()
                .any(|finding| finding.id == "C-11"),
            facts.deviation_reason.is_some(),
        ),
        "S-604" => NotNeeded,
        "S-605" => here(facts.denaturant_percent.is_some()),
        "S-702" => here(facts.cutoff_percent.is_some()),
        "S-705" => when(grows(subject), subject.converts),
        "S-706" => when(subject.wants_evidence, subject.has_evidence),
        "S-708" => here(facts.dq.is_some()),
        "S-709" => here(subject.uncertain || facts.uncertainty_note.is_some()),
        "S-710" => here(!facts.standards.is_empty()),
        "S-712" => when(subject.supersedes, facts.change_note.is_some()),
        "S-801" => when(farmed(facts), land_declared(subject)),
        "S-802" => when(
            facts.feedstock_class == Some(FeedstockClass::Residue),
            facts.soil_plan.is_some(),
        ),
        "S-803" => here(facts.low_iluc.is_some()),
        "S-804" => when(farmed(facts), !facts.plots.is_empty()),
        "S-901" => here(holds(facts.mass_balance.as_ref())),
        "S-902" => here(
            facts
                .balance_period
                .as_ref()
                .is_some_and(|days| days.from.is_some() && days.to.is_some()),
        ),
        "S-903" => here(facts.site_id.is_some()),
        "S-904" => here(holds(facts.no_double_claim.as_ref())),
        "S-905" => when(
            has(subject, StageKind::Bought),
            !facts.upstream_statements.is_empty(),
        ),
        "S-1001" => here(
            facts
                .plant
                .as_ref()
                .is_some_and(|plant| plant.name.is_some() && !plant.address.is_empty()),
        ),
        "S-1002" => here(start_known(subject)),
        "S-1003" => here(subject.pathway.plant_capacity_per_year.is_some()),
        "S-1004" => here(!facts.energy_sources.is_empty()),
        "S-1101" => when(
            facts.opinion.is_some(),
            facts.verification.as_ref().is_some_and(|body| body.by.is_some()),
        ),
        "S-1102" => when(facts.verification.is_some(), facts.assurance_level.is_some()),
        "S-1103" => when(
            facts.verification.is_some(),
            !facts.verification_standards.is_empty(),
        ),
        "S-1104" => when(facts.verification.is_some(), facts.materiality.is_some()),
        "S-1105" => when(
            facts.verification.is_some(),
            facts
                .opinion
                .as_ref()
                .is_some_and(|opinion| opinion.kind.is_some()),
        ),
        _ => return None,
    })
}

fn has(subject: &Subject, kind: StageKind) -> bool {
    subject.pathway.stages.iter().any(|stage| stage.kind == kind)
}

fn grows(subject: &Subject) -> bool {
    has(subject, StageKind::Cultivation)
}

/// Land criteria are asked of what grew; waste has no field.
fn farmed(facts: &StatementFacts) -> bool {
    facts.feedstock_class != Some(FeedstockClass::Waste)
}

fn is_volume(facts: &StatementFacts) -> bool {
    let unit = facts.quantity_unit.as_deref();
    unit.and_then(|unit| Quantity::read(1.0, unit).ok())
        .is_some_and(|quantity| quantity.dimension == Dimension::VOLUME)
}

fn land_declared(subject: &Subject) -> bool {
    let declared = &subject.facts.land_declarations;
    !declared.is_empty() && declared.iter().all(|declaration| declaration.met == Some(true))
}

/// Every place of growing grows the pathway's feedstock.
fn one_feedstock(subject: &Subject) -> bool {
    let mut grown = subject
        .pathway
        .stages
        .iter()
        .filter(|stage| stage.kind == StageKind::Cultivation);
    grown.all(|stage| stage.output.material == subject.pathway.feedstock)
}

fn origin_known(subject: &Subject) -> bool {
    let mut fields = subject
        .pathway
        .stages
        .iter()
        .filter(|stage| stage.kind == StageKind::Cultivation)
        .peekable();
    match fields.peek() {
        None => subject.facts.feedstock_country.is_some(),
        Some(_) => {
            subject.facts.feedstock_country.is_some()
                || fields.all(|stage| stage.grown.as_ref().is_some_and(|grown| grown.country.is_some()))
        }
    }
}

fn start_known(subject: &Subject) -> bool {
    let bought = subject
        .pathway
        .stages
        .iter()
        .filter(|stage| stage.kind == StageKind::Bought);
    let mut stated = bought
        .map(|stage| stage.stated.as_ref().and_then(|stated| stated.plant_started))
        .peekable();
    subject.pathway.plant_started.is_some() || (stated.peek().is_some() && stated.all(|day| day.is_some()))
}
