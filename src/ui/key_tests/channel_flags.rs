//! Flags of channels, given and withdrawn in the Trace.

use super::one_granule;
use crate::netcdf_files::{FileReader, ReadLimits, Samples};
use crate::ui::trial::Trial;

/// Wavenumbers of the flagged channels, whole cm-1.
fn flagged(trial: &Trial) -> Vec<u32> {
    let flags = &trial.record().state().channel_flags;
    let channels = flags.values().flat_map(|band| band.values());
    let channels = channels.filter(|channel| channel.flags != 0);
    channels.map(|channel| channel.wavenumber as u32).collect()
}

#[test]
fn one_channel_and_an_interval_are_flagged_repeated_and_withdrawn() {
    let (place, mut trial) = one_granule();
    trial.types(":go 899").keys("Enter H");
    assert!(trial.screen(80, 24).contains("noisy"), "only flags of channels are offered");
    assert!(!trial.screen(80, 24).contains("cloudy"));
    trial.keys("n");
    assert_eq!(flagged(&trial), [899]);
    assert!(trial.message().starts_with("channel 899.00: noisy"), "{}", trial.message());
    // Across the bands: 901 and 1230 are neighbours in the common order.
    trial.types(":go 901").keys("Enter I . F");
    assert_eq!(flagged(&trial), [899, 901, 1230]);
    trial.types(":go 900").keys("Enter I , Z n");
    assert_eq!(flagged(&trial), [901, 1230], "withdrawn where it stood");
    trial.keys("u");
    assert_eq!(flagged(&trial), [899, 901, 1230]);
    let screen = trial.screen(80, 24);
    assert!(screen.contains('N'), "flagged channels carry their letter: {screen}");
    trial.types(":export ").types(&place.path("masks").to_string_lossy()).keys("Enter");
    assert!(trial.message().starts_with("exported to"), "{}", trial.message());
    // 830, 831, 832, 899, 900, 901 and 1230, 1231 cm-1: just these carry the flag in the mask.
    let mask = place.path("masks/lowen_001.mask.nc");
    let program = crate::netcdf_files::ReaderProgram::in_process();
    let mask = FileReader::open(&program, &mask, &ReadLimits::default()).unwrap();
    let flags = |band: &str| {
        let name = format!("channel_flag_{band}");
        mask.read_all(mask.index().variable(&name).unwrap()).unwrap()
    };
    assert_eq!(flags("long"), Samples::I32(vec![0, 0, 0, 1, 0, 1]));
    assert_eq!(flags("mid"), Samples::I32(vec![1, 0]));
}

#[test]
fn a_reason_is_kept_and_escape_lets_go() {
    let (_place, mut trial) = one_granule();
    trial.keys("I . Esc");
    assert!(!trial.bench().has_channel_pick());
    trial.keys("H Tab x").types("no signal since noon").keys("Esc");
    assert!(flagged(&trial).is_empty());
    trial.keys("H Tab x").types("no signal since noon").keys("Enter");
    let decision = trial.record().decisions().last().unwrap().clone();
    assert_eq!(decision.why.as_deref(), Some("no signal since noon"));
    assert_eq!(flagged(&trial).len(), 1);
}

#[test]
fn a_flag_of_channels_keeps_the_footprints_that_are_selected_and_the_reverse() {
    let (_place, mut trial) = one_granule();
    trial.keys("v Right v H n");
    let kept = trial.bench().selecting.kept();
    assert_eq!(kept.map(|kept| kept.footprints.len()), Some(2));
    trial.keys("I . f c");
    assert_eq!(trial.flagged("cloudy"), [0, 1]);
    assert!(trial.bench().has_channel_pick() && !trial.bench().selecting.is_on());
}

#[test]
fn channels_over_their_noise_need_a_measured_noise() {
    let (_place, mut trial) = one_granule();
    trial.types(":noisy 3").keys("Enter");
    // Thirty black bodies without noise: nothing stands out.
    assert_eq!(trial.message(), "no channel is over 3 times its noise");
    trial.types(":noisy much").keys("Enter");
    assert!(trial.screen(80, 24).contains("much is no number"));
}
