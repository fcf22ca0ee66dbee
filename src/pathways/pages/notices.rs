//! What is told once after something was done: the new net, the change, and the stage that caused it.

use super::revision::moved;
use super::{Head, Notice, links};
use crate::core::documents::Assessment;
use crate::core::units::rounding::{round_half_away, show};

/// After a save.
pub fn saved(head: &Head, now: Option<&Assessment>, before: Option<&Assessment>) -> Notice {
    let number = head.revision;
    let what = format!("Saved as revision {number}.");
    let Some(now) = now else {
        return Notice {
            what,
            then: String::new(),
            back: None,
        };
    };
    let net = now.net.g_co2e_per_mj;
    let shown = show(net, 2);
    let Some(before) = before else {
        return Notice {
            what,
            then: format!("The net is {shown} g CO2e/MJ."),
            back: None,
        };
    };
    let earlier = number.saturating_sub(1);
    let change = net - before.net.g_co2e_per_mj;
    let step = show(change.abs(), 2);
    let then = if round_half_away(change, 2) == 0.0 {
        let inside = moved(Some(before), now);
        let within = match inside.first() {
            Some(first) => format!(
                " \u{201c}{}\u{201d} moved by {}, others made up for it.",
                first.name,
                signed(first.change)
            ),
            None => String::new(),
        };
        format!("The net is {shown} g CO2e/MJ, as in revision {earlier}.{within}")
    } else {
        let side = if change < 0.0 { "lower" } else { "higher" };
        format!(
            "The net is {shown} g CO2e/MJ, {step} {side} than revision {earlier}{}",
            cause(before, now, change)
        )
    };
    Notice {
        what,
        then,
        back: Some((
            format!("{}/revisions/{earlier}", links::pathway(&head.id)),
            format!("Look at revision {earlier}, or go back to it"),
        )),
    }
}

fn signed(change: f64) -> String {
    crate::core::units::rounding::show_change(change, 2)
}

/// The stage that moved most the same way, and how much of the change it is.
fn cause(before: &Assessment, now: &Assessment, change: f64) -> String {
    let stages = moved(Some(before), now);
    let Some(first) = stages
        .iter()
        .find(|stage| stage.change.signum() == change.signum())
    else {
        return ".".to_owned();
    };
    let verb = match (first.before, first.after, first.change < 0.0) {
        (None, _, _) => "came in",
        (_, None, _) => "went out",
        (_, _, true) => "fell",
        (_, _, false) => "rose",
    };
    if round_half_away(first.change, 2) == round_half_away(change, 2) {
        format!(": \u{201c}{}\u{201d} {verb} by as much.", first.name)
    } else {
        format!(
            ": \u{201c}{}\u{201d} {verb} by {}.",
            first.name,
            show(first.change.abs(), 2)
        )
    }
}

/// After the example was taken away, or brought.
pub fn examples(count: u64) -> Notice {
    let (what, then) = match count {
        0 => ("The example is gone.", String::new()),
        1 => ("The example is here:", "1 pathway, marked as such.".to_owned()),
        many => (
            "The example is here:",
            format!("{many} pathways, each marked as such."),
        ),
    };
    Notice {
        what: what.to_owned(),
        then,
        back: None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::pathways::pages::samples;

    #[test]
    fn a_save_names_the_net_the_change_and_the_stage() {
        let before = samples::assessment();
        let mut changed = samples::wheat();
        for stage in changed.stages.iter_mut().filter(|stage| stage.key == "depot") {
            stage.inputs.clear();
        }
        let now = samples::assess(&changed);
        let head = Head {
            revision: 15,
            ..samples::head()
        };
        let notice = saved(&head, Some(&now), Some(&before));
        assert_eq!(notice.what, "Saved as revision 15.");
        let step = show(before.net.g_co2e_per_mj - now.net.g_co2e_per_mj, 2);
        let net = show(now.net.g_co2e_per_mj, 2);
        let words = format!(
            "The net is {net} g CO2e/MJ, {step} lower than revision 14: \u{201c}Depot and stations\u{201d} fell by as much."
        );
        assert_eq!(notice.then, words);
        let same = saved(&head, Some(&before), Some(&before));
        assert!(same.then.ends_with("as in revision 14."), "{}", same.then);
    }
}
