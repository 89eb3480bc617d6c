//! How a band's values lie in the file, and how they are brought into footprint order.

use std::ops::Range;

use ndarray::ArrayView;

use crate::netcdf_files::{Samples, with_values};

/// What a dimension of a band's variable counts.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Role {
    /// Channels.
    Spectral,
    /// Places along the footprint dimension with this number.
    Footprint(usize),
}

/// The order and the lengths of a band's dimensions in the file.
#[derive(Debug, Clone, PartialEq)]
pub struct Layout {
    roles: Vec<Role>,
    lengths: Vec<usize>,
}

impl Layout {
    /// The layout of a variable: the role and the length of each dimension, slowest first.
    pub fn new(roles: Vec<Role>, lengths: Vec<usize>) -> Self {
        Self { roles, lengths }
    }

    /// Where in the variable's own order a role stands.
    pub fn axis_of(&self, role: Role) -> Option<usize> {
        self.roles.iter().position(|&candidate| candidate == role)
    }

    /// The block of all channels of all footprints in `rows` of the first footprint dimension.
    pub fn rows(&self, rows: Range<usize>) -> (Vec<usize>, Vec<usize>) {
        let mut start = vec![0; self.lengths.len()];
        let mut count = self.lengths.clone();
        if let Some(axis) = self.axis_of(Role::Footprint(0)) {
            start[axis] = rows.start;
            count[axis] = rows.len();
        }
        (start, count)
    }

    /// The block of one footprint's channels.
    pub fn spectrum(&self, position: &[usize]) -> (Vec<usize>, Vec<usize>) {
        let part = |(&role, &length): (&Role, &usize)| match role {
            Role::Spectral => (0, length),
            Role::Footprint(number) => (position.get(number).copied().unwrap_or(0), 1),
        };
        self.roles.iter().zip(&self.lengths).map(part).unzip()
    }

    /// A block as read, footprint by footprint with the channels of each one side by side.
    pub fn footprint_major(&self, count: &[usize], samples: Samples) -> Samples {
        let order = self.wanted_order();
        if order.iter().enumerate().all(|(place, &axis)| place == axis) {
            return samples;
        }
        with_values!(
            samples,
            values => permuted(values, count, &order).into(),
            texts => Samples::Text(texts)
        )
    }

    /// The file's dimensions in footprint order, then channels.
    fn wanted_order(&self) -> Vec<usize> {
        let footprints = (0..self.roles.len()).map(Role::Footprint);
        footprints.chain([Role::Spectral]).filter_map(|role| self.axis_of(role)).collect()
    }
}

/// The values of a row-major block with its dimensions brought into another order.
fn permuted<Value: Copy>(values: Vec<Value>, count: &[usize], order: &[usize]) -> Vec<Value> {
    match ArrayView::from_shape(count, &values) {
        Ok(block) => block.permuted_axes(order).iter().copied().collect(),
        // The reader checks that it sends as many values as were asked for, so this is never met;
        // the values as they are keep the right number.
        Err(_) => values,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_usual_order_is_left_as_it_is() {
        let layout = Layout::new(vec![Role::Footprint(0), Role::Spectral], vec![2, 3]);
        let samples = Samples::from(vec![1_i16, 2, 3, 4, 5, 6]);
        assert_eq!(layout.footprint_major(&[2, 3], samples.clone()), samples);
    }

    #[test]
    fn channels_first_and_footprints_turned_come_into_order() {
        // Stored as channel (2) x position (3) x line (1 of 2 read).
        let roles = vec![Role::Spectral, Role::Footprint(1), Role::Footprint(0)];
        let layout = Layout::new(roles, vec![2, 3, 2]);
        let (start, count) = layout.rows(1..2);
        assert_eq!((start, count.clone()), (vec![0, 0, 1], vec![2, 3, 1]));
        let stored = Samples::from(vec![10.0_f32, 20.0, 30.0, 11.0, 21.0, 31.0]);
        let wanted = Samples::from(vec![10.0_f32, 11.0, 20.0, 21.0, 30.0, 31.0]);
        assert_eq!(layout.footprint_major(&count, stored), wanted);
    }

    #[test]
    fn a_spectrum_is_all_channels_of_one_place() {
        let roles = vec![Role::Footprint(0), Role::Spectral, Role::Footprint(1)];
        let layout = Layout::new(roles, vec![4, 7, 5]);
        assert_eq!(layout.spectrum(&[3, 2]), (vec![3, 0, 2], vec![1, 7, 1]));
    }
}
