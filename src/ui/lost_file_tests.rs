//! A granule whose file goes while it is on the table: a message, and the review goes on.

use std::path::Path;

use super::trial::{Place, Trial};

type Mishap = fn(&Path);

/// A review whose granule is understood, and whose file meets with a mishap before its spectra are
/// read.
fn review_of_lost(place: &Place, mishap: Mishap) -> Trial {
    let mut trial = place.review_held(&["a.nc", "b.nc"]);
    while trial.app.bench().is_none() {
        for answer in trial.answers_of_next() {
            trial.event(super::event::Event::Answer(answer));
        }
    }
    mishap(&place.path("a.nc"));
    trial.settle();
    trial
}

#[test]
fn a_file_that_changes_or_goes_before_it_is_read_is_told_and_the_next_one_opens() {
    let cut: Mishap = |path| {
        let bytes = std::fs::read(path).unwrap();
        std::fs::write(path, &bytes[..bytes.len() / 2]).unwrap();
    };
    let gone: Mishap = |path| std::fs::remove_file(path).unwrap();
    let mishaps: [(Mishap, &str); 2] = [(cut, "has changed"), (gone, "No such file")];
    for (mishap, word) in mishaps {
        let place = Place::with(&["a.nc", "b.nc"]);
        let mut trial = review_of_lost(&place, mishap);
        let problem = trial.bench().filling.problem.clone().unwrap();
        assert!(problem.contains("a.nc") && problem.contains(word), "{problem}");
        let screen = trial.screen(100, 30);
        assert!(screen.contains(word), "{screen}");
        // Looking around goes on, and so does the review.
        trial.keys("Right Down c Right i ?").keys("Esc").screen(80, 24);
        trial.keys("n");
        assert_eq!(trial.granule(), "b.nc");
        assert!(trial.bench().filling.problem.is_none());
    }
}
