//! Reads meters, earlier periods and audits.

use crate::core::documents::pathway::{Intake, Output, Stage};
use crate::core::documents::problem::Problems;
use crate::core::documents::read_input::{amount, evidence};
use crate::core::documents::reader::{Fields, Place, unique};
use crate::core::documents::records::{Audit, AuditScope, EarlierPeriod, Meter, MeterPeriod, Reading};
use crate::core::units::{Quantity, parse_unit};
use jiff::civil::Date;
use serde_json::Value;
use std::collections::BTreeSet;

/// At most this many readings, and as many periods, of a meter: one a day for ten years.
const MOST_READINGS: usize = 4_000;

/// Reads the meters of a stage.
pub fn meters(fields: &mut Fields, at: &Place, problems: &mut Problems) -> Vec<Meter> {
    let meters = fields.list("meters", at, problems, meter);
    unique(
        meters.iter().map(|meter| meter.id.as_str()),
        &at.field("meters"),
        "id",
        problems,
    );
    meters
}

fn meter(value: &Value, at: &Place, problems: &mut Problems) -> Option<Meter> {
    let mut fields = Fields::open(value, at, problems)?;
    let id = fields.required_text("id", at, problems);
    let fits = |id: &str| {
        (1..=64).contains(&id.len())
            && id
                .bytes()
                .all(|b| b.is_ascii_alphanumeric() || matches!(b, b'.' | b'_' | b'-'))
    };
    if let Some(id) = id.as_deref().filter(|id| !fits(id)) {
        let detail = format!("\"{id}\" is not the id of a meter.");
        problems.add(at.field("id"), detail, "Use 1 to 64 of A-Z a-z 0-9 . _ and -.");
    }
    let unit = fields.required_text("unit", at, problems);
    if let Some(Err(error)) = unit.as_deref().map(parse_unit) {
        problems.add(at.field("unit"), error.to_string(), "Give the unit of the dial.");
    }
    for name in ["readings", "periods"] {
        let count = value.get(name).and_then(Value::as_array).map_or(0, Vec::len);
        if count > MOST_READINGS {
            let detail = format!("The meter has {count} {name}.");
            problems.add(at.field(name), detail, format!("Give at most {MOST_READINGS}."));
            return None;
        }
    }
    let meter = Meter {
        id: id.clone().unwrap_or_default(),
        what: fields.text("what", at, problems),
        unit: unit.clone().unwrap_or_default(),
        per_unit: fields.part("per_unit", at, problems, per_unit),
        parameter: fields.text("parameter", at, problems),
        readings: fields.list("readings", at, problems, reading),
        periods: fields.list("periods", at, problems, period),
        calibration_due: fields.day("calibration_due", at, problems),
        evidence: evidence(&mut fields, at, problems),
        note: fields.text("note", at, problems),
    };
    fields.close(at, problems);
    let list = at.field("readings");
    for (k, pair) in meter.readings.windows(2).enumerate() {
        if pair[1].on < pair[0].on || (pair[1].on == pair[0].on && !pair[1].reset) {
            let detail = format!(
                "The reading of {} stands after that of {}.",
                pair[1].on, pair[0].on
            );
            let remedy = "Put the readings in order of their days, one a day; only a new dial begins on the day of the old one's last reading.";
            problems.add(list.item(k + 1).field("on"), detail, remedy);
        }
    }
    id.and(unit).map(|_| meter)
}

fn per_unit(value: &Value, at: &Place, problems: &mut Problems) -> Option<crate::core::documents::Amount> {
    let amount = amount(value, at, problems)?;
    match Quantity::read(amount.value, &amount.unit) {
        Ok(_) if amount.value > 0.0 => Some(amount),
        Ok(_) => {
            let detail = "One unit of the dial is nothing.";
            problems.add(at.field("value"), detail, "Give a figure above 0.");
            None
        }
        Err(error) => {
            problems.add(at.field("unit"), error.to_string(), "Give a unit, such as MJ.");
            None
        }
    }
}

fn not_negative(name: &'static str, fields: &mut Fields, at: &Place, problems: &mut Problems) -> Option<f64> {
    let figure = fields.number(name, at, problems)?;
    if figure < 0.0 {
        let detail = format!("{figure} is below zero.");
        problems.add(at.field(name), detail, "Give what the dial shows.");
        return None;
    }
    Some(figure)
}

fn reading(value: &Value, at: &Place, problems: &mut Problems) -> Option<Reading> {
    let mut fields = Fields::open(value, at, problems)?;
    for name in ["on", "value"] {
        fields.need(name, at, problems);
    }
    let on = fields.day("on", at, problems);
    let figure = not_negative("value", &mut fields, at, problems);
    let reset = fields.flag("reset", at, problems).unwrap_or(false);
    let note = fields.text("note", at, problems);
    fields.close(at, problems);
    Some(Reading {
        on: on?,
        value: figure?,
        reset,
        note,
    })
}

/// Two days, both inside.
fn days(fields: &mut Fields, at: &Place, problems: &mut Problems) -> Option<(Date, Date)> {
    for name in ["from", "to"] {
        fields.need(name, at, problems);
    }
    let from = fields.day("from", at, problems);
    let to = fields.day("to", at, problems);
    let (from, to) = from.zip(to)?;
    if to < from {
        let detail = format!("The period ends on {to}, before it begins on {from}.");
        problems.add(at.field("to"), detail, "Swap the days.");
        return None;
    }
    Some((from, to))
}

fn period(value: &Value, at: &Place, problems: &mut Problems) -> Option<MeterPeriod> {
    let mut fields = Fields::open(value, at, problems)?;
    let days = days(&mut fields, at, problems);
    let reading_from = not_negative("reading_from", &mut fields, at, problems);
    let reading_to = not_negative("reading_to", &mut fields, at, problems);
    let estimated = not_negative("estimated", &mut fields, at, problems);
    let reset = fields.flag("reset", at, problems).unwrap_or(false);
    let note = fields.text("note", at, problems);
    match (
        fields.has("reading_from") && fields.has("reading_to"),
        fields.has("reading_from") || fields.has("reading_to"),
        fields.has("estimated"),
    ) {
        (true, _, false) => {}
        (_, false, true) if note.as_deref().is_some_and(|note| !note.trim().is_empty()) => {}
        (_, false, true) => problems.add(
            at.field("note"),
            "An estimate says what it rests on.",
            "Add a note.",
        ),
        _ => problems.add(
            at,
            "A period has its two readings or an estimate.",
            "Give reading_from and reading_to, or estimated with a note.",
        ),
    }
    fields.close(at, problems);
    let (from, to) = days?;
    Some(MeterPeriod {
        from,
        to,
        reading_from,
        reading_to,
        estimated,
        reset,
        note,
    })
}

/// Notes inputs that name a meter which their stage has not, or have nothing that it could give.
pub fn known_meters(stage: &Stage, at: &Place, problems: &mut Problems) {
    let known: BTreeSet<&str> = stage.meters.iter().map(|meter| meter.id.as_str()).collect();
    let inputs = at.field("inputs");
    for (k, input) in stage.inputs.iter().enumerate() {
        let Some(named) = &input.meter else { continue };
        let place = inputs.item(k);
        let place = place.field("meter");
        if input.gases.is_some() {
            let detail = "Gases in kg are read from no meter.";
            problems.add(
                place,
                detail,
                "Take \"meter\" out, or give an amount and a factor.",
            );
            continue;
        }
        for id in named.list().iter().filter(|id| !known.contains(id.as_str())) {
            let detail = format!("The stage has no meter \"{id}\".");
            problems.add(place, detail, "Add it to \"meters\" of the stage.");
        }
    }
}

/// Reads the earlier periods of a stage and holds their yields to what the stage takes and makes.
pub fn earlier_periods(
    fields: &mut Fields,
    output: Option<&Output>,
    intakes: &[Intake],
    at: &Place,
    problems: &mut Problems,
) -> Vec<EarlierPeriod> {
    let periods = fields.list("earlier_periods", at, problems, earlier);
    let made = output.and_then(|output| parse_unit(output.flow.unit.as_deref()?).ok());
    let taken = intakes
        .first()
        .and_then(|intake| parse_unit(intake.flow.unit.as_deref()?).ok());
    let list = at.field("earlier_periods");
    if let (false, true) = (periods.is_empty(), intakes.is_empty()) {
        let detail = "A stage that takes nothing of another has no yield.";
        problems.add(list, detail, "Put them on the works.");
        return periods;
    }
    let (Some(made), Some(taken)) = (made, taken) else {
        return periods;
    };
    let wanted = made.dimension.per(taken.dimension);
    for (k, period) in periods.iter().enumerate() {
        if Quantity::read_as(period.r#yield.value, &period.r#yield.unit, wanted).is_err() {
            let item = list.item(k);
            let item = item.field("yield");
            let detail = format!(
                "A yield in {} cannot be compared with this stage's output per intake.",
                period.r#yield.unit
            );
            let like = |unit: Option<&String>| unit.map_or("1", String::as_str).to_owned();
            let remedy = format!(
                "Give it in a unit like {}/{}.",
                like(output.and_then(|output| output.flow.unit.as_ref())),
                like(intakes.first().and_then(|intake| intake.flow.unit.as_ref()))
            );
            problems.add(item.field("unit"), detail, remedy);
        }
    }
    periods
}

fn earlier(value: &Value, at: &Place, problems: &mut Problems) -> Option<EarlierPeriod> {
    let mut fields = Fields::open(value, at, problems)?;
    let days = days(&mut fields, at, problems);
    fields.need("yield", at, problems);
    let yielded = fields.part("yield", at, problems, amount);
    if yielded.as_ref().is_some_and(|amount| amount.value <= 0.0) {
        let place = at.field("yield");
        problems.add(
            place.field("value"),
            "A yield is above zero.",
            "Check the figure.",
        );
    }
    let note = fields.text("note", at, problems);
    fields.close(at, problems);
    let (from, to) = days?;
    Some(EarlierPeriod {
        from,
        to,
        r#yield: yielded?,
        note,
    })
}

/// Reads one audit.
pub fn audit(value: &Value, at: &Place, problems: &mut Problems) -> Option<Audit> {
    let mut fields = Fields::open(value, at, problems)?;
    let scopes = [
        ("actual_values", AuditScope::ActualValues),
        ("mass_balance", AuditScope::MassBalance),
    ];
    for name in ["scope", "passed_on"] {
        fields.need(name, at, problems);
    }
    let stage = fields.text("stage", at, problems);
    let scope = fields.word("scope", &scopes, at, problems);
    let passed_on = fields.day("passed_on", at, problems);
    let valid_to = fields.day("valid_to", at, problems);
    let body = fields.text("body", at, problems);
    let number = fields.text("number", at, problems);
    let evidence = evidence(&mut fields, at, problems);
    fields.close(at, problems);
    if let (Some(passed), Some(last)) = (passed_on, valid_to)
        && last < passed
    {
        let detail = format!("The audit of {passed} holds until {last}: no day.");
        problems.add(at.field("valid_to"), detail, "Give the last day it holds.");
    }
    Some(Audit {
        stage,
        scope: scope?,
        passed_on: passed_on?,
        valid_to,
        body,
        number,
        evidence,
    })
}

/// Notes audits of stages that are not there.
pub fn known_stages(audits: &[Audit], stages: &[Stage], at: &Place, problems: &mut Problems) {
    let list = at.field("audits");
    for (k, audit) in audits.iter().enumerate() {
        if let Some(key) = &audit.stage
            && !stages.iter().any(|stage| stage.key == *key)
        {
            let item = list.item(k);
            let detail = format!("There is no stage \"{key}\".");
            let remedy = "Name a stage, or leave it out for the whole pathway.";
            problems.add(item.field("stage"), detail, remedy);
        }
    }
}
