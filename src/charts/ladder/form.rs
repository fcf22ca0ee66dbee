//! The three forms of the ladder and their measures, in SVG units (CSS px at 16 px per rem).

/// How a ladder is drawn. A page carries several forms and a media query shows one.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    /// Screens from 48 rem; from 79 rem on its rows line up with the table beside it (rows of 2.25 rem).
    Wide,
    /// Paper and statements; also screens, when there are 20 rows or more.
    Print,
    /// Screens below 48 rem, and comparisons at every width.
    Narrow,
}

impl Form {
    pub(super) fn class(self) -> &'static str {
        match self {
            Form::Wide => "wide",
            Form::Print => "print",
            Form::Narrow => "narrow",
        }
    }

    pub(super) fn measures(self) -> &'static Measures {
        match self {
            Form::Wide => &WIDE,
            Form::Print => &PRINT,
            Form::Narrow => &NARROW,
        }
    }
}

/// Lengths of one form.
pub(super) struct Measures {
    /// Width of the picture.
    pub width: f64,
    /// Free space at the left and right edge.
    pub pad: f64,
    /// Column of names between the uprights; none in the narrow form, which has one upright only.
    pub names: Option<f64>,
    /// Kept free on the right: for a value after the longest bar, in the narrow form for all values.
    pub gutter: f64,
    /// Height of a row.
    pub pitch: f64,
    /// Height of a bar.
    pub bar: f64,
    /// From the top of a row to its bar.
    pub bar_y: f64,
    /// From the top of a row to the step of the running line.
    pub run_y: f64,
    /// Above the first row: heads, labels, the wheel.
    pub top: f64,
    /// Below the last row: the figures of the axis.
    pub axis: f64,
    /// Height of one line of the key.
    pub key: f64,
    /// Size of the values.
    pub value: f64,
    /// Smallest distance of two ticks.
    pub min_tick: f64,
}

static WIDE: Measures = Measures {
    width: 736.0,
    pad: 2.0,
    names: Some(136.0),
    gutter: 30.0,
    pitch: 36.0,
    bar: 14.0,
    bar_y: 9.0,
    run_y: 31.0,
    top: 64.0,
    axis: 36.0,
    key: 22.0,
    value: 12.0,
    min_tick: 44.0,
};

static PRINT: Measures = Measures {
    pitch: 25.0,
    bar: 12.0,
    bar_y: 4.0,
    run_y: 21.0,
    top: 58.0,
    axis: 32.0,
    key: 20.0,
    ..WIDE
};

static NARROW: Measures = Measures {
    width: 360.0,
    pad: 12.0,
    names: None,
    gutter: 46.0,
    pitch: 42.0,
    bar: 12.0,
    bar_y: 21.0,
    run_y: 38.0,
    top: 34.0,
    axis: 46.0,
    key: 20.0,
    value: 13.0,
    min_tick: 40.0,
};
