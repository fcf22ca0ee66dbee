//! Numbers as text: the rule of rounding, the three places where numbers appear, and laws.

use crate::core::units::rounding::*;
use proptest::prelude::*;

#[test]
fn halves_go_away_from_zero_as_seen() {
    let cases = [
        (0.25, 1, 0.3),
        (0.35, 1, 0.4),
        (2.675, 2, 2.68),
        (-2.675, 2, -2.68),
        (1.005, 2, 1.01),
        (0.5, 0, 1.0),
        (1.5, 0, 2.0),
        (2.5, 0, 3.0),
        (-0.5, 0, -1.0),
        (0.49, 0, 0.0),
        (9.995, 2, 10.0),
        (0.05, 1, 0.1),
        (0.005, 1, 0.0),
        (1e21, 2, 1e21),
        (5e-324, 30, 0.0),
    ];
    for (x, decimals, expected) in cases {
        assert_eq!(round_half_away(x, decimals), expected, "{x}");
    }
    assert!(round_half_away(-0.001, 2).is_sign_positive());
    assert!(round_half_away(f64::NAN, 2).is_nan());
    assert_eq!(round_half_away(f64::MAX, 255), f64::MAX);
}

#[test]
fn numbers_on_pages() {
    assert_eq!(show(31.36, 1), "31.4");
    assert_eq!(show(-2.005, 2), "−2.01");
    assert_eq!(show(-0.001, 2), "0.00");
    assert_eq!(show(-0.0, 1), "0.0");
    assert_eq!(show(35_473.0, 0), "35\u{2009}473");
    assert_eq!(show(999.999, 2), "1\u{2009}000.00");
    assert_eq!(show(1_234_567.891, 1), "1\u{2009}234\u{2009}567.9");
    assert_eq!(show(999.0, 0), "999");
    assert_eq!(show(f64::NAN, 2), "–");
    assert_eq!(show_change(0.59, 2), "+0.59");
    assert_eq!(show_change(-0.361, 2), "−0.36");
    assert_eq!(show_change(0.001, 2), "0.00");
    assert_eq!(show_all(2671.0), "2\u{2009}671");
    assert_eq!(show_all(0.17), "0.17");
    let comma = Style::PAGE.with_mark(',');
    assert_eq!(fixed(35_473.26, 1, comma), "35\u{2009}473,3");
}

#[test]
fn numbers_in_pictures() {
    for (x, expected) in [
        (31.36, "31.4"),
        (5.7249, "5.72"),
        (0.58449, "0.584"),
        (0.0584, "0.058"),
        (9.996, "10.0"),
        (99.96, "100"),
        (35_473.0, "35\u{2009}500"),
        (-5.7, "−5.70"),
        (0.0, "0"),
        (0.0001, "0"),
    ] {
        assert_eq!(significant(x, 3, 3), expected, "{x}");
    }
}

#[test]
fn numbers_in_csv() {
    for (x, expected) in [
        (1234.5, "1234.5"),
        (-0.0, "0"),
        (-0.1, "-0.1"),
        (1e-7, "0.0000001"),
        (1e-8, "1e-8"),
        (1e14, "100000000000000"),
        (1e15, "1e15"),
        (f64::INFINITY, ""),
    ] {
        assert_eq!(plain(x), expected, "{x}");
    }
    assert_eq!(plain_fixed(-1234.565, 2), "-1234.57");
}

/// The headline rule: 64.96 % must not be printed as 65.0 % beside "misses 65 %".
#[test]
fn a_verdict_never_looks_wrong() {
    assert_eq!(decimals_against(64.96, 65.0, 1), 2);
    assert_eq!(decimals_against(66.58, 65.0, 1), 1);
    assert_eq!(decimals_against(65.0, 65.0, 1), 1);
    assert_eq!(decimals_against(64.999_999_999_9, 65.0, 1), 7);
}

proptest! {
    #[test]
    fn plain_reads_back(x in any::<f64>().prop_filter("finite", |x| x.is_finite())) {
        prop_assert_eq!(plain(x).parse::<f64>().unwrap(), x);
    }

    #[test]
    fn rounding_is_near_odd_and_stable(x in -1e9f64..1e9, decimals in 0u8..6) {
        let r = round_half_away(x, decimals);
        let step = 10f64.powi(-i32::from(decimals));
        prop_assert!((r - x).abs() <= step * 0.5 * (1.0 + 1e-6) + x.abs() * 1e-15);
        prop_assert_eq!(round_half_away(-x, decimals), -r);
        prop_assert_eq!(round_half_away(r, decimals), r);
    }

    #[test]
    fn styles_differ_in_dress_only(x in -1e12f64..1e12, decimals in 0u8..8) {
        let page = show(x, decimals).replace('\u{2009}', "").replace('−', "-");
        prop_assert_eq!(page, plain_fixed(x, decimals));
        prop_assert_eq!(plain_fixed(x, decimals).parse::<f64>().unwrap(), round_half_away(x, decimals));
    }

    #[test]
    fn any_number_is_shown(x in any::<f64>(), decimals in any::<u8>(), figures in any::<u8>()) {
        for text in [show(x, decimals), significant(x, figures, decimals), show_all(x)] {
            prop_assert!(!text.is_empty() && !text.starts_with("-0"));
        }
        prop_assert!(decimals_against(x, 65.0, decimals) <= MAX_DECIMALS);
    }
}
