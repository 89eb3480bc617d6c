//! The neighbours of every footprint.

use super::array;
use super::ground;

/// Footprints in a neighbourhood at the most, its own among them: nine, as in a 3x3 box.
pub const MOST: usize = 9;

/// For every footprint those that lie beside it, itself among them, in rising order.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Neighbours {
    lists: Vec<[u32; MOST]>,
    counts: Vec<u8>,
    note: Option<String>,
}

impl Neighbours {
    /// Neighbours by distance on the ground, within 1.6 local spacings. `lengths` are those of the
    /// footprint dimensions; latitudes and longitudes are in degrees, one per footprint, and a
    /// footprint without a position has no neighbourhood.
    ///
    /// Falls back on [`Neighbours::by_array`] when the shapes don't fit.
    pub fn by_ground(lengths: &[usize], latitudes: &[f64], longitudes: &[f64]) -> Self {
        let count = lengths.iter().product::<usize>();
        if count == latitudes.len() && count == longitudes.len() {
            Self::gather(ground::lists(lengths, latitudes, longitudes), None)
        } else {
            Self::by_array(lengths)
        }
    }

    /// Neighbours by place in the file's array, for files without latitude and longitude.
    pub fn by_array(lengths: &[usize]) -> Self {
        let (lists, guess) = array::lists(lengths);
        let mut note = "the file gives no positions on the ground, so neighbourhoods follow the \
                        order of the array"
            .to_owned();
        if let Some(guess) = guess {
            note = format!("{note}; {guess}");
        }
        Self::gather(lists, Some(note))
    }

    fn gather(found: Vec<Vec<u32>>, note: Option<String>) -> Self {
        let mut lists = vec![[0; MOST]; found.len()];
        let mut counts = vec![0; found.len()];
        for (footprint, list) in found.iter().enumerate() {
            let kept = list.len().min(MOST);
            lists[footprint][..kept].copy_from_slice(&list[..kept]);
            lists[footprint][..kept].sort_unstable();
            // At most nine.
            counts[footprint] = kept as u8;
        }
        Self { lists, counts, note }
    }

    /// The footprints beside this one, itself among them, in rising order; empty where it has no
    /// position.
    pub fn of(&self, footprint: usize) -> &[u32] {
        match (self.lists.get(footprint), self.counts.get(footprint)) {
            (Some(list), Some(&count)) => &list[..usize::from(count)],
            _ => &[],
        }
    }

    /// Footprints.
    pub fn len(&self) -> usize {
        self.counts.len()
    }

    /// Whether there are no footprints.
    pub fn is_empty(&self) -> bool {
        self.counts.is_empty()
    }

    /// What a reader of the results should know; `None` for neighbours by ground distance.
    pub fn note(&self) -> Option<&str> {
        self.note.as_deref()
    }
}
