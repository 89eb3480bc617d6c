//! The absorbing gases, and what scales their line strengths with temperature.

/// A gas that absorbs between 600 and 2800 cm-1.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Gas {
    /// Water vapour.
    H2o,
    /// Carbon dioxide.
    Co2,
    /// Ozone.
    O3,
    /// Nitrous oxide.
    N2o,
    /// Carbon monoxide.
    Co,
    /// Methane.
    Ch4,
    /// Sulphur dioxide.
    So2,
    /// Nitric acid.
    Hno3,
    /// CFC-11.
    Cfc11,
    /// CFC-12.
    Cfc12,
}

impl Gas {
    /// Every gas, in the order of its index.
    pub const ALL: [Gas; 10] = [
        Gas::H2o,
        Gas::Co2,
        Gas::O3,
        Gas::N2o,
        Gas::Co,
        Gas::Ch4,
        Gas::So2,
        Gas::Hno3,
        Gas::Cfc11,
        Gas::Cfc12,
    ];

    /// Place in per-gas arrays.
    pub fn index(self) -> usize {
        self as usize
    }

    /// Molar mass, g mol-1.
    pub fn molar_mass(self) -> f64 {
        match self {
            Gas::H2o => 18.015,
            Gas::Co2 => 44.009,
            Gas::O3 => 47.997,
            Gas::N2o => 44.013,
            Gas::Co => 28.010,
            Gas::Ch4 => 16.043,
            Gas::So2 => 64.064,
            Gas::Hno3 => 63.012,
            Gas::Cfc11 => 137.37,
            Gas::Cfc12 => 120.91,
        }
    }

    /// Exponent m of the partition function, `Q(T)/Q(296 K) = (T/296)^m`.
    ///
    /// Fitted to Q(220 K)/Q(296 K) of the TIPS tables (H2O 0.6428, CO2 0.7034, O3 0.6194, N2O
    /// 0.6887, CO 0.7439, CH4 0.6380, SO2 0.6066); the heavy gases are given as cross-sections.
    pub fn partition_exponent(self) -> f64 {
        let ratio: f64 = match self {
            Gas::H2o => 0.6428,
            Gas::Co2 => 0.7034,
            Gas::O3 => 0.6194,
            Gas::N2o => 0.6887,
            Gas::Co => 0.7439,
            Gas::Ch4 => 0.6380,
            Gas::So2 | Gas::Hno3 | Gas::Cfc11 | Gas::Cfc12 => 0.6066,
        };
        ratio.ln() / (220.0f64 / 296.0).ln()
    }
}
