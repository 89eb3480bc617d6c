//! The place: where one was in a granule, kept between sessions.

use serde::{Deserialize, Serialize};

use crate::flags::{Campaign, GranuleIdentity};

/// Where one was.
#[derive(Debug, Clone, Default, PartialEq, Serialize, Deserialize)]
#[serde(default)]
pub struct Place {
    /// The footprint under the cursor.
    pub cursor: usize,
    /// The layer on show.
    pub layer: Option<String>,
    /// The wavenumber of the channel in hand, cm-1.
    pub channel: Option<f64>,
    /// The part of the spectrum on show, cm-1; none for all of it.
    pub window: Option<(f64, f64)>,
    /// The quantity of the spectra, by its name.
    pub quantity: String,
    /// Steps that the Field is zoomed in.
    pub field_zoom: u8,
    /// The Field goes by latitude and longitude.
    pub geographic: bool,
    /// What the Strip lies along: the number of a dimension, or beyond all numbers the granules.
    pub strip_along: usize,
    /// The panes that had the keys, the latest first, by their names.
    pub panes: Vec<String>,
    /// The pane with the keys has the screen for itself.
    pub zoomed: bool,
    /// The pinned footprints.
    pub pins: Vec<usize>,
}

impl Place {
    /// This place, kept the last time, but for what differs `now` from where one `begun`.
    pub fn but_for(self, begun: &Place, now: Place) -> Place {
        fn one<T: PartialEq>(kept: T, begun: &T, now: T) -> T {
            if now == *begun { kept } else { now }
        }
        Place {
            cursor: one(self.cursor, &begun.cursor, now.cursor),
            layer: one(self.layer, &begun.layer, now.layer),
            channel: one(self.channel, &begun.channel, now.channel),
            window: one(self.window, &begun.window, now.window),
            quantity: one(self.quantity, &begun.quantity, now.quantity),
            field_zoom: one(self.field_zoom, &begun.field_zoom, now.field_zoom),
            geographic: one(self.geographic, &begun.geographic, now.geographic),
            pins: one(self.pins, &begun.pins, now.pins),
            ..self
        }
    }
}

/// The place that a person left a granule at, or none where there is none that can be read.
pub fn read(campaign: &Campaign, granule: &GranuleIdentity, person: &str) -> Option<Place> {
    serde_json::from_value(campaign.place(granule, person)?).ok()
}

/// Keeps a place. It is a convenience: where it cannot be written, it is lost without a word.
pub fn keep(campaign: &Campaign, granule: &GranuleIdentity, person: &str, place: &Place) {
    if let Ok(value) = serde_json::to_value(place) {
        let _ = campaign.keep_place(granule, person, &value);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_place_comes_back_and_damage_is_no_place() {
        let folder = tempfile::tempdir().unwrap();
        let campaign = Campaign::open_or_create(folder.path()).unwrap();
        let granule = GranuleIdentity {
            hash: "0123456789abcdef".to_owned(),
            size: 1,
            name: "lowen.nc".to_owned(),
            footprints: vec![("line".to_owned(), 100)],
            bands: Vec::new(),
            read_with: Vec::new(),
        };
        assert_eq!(read(&campaign, &granule, "ada"), None);
        let place = Place {
            cursor: 77,
            layer: Some("bt(900)".to_owned()),
            window: Some((880.0, 920.0)),
            pins: vec![3, 9],
            ..Place::default()
        };
        keep(&campaign, &granule, "ada", &place);
        assert_eq!(read(&campaign, &granule, "ada"), Some(place));
        assert_eq!(read(&campaign, &granule, "bo"), None);
        let damaged = serde_json::json!({ "cursor": -1 });
        campaign.keep_place(&granule, "ada", &damaged).unwrap();
        assert_eq!(read(&campaign, &granule, "ada"), None);
        // What an older version wrote has fewer fields.
        let older = serde_json::json!({ "cursor": 5 });
        campaign.keep_place(&granule, "ada", &older).unwrap();
        assert_eq!(read(&campaign, &granule, "ada").map(|place| place.cursor), Some(5));
    }
}
