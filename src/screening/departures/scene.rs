//! What departures rest on: detectors, view angles, and the footprints that are taken for clear.

use super::bias::FEWEST;

/// Where classes of the view zenith angle end, degrees: slant paths of about 1.06, 1.22, 1.41, 1.66.
const EDGES: [f64; 4] = [20.0, 35.0, 45.0, 53.0];
/// Clear footprints are no further in the window than this from the warm edge of all, K.
const FROM_WARM_EDGE: f64 = 1.5;
/// The warm edge is where this share of the even footprints lies below.
const WARM_EDGE: f64 = 0.9;
/// Clear footprints differ no more than this from those around, K.
const EVEN: f64 = 0.5;
/// So many of nine places must be there to tell.
const PLACES: usize = 4;
/// No calculation is wrong by more than this in the window, K; what departs further is no clear sky:
/// above an inversion cloud is warmer than the ground.
const LARGEST_BIAS: f64 = 4.0;
/// From this share of land on a footprint is no sea.
const LAND: f64 = 0.1;

/// Detectors and classes of the view angle.
#[derive(Debug, Clone)]
pub struct Classes {
    detectors: usize,
    /// By footprint; nothing where the angle is missing. None at all where the file gives no angles.
    views: Option<Vec<Option<u8>>>,
}

impl Classes {
    /// Of footprints of which `detectors` in a row lie at one position.
    pub fn of(detectors: usize, zeniths: Option<&[f64]>, footprints: usize) -> Classes {
        let class = |zenith: f64| {
            let class = EDGES.partition_point(|edge| *edge <= zenith.abs()) as u8;
            (!zenith.is_nan()).then_some(class)
        };
        let class_at = |zeniths: &[f64], at: usize| zeniths.get(at).copied().and_then(class);
        let views =
            zeniths.map(|zeniths| (0..footprints).map(|at| class_at(zeniths, at)).collect());
        Classes { detectors: detectors.max(1), views }
    }

    /// How many detectors there are.
    pub fn detectors(&self) -> usize {
        self.detectors
    }

    /// How many classes of the view angle there are.
    pub fn views(&self) -> usize {
        if self.views.is_some() { EDGES.len() + 1 } else { 1 }
    }

    /// A footprint's detector.
    pub fn detector(&self, footprint: usize) -> usize {
        footprint % self.detectors
    }

    /// A footprint's class of the view angle; without angles all are of one class.
    pub fn view(&self, footprint: usize) -> Option<usize> {
        match &self.views {
            None => Some(0),
            Some(views) => views.get(footprint).copied().flatten().map(usize::from),
        }
    }

    /// How many footprints the biases rest on, and which have none, in words.
    pub fn words(&self, clear: &[usize]) -> Vec<String> {
        let count = |of: &dyn Fn(usize) -> bool| clear.iter().filter(|at| of(**at)).count();
        let detectors: Vec<usize> = (0..self.detectors)
            .map(|detector| count(&|at| self.detector(at) == detector))
            .collect();
        let views: Vec<usize> =
            (0..self.views()).map(|view| count(&|at| self.view(at) == Some(view))).collect();
        let there = |view: usize| match &self.views {
            None => true,
            Some(views) => views.contains(&Some(view as u8)),
        };
        let all = clear.len();
        let mut words = vec![format!("departures: bias over {all} footprints taken for clear")];
        let too_few =
            |count: usize| format!("{count} taken for clear, fewer than {FEWEST}: no bias");
        for (detector, count) in detectors.iter().enumerate().filter(|(_, n)| **n < FEWEST) {
            words.push(format!("departures of detector {detector}: {}", too_few(*count)));
        }
        for (view, count) in views.iter().enumerate().filter(|(_, n)| **n < FEWEST) {
            if there(view) {
                let from = if view == 0 { 0.0 } else { EDGES[view - 1] };
                let to = EDGES.get(view).map_or(String::new(), |edge| format!(" to {edge}"));
                words.push(format!(
                    "departures at view angles from {from}{to} degrees: {}",
                    too_few(*count)
                ));
            }
        }
        words
    }
}

/// The window of all footprints as departures, and what else tells clear ones.
pub struct Window<'w> {
    /// Observed minus calculated, K.
    pub departures: Vec<f64>,
    /// Scan lines.
    pub lines: usize,
    /// Detectors at each position.
    pub detectors: usize,
    /// Share of land.
    pub land: Option<&'w [f64]>,
}

impl Window<'_> {
    /// The footprints that are taken for clear, without asking what the calculation says about other
    /// channels: even, and near the warm edge of all even ones that depart no further than a calculation
    /// is wrong by. Those over sea where there are enough of them, for the ground's temperature is
    /// calculated badly.
    pub fn clear(&self) -> Vec<usize> {
        let is_even = |at: &usize| self.spread(*at) <= EVEN;
        let is_sea =
            |at: &usize| self.land.is_some_and(|land| land.get(*at).is_some_and(|l| *l < LAND));
        let there = |at: &usize| self.departures[*at].abs() <= LARGEST_BIAS;
        let even: Vec<usize> =
            (0..self.departures.len()).filter(|at| there(at) && is_even(at)).collect();
        let at_sea: Vec<usize> = even.iter().copied().filter(is_sea).collect();
        let among = if at_sea.len() >= FEWEST { at_sea } else { even };
        let mut sorted: Vec<f64> = among.iter().map(|at| self.departures[*at]).collect();
        sorted.sort_by(f64::total_cmp);
        let place = (WARM_EDGE * sorted.len() as f64) as usize;
        let Some(edge) = sorted.get(place.min(sorted.len().saturating_sub(1))).copied() else {
            return Vec::new();
        };
        let near = |at: &usize| (self.departures[*at] - edge).abs() <= FROM_WARM_EDGE;
        among.into_iter().filter(near).collect()
    }

    /// The standard deviation of the departures of the same detector at the places beside a footprint and
    /// its own, K; missing where fewer than [`PLACES`] are there. Detectors are not compared with each
    /// other: one that is dead or biased would make all the others look uneven.
    fn spread(&self, footprint: usize) -> f64 {
        let places = self.departures.len() / (self.lines * self.detectors).max(1);
        let place = footprint / self.detectors;
        let (line, position) = (place / places.max(1), place % places.max(1));
        let beside = |at: usize, end: usize| at.saturating_sub(1)..(at + 2).min(end);
        let around: Vec<f64> = beside(line, self.lines)
            .flat_map(|line| beside(position, places).map(move |position| line * places + position))
            .map(|place| self.departures[place * self.detectors + footprint % self.detectors])
            .filter(|departure| !departure.is_nan())
            .collect();
        if around.len() < PLACES {
            return f64::NAN;
        }
        let mean = around.iter().sum::<f64>() / around.len() as f64;
        let squares: f64 = around.iter().map(|one| (one - mean).powi(2)).sum();
        (squares / around.len() as f64).sqrt()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn classes_end_at_their_edges_and_a_missing_angle_has_none() {
        let zeniths = [0.0, -19.9, 20.0, 44.0, 60.0, f64::NAN];
        let classes = Classes::of(3, Some(&zeniths), 6);
        let views: Vec<Option<usize>> = (0..6).map(|at| classes.view(at)).collect();
        assert_eq!(views, [Some(0), Some(0), Some(1), Some(2), Some(4), None]);
        assert_eq!((classes.detector(4), classes.detectors(), classes.views()), (1, 3, 5));
        assert_eq!(Classes::of(1, None, 6).view(5), Some(0));
    }

    #[test]
    fn clear_are_the_even_ones_near_the_warm_edge() {
        // Three lines of eight positions: clear sea at +0.3 K, from the fourth position on an even deck 3 K
        // colder, cloud above an inversion in the last two.
        let line = [0.3, 0.3, 0.3, -2.7, -2.7, -2.7, 9.0, 9.0];
        let departures = [line; 3].concat();
        let window = Window { departures, lines: 3, detectors: 1, land: None };
        // The third position has the deck beside it, and so has the fourth the sea.
        assert_eq!(window.clear(), [0, 1, 8, 9, 16, 17]);
        let nothing = Window { departures: vec![f64::NAN; 4], lines: 2, detectors: 1, land: None };
        assert!(nothing.clear().is_empty());
    }

    #[test]
    fn a_dead_detector_makes_no_other_one_uneven() {
        let departures: Vec<f64> =
            (0..50).map(|at| if at % 2 == 1 { -150.0 } else { 0.1 }).collect();
        let window = Window { departures, lines: 5, detectors: 2, land: None };
        assert_eq!(window.clear(), (0..25).map(|place| 2 * place).collect::<Vec<_>>());
    }

    #[test]
    fn the_sea_is_asked_where_there_is_enough_of_it() {
        let (departures, lines) = (vec![0.0; 100], 10);
        let coast: Vec<f64> = (0..100).map(|at| if at % 10 < 2 { 0.0 } else { 1.0 }).collect();
        let window = Window { departures, lines, detectors: 1, land: Some(&coast) };
        assert_eq!(window.clear().len(), 20);
    }

    #[test]
    fn what_has_no_bias_is_told() {
        let zeniths: Vec<f64> = (0..60).map(|at| if at < 50 { 5.0 } else { 50.0 }).collect();
        let classes = Classes::of(1, Some(&zeniths), 60);
        let words = classes.words(&(0..52).collect::<Vec<_>>());
        assert_eq!(words.len(), 2);
        assert!(words[0].ends_with("52 footprints taken for clear"));
        assert!(words[1].contains("from 45 to 53 degrees: 2 taken for clear"), "{}", words[1]);
    }
}
