//! How well a mask agrees with the truth: confusion tables and Cohen's kappa.

use std::ops::Add;

/// How often a mask and the truth say yes or no together, and how often they differ.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub struct Table {
    /// Both say yes.
    pub hits: usize,
    /// The truth says yes, the mask no.
    pub misses: usize,
    /// The mask says yes, the truth no.
    pub false_alarms: usize,
    /// Both say no.
    pub rejections: usize,
}

impl Table {
    /// Of pairs of what the mask says and what is true.
    pub fn of(pairs: impl IntoIterator<Item = (bool, bool)>) -> Table {
        let mut table = Table::default();
        for pair in pairs {
            let count = match pair {
                (true, true) => &mut table.hits,
                (false, true) => &mut table.misses,
                (true, false) => &mut table.false_alarms,
                (false, false) => &mut table.rejections,
            };
            *count += 1;
        }
        table
    }

    /// How many were compared.
    pub fn all(self) -> usize {
        self.hits + self.misses + self.false_alarms + self.rejections
    }

    /// The share on which both agree.
    pub fn agreement(self) -> f64 {
        (self.hits + self.rejections) as f64 / self.all() as f64
    }

    /// Agreement beyond what chance would give two judges who say yes as often as these do:
    /// (p_o - p_e) / (1 - p_e), after Cohen (1960). Not a number where both always say the same.
    pub fn kappa(self) -> f64 {
        let share = |count: usize| count as f64 / self.all() as f64;
        let mask = share(self.hits + self.false_alarms);
        let truth = share(self.hits + self.misses);
        let by_chance = mask * truth + (1.0 - mask) * (1.0 - truth);
        (self.agreement() - by_chance) / (1.0 - by_chance)
    }
}

impl Add for Table {
    type Output = Table;

    fn add(self, other: Table) -> Table {
        Table {
            hits: self.hits + other.hits,
            misses: self.misses + other.misses,
            false_alarms: self.false_alarms + other.false_alarms,
            rejections: self.rejections + other.rejections,
        }
    }
}
