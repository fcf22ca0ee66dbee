//! What a number counts, as exponents over a small fixed set of base quantities.

/// A fertiliser or soil substance that is counted as itself, so that `kg N` never passes for `kg`.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Debug)]
pub enum Substance {
    /// Nitrogen.
    N,
    /// Phosphate, as phosphorus pentoxide.
    P2O5,
    /// Potash, as potassium oxide.
    K2O,
    /// Calcium carbonate.
    CaCO3,
    /// Calcium oxide.
    CaO,
    /// Magnesium oxide.
    MgO,
    /// Sodium.
    Na,
    /// Sodium oxide.
    Na2O,
    /// Sulphur.
    S,
    /// Sulphur trioxide.
    SO3,
    /// Phosphorus.
    P,
    /// Potassium.
    K,
}

impl Substance {
    /// All counted substances, in the order of their declaration.
    pub const ALL: [Substance; 12] = {
        use Substance::*;
        [N, P2O5, K2O, CaCO3, CaO, MgO, Na, Na2O, S, SO3, P, K]
    };

    /// The formula, as written after a mass: `N` in `kg N`.
    pub const fn symbol(self) -> &'static str {
        match self {
            Substance::N => "N",
            Substance::P2O5 => "P2O5",
            Substance::K2O => "K2O",
            Substance::CaCO3 => "CaCO3",
            Substance::CaO => "CaO",
            Substance::MgO => "MgO",
            Substance::Na => "Na",
            Substance::Na2O => "Na2O",
            Substance::S => "S",
            Substance::SO3 => "SO3",
            Substance::P => "P",
            Substance::K => "K",
        }
    }

    /// The name in words: "nitrogen".
    pub const fn name(self) -> &'static str {
        match self {
            Substance::N => "nitrogen",
            Substance::P2O5 => "phosphate",
            Substance::K2O => "potash",
            Substance::CaCO3 => "calcium carbonate",
            Substance::CaO => "calcium oxide",
            Substance::MgO => "magnesium oxide",
            Substance::Na => "sodium",
            Substance::Na2O => "sodium oxide",
            Substance::S => "sulphur",
            Substance::SO3 => "sulphur trioxide",
            Substance::P => "phosphorus",
            Substance::K => "potassium",
        }
    }

    /// The substance of a formula, exactly as written.
    pub fn from_symbol(symbol: &str) -> Option<Substance> {
        Self::ALL.into_iter().find(|s| s.symbol() == symbol)
    }
}

/// A currency; each is a base of its own, because nothing here knows an exchange rate.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Debug)]
pub enum Currency {
    /// Euro.
    EUR,
    /// United States dollar.
    USD,
    /// Pound sterling.
    GBP,
    /// Brazilian real.
    BRL,
    /// Argentine peso.
    ARS,
    /// Australian dollar.
    AUD,
    /// Canadian dollar.
    CAD,
    /// Swiss franc.
    CHF,
    /// Chinese yuan renminbi.
    CNY,
    /// Colombian peso.
    COP,
    /// Czech koruna.
    CZK,
    /// Danish krone.
    DKK,
    /// Hungarian forint.
    HUF,
    /// Indian rupee.
    INR,
    /// Japanese yen.
    JPY,
    /// Mexican peso.
    MXN,
    /// Norwegian krone.
    NOK,
    /// Polish zloty.
    PLN,
    /// Romanian leu.
    RON,
    /// Serbian dinar.
    RSD,
    /// Swedish krona.
    SEK,
    /// Thai baht.
    THB,
    /// Ukrainian hryvnia.
    UAH,
    /// South African rand.
    ZAR,
}

impl Currency {
    /// All currencies that a price may be in.
    #[rustfmt::skip]
    pub const ALL: [Currency; 24] = {
        use Currency::*;
        [EUR, USD, GBP, BRL, ARS, AUD, CAD, CHF, CNY, COP, CZK, DKK, HUF, INR, JPY, MXN, NOK, PLN, RON, RSD, SEK, THB, UAH, ZAR]
    };

    /// The ISO 4217 code.
    #[rustfmt::skip]
    pub const fn symbol(self) -> &'static str {
        match self {
            Currency::EUR => "EUR", Currency::USD => "USD", Currency::GBP => "GBP", Currency::BRL => "BRL",
            Currency::ARS => "ARS", Currency::AUD => "AUD", Currency::CAD => "CAD", Currency::CHF => "CHF",
            Currency::CNY => "CNY", Currency::COP => "COP", Currency::CZK => "CZK", Currency::DKK => "DKK",
            Currency::HUF => "HUF", Currency::INR => "INR", Currency::JPY => "JPY", Currency::MXN => "MXN",
            Currency::NOK => "NOK", Currency::PLN => "PLN", Currency::RON => "RON", Currency::RSD => "RSD",
            Currency::SEK => "SEK", Currency::THB => "THB", Currency::UAH => "UAH", Currency::ZAR => "ZAR",
        }
    }

    /// The currency of an ISO 4217 code, exactly as written.
    pub fn from_symbol(symbol: &str) -> Option<Currency> {
        Self::ALL.into_iter().find(|c| c.symbol() == symbol)
    }
}

/// Base quantities. Energy is a base and not mass x area / time squared: nobody here builds joules
/// from kilograms, and a heating value should read "energy per mass".
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub(super) enum Base {
    Mass,
    Length,
    Time,
    Temperature,
    Energy,
    EnergyGross,
    EnergyNet,
    Heat,
    Power,
    Substance(Substance),
    Currency(Currency),
}

const PLAIN: usize = 9;
const BASES: usize = PLAIN + Substance::ALL.len() + Currency::ALL.len();

impl Base {
    const fn index(self) -> usize {
        match self {
            Base::Mass => 0,
            Base::Length => 1,
            Base::Time => 2,
            Base::Temperature => 3,
            Base::Energy => 4,
            Base::EnergyGross => 5,
            Base::EnergyNet => 6,
            Base::Heat => 7,
            Base::Power => 8,
            Base::Substance(s) => PLAIN + s as usize,
            Base::Currency(c) => PLAIN + Substance::ALL.len() + c as usize,
        }
    }

    /// Every base, in the order in which a person writes them: money and substances, energies, then the rest.
    pub(super) fn all() -> impl Iterator<Item = Base> {
        let plain = [
            Base::Energy,
            Base::EnergyGross,
            Base::EnergyNet,
            Base::Heat,
            Base::Power,
            Base::Mass,
            Base::Length,
            Base::Temperature,
            Base::Time,
        ];
        let money = Currency::ALL.into_iter().map(Base::Currency);
        let counted = Substance::ALL.into_iter().map(Base::Substance);
        money.chain(counted).chain(plain)
    }
}

/// What a number counts: exponents over base quantities. Counted substances, tagged energies and
/// currencies are bases of their own, so they never mix by accident.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Debug)]
pub struct Dimension([i8; BASES]);

impl Dimension {
    /// A plain number, a share, percent, ppm.
    pub const NONE: Dimension = Dimension([0; BASES]);
    /// Base unit kg.
    pub const MASS: Dimension = Self::base(Base::Mass);
    /// Base unit m.
    pub const LENGTH: Dimension = Self::base(Base::Length);
    /// Base unit m2.
    pub const AREA: Dimension = Self::LENGTH.powi(2);
    /// Base unit m3.
    pub const VOLUME: Dimension = Self::LENGTH.powi(3);
    /// Base unit s.
    pub const TIME: Dimension = Self::base(Base::Time);
    /// Base unit K.
    pub const TEMPERATURE: Dimension = Self::base(Base::Temperature);
    /// Energy without a tag, base unit J: what the factor asks for, net for a fuel.
    pub const ENERGY: Dimension = Self::base(Base::Energy);
    /// Energy by the gross (higher) heating value, base unit J.
    pub const ENERGY_GROSS: Dimension = Self::base(Base::EnergyGross);
    /// Energy by the net (lower) heating value, base unit J.
    pub const ENERGY_NET: Dimension = Self::base(Base::EnergyNet);
    /// Energy delivered as heat, base unit J.
    pub const HEAT: Dimension = Self::base(Base::Heat);
    /// Electrical energy ("kWh power"), base unit J. Not energy per time: that is `ENERGY.per(TIME)`.
    pub const POWER: Dimension = Self::base(Base::Power);
    /// Goods carried over a distance, base unit kg m: `t km`.
    pub const TRANSPORT: Dimension = Self::MASS.times(Self::LENGTH);

    /// The bare energy, then the four tagged ones.
    pub const ENERGIES: [Dimension; 5] = [
        Self::ENERGY,
        Self::ENERGY_GROSS,
        Self::ENERGY_NET,
        Self::HEAT,
        Self::POWER,
    ];

    const fn base(base: Base) -> Dimension {
        let mut exponents = [0; BASES];
        exponents[base.index()] = 1;
        Dimension(exponents)
    }

    /// A counted substance, base unit kg of it.
    pub const fn substance(substance: Substance) -> Dimension {
        Self::base(Base::Substance(substance))
    }

    /// Money, base unit one of the currency.
    pub const fn currency(currency: Currency) -> Dimension {
        Self::base(Base::Currency(currency))
    }

    /// The product. Exponents stop at the ends of `i8` instead of panicking; units come nowhere near.
    #[must_use]
    pub const fn times(self, other: Self) -> Self {
        self.add(other, 1)
    }

    /// The quotient, same limits as [`Dimension::times`].
    #[must_use]
    pub const fn per(self, other: Self) -> Self {
        self.add(other, -1)
    }

    /// A whole power, same limits as [`Dimension::times`].
    #[must_use]
    pub const fn powi(self, power: i8) -> Self {
        Self::NONE.add(self, power)
    }

    const fn add(self, other: Self, times: i8) -> Self {
        let mut exponents = self.0;
        let mut i = 0;
        while i < BASES {
            exponents[i] = exponents[i].saturating_add(other.0[i].saturating_mul(times));
            i += 1;
        }
        Dimension(exponents)
    }

    pub(super) const fn exponent(self, base: Base) -> i8 {
        self.0[base.index()]
    }

    /// True when an exponent sits at a limit, where products may have lost their meaning.
    pub(super) fn saturated(self) -> bool {
        self.0.iter().any(|&e| e == i8::MAX || e == i8::MIN)
    }

    /// True for bare, gross, net, heat or power energy.
    pub fn is_energy(self) -> bool {
        Self::ENERGIES.contains(&self)
    }

    /// The substance this is a mass of, if it is exactly that.
    pub fn as_substance(self) -> Option<Substance> {
        Substance::ALL.into_iter().find(|&s| Self::substance(s) == self)
    }

    /// The currency this is an amount of, if it is exactly that.
    pub fn as_currency(self) -> Option<Currency> {
        Currency::ALL.into_iter().find(|&c| Self::currency(c) == self)
    }
}
