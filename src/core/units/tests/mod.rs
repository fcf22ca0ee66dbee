//! Units against their definitions, messages as people read them, and laws.

use super::*;
use proptest::prelude::*;

mod rounding;

/// Conversions agree with their definitions to rounding of the last digits.
const EXACT: f64 = 1e-14;

fn factor(unit: &str) -> f64 {
    parse_unit(unit).unwrap().factor
}

fn dimension(unit: &str) -> Dimension {
    parse_unit(unit).unwrap().dimension
}

fn suggestion(unit: &str) -> Option<String> {
    match parse_unit(unit) {
        Err(UnitError::Unknown { suggestion, .. }) => suggestion,
        other => panic!("{unit}: {other:?}"),
    }
}

/// Each unit against an arithmetic definition that does not repeat the table's literal; sources in `table.rs`.
#[test]
fn factors_follow_their_definitions() {
    let foot = 0.3048;
    let inch: f64 = 0.0254;
    let lb = 0.453_592_37;
    let btu = 2_326.0 * lb;
    let gallon = 231.0 * inch.powi(3);
    let cases = [
        ("percent", 1.0 / 100.0),
        ("%", 1.0 / 100.0),
        ("ppm", 1.0 / 1_000_000.0),
        ("1", 1.0),
        ("kg", 1.0),
        ("g", 1.0 / 1000.0),
        ("mg", 1.0 / 1_000_000.0),
        ("Mg", 1000.0),
        ("Gg", 1e6),
        ("Tg", 1e9),
        ("t", 1000.0),
        ("kt", 1000.0 * 1000.0),
        ("Mt", 1000.0 * 1e6),
        ("lb", lb),
        ("short ton", 2000.0 * lb),
        ("long ton", 2240.0 * lb),
        ("bushel maize", 56.0 * lb),
        ("bushel of maize", 56.0 * lb),
        ("bushel wheat", 60.0 * lb),
        ("bushel of wheat", 60.0 * lb),
        ("m", 1.0),
        ("km", 1000.0),
        ("mi", 5280.0 * foot),
        ("nmi", 1852.0),
        ("ha", 100.0 * 100.0),
        ("acre", 4840.0 * (3.0 * foot) * (3.0 * foot)),
        ("L", 1.0 / 1000.0),
        ("l", 1.0 / 1000.0),
        ("mL", 1e-6),
        ("ml", 1e-6),
        ("hL", 100.0 / 1000.0),
        ("hl", 100.0 / 1000.0),
        ("US gal", gallon),
        ("imp gal", 4.54609 / 1000.0),
        ("imperial gal", 4.54609 / 1000.0),
        ("bbl", 42.0 * gallon),
        ("s", 1.0),
        ("min", 60.0),
        ("h", 60.0 * 60.0),
        ("d", 24.0 * 3600.0),
        ("day", 24.0 * 3600.0),
        ("a", 365.25 * 86_400.0),
        ("yr", 365.25 * 86_400.0),
        ("year", 365.25 * 86_400.0),
        ("years", 365.25 * 86_400.0),
        ("K", 1.0),
        ("degC", 1.0),
        ("°C", 1.0),
        ("Btu", btu),
        ("MMBtu", 1e6 * btu),
        ("therm", 1e5 * btu),
        ("kcal", 4186.8),
        ("J", 1.0),
        ("mJ", 1e-3),
        ("kJ", 1e3),
        ("MJ", 1e6),
        ("GJ", 1e9),
        ("TJ", 1e12),
        ("PJ", 1e15),
        ("Wh", 3600.0),
        ("mWh", 3.6),
        ("kWh", 3.6e6),
        ("MWh", 3.6e9),
        ("GWh", 3.6e12),
        ("TWh", 3.6e15),
        ("PWh", 3.6e18),
        ("W", 1.0),
        ("mW", 1e-3),
        ("kW", 1e3),
        ("MW", 1e6),
        ("GW", 1e9),
        ("TW", 1e12),
        ("PW", 1e15),
    ];
    for (unit, expected) in cases {
        let found = factor(unit);
        assert!(
            (found / expected - 1.0).abs() < EXACT,
            "{unit}: {found} against {expected}"
        );
    }
    let money = Currency::ALL.map(Currency::symbol);
    for (symbol, ..) in table::known() {
        let tested = cases.iter().any(|c| c.0 == symbol) || money.contains(&symbol.as_str());
        assert!(tested, "{symbol} has no definition above");
    }
}

/// What the symbols count, products, quotients and powers.
#[test]
fn units_count_what_they_say() {
    use Dimension as D;
    let n = D::substance(Substance::N);
    let eur = D::currency(Currency::EUR);
    let cases = [
        ("lb N", n),
        ("kg N/ha", n.per(D::AREA)),
        ("kg N/ha/a", n.per(D::AREA).per(D::TIME)),
        ("short ton P2O5", D::substance(Substance::P2O5)),
        ("t CaCO3", D::substance(Substance::CaCO3)),
        ("kg CaCO3-eq", D::substance(Substance::CaCO3)),
        ("kg CaCO3-equivalent", D::substance(Substance::CaCO3)),
        ("kg K", D::substance(Substance::K)),
        ("kg.K", D::MASS.times(D::TEMPERATURE)),
        ("kJ/(kg.K)", D::ENERGY.per(D::MASS.times(D::TEMPERATURE))),
        ("MJ/t/km", D::ENERGY.per(D::TRANSPORT)),
        ("MJ/(t km)", D::ENERGY.per(D::TRANSPORT)),
        ("t km", D::TRANSPORT),
        ("t.km", D::TRANSPORT),
        ("t*km", D::TRANSPORT),
        ("t · km", D::TRANSPORT),
        ("m2", D::AREA),
        ("km^2", D::AREA),
        ("m²", D::AREA),
        ("m3", D::VOLUME),
        ("m³", D::VOLUME),
        ("m^3", D::VOLUME),
        ("MWh gross", D::ENERGY_GROSS),
        ("MWh net", D::ENERGY_NET),
        ("MJ heat", D::HEAT),
        ("kWh power", D::POWER),
        ("kWh power/t", D::POWER.per(D::MASS)),
        ("kW", D::ENERGY.per(D::TIME)),
        ("MW heat", D::HEAT.per(D::TIME)),
        ("1/ha", D::NONE.per(D::AREA)),
        ("EUR/t", eur.per(D::MASS)),
        ("US gal/bushel maize", D::VOLUME.per(D::MASS)),
        ("L/t", D::VOLUME.per(D::MASS)),
        ("  t  ", D::MASS),
    ];
    for (unit, expected) in cases {
        assert_eq!(dimension(unit), expected, "{unit}");
    }
    assert!((factor("km^2") / 1e6 - 1.0).abs() < EXACT);
    assert!((factor("lb N/acre") / (0.453_592_37 / 4_046.856_422_4) - 1.0).abs() < EXACT);
    assert!((factor("MJ/t/km") - 1.0).abs() < EXACT);
}

/// All bases of Commission Implementing Regulation (EU) 2022/996, Annex IX, as its rows are written here.
#[test]
fn published_bases_are_read() {
    use Dimension as D;
    let cases = [
        ("kg", D::MASS),
        ("kg product", D::MASS),
        ("kg seed", D::MASS),
        ("kg N", D::substance(Substance::N)),
        ("kg P2O5", D::substance(Substance::P2O5)),
        ("kg K2O", D::substance(Substance::K2O)),
        ("kg CaCO3 equivalent", D::substance(Substance::CaCO3)),
        ("kg MgO", D::substance(Substance::MgO)),
        ("kg Na", D::substance(Substance::Na)),
        ("MJ (LHV)", D::ENERGY),
        ("MJ fuel (LHV)", D::ENERGY),
        ("MJ fuel fed", D::ENERGY),
        ("MJ fuel", D::ENERGY),
        ("MJ diesel", D::ENERGY),
        ("MJ biogas", D::ENERGY),
        ("kWh", D::ENERGY),
        ("t.km", D::TRANSPORT),
    ];
    for (unit, expected) in cases {
        assert_eq!(dimension(unit), expected, "{unit}");
    }
    // Rows that state a heating value only, and the one row whose basis is not printed, count per nothing.
    for none in ["LHV, dry basis", "kg (printed without basis; see note)"] {
        assert!(parse_unit(none).is_err(), "{none}");
    }
}

#[test]
fn a_rate_on_an_area_is_an_amount() {
    let rate = Quantity::read(165.0, "kg N/ha").unwrap();
    let area = Quantity::read(2.0, "ha").unwrap();
    let total = rate.times(area);
    assert_eq!(total.dimension, Dimension::substance(Substance::N));
    assert!((total.in_unit("kg N").unwrap() - 330.0).abs() < 1e-9);
    assert_eq!(total.per(area).dimension, rate.dimension);
}

#[test]
fn degrees_shift_only_when_alone() {
    let read = |value, unit| Quantity::read(value, unit).unwrap();
    assert!((read(20.0, "degC").value - 293.15).abs() < 1e-12);
    assert!((read(20.0, "°C").in_unit("K").unwrap() - 293.15).abs() < 1e-12);
    assert!((read(293.15, "K").in_unit("degC").unwrap() - 20.0).abs() < 1e-12);
    assert!((read(2.0, "kJ/kg/degC").value - 2000.0).abs() < 1e-9);
}

#[test]
fn parts_of_a_whole_are_divided_out() {
    for percent in 0..=100u8 {
        let value = f64::from(percent);
        let read = Quantity::read(value, "percent").unwrap();
        assert_eq!(read.value, value / 100.0);
    }
}

#[test]
fn a_mismatch_names_both() {
    let n = Dimension::substance(Substance::N);
    let text = |e: UnitError| e.to_string();
    let against_n =
        "kg is a mass, but a mass of nitrogen (kg N) is wanted here. Give it in kg N, t N or lb N.";
    let kg = Quantity::read(5.0, "kg").unwrap();
    assert_eq!(text(kg.need(n).unwrap_err()), against_n);
    assert_eq!(text(Quantity::read_as(5.0, "kg", n).unwrap_err()), against_n);
    assert_eq!(
        text(kg.in_unit("lb N").unwrap_err()),
        against_n,
        "a target unit is asked for in the same words"
    );
    assert_eq!(
        text(Quantity::read_as(1.0, "short ton", Dimension::ENERGY).unwrap_err()),
        "short ton is a mass, but energy is wanted here. Give it in MJ, GJ, TJ or MWh."
    );
    assert_eq!(
        text(Quantity::read_as(1.0, "kWh", Dimension::POWER).unwrap_err()),
        "kWh is energy, but power (electrical energy) is wanted here. Give it in kWh power, MWh power or MJ power."
    );
    assert_eq!(Quantity::read_as(2.0, "t N", n), Ok(2000.0));
}

#[test]
fn dimensions_have_words_and_examples() {
    let cases = [
        (
            "percent",
            "a plain number or share",
            "percent or as a plain number",
        ),
        ("MJ/kg", "energy per mass", "MJ/kg"),
        ("kg N/ha", "mass of nitrogen (kg N) per area", "kg N/ha"),
        ("EUR/t", "amount of money (EUR) per mass", "EUR/kg"),
        ("t km", "a mass carried over a distance (t km)", "t km"),
        (
            "MJ/t/km",
            "energy per mass carried over a distance (t km)",
            "MJ/t/km",
        ),
        ("1/ha", "a number per area", "1/ha"),
        ("m2", "an area", "ha, m2 or acre"),
        ("s2", "a time squared", "h^2"),
        ("kg/ha/a", "mass per area and per time", "kg/ha/h"),
        ("m3/m2", "a length", "km, m or mi"),
    ];
    for (unit, words, examples) in cases {
        let dimension = dimension(unit);
        assert_eq!(dimension.describe(), words, "{unit}");
        assert_eq!(dimension.examples(), examples, "{unit}");
    }
    for dimension in Dimension::ENERGIES {
        assert!(dimension.is_energy());
        assert!(!dimension.per(Dimension::MASS).is_energy());
    }
    assert!(!Dimension::MASS.is_energy());
}

#[test]
fn what_was_meant_is_suggested() {
    let cases = [
        ("kwh", "kWh"),
        ("mj", "MJ"),
        ("Kg N/ha", "kg N/ha"),
        ("M3", "m3"),
        ("tkm", "t km"),
        ("kgN/ha", "kg N/ha"),
        ("usd/t", "USD/t"),
        ("lbs N", "lb N"),
        ("tonnes/ha", "t/ha"),
        ("gal", "US gal or imp gal"),
        ("ton", "t, short ton or long ton"),
        ("MT", "t for a metric ton, Mt for a million of them"),
        ("MBtu", "MMBtu for a million Btu"),
        ("MJ/t km", "MJ/t/km"),
        ("g/t.km", "g/t/km"),
        ("kg N/ha a", "kg N/ha/a"),
    ];
    for (unit, meant) in cases {
        assert_eq!(suggestion(unit).as_deref(), Some(meant), "{unit}");
    }
    for nonsense in [
        "", "/", "kg/", "/kg", "()", "kg ()", "kg/(ha", "kg)", "zzz", "N", "2", "kg**N", "MJ (HHV)", "kg2",
        "KWH/T",
    ] {
        assert_eq!(suggestion(nonsense), None, "{nonsense}");
    }
    let text = parse_unit("kwh").unwrap_err().to_string();
    assert_eq!(text, "\"kwh\" is not a known unit. Write kWh.");
}

#[test]
fn length_and_size_are_limited() {
    let long = "m ".repeat(40);
    assert!(matches!(
        parse_unit(&long),
        Err(UnitError::Unknown { unit, .. }) if unit.chars().count() == MAX_CHARS + 1
    ));
    for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
        assert_eq!(Quantity::read(bad, "kg"), Err(UnitError::NotFinite));
    }
    assert_eq!(Quantity::read(1e300, "PJ"), Err(UnitError::NotFinite));
}

fn any_symbol() -> impl Strategy<Value = String> {
    let all: Vec<String> = table::known().map(|k| k.0).collect();
    proptest::sample::select(all)
}

proptest! {
    #[test]
    fn every_unit_goes_there_and_back(symbol in any_symbol(), value in -1e9f64..1e9) {
        let there = Quantity::read(value, &symbol).unwrap();
        let back = there.in_unit(&symbol).unwrap();
        prop_assert!((back - value).abs() <= 1e-12 * value.abs().max(1e3), "{symbol}: {value} came back as {back}");
    }

    #[test]
    fn products_and_quotients_follow_their_parts(a in any_symbol(), b in any_symbol()) {
        let (ua, ub) = (parse_unit(&a).unwrap(), parse_unit(&b).unwrap());
        let product = parse_unit(&format!("{a}*{b}")).unwrap();
        prop_assert_eq!(product.dimension, ua.dimension.times(ub.dimension));
        prop_assert!((product.factor / (ua.factor * ub.factor) - 1.0).abs() < EXACT);
        let quotient = parse_unit(&format!("{a}/{b}")).unwrap();
        prop_assert_eq!(quotient.dimension, ua.dimension.per(ub.dimension));
        prop_assert!((quotient.factor / (ua.factor / ub.factor) - 1.0).abs() < EXACT);
        prop_assert_eq!(quotient.dimension.times(ub.dimension), ua.dimension);
    }

    /// An example in a remedy must be a unit of just that dimension.
    #[test]
    fn examples_can_be_entered(a in any_symbol(), b in any_symbol(), c in any_symbol()) {
        let dimension = parse_unit(&format!("{a}/{b}/{c}")).unwrap().dimension;
        let symbol = dimension.symbol();
        if let Ok(unit) = parse_unit(&symbol) {
            prop_assert_eq!(unit.dimension, dimension, "{}", symbol);
        } else {
            // Powers of anything but lengths and times are words here, not units.
            prop_assert!(symbol.contains('^'), "{}", symbol);
        }
    }

    #[test]
    fn any_text_is_answered(text in any::<String>(), value in any::<f64>()) {
        if let Ok(quantity) = Quantity::read(value, &text) {
            prop_assert!(quantity.value.is_finite());
        }
    }

    #[test]
    fn any_heap_of_words_is_answered(words in proptest::collection::vec(
        proptest::sample::select(vec!["kg", "N", "MJ", "fuel", "fed", "(", ")", "LHV", "/", ".", "*", "·", "t", "km", "PWh", "m3", "m³", "²",
            "L", "US", "gal", "bushel", "of", "maize", "gross", "°C", "é", "^2", "-eq", "kwh", "€", "MT"]), 0..24), gap in prop::bool::ANY) {
        let text = words.join(if gap { " " } else { "" });
        match parse_unit(&text) {
            Ok(unit) => prop_assert!(unit.factor > 0.0 && unit.factor.is_finite()),
            Err(e) => prop_assert!(!e.to_string().is_empty()),
        }
    }
}
