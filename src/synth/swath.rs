//! Where footprints lie: an orbit-like swath on a round Earth.

/// Mean radius of the Earth, km.
const EARTH_RADIUS: f64 = 6371.0;
/// Height of the orbit, km.
const ORBIT_HEIGHT: f64 = 830.0;
/// Speed of the point below the satellite, km s-1.
const GROUND_SPEED: f64 = 6.56;

/// A place on the ground, degrees.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Position {
    /// Degrees north.
    pub latitude: f64,
    /// Degrees east, -180 to 180.
    pub longitude: f64,
}

/// How a scan looks at the ground.
#[derive(Debug, Clone, PartialEq)]
pub struct Swath {
    /// Point below the satellite in the middle of the granule.
    pub centre: Position,
    /// Direction of flight, degrees clockwise from north.
    pub heading: f64,
    /// Scan lines.
    pub lines: usize,
    /// Positions in a scan line.
    pub positions: usize,
    /// Detectors along each side of the square cluster at a position.
    pub side: usize,
    /// Scan angle of the middle of the line, degrees to the right of the flight.
    pub middle_angle: f64,
    /// Scan angle from one position to the next, degrees.
    pub position_step: f64,
    /// Angle between neighbouring detectors, degrees.
    pub detector_step: f64,
    /// Seconds from one scan line to the next.
    pub line_seconds: f64,
    /// Seconds since 2000-01-01 00:00 UTC in the middle of the granule.
    pub middle_time: f64,
}

/// One footprint as the instrument sees it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sight {
    /// Its middle.
    pub position: Position,
    /// Angle between the line of sight and the vertical on the ground, degrees.
    pub view_zenith: f64,
    /// Direction to the satellite, degrees clockwise from north.
    pub view_azimuth: f64,
    /// Seconds since 2000-01-01 00:00 UTC.
    pub time: f64,
}

impl Swath {
    /// Detectors at each position.
    pub fn detectors(&self) -> usize {
        self.side * self.side
    }

    /// Largest view zenith angle of the granule, degrees.
    pub fn steepest(&self) -> f64 {
        let edge = 0.5 * (self.positions as f64 - 1.0) * self.position_step
            + self.side as f64 * self.detector_step;
        ground_zenith(self.middle_angle.abs() + edge)
    }

    /// The footprint of a scan line, position and detector.
    pub fn sight(&self, line: usize, position: usize, detector: usize) -> Sight {
        let offset = (line as f64 - 0.5 * (self.lines as f64 - 1.0)) * self.line_seconds;
        let within = position as f64 / self.positions as f64 * 0.8 * self.line_seconds;
        let along = GROUND_SPEED * (offset + within) / EARTH_RADIUS;
        let (below, heading) = travel(self.centre, self.heading, along);
        let scan = self.scan_angle(position);
        let (across_offset, along_offset) = self.detector_offset(detector, scan);
        let (across, ahead) = (scan + across_offset, along_offset);
        let off_nadir = across.hypot(ahead);
        let direction = heading + across.atan2(ahead).to_degrees();
        let zenith = ground_zenith(off_nadir);
        let (position, bearing) = travel(below, direction, (zenith - off_nadir).to_radians());
        Sight {
            position,
            view_zenith: zenith,
            view_azimuth: (bearing + 180.0).rem_euclid(360.0),
            time: self.middle_time + offset + within,
        }
    }

    fn scan_angle(&self, position: usize) -> f64 {
        self.middle_angle
            + (position as f64 - 0.5 * (self.positions as f64 - 1.0)) * self.position_step
    }

    /// Place of a detector in the cluster, which the scan mirror turns by the scan angle.
    fn detector_offset(&self, detector: usize, scan: f64) -> (f64, f64) {
        let middle = 0.5 * (self.side as f64 - 1.0);
        let across = ((detector % self.side) as f64 - middle) * self.detector_step;
        let along = (middle - (detector / self.side) as f64) * self.detector_step;
        let (sine, cosine) = scan.to_radians().sin_cos();
        (across * cosine + along * sine, along * cosine - across * sine)
    }
}

/// Zenith angle on the ground of a line of sight that leaves the satellite off nadir (degrees).
fn ground_zenith(off_nadir: f64) -> f64 {
    let ratio = (EARTH_RADIUS + ORBIT_HEIGHT) / EARTH_RADIUS;
    (ratio * off_nadir.to_radians().sin()).clamp(-1.0, 1.0).asin().to_degrees()
}

/// Goes along a great circle: where it leads, and the direction there (degrees).
fn travel(from: Position, bearing: f64, angle: f64) -> (Position, f64) {
    let (latitude, bearing) = (from.latitude.to_radians(), bearing.to_radians());
    let sine = latitude.sin() * angle.cos() + latitude.cos() * angle.sin() * bearing.cos();
    let arrived = sine.clamp(-1.0, 1.0).asin();
    let turn =
        (bearing.sin() * angle.sin() * latitude.cos()).atan2(angle.cos() - latitude.sin() * sine);
    let end_bearing = (bearing.sin() * latitude.cos())
        .atan2(latitude.cos() * angle.cos() * bearing.cos() - latitude.sin() * angle.sin());
    let longitude = from.longitude + turn.to_degrees();
    let position = Position {
        latitude: arrived.to_degrees(),
        longitude: (longitude + 180.0).rem_euclid(360.0) - 180.0,
    };
    (position, end_bearing.to_degrees())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn swath() -> Swath {
        Swath {
            centre: Position { latitude: 10.0, longitude: 30.0 },
            heading: 0.0,
            lines: 45,
            positions: 30,
            side: 3,
            middle_angle: 0.0,
            position_step: 3.33,
            detector_step: 1.1,
            line_seconds: 8.0,
            middle_time: 0.0,
        }
    }

    #[test]
    fn the_edge_of_the_scan_is_seen_under_the_angle_of_the_orbit() {
        // asin((6371 + 830) / 6371 * sin 48.3 deg) = 57.6 degrees.
        assert!((ground_zenith(48.3) - 57.6).abs() < 0.1);
        assert!(swath().steepest() > 57.0);
    }

    #[test]
    fn travelling_a_quarter_of_the_equator() {
        let (there, bearing) =
            travel(Position { latitude: 0.0, longitude: 170.0 }, 90.0, 90f64.to_radians());
        assert!(there.latitude.abs() < 1e-9 && (there.longitude + 100.0).abs() < 1e-9);
        assert!((bearing - 90.0).abs() < 1e-9);
    }

    #[test]
    fn lines_go_north_and_positions_to_the_right() {
        let swath = swath();
        let at = |line, position| swath.sight(line, position, 4).position;
        assert!(at(30, 15).latitude > at(20, 15).latitude);
        assert!(at(20, 20).longitude > at(20, 10).longitude);
        // 8 s of flight are 52 km, 0.47 degrees.
        assert!((at(21, 15).latitude - at(20, 15).latitude - 0.472).abs() < 0.005);
    }

    #[test]
    fn the_cluster_turns_with_the_scan() {
        let swath = swath();
        let direction = |position: usize| {
            let (left, right) =
                (swath.sight(22, position, 3).position, swath.sight(22, position, 5).position);
            (right.latitude - left.latitude)
                .atan2((right.longitude - left.longitude) * right.latitude.to_radians().cos())
                .to_degrees()
        };
        // At the left edge the row of detectors is turned by the scan angle, 48 degrees before
        // the stretching of the view; near nadir it lies across the track.
        assert!(direction(14).abs() < 5.0, "{}", direction(14));
        assert!(direction(0).abs() > 20.0, "{}", direction(0));
    }
}
