//! What a browser posts: the recipe card of a stage, and the joining of two people's changes.

use serde_json::Value;
use wheelwort::core::documents::json;
use wheelwort::pathways::pages::card::{Do, Form, build, merge};

/// First line: the stage as JSON. The rest: the form, a field a line, `name=text`.
pub fn card(bytes: &[u8]) {
    let Ok(text) = std::str::from_utf8(bytes) else {
        return;
    };
    let (stage, form) = text.split_once('\n').unwrap_or(("{}", text));
    let Ok(stage) = json::parse(stage.as_bytes()) else {
        return;
    };
    let pairs = form
        .lines()
        .filter_map(|line| line.split_once('='))
        .map(|(name, text)| (name.to_owned(), text.to_owned()))
        .collect();
    let mut form = Form::of(pairs);
    form.settle_picks();
    let _ = Do::of(form.text("do"));
    let (built, _) = build::build(&stage, &form, &[]);
    let _ = build::shaped(&built, &form);
}

/// Three versions of a stage, one JSON a line: as it was, theirs, mine.
pub fn join(bytes: &[u8]) {
    let Ok(text) = std::str::from_utf8(bytes) else {
        return;
    };
    let mut versions = text.lines().map_while(|line| json::parse(line.as_bytes()).ok());
    let (Some(base), Some(theirs), Some(mine)) = (versions.next(), versions.next(), versions.next()) else {
        return;
    };
    let (joined, met) = merge::join(&base, &theirs, &mine);
    // Nobody else changed anything: what was typed stands as it is.
    if theirs == base {
        assert_eq!(joined, mine);
        assert!(met.is_empty());
    }
    if mine == base && theirs != Value::Null {
        assert!(
            met.iter().all(|met| !met.both),
            "nothing was typed, so nobody met anybody"
        );
    }
}
