//! The picture in words, for those who do not see it.

use super::look::class;
use super::model::{Ladder, Part};
use crate::charts::text::{figure, plain};

/// Class and name of every counted part that has a name of its own, in drawing order.
pub(super) fn part_words() -> [(Part, &'static str, &'static str); 5] {
    [
        (Part::Fossil, "fossil CO2"),
        (Part::N2o, "N2O"),
        (Part::Ch4, "CH4"),
        (Part::Land, "CO2 of land"),
        (Part::Unsplit, "not split by gas"),
    ]
    .map(|(part, words)| (part, class(part, 1.0), words))
}

/// What a reader without the picture needs, in one breath. Not yet escaped.
pub(super) fn describe(ladder: &Ladder, net: f64) -> String {
    let counted: Vec<String> = ladder
        .stages
        .iter()
        .filter(|s| !s.uptake && !s.absent)
        .map(|s| format!("{} {}", s.name, figure(s.counted.sum())))
        .collect();
    let within = ladder.required.map_or(String::new(), |r| {
        format!(
            ", {} the {} that a saving of {} % allows",
            if net <= r.g { "within" } else { "above" },
            figure(r.g),
            plain(r.percent)
        )
    });
    format!(
        "Stages from field to wheel. Counted, in g CO2e per MJ: {}. Net {}{within}; {} is {}.{} The table has every figure.",
        counted.join("; "),
        figure(net),
        ladder.baseline.word,
        figure(ladder.baseline.g),
        crop(ladder)
    )
}

fn crop(ladder: &Ladder) -> String {
    let (taken_up, _) = ladder.crop_sums();
    if taken_up <= 0.0 {
        return String::new();
    }
    let back: Vec<String> = ladder
        .stages
        .iter()
        .filter_map(|s| Some((&s.name, s.crop.filter(|&g| g > 0.0)?)))
        .map(|(name, g)| format!("{name} ({})", figure(g)))
        .collect();
    let given_back = match back.split_last() {
        None => "none is given back".to_owned(),
        Some((one, [])) => format!("gives it back at {one}"),
        Some((last, others)) => format!("gives it back at {} and {last}", others.join(", ")),
    };
    let join = if back.is_empty() { "; " } else { " and " };
    let taken_up = figure(taken_up);
    format!(" Kept apart: the crop takes up {taken_up} g CO2{join}{given_back}.")
}
