//! A granule on the table, to look at: layers and spectra while it is still being read.

use std::path::Path;
use std::sync::{Arc, Mutex, PoisonError};

use super::Producer;
use crate::export::granule_identity;
use crate::flags::{GranuleIdentity, QualityMap};
use crate::granule::{Channel, Cube, Granule, GranuleError, Opening};
use crate::layers::{
    Expression, GranuleNames, Judgements, Kept, Layer, LayerError, Mistake, channels_needed,
    evaluate_all,
};
use crate::screening::health::examine;
use crate::screening::unusual::SavedBases;
use crate::screening::{CloudHeight, Departures, RankedChannels, Rulebook, Screened, screen};
use crate::system::Cancel;

/// A granule on the table. Many threads may look at it at once.
#[derive(Debug)]
pub struct Review {
    granule: Granule,
    cube: Arc<Cube>,
    kept: Kept,
    tested: Mutex<Option<Arc<Screened>>>,
    producer: Producer,
    heights: Arc<CloudHeight>,
    bases: Option<SavedBases>,
    bases_problem: Option<String>,
}

impl Review {
    /// Opens a granule. No spectra are read.
    ///
    /// # Errors
    /// The file can't be read within the limits, or holds no spectra.
    pub fn open(opening: &Opening, path: &Path) -> Result<Review, GranuleError> {
        Ok(Review::of(opening.open(path)?))
    }

    /// Puts an open granule on the table.
    pub fn of(granule: Granule) -> Review {
        let cube = granule.cube();
        let (kept, producer) = (Kept::default(), Producer::default());
        Review {
            granule,
            cube,
            kept,
            tested: Mutex::default(),
            producer,
            heights: Arc::default(),
            bases: None,
            bases_problem: None,
        }
    }

    /// The same, with the producer's word on quality taken as a campaign says: tests leave out the
    /// footprints that it rejects. Reads the quality variables.
    pub fn heeding(mut self, map: &QualityMap) -> Review {
        self.producer = Producer::of(&self.granule, map);
        self
    }

    /// The same, with another method for cloud height than that on standard atmospheres.
    pub fn taking(mut self, heights: Arc<CloudHeight>) -> Review {
        self.heights = heights;
        self
    }

    /// The same, with spectra held against components of other granules.
    pub fn knowing(mut self, bases: Option<SavedBases>) -> Review {
        self.bases = bases;
        self
    }

    /// The same, without the components that a campaign has, for they can't be read: spectra are held
    /// against the granule's own.
    pub fn lacking_bases(mut self, why: &str) -> Review {
        let what = "spectra are held against the granule's own components";
        self.bases_problem = Some(format!("{what}: {why}"));
        self
    }

    /// Why the campaign's components are not used although there are some.
    pub fn bases_problem(&self) -> Option<&str> {
        self.bases_problem.as_deref()
    }

    /// What the producer says of the footprints' quality.
    pub fn producer(&self) -> &Producer {
        &self.producer
    }

    /// The granule.
    pub fn granule(&self) -> &Granule {
        &self.granule
    }

    /// What has been read of it.
    pub fn cube(&self) -> &Cube {
        &self.cube
    }

    /// Its names for layer expressions.
    pub fn names(&self) -> GranuleNames<'_> {
        let names = GranuleNames::new(&self.granule, &self.cube).keeping(&self.kept);
        names
            .with_retrieval(&*self.heights)
            .with_retrieval(Departures::shared())
            .with_retrieval(RankedChannels::shared())
    }

    /// The same for tests, which do not look at what the producer rejects.
    fn names_for_tests(&self) -> GranuleNames<'_> {
        self.names().leaving_out(&self.producer.left_out)
    }

    /// Runs the tests of a rulebook, and examines the spectra as a set; what has not been read yet is
    /// read before, as far as it fits into memory, and the rest whenever it is needed.
    ///
    /// # Errors
    /// The file can't be read, or `cancel` was asked for.
    pub fn screen(&self, rulebook: &Rulebook, cancel: &Cancel) -> Result<Screened, GranuleError> {
        // The tests count as much as the examination, which looks at every spectrum of every band.
        let steps = self.granule.bands().len() * self.granule.footprints().count();
        cancel.expect(2 * steps);
        let (half, mut told) = (steps / 2, 0);
        self.granule.fill(cancel, &mut |progress| {
            let done = half * progress.done / progress.total.max(1);
            cancel.did(done.saturating_sub(told));
            told = told.max(done);
        })?;
        cancel.did(half - told.min(half));
        let screened = self.names_for_tests().lend_all(cancel, |names| screen(rulebook, names))?;
        cancel.did(steps - half);
        let (bases, left_out) = (self.bases.as_ref(), &self.producer.left_out);
        let examined = examine(&self.granule, &rulebook.health, bases, left_out, cancel)?;
        Ok(Screened { examined: Some(examined), ..screened })
    }

    /// The channels that a layer is made from; none where the expression makes no sense.
    pub fn channels_of_layer(&self, text: &str) -> Vec<Channel> {
        let expression = Expression::parse(text);
        expression.map_or_else(|_| Vec::new(), |one| channels_needed(&[&one], &self.names()))
    }

    /// Whether a layer asks what screening tests said.
    pub fn asks_tests(text: &str) -> bool {
        Expression::parse(text).is_ok_and(|expression| expression.asks_tests())
    }

    /// Runs the tests of a rulebook over what has been read so far.
    pub fn screen_so_far(&self, rulebook: &Rulebook) -> Screened {
        screen(rulebook, &self.names_for_tests())
    }

    /// Lends what tests said to the layers from now on: `doubt`, `margin("…")` and their like.
    pub fn lend(&self, screened: Arc<Screened>) {
        *self.tested.lock().unwrap_or_else(PoisonError::into_inner) = Some(screened);
    }

    /// What tests said that was lent last.
    pub(super) fn tested(&self) -> Option<Arc<Screened>> {
        self.tested.lock().unwrap_or_else(PoisonError::into_inner).clone()
    }

    /// Evaluates an expression over what has been read so far; over all of a granule that does not
    /// fit into memory.
    ///
    /// # Errors
    /// In one line: the text is no expression, the granule lacks something that it asks for, the file
    /// can't be read, or `cancel` was asked for.
    pub fn layer(&self, text: &str, cancel: &Cancel) -> Result<Layer, String> {
        self.layers(&[text], cancel).swap_remove(0)
    }

    /// Evaluates an expression over all of the granule; what it needs and has not been read yet is
    /// read meanwhile.
    ///
    /// # Errors
    /// As [`Self::layer`].
    pub fn whole_layer(&self, text: &str, cancel: &Cancel) -> Result<Layer, String> {
        self.whole_layers(&[text], cancel)?.swap_remove(0)
    }

    /// The same for several expressions; one that asks for what the granule lacks leaves the others
    /// alone.
    ///
    /// # Errors
    /// As [`Self::layer`].
    pub fn whole_layers(
        &self,
        texts: &[&str],
        cancel: &Cancel,
    ) -> Result<Vec<Result<Layer, String>>, String> {
        let parse = |text: &&str| {
            let parsed = Expression::parse(text);
            parsed.map_err(|error| in_one_line(error.text(), error.mistake()))
        };
        let parsed = texts.iter().map(parse).collect::<Result<Vec<Expression>, String>>()?;
        let all: Vec<&Expression> = parsed.iter().collect();
        let found = self.names().lend_all(cancel, |names| evaluate_all(&all, names));
        let layers = found.map_err(|error| error.to_string())?.into_iter();
        let why = |error: LayerError| in_one_line(error.text(), error.mistake());
        Ok(layers.map(|layer| layer.map_err(why)).collect())
    }

    /// The bands that an expression needs; none where the text is no expression.
    pub fn bands_of(&self, text: &str) -> Vec<usize> {
        let channels = self.channels_of_layer(text).into_iter();
        let mut bands: Vec<usize> = channels.map(|channel| channel.band).collect();
        bands.dedup();
        bands
    }

    /// The same for several expressions, which share what they have in common.
    pub fn layers(&self, texts: &[&str], cancel: &Cancel) -> Vec<Result<Layer, String>> {
        let parsed: Vec<Result<Expression, String>> = texts
            .iter()
            .map(|text| {
                let parsed = Expression::parse(text);
                parsed.map_err(|error| in_one_line(error.text(), error.mistake()))
            })
            .collect();
        let good: Vec<&Expression> = parsed.iter().filter_map(|one| one.as_ref().ok()).collect();
        let tested = self.tested();
        let judgements = tested.as_deref().map(|screened| screened as &dyn Judgements);
        let names = self.names().with_judgements(judgements);
        let layers = match self.cube.is_full() {
            false => evaluate_all(&good, &names),
            true => match names.lend_all(cancel, |names| evaluate_all(&good, names)) {
                Ok(layers) => layers,
                Err(error) => return texts.iter().map(|_| Err(error.to_string())).collect(),
            },
        };
        let layers = layers.into_iter();
        let mut layers =
            layers.map(|one| one.map_err(|error| in_one_line(error.text(), error.mistake())));
        let missing = || Err("no layer came back".to_owned());
        parsed
            .into_iter()
            .map(|one| one.and_then(|_| layers.next().unwrap_or_else(missing)))
            .collect()
    }

    /// Names the granule by its content, as ledgers do. The first call reads the whole file.
    ///
    /// # Errors
    /// The file can't be read, or is no longer the one that was opened.
    pub fn identify(&self) -> Result<GranuleIdentity, GranuleError> {
        granule_identity(&self.granule)
    }
}

fn in_one_line(text: &str, mistake: &Mistake) -> String {
    format!("{}: {}", crate::system::clean_text(text), mistake.in_one_line())
}
