//! What a test says about a footprint.

/// What came of a test at a footprint. Only the first two are results.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Verdict {
    /// It speaks for its flag.
    For,
    /// It speaks against its flag.
    Against,
    /// It is not used on this kind of ground.
    OtherSurface,
    /// Its guard keeps it away.
    Guarded,
    /// Its guard can't be decided.
    GuardUnknown,
    /// The file lacks a channel or a field that it needs.
    NotInFile,
    /// A value that it needs is missing here.
    Missing,
    /// A radiance that it needs is zero or less, so that it has no brightness temperature.
    NotPositive,
}

impl Verdict {
    /// For machines.
    pub fn name(self) -> &'static str {
        match self {
            Self::For => "for",
            Self::Against => "against",
            Self::OtherSurface => "other_surface",
            Self::Guarded => "guarded",
            Self::GuardUnknown => "guard_unknown",
            Self::NotInFile => "not_in_file",
            Self::Missing => "missing",
            Self::NotPositive => "radiance_not_positive",
        }
    }

    /// Whether the test could speak.
    pub fn is_result(self) -> bool {
        matches!(self, Self::For | Self::Against)
    }
}
