//! The scenes, each an imaginary place.

mod gulf_of_tamber;
mod hesk_isles;
mod iskel_sound;
mod ketter_desert;
mod norrik_plateau;
mod sea_of_lowen;
mod strait_of_pell;

use super::defects::Defect;
use super::instrument::Instrument;
use super::scene::{Scene, Setting};

/// A scene by name.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SceneName {
    /// Warm sea by night: broken cloud, cirrus, a deep convective core.
    SeaOfLowen,
    /// Desert by day: quartz sand, a dust plume, thin cirrus.
    KetterDesert,
    /// Polar night over snow: inversion, low cloud, a faulty instrument.
    NorrikPlateau,
    /// Two coasts and the sea between them by day: stratocumulus, a front.
    StraitOfPell,
    /// Warm sea by day: dust, cumulus, cirrus.
    GulfOfTamber,
    /// Winter sea by night: volcanic ash, sulphur dioxide, a front.
    HeskIsles,
    /// Polar winter: open water, ice, clouds of all heights.
    IskelSound,
}

impl SceneName {
    /// Every scene.
    pub const ALL: [SceneName; 7] = [
        SceneName::SeaOfLowen,
        SceneName::KetterDesert,
        SceneName::NorrikPlateau,
        SceneName::StraitOfPell,
        SceneName::GulfOfTamber,
        SceneName::HeskIsles,
        SceneName::IskelSound,
    ];

    /// The scenes of the sample granules.
    pub const SAMPLES: [SceneName; 4] = [
        SceneName::SeaOfLowen,
        SceneName::KetterDesert,
        SceneName::NorrikPlateau,
        SceneName::StraitOfPell,
    ];

    /// Name on the command line.
    pub fn label(self) -> &'static str {
        match self {
            SceneName::SeaOfLowen => "sea-of-lowen",
            SceneName::KetterDesert => "ketter-desert",
            SceneName::NorrikPlateau => "norrik-plateau",
            SceneName::StraitOfPell => "strait-of-pell",
            SceneName::GulfOfTamber => "gulf-of-tamber",
            SceneName::HeskIsles => "hesk-isles",
            SceneName::IskelSound => "iskel-sound",
        }
    }

    /// Name of the place.
    pub fn place(self) -> &'static str {
        match self {
            SceneName::SeaOfLowen => "Sea of Lowen",
            SceneName::KetterDesert => "Ketter Desert",
            SceneName::NorrikPlateau => "Norrik Plateau",
            SceneName::StraitOfPell => "Strait of Pell",
            SceneName::GulfOfTamber => "Gulf of Tamber",
            SceneName::HeskIsles => "Hesk Isles",
            SceneName::IskelSound => "Iskel Sound",
        }
    }

    /// One line about it.
    pub fn summary(self) -> &'static str {
        match self {
            SceneName::SeaOfLowen => {
                "warm sea by night with broken cloud, cirrus and a deep convective core"
            }
            SceneName::KetterDesert => "desert by day with a dust plume and thin cirrus",
            SceneName::NorrikPlateau => {
                "snow in the polar night with an inversion, low cloud and instrument defects"
            }
            SceneName::StraitOfPell => {
                "two coasts and a strait by day with stratocumulus and a front"
            }
            SceneName::GulfOfTamber => "warm sea by day with a tongue of dust, cumulus and cirrus",
            SceneName::HeskIsles => {
                "winter sea by night with volcanic ash, sulphur dioxide and a front"
            }
            SceneName::IskelSound => "polar winter over open water and ice with clouds",
        }
    }

    /// Whether there may be ash or sulphur dioxide.
    pub fn has_plumes(self) -> bool {
        self == SceneName::HeskIsles
    }

    /// When and where.
    pub fn setting(self) -> Setting {
        match self {
            SceneName::SeaOfLowen => sea_of_lowen::SETTING,
            SceneName::KetterDesert => ketter_desert::SETTING,
            SceneName::NorrikPlateau => norrik_plateau::SETTING,
            SceneName::StraitOfPell => strait_of_pell::SETTING,
            SceneName::GulfOfTamber => gulf_of_tamber::SETTING,
            SceneName::HeskIsles => hesk_isles::SETTING,
            SceneName::IskelSound => iskel_sound::SETTING,
        }
    }

    /// The scene drawn from a seed.
    pub fn scene(self, seed: u64) -> Box<dyn Scene> {
        match self {
            SceneName::SeaOfLowen => Box::new(sea_of_lowen::SeaOfLowen::new(seed)),
            SceneName::KetterDesert => Box::new(ketter_desert::KetterDesert::new(seed)),
            SceneName::NorrikPlateau => Box::new(norrik_plateau::NorrikPlateau::new(seed)),
            SceneName::StraitOfPell => Box::new(strait_of_pell::StraitOfPell::new(seed)),
            SceneName::GulfOfTamber => Box::new(gulf_of_tamber::GulfOfTamber::new(seed)),
            SceneName::HeskIsles => Box::new(hesk_isles::HeskIsles::new(seed)),
            SceneName::IskelSound => Box::new(iskel_sound::IskelSound::new(seed)),
        }
    }

    /// Instrument, scan lines and positions of the scene's sample granule.
    pub fn sample(self) -> (Instrument, usize, usize) {
        match self {
            SceneName::SeaOfLowen => (Instrument::reduced_interferometer(), 13, 14),
            SceneName::KetterDesert => (Instrument::desert_grating(), 40, 40),
            SceneName::NorrikPlateau => (Instrument::fine_interferometer(), 21, 20),
            SceneName::StraitOfPell => (Instrument::strait_grating(), 40, 42),
            SceneName::GulfOfTamber => (Instrument::strait_grating(), 40, 42),
            SceneName::HeskIsles | SceneName::IskelSound => {
                (Instrument::reduced_interferometer(), 13, 14)
            }
        }
    }

    /// What is wrong with the instrument.
    pub fn defects(self) -> &'static [Defect] {
        match self {
            SceneName::NorrikPlateau => norrik_plateau::DEFECTS,
            SceneName::KetterDesert => ketter_desert::DEFECTS,
            _ => &[],
        }
    }
}
