//! Laws that hold for any pathway.

use super::*;
use proptest::prelude::*;

fn stage() -> impl Strategy<Value = Rung> {
    let part = || prop_oneof![3 => Just(0.0), 4 => 0.0f64..30.0, 1 => -30.0f64..0.0, 1 => 0.0f64..0.1];
    let parts = [part(), part(), part(), part(), part()];
    (parts, proptest::option::of(0.0f64..60.0), "\\PC{0,24}").prop_map(|(parts, crop, name)| Rung {
        crop,
        ..rung(&name, parts)
    })
}

fn any_ladder() -> impl Strategy<Value = Ladder> {
    let stages = proptest::collection::vec(stage(), 1..15);
    let required = proptest::option::of(0.0f64..100.0);
    (stages, 0.0f64..150.0, required, 10.0f64..120.0).prop_map(|(mut stages, taken_up, percent, g)| {
        stages.insert(0, uptake(-taken_up));
        // one figure that is never zero, so that there is always something to draw
        stages.push(fossil("Works", 1.0));
        Ladder {
            baseline: Baseline {
                word: "petrol".to_owned(),
                g,
            },
            required: percent.map(|percent| Required {
                percent,
                g: g * (1.0 - percent / 100.0),
            }),
            ..ladder(stages)
        }
    })
}

fn form() -> impl Strategy<Value = Form> {
    prop_oneof![Just(Form::Wide), Just(Form::Print), Just(Form::Narrow)]
}

proptest! {
    #[test]
    fn places_are_linear_and_grow(ladder in any_ladder(), form in form(), a in -50.0f64..200.0, d in 0.01f64..50.0) {
        let scale = scale::Scale::of(&ladder, form.measures());
        prop_assert!(scale.x(a + d) > scale.x(a));
        let by = scale.x(a + d) - scale.x(a);
        prop_assert!((by - (scale.x(d) - scale.x(0.0))).abs() < 1e-9);
        prop_assert!((by - d * scale.k).abs() < 1e-9);
    }

    #[test]
    fn everything_that_is_summed_lies_inside(ladder in any_ladder(), form in form()) {
        let f = form.measures();
        let scale = scale::Scale::of(&ladder, f);
        let (low, high) = ladder.reach();
        prop_assert!(scale.x(low) >= f.pad - 1e-9);
        prop_assert!(scale.x(high) <= f.width - f.pad - f.gutter + 1e-9);
        if let Some(left) = scale.left {
            prop_assert!(left + scale.crop.0 * scale.k >= f.pad - 1e-9);
            prop_assert!(left <= scale.right);
        }
    }

    #[test]
    fn the_running_line_ends_in_the_wheel_at_the_net(ladder in any_ladder(), form in form()) {
        let svg = drawn(&ladder, form);
        let net: f64 = ladder.stages.iter().map(|s| s.counted.sum()).sum();
        let expected = scale::Scale::of(&ladder, form.measures()).x(net);
        let (run, wheel) = ends(&svg);
        prop_assert!((run - expected).abs() <= 0.051, "{} {}", run, expected);
        prop_assert!((run - wheel).abs() < 1e-9);
    }

    #[test]
    fn bars_of_a_stage_add_to_its_positive_sum(ladder in any_ladder(), form in form()) {
        let svg = drawn(&ladder, form);
        let f = form.measures();
        let scale = scale::Scale::of(&ladder, f);
        let rows: Vec<&Rung> = ladder.stages.iter().filter(|s| form != Form::Narrow || !s.uptake).collect();
        for (i, stage) in rows.iter().enumerate() {
            let y = f.top + (rows.len() - 1 - i) as f64 * f.pitch + f.bar_y;
            let width: f64 = svg
                .lines()
                .filter(|l| l.starts_with("<rect class=\"b ") && !l.contains("<text"))
                .filter(|l| !l.contains("b uptake") && !l.contains("b release"))
                .filter(|l| number(l, "y") == y && number(l, "x") >= scale.right - 0.006)
                .map(|l| number(l, "width"))
                .sum();
            let parts = stage.counted.parts().iter().filter(|p| p.1 > 0.0).count() as f64;
            let expected = stage.counted.positive() * scale.k;
            prop_assert!((width - expected).abs() <= parts, "{} {}", width, expected);
        }
    }

    #[test]
    fn no_two_labels_overlap(ladder in any_ladder(), form in form()) {
        let svg = drawn(&ladder, form);
        let spans: Vec<(f64, f64, f64)> = svg
            .lines()
            .filter(|l| l.contains("class=\"vlab "))
            .map(|l| {
                let text = l.split('>').nth(1).unwrap().trim_end_matches("</text");
                let (x, w) = (number(l, "x"), crate::charts::text::width(text, 12.5));
                let from = if attribute(l, "text-anchor") == "end" { x - w } else { x };
                (number(l, "y"), from, from + w)
            })
            .collect();
        for (i, a) in spans.iter().enumerate() {
            prop_assert!(a.1 >= 1.9 && a.2 <= form.measures().width - 1.9);
            for b in &spans[i + 1..] {
                let apart = (a.0 - b.0).abs() > 10.0 || a.2 + 3.8 <= b.1 || b.2 + 3.8 <= a.1;
                prop_assert!(apart, "{:?} {:?}", a, b);
            }
        }
    }

    #[test]
    fn in_line_ends_at_the_net_and_what_the_crop_leaves_open(ladder in any_ladder()) {
        let changed = in_line(&ladder);
        let net = |l: &Ladder| l.stages.iter().map(|s| s.counted.sum()).sum::<f64>();
        let open: f64 = ladder.stages.iter().filter_map(|s| s.crop).sum();
        prop_assert!((net(&changed) - net(&ladder) - open).abs() < 1e-9);
        prop_assert!(changed.stages.iter().all(|s| s.crop.is_none() && !s.uptake));
        prop_assert_eq!(changed.stages.len(), ladder.stages.len());
    }

    #[test]
    fn the_same_ladder_gives_the_same_text(ladder in any_ladder(), form in form()) {
        prop_assert_eq!(drawn(&ladder, form), drawn(&ladder.clone(), form));
    }

    #[test]
    fn whatever_the_figures_are_there_is_no_panic(
        g in proptest::collection::vec(any::<f64>(), 6),
        scale in proptest::option::of((any::<f64>(), any::<f64>())),
        form in form(),
    ) {
        let stages = vec![uptake(g[0]), gives_back(rung("Works", [g[1], g[2], 0.0, 0.0, 0.0]), g[3])];
        let baseline = Baseline { word: "petrol".to_owned(), g: g[4] };
        let required = Some(Required { percent: 60.0, g: g[5] });
        if let Ok(svg) = draw(&Ladder { baseline, required, scale, ..ladder(stages) }, form) {
            prop_assert!(!svg.contains("NaN") && !svg.contains("inf"));
        }
    }
}
