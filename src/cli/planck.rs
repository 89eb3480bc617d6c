//! `radsieve planck`: a converter at the prompt, radiance to brightness temperature and back.

use std::io::Write;

use serde::Serialize;

use super::Exit;
use super::exit::UsageError;
use crate::spectral::{brightness_temperature, planck};
use crate::units::{Kelvin, Radiance, RadianceUnit, Wavenumber, wavenumber_from_text};

/// What was typed.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    radsieve planck --at 900 --bt 280\n  \
    radsieve planck --at 11.1um --rad 6.9 --unit 'W m-2 sr-1 um-1'")]
pub struct Arguments {
    /// Where in the spectrum: a wavenumber (900, 900cm-1) or a length (11.1um); also Hz, GHz, THz.
    #[arg(long, value_name = "PLACE", allow_hyphen_values = true)]
    at: String,
    /// Brightness temperature in K, to be turned into a radiance.
    #[arg(long, value_name = "KELVIN", allow_hyphen_values = true)]
    #[arg(conflicts_with = "rad")]
    bt: Option<String>,
    /// Radiance in the unit of --unit, to be turned into a brightness temperature.
    #[arg(long, value_name = "RADIANCE", allow_hyphen_values = true)]
    rad: Option<String>,
    /// Unit of the radiance, per wavenumber, wavelength or frequency.
    #[arg(long, value_name = "UNIT", default_value_t = RadianceUnit::WORKING.label())]
    unit: String,
    /// Print one line of JSON.
    #[arg(long)]
    json: bool,
}

/// What the arguments mean.
struct Plan {
    wavenumber: Wavenumber,
    given: Given,
    unit: RadianceUnit,
    /// The unit as it was typed, which is how the person knows it.
    unit_text: String,
}

enum Given {
    Temperature(Kelvin),
    /// In the unit that was typed.
    Radiance(f64),
}

/// The answer; the names are the contract for scripts.
#[derive(Debug, Serialize)]
struct Answer {
    #[serde(rename = "wavenumber_cm-1")]
    wavenumber: f64,
    #[serde(rename = "wavelength_um")]
    wavelength: f64,
    #[serde(rename = "bt_K")]
    brightness_temperature: f64,
    radiance: f64,
    unit: String,
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    let answer = convert(plan(&arguments)?)?;
    let text = if arguments.json { serde_json::to_string(&answer)? } else { answer.in_words() };
    writeln!(std::io::stdout().lock(), "{text}")?;
    Ok(Exit::Done)
}

fn plan(arguments: &Arguments) -> Result<Plan, UsageError> {
    let wavenumber = wavenumber_from_text(&arguments.at)
        .map_err(|error| UsageError(format!("--at: {error}")))?;
    let unit = RadianceUnit::parse(&arguments.unit)
        .map_err(|error| UsageError(format!("--unit: {error}")))?;
    let given = match (&arguments.bt, &arguments.rad) {
        (Some(text), _) => Given::Temperature(temperature(text)?),
        (None, Some(text)) => Given::Radiance(number("--rad", text)?),
        (None, None) => {
            return Err(UsageError(
                "planck needs --bt (a temperature in K) or --rad (a radiance)".to_owned(),
            ));
        }
    };
    Ok(Plan {
        wavenumber: Wavenumber::new(wavenumber)
            .ok_or_else(|| UsageError("--at: a wavenumber must be positive".to_owned()))?,
        given,
        unit,
        unit_text: arguments.unit.trim().to_owned(),
    })
}

fn temperature(text: &str) -> Result<Kelvin, UsageError> {
    Kelvin::new(number("--bt", text)?).ok_or_else(|| {
        UsageError(format!("--bt: {text:?} is no temperature: it must be greater than 0 K"))
    })
}

fn number(option: &str, text: &str) -> Result<f64, UsageError> {
    match text.trim().parse::<f64>() {
        Ok(value) if value.is_finite() => Ok(value),
        _ => Err(UsageError(format!("{option}: {text:?} is no number"))),
    }
}

fn convert(plan: Plan) -> Result<Answer, UsageError> {
    let wavenumber = plan.wavenumber.value();
    let factor = plan.unit.factor_at(wavenumber);
    let (brightness_temperature, radiance) = match plan.given {
        Given::Temperature(kelvin) => {
            (kelvin.value(), representable(planck(wavenumber, kelvin.value()) / factor)?)
        }
        Given::Radiance(radiance) => (inverted(wavenumber, radiance, factor, &plan)?, radiance),
    };
    Ok(Answer {
        wavenumber,
        wavelength: plan.wavenumber.wavelength_micrometres(),
        brightness_temperature,
        radiance,
        unit: plan.unit_text,
    })
}

fn inverted(wavenumber: f64, radiance: f64, factor: f64, plan: &Plan) -> Result<f64, UsageError> {
    let no_temperature = |reason: &str| {
        let unit = &plan.unit_text;
        UsageError(format!(
            "a radiance of {radiance} {unit} has no brightness temperature: {reason}"
        ))
    };
    let working = Radiance::new(radiance * factor)
        .ok_or_else(|| no_temperature("radiance outside the range of numbers"))?;
    brightness_temperature(wavenumber, working.value())
        .map_err(|reason| no_temperature(&reason.to_string()))
}

/// A body so cold or a place so far off that the radiance is no number above zero any more.
fn representable(radiance: f64) -> Result<f64, UsageError> {
    if radiance.is_normal() {
        Ok(radiance)
    } else {
        Err(UsageError("the radiance is outside the range of numbers".to_owned()))
    }
}

impl Answer {
    fn in_words(&self) -> String {
        format!(
            "wavenumber              {} cm-1\n\
             wavelength              {} um\n\
             brightness temperature  {} K\n\
             radiance                {} {}",
            significant(self.wavenumber),
            significant(self.wavelength),
            significant(self.brightness_temperature),
            significant(self.radiance),
            self.unit,
        )
    }
}

/// Twelve significant digits without trailing zeros: as many as the constants and f64 support
/// everywhere, so that 11.1 is not shown as 11.100000000000001.
fn significant(value: f64) -> String {
    let rounded: f64 = format!("{value:.11e}").parse().unwrap_or(value);
    if (1e-4..1e12).contains(&rounded.abs()) {
        format!("{rounded}")
    } else {
        format!("{rounded:e}")
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn twelve_digits_are_shown() {
        assert_eq!(significant(11.100_000_000_000_001), "11.1");
        assert_eq!(significant(900.0), "900");
        assert_eq!(significant(85.996_261_536_123_4), "85.9962615361");
        assert_eq!(significant(2.868_526_516_97e-12), "2.86852651697e-12");
    }
}
