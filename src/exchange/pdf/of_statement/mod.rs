//! A statement document as a sheet: which of its facts and figures stand where, in the decimals of a paper.

mod annex;
mod say;
mod tables;
mod who;

use super::sheet::{Answer, Check, Day, Fact, Picture, Sheet, Signature, TermRow, Terms};
use crate::core::documents::statement::{Person, Statement};
use crate::core::domain::Term;
use crate::core::units::rounding::{decimals_against, show, show_all};
use say::{Sources, capital, day, gases, grams, instant, percent};

/// What stands on the paper and is not in the statement.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Beside {
    /// The ladder in its print form, see [`Picture::of_ladder`].
    pub ladder: Option<Picture>,
    /// The public address where statements are checked; empty where there is none.
    pub address: String,
    /// What became of the statement since: that it is replaced or withdrawn, and by what.
    pub notices: Vec<String>,
}

impl Sheet {
    /// The sheet of an issued statement.
    pub fn of(statement: &Statement, beside: Beside) -> Sheet {
        let mut sources = Sources::default();
        let issued = jiff::tz::Offset::UTC.to_datetime(statement.issued_at).date();
        Sheet {
            title: "Greenhouse-gas statement for fuel ethanol".to_owned(),
            number: statement.statement_no.clone(),
            version: statement.version,
            hash: statement.hash.trim_start_matches("sha256:").to_owned(),
            day: Day {
                year: u16::try_from(issued.year()).unwrap_or(1),
                month: u8::try_from(issued.month()).unwrap_or(1),
                day: u8::try_from(issued.day()).unwrap_or(1),
            },
            dated: format!("issued {}", day(issued)),
            program: statement.program.clone(),
            example: statement.is_example(),
            notices: notices(statement, beside.notices),
            answer: answer(statement),
            parties: who::parties(statement),
            product: who::product(statement),
            terms: terms(statement),
            method: method(statement),
            ladder: beside.ladder,
            stages: tables::stages(statement),
            carbon: tables::carbon(statement),
            land: tables::land(statement),
            factors: tables::factors(statement, &mut sources),
            findings: tables::findings(statement),
            not_covered: not_covered(statement),
            verification: who::verification(statement),
            signatures: vec![
                signed(&statement.submitted_by, "submitted"),
                signed(&statement.approved_by, "approved"),
            ],
            check: Check {
                address: beside.address,
                how: format!(
                    "To check this paper, give the file {0}.json to the page that the code leads to, or run: wheelwort verify {0}.json",
                    statement.statement_no
                ),
                key: statement.signature.key_id.clone(),
                keep: format!("Keep the records until {}", day(statement.keep_until)),
            },
            cautions: statement.words.cautions.clone(),
            annex: annex::workings(statement, &mut sources),
            sources: sources.list(),
        }
    }
}

fn notices(statement: &Statement, mut since: Vec<String>) -> Vec<String> {
    for earlier in &statement.supersedes {
        since.push(format!("Replaces {}: {}", earlier.statement_no, earlier.reason));
    }
    since
}

fn signed(person: &Person, did: &str) -> Signature {
    let who = match &person.role {
        Some(role) => format!("{}, {role}", person.name),
        None => person.name.clone(),
    };
    Signature {
        who,
        did: format!("{did} {}", instant(person.at)),
    }
}

fn answer(statement: &Statement) -> Answer {
    let figures = &statement.figures;
    let (net, baseline) = (figures.net_g_co2e_per_mj, figures.comparator_g_co2e_per_mj);
    // With the start of the works unknown every threshold is listed and none can be decided.
    let met = figures.thresholds.iter().filter(|one| one.met);
    let strictest = met.max_by(|a, b| a.percent.total_cmp(&b.percent));
    let verdict = match (strictest, figures.thresholds.as_slice()) {
        (Some(met), _) => Some((
            format!("meets {}\u{a0}%", show_all(met.percent)),
            met.percent,
            true,
        )),
        (None, [one]) => Some((
            format!("misses {}\u{a0}%", show_all(one.percent)),
            one.percent,
            false,
        )),
        (None, _) => None,
    };
    let edge = verdict.as_ref().map(|&(_, edge, _)| edge);
    let decimals = |saving: f64| edge.map_or(2, |edge| decimals_against(saving, edge, 2));
    let mut note = format!(
        "For {}. Compared with {}, {} g CO2e/MJ.",
        figures.declared_unit,
        baseline_words(&figures.comparator_word),
        show_all(baseline)
    );
    if let Some(saving) = figures.saving_percent.filter(|_| verdict.is_some()) {
        note.push_str(&format!(
            " Decided on the unrounded saving, {} %.",
            show(saving, 4)
        ));
    }
    Answer {
        net: grams(net),
        unit: "g\u{a0}CO2e/MJ".to_owned(),
        saving: figures
            .saving_percent
            .map(|saving| below(saving, decimals(saving), &figures.comparator_word)),
        meets: verdict.as_ref().is_none_or(|&(_, _, met)| met),
        verdict: verdict.map(|(words, ..)| words),
        note,
    }
}

/// "petrol", "the fossil fuel comparator".
fn baseline_words(word: &str) -> String {
    if word.ends_with("comparator") {
        format!("the {word}")
    } else {
        word.to_owned()
    }
}

/// "65.01 % below petrol", or above it.
fn below(saving: f64, decimals: u8, baseline: &str) -> String {
    let word = baseline_words(baseline);
    let side = if saving < 0.0 { "above" } else { "below" };
    format!("{}\u{a0}% {side} {word}", show(saving.abs(), decimals))
}

fn terms(statement: &Statement) -> Terms {
    let figures = &statement.figures;
    let (net, baseline) = (figures.net_g_co2e_per_mj, figures.comparator_g_co2e_per_mj);
    let rows = figures.terms.iter().enumerate().map(|(at, line)| {
        let less = matches!(line.term, Term::Esca | Term::Eccs | Term::Eccr);
        let sign = match (at, less) {
            (0, _) => "",
            (_, true) => "\u{2212}",
            (_, false) => "+",
        };
        // Entries are signed contributions; the sum writes deductions as positive figures that are taken off.
        let value = if less {
            -line.g_co2e_per_mj
        } else {
            line.g_co2e_per_mj
        };
        TermRow {
            sign: sign.to_owned(),
            term: line.term.name().to_owned(),
            holds: capital(&line.what),
            kind: line.value_kind.clone(),
            value: grams(value),
        }
    });
    let mut notes = vec![statement.words.rounding.clone()];
    if let Some(iluc) = &figures.iluc_g_per_mj {
        notes.push(format!(
            "Beside the result, not inside it: indirect land-use change, provisional, {} {} ({}).",
            show_all(iluc.value),
            iluc.unit,
            iluc.source
        ));
    }
    if let Some(with) = &figures.with_margin {
        notes.push(format!(
            "With a margin of {} g CO2e/MJ that the issuer added on purpose: {} g CO2e/MJ.",
            grams(with.margin_g_per_mj),
            grams(with.g_co2e_per_mj)
        ));
    }
    if figures.e_u_not_counted_g_co2e_per_mj != 0.0 {
        let not = grams(figures.e_u_not_counted_g_co2e_per_mj);
        notes.push(format!(
            "CH4 and N2O of use, counted as zero by the rule: {not} g CO2e/MJ."
        ));
    }
    Terms {
        rows: rows.collect(),
        net: grams(net),
        unit: "g CO2e/MJ".to_owned(),
        saving: figures.saving_percent.map_or_else(String::new, |saving| {
            let base = show_all(baseline);
            let minus = if net < 0.0 { "+" } else { "\u{2212}" };
            format!(
                "({base} {minus} {}) / {base} = {}",
                grams(net.abs()),
                percent(saving)
            )
        }),
        notes,
    }
}

fn method(statement: &Statement) -> Vec<Fact> {
    let (figures, facts, data) = (&statement.figures, &statement.facts, &statement.data);
    let set = &data.gwp_set;
    let mut out = vec![
        Fact::new(
            "Rule set",
            format!("{}: {}", data.rule_set.title, statement.words.rule_set_text),
        ),
        Fact::new(
            "Gas weights",
            format!(
                "CO2 1, CH4 {}, N2O {} ({})",
                say::either(set.ch4_fossil, set.ch4_biogenic),
                show_all(set.n2o),
                set.source
            ),
        ),
        Fact::new(
            "Heating value",
            format!(
                "Lower: {} {} ({}). {}",
                show_all(figures.heating_value.arithmetic.value),
                figures.heating_value.arithmetic.unit,
                figures.heating_value.arithmetic.source,
                figures.heating_value.water
            ),
        ),
    ];
    let sharing: Vec<String> = figures.allocation.iter().map(say::sharing).collect();
    if !sharing.is_empty() {
        out.push(Fact::new("Sharing", sharing.join("\n")));
    }
    if let Some(factor) = &figures.conversion_factor {
        let kg = show(factor.kg_fuel_per_kg_feedstock, 4);
        out.push(Fact::new(
            "Fuel from feedstock",
            format!("{kg} kg pure ethanol per kg {}", factor.feedstock),
        ));
    }
    let editions: Vec<String> = data
        .editions
        .iter()
        .map(|edition| format!("{}: {}", edition.id, edition.title))
        .collect();
    if !editions.is_empty() {
        out.push(Fact::new("Editions", editions.join("\n")));
    }
    let period = &statement.pathway.document.period;
    out.push(Fact::new(
        "Data period",
        format!("{} to {}", day(period.from), day(period.to)),
    ));
    let quality = &figures.data_quality;
    out.push(Fact::new(
        "Data quality",
        format!(
            "{} of the result on own figures, {} estimated",
            say::tenth(quality.primary_data_percent),
            say::tenth(quality.estimated_percent)
        ),
    ));
    out.push(Fact::new("Uncertainty", figures.uncertainty.text.clone()));
    out.push(Fact::new("Gases of the result", gases(&figures.gases_g_per_mj)));
    who::balance(facts, &mut out);
    out
}

fn not_covered(statement: &Statement) -> Vec<String> {
    let facts = &statement.facts;
    let mut out = vec![statement.words.boundary.clone()];
    let left_out = facts.cutoff_percent.map(|share| {
        let why = facts
            .cutoff_note
            .as_deref()
            .map_or_else(String::new, |note| format!(": {note}"));
        format!("Left out besides: {} of the emissions{why}.", say::tenth(share))
    });
    out.extend(left_out);
    out
}
