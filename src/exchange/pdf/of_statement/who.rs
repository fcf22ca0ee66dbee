//! Parties, consignment, product, works and verification as facts; what was not declared is not printed.

use super::super::sheet::Fact;
use super::say::{capital, day, percent, spaced, tenth};
use crate::core::documents::statement::facts::{Days, Declaration, Party, Plant};
use crate::core::documents::statement::{Statement, StatementFacts};
use crate::core::units::rounding::{show, show_all};

/// Facts that leave out what is empty.
#[derive(Default)]
struct List(Vec<Fact>);

impl List {
    fn add(&mut self, label: &str, value: Option<String>) {
        if let Some(value) = value.filter(|value| !value.trim().is_empty()) {
            self.0.push(Fact::new(label, value));
        }
    }
}

fn joined(parts: &[Option<&str>], between: &str) -> Option<String> {
    let there: Vec<&str> = parts
        .iter()
        .flatten()
        .copied()
        .filter(|part| !part.is_empty())
        .collect();
    (!there.is_empty()).then(|| there.join(between))
}

fn place(name: Option<&str>, address: &[String], country: Option<&str>) -> Option<String> {
    let address = address.join(", ");
    let below = joined(&[Some(address.as_str()), country], ", ");
    joined(&[name, below.as_deref()], "\n")
}

fn party(party: &Party) -> Option<String> {
    place(party.name.as_deref(), &party.address, party.country.as_deref())
}

fn declared(declaration: &Declaration) -> Option<String> {
    let given = declaration.given.map(|given| if given { "Yes" } else { "No" });
    let on = declaration.on.map(day);
    joined(
        &[
            given,
            declaration.text.as_deref(),
            declaration.by.as_deref(),
            on.as_deref(),
        ],
        ", ",
    )
}

fn days(days: &Days) -> Option<String> {
    let span = match (days.from, days.to) {
        (Some(from), Some(to)) => Some(format!("{} to {}", day(from), day(to))),
        (Some(one), None) | (None, Some(one)) => Some(day(one)),
        (None, None) => None,
    };
    joined(&[span.as_deref(), days.rule.as_deref()], "; ")
}

/// Issuer, recipient, scheme, and the facts of the consignment.
pub(super) fn parties(statement: &Statement) -> Vec<Fact> {
    let (facts, figures) = (&statement.facts, &statement.figures);
    let mut list = List::default();
    list.add("Issued by", facts.issuer.as_ref().and_then(party));
    list.add("Recipient", facts.recipient.as_ref().and_then(party));
    list.add(
        "Contact",
        facts.contact.as_ref().and_then(|contact| {
            joined(
                &[
                    contact.name.as_deref(),
                    contact.mail.as_deref(),
                    contact.phone.as_deref(),
                ],
                ", ",
            )
        }),
    );
    list.add(
        "Scheme and certificate",
        joined(
            &[facts.scheme_name.as_deref(), facts.certificate_no.as_deref()],
            ", ",
        ),
    );
    list.add(
        "Certificate valid",
        days(&Days {
            from: facts.certificate_valid_from,
            to: facts.certificate_valid_to,
            rule: None,
        }),
    );
    list.add(
        "Figure valid",
        Some(format!(
            "{} to {}",
            day(statement.valid_from),
            day(statement.valid_to)
        )),
    );
    let split = facts
        .parent_id
        .as_ref()
        .map(|parent| format!("split from {parent}"));
    list.add(
        "Consignment",
        joined(&[facts.consignment_id.as_deref(), split.as_deref()], ", "),
    );
    list.add("Amount", amount(facts));
    list.add(
        "Energy",
        figures
            .energy
            .as_ref()
            .map(|energy| format!("{} MJ: {}", show(energy.energy_mj, 0), energy.how)),
    );
    list.add(
        "Emission of the lot",
        figures
            .derived
            .consignment_t_co2e
            .map(|t| format!("{} t CO2e", show(t, 1))),
    );
    let (loaded, delivered) = (facts.loaded_on.map(day), facts.delivered_on.map(day));
    list.add(
        "Loaded",
        joined(&[loaded.as_deref(), facts.loaded_at.as_deref()], ", "),
    );
    list.add(
        "Delivered",
        joined(&[delivered.as_deref(), facts.delivered_at.as_deref()], ", "),
    );
    list.add(
        "Made in the period",
        facts.production_period.as_ref().and_then(days),
    );
    list.add("For use in", Some(facts.use_regions.join(", ")));
    list.add(
        "Counted nowhere else",
        facts.no_double_claim.as_ref().and_then(declared),
    );
    list.add(
        "Last carrier",
        facts.last_supplier_confirmation.as_ref().and_then(declared),
    );
    let upstream: Vec<String> = facts
        .upstream_statements
        .iter()
        .filter_map(|one| {
            let share = one.share_percent.map(tenth);
            joined(
                &[
                    one.statement_no.as_deref(),
                    one.issuer.as_deref(),
                    share.as_deref(),
                ],
                ", ",
            )
        })
        .collect();
    list.add("Rests on", Some(upstream.join("\n")));
    list.0
}

fn amount(facts: &StatementFacts) -> Option<String> {
    let quantity = facts.quantity.map(show_all)?;
    let unit = facts
        .quantity_unit
        .as_deref()
        .unwrap_or_default()
        .replace("m3", "m³");
    let mut said = format!("{quantity} {unit}");
    if let Some(degrees) = facts.temperature_c {
        said.push_str(&format!(" at {} °C", show_all(degrees)));
    }
    if let Some(pressure) = facts.pressure_kpa {
        said.push_str(&format!(", {} kPa", show_all(pressure)));
    }
    if let Some(by) = &facts.quantity_measured_by {
        said.push_str(&format!(", {by}"));
    }
    Some(said)
}

/// The fuel, its feedstock and the works.
pub(super) fn product(statement: &Statement) -> Vec<Fact> {
    let (facts, figures, pathway) = (&statement.facts, &statement.figures, &statement.pathway.document);
    let mut list = List::default();
    let strength = facts
        .strength_percent_mass
        .map(|share| format!("{} % mass", show_all(share)));
    let denaturant = facts
        .denaturant_percent
        .filter(|share| *share > 0.0)
        .map(|share| format!("denaturant {} % volume", show_all(share)));
    list.add(
        "Fuel",
        joined(
            &[
                facts.fuel_type.as_deref(),
                strength.as_deref(),
                denaturant.as_deref(),
            ],
            ", ",
        ),
    );
    let material = statement
        .data
        .materials
        .iter()
        .find(|one| one.id == pathway.feedstock);
    let own = pathway.materials.iter().find(|one| one.id == pathway.feedstock);
    let name = material
        .map(|one| one.name.as_str())
        .or(own.map(|one| one.name.as_str()))
        .unwrap_or(&pathway.feedstock);
    let class = facts.feedstock_class.map(|class| spaced(class.name()));
    let country = facts
        .feedstock_country
        .as_ref()
        .map(|country| format!("from {country}"));
    list.add(
        "Feedstock",
        joined(&[Some(name), class.as_deref(), country.as_deref()], ", "),
    );
    list.add(
        "Category",
        facts.category.map(|category| capital(&spaced(category.name()))),
    );
    list.add("Waste permit", facts.permit_no.clone());
    list.add("Works", facts.plant.as_ref().and_then(works));
    list.add("Made in", facts.production_country.clone());
    let asked = match figures.thresholds.as_slice() {
        [one] => Some(format!("so {} % or more is asked", show_all(one.percent))),
        _ => None,
    };
    let started = pathway.plant_started.map(day);
    if started.is_some() {
        list.add(
            "Works started",
            joined(&[started.as_deref(), asked.as_deref()], ", "),
        );
    }
    let sources: Vec<String> = facts
        .energy_sources
        .iter()
        .filter_map(|source| {
            let share = source.share_percent.map(tenth);
            joined(&[source.kind.as_deref(), share.as_deref()], ", ")
        })
        .collect();
    list.add("Heat and power", Some(sources.join("\n")));
    list.add(
        "Low indirect land-use risk",
        facts
            .low_iluc
            .map(|low| if low { "Yes" } else { "No" }.to_owned()),
    );
    list.add("Public support", facts.support.as_ref().and_then(declared));
    let litre = figures
        .derived
        .kg_co2e_per_l
        .map(|kg| format!("{} kg CO2e/L", show(kg, 3)));
    let kilo = format!("{} kg CO2e/kg", show(figures.derived.kg_co2e_per_kg, 3));
    list.add(
        "The same figure",
        joined(&[Some(kilo.as_str()), litre.as_deref()], "; "),
    );
    list.add("Far from the usual", facts.deviation_reason.clone());
    list.0
}

fn works(plant: &Plant) -> Option<String> {
    let at = match (plant.latitude, plant.longitude) {
        (Some(north), Some(east)) => Some(format!("{}° N, {}° E", show(north, 5), show(east, 5))),
        _ => None,
    };
    let address = place(plant.name.as_deref(), &plant.address, plant.country.as_deref());
    joined(&[address.as_deref(), at.as_deref()], "\n")
}

/// Mass balance, ratings and standards: part of the method.
pub(super) fn balance(facts: &StatementFacts, out: &mut Vec<Fact>) {
    let mut list = List::default();
    list.add("Mass balance", facts.mass_balance.as_ref().and_then(declared));
    list.add("Balance period", facts.balance_period.as_ref().and_then(days));
    list.add("Balance site", facts.site_id.clone());
    if let Some(dq) = &facts.dq {
        let rating =
            |word: &str, value: Option<f64>| value.map(|value| format!("{word} {}", show_all(value)));
        let (one, two, three) = (
            rating("technology", dq.technology),
            rating("place", dq.place),
            rating("time", dq.time),
        );
        let said = joined(&[one.as_deref(), two.as_deref(), three.as_deref()], ", ");
        list.add(
            "Ratings of data",
            said.map(|said| format!("{said} (1 is best, 5 worst)")),
        );
    }
    list.add("Standards", Some(facts.standards.join(", ")));
    list.add("Changed since", facts.change_note.clone());
    out.append(&mut list.0);
}

/// Who verified, and what came of it.
pub(super) fn verification(statement: &Statement) -> Vec<Fact> {
    let facts = &statement.facts;
    let mut list = List::default();
    let by = facts.verification.as_ref().and_then(|one| {
        let on = one.on.map(day);
        joined(
            &[one.by.as_deref(), one.accreditation.as_deref(), on.as_deref()],
            ", ",
        )
    });
    list.add(
        "Verified by",
        by.or_else(|| Some("Not verified by an accredited body".to_owned())),
    );
    list.add(
        "Assurance",
        facts.assurance_level.map(|level| spaced(level.name())),
    );
    list.add("Standards", Some(facts.verification_standards.join(", ")));
    if let Some(limit) = &facts.materiality {
        let grams = limit.g_co2e_per_mj.map(|g| format!("{} g CO2e/MJ", show_all(g)));
        let share = limit.percent.map(percent);
        list.add(
            "An error matters from",
            joined(&[grams.as_deref(), share.as_deref()], "; "),
        );
    }
    if let Some(opinion) = &facts.opinion {
        let kind = opinion.kind.map(|kind| spaced(kind.name()));
        list.add(
            "Opinion",
            joined(&[kind.as_deref(), opinion.limits.as_deref()], "; "),
        );
    }
    let open: Vec<String> = facts
        .audit_findings
        .iter()
        .filter_map(|finding| {
            let grade = finding.grade.map(|grade| spaced(grade.name()));
            let state = match finding.closed_on {
                Some(on) => format!("closed {}", day(on)),
                None => "open".to_owned(),
            };
            joined(
                &[
                    finding.number.as_deref(),
                    grade.as_deref(),
                    finding.text.as_deref(),
                    Some(&state),
                ],
                ", ",
            )
        })
        .collect();
    list.add("Auditors found", Some(open.join("\n")));
    list.0
}
