//! How many threads may run at once.

/// The processors this process may use: the affinity mask and the cgroup's quota are honoured.
///
/// A smaller allotment, such as a batch system's, is handed in by the caller where it applies.
pub fn cores() -> usize {
    std::thread::available_parallelism().map_or(1, std::num::NonZero::get)
}
