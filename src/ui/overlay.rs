//! What lies over the panes and takes the keys: help, prompts, questions.

use std::collections::BTreeMap;

use crate::flags::{ChannelName, FootprintSet};

use crate::tray::Offer;

use super::line::Line;

/// What takes the keys before the panes do.
#[derive(Debug, Default)]
pub enum Overlay {
    /// Nothing: keys are actions.
    #[default]
    None,
    /// The help, scrolled by so many lines.
    Help(usize),
    /// The problems found in the file, scrolled by so many lines.
    Problems(usize),
    /// A line being typed.
    Line(LinePrompt),
    /// A flag being chosen.
    Flags(FlagPrompt),
    /// Whether the rest counts as looked at when the granule is signed off.
    SignOff,
    /// Whether to sign granules off together.
    ByRule(Offer),
    /// Decisions could not be written: leave all the same?
    LeaveAnyway,
}

/// A line being typed.
#[derive(Debug)]
pub struct LinePrompt {
    /// What it is for.
    pub purpose: Purpose,
    /// What was typed.
    pub line: Line,
    /// The text is an offer of ours, in which nothing was typed yet.
    pub offered: bool,
    /// What Tab offers, once it was pressed.
    pub completions: Vec<String>,
    /// The completion in hand.
    pub chosen: Option<usize>,
    /// What is wrong with it, or empty.
    pub problem: String,
}

/// What a typed line is for.
#[derive(Debug, Clone, PartialEq)]
pub enum Purpose {
    /// A command.
    Command,
    /// One side of a value of the layer.
    Side,
    /// The reason of a flag or a withdrawal.
    Reason {
        /// Given, or else withdrawn.
        give: bool,
        /// The flag's name.
        flag: String,
        /// Where.
        selection: Selection,
        /// These channels instead of footprints.
        channels: Option<Vec<ChannelName>>,
    },
    /// The reason of taking a threshold over into the rulebook.
    Adopt,
    /// The reason of setting the granule aside.
    Aside,
    /// A remark on a selection.
    Comment(Selection),
}

/// Footprints that something is about to happen to, and how they were chosen in words.
#[derive(Debug, Clone, PartialEq)]
pub struct Selection {
    /// Which.
    pub footprints: FootprintSet,
    /// "footprint (12, 34)", "box of 48", "bt(900) < 230".
    pub words: String,
    /// Footprints of other granules, by their entries in the Tray.
    pub elsewhere: BTreeMap<usize, FootprintSet>,
}

impl Selection {
    /// Footprints of the granule on the table.
    pub fn of(footprints: FootprintSet, words: String) -> Selection {
        Selection { footprints, words, elsewhere: BTreeMap::new() }
    }

    /// How many footprints there are in all granules.
    pub fn count(&self) -> usize {
        self.footprints.len() + self.elsewhere.values().map(FootprintSet::len).sum::<usize>()
    }
}

/// What can be done to a selection, and once more to another.
#[derive(Debug, Clone, PartialEq)]
pub enum Deed {
    /// A flag is given, or else withdrawn.
    Flag {
        /// Given, or else withdrawn.
        give: bool,
        /// The flag's name.
        flag: String,
        /// A reason, if there is one.
        why: Option<String>,
    },
    /// A flag is given to channels, or else withdrawn.
    FlagChannels {
        /// Given, or else withdrawn.
        give: bool,
        /// The flag's name.
        flag: String,
        /// Which channels.
        channels: Vec<ChannelName>,
        /// A reason, if there is one.
        why: Option<String>,
    },
    /// It counts as looked at.
    Assess,
    /// A remark on it is written down.
    Comment(String),
}

impl Deed {
    /// In words: "so2", "so2 withdrawn", "looked at".
    pub fn words(&self) -> String {
        match self {
            Deed::Flag { give: true, flag, .. } | Deed::FlagChannels { give: true, flag, .. } => {
                flag.clone()
            }
            Deed::Flag { flag, .. } | Deed::FlagChannels { flag, .. } => {
                format!("{flag} withdrawn")
            }
            Deed::Assess => "looked at".to_owned(),
            Deed::Comment(_) => "remark".to_owned(),
        }
    }

    /// A flag given to or withdrawn from channels where there are some, else footprints.
    pub fn flag(
        give: bool,
        flag: String,
        channels: Option<Vec<ChannelName>>,
        why: Option<String>,
    ) -> Deed {
        match channels {
            Some(channels) => Deed::FlagChannels { give, flag, channels, why },
            None => Deed::Flag { give, flag, why },
        }
    }
}

/// A flag being chosen.
#[derive(Debug, Clone)]
pub struct FlagPrompt {
    /// To be given, or else withdrawn.
    pub give: bool,
    /// Where.
    pub selection: Selection,
    /// These channels instead of footprints.
    pub channels: Option<Vec<ChannelName>>,
    /// The names to choose from.
    pub flags: Vec<String>,
    /// The choice under the cursor.
    pub cursor: usize,
    /// Ask for a reason after the choice.
    pub with_reason: bool,
}

impl LinePrompt {
    /// A prompt that holds `text` already.
    pub fn new(purpose: Purpose, text: &str) -> LinePrompt {
        LinePrompt {
            purpose,
            line: Line::new(text),
            offered: false,
            completions: Vec::new(),
            chosen: None,
            problem: String::new(),
        }
    }

    /// A prompt with an offer in it, which the first letter typed replaces.
    pub fn offering(purpose: Purpose, text: &str) -> LinePrompt {
        LinePrompt { offered: true, ..LinePrompt::new(purpose, text) }
    }

    /// Takes the next completion, or the one before, or finds them first.
    pub fn complete(&mut self, forward: bool, find: impl FnOnce(&str) -> Vec<String>) {
        if self.completions.is_empty() {
            self.completions = find(self.line.before_cursor());
            self.chosen = None;
        }
        let count = self.completions.len();
        if count == 0 {
            return;
        }
        let next = match self.chosen {
            None if forward => 0,
            None => count - 1,
            Some(chosen) => (chosen + if forward { 1 } else { count - 1 }) % count,
        };
        self.chosen = Some(next);
        self.line.replace_before_cursor(&self.completions[next].clone());
        if count == 1 {
            // What was completed for good is the start of the next completion.
            self.forget_completions();
        }
    }

    /// The text changed: what was offered no longer fits.
    pub fn forget_completions(&mut self) {
        self.completions.clear();
        self.chosen = None;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn tab_goes_round_what_is_offered() {
        let offer = |_: &str| vec!["layer lat".to_owned(), "layer lon".to_owned()];
        let mut prompt = LinePrompt::new(Purpose::Command, "layer l");
        let mut seen = Vec::new();
        for forward in [true, true, true, false] {
            prompt.complete(forward, offer);
            seen.push(prompt.line.text().to_owned());
        }
        assert_eq!(seen, ["layer lat", "layer lon", "layer lat", "layer lon"]);
    }

    #[test]
    fn a_single_completion_is_taken_for_good() {
        let mut prompt = LinePrompt::new(Purpose::Command, "la");
        prompt.complete(true, |_| vec!["layer ".to_owned()]);
        assert_eq!((prompt.line.text(), prompt.completions.len()), ("layer ", 0));
        prompt.complete(true, |_| Vec::new());
        assert_eq!(prompt.line.text(), "layer ");
    }
}
