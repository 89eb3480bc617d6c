//! The principal absorption bands between 600 and 2800 cm-1, to name them on a spectrum.

/// One gas band: where its absorption is conspicuous, and its centre.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct AbsorptionBand {
    /// Gas and mode.
    pub label: &'static str,
    /// Lower end of the conspicuous absorption, cm-1.
    pub low: f64,
    /// Upper end of the conspicuous absorption, cm-1.
    pub high: f64,
    /// Band centre, cm-1.
    pub centre: f64,
}

/// In ascending order of their centres; intervals may overlap.
///
/// Centres: Herzberg 1945 (CO2 bending mode), Guelachvili et al. 1983 (CO), else positions as
/// commonly quoted after the HITRAN papers (Rothman et al.). The limits are reading aids for a plot
/// and no part of any test.
pub const ABSORPTION_BANDS: &[AbsorptionBand] = &[
    AbsorptionBand { label: "CO2 ν2", low: 600.0, high: 770.0, centre: 667.38 },
    AbsorptionBand { label: "O3 ν3", low: 1000.0, high: 1070.0, centre: 1042.08 },
    AbsorptionBand { label: "SO2 ν1", low: 1120.0, high: 1180.0, centre: 1151.7 },
    AbsorptionBand { label: "N2O ν1", low: 1255.0, high: 1310.0, centre: 1284.9 },
    AbsorptionBand { label: "CH4 ν4", low: 1200.0, high: 1380.0, centre: 1306.0 },
    AbsorptionBand { label: "SO2 ν3", low: 1330.0, high: 1390.0, centre: 1362.06 },
    AbsorptionBand { label: "H2O ν2", low: 1250.0, high: 2100.0, centre: 1594.75 },
    AbsorptionBand { label: "CO 1-0", low: 2070.0, high: 2220.0, centre: 2143.27 },
    AbsorptionBand { label: "N2O ν3", low: 2180.0, high: 2260.0, centre: 2223.76 },
    AbsorptionBand { label: "CO2 ν3", low: 2230.0, high: 2397.0, centre: 2349.14 },
];

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn centres_lie_inside_and_ascend() {
        for band in ABSORPTION_BANDS {
            assert!(band.low < band.centre && band.centre < band.high, "{band:?}");
        }
        assert!(ABSORPTION_BANDS.is_sorted_by(|one, next| one.centre < next.centre));
    }
}
