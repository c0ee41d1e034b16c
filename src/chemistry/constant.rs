//! How an equilibrium constant moves with temperature.

/// The molar gas constant, J/(mol·K): exact in the SI of 2019 to the digits given.
pub const GAS_CONSTANT: f64 = 8.314_462_618;

/// The Faraday constant, C/mol: exact in the SI of 2019 to the digits given.
pub const FARADAY_CONSTANT: f64 = 96_485.332_12;

/// Volts against the standard hydrogen electrode for one unit of pe, by Nernst's equation:
/// ln 10 · R T / F.
pub fn volts_per_pe(kelvin: f64) -> f64 {
    std::f64::consts::LN_10 * GAS_CONSTANT * kelvin / FARADAY_CONSTANT
}

/// The pe of an electrode potential in volts against the standard hydrogen electrode.
pub fn pe_of_potential(volts: f64, kelvin: f64) -> f64 {
    volts / volts_per_pe(kelvin)
}

/// What is known of a reaction's heat at the temperature its constant is for.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct ReactionHeat {
    /// Enthalpy of reaction, J/mol.
    pub enthalpy: f64,
    /// Heat capacity of reaction, J/(mol·K); zero where it is not known.
    pub heat_capacity: f64,
}

/// log10 K at `kelvin`, from log10 K at `reference` kelvin, by van 't Hoff's equation
/// with a constant heat capacity of reaction:
/// ln K(T) = ln K(T₀) − ΔH/R (1/T − 1/T₀) + ΔCp/R (T₀/T − 1 + ln(T/T₀)).
///
/// Both temperatures must be above zero.
pub fn log_k_at(log_k: f64, reference: f64, heat: ReactionHeat, kelvin: f64) -> f64 {
    let enthalpy_term = heat.enthalpy * (1.0 / reference - 1.0 / kelvin);
    let ratio = reference / kelvin;
    let heat_capacity_term = heat.heat_capacity * (ratio - 1.0 - ratio.ln());
    log_k + (enthalpy_term + heat_capacity_term) / (GAS_CONSTANT * std::f64::consts::LN_10)
}
