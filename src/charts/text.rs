//! Words and figures inside a picture: escaping for XML, estimated widths, numbers as text.

/// Text made safe for XML content and for attributes in double quotes.
/// Control characters, which XML 1.0 does not allow, are left out.
pub fn escape(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&#x27;"),
            '\t' | '\n' | '\r' => out.push(c),
            c if c.is_control() || matches!(c, '\u{fffe}' | '\u{ffff}') => {}
            c => out.push(c),
        }
    }
    out
}

/// Fixed words of ours with the figures of CO2, N2O and CH4 lowered. No `baseline-shift`: not every browser or
/// PDF writer has it. The zero-width space after the formula keeps the second shift from being empty.
pub fn chem(words: &str) -> String {
    let mut out = escape(words);
    for (formula, before, figure, after) in [
        ("CO2e", "CO", '2', "e"),
        ("CO2", "CO", '2', ""),
        ("N2O", "N", '2', "O"),
        ("CH4", "CH", '4', ""),
    ] {
        let lowered = format!(
            r#"{before}<tspan dy="2.5" font-size="75%">{figure}</tspan><tspan dy="-2.5">{after}&#8203;</tspan>"#
        );
        out = out.replace(formula, &lowered);
    }
    out
}

/// Estimated width of `text` in Source Sans 3 at `size`; errs on the wide side.
pub fn width(text: &str, size: f64) -> f64 {
    text.chars().map(em).sum::<f64>() * size
}

fn em(c: char) -> f64 {
    match c {
        '0'..='9' => 0.472,
        ' ' | '.' | ',' | 'i' | 'l' | '|' | '\'' => 0.25,
        // scripts of square characters come from a fallback font and fill their em
        '\u{1100}'..='\u{115f}'
        | '\u{2e80}'..='\u{d7a3}'
        | '\u{f900}'..='\u{faff}'
        | '\u{ff00}'..='\u{ff60}'
        | '\u{1f000}'..='\u{3ffff}' => 1.0,
        _ => 0.5,
    }
}

/// `text` if it fits into `room`, else as much of it as fits, ending with an ellipsis.
pub fn clip(text: &str, room: f64, size: f64) -> String {
    if width(text, size) <= room {
        return text.to_owned();
    }
    let room = room - width("\u{2026}", size);
    let (mut used, mut end) = (0.0, 0);
    for (at, c) in text.char_indices() {
        used += em(c) * size;
        if used > room {
            break;
        }
        end = at + c.len_utf8();
    }
    let kept = text.get(..end).unwrap_or_default().trim_end();
    format!("{kept}\u{2026}")
}

/// A figure in a picture: three significant figures, at most three decimals, true minus, never -0.
pub fn figure(value: f64) -> String {
    let decimal = Decimal::of(value);
    let places = (2 - decimal.exponent).min(3);
    let rounded = decimal.round(places);
    if rounded.digits.is_empty() {
        return "0".to_owned();
    }
    // 9.996 became 10.00: one decimal fewer is still three figures
    let places = places.min(2 - rounded.exponent).max(0);
    sign(value, rounded.text(places), "\u{2212}")
}

/// A given figure (a percentage, a tick) without trailing zeros, at most six decimals, true minus.
pub fn plain(value: f64) -> String {
    sign(value, trim(&Decimal::of(value).round(6).text(6)), "\u{2212}")
}

/// A figure with a fixed number of decimals, halves away from zero, true minus, never -0.
pub fn decimals(value: f64, places: i32) -> String {
    sign(value, Decimal::of(value).round(places).text(places), "\u{2212}")
}

/// A coordinate with a fixed number of decimals. A place is no figure that anybody reads, so the number itself is
/// rounded and not its shortest decimal; that is also how the reference drawings were written.
pub fn coordinate(value: f64, places: usize) -> String {
    sign(value, format!("{:.places$}", value.abs()), "-")
}

/// A coordinate as short as it goes, at most two decimals.
pub fn short(value: f64) -> String {
    trim(&coordinate(value, 2))
}

fn sign(value: f64, digits: String, minus: &str) -> String {
    let is_zero = digits.bytes().all(|b| matches!(b, b'0' | b'.'));
    if value < 0.0 && !is_zero {
        format!("{minus}{digits}")
    } else {
        digits
    }
}

fn trim(digits: &str) -> String {
    digits.trim_end_matches('0').trim_end_matches('.').to_owned()
}

/// The shortest decimal that reads back as the same number, so that halves are halves as people read them.
struct Decimal {
    /// Digits without the point, 0 to 9 each; empty means zero.
    digits: Vec<u8>,
    /// Power of ten of the first digit.
    exponent: i32,
}

impl Decimal {
    /// Size of `value`, without its sign. What is not finite reads as zero; callers refuse it before they draw.
    fn of(value: f64) -> Self {
        let text = format!("{:e}", value.abs());
        let (digits, exponent) = text.split_once('e').unwrap_or(("", "0"));
        let digits: Vec<u8> = digits
            .bytes()
            .filter(u8::is_ascii_digit)
            .map(|b| b - b'0')
            .collect();
        let exponent = exponent.parse().unwrap_or(0);
        Decimal { digits, exponent }
    }

    /// Rounded to `places` decimals (negative: to tens, hundreds), halves away from zero.
    fn round(mut self, places: i32) -> Self {
        let keep = self.exponent + 1 + places;
        let Ok(keep) = usize::try_from(keep) else {
            return Decimal {
                digits: Vec::new(),
                exponent: 0,
            };
        };
        let up = self.digits.get(keep).is_some_and(|&d| d >= 5);
        self.digits.truncate(keep);
        if self.digits.iter().all(|&d| d == 0) {
            self.digits.clear();
        }
        if up {
            while self.digits.last() == Some(&9) {
                self.digits.pop();
            }
            match self.digits.last_mut() {
                Some(last) => *last += 1,
                None => {
                    self.digits.push(1);
                    self.exponent += 1;
                }
            }
        }
        self
    }

    /// Written out with `places` decimals; holds no more digits than that after `round`.
    fn text(&self, places: i32) -> String {
        let digit = |power: i32| {
            usize::try_from(self.exponent - power)
                .ok()
                .and_then(|i| self.digits.get(i))
                .map_or('0', |&d| char::from(b'0' + d))
        };
        let mut out: String = (0..=self.exponent.max(0)).rev().map(digit).collect();
        if places > 0 {
            out.push('.');
            out.extend((1..=places).map(|p| digit(-p)));
        }
        out
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn figures_of_pictures() {
        for (value, shown) in [
            (31.41, "31.4"),
            (5.7183, "5.72"),
            (0.5843, "0.584"),
            (94.0, "94.0"),
            (106.8977, "107"),
            (-25.66, "\u{2212}25.7"),
            (9.996, "10.0"),
            (0.0996, "0.100"),
            (99.96, "100"),
            (12345.0, "12300"),
            (999_600.0, "1000000"),
            (0.0005, "0.001"),
            (0.000_499_9, "0"),
            (-0.0004, "0"),
            (-0.0, "0"),
            (2.345, "2.35"),
            (-2.345, "\u{2212}2.35"),
            (1.005, "1.01"),
        ] {
            assert_eq!(figure(value), shown, "{value:?}");
        }
    }

    #[test]
    fn plain_figures_and_coordinates() {
        assert_eq!(plain(60.0), "60");
        assert_eq!(plain(62.5), "62.5");
        assert_eq!(plain(3.0 * 0.1), "0.3");
        assert_eq!(plain(-20.0), "\u{2212}20");
        assert_eq!(plain(0.0), "0");
        assert_eq!(plain(500_000.0), "500000");
        assert_eq!(decimals(64.96, 1), "65.0");
        assert_eq!(decimals(0.25, 1), "0.3");
        assert_eq!(decimals(-0.04, 1), "0.0");
        assert_eq!(decimals(-1234.45, 1), "\u{2212}1234.5");
        assert_eq!(coordinate(439.169, 1), "439.2");
        assert_eq!(coordinate(-0.04, 1), "0.0");
        assert_eq!(coordinate(-3.26, 1), "-3.3");
        assert_eq!(coordinate(7.0, 2), "7.00");
        assert_eq!(short(22.5), "22.5");
        assert_eq!(short(40.0), "40");
    }

    #[test]
    fn hostile_text_is_harmless() {
        assert_eq!(
            escape("<b a='1'>\u{0}\u{b}\"&"),
            "&lt;b a=&#x27;1&#x27;&gt;&quot;&amp;"
        );
    }

    #[test]
    fn long_names_end_with_an_ellipsis() {
        assert_eq!(clip("Growing", 122.0, 13.5), "Growing");
        assert_eq!(
            clip("Drying and storage at the farm", 122.0, 13.5),
            "Drying and storage\u{2026}"
        );
        assert_eq!(clip("麦", 2.0, 13.5), "\u{2026}");
    }

    proptest! {
        #[test]
        fn a_coordinate_is_off_by_at_most_half_a_step(v in -1e5f64..1e5, places in 0usize..4) {
            let read: f64 = coordinate(v, places).parse()?;
            prop_assert!((read - v).abs() <= 0.5 * 0.1f64.powi(i32::try_from(places)?) + 1e-9);
        }

        #[test]
        fn a_figure_keeps_three_significant_figures(v in prop_oneof![0.1f64..1e9, -1e9f64..-0.1]) {
            let read: f64 = figure(v).replace('\u{2212}', "-").parse()?;
            prop_assert!((read - v).abs() <= 0.005 * v.abs() + 1e-12);
        }

        #[test]
        fn what_is_clipped_fits(name in "\\PC{0,60}", room in 20.0f64..300.0) {
            prop_assert!(width(&clip(&name, room, 13.5), 13.5) <= room);
        }
    }
}
