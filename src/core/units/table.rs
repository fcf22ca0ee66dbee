//! The units Wheelwort knows, each with its exact size in base units and where that size is defined.

use super::dimension::{Currency, Dimension};

/// A unit of the table. `factor` is base units (kg, m, m2, m3, s, K, J) per unit.
#[derive(Clone, Copy, Debug)]
pub(super) struct Entry {
    pub symbol: &'static str,
    pub dimension: Dimension,
    pub factor: f64,
}

const fn u(symbol: &'static str, dimension: Dimension, factor: f64) -> Entry {
    Entry {
        symbol,
        dimension,
        factor,
    }
}

/// The avoirdupois pound: exactly 0.45359237 kg. International yard and pound agreement of 1959; NIST SP 811 (2008), B.8.
const LB: f64 = 0.453_592_37;
/// The US gallon: exactly 231 cubic inches of 2.54 cm. NIST Handbook 44, Appendix C.
const US_GAL: f64 = 0.003_785_411_784;
/// The imperial gallon: exactly 4.54609 L. UK Weights and Measures Act 1985, Schedule 1.
const IMP_GAL: f64 = 0.004_546_09;
/// The British thermal unit of the International Table: 1055.05585262 J,
/// from 1 Btu/lb = 2326 J/kg (Fifth International Conference on the Properties of Steam, 1956; ISO 31-4).
const BTU: f64 = 1_055.055_852_62;
/// The Julian year of 365.25 days of 86 400 s. IAU Style Manual (1989), table 5.
const YEAR: f64 = 31_557_600.0;

/// Units without a prefix, or with a prefix as part of the name.
pub(super) const TABLE: &[Entry] = &[
    u("1", Dimension::NONE, 1.0),
    u("percent", Dimension::NONE, 1e-2),
    u("%", Dimension::NONE, 1e-2),
    u("ppm", Dimension::NONE, 1e-6),
    // Mass. The tonne: SI Brochure, 9th edition, table 8.
    u("t", Dimension::MASS, 1e3),
    u("kt", Dimension::MASS, 1e6),
    u("Mt", Dimension::MASS, 1e9),
    u("lb", Dimension::MASS, LB),
    // 2000 lb and 2240 lb: NIST Handbook 44, Appendix C.
    u("short ton", Dimension::MASS, 907.184_74),
    u("long ton", Dimension::MASS, 1_016.046_908_8),
    // Bushels of the trade are masses: maize 56 lb, wheat 60 lb (US grain standards, 7 CFR 810).
    u("bushel maize", Dimension::MASS, 25.401_172_72),
    u("bushel of maize", Dimension::MASS, 25.401_172_72),
    u("bushel wheat", Dimension::MASS, 27.215_542_2),
    u("bushel of wheat", Dimension::MASS, 27.215_542_2),
    // Length. Mile of 5280 ft of 0.3048 m: agreement of 1959. Nautical mile: SI Brochure, 8th edition, table 8.
    u("m", Dimension::LENGTH, 1.0),
    u("km", Dimension::LENGTH, 1e3),
    u("mi", Dimension::LENGTH, 1_609.344),
    u("nmi", Dimension::LENGTH, 1_852.0),
    // Area. Hectare: SI Brochure, table 8. International acre: 4840 square yards of 0.9144 m.
    u("ha", Dimension::AREA, 1e4),
    u("acre", Dimension::AREA, 4_046.856_422_4),
    // Volume. Litre, both symbols: SI Brochure, table 8.
    u("L", Dimension::VOLUME, 1e-3),
    u("l", Dimension::VOLUME, 1e-3),
    u("mL", Dimension::VOLUME, 1e-6),
    u("ml", Dimension::VOLUME, 1e-6),
    u("hL", Dimension::VOLUME, 0.1),
    u("hl", Dimension::VOLUME, 0.1),
    u("US gal", Dimension::VOLUME, US_GAL),
    u("imp gal", Dimension::VOLUME, IMP_GAL),
    u("imperial gal", Dimension::VOLUME, IMP_GAL),
    // The petroleum barrel of 42 US gallons: NIST SP 811, B.8.
    u("bbl", Dimension::VOLUME, 0.158_987_294_928),
    // Time. Minute, hour, day: SI Brochure, table 8.
    u("s", Dimension::TIME, 1.0),
    u("min", Dimension::TIME, 60.0),
    u("h", Dimension::TIME, 3_600.0),
    u("d", Dimension::TIME, 86_400.0),
    u("day", Dimension::TIME, 86_400.0),
    u("a", Dimension::TIME, YEAR),
    u("yr", Dimension::TIME, YEAR),
    u("year", Dimension::TIME, YEAR),
    u("years", Dimension::TIME, YEAR),
    // Temperature differences; degC standing alone also has an offset, see `CELSIUS_ZERO`.
    u("K", Dimension::TEMPERATURE, 1.0),
    u("degC", Dimension::TEMPERATURE, 1.0),
    u("°C", Dimension::TEMPERATURE, 1.0),
    // Energy. 1 MMBtu = 10^6 Btu, 1 therm = 10^5 Btu, both of the International Table.
    u("Btu", Dimension::ENERGY, BTU),
    u("MMBtu", Dimension::ENERGY, 1_055_055_852.62),
    u("therm", Dimension::ENERGY, 105_505_585.262),
    // The International Table kilocalorie, 4186.8 J, the one behind the Btu above: NIST SP 811, B.8.
    u("kcal", Dimension::ENERGY, 4_186.8),
];

/// 0 degC in kelvin: SI Brochure, 9th edition, 2.3.1.
pub(super) const CELSIUS_ZERO: f64 = 273.15;

/// Units that take SI prefixes. The gram is given per thousand, so that kg comes out as exactly 1.
const PREFIXED: &[(&str, &str, Dimension, f64, f64)] = &[
    ("g", "kMGTm", Dimension::MASS, 1.0, 1e3),
    ("J", "kMGTPm", Dimension::ENERGY, 1.0, 1.0),
    ("Wh", "kMGTPm", Dimension::ENERGY, 3_600.0, 1.0),
    ("W", "kMGTPm", Dimension::ENERGY.per(Dimension::TIME), 1.0, 1.0),
];

/// SI prefixes: SI Brochure, 9th edition, table 7.
const fn prefix(letter: char) -> f64 {
    match letter {
        'k' => 1e3,
        'M' => 1e6,
        'G' => 1e9,
        'T' => 1e12,
        'P' => 1e15,
        'm' => 1e-3,
        _ => f64::NAN,
    }
}

/// Every symbol with dimension and factor; large prefixes go before `m`, so that "mj" is first met as MJ.
pub(super) fn known() -> impl Iterator<Item = (String, Dimension, f64)> {
    let fixed = TABLE.iter().map(|e| (e.symbol.to_owned(), e.dimension, e.factor));
    let money = Currency::ALL
        .into_iter()
        .map(|c| (c.symbol().to_owned(), Dimension::currency(c), 1.0));
    let prefixed = PREFIXED
        .iter()
        .flat_map(|&(symbol, prefixes, dimension, above, below)| {
            let bare = (symbol.to_owned(), dimension, above / below);
            let with = prefixes
                .chars()
                .map(move |p| (format!("{p}{symbol}"), dimension, prefix(p) * above / below));
            std::iter::once(bare).chain(with)
        });
    fixed.chain(prefixed).chain(money)
}

/// The unit of a symbol, exactly as written.
pub(super) fn find(symbol: &str) -> Option<(Dimension, f64)> {
    if let Some(entry) = TABLE.iter().find(|e| e.symbol == symbol) {
        return Some((entry.dimension, entry.factor));
    }
    if let Some(currency) = Currency::from_symbol(symbol) {
        return Some((Dimension::currency(currency), 1.0));
    }
    PREFIXED
        .iter()
        .find_map(|&(unit, prefixes, dimension, above, below)| {
            let front = symbol.strip_suffix(unit)?;
            let mut letters = front.chars();
            match (letters.next(), letters.next()) {
                (None, _) => Some((dimension, above / below)),
                (Some(p), None) if prefixes.contains(p) => Some((dimension, prefix(p) * above / below)),
                _ => None,
            }
        })
}

/// What to write instead of a name that could mean several things, or that is spelt out.
pub(super) fn hint(word: &str) -> Option<&'static str> {
    Some(match word {
        // A guess by letter case alone would offer the megatonne, a million times too much.
        "MT" | "mt" => "t for a metric ton, Mt for a million of them",
        "ton" | "tons" => "t, short ton or long ton",
        "tonne" | "tonnes" => "t",
        "gal" | "gallon" | "gallons" => "US gal or imp gal",
        "bu" | "bushel" | "bushels" => "bushel maize or bushel wheat",
        "MBtu" | "mBtu" => "MMBtu for a million Btu",
        "lbs" | "pound" | "pounds" => "lb",
        "liter" | "litre" | "liters" | "litres" => "L",
        "hectare" | "hectares" => "ha",
        "acres" => "acre",
        "mile" | "miles" => "mi",
        "barrel" | "barrels" => "bbl",
        "therms" => "therm",
        "C" | "celsius" | "Celsius" => "degC",
        "hr" | "hour" | "hours" => "h",
        "days" => "d",
        "€" => "EUR",
        "$" => "USD, or the code of the dollar that is meant",
        "£" => "GBP",
        _ => return None,
    })
}
