//! Every parser under random bytes that follow the coverage (libFuzzer). One program: `FUZZ_TARGET` names the parser,
//! `tests/fuzz/run` runs them all. A new parser is a line in `TARGETS` and, if the folder names no seeds for it, a line
//! there. A parser may refuse whatever it likes; what it accepts must hold what its target asserts.
#![no_main]

mod forms;
mod targets;

use std::sync::OnceLock;

type Target = fn(&[u8]);

/// Name and parser.
const TARGETS: &[(&str, Target)] = &[
    ("pathway", targets::pathway),
    ("blend", targets::blend),
    ("unit", targets::unit),
    ("figure", targets::figure),
    ("rule_set_toml", targets::rule_set_toml),
    ("rule_set_json", targets::rule_set_json),
    ("settings", targets::settings),
    ("form_card", forms::card),
    ("join", forms::join),
];

fn chosen() -> Target {
    static CHOSEN: OnceLock<Target> = OnceLock::new();
    *CHOSEN.get_or_init(|| {
        let name = std::env::var("FUZZ_TARGET").unwrap_or_default();
        let found = TARGETS.iter().find(|(known, _)| *known == name);
        match found {
            Some((_, target)) => *target,
            None => {
                // Not a crash to look into: a wrong name, or a question for the list.
                for (known, _) in TARGETS {
                    println!("{known}");
                }
                std::process::exit(if name == "list" { 0 } else { 2 });
            }
        }
    })
}

libfuzzer_sys::fuzz_target!(|bytes: &[u8]| chosen()(bytes));
