//! Which part of the spectrum is on show: zoom and pan.

/// The narrowest window, cm-1: a handful of channels of any sounder.
const NARROWEST: f64 = 2.0;
/// The share of the window's width that one pan moves.
const PAN: f64 = 0.25;

/// A window over the wavenumbers of a granule.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SpectrumWindow {
    whole: (f64, f64),
    shown: (f64, f64),
}

impl SpectrumWindow {
    /// The whole spectrum from `low` to `high` (cm-1), with a little room at the ends.
    pub fn whole(low: f64, high: f64) -> SpectrumWindow {
        let room = ((high - low) * 0.01).max(NARROWEST / 2.0);
        let whole = (low - room, high + room);
        SpectrumWindow { whole, shown: whole }
    }

    /// Lowest and highest wavenumber on show, cm-1.
    pub fn shown(&self) -> (f64, f64) {
        self.shown
    }

    /// Whether all of it is on show.
    pub fn is_whole(&self) -> bool {
        self.shown == self.whole
    }

    /// Shows these wavenumbers, as far as there are any.
    pub fn show(&mut self, low: f64, high: f64) {
        let (first, last) = self.whole;
        let width = (high - low).clamp(NARROWEST.min(last - first), last - first);
        let low = low.clamp(first, last - width);
        if low.is_finite() && width.is_finite() {
            self.shown = (low, low + width);
        }
    }

    /// Half as much, around a wavenumber.
    pub fn zoom_in(&mut self, around: f64) {
        self.zoom(around, 0.5);
    }

    /// Twice as much, around a wavenumber.
    pub fn zoom_out(&mut self, around: f64) {
        self.zoom(around, 2.0);
    }

    /// Everything again.
    pub fn show_whole(&mut self) {
        self.shown = self.whole;
    }

    /// Moves by a quarter of what is shown, to higher wavenumbers or to lower ones.
    pub fn pan(&mut self, higher: bool) {
        let (low, high) = self.shown;
        let step = (high - low) * if higher { PAN } else { -PAN };
        self.show(low + step, high + step);
    }

    /// Moves as little as it takes for a wavenumber to be on show.
    pub fn keep_in_view(&mut self, wavenumber: f64) {
        let (low, high) = self.shown;
        if wavenumber < low || wavenumber > high {
            let half = (high - low) / 2.0;
            self.show(wavenumber - half, wavenumber + half);
        }
    }

    fn zoom(&mut self, around: f64, factor: f64) {
        let (low, high) = self.shown;
        let around = around.clamp(low, high);
        let width = ((high - low) * factor).max(NARROWEST);
        // What lay at a share of the old window lies at the same share of the new one.
        let share = (around - low) / (high - low);
        self.show(around - share * width, around + (1.0 - share) * width);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn zooming_keeps_the_place_under_the_channel() {
        let mut window = SpectrumWindow::whole(650.0, 2650.0);
        let all = window.shown();
        window.zoom_in(900.0);
        let (low, high) = window.shown();
        assert!((high - low - (all.1 - all.0) / 2.0).abs() < 1e-9);
        let share = |(low, high): (f64, f64)| (900.0 - low) / (high - low);
        assert!((share(window.shown()) - share(all)).abs() < 1e-9);
        window.zoom_out(900.0);
        window.zoom_out(900.0);
        assert!(window.is_whole());
    }

    #[test]
    fn nothing_leaves_the_spectrum() {
        let mut window = SpectrumWindow::whole(650.0, 2650.0);
        for _ in 0..30 {
            window.zoom_in(2649.0);
        }
        let (low, high) = window.shown();
        assert!((high - low - NARROWEST).abs() < 1e-9);
        for _ in 0..100 {
            window.pan(true);
        }
        assert_eq!(window.shown().1, 2670.0);
        window.keep_in_view(700.0);
        assert!(window.shown().0 < 700.0 && window.shown().1 > 700.0);
    }

    #[test]
    fn one_channel_has_a_window_too() {
        let mut window = SpectrumWindow::whole(900.0, 900.0);
        window.zoom_in(900.0);
        window.pan(false);
        assert_eq!(window.shown(), (899.0, 901.0));
    }
}
