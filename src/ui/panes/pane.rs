//! The panes, in one table: a pane is a variant, a row here, and its drawing in `views::draw_pane`.

use super::layout::Part;

/// The panes, by the names that their titles begin with.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Pane {
    /// The granules in hand.
    Tray,
    /// The footprint map.
    Field,
    /// The spectrum.
    Trace,
    /// How the values of a layer lie.
    Spread,
    /// The layer along scan lines, by detector or along granules.
    Strip,
    /// What is known of the footprint under the cursor.
    Evidence,
    /// Who decided what, when and why.
    Ledger,
}

/// What the table says of a pane.
struct Row {
    pane: Pane,
    name: &'static str,
    /// The part of the screen it lies in: on a narrow, a middle-sized and a wide one.
    parts: [Part; 3],
}

const fn row(pane: Pane, name: &'static str, parts: [Part; 3]) -> Row {
    Row { pane, name, parts }
}

/// Panes that share a part of the screen take turns there: the first stands there until another is
/// asked for.
const ROWS: [Row; 7] = [
    row(Pane::Tray, "Tray", [Part::Left; 3]),
    row(Pane::Field, "Field", [Part::Middle; 3]),
    row(Pane::Trace, "Trace", [Part::Bottom; 3]),
    row(Pane::Spread, "Spread", [Part::Bottom, Part::Corner, Part::First]),
    row(Pane::Strip, "Strip", [Part::Bottom, Part::Corner, Part::Second]),
    row(Pane::Evidence, "Evidence", [Part::Right; 3]),
    row(Pane::Ledger, "Ledger", [Part::Right, Part::Right, Part::Third]),
];

impl Pane {
    /// Every pane, in the order in which the focus goes round and the digits count.
    pub fn all() -> impl DoubleEndedIterator<Item = Pane> + Clone {
        ROWS.iter().map(|row| row.pane)
    }

    /// The name that the title begins with.
    pub fn name(self) -> &'static str {
        ROWS.iter().find(|row| row.pane == self).map_or("", |row| row.name)
    }

    /// The pane of this name.
    pub fn named(name: &str) -> Option<Pane> {
        ROWS.iter().find(|row| row.name == name).map(|row| row.pane)
    }

    /// The next one, or the one before, round and round.
    pub fn step(self, forward: bool) -> Pane {
        let count = ROWS.len();
        let here = ROWS.iter().position(|row| row.pane == self).unwrap_or(0);
        ROWS[(here + if forward { 1 } else { count - 1 }) % count].pane
    }

    /// Whether it waits for the cursor to rest where little is to be sent.
    pub fn waits(self) -> bool {
        !matches!(self, Pane::Tray | Pane::Field)
    }

    /// The part of the screen it lies in, by how much room there is: 0 little, 2 most.
    pub(super) fn part(self, room: usize) -> Option<Part> {
        let row = ROWS.iter().find(|row| row.pane == self)?;
        row.parts.get(room).copied()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_focus_goes_round_both_ways() {
        let round = Pane::all().fold(Pane::Field, |pane, _| pane.step(true));
        assert_eq!(round, Pane::Field);
        for pane in Pane::all() {
            assert_eq!(pane.step(true).step(false), pane);
            assert_eq!(Pane::named(pane.name()), Some(pane));
        }
    }
}
