//! Group C: meters. Readings do not run backwards (C-13), spans meet without gap or overlap and cover the period (C-14), the
//! calibration holds to its end (C-15). An amount that is not what its meter gives is refused when the pathway is worked out.

use super::{Subject, finding};
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::pathway::Period;
use crate::core::documents::records::{Meter, Span};
use crate::core::units::rounding::plain;
use jiff::civil::Date;

/// Runs the checks.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    let period = &subject.resolved.pathway.period;
    for stage in &subject.resolved.stages {
        let key = &stage.document.key;
        for meter in &stage.document.meters {
            findings.extend(forwards(key, meter));
            findings.extend(no_gaps(key, meter, period));
            findings.extend(calibrated(key, meter, period));
        }
    }
}

fn field(meter: &Meter) -> String {
    format!("meters.{}", meter.id)
}

/// C-13: the dial never runs backwards unless a reset is recorded, inside a span and from one to the next.
pub fn forwards(stage: &str, meter: &Meter) -> Option<Finding> {
    let mut before: Option<f64> = None;
    for span in meter.spans() {
        let Some((first, last)) = span.dial else {
            before = None;
            continue;
        };
        let backwards = match before.filter(|_| !span.reset) {
            Some(before) if first < before => Some((before, first)),
            _ if last < first => Some((first, last)),
            _ => None,
        };
        if let Some((a, b)) = backwards {
            let message = format!(
                "Meter {} shows {} after {}, in the days to {}.",
                meter.id,
                plain(b),
                plain(a),
                span.to
            );
            let remedy = "Record a reset or correct the reading.";
            return Some(finding(
                "C-13",
                Severity::Block,
                stage,
                &field(meter),
                message,
                remedy,
            ));
        }
        before = Some(last);
    }
    None
}

/// C-14, at a meter.
fn gap(stage: &str, meter: &Meter, message: String, remedy: &str) -> Finding {
    finding("C-14", Severity::Block, stage, &field(meter), message, remedy)
}

/// C-14: the spans of a meter meet without gap and without overlap, and their ends are those of the period.
pub fn no_gaps(stage: &str, meter: &Meter, period: &Period) -> Vec<Finding> {
    let spans: Vec<Span> = meter
        .spans()
        .into_iter()
        .filter(|span| span.to >= period.from && span.from <= period.to)
        .collect();
    let mut found = Vec::new();
    let mut say = |what: &str, from: Date, to: Date| {
        let message = format!("Meter {} {what} from {from} to {to}.", meter.id);
        let remedy = "Correct the days, or enter an estimate with a note.";
        found.push(gap(stage, meter, message, remedy));
    };
    let mut next = period.from;
    for (k, span) in spans.iter().enumerate() {
        if span.from > next {
            say("has a gap", next, span.from.yesterday().unwrap_or(span.from));
        } else if span.from < next {
            match k {
                0 => say(
                    "was not read as the period began: one span runs",
                    span.from,
                    span.to,
                ),
                _ => say(
                    "counts twice",
                    span.from,
                    next.yesterday().unwrap_or(next).min(span.to),
                ),
            }
        }
        next = next.max(span.to.tomorrow().unwrap_or(span.to));
    }
    match spans.last() {
        Some(last) if last.to > period.to => {
            say(
                "was not read as the period ended: one span runs",
                last.from,
                last.to,
            );
        }
        _ if next <= period.to => say("has a gap", next, period.to),
        _ => {}
    }
    for pair in spans.windows(2) {
        let [before, after] = pair else { continue };
        let joined = before.to.tomorrow().is_ok_and(|day| day == after.from);
        if let (Some((_, last)), Some((first, _))) = (before.dial, after.dial)
            && joined
            && !after.reset
            && first > last
        {
            let message = format!(
                "Meter {} ends {} at {} and begins {} at {}: what lies between is in no span.",
                meter.id,
                before.to,
                plain(last),
                after.from,
                plain(first)
            );
            let remedy = "Correct the readings, or record a reset.";
            found.push(gap(stage, meter, message, remedy));
        }
    }
    found
}

/// C-15: the calibration holds to the end of the period. A meter without a day asks nothing.
pub fn calibrated(stage: &str, meter: &Meter, period: &Period) -> Option<Finding> {
    let due = meter.calibration_due.filter(|due| *due < period.to)?;
    let message = format!("Calibration of {} ran out on {due}.", meter.id);
    let remedy = "Attach the new certificate or give the reason.";
    Some(finding(
        "C-15",
        Severity::Warn,
        stage,
        &field(meter),
        message,
        remedy,
    ))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::core::documents::records::MeterPeriod;
    use crate::core::documents::records::tests::meter;
    use jiff::civil::date;

    fn period() -> Period {
        Period {
            from: date(2027, 3, 1),
            to: date(2027, 3, 31),
            kind: None,
        }
    }

    fn span(from: i8, to: i8, dial: (f64, f64)) -> MeterPeriod {
        MeterPeriod {
            from: date(2027, 3, from),
            to: date(2027, 3, to),
            reading_from: Some(dial.0),
            reading_to: Some(dial.1),
            estimated: None,
            reset: false,
            note: None,
        }
    }

    #[test]
    fn a_dial_runs_forwards() {
        let (start, end) = (date(2027, 2, 28), date(2027, 3, 31));
        assert_eq!(
            forwards("works", &meter(&[(start, 5.0, false), (end, 5.0, false)])),
            None
        );
        let back = forwards("works", &meter(&[(start, 5.0, false), (end, 4.0, false)])).unwrap();
        assert_eq!((back.id.as_str(), back.field.as_str()), ("C-13", "meters.gas-3"));
        assert!(back.message.contains("shows 4 after 5"), "{}", back.message);
        let new = [(start, 5.0, false), (start, 0.0, true), (end, 4.0, false)];
        assert_eq!(forwards("works", &meter(&new)), None);
        let mut periods = meter(&[]);
        periods.periods = vec![span(1, 15, (10.0, 20.0)), span(16, 31, (19.0, 30.0))];
        assert!(
            forwards("works", &periods)
                .unwrap()
                .message
                .contains("shows 19 after 20")
        );
        periods.periods[1].reset = true;
        assert_eq!(forwards("works", &periods), None);
    }

    #[test]
    fn spans_meet_and_cover_the_period() {
        let whole = [
            (date(2027, 2, 28), 5.0, false),
            (date(2027, 3, 12), 6.0, false),
            (date(2027, 3, 31), 9.0, false),
        ];
        assert!(no_gaps("works", &meter(&whole), &period()).is_empty());
        let late = no_gaps("works", &meter(&whole[1..]), &period());
        assert!(
            late[0]
                .message
                .contains("has a gap from 2027-03-01 to 2027-03-12"),
            "{late:?}"
        );
        let early = no_gaps("works", &meter(&whole[..2]), &period());
        assert!(
            early[0].message.contains("from 2027-03-13 to 2027-03-31"),
            "{early:?}"
        );
        let beyond = [(date(2027, 2, 10), 5.0, false), (date(2027, 3, 31), 9.0, false)];
        assert!(
            no_gaps("works", &meter(&beyond), &period())[0]
                .message
                .contains("as the period began")
        );
        assert_eq!(no_gaps("works", &meter(&[]), &period()).len(), 1);
        let mut periods = meter(&[]);
        periods.periods = vec![span(1, 15, (10.0, 20.0)), span(15, 31, (20.0, 30.0))];
        let twice = no_gaps("works", &periods, &period());
        assert!(
            twice[0]
                .message
                .contains("counts twice from 2027-03-15 to 2027-03-15"),
            "{twice:?}"
        );
        periods.periods[1] = span(16, 31, (21.0, 30.0));
        assert!(
            no_gaps("works", &periods, &period())[0]
                .message
                .contains("in no span")
        );
    }

    #[test]
    fn a_calibration_holds_to_the_end() {
        let mut meter = meter(&[]);
        assert_eq!(calibrated("works", &meter, &period()), None);
        meter.calibration_due = Some(date(2027, 3, 31));
        assert_eq!(calibrated("works", &meter, &period()), None);
        meter.calibration_due = Some(date(2027, 3, 30));
        assert_eq!(calibrated("works", &meter, &period()).unwrap().id, "C-15");
    }
}
