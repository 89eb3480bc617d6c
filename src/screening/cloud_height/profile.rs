//! A profile of the air that a user gives.

use super::air::LOWEST_PRESSURE;
use crate::forward::{Atmosphere, GivenLevel};
use crate::system::clean_text;

/// Air as a user knows it, and what to call it.
#[derive(Debug, Clone, PartialEq)]
pub struct Profile {
    /// Its name, for notes.
    pub name: String,
    /// The air.
    pub air: Atmosphere,
}

/// What is wrong with the text of a profile.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("{name}, line {line}: {what}")]
pub struct ProfileError {
    /// The profile.
    pub name: String,
    /// Line from 1; 0 for the whole.
    pub line: usize,
    /// What is wrong.
    pub what: String,
}

/// Fewer levels than this are no profile.
const FEWEST: usize = 10;
/// So many of them must lie where clouds are.
const FEWEST_WITH_CLOUDS: usize = 5;

impl Profile {
    /// Reads lines of pressure (hPa), temperature (K) and, where known, water vapour (ppmv) and
    /// ozone (ppmv), separated by commas, from the ground upward or downward. Lines that begin with
    /// `#`, empty ones and a heading are passed over. What is not given is that of the US Standard
    /// Atmosphere.
    ///
    /// # Errors
    /// A line that can't be read; too few levels, or too few where clouds are; levels out of order.
    pub fn parse(text: &str, name: &str) -> Result<Profile, ProfileError> {
        let wrong = |line: usize, what: String| ProfileError { name: clean_text(name), line, what };
        let mut levels = Vec::new();
        for (number, line) in text.lines().enumerate() {
            let line = line.trim();
            let is_heading = levels.is_empty() && line.starts_with(|c: char| c.is_alphabetic());
            if line.is_empty() || line.starts_with('#') || is_heading {
                continue;
            }
            levels.push(level(line).map_err(|what| wrong(number + 1, what))?);
        }
        if levels.len() < FEWEST {
            let what = format!("{} levels are too few: give at least {FEWEST}", levels.len());
            return Err(wrong(0, what));
        }
        if levels[0].pressure < levels[1].pressure {
            levels.reverse();
        }
        if levels.windows(2).any(|pair| pair[0].pressure <= pair[1].pressure) {
            return Err(wrong(0, "the pressures are not in order".to_owned()));
        }
        let with_clouds = levels.iter().filter(|level| level.pressure >= LOWEST_PRESSURE).count();
        if with_clouds < FEWEST_WITH_CLOUDS {
            let what = format!(
                "{with_clouds} of {} levels lie at {LOWEST_PRESSURE} hPa or more, where clouds are: give \
                 at least {FEWEST_WITH_CLOUDS} there, from the ground upward",
                levels.len()
            );
            return Err(wrong(0, what));
        }
        Ok(Profile { name: clean_text(name), air: Atmosphere::of_levels(&levels) })
    }
}

fn level(line: &str) -> Result<GivenLevel, String> {
    let numbers: Vec<f64> = line
        .split(',')
        .map(|cell| {
            cell.trim().parse::<f64>().map_err(|_| format!("{} is no number", clean_text(cell)))
        })
        .collect::<Result<_, _>>()?;
    let (pressure, temperature) = match numbers[..] {
        [pressure, temperature] | [pressure, temperature, ..] if numbers.len() <= 4 => {
            (pressure, temperature)
        }
        _ => return Err("expected pressure, temperature, water vapour, ozone".to_owned()),
    };
    if !(0.01..=1100.0).contains(&pressure) || !(120.0..=350.0).contains(&temperature) {
        return Err("expected a pressure in hPa and a temperature in K".to_owned());
    }
    let amount = |place: usize| match numbers.get(place) {
        Some(amount) if !(0.0..1e6).contains(amount) => Err("expected amounts in ppmv".to_owned()),
        other => Ok(other.copied()),
    };
    Ok(GivenLevel { pressure, temperature, water_ppmv: amount(2)?, ozone_ppmv: amount(3)? })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// An isothermal-free column: 6.5 K per km up to 11 km and constant above, every 1 km.
    fn text() -> String {
        let line = |km: i32| {
            let height = f64::from(km);
            let temperature = 288.15 - 6.5 * height.min(11.0);
            format!(
                "{:.2}, {temperature:.2}, {:.1}\n",
                1013.25 * (-height / 7.6).exp(),
                7000.0 * (-height / 2.0).exp()
            )
        };
        (0..=30).map(line).collect()
    }

    #[test]
    fn a_profile_is_read_in_either_order() {
        let upward =
            Profile::parse(&format!("pressure, temperature, water\n# made up\n{}", text()), "mine");
        let lines: Vec<String> = text().lines().rev().map(str::to_owned).collect();
        let downward = Profile::parse(&lines.join("\n"), "mine").unwrap();
        assert_eq!(upward.as_ref().unwrap(), &downward);
        let air = downward.air;
        assert!((air.levels()[0].temperature - 288.15).abs() < 1e-9);
        // The hypsometric equation with the pressures of a scale height of 7.6 km: level 11 lies
        // near 11 km, to what that scale height is off by.
        assert!((air.levels()[11].height - 11.0).abs() < 0.6, "{}", air.levels()[11].height);
    }

    #[test]
    fn mistakes_are_named_with_their_line() {
        let error = |text: &str| Profile::parse(text, "mine").unwrap_err();
        assert_eq!(error("1000, 290\n900, warm").line, 2);
        assert_eq!(error("1000, 290\n900, 15").line, 2);
        assert!(error("1000, 290\n900, 280").what.contains("too few"));
        let swapped = text().replacen("1013.25", "800.00", 1);
        assert!(error(&swapped).what.contains("not in order"));
        // Twenty levels of the stratosphere alone, and with four below them.
        let thin = |from: usize| text().lines().skip(from).collect::<Vec<_>>().join("\n");
        let high: String = (1..=20).map(|at| format!("{}, 220\n", 2.9 * f64::from(at))).collect();
        assert!(error(&high).what.contains("0 of 20 levels lie at 60 hPa or more"));
        let four: String =
            [100, 200, 300, 400].iter().map(|at| format!("{at}, 250\n")).collect::<String>();
        assert!(error(&format!("{high}{four}")).what.contains("4 of 24 levels"));
        // From 8 km upward the air has fourteen levels below 60 hPa.
        assert!(Profile::parse(&thin(8), "mine").is_ok());
    }
}
