//! The keys, in one table: it feeds dispatch, the help screen and `docs/keys.md`.

use super::key::{Code, Key};
use super::panes::Pane;

/// What a key or a command does without further words.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
#[expect(missing_docs, reason = "the table below says what each does, in the words of the help")]
pub enum Action {
    Up,
    Down,
    Left,
    Right,
    PageUp,
    PageDown,
    RowStart,
    RowEnd,
    First,
    Last,
    NextGranule,
    PreviousGranule,
    NextUnsigned,
    Open,
    NextLayer,
    PreviousLayer,
    AskLayer,
    ChannelLayer,
    CycleRange,
    OtherLayer,
    Signs,
    Marks,
    FieldIn,
    FieldOut,
    Geographic,
    StripAlong,
    ChannelUp,
    ChannelDown,
    ChannelFarUp,
    ChannelFarDown,
    AskChannel,
    SwitchQuantity,
    Reference,
    Envelope,
    Planck,
    NoiseBars,
    ZoomIn,
    ZoomOut,
    PanLeft,
    PanRight,
    WholeSpectrum,
    Pin,
    Unpin,
    Flag,
    Again,
    Withdraw,
    Assess,
    RunTests,
    SpotCheck,
    ByRule,
    NextCase,
    PreviousCase,
    Accept,
    Overrule,
    Box,
    Polygon,
    Join,
    Invert,
    Reselect,
    NextTest,
    PreviousTest,
    Valley,
    TurnSide,
    AskAgainst,
    Alike,
    Growing,
    ChannelInterval,
    FlagChannels,
    WithdrawChannels,
    Adopt,
    Side,
    Undo,
    Redo,
    Comment,
    SignOff,
    SetAside,
    Reopen,
    Export,
    Problems,
    NextPane,
    PreviousPane,
    Pane(Pane),
    Maximise,
    Command,
    Help,
    Mouse,
    Redraw,
    Suspend,
    Cancel,
    Quit,
}

/// The headings of the help.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Group {
    /// Moving over footprints and granules.
    Moving,
    /// What the Field shows.
    Layers,
    /// The spectrum.
    Spectrum,
    /// The layer along lines, detectors or granules.
    Series,
    /// How values lie, and thresholds.
    Thresholds,
    /// What a decision is about.
    Selecting,
    /// Flags and other decisions.
    Deciding,
    /// The program itself.
    Program,
}

impl Group {
    /// All headings, in the order of the help.
    pub const ALL: [Group; 8] = [
        Group::Moving,
        Group::Layers,
        Group::Spectrum,
        Group::Series,
        Group::Thresholds,
        Group::Selecting,
        Group::Deciding,
        Group::Program,
    ];

    /// The pane that the group is about, if it is about one.
    pub fn pane(self) -> Option<Pane> {
        match self {
            Group::Layers => Some(Pane::Field),
            Group::Spectrum => Some(Pane::Trace),
            Group::Series => Some(Pane::Strip),
            Group::Thresholds => Some(Pane::Spread),
            Group::Moving | Group::Selecting | Group::Deciding | Group::Program => None,
        }
    }

    /// The heading.
    pub fn title(self) -> &'static str {
        match self {
            Group::Moving => "Moving",
            Group::Layers => "Field: layers",
            Group::Spectrum => "Trace: spectra",
            Group::Series => "Strip: drifts and stripes",
            Group::Thresholds => "Spread: thresholds",
            Group::Selecting => "Selecting",
            Group::Deciding => "Deciding",
            Group::Program => "Program",
        }
    }
}

/// One row of the table.
#[derive(Debug, Clone, Copy)]
pub struct Binding {
    /// Any of these keys.
    pub keys: &'static [Key],
    /// What it does.
    pub action: Action,
    /// Its name on the command line.
    pub name: &'static str,
    /// Where the help lists it.
    pub group: Group,
    /// The help text.
    pub help: &'static str,
}

const fn row(
    keys: &'static [Key],
    action: Action,
    name: &'static str,
    group: Group,
    help: &'static str,
) -> Binding {
    Binding { keys, action, name, group, help }
}

const fn key(code: Code) -> Key {
    Key::plain(code)
}

const fn letter(letter: char) -> Key {
    Key::char(letter)
}

use Group::{Deciding, Layers, Moving, Program, Selecting, Series, Spectrum, Thresholds};

/// Every key, in the order of the help.
pub const BINDINGS: &[Binding] = &[
    row(&[key(Code::Up), letter('k')], Action::Up, "up", Moving, "cursor up"),
    row(&[key(Code::Down), letter('j')], Action::Down, "down", Moving, "cursor down"),
    row(&[key(Code::Left), letter('h')], Action::Left, "left", Moving, "cursor left"),
    row(&[key(Code::Right), letter('l')], Action::Right, "right", Moving, "cursor right"),
    row(&[key(Code::PageUp)], Action::PageUp, "page-up", Moving, "cursor a page up"),
    row(&[key(Code::PageDown)], Action::PageDown, "page-down", Moving, "cursor a page down"),
    row(&[key(Code::Home)], Action::RowStart, "row-start", Moving, "start of the row"),
    row(&[key(Code::End)], Action::RowEnd, "row-end", Moving, "end of the row"),
    row(&[letter('g')], Action::First, "first", Moving, "first footprint"),
    row(&[letter('G')], Action::Last, "last", Moving, "last footprint"),
    row(&[letter('n')], Action::NextGranule, "next", Moving, "next granule"),
    row(&[letter('p')], Action::PreviousGranule, "previous", Moving, "previous granule"),
    row(&[letter('N')], Action::NextUnsigned, "next-open", Moving, "next granule not signed off"),
    row(&[key(Code::Enter)], Action::Open, "open", Moving, "Tray: open; Evidence: most alike"),
    row(&[letter(']')], Action::NextLayer, "next-layer", Layers, "next suggested layer"),
    row(&[letter('[')], Action::PreviousLayer, "previous-layer", Layers, "previous layer"),
    row(&[letter('e')], Action::AskLayer, "ask-layer", Layers, "type a layer expression"),
    row(&[letter('c')], Action::ChannelLayer, "channel-layer", Layers, "BT of the channel in hand"),
    row(
        &[letter('%')],
        Action::CycleRange,
        "cycle-range",
        Layers,
        "range: percentiles, around zero",
    ),
    row(&[letter(';')], Action::OtherLayer, "other-layer", Layers, "the layer before, and back"),
    row(&[letter('#')], Action::Signs, "signs", Layers, "signs: flags, tests, doubt, none"),
    row(&[letter('Y')], Action::Marks, "marks", Layers, "cursor, box and pins on or off"),
    row(&[letter('i')], Action::FieldIn, "field-in", Layers, "zoom the map in"),
    row(&[letter('o')], Action::FieldOut, "field-out", Layers, "zoom the map out"),
    row(&[letter('M')], Action::Geographic, "geographic", Layers, "by latitude and longitude"),
    row(&[letter('.')], Action::ChannelUp, "channel-up", Spectrum, "next channel in hand"),
    row(&[letter(',')], Action::ChannelDown, "channel-down", Spectrum, "previous channel"),
    row(&[letter('>')], Action::ChannelFarUp, "channel-far-up", Spectrum, "20 channels up"),
    row(&[letter('<')], Action::ChannelFarDown, "channel-far-down", Spectrum, "20 channels down"),
    row(
        &[letter('/')],
        Action::AskChannel,
        "ask-channel",
        Spectrum,
        "go to a wavenumber or length",
    ),
    row(&[letter('b')], Action::SwitchQuantity, "quantity", Spectrum, "BT, radiance, absorption"),
    row(
        &[letter('d')],
        Action::Reference,
        "difference",
        Spectrum,
        "less mean, pin, file, calculated",
    ),
    row(&[letter('Q')], Action::Envelope, "envelope", Spectrum, "quartiles of what is selected"),
    row(&[letter('P')], Action::Planck, "planck-curves", Spectrum, "Planck curves on radiances"),
    row(&[letter('B')], Action::NoiseBars, "noise-bars", Spectrum, "noise bars"),
    row(&[letter('+'), letter('=')], Action::ZoomIn, "zoom-in", Spectrum, "zoom in at the channel"),
    row(&[letter('-')], Action::ZoomOut, "zoom-out", Spectrum, "zoom out"),
    row(&[letter('(')], Action::PanLeft, "pan-left", Spectrum, "pan to lower wavenumbers"),
    row(&[letter(')')], Action::PanRight, "pan-right", Spectrum, "pan to higher wavenumbers"),
    row(&[letter('0')], Action::WholeSpectrum, "whole", Spectrum, "the whole spectrum"),
    row(
        &[letter('I')],
        Action::ChannelInterval,
        "channel-interval",
        Spectrum,
        "pick channels from here on",
    ),
    row(
        &[letter('H')],
        Action::FlagChannels,
        "flag-channels",
        Spectrum,
        "flag the channels in hand",
    ),
    row(
        &[letter('Z')],
        Action::WithdrawChannels,
        "withdraw-channels",
        Spectrum,
        "withdraw their flag",
    ),
    row(&[letter('x')], Action::Pin, "pin", Spectrum, "pin the footprint to compare"),
    row(&[letter('X')], Action::Unpin, "unpin", Spectrum, "take all pins off"),
    row(&[letter('s')], Action::StripAlong, "strip-along", Series, "along lines, positions, …"),
    row(
        &[letter('}')],
        Action::NextTest,
        "next-test",
        Thresholds,
        "next test in hand, or the layer",
    ),
    row(&[letter('{')], Action::PreviousTest, "previous-test", Thresholds, "the test before"),
    row(&[letter('K')], Action::Valley, "valley", Thresholds, "threshold to the valley"),
    row(&[letter('J')], Action::TurnSide, "turn-side", Thresholds, "the other side of it"),
    row(&[letter('D')], Action::Adopt, "ask-adopt", Thresholds, "take it into the rulebook"),
    row(&[letter('|')], Action::AskAgainst, "ask-against", Thresholds, "a second layer upwards"),
    row(&[letter('L')], Action::Alike, "alike", Selecting, "spectra like this one; how"),
    row(&[letter('W')], Action::Growing, "growing", Selecting, "alike: grown, here, Tray"),
    row(&[letter('v')], Action::Box, "box", Selecting, "begin a box, or keep it"),
    row(&[letter('V')], Action::Polygon, "polygon", Selecting, "polygon: a corner here"),
    row(&[letter('t')], Action::Side, "ask-side", Selecting, "all on one side of a layer value"),
    row(&[letter('&')], Action::Join, "join", Selecting, "next shape: add, minus, common"),
    row(&[letter('~')], Action::Invert, "invert", Selecting, "select all others"),
    row(&[letter('"')], Action::Reselect, "reselect", Selecting, "what was selected before"),
    row(&[letter('f')], Action::Flag, "choose-flag", Deciding, "flag the footprint or selection"),
    row(&[letter('F')], Action::Again, "again", Deciding, "the same decision once more"),
    row(&[letter('w')], Action::Withdraw, "choose-withdraw", Deciding, "withdraw a flag"),
    row(&[letter('a')], Action::Assess, "assess", Deciding, "mark as looked at"),
    row(&[letter(' ')], Action::NextCase, "doubt", Deciding, "next most doubtful case"),
    row(&[key(Code::Backspace)], Action::PreviousCase, "doubt-back", Deciding, "the case before"),
    row(&[letter('y')], Action::Accept, "accept", Deciding, "accept what the tests suggest"),
    row(&[letter('R')], Action::Overrule, "overrule", Deciding, "overrule what they suggest"),
    row(&[letter('*')], Action::ByRule, "sign-by-rule", Deciding, "sign off all within limits"),
    row(&[letter('@')], Action::SpotCheck, "spot-check", Deciding, "judge a blind sample"),
    row(&[letter('T')], Action::RunTests, "screen", Deciding, "run the tests anew"),
    row(&[letter('u')], Action::Undo, "undo", Deciding, "undo the last decision"),
    row(&[letter('r'), Key::control('r')], Action::Redo, "redo", Deciding, "redo"),
    row(&[letter('C')], Action::Comment, "ask-comment", Deciding, "write down a remark"),
    row(&[letter('S')], Action::SignOff, "sign-off", Deciding, "sign the granule off"),
    row(&[letter('A')], Action::SetAside, "ask-aside", Deciding, "set the granule aside"),
    row(&[letter('O')], Action::Reopen, "reopen", Deciding, "take the granule up again"),
    row(&[letter('E')], Action::Export, "export", Deciding, "export the flag mask"),
    row(&[key(Code::Tab)], Action::NextPane, "next-pane", Program, "next pane on show"),
    row(&[key(Code::BackTab)], Action::PreviousPane, "previous-pane", Program, "the pane before"),
    row(&[letter('1')], Action::Pane(Pane::Tray), "tray", Program, "to the Tray"),
    row(&[letter('2')], Action::Pane(Pane::Field), "field", Program, "to the Field"),
    row(&[letter('3')], Action::Pane(Pane::Trace), "trace", Program, "to the Trace"),
    row(&[letter('4')], Action::Pane(Pane::Spread), "spread", Program, "to the Spread"),
    row(&[letter('5')], Action::Pane(Pane::Strip), "strip", Program, "to the Strip"),
    row(&[letter('6')], Action::Pane(Pane::Evidence), "evidence", Program, "to the Evidence"),
    row(&[letter('7')], Action::Pane(Pane::Ledger), "ledger", Program, "to the Ledger"),
    row(&[letter('z')], Action::Maximise, "maximise", Program, "one pane on the whole screen"),
    row(&[letter(':')], Action::Command, "command", Program, "command line, Tab completes"),
    row(&[letter('!')], Action::Problems, "problems", Program, "problems found in the file"),
    row(&[letter('?'), key(Code::Function(1))], Action::Help, "help", Program, "this help"),
    row(&[letter('m')], Action::Mouse, "mouse", Program, "mouse on or off"),
    row(&[Key::control('l')], Action::Redraw, "redraw", Program, "draw the screen anew"),
    row(&[Key::control('z')], Action::Suspend, "suspend", Program, "back to the shell; fg returns"),
    row(&[key(Code::Esc)], Action::Cancel, "cancel", Program, "let go: shape, selection, prompt"),
    row(&[letter('q'), Key::control('c')], Action::Quit, "quit", Program, "leave"),
];

/// Where the help lists an action.
pub fn group_of(action: Action) -> Option<Group> {
    BINDINGS.iter().find(|binding| binding.action == action).map(|binding| binding.group)
}

/// The action of a command name.
pub fn action_named(name: &str) -> Option<Action> {
    BINDINGS.iter().find(|binding| binding.name == name).map(|binding| binding.action)
}

/// The name of an action on the command line.
pub fn name_of(action: Action) -> &'static str {
    BINDINGS.iter().find(|binding| binding.action == action).map_or("", |binding| binding.name)
}

/// The table's own keys of one row as documents write them.
pub fn keys_text(binding: &Binding) -> String {
    binding.keys.iter().map(Key::to_string).collect::<Vec<_>>().join(" ")
}

#[cfg(test)]
mod tests {
    use std::collections::HashMap;

    use super::*;

    #[test]
    fn no_key_and_no_name_has_two_meanings() {
        let mut keys = HashMap::new();
        let mut names = HashMap::new();
        let mut actions = HashMap::new();
        for binding in BINDINGS {
            assert!(!binding.keys.is_empty() && !binding.help.is_empty());
            for key in binding.keys {
                assert_eq!(keys.insert(*key, binding.name), None, "{key}");
            }
            assert_eq!(names.insert(binding.name, ()), None, "{}", binding.name);
            assert_eq!(actions.insert(binding.action, ()), None, "{}", binding.name);
        }
    }

    #[test]
    fn the_contract_keys_stand() {
        let keymap = crate::ui::keymap::Keymap::default();
        let action_of = |key| keymap.action_of(key);
        assert_eq!(action_of(Key::char('q')), Some(Action::Quit));
        assert_eq!(action_of(Key::char('?')), Some(Action::Help));
        assert_eq!(action_of(Key::char(':')), Some(Action::Command));
        assert_eq!(action_of(Key::plain(Code::Left)), Some(Action::Left));
    }

    #[test]
    fn help_texts_fit_half_of_a_narrow_screen() {
        for binding in BINDINGS {
            assert!(binding.help.len() <= 32, "{}", binding.help);
            assert!(keys_text(binding).len() <= 10, "{}", keys_text(binding));
        }
    }
}
