//! The size of a granule, as it is asked for.

use super::instrument::Instrument;
use super::scene::Setting;
use super::scenes::SceneName;
use super::swath::Swath;

/// How many footprints and channels.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Shape {
    /// Small, with an instrument and a layout of the scene's own.
    Sample,
    /// 45 scan lines x 30 positions x 9 detectors, 717 + 869 + 637 channels.
    Interferometer,
    /// 135 scan lines x 90 positions, 2378 channels.
    Grating,
    /// Chosen numbers; with detectors an interferometer, without a grating.
    Custom {
        /// Scan lines.
        lines: usize,
        /// Positions in a scan line.
        positions: usize,
        /// Detectors along a side of the cluster, 1 for no detector dimension.
        side: usize,
    },
}

/// What is wrong with a shape that was typed.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error(
    "{0:?} is no shape: write sample, interferometer, grating, or numbers such as 20x30 (scan lines x \
     positions) or 20x30x9 (x 1, 4 or 9 detectors), no more than 2000 of each"
)]
pub struct ShapeError(String);

/// More than any granule has; keeps a slip of the finger from filling a disk.
const MOST: usize = 2000;

impl Shape {
    /// Reads a shape as typed.
    pub fn parse(text: &str) -> Result<Shape, ShapeError> {
        match text {
            "sample" => Ok(Shape::Sample),
            "interferometer" => Ok(Shape::Interferometer),
            "grating" => Ok(Shape::Grating),
            _ => Shape::numbers(text).ok_or_else(|| ShapeError(text.to_owned())),
        }
    }

    fn numbers(text: &str) -> Option<Shape> {
        let numbers: Vec<usize> =
            text.split('x').map(|part| part.parse().ok()).collect::<Option<_>>()?;
        if numbers.iter().any(|number| *number == 0 || *number > MOST) {
            return None;
        }
        match numbers[..] {
            [lines, positions] => Some(Shape::Custom { lines, positions, side: 1 }),
            [lines, positions, detectors] => {
                let side = [1, 2, 3].into_iter().find(|side| side * side == detectors)?;
                Some(Shape::Custom { lines, positions, side })
            }
            _ => None,
        }
    }

    /// As it is typed.
    pub fn label(self) -> String {
        match self {
            Shape::Sample => "sample".to_owned(),
            Shape::Interferometer => "interferometer".to_owned(),
            Shape::Grating => "grating".to_owned(),
            Shape::Custom { lines, positions, side: 1 } => format!("{lines}x{positions}"),
            Shape::Custom { lines, positions, side } => {
                format!("{lines}x{positions}x{}", side * side)
            }
        }
    }

    /// The instrument, and how it scans the scene.
    pub(super) fn instrument(self, scene: SceneName, setting: &Setting) -> (Instrument, Swath) {
        let (mut instrument, lines, positions) = match self {
            Shape::Sample => scene.sample(),
            Shape::Interferometer => (Instrument::interferometer(), 45, 30),
            Shape::Grating => (Instrument::grating(), 135, 90),
            Shape::Custom { lines, positions, side: 1 } => {
                (Instrument::grating(), lines, positions)
            }
            Shape::Custom { lines, positions, side } => {
                let instrument = Instrument { side, ..Instrument::interferometer() };
                (instrument, lines, positions)
            }
        };
        // A line of any length fits between the edges of a scan, 48.3 degrees to either side.
        let widest = 96.6 / positions as f64;
        if instrument.position_step > widest {
            instrument.detector_step *= widest / instrument.position_step;
            instrument.position_step = widest;
        }
        let swath = Swath {
            centre: setting.centre,
            heading: setting.heading,
            lines,
            positions,
            side: instrument.side,
            middle_angle: if self == Shape::Sample { setting.middle_angle } else { 0.0 },
            position_step: instrument.position_step,
            detector_step: instrument.detector_step,
            line_seconds: instrument.line_seconds,
            middle_time: setting.time,
        };
        (instrument, swath)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn shapes_read_as_they_are_written() {
        for text in ["sample", "interferometer", "grating", "20x30", "20x30x9", "7x8x4"] {
            assert_eq!(Shape::parse(text).map(Shape::label), Ok(text.to_owned()));
        }
    }

    #[test]
    fn senseless_shapes_are_refused() {
        for text in ["", "big", "0x3", "20", "20x30x5", "3x3x3x3", "99999x1", "-2x3"] {
            assert!(Shape::parse(text).is_err(), "{text}");
        }
    }

    #[test]
    fn samples_have_enough_footprints_for_a_scene() {
        for scene in SceneName::ALL {
            let (_, swath) = Shape::Sample.instrument(scene, &scene.setting());
            assert!(swath.lines * swath.positions * swath.detectors() >= 1500);
        }
    }
}
