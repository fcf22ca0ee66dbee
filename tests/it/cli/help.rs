//! Help that teaches, and a command line that refuses slips.

use super::run;

#[test]
fn help_shows_examples_and_exit_codes() {
    for command in [
        &["--help"][..],
        &["serve", "--help"],
        &["demo", "--help"],
        &["settings", "--help"],
        &["health", "--help"],
        &["evaluate", "--help"],
        &["check", "--help"],
        &["backup", "--help"],
        &["restore", "--help"],
        &["verify", "--help"],
    ] {
        let output = run(command, b"");
        let text = String::from_utf8(output.stdout).unwrap();
        assert_eq!(output.status.code(), Some(0));
        assert!(
            text.contains("Examples:") && text.contains("Exit codes:"),
            "{command:?}: {text}"
        );
    }
}

#[test]
fn a_wrong_command_line_ends_with_2() {
    for wrong in [
        &["serve", "--colour"][..],
        &["paint"],
        &["evaluate"],
        &["verify"],
        &["serve", "--listen", "localhost"],
        &[],
    ] {
        let output = run(wrong, b"");
        assert_eq!(
            (output.status.code(), output.stdout.len()),
            (Some(2), 0),
            "{wrong:?}"
        );
        assert!(!output.stderr.is_empty(), "{wrong:?}");
    }
}

#[test]
fn the_description_is_printed() {
    let output = run(&["openapi"], b"");
    let description: serde_json::Value = serde_json::from_slice(&output.stdout).expect("JSON");
    assert_eq!(
        (output.status.code(), description["openapi"].as_str()),
        (Some(0), Some("3.1.0"))
    );
}
