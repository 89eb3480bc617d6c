//! What cloud height is worked out with.

use std::path::PathBuf;
use std::sync::Arc;

use anyhow::Context;
use serde_json::{Value, json};

use super::exit::UsageError;
use crate::granule::GranuleError;
use crate::layers::{Expression, Names, evaluate_all};
use crate::review::Review;
use crate::screening::{CLOUD_HEIGHT_NAMES, CloudHeight, Profile};
use crate::system::{Cancel, clean_text};

/// The air for cloud height by CO2 slicing.
#[derive(Debug, Clone, Default, clap::Args)]
pub struct Heights {
    /// A profile of the air for cloud heights in place of a standard atmosphere: lines of pressure
    /// (hPa), temperature (K) and, where known, water vapour and ozone (ppmv), separated by commas
    #[arg(long, value_name = "FILE")]
    pub profile: Option<PathBuf>,
}

impl Heights {
    /// The method on that air.
    ///
    /// # Errors
    /// The profile can't be read or makes no sense.
    pub fn method(&self) -> anyhow::Result<Arc<CloudHeight>> {
        let Some(path) = &self.profile else { return Ok(Arc::default()) };
        let shown = clean_text(&path.to_string_lossy());
        let text = std::fs::read_to_string(path)
            .with_context(|| format!("cannot read the profile {shown}"))?;
        let profile = Profile::parse(&text, &shown)
            .map_err(|error| UsageError(format!("profile {error}")))?;
        Ok(Arc::new(CloudHeight::on(Some(profile))))
    }
}

/// A cloud's top by CO2 slicing.
pub struct CloudTop {
    /// Pressure and its error, hPa.
    pressure: (f64, f64),
    /// Effective amount.
    amount: f64,
}

/// The cloud's top at a footprint, where there is one.
///
/// # Errors
/// The file can't be read.
pub fn cloud_top(review: &Review, footprint: usize) -> Result<Option<CloudTop>, GranuleError> {
    let parsed = CLOUD_HEIGHT_NAMES.iter().filter_map(|(name, _)| Expression::parse(name).ok());
    let expressions: Vec<Expression> = parsed.collect();
    let expressions: Vec<&Expression> = expressions.iter().collect();
    let evaluate = |names: &dyn Names| evaluate_all(&expressions, names);
    let layers = review.names().lend_all(&Cancel::new(), evaluate)?;
    let values: Vec<f64> = layers
        .iter()
        // A file without the channels has no heights.
        .filter_map(|layer| layer.as_ref().ok()?.values.get(footprint).copied())
        .collect();
    Ok(match values[..] {
        [pressure, sd, amount] if !pressure.is_nan() => {
            Some(CloudTop { pressure: (pressure, sd), amount })
        }
        _ => None,
    })
}

impl CloudTop {
    /// For machines.
    pub fn as_json(&self) -> Value {
        let (pressure, sd) = self.pressure;
        json!({ "pressure_hpa": pressure, "pressure_sd_hpa": sd, "effective_amount": self.amount })
    }
}

/// One line about it.
pub fn cloud_top_words(top: Option<&CloudTop>) -> String {
    match top {
        Some(CloudTop { pressure: (pressure, sd), amount }) => format!(
            "cloud top by CO2 slicing at {pressure:.0} hPa, give or take {sd:.0} hPa; effective amount \
             {amount:.2}"
        ),
        None => {
            "no cloud top by CO2 slicing: no cloud, one below 700 hPa, no clear sky near, or no \
                 single height"
                .to_owned()
        }
    }
}
