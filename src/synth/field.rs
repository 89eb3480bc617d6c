//! Smooth random fields on the ground: what makes a scene look like weather rather than static.

use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::SeedableRng;
use rand_distr::{Distribution, StandardNormal};

/// Nodes along each side of the lattice that a field repeats after.
const NODES: usize = 64;

/// A field of mean 0 and standard deviation about 1: octaves of cubic splines through random nodes.
#[derive(Debug, Clone)]
pub struct Field {
    nodes: Vec<f32>,
    /// Distance between the nodes of the coarsest octave, km.
    scale: f64,
    octaves: u32,
    /// How much longer structures are along x than along y.
    stretch: f64,
    norm: f64,
}

impl Field {
    /// A field with structures of about `scale` km, refined in `octaves` halvings.
    ///
    /// Equal `seed` and `stream` give equal fields on every machine.
    pub fn new(seed: u64, stream: u64, scale: f64, octaves: u32) -> Field {
        let mut random = ChaCha8Rng::seed_from_u64(seed);
        random.set_stream(stream);
        let nodes =
            (0..NODES * NODES).map(|_| Distribution::<f32>::sample(&StandardNormal, &mut random));
        let mut field = Field { nodes: nodes.collect(), scale, octaves, stretch: 1.0, norm: 1.0 };
        field.norm = 1.0 / field.spread();
        field
    }

    /// Draws structures out along x by a factor.
    pub fn stretched(mut self, stretch: f64) -> Field {
        self.stretch = stretch;
        self
    }

    /// Value at a place (km).
    pub fn at(&self, x: f64, y: f64) -> f64 {
        let (mut frequency, mut weight, mut sum) = (1.0 / self.scale, 1.0, 0.0);
        for octave in 0..self.octaves {
            // Octaves are shifted against each other, else their nodes would coincide.
            let shift = f64::from(octave) * 17.37;
            sum +=
                weight * self.spline(x * frequency / self.stretch + shift, y * frequency - shift);
            frequency *= 2.0;
            weight *= 0.55;
        }
        sum * self.norm
    }

    fn spline(&self, x: f64, y: f64) -> f64 {
        let (column, row) = (x.floor(), y.floor());
        let (along, across) = (weights(x - column), weights(y - row));
        let node = |c: i64, r: i64| {
            let side = NODES as i64;
            let index = r.rem_euclid(side) * side + c.rem_euclid(side);
            f64::from(self.nodes[index as usize])
        };
        let mut sum = 0.0;
        for (j, weight_y) in across.iter().enumerate() {
            for (i, weight_x) in along.iter().enumerate() {
                let value = node(column as i64 + i as i64 - 1, row as i64 + j as i64 - 1);
                sum += weight_x * weight_y * value;
            }
        }
        sum
    }

    /// Standard deviation over a sample of places, before it is normalised.
    fn spread(&self) -> f64 {
        let step = self.scale * 0.731;
        let values: Vec<f64> = (0..40)
            .flat_map(|i| (0..40).map(move |j| (f64::from(i), f64::from(j))))
            .map(|(i, j)| self.at(i * step, j * step))
            .collect();
        let squares: f64 = values.iter().map(|value| value * value).sum();
        (squares / values.len() as f64).sqrt().max(1e-6)
    }
}

/// Cubic B-spline weights of the four nodes around a place.
fn weights(t: f64) -> [f64; 4] {
    let u = 1.0 - t;
    [
        u * u * u / 6.0,
        (4.0 - 6.0 * t * t + 3.0 * t * t * t) / 6.0,
        (4.0 - 6.0 * u * u + 3.0 * u * u * u) / 6.0,
        t * t * t / 6.0,
    ]
}

/// A soft step from 0 below `low` to 1 above `high`.
pub fn ramp(value: f64, low: f64, high: f64) -> f64 {
    let share = ((value - low) / (high - low)).clamp(0.0, 1.0);
    share * share * (3.0 - 2.0 * share)
}

/// Mean of a quantity over a footprint of `radius` km, from seven places in it.
pub fn over_footprint(x: f64, y: f64, radius: f64, value: impl Fn(f64, f64) -> f64) -> f64 {
    let around = (0..6).map(|step| {
        let angle = f64::from(step) * std::f64::consts::FRAC_PI_3;
        value(x + 0.65 * radius * angle.cos(), y + 0.65 * radius * angle.sin())
    });
    (value(x, y) + around.sum::<f64>()) / 7.0
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn fields_repeat_with_their_seed_and_differ_between_streams() {
        let (a, b) = (Field::new(7, 1, 80.0, 3), Field::new(7, 1, 80.0, 3));
        assert_eq!(a.at(12.0, 34.0), b.at(12.0, 34.0));
        assert_ne!(a.at(12.0, 34.0), Field::new(7, 2, 80.0, 3).at(12.0, 34.0));
    }

    #[test]
    fn near_places_are_alike_and_far_ones_are_not() {
        let field = Field::new(1, 1, 100.0, 1);
        let difference = |distance: f64| {
            (0..200)
                .map(|i| {
                    let x = f64::from(i) * 31.0;
                    (field.at(x, 0.0) - field.at(x + distance, 0.0)).abs()
                })
                .sum::<f64>()
                / 200.0
        };
        // A spline moves by a small share of its spread in a twentieth of its scale.
        assert!(difference(5.0) < 0.2 * difference(300.0));
    }

    #[test]
    fn steps_are_soft() {
        assert_eq!(
            (ramp(-1.0, 0.0, 1.0), ramp(0.5, 0.0, 1.0), ramp(2.0, 0.0, 1.0)),
            (0.0, 0.5, 1.0)
        );
    }
}
