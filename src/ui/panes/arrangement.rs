//! Which pane has the keys, which have been asked for, and whether one has the screen for itself.

use super::Pane;

/// How the panes stand; it decides with the screen's size what is on show.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Arrangement {
    /// Every pane that had the keys, the latest first.
    recent: Vec<Pane>,
    zoomed: bool,
}

impl Default for Arrangement {
    fn default() -> Self {
        Self { recent: vec![Pane::Field], zoomed: false }
    }
}

impl Arrangement {
    /// The pane that takes the keys.
    pub fn focus(&self) -> Pane {
        self.recent.first().copied().unwrap_or(Pane::Field)
    }

    /// Gives a pane the keys, and thereby room on the screen.
    pub fn focus_on(&mut self, pane: Pane) {
        self.recent.retain(|other| *other != pane);
        self.recent.insert(0, pane);
    }

    /// Whether the pane with the keys has the screen for itself.
    pub fn is_zoomed(&self) -> bool {
        self.zoomed
    }

    /// Gives the pane with the keys the screen for itself, or takes it back.
    pub fn zoom(&mut self, zoomed: bool) {
        self.zoomed = zoomed;
    }

    /// How lately a pane had the keys: 0 has them; `None` never had them.
    pub(super) fn rank(&self, pane: Pane) -> Option<usize> {
        self.recent.iter().position(|other| *other == pane)
    }

    /// The panes that had the keys, the latest first, by their names.
    pub fn names(&self) -> Vec<String> {
        self.recent.iter().map(|pane| pane.name().to_owned()).collect()
    }

    /// Stands the panes as they stood; names that mean nothing are passed over.
    pub fn restore(&mut self, names: &[String], zoomed: bool) {
        for pane in names.iter().rev().filter_map(|name| Pane::named(name)) {
            self.focus_on(pane);
        }
        self.zoomed = zoomed;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_arrangement_comes_back_by_its_names() {
        let mut before = Arrangement::default();
        before.focus_on(Pane::Strip);
        before.focus_on(Pane::Evidence);
        before.zoom(true);
        let mut after = Arrangement::default();
        after.restore(&before.names(), before.is_zoomed());
        assert_eq!(after, before);
        assert_eq!(after.focus(), Pane::Evidence);
        after.restore(&["Nonsense".to_owned()], false);
        assert_eq!(after.focus(), Pane::Evidence);
    }
}
