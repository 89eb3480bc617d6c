//! Typical noise of the three classes of sounders.

use crate::spectral::planck_slope;

/// NEdT by wavenumber (K) for scenes of a temperature.
pub(super) struct NoiseTable {
    /// Temperature of the scenes, K.
    pub temperature: f64,
    points: &'static [(f64, f64)],
}

pub(super) const INTERFEROMETER: NoiseTable = NoiseTable {
    temperature: 270.0,
    points: &[
        (650.0, 0.15),
        (700.0, 0.10),
        (750.0, 0.07),
        (900.0, 0.05),
        (1100.0, 0.07),
        (1210.0, 0.06),
        (1600.0, 0.06),
        (1750.0, 0.08),
        (2155.0, 0.12),
        (2400.0, 0.22),
        (2550.0, 0.45),
    ],
};
pub(super) const FINE_INTERFEROMETER: NoiseTable = NoiseTable {
    temperature: 280.0,
    points: &[
        (645.0, 0.30),
        (700.0, 0.22),
        (900.0, 0.15),
        (1600.0, 0.13),
        (1750.0, 0.15),
        (2150.0, 0.3),
        (2400.0, 0.6),
        (2700.0, 2.5),
    ],
};
pub(super) const GRATING: NoiseTable = NoiseTable {
    temperature: 250.0,
    points: &[
        (650.0, 0.48),
        (700.0, 0.33),
        (720.0, 0.24),
        (900.0, 0.15),
        (950.0, 0.10),
        (1100.0, 0.10),
        (1300.0, 0.09),
        (1600.0, 0.11),
        (2150.0, 0.11),
        (2400.0, 0.14),
        (2665.0, 0.25),
    ],
};

impl NoiseTable {
    /// Noise equivalent radiance at wavenumbers (cm-1), mW m-2 sr-1 (cm-1)-1.
    pub fn nedn(&self, wavenumbers: &[f64]) -> Vec<f32> {
        wavenumbers
            .iter()
            .map(|nu| {
                let above = self.points.partition_point(|point| point.0 < *nu);
                let high = self.points[above.min(self.points.len() - 1)];
                let low = self.points[above.saturating_sub(1)];
                let width = (high.0 - low.0).max(1e-9);
                let share = ((nu - low.0) / width).clamp(0.0, 1.0);
                let nedt = low.1 + share * (high.1 - low.1);
                (nedt * planck_slope(*nu, self.temperature)) as f32
            })
            .collect()
    }
}
