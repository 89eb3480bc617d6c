//! The bias between observed and calculated spectra, by detector and view angle.

use super::scene::Classes;

/// A detector or a view angle whose bias would rest on fewer clear footprints than this has none.
pub const FEWEST: usize = 10;
/// Times that medians are taken from rows and columns in turn; three settle tables of this size.
const SWEEPS: usize = 3;

/// The bias of each detector and each view angle: their sum is that of both.
#[derive(Debug, Clone, PartialEq)]
pub struct Bias {
    detectors: Vec<f64>,
    views: Vec<f64>,
}

impl Bias {
    /// Of the departures of the footprints that were taken for clear: medians of what detectors and
    /// view angles leave of each other, in turn, so that a few cloudy ones among them matter little
    /// ([Tukey 1977], median polish).
    pub fn of(departures: &[f64], clear: &[usize], classes: &Classes) -> Bias {
        let mut bias =
            Bias { detectors: vec![0.0; classes.detectors()], views: vec![0.0; classes.views()] };
        for _ in 0..SWEEPS {
            bias.views = medians(departures, clear, classes.views(), |at| {
                (classes.view(at), bias.detectors[classes.detector(at)])
            });
            bias.detectors = medians(departures, clear, classes.detectors(), |at| {
                (Some(classes.detector(at)), classes.view(at).map_or(0.0, |view| bias.views[view]))
            });
        }
        bias
    }

    /// At a footprint, K; missing where it would rest on too little.
    pub fn at(&self, footprint: usize, classes: &Classes) -> f64 {
        let view = classes.view(footprint).map_or(f64::NAN, |view| self.views[view]);
        view + self.detectors[classes.detector(footprint)]
    }
}

/// The median in each class of what the other classes leave; missing where there is too little.
fn medians(
    departures: &[f64],
    clear: &[usize],
    classes: usize,
    class: impl Fn(usize) -> (Option<usize>, f64),
) -> Vec<f64> {
    let mut by_class: Vec<Vec<f64>> = vec![Vec::new(); classes];
    for at in clear {
        let (Some(own), other) = class(*at) else { continue };
        let left = departures[*at] - other;
        if !left.is_nan() {
            by_class[own].push(left);
        }
    }
    by_class
        .into_iter()
        .map(|left| if left.len() < FEWEST { f64::NAN } else { median(left) })
        .collect()
}

/// The median; the lower middle one of an even number, so that it is a value that was seen.
pub fn median(mut values: Vec<f64>) -> f64 {
    if values.is_empty() {
        return f64::NAN;
    }
    let middle = (values.len() - 1) / 2;
    *values.select_nth_unstable_by(middle, f64::total_cmp).1
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Detectors and view angles add up by construction; one footprint in five is cloudy.
    #[test]
    fn the_parts_of_a_sum_are_found_again() {
        let zeniths: Vec<f64> = (0..1800).map(|at| f64::from(at / 9 % 50)).collect();
        let classes = Classes::of(9, Some(&zeniths), 1800);
        let truth =
            |at: usize| 0.1 * (at % 9) as f64 - 0.4 + 0.25 * classes.view(at).unwrap() as f64;
        let wobble = |at: usize| 0.1 * ((at * 7919 % 101) as f64 / 50.0 - 1.0);
        let departures: Vec<f64> = (0..1800)
            .map(|at| truth(at) + wobble(at) - if at % 5 == 0 { 6.0 } else { 0.0 })
            .collect();
        let clear: Vec<usize> = (0..1800).collect();
        let bias = Bias::of(&departures, &clear, &classes);
        let worst =
            (0..1800).map(|at| (bias.at(at, &classes) - truth(at)).abs()).fold(0.0, f64::max);
        // A fifth of outliers on one side moves a median from the middle to the share 0.5 - 0.125 of
        // the sound ones: 0.025 K of an even spread of 0.2 K, once for detectors, once for angles.
        assert!(worst < 0.05, "{worst}");
    }

    #[test]
    fn a_detector_without_clear_footprints_has_no_bias() {
        let classes = Classes::of(2, None, 60);
        let clear: Vec<usize> = (0..60).filter(|at| at % 2 == 0).collect();
        let bias = Bias::of(&[0.3; 60], &clear, &classes);
        assert!((bias.at(0, &classes) - 0.3).abs() < 1e-12);
        assert!(bias.at(1, &classes).is_nan());
    }
}
