//! What stands behind the figures of a pathway and is never computed with: meters with their readings, earlier periods of
//! the same works, audits that were passed.

use super::amount::Amount;
use jiff::civil::Date;
use serde::Serialize;
use utoipa::ToSchema;

/// A meter and what was read from it.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Meter {
    /// Unique in its stage: 1 to 64 of `A-Z a-z 0-9 . _ -`.
    pub id: String,
    /// What it measures, for people.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub what: Option<String>,
    /// Unit of the dial.
    pub unit: String,
    /// What one unit of the dial is, where the amount counts something else, such as 35.9 MJ a m3 of gas.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub per_unit: Option<Amount>,
    /// The model parameter that the meter gives, of inputs that name it and use a model.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub parameter: Option<String>,
    /// Readings of the dial, the earliest first.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub readings: Vec<Reading>,
    /// Periods with the dial at both ends, or with an estimate where the meter told nothing.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub periods: Vec<MeterPeriod>,
    /// Last day of the calibration.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = Date)]
    pub calibration_due: Option<Date>,
    /// Ids of files: certificate of the calibration, logs.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub evidence: Vec<String>,
    /// For people; never computed with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// The dial at the end of a day.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Reading {
    /// The day.
    #[schema(value_type = String, format = Date)]
    pub on: Date,
    /// What the dial shows, in the unit of the meter.
    pub value: f64,
    /// True for the first reading of a new dial, or after a stop: nothing counts between it and the one before.
    #[serde(skip_serializing_if = "std::ops::Not::not")]
    pub reset: bool,
    /// For people; never computed with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// A span of days of a meter, both days inside: two readings, or an estimate with a note.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct MeterPeriod {
    /// First day.
    #[schema(value_type = String, format = Date)]
    pub from: Date,
    /// Last day.
    #[schema(value_type = String, format = Date)]
    pub to: Date,
    /// The dial when the first day begins.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reading_from: Option<f64>,
    /// The dial when the last day ends.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reading_to: Option<f64>,
    /// In place of readings: what is taken for the span, in the unit of the meter; wants a note.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub estimated: Option<f64>,
    /// True where the dial begins anew.
    #[serde(skip_serializing_if = "std::ops::Not::not")]
    pub reset: bool,
    /// For people; never computed with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// An earlier period of the same works, for comparison.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct EarlierPeriod {
    /// First day.
    #[schema(value_type = String, format = Date)]
    pub from: Date,
    /// Last day.
    #[schema(value_type = String, format = Date)]
    pub to: Date,
    /// Output per intake as both are entered here, such as 380 L/t.
    pub r#yield: Amount,
    /// For people; never computed with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// An audit that a site passed.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Audit {
    /// Key of the stage that stands for the site; the whole pathway when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub stage: Option<String>,
    /// What it allows, such as `actual_values`.
    pub scope: AuditScope,
    /// Day it was passed.
    #[schema(value_type = String, format = Date)]
    pub passed_on: Date,
    /// Last day it holds.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = Date)]
    pub valid_to: Option<Date>,
    /// Who audited.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub body: Option<String>,
    /// Number of the certificate or report.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub number: Option<String>,
    /// Ids of files that back it.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub evidence: Vec<String>,
}

/// The skill that an audit looked at.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum AuditScope {
    /// Working out actual values.
    ActualValues,
    /// Mass balance.
    MassBalance,
}

/// A span of a meter: days, both inside, and what went through.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Span {
    /// First day.
    pub from: Date,
    /// Last day.
    pub to: Date,
    /// Dial at both ends; none for an estimate.
    pub dial: Option<(f64, f64)>,
    /// True where the dial begins anew.
    pub reset: bool,
    /// What went through, in the unit of the meter.
    pub amount: f64,
}

impl Meter {
    /// Its spans by their first day: between each two readings, and the periods. Between a reading and a reset there is none.
    pub fn spans(&self) -> Vec<Span> {
        let mut spans: Vec<Span> = Vec::with_capacity(self.readings.len() + self.periods.len());
        let mut begins_anew = false;
        for pair in self.readings.windows(2) {
            let [before, after] = pair else { continue };
            begins_anew |= before.reset;
            if after.reset {
                continue;
            }
            spans.push(Span {
                from: before.on.tomorrow().unwrap_or(before.on),
                to: after.on,
                dial: Some((before.value, after.value)),
                reset: begins_anew,
                amount: after.value - before.value,
            });
            begins_anew = false;
        }
        for period in &self.periods {
            let dial = period.reading_from.zip(period.reading_to);
            spans.push(Span {
                from: period.from,
                to: period.to,
                dial,
                reset: period.reset,
                amount: dial.map_or(period.estimated.unwrap_or(0.0), |(first, last)| last - first),
            });
        }
        spans.sort_by_key(|span| (span.from, span.to));
        spans
    }

    /// What went through from `first` to `last`; none unless its spans cover these days whole, without gap or overlap, and
    /// meet both ends.
    pub fn amount(&self, first: Date, last: Date) -> Option<f64> {
        let spans = self.spans();
        let inside = || spans.iter().filter(|span| span.from >= first && span.to <= last);
        let mut next = first;
        for span in inside() {
            if span.from != next {
                return None;
            }
            next = span.to.tomorrow().ok()?;
        }
        (next == last.tomorrow().ok()?).then(|| inside().map(|span| span.amount).sum())
    }
}

#[cfg(test)]
pub(crate) mod tests {
    use super::*;
    use jiff::civil::date;

    /// A meter with readings: day, dial, whether it begins anew.
    pub fn meter(readings: &[(Date, f64, bool)]) -> Meter {
        let readings = readings.iter().map(|&(on, value, reset)| Reading {
            on,
            value,
            reset,
            note: None,
        });
        Meter {
            id: "gas-3".to_owned(),
            what: None,
            unit: "m3".to_owned(),
            per_unit: None,
            parameter: None,
            readings: readings.collect(),
            periods: Vec::new(),
            calibration_due: None,
            evidence: Vec::new(),
            note: None,
        }
    }

    #[test]
    fn an_exchange_of_the_dial_loses_nothing() {
        let meter = meter(&[
            (date(2026, 9, 30), 100.0, false),
            (date(2027, 1, 18), 160.0, false),
            (date(2027, 1, 18), 0.0, true),
            (date(2027, 5, 31), 40.0, false),
        ]);
        assert_eq!(meter.amount(date(2026, 10, 1), date(2027, 5, 31)), Some(100.0));
        assert_eq!(meter.amount(date(2026, 10, 1), date(2027, 1, 18)), Some(60.0));
        assert_eq!(meter.amount(date(2026, 10, 1), date(2027, 3, 31)), None);
        assert!(meter.spans()[1].reset);
    }

    #[test]
    fn an_estimate_fills_a_stop() {
        let mut meter = meter(&[
            (date(2027, 2, 28), 10.0, false),
            (date(2027, 3, 12), 22.0, false),
            (date(2027, 3, 20), 22.0, true),
            (date(2027, 3, 31), 33.0, false),
        ]);
        let march = (date(2027, 3, 1), date(2027, 3, 31));
        assert_eq!(meter.amount(march.0, march.1), None);
        meter.periods.push(MeterPeriod {
            from: date(2027, 3, 13),
            to: date(2027, 3, 20),
            reading_from: None,
            reading_to: None,
            estimated: Some(8.0),
            reset: false,
            note: Some("mean of the other days".to_owned()),
        });
        assert_eq!(meter.amount(march.0, march.1), Some(31.0));
    }
}
