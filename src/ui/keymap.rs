//! The keys in force: those of the table, changed by settings.

use crate::flags::KeySetting;

use super::key::Key;
use super::keys::{self, Action, BINDINGS};

/// Which key does what.
#[derive(Debug, Clone)]
pub struct Keymap {
    /// One row for each binding of the table, in its order.
    keys: Vec<Vec<Key>>,
    /// What could not be done as the settings ask for, in words.
    problems: Vec<String>,
}

impl Default for Keymap {
    fn default() -> Self {
        let keys = BINDINGS.iter().map(|binding| binding.keys.to_vec()).collect();
        Self { keys, problems: Vec::new() }
    }
}

/// Whoever knows no other key still finds out of everything with these.
const KEPT: [Action; 4] = [Action::Quit, Action::Help, Action::Command, Action::Cancel];

impl Keymap {
    /// The table's keys, changed by settings; of two settings for one action the later holds.
    pub fn with<'a>(settings: impl Iterator<Item = &'a KeySetting>) -> Keymap {
        let mut map = Keymap::default();
        // Rows that settings have filled, with their places.
        let mut set: Vec<Option<&str>> = vec![None; BINDINGS.len()];
        for setting in settings {
            let Some(row) = BINDINGS.iter().position(|binding| binding.name == setting.action)
            else {
                map.problems.push(unknown_action(setting));
                continue;
            };
            let keys = map.take_keys(row, setting, &set);
            if let (Some(slot), Some(place)) = (map.keys.get_mut(row), set.get_mut(row)) {
                *slot = keys;
                *place = Some(&setting.place);
            }
        }
        map.report_rows_without_keys(&set);
        map
    }

    /// The keys of a setting that can be had, taken from rows that have them by the table alone.
    fn take_keys(&mut self, row: usize, setting: &KeySetting, set: &[Option<&str>]) -> Vec<Key> {
        let mut found = Vec::new();
        for name in &setting.keys {
            let Some(key) = Key::named(name) else {
                let (place, action) = (&setting.place, &setting.action);
                self.problems.push(format!(
                    "{place}: {name:?} for {action} is no key; keys are written as x, Ctrl-R, F5, PageUp"
                ));
                continue;
            };
            if !key.arrives() {
                let (place, action) = (&setting.place, &setting.action);
                self.problems.push(format!(
                    "{place}: {key} for {action} cannot be told by terminals from another key"
                ));
                continue;
            }
            let other = self.keys.iter().position(|keys| keys.contains(&key));
            let Some(other) = other.filter(|other| *other != row) else {
                found.push(key);
                continue;
            };
            let binding = &BINDINGS[other];
            if KEPT.contains(&binding.action) {
                self.problems.push(format!(
                    "{}: {key} stays {}, so that it is always found",
                    setting.place, binding.name
                ));
            } else if let Some(place) = set[other] {
                self.problems.push(format!(
                    "{}: {key} is {} already ({place}); {} does not get it",
                    setting.place, binding.name, setting.action
                ));
            } else {
                self.keys[other].retain(|taken| *taken != key);
                found.push(key);
            }
        }
        if found.is_empty() && (!setting.keys.is_empty() || KEPT.contains(&BINDINGS[row].action)) {
            return BINDINGS[row].keys.to_vec();
        }
        found
    }

    /// Actions that lost their last key to another; a setting without keys was meant.
    fn report_rows_without_keys(&mut self, set: &[Option<&str>]) {
        for (row, binding) in BINDINGS.iter().enumerate() {
            if self.keys[row].is_empty() && set[row].is_none() {
                self.problems.push(format!(
                    "settings of keys: {} has no key left; :{} still does it",
                    binding.name, binding.name
                ));
            }
        }
    }

    /// What a key does while no prompt is open.
    pub fn action_of(&self, key: Key) -> Option<Action> {
        let row = self.keys.iter().position(|keys| keys.contains(&key))?;
        BINDINGS.get(row).map(|binding| binding.action)
    }

    /// The keys of an action as the help writes them; empty where it has none.
    pub fn text(&self, action: Action) -> String {
        self.keys_of(action).iter().map(Key::to_string).collect::<Vec<_>>().join(" ")
    }

    /// The first key of an action as hints write it, or its name on the command line.
    pub fn hint(&self, action: Action) -> String {
        match self.keys_of(action).first() {
            Some(key) => key.to_string(),
            None => format!(":{}", keys::name_of(action)),
        }
    }

    /// What could not be done as the settings ask for, in words.
    pub fn problems(&self) -> &[String] {
        &self.problems
    }

    fn keys_of(&self, action: Action) -> &[Key] {
        let row = BINDINGS.iter().position(|binding| binding.action == action);
        row.and_then(|row| self.keys.get(row)).map_or(&[], Vec::as_slice)
    }
}

fn unknown_action(setting: &KeySetting) -> String {
    let KeySetting { action, place, .. } = setting;
    let start: String = action.chars().take(3).collect();
    let near: Vec<&str> = BINDINGS
        .iter()
        .map(|binding| binding.name)
        .filter(|name| !start.is_empty() && name.contains(&start))
        .take(4)
        .collect();
    match near.is_empty() {
        true => format!("{place}: no action {action:?}; the help lists them"),
        false => format!("{place}: no action {action:?}; near it: {}", near.join(", ")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn map(text: &str) -> Keymap {
        Keymap::with(KeySetting::parse(text, "settings.toml").unwrap().iter())
    }

    #[test]
    fn a_changed_key_does_the_new_thing_and_no_longer_the_old() {
        let map = map("[keys]\nundo = 'U'\nredo = ['Ctrl-Y', 'u']\n");
        assert_eq!(map.action_of(Key::char('U')), Some(Action::Undo));
        assert_eq!(map.action_of(Key::char('u')), Some(Action::Redo));
        assert_eq!(map.action_of(Key::char('r')), None);
        assert_eq!(
            (map.hint(Action::Undo), map.text(Action::Redo)),
            ("U".into(), "Ctrl-Y u".into())
        );
        assert!(map.problems().is_empty(), "{:?}", map.problems());
    }

    #[test]
    fn two_actions_can_trade_their_keys() {
        let map = map("[keys]\nundo = 'a'\nassess = 'u'\n");
        assert_eq!(map.action_of(Key::char('a')), Some(Action::Undo));
        assert_eq!(map.action_of(Key::char('u')), Some(Action::Assess));
        assert!(map.problems().is_empty(), "{:?}", map.problems());
    }

    #[test]
    fn mistakes_are_named_with_their_lines_and_the_rest_holds() {
        for (text, problem) in [
            ("undoo = 'U'", "settings.toml, line 2: no action \"undoo\"; near it: undo"),
            ("undo = 'Hyper-X'", "line 2: \"Hyper-X\" for undo is no key"),
            ("undo = 'U'\nredo = 'U'", "line 3: U is undo already (settings.toml, line 2)"),
            ("undo = 'q'", "line 2: q stays quit"),
            ("undo = 'Alt-x'", "line 2: Alt-x for undo cannot be told"),
            ("undo = 'x'", "pin has no key left; :pin still does it"),
        ] {
            let map = map(&format!("[keys]\n{text}\n"));
            assert_eq!(map.problems().len(), 1, "{text}: {:?}", map.problems());
            assert!(map.problems()[0].contains(problem), "{text}: {:?}", map.problems());
            assert_eq!(map.action_of(Key::char('q')), Some(Action::Quit));
            assert!(
                map.action_of(Key::char('u')).is_some()
                    || text.starts_with("undo = 'U'")
                    || text.contains('x')
            );
        }
        assert_eq!(map("[keys]\nundo = []\n").hint(Action::Undo), ":undo");
        assert_eq!(map("[keys]\nquit = []\n").hint(Action::Quit), "q");
    }
}
