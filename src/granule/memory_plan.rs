//! How the memory that a granule's values may take is shared out.

use crate::netcdf_files::ReadLimits;
use crate::system::free_memory;

/// What the values of a file may take of memory.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct MemoryPlan {
    /// Bytes in all.
    pub budget: u64,
    /// Bytes of a slab at most, where a single row is not larger.
    pub slab: u64,
}

impl MemoryPlan {
    /// As the limits say; most of what is free where they say nothing. The rest is for the layers
    /// made of the values.
    pub fn of(limits: &ReadLimits) -> Self {
        let most = |free: u64| free / 4 * 3;
        let budget = limits.values.or_else(|| free_memory().map(most)).unwrap_or(u64::MAX);
        Self::new(budget, rayon::current_num_threads())
    }

    /// With slabs so small that each thread may have one in hand within a quarter of the budget.
    fn new(budget: u64, threads: usize) -> Self {
        Self { budget, slab: budget / (4 * threads.max(2) as u64) }
    }

    /// Bytes of the slabs that stay, out of `all`: everything where it fits, else half of the budget.
    /// A quarter is for slabs that pass by, another one for those that are in hand.
    pub fn kept(&self, all: u64) -> u64 {
        if all <= self.budget { all } else { self.budget / 2 }
    }

    /// Bytes of the slabs that pass by, of which the largest has `slab` bytes. Of more than a few for
    /// each thread nobody asks again soon, and memory that is given back is the fastest to be had.
    pub fn passing(&self, slab: u64) -> u64 {
        let few = slab.saturating_mul(4 * rayon::current_num_threads() as u64);
        (self.budget / 4).min(few)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn all_shares_together_stay_within_the_budget() {
        for threads in [1, 2, 64] {
            let plan = MemoryPlan::new(1 << 20, threads);
            let in_hand = plan.slab * threads as u64;
            let passing = plan.passing(plan.slab);
            assert!(plan.kept(1 << 30) + passing + in_hand <= plan.budget, "{threads}");
        }
        let plan = MemoryPlan::new(1000, 2);
        assert_eq!((plan.kept(1000), plan.kept(1001)), (1000, 500));
    }
}
