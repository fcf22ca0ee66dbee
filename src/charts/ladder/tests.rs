//! The ladder against our reference drawing, its hard cases and its laws.

mod golden;
mod hard_cases;
mod laws;

use super::*;

/// Fossil CO2, N2O, CH4, CO2 of land, not split: g CO2e/MJ.
fn counted([co2_fossil, n2o, ch4, co2_land, co2e_unsplit]: [f64; 5]) -> Counted {
    Counted {
        co2_fossil,
        n2o,
        ch4,
        co2_land,
        co2e_unsplit,
        co2_biogenic: 0.0,
    }
}

fn rung(name: &str, parts: [f64; 5]) -> Rung {
    Rung {
        name: name.to_owned(),
        counted: counted(parts),
        ..Rung::default()
    }
}

fn fossil(name: &str, g: f64) -> Rung {
    rung(name, [g, 0.0, 0.0, 0.0, 0.0])
}

fn uptake(g: f64) -> Rung {
    Rung {
        name: "Uptake by the crop".to_owned(),
        crop: Some(g),
        uptake: true,
        ..Rung::default()
    }
}

fn gives_back(rung: Rung, g: f64) -> Rung {
    Rung {
        crop: Some(g),
        ..rung
    }
}

fn ladder(stages: Vec<Rung>) -> Ladder {
    Ladder {
        title: "Field-to-wheel ladder of Autumn wheat, Tarn Bridge works".to_owned(),
        id: "ladder".to_owned(),
        heading: None,
        baseline: Baseline {
            word: "petrol".to_owned(),
            g: 94.0,
        },
        required: Some(Required {
            percent: 60.0,
            g: 37.6,
        }),
        stages,
        scale: None,
    }
}

/// The invented wheat pathway of the reference drawing.
fn wheat() -> Ladder {
    ladder(vec![
        uptake(-106.8977),
        rung("Growing", [5.9624, 13.0382, 0.2181, 0.0, 0.2719]),
        rung("Haul to works", [0.2660, 0.0015, 0.0003, 0.0, 0.0]),
        rung("Milling, cooking", [0.9723, 0.0117, 0.0086, 0.0, 0.9041]),
        gives_back(
            rung("Fermentation", [0.1932, 0.0011, 0.0057, 0.0, 0.3516]),
            35.6325,
        ),
        rung("Distillation", [1.9723, 0.0330, 0.0118, 0.0, 0.2260]),
        rung("Dehydration", [0.5726, 0.0096, 0.0034, 0.0, 0.0753]),
        rung("Drying grains", [4.7381, 0.0214, 0.0045, 0.0, 0.9543]),
        rung("Depot, stations", [0.4638, 0.0027, 0.0006, 0.0, 0.1172]),
        gives_back(fossil("Burning in engine", 0.0), 71.2652),
    ])
}

const FORMS: [Form; 3] = [Form::Wide, Form::Print, Form::Narrow];

fn drawn(ladder: &Ladder, form: Form) -> String {
    draw(ladder, form).unwrap_or_else(|e| panic!("{}: {e}", ladder.title))
}

/// Value of an attribute of one line of a drawing.
fn attribute<'a>(line: &'a str, name: &str) -> &'a str {
    let start = format!(" {name}=\"");
    let rest = line
        .split_once(&start)
        .unwrap_or_else(|| panic!("{name} in {line}"))
        .1;
    rest.split('"').next().unwrap()
}

fn number(line: &str, name: &str) -> f64 {
    attribute(line, name).parse().unwrap()
}

/// Lines that begin with an element of exactly this class.
fn of_class<'a>(svg: &'a str, element: &str, class: &str) -> Vec<&'a str> {
    let start = format!("<{element} class=\"{class}\"");
    svg.lines().filter(|l| l.starts_with(&start)).collect()
}

/// Where the running line ends, and where the wheel stands.
fn ends(svg: &str) -> (f64, f64) {
    let run = of_class(svg, "path", "run")[0];
    let last = attribute(run, "d").rsplit('H').next().unwrap();
    let wheel = of_class(svg, "g", "wheel")[0];
    (
        last.split('V').next().unwrap().parse().unwrap(),
        number(wheel, "cx"),
    )
}
