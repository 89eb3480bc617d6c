//! Footprints with their truth and what the tests say.

use std::path::Path;

use radsieve::granule::Opening;
use radsieve::netcdf_files::{FileReader, ReadLimits, ReaderProgram};
use radsieve::review::Review;
use radsieve::screening::health::{Examined, Subject};
use radsieve::screening::{Rulebook, Screened};
use radsieve::system::Cancel;

use crate::limits::Share;

/// Defects that leave much of a spectrum without a value or a signal: dead detector, lost scan line,
/// lost band. They make a spectrum bad; what is wrong with single channels does not.
pub const LOST: i32 = 1 | 1 << 3 | 1 << 5;

type Mishap = Box<dyn std::error::Error>;

/// A granule that was screened.
pub struct Granule {
    /// Its name.
    pub name: String,
    /// Its footprints.
    pub cases: Vec<Case>,
    /// Channels with a planted defect, and how many of them were found.
    pub defective_channels: Share,
    /// Sound channels, and how many of them were suspected.
    pub sound_channels: Share,
}

/// A footprint.
pub struct Case {
    /// What is true.
    pub truth: Truth,
    /// Its surface in the rulebook's words.
    pub surface: String,
    /// Whether anything can be said.
    pub assessed: bool,
    /// What is concluded about each flag, in the order of the rulebook.
    pub flags: Vec<Found>,
    /// Whether the spectra as a set make the tests call this one bad.
    pub suspected: bool,
    /// Margin of each test, in the order of the rulebook; not a number where it does not speak.
    pub margins: Vec<f64>,
}

/// What is concluded about a flag.
pub struct Found {
    /// The flag.
    pub flag: String,
    /// Whether the tests set it.
    pub set: bool,
    /// Probability that it holds; `None` where no test speaks.
    pub probability: Option<f64>,
    /// What each family says, if it speaks; empty unless asked for.
    pub voices: Vec<(String, Option<f64>)>,
}

/// What is true about a footprint.
#[derive(Debug, Clone, Copy)]
pub struct Truth {
    /// Effective cloud amount: share times emissivity at 11 um.
    pub effective: f64,
    /// Pressure at the top of the highest cloud, hPa; 1100 without cloud.
    pub top: f64,
    /// Optical depth of dust at 961 or of ash at 909 cm-1, whichever is larger.
    pub particles: f64,
    /// Sulphur dioxide, Dobson units.
    pub so2: f64,
    /// Share of land.
    pub land: f64,
    /// Surface temperature, K: what freezes is no open sea.
    pub surface_temperature: f64,
    /// Whether no cloud is in the footprint nor beside it.
    pub far_from_cloud: bool,
    /// Defect bits.
    pub defects: i32,
}

/// Sea water freezes at -1.8 degrees Celsius.
const FREEZING: f64 = 271.35;

impl Granule {
    /// Reads and screens a synthetic granule and examines its spectra as a set.
    pub fn screened(opening: &Opening, file: &Path, rulebook: &Rulebook) -> Result<Self, Mishap> {
        let review = Review::open(opening, file)?;
        let screened = review.screen(rulebook, &Cancel::new())?;
        let mut granule = Granule::of(&review, &screened, false)?;
        if let Some(examined) = &screened.examined {
            for (at, case) in granule.cases.iter_mut().enumerate() {
                case.suspected = examined.suggests("bad_spectrum", at);
            }
            granule.judge_channels(file, examined)?;
        }
        Ok(granule)
    }

    /// Reads and screens a synthetic granule and keeps what each family of tests says.
    #[allow(dead_code, reason = "only the fit asks for it")]
    pub fn with_voices(
        opening: &Opening,
        file: &Path,
        rulebook: &Rulebook,
    ) -> Result<Self, Mishap> {
        let review = Review::open(opening, file)?;
        review.granule().fill(&Cancel::new(), &mut |_| {})?;
        Granule::of(&review, &review.screen_so_far(rulebook), true)
    }

    /// The place that a sample granule shows, from its name.
    pub fn place(&self) -> String {
        let name = self.name.trim_start_matches("synthetic_brindle_");
        name.trim_end_matches(".nc").replace('_', " ")
    }

    fn of(review: &Review, screened: &Screened, voices: bool) -> Result<Self, Mishap> {
        let truths = truths(review, screened.footprints())?;
        let cases = truths.into_iter().enumerate();
        let cases = cases.map(|(at, truth)| Case::of(screened, at, truth, voices)).collect();
        let (defective_channels, sound_channels) = (Share::default(), Share::default());
        Ok(Granule { name: review.granule().name(), cases, defective_channels, sound_channels })
    }

    /// Compares the channels that were suspected with those that something was done to.
    fn judge_channels(&mut self, file: &Path, examined: &Examined) -> Result<(), Mishap> {
        const TRUTH: &str = "truth/channel_defects";
        let program = ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve"));
        let reader = FileReader::open(&program, file, &ReadLimits::default())?;
        let truths = reader.index().variables.iter().filter(|one| one.path.starts_with(TRUTH));
        for variable in truths {
            let length = reader.index().dimensions[variable.dimensions[0]].length;
            let planted = reader.read(variable, &[0], &[length])?.to_f64();
            // `truth/channel_defects_longwave` belongs to `radiance_longwave`.
            let ending = variable.path[TRUTH.len()..].trim_start_matches('_');
            for (index, planted) in planted.into_iter().enumerate() {
                let suspected = examined.of_channels().any(|finding| match finding.subject {
                    Subject::Channel(channel) => {
                        channel.index == index && examined.band_name(channel.band).ends_with(ending)
                    }
                    _ => false,
                });
                let share = match planted != 0.0 {
                    true => &mut self.defective_channels,
                    false => &mut self.sound_channels,
                };
                share.all += 1;
                share.held += usize::from(suspected);
            }
        }
        Ok(())
    }
}

/// What is true about each footprint of a synthetic granule.
pub fn truths(review: &Review, footprints: usize) -> Result<Vec<Truth>, String> {
    let column = |text: &str| Ok::<_, String>(review.layer(text, &Cancel::new())?.values);
    // Only scenes with a plume say how much there is.
    let plume = |name: &str| {
        column(&format!("var(\"truth/{name}\")")).unwrap_or_else(|_| vec![0.0; footprints])
    };
    let amount = column("var(\"truth/cloud_amount\")")?;
    let depth = column("var(\"truth/cloud_optical_depth\")")?;
    let top = column("var(\"truth/cloud_top_pressure\")")?;
    let dust = column("var(\"truth/dust_optical_depth\")")?;
    let beside = column("max3(var(\"truth/cloud_amount\"))")?;
    let defects = column("var(\"truth/defects\")")?;
    let warmth = column("var(\"truth/surface_temperature\")")?;
    let (land, ash, so2) = (column("land")?, plume("ash_optical_depth"), plume("so2_column"));
    let truth = |at: usize| Truth {
        effective: amount[at] * (1.0 - (-depth[at] / amount[at].max(1e-3)).exp()),
        top: if top[at].is_nan() { 1100.0 } else { top[at] },
        particles: dust[at].max(ash[at]),
        so2: so2[at],
        land: land[at],
        surface_temperature: warmth[at],
        far_from_cloud: beside[at] < 0.005,
        defects: defects[at] as i32,
    };
    Ok((0..footprints).map(truth).collect())
}

impl Truth {
    /// Whether a flag should be set; `None` where it is a matter of taste.
    pub fn deserves(&self, flag: &str) -> Option<bool> {
        let (effective, low) = (self.effective, self.top > 500.0);
        let clear = effective < 0.02;
        match flag {
            "bad_spectrum" if self.defects & LOST != 0 => Some(true),
            "bad_spectrum" => self.is_sound().then_some(false),
            _ if !self.is_sound() => None,
            // Dust and ash cool the window as cloud does; what is said of cloud there is asked apart.
            "cloudy" | "thin_cloud" if self.particles >= 0.1 => None,
            "cloudy" if effective > 0.5 || (low && effective > 0.15) => Some(true),
            "cloudy" => clear.then_some(false),
            "thin_cloud" if !low && (0.05..=0.6).contains(&effective) => Some(true),
            "thin_cloud" => (clear || low).then_some(false),
            "dust_or_ash" if self.particles >= 0.2 && effective < 0.1 => Some(true),
            "dust_or_ash" => (self.particles < 0.02).then_some(false),
            "so2" if self.so2 >= 20.0 && effective < 0.1 => Some(true),
            "so2" => (self.so2 < 1.0).then_some(false),
            _ => None,
        }
    }

    /// Whether nothing is wrong with the spectrum.
    pub fn is_sound(&self) -> bool {
        self.defects == 0
    }

    /// Sound, nothing in the air, no cloud beside it.
    pub fn is_clear(&self) -> bool {
        self.is_sound() && self.far_from_cloud && self.particles < 0.02 && self.so2 < 1.0
    }

    /// Open sea.
    pub fn is_sea(&self) -> bool {
        self.land < 0.01 && self.surface_temperature > FREEZING
    }

    /// Dust or ash that matters, whatever else is in the footprint.
    pub fn is_thick_dust(&self) -> bool {
        self.is_sound() && self.particles >= 0.5
    }

    /// Cloud that matters: effective amount above 0.3, top above 2 km, which is near 800 hPa.
    pub fn is_cloud_aloft(&self) -> bool {
        self.is_sound() && self.effective > 0.3 && self.top < 800.0
    }
}

impl Case {
    fn of(screened: &Screened, at: usize, truth: Truth, voices: bool) -> Case {
        let surface =
            screened.surfaces[at].map(|surface| &screened.rulebook.surfaces[surface].name);
        let evidence = if voices { screened.evidence(at) } else { None };
        let voices_of = |flag: &str| {
            let flags = evidence.iter().flat_map(|evidence| &evidence.flags);
            let families = flags.filter(|one| one.flag == flag).flat_map(|one| &one.families);
            families.map(|one| (one.family.clone(), one.log_odds)).collect()
        };
        let found = screened.flags.iter().map(|result| {
            let probability = result.conclusions[at].probability;
            Found {
                flag: result.flag.clone(),
                set: result.is_set(at),
                probability: (!probability.is_nan()).then_some(probability),
                voices: voices_of(&result.flag),
            }
        });
        Case {
            truth,
            surface: surface.cloned().unwrap_or_default(),
            assessed: screened.assessed[at],
            flags: found.collect(),
            suspected: false,
            margins: screened.tests.iter().map(|test| test.margins[at]).collect(),
        }
    }

    /// What is concluded about a flag.
    pub fn found(&self, flag: &str) -> Option<&Found> {
        self.flags.iter().find(|one| one.flag == flag)
    }

    /// Whether the tests set a flag.
    pub fn is_set(&self, flag: &str) -> bool {
        self.found(flag).is_some_and(|one| one.set)
    }

    /// Whether the spectrum, or a band of it, is called bad by a test or by the spectra as a set.
    pub fn is_bad(&self) -> bool {
        self.suspected || self.is_set("bad_spectrum")
    }

    /// Whether the tests see cloud of any kind.
    pub fn is_cloud(&self) -> bool {
        self.is_set("cloudy") || self.is_set("thin_cloud")
    }

    /// Whether the tests see anything in the air.
    pub fn is_alarm(&self) -> bool {
        self.is_cloud() || self.is_set("dust_or_ash") || self.is_set("so2")
    }
}
