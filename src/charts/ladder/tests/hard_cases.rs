//! Cases that a simple drawing gets wrong: credits, missing stages, lines that coincide, nothing to draw.

use super::*;

fn works(name: &str, g: f64) -> Rung {
    gives_back(fossil(name, g), 35.6)
}

fn burning(g: f64) -> Rung {
    gives_back(fossil("Burning in engine", 0.0), g)
}

/// Case A: capture takes the net below zero.
fn negative_net() -> Ladder {
    ladder(vec![
        uptake(-106.9),
        rung("Growing", [2.0, 6.0, 0.1, 0.0, 0.3]),
        works("Fermentation", 0.5),
        rung("Capture and storage", [0.9, 0.0, 0.0, 0.0, -26.6]),
        fossil("Distillation", 3.6),
        burning(71.3),
    ])
}

/// Case B: change of land use dominates, the net passes petrol.
fn above_baseline() -> Ladder {
    ladder(vec![
        uptake(-106.9),
        rung("Change of land use", [0.0, 0.0, 0.0, 91.6, 0.0]),
        rung("Growing", [6.0, 12.7, 0.2, 0.0, 0.3]),
        fossil("Haul to works", 0.3),
        works("Works", 11.1),
        burning(71.3),
    ])
}

/// Case C: fourteen stages and the uptake.
fn fourteen_stages() -> Ladder {
    let mut stages = vec![uptake(-106.9)];
    stages.extend((1..=14).map(|i| fossil(&format!("Stage {i} with a rather long name"), 2.0)));
    stages[3] = rung("Soil carbon from better farming", [0.0, 0.0, 0.0, -4.0, 0.0]);
    stages[8].crop = Some(35.6);
    stages[14].crop = Some(71.3);
    ladder(stages)
}

/// Case D: one stage of the comparison is missing here, and carbon is left open.
fn missing_stage() -> Ladder {
    ladder(vec![
        uptake(-106.9),
        rung("Growing", [2.0, 4.6, 0.1, 0.0, 0.2]),
        Rung {
            name: "Drying and storage".to_owned(),
            absent: true,
            ..Rung::default()
        },
        gives_back(fossil("Works, metered as one", 22.6), 31.2),
        burning(71.3),
    ])
}

/// Case E: published sums only, no carbon.
fn defaults() -> Ladder {
    ladder(vec![
        rung("Growing, default", [0.0, 0.0, 0.0, 0.0, 9.6]),
        rung("Processing, default", [0.0, 0.0, 0.0, 0.0, 13.6]),
        rung("Transport, default", [0.0, 0.0, 0.0, 0.0, 2.3]),
    ])
}

fn labels(svg: &str) -> Vec<(&str, &str)> {
    let lines = svg.lines().filter(|l| l.contains("class=\"vlab "));
    lines
        .map(|l| (attribute(l, "class"), attribute(l, "text-anchor")))
        .collect()
}

#[test]
fn every_case_renders_in_every_form() {
    for case in [
        negative_net(),
        above_baseline(),
        fourteen_stages(),
        missing_stage(),
        defaults(),
        in_line(&negative_net()),
        in_line(&missing_stage()),
    ] {
        for form in FORMS {
            let svg = drawn(&case, form);
            assert!(svg.starts_with("<svg ") && svg.ends_with("</svg>"));
            assert!(!svg.contains("NaN") && !svg.contains("inf"), "{svg}");
        }
    }
}

#[test]
fn a_credit_moves_the_upright_and_takes_the_wheel_left_of_it() {
    let svg = drawn(&negative_net(), Form::Wide);
    let upright: f64 = attribute(of_class(&svg, "path", "rail")[1], "d")
        .strip_prefix('M')
        .and_then(|d| d.split(' ').next())
        .unwrap()
        .parse()
        .unwrap();
    let (run, wheel) = ends(&svg);
    assert!(run < upright && wheel < upright);
    let credit = of_class(&svg, "rect", "b co2e_unsplit");
    let credit = credit
        .iter()
        .max_by(|a, b| number(a, "width").total_cmp(&number(b, "width")));
    let end = number(credit.unwrap(), "x") + number(credit.unwrap(), "width");
    assert!((end - upright).abs() < 0.1, "{end} {upright}");
    assert!(svg.contains("\u{2212}25.7<"));
}

#[test]
fn a_net_above_the_baseline_swaps_the_sides_of_the_labels() {
    let svg = drawn(&above_baseline(), Form::Wide);
    assert_eq!(labels(&svg)[..2], [("vlab net", "end"), ("vlab req", "end")]);
    assert!(svg.contains("above the 37.6 that a saving of 60 % allows"));
    // the net has no room right of its line, which is the longest of the picture; it takes the other side
    let narrow = drawn(&above_baseline(), Form::Narrow);
    assert!(labels(&narrow).iter().any(|l| l.0 == "vlab net"));
    // the small stage keeps a sliver
    let slivers = of_class(&svg, "rect", "b co2_fossil");
    assert!(slivers.iter().all(|l| number(l, "width") >= 1.0));
}

#[test]
fn fourteen_stages_keep_their_row_height() {
    for (form, height) in [(Form::Wide, "666"), (Form::Print, "489"), (Form::Narrow, "774")] {
        let svg = drawn(&fourteen_stages(), form);
        let frame = attribute(svg.lines().next().unwrap(), "viewBox");
        assert_eq!(frame.rsplit(' ').next(), Some(height), "{form:?}");
    }
    assert!(drawn(&fourteen_stages(), Form::Wide).contains("\u{2026}</text>"));
}

#[test]
fn a_missing_stage_keeps_its_rung_and_leaves_the_line_straight() {
    let svg = drawn(&missing_stage(), Form::Wide);
    assert!(svg.contains(">not in this pathway</text>"));
    let y = number(of_class(&svg, "text", "name absent")[0], "y") - 22.5 + 9.0;
    let bars = svg
        .lines()
        .filter(|l| l.starts_with("<rect class=\"b ") && number(l, "y") == y);
    assert_eq!(bars.count(), 0);
    let turns: Vec<&str> = attribute(of_class(&svg, "path", "run")[0], "d")
        .split('H')
        .collect();
    let stop = |i: usize| turns[i].split('V').next().unwrap();
    assert_eq!(stop(1), stop(2));
    // and the carbon that is open is named
    assert!(svg.contains("4.40 not given back</text>"));
}

#[test]
fn open_carbon_is_named_above_half_a_percent_only() {
    for (burnt, named) in [
        (71.3, ""),
        (70.8, ""),
        (70.7, "not given back"),
        (73.0, "too much given back"),
    ] {
        let svg = drawn(
            &ladder(vec![uptake(-106.9), works("Works", 20.0), burning(burnt)]),
            Form::Wide,
        );
        let warned = of_class(&svg, "text", "val warn");
        assert_eq!(warned.len(), usize::from(!named.is_empty()), "{burnt}");
        assert!(warned.iter().all(|l| l.contains(named)));
    }
}

#[test]
fn without_carbon_the_left_part_goes() {
    let svg = drawn(&defaults(), Form::Wide);
    assert!(!svg.contains("carbon") && !svg.contains("taken up"));
    assert!(number(of_class(&svg, "text", "end")[0], "x") < 100.0);
    let with = scale::Scale::of(&wheat(), Form::Wide.measures());
    assert!(scale::Scale::of(&defaults(), Form::Wide.measures()).k > with.k);
    let narrow = drawn(&defaults(), Form::Narrow);
    assert!(narrow.contains("viewBox=\"0 0 360 230\""), "{narrow}");
}

#[test]
fn a_net_on_the_requirement_meets_it() {
    let svg = drawn(&ladder(vec![fossil("Works", 37.6)]), Form::Wide);
    assert_eq!(labels(&svg)[..2], [("vlab net", "end"), ("vlab req", "start")]);
    assert!(svg.contains("within the 37.6"));
}

#[test]
fn without_a_requirement_its_line_label_and_words_go() {
    let ladder = Ladder {
        required: None,
        ..wheat()
    };
    for form in FORMS {
        let svg = drawn(&ladder, form);
        assert!(!svg.contains("\"req\"") && !svg.contains("saving"));
        assert!(svg.contains("Net 31.4; petrol is 94.0."));
    }
}

#[test]
fn a_comparison_shares_one_scale() {
    let all = [wheat(), negative_net(), above_baseline()];
    let scale = common_scale(&all);
    let mut zeros = Vec::new();
    for ladder in all {
        let svg = drawn(&Ladder { scale, ..ladder }, Form::Narrow);
        zeros.push(
            attribute(of_class(&svg, "path", "rail")[0], "d")
                .split(' ')
                .next()
                .unwrap()
                .to_owned(),
        );
        zeros.push(
            attribute(of_class(&svg, "path", "pet")[0], "d")
                .split(' ')
                .next()
                .unwrap()
                .to_owned(),
        );
        assert!(!svg.contains("The crop\u{2019}s carbon</text>"));
    }
    assert!(zeros.chunks(2).all(|z| z == &zeros[..2]), "{zeros:?}");
    assert_eq!(common_scale(&[]), None);
}

#[test]
fn more_carbon_than_was_taken_up_stays_inside() {
    for stages in [
        vec![uptake(-50.0), works("Works", 20.0), burning(71.3)],
        vec![works("Works", 20.0), burning(71.3)],
    ] {
        for form in FORMS {
            let svg = drawn(&ladder(stages.clone()), form);
            for bar in svg.lines().filter(|l| l.starts_with("<rect class=\"b ")) {
                let (x, w) = (number(bar, "x"), number(bar, "width"));
                let width = form.measures().width;
                assert!(x >= 0.0 && x + w <= width, "{form:?} {bar}");
            }
        }
    }
}

#[test]
fn hostile_text_is_escaped() {
    let hostile = "</text><script>\"&'";
    let mut ladder = wheat();
    ladder.title = hostile.to_owned();
    ladder.id = hostile.to_owned();
    ladder.heading = Some(hostile.to_owned());
    ladder.baseline.word = hostile.to_owned();
    for stage in &mut ladder.stages {
        stage.name = hostile.to_owned();
    }
    for form in FORMS {
        let svg = drawn(&ladder, form);
        assert!(!svg.contains("<script"));
        assert_eq!(svg.matches("<text").count(), svg.matches("</text>").count());
    }
}

#[test]
fn a_head_stays_inside_when_a_credit_is_deep() {
    let deep = ladder(vec![works("Works", 5.0), fossil("Capture", -400.0)]);
    let svg = drawn(&deep, Form::Wide);
    let head = of_class(&svg, "text", "head")[1];
    let upright = scale::Scale::of(&deep, Form::Wide.measures()).right;
    assert!(number(head, "x") < upright - 10.0);
    let unit = crate::charts::text::width("g CO2e per MJ of fuel", 12.5);
    assert!(number(head, "x") + 57.0 + unit <= 734.1);
}

#[test]
fn a_baseline_of_nothing_is_refused() {
    // with nothing counted either, the narrow form would have no length to measure by
    let nothing = Ladder {
        baseline: Baseline {
            word: "petrol".to_owned(),
            g: 0.0,
        },
        required: None,
        ..ladder(vec![burning(71.3)])
    };
    for form in FORMS {
        assert_eq!(draw(&nothing, form), Err(NotDrawable::NoBaseline));
    }
}

#[test]
fn what_cannot_be_right_is_refused() {
    let refusal = |stages: Vec<Rung>| draw(&ladder(stages), Form::Wide).unwrap_err();
    assert_eq!(refusal(vec![]), NotDrawable::Nothing);
    assert_eq!(refusal(vec![uptake(-106.9)]), NotDrawable::Nothing);
    assert_eq!(refusal(vec![fossil("Works", 0.0)]), NotDrawable::Nothing);
    for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
        let named = NotDrawable::NotFinite("Works".to_owned());
        assert_eq!(refusal(vec![fossil("Works", bad)]), named);
        assert_eq!(
            refusal(vec![works("Works", 1.0), gives_back(fossil("Works", 1.0), bad)]),
            named
        );
        let baseline = Baseline {
            word: "petrol".to_owned(),
            g: bad,
        };
        assert!(draw(&Ladder { baseline, ..wheat() }, Form::Print).is_err());
        let required = Some(Required {
            percent: 60.0,
            g: bad,
        });
        assert!(draw(&Ladder { required, ..wheat() }, Form::Print).is_err());
        let scale = Some((0.0, bad));
        assert!(draw(&Ladder { scale, ..wheat() }, Form::Narrow).is_err());
    }
    let too_much = vec![fossil("Works", f64::MAX), fossil("More", f64::MAX)];
    assert!(matches!(refusal(too_much), NotDrawable::NotFinite(_)));
    let silent = |rung: Rung| NotDrawable::MustNotCount(rung.name.clone());
    for rung in [
        Rung {
            counted: counted([1.0, 0.0, 0.0, 0.0, 0.0]),
            ..uptake(-106.9)
        },
        Rung {
            absent: true,
            ..fossil("Works", 1.0)
        },
        Rung {
            absent: true,
            ..burning(71.3)
        },
    ] {
        assert_eq!(refusal(vec![fossil("Growing", 1.0), rung.clone()]), silent(rung));
    }
    let scale = Some((0.0, 50.0));
    assert_eq!(
        draw(&Ladder { scale, ..wheat() }, Form::Narrow),
        Err(NotDrawable::ScaleTooShort)
    );
}
