//! Ethanol and water as a mixture: moles and mass, enthalpies. Heat of mixing is neglected.

/// Molar mass of ethanol, g/mol (chemicals 1.5.2).
pub const ETHANOL_G_PER_MOL: f64 = 46.06844;
/// Molar mass of water, g/mol (chemicals 1.5.2).
pub const WATER_G_PER_MOL: f64 = 18.01528;

/// Molar latent heats at the normal boiling points, kJ/mol (CRC Handbook, heat of vaporization).
const ETHANOL_LATENT: f64 = 38.56;
const WATER_LATENT: f64 = 40.65;
/// Molar heat capacities of the liquids, kJ/(mol K): means over about 30 to 100 degC.
const ETHANOL_HEAT: f64 = 0.127;
const WATER_HEAT: f64 = 0.0757;

/// Ethanol mole fraction of a mixture of ethanol mass fraction `w`.
pub fn mole_fraction(w: f64) -> f64 {
    let (ethanol, water) = (w / ETHANOL_G_PER_MOL, (1.0 - w) / WATER_G_PER_MOL);
    ethanol / (ethanol + water)
}

/// Mean molar mass, g/mol, at ethanol mole fraction `x`.
pub fn g_per_mol(x: f64) -> f64 {
    x * ETHANOL_G_PER_MOL + (1.0 - x) * WATER_G_PER_MOL
}

/// Heat capacity of the liquid, kJ/(mol K).
pub(super) fn heat_capacity(x: f64) -> f64 {
    x * ETHANOL_HEAT + (1.0 - x) * WATER_HEAT
}

/// Latent heat, kJ/mol.
pub(super) fn latent(x: f64) -> f64 {
    x * ETHANOL_LATENT + (1.0 - x) * WATER_LATENT
}

/// Enthalpy of the liquid, kJ/mol; 0 at 0 degC.
pub(super) fn liquid(x: f64, celsius: f64) -> f64 {
    heat_capacity(x) * celsius
}

/// Enthalpy of the vapour, kJ/mol.
pub(super) fn vapour(y: f64, celsius: f64) -> f64 {
    liquid(y, celsius) + latent(y)
}
