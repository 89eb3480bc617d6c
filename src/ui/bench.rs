//! The granule on the table, as the screen holds it.

use std::sync::Arc;

use crate::flags::{FootprintSet, screened_by};
use crate::granule::Channel;
use crate::review::{Measure, Measured, Record, Review, Spectrum};
use crate::screening::Screened;
use crate::tray::Standing;

pub use super::bench_parts::{
    Awaited, Filling, Index, Overtaken, Pinned, Quality, RecordState, Signs, Tests, overtake,
};
use super::channel_flags::ChannelPick;
use super::channels::Channels;
use super::doubting::Doubt;
use super::jobs::Job;
use super::overlay::Selection;
use super::panes::Arrangement;
use super::panes::field::Placement;
use super::place::Place;
use super::selecting::{Selecting, Shape};
use super::shown_layer::ShownLayer;
use super::side::Side;
use super::spectrum_window::SpectrumWindow;
use super::spot::Spot;
use super::spreading::Spread;
use super::trace_look::{TraceLook, TraceQuantity};

/// The footprints that can be pinned at once; more spectra cannot be told apart.
pub const MOST_PINS: usize = 4;

/// The channel nearest to this wavenumber (cm-1) is in hand at first: in a clean window.
const FIRST_CHANNEL: f64 = 900.0;

/// The granule on the table.
pub struct Bench {
    /// Its entry in the Tray.
    pub entry: usize,
    /// The granule itself.
    pub review: Arc<Review>,
    /// Where its footprints lie on the map that is shown.
    pub placement: Arc<Placement>,
    /// Where they lie in the instrument's order, whatever map is shown.
    pub order: Arc<Placement>,
    /// Its channels in one order.
    pub channels: Channels,
    /// What was decided.
    pub record: RecordState,
    /// The footprint under the cursor.
    pub cursor: usize,
    /// What is selected, or being drawn.
    pub selecting: Selecting,
    /// What the Spread is about.
    pub spread: Spread,
    /// The spectra as they were compared last.
    pub measured: Option<Arc<Measured>>,
    /// A spot check under way.
    pub spot: Option<Spot>,
    /// What is left in doubt.
    pub doubt: Doubt,
    /// The layer on show.
    pub layer: ShownLayer,
    /// The layer that was on show before, to go back to.
    pub other_layer: Option<ShownLayer>,
    /// The layer asked for: the one on show, or the one that takes its place when it is there.
    pub wanted: String,
    /// The layers that keys step through.
    pub suggested: Vec<String>,
    /// The spectrum under the cursor, once it is there.
    pub spectrum: Option<Spectrum>,
    /// Why there is no spectrum, if so.
    pub spectrum_problem: Option<String>,
    /// The pinned footprints.
    pub pins: Vec<Pinned>,
    /// The indices of the Evidence: expression and values or why there are none.
    pub indices: Vec<Index>,
    /// What the tests say.
    pub tests: Tests,
    /// The window channels of the Evidence.
    pub windows: Vec<Channel>,
    /// What the producer says about quality: variables with their values.
    pub quality: Vec<Quality>,
    /// The part of the spectrum on show.
    pub window: SpectrumWindow,
    /// The channel in hand, by its number in `channels`.
    pub channel: usize,
    /// Channels picked beside it.
    pub channel_pick: ChannelPick,
    /// What the Trace shows beside the spectrum, and in which quantity.
    pub look: TraceLook,
    /// Steps that the Field is zoomed in.
    pub field_zoom: u8,
    /// The Field goes by latitude and longitude instead of the instrument's order.
    pub geographic: bool,
    /// What the signs over the Field tell.
    pub signs: Signs,
    /// Whether cursor, box and pins are marked on the Field.
    pub marks: bool,
    /// How far the reading of the spectra has come.
    pub filling: Filling,
    /// What is started once the first picture is there.
    pub behind_first_picture: Vec<Job>,
    /// The requests whose answers are waited for.
    pub awaited: Awaited,
    /// What ends jobs whose answers are no longer waited for.
    pub overtaken: Overtaken,
    /// A key wanted to decide something while the ledgers were still being read.
    pub asked_early: bool,
    /// Where one was when it came on the table: what keys have changed since, a kept place leaves.
    pub begun: Place,
}

impl Bench {
    /// A granule just put on the table, with `first_layer` or the first suggested one asked for.
    pub fn new(entry: usize, review: Arc<Review>, first_layer: Option<String>) -> Bench {
        let granule = review.granule();
        let order = Arc::new(in_order(&review));
        let channels = Channels::of(granule.bands().iter().map(|band| &band.axis));
        let (low, high) = channels.range().unwrap_or((0.0, 1.0));
        let suggested = review.suggested_layers();
        let wanted = first_layer.or_else(|| suggested.first().cloned()).unwrap_or_default();
        let index = |(text, label): (&str, &str)| Index {
            text: text.to_owned(),
            label: label.to_owned(),
            unit: String::new(),
            values: Ok(Vec::new()),
        };
        let indices = review.first_look().into_iter().map(index).collect();
        let windows = review.window_channels();
        let mut bench = Bench {
            entry,
            placement: Arc::clone(&order),
            order,
            channel: channels.nearest(FIRST_CHANNEL),
            channels,
            record: RecordState::Reading,
            cursor: 0,
            selecting: Selecting::default(),
            spread: Spread::default(),
            channel_pick: ChannelPick::default(),
            measured: None,
            spot: None,
            doubt: Doubt::default(),
            layer: ShownLayer::waiting(&wanted),
            other_layer: None,
            wanted,
            suggested,
            spectrum: None,
            spectrum_problem: None,
            pins: Vec::new(),
            indices,
            tests: Tests::default(),
            windows,
            quality: Vec::new(),
            window: SpectrumWindow::whole(low, high),
            look: TraceLook::default(),
            field_zoom: 0,
            geographic: false,
            signs: Signs::default(),
            marks: true,
            filling: Filling::default(),
            behind_first_picture: Vec::new(),
            awaited: Awaited::default(),
            overtaken: Overtaken::default(),
            asked_early: false,
            begun: Place::default(),
            review,
        };
        bench.begun = bench.place(&Arrangement::default());
        bench
    }

    /// Offers what the tests say among the layers that keys step through: the doubt, and how
    /// probable each flag is.
    pub fn suggest_judgements(&mut self, screened: &Screened) {
        let flags = screened.rulebook.flags();
        let probable = flags.iter().map(|flag| format!("probability(\"{flag}\")"));
        for layer in std::iter::once("doubt".to_owned()).chain(probable) {
            if !self.suggested.contains(&layer) {
                self.suggested.push(layer);
            }
        }
    }

    /// Lays the Field out by latitude and longitude, or in the instrument's order; false where the
    /// positions are not known.
    pub fn place_geographically(&mut self, geographic: bool) -> bool {
        let placement = match geographic {
            true => {
                let place = self.review.granule().geolocation();
                let known = place.latitude.as_deref().zip(place.longitude.as_deref());
                let placed = known.and_then(|(north, east)| Placement::geographic(north, east));
                placed.map(Arc::new)
            }
            false => Some(Arc::clone(&self.order)),
        };
        let Some(placement) = placement else { return false };
        (self.placement, self.geographic) = (placement, geographic);
        true
    }

    /// Compares what the tests say with what stands in the ledgers.
    pub fn compare_tests(&mut self) {
        let record = self.record.open();
        let both = self.tests.screened.as_deref().zip(record);
        let compared = both.map(|(screened, record)| record.compare_tests(screened));
        self.tests.on_record = compared.unwrap_or_default();
    }

    /// How far it has come, for the Tray. When the person last decided here is left out: that
    /// counts only while it is not on the table.
    pub fn standing(&self, record: &Record) -> Standing {
        let screened = self.tests.screened.is_some();
        let by_tests = || record.counts().by_test > 0;
        let in_doubt = match screened {
            true => Some(self.doubt.footprints()),
            false => by_tests().then_some(record.counts().in_doubt),
        };
        Standing {
            state: record.state().granule,
            counts: Some(record.counts().clone()),
            in_doubt,
            tests: screened_by(record.decisions()),
            spot_checks: record.spot_checks().cloned().collect(),
            ..Standing::default()
        }
    }

    /// The spectra as this measure compares them, if they were compared by it last.
    pub fn measured_by(&self, measure: Measure) -> Option<Arc<Measured>> {
        self.measured.clone().filter(|measured| measured.yardstick().measure() == measure)
    }

    /// How many footprints there are.
    pub fn footprints(&self) -> usize {
        self.placement.footprints()
    }

    /// Moves the cursor; false if it is there already.
    pub fn move_to(&mut self, footprint: usize) -> bool {
        if footprint == self.cursor || footprint >= self.footprints() {
            return false;
        }
        self.cursor = footprint;
        true
    }

    /// What the next decision is about: what is selected, joined with what is being drawn, else the
    /// footprint under the cursor.
    pub fn selection(&self) -> Selection {
        match self.shape_selection() {
            Some(shape) => self.selecting.joined(self.selecting.join, shape),
            None => self.selecting.kept().cloned().unwrap_or_else(|| self.under_cursor()),
        }
    }

    /// The footprints of what is being drawn.
    pub fn shape_selection(&self) -> Option<Selection> {
        self.selecting.shape.as_ref().map(|shape| shape.selection(self))
    }

    fn under_cursor(&self) -> Selection {
        let words = format!("footprint {}", self.position_words(self.cursor));
        Selection::of(FootprintSet::single(self.cursor), words)
    }

    /// The side of a value that is being typed.
    pub fn side(&self) -> Option<Side> {
        match self.selecting.shape {
            Some(Shape::Side(side)) => Some(side),
            _ => None,
        }
    }

    /// Puts a side of a value in the place of what is being drawn, or lets go of it.
    pub fn set_side(&mut self, side: Option<Side>) {
        match side {
            Some(side) => self.selecting.shape = Some(Shape::Side(side)),
            None if self.side().is_some() => self.selecting.shape = None,
            None => {}
        }
    }

    /// The footprints on one side of a value of the layer.
    pub fn side_selection(&self, side: Side) -> Selection {
        let values = self.layer.values.iter().enumerate();
        let footprints: FootprintSet =
            values.filter(|(_, value)| side.holds(**value)).map(|(one, _)| one).collect();
        let count = footprints.len();
        let (layer, relation) = (&self.layer.text, side.relation.symbol());
        let words = format!("{count} where {layer} {relation} {}", side.value);
        Selection::of(footprints, words)
    }

    /// The zero-based indices of a footprint along its dimensions: `(12, 34, 5)`.
    pub fn position_words(&self, footprint: usize) -> String {
        self.review.granule().footprints().position_words(footprint)
    }

    /// The wavenumber of the channel in hand, cm-1.
    pub fn channel_wavenumber(&self) -> Option<f64> {
        self.channels.wavenumber(self.channel)
    }

    /// Takes a channel in hand and keeps it in view.
    pub fn take_channel(&mut self, number: usize) {
        self.channel = number.min(self.channels.len().saturating_sub(1));
        if let Some(wavenumber) = self.channel_wavenumber() {
            self.window.keep_in_view(wavenumber);
        }
    }

    /// Where one is, to be kept.
    pub fn place(&self, panes: &Arrangement) -> Place {
        Place {
            cursor: self.cursor,
            layer: Some(self.wanted.clone()),
            channel: self.channel_wavenumber(),
            window: (!self.window.is_whole()).then(|| self.window.shown()),
            quantity: self.look.quantity.name().to_owned(),
            field_zoom: self.field_zoom,
            geographic: self.geographic,
            panes: panes.names(),
            zoomed: panes.is_zoomed(),
            pins: self.pins.iter().map(|pin| pin.footprint).collect(),
            ..Place::default()
        }
    }

    /// Goes back to where one was.
    pub fn go_to(&mut self, place: &Place) {
        self.move_to(place.cursor);
        if let Some(wavenumber) = place.channel.filter(|wavenumber| wavenumber.is_finite()) {
            self.channel = self.channels.nearest(wavenumber);
        }
        if let Some((low, high)) = place.window.filter(|(low, high)| low < high) {
            self.window.show(low, high);
        }
        self.look.quantity = TraceQuantity::named(&place.quantity).unwrap_or_default();
        if place.geographic != self.geographic {
            self.place_geographically(place.geographic);
        }
        self.field_zoom = place.field_zoom.min(super::looking::MOST_FIELD_ZOOM);
        let footprints = self.footprints();
        for footprint in place.pins.iter().filter(|one| **one < footprints) {
            if !self.pins.iter().any(|pin| pin.footprint == *footprint) {
                self.pin(*footprint);
            }
        }
    }

    /// Pins a footprint, or takes its pin off; false where there are too many already.
    pub fn pin(&mut self, footprint: usize) -> bool {
        if let Some(place) = self.pins.iter().position(|pin| pin.footprint == footprint) {
            self.pins.remove(place);
            return true;
        }
        let taken = |letter: &char| self.pins.iter().any(|pin| pin.letter == *letter);
        let Some(letter) = ('a'..).take(MOST_PINS).find(|letter| !taken(letter)) else {
            return false;
        };
        let spectrum = self.spectrum.clone().filter(|spectrum| spectrum.footprint == footprint);
        self.pins.push(Pinned { footprint, letter, spectrum });
        true
    }
}

/// Footprints in the instrument's order.
fn in_order(review: &Review) -> Placement {
    let place = review.granule().geolocation();
    let coordinates = place.latitude.as_deref().zip(place.longitude.as_deref());
    Placement::unfold(review.granule().footprints().lengths(), coordinates)
}
