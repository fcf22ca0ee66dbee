//! The drawings of the reference case, letter by letter. The files in tests/snapshots were written once by our own
//! reference drawing program, apart from this code.

use super::*;

macro_rules! golden {
    ($name:literal) => {
        include_str!(concat!("../../../../tests/snapshots/ladder_", $name, ".svg")).trim_end()
    };
}

fn check(ladder: &Ladder, form: Form, golden: &str) {
    let svg = drawn(ladder, form);
    for (drawn, golden) in svg.lines().zip(golden.lines()) {
        assert_eq!(drawn, golden);
    }
    assert_eq!(svg, golden);
}

#[test]
fn wide() {
    check(&wheat(), Form::Wide, golden!("wide"));
}

#[test]
fn print() {
    check(&wheat(), Form::Print, golden!("print"));
}

#[test]
fn narrow() {
    check(&wheat(), Form::Narrow, golden!("narrow"));
}

#[test]
fn in_line_with_the_crop_carbon() {
    let ladder = in_line(&wheat());
    check(&ladder, Form::Wide, golden!("in_line_wide"));
    check(&ladder, Form::Print, golden!("in_line_print"));
    check(&ladder, Form::Narrow, golden!("in_line_narrow"));
}

#[test]
fn measures_of_the_worked_example() {
    for (form, k, left, right, net, required, baseline) in [
        (Form::Wide, 2.81735, Some(303.17), 439.17, 527.67, 545.10, 704.00),
        (Form::Print, 2.81735, Some(303.17), 439.17, 527.67, 545.10, 704.00),
        (Form::Narrow, 3.08511, None, 12.0, 108.91, 128.00, 302.00),
    ] {
        let scale = scale::Scale::of(&wheat(), form.measures());
        let near = |a: f64, b: f64, by: f64| assert!((a - b).abs() <= by, "{form:?}: {a} {b}");
        near(scale.k, k, 0.000_005);
        near(scale.right, right, 0.005);
        near(scale.x(31.4115), net, 0.005);
        near(scale.x(37.6), required, 0.005);
        near(scale.x(94.0), baseline, 0.005);
        assert_eq!(scale.left.map(|l| (l * 100.0).round() / 100.0), left);
    }
}
