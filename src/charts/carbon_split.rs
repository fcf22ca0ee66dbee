//! Where the carbon of the crop went: one bar, split. The table below it is the accessible truth and has every figure.

use super::text::{coordinate, decimals, escape, figure};

/// The carbon of the crop behind 1 MJ of fuel, all figures as g CO2/MJ.
#[derive(Clone, Debug, PartialEq)]
pub struct CarbonSplit {
    /// Name of the picture.
    pub title: String,
    /// Start of the ids of title and description: letters, digits and hyphens, unique in the page.
    pub id: String,
    /// Carbon in the crop as it enters; above zero.
    pub in_crop: f64,
    /// Where it was found again, in the order of drawing. What they leave of `in_crop` is the open part, drawn last.
    pub parts: Vec<Part>,
}

/// One place where carbon of the crop was found.
#[derive(Clone, Debug, PartialEq)]
pub struct Part {
    /// Its name as shown, such as "Ethanol, burnt in the engine".
    pub name: String,
    /// Decides its look.
    pub kind: Kind,
    /// Carbon in it, zero or more.
    pub g: f64,
}

/// What became of the carbon.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// The fuel, burnt in the engine.
    Fuel,
    /// CO2 of fermentation, vented or captured.
    Fermentation,
    /// Co-products that leave the works.
    CoProduct,
    /// Yeast, condensate, losses.
    Other,
    /// Not accounted for.
    Open,
}

/// Why there is no picture.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum NotDrawable {
    /// The crop holds no carbon, so there is nothing to split.
    #[error("there is no carbon in the crop to split")]
    Nothing,
    /// A figure is negative or not a finite number: an error where the figures were made.
    #[error("the carbon of {0} must be zero or more, and finite")]
    NotAnAmount(String),
}

/// Below this share of the whole an open part is floating-point noise.
const CLOSED: f64 = 1e-9;
const HUNDRED: f64 = 100.0;

impl CarbonSplit {
    /// What the parts leave of the carbon in the crop, g CO2/MJ; negative if they hold more than went in.
    pub fn open(&self) -> f64 {
        let open = self.in_crop - self.found();
        if open.abs() > CLOSED * self.in_crop {
            open
        } else {
            0.0
        }
    }

    fn found(&self) -> f64 {
        self.parts.iter().map(|part| part.g).sum()
    }
}

/// The pattern definitions of this bar, once in a page, beside those of [`super::ladder::defs`], which it uses too.
pub fn defs() -> &'static str {
    PATTERNS
}

const PATTERNS: &str = r#"<svg class="defs" width="0" height="0" aria-hidden="true" focusable="false"><defs>
<pattern id="g-ferm" width="4" height="4" patternUnits="userSpaceOnUse"><rect class="p-bg" width="4" height="4"/><circle class="p-crop" cx="2" cy="2" r="1.1"/></pattern>
<pattern id="g-feed" width="8" height="8" patternUnits="userSpaceOnUse"><rect class="p-bg" width="8" height="8"/><path class="p-line" d="M0 4h8"/></pattern>
</defs></svg>"#;

impl Kind {
    /// Class in the stylesheet and pattern.
    fn look(self) -> (&'static str, &'static str) {
        match self {
            Kind::Fuel => ("release", r##" fill="url(#g-release)""##),
            Kind::Fermentation => ("release", r##" fill="url(#g-ferm)""##),
            Kind::CoProduct => ("feed", r##" fill="url(#g-feed)""##),
            Kind::Other => ("co2e_unsplit", r##" fill="url(#g-co2e_unsplit)""##),
            Kind::Open => ("open", ""),
        }
    }
}

/// The sample of a kind that stands before its name in the table.
pub fn swatch(kind: Kind) -> String {
    let (class, fill) = kind.look();
    format!(
        r#"<svg class="sw" viewBox="0 0 15 12" aria-hidden="true" focusable="false"><rect class="b {class}" x=".5" y=".5" width="14" height="11"{fill}/></svg>"#
    )
}

/// Draws the bar as SVG text to stand in a page. It is as wide as its place: lengths are percentages.
///
/// # Errors
/// [`NotDrawable`] if the crop holds no carbon or a figure cannot be right.
pub fn draw(split: &CarbonSplit) -> Result<String, NotDrawable> {
    refuse(split)?;
    let id = escape(&split.id);
    let mut out = vec![
        format!(r#"<svg class="split-bar" role="img" aria-labelledby="{id}-t {id}-d">"#),
        format!(r#"<title id="{id}-t">{}</title>"#, escape(&split.title)),
        format!(r#"<desc id="{id}-d">{}</desc>"#, escape(&describe(split))),
    ];
    let open = split.open();
    // where more was found than went in, the bar holds all of it and a red mark shows where the crop's carbon ends
    let whole = split.in_crop - open.min(0.0);
    let found = split.parts.iter().map(|part| (part.kind, part.g));
    let mut at = 0.0;
    for (kind, g) in found.chain([(Kind::Open, open)]) {
        if g > 0.0 {
            let (class, fill) = kind.look();
            out.push(format!(
                r#"<rect class="b {class}" x="{}%" y="1" width="{}%" height="30"{fill}/>"#,
                coordinate(at / whole * HUNDRED, 2),
                coordinate(g / whole * HUNDRED, 2)
            ));
            at += g;
        }
    }
    if open < 0.0 {
        out.push(format!(
            r#"<rect class="p-red" x="{}%" y="0" width="3" height="32"/>"#,
            coordinate(split.in_crop / whole * HUNDRED, 2)
        ));
    }
    out.push("</svg>".to_owned());
    Ok(out.join("\n"))
}

fn refuse(split: &CarbonSplit) -> Result<(), NotDrawable> {
    let amount = |g: f64, name: &str| {
        let is_amount = (g >= 0.0 && g.is_finite()).then_some(());
        is_amount.ok_or_else(|| NotDrawable::NotAnAmount(name.to_owned()))
    };
    amount(split.in_crop, "the crop")?;
    for part in &split.parts {
        amount(part.g, &part.name)?;
    }
    amount(split.found() + split.in_crop, "all parts together")?;
    // a share of the smallest numbers that exist is no number any more
    if split.in_crop < f64::MIN_POSITIVE {
        return Err(NotDrawable::Nothing);
    }
    Ok(())
}

/// The bar in words. Not yet escaped.
fn describe(split: &CarbonSplit) -> String {
    let open = split.open();
    let shown = |g: f64| {
        let share = decimals(g / split.in_crop * HUNDRED, 1);
        format!("{} ({share} %)", figure(g))
    };
    let parts = split
        .parts
        .iter()
        .map(|part| format!("{} {}", part.name, shown(part.g)));
    let left = (open > 0.0).then(|| format!("not accounted for {}", shown(open)));
    let parts: Vec<String> = parts.chain(left).collect();
    let too_much = if open < 0.0 {
        format!(" The parts hold {} more than the crop.", shown(-open))
    } else {
        String::new()
    };
    format!(
        "Carbon in the crop, as g CO2 per MJ of fuel: {}. Of it: {}.{too_much} The table has every figure.",
        figure(split.in_crop),
        if parts.is_empty() {
            "nothing found".to_owned()
        } else {
            parts.join("; ")
        }
    )
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn part(name: &str, kind: Kind, g: f64) -> Part {
        Part {
            name: name.to_owned(),
            kind,
            g,
        }
    }

    /// An invented wheat pathway.
    fn wheat() -> CarbonSplit {
        CarbonSplit {
            title: "Where the crop\u{2019}s carbon went".to_owned(),
            id: "split".to_owned(),
            in_crop: 179.62,
            parts: vec![
                part("Ethanol, burnt in the engine", Kind::Fuel, 71.27),
                part("Fermentation gas, vented", Kind::Fermentation, 35.63),
                part("Dried grains, sold as feed", Kind::CoProduct, 64.64),
                part("Yeast, condensate and losses", Kind::Other, 5.20),
            ],
        }
    }

    /// Place and width of every bar, percent.
    fn bars(svg: &str) -> Vec<(f64, f64)> {
        let value = |line: &str, name: &str| -> f64 {
            let rest = line.split_once(&format!(" {name}=\"")).unwrap().1;
            rest.split('%').next().unwrap().parse().unwrap()
        };
        let bars = svg.lines().filter(|l| l.starts_with("<rect class=\"b "));
        bars.map(|l| (value(l, "x"), value(l, "width"))).collect()
    }

    #[test]
    fn the_bar_of_the_wheat() {
        let expected = r#"<svg class="split-bar" role="img" aria-labelledby="split-t split-d">
<title id="split-t">Where the crop’s carbon went</title>
<desc id="split-d">Carbon in the crop, as g CO2 per MJ of fuel: 180. Of it: Ethanol, burnt in the engine 71.3 (39.7 %); Fermentation gas, vented 35.6 (19.8 %); Dried grains, sold as feed 64.6 (36.0 %); Yeast, condensate and losses 5.20 (2.9 %); not accounted for 2.88 (1.6 %). The table has every figure.</desc>
<rect class="b release" x="0.00%" y="1" width="39.68%" height="30" fill="url(#g-release)"/>
<rect class="b release" x="39.68%" y="1" width="19.84%" height="30" fill="url(#g-ferm)"/>
<rect class="b feed" x="59.51%" y="1" width="35.99%" height="30" fill="url(#g-feed)"/>
<rect class="b co2e_unsplit" x="95.50%" y="1" width="2.90%" height="30" fill="url(#g-co2e_unsplit)"/>
<rect class="b open" x="98.40%" y="1" width="1.60%" height="30"/>
</svg>"#;
        assert_eq!(draw(&wheat()).unwrap(), expected);
    }

    #[test]
    fn a_closed_balance_has_no_open_part() {
        let split = CarbonSplit {
            in_crop: 0.3,
            parts: vec![
                part("Ethanol", Kind::Fuel, 0.1),
                part("Fermentation gas", Kind::Fermentation, 0.2),
            ],
            ..wheat()
        };
        let svg = draw(&split).unwrap();
        assert_eq!(bars(&svg).len(), 2);
        assert!(!svg.contains("not accounted for") && !svg.contains("more than"));
    }

    #[test]
    fn more_than_went_in_is_marked_and_said() {
        let split = CarbonSplit {
            in_crop: 160.0,
            ..wheat()
        };
        let svg = draw(&split).unwrap();
        assert!(svg.contains(r#"<rect class="p-red" x="90.53%""#), "{svg}");
        assert!(svg.contains("The parts hold 16.7 (10.5 %) more than the crop."));
        assert!(!svg.contains("b open"));
    }

    #[test]
    fn what_cannot_be_right_is_refused() {
        let with = |in_crop: f64, g: f64| CarbonSplit {
            in_crop,
            parts: vec![part("Ethanol", Kind::Fuel, g)],
            ..wheat()
        };
        assert_eq!(draw(&with(0.0, 0.0)), Err(NotDrawable::Nothing));
        let ethanol = NotDrawable::NotAnAmount("Ethanol".to_owned());
        for bad in [f64::NAN, f64::INFINITY, -1.0] {
            assert_eq!(draw(&with(180.0, bad)), Err(ethanol.clone()));
            assert!(draw(&with(bad, 1.0)).is_err());
        }
        assert!(draw(&with(f64::MAX, f64::MAX)).is_err());
    }

    #[test]
    fn hostile_names_are_escaped() {
        let mut split = wheat();
        split.parts[0].name = "<script>".to_owned();
        split.title = "\"<b>".to_owned();
        let svg = draw(&split).unwrap();
        assert!(!svg.contains("<script") && !svg.contains("<b>"));
    }

    #[test]
    fn a_swatch_looks_like_its_part() {
        let svg = draw(&wheat()).unwrap();
        for kind in [
            Kind::Fuel,
            Kind::Fermentation,
            Kind::CoProduct,
            Kind::Other,
            Kind::Open,
        ] {
            let (class, fill) = kind.look();
            assert!(swatch(kind).contains(&format!("class=\"b {class}\"")));
            assert!(swatch(kind).contains(&format!("height=\"11\"{fill}/>")));
            assert!(svg.contains(fill) && svg.contains(&format!("class=\"b {class}\"")));
        }
    }

    proptest! {
        #[test]
        fn the_parts_fill_the_bar_without_a_gap(in_crop in 1.0f64..300.0, g in proptest::collection::vec(0.0f64..120.0, 0..7)) {
            let parts = g.iter().map(|&g| part("Part", Kind::Other, g)).collect();
            let svg = draw(&CarbonSplit { in_crop, parts, ..wheat() }).unwrap();
            let bars = bars(&svg);
            let mut at = 0.0;
            for (x, w) in bars {
                prop_assert!((x - at).abs() < 0.011, "{} {}", x, at);
                at = x + w;
            }
            prop_assert!((at - 100.0).abs() < 0.011, "{}", at);
        }
    }
}
