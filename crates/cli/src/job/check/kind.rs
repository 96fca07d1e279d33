//! The kinds of bias terms, and the keys of each.

/// The kinds of terms.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Kind {
    /// A harmonic about a center.
    Harmonic,
    /// A harmonic about the nearest image of a center.
    PeriodicHarmonic,
    /// A slope.
    Linear,
    /// A wall on one side.
    OneSided,
    /// No force about a center, and walls beyond.
    FlatBottomed,
    /// A table of energies.
    Tabulated,
    /// No bias.
    None,
}

impl Kind {
    /// The words of a job.
    pub const WORDS: [(&'static str, Self); 7] = [
        ("harmonic", Self::Harmonic),
        ("periodic-harmonic", Self::PeriodicHarmonic),
        ("linear", Self::Linear),
        ("one-sided", Self::OneSided),
        ("flat-bottomed", Self::FlatBottomed),
        ("tabulated", Self::Tabulated),
        ("none", Self::None),
    ];

    /// Its word.
    pub fn name(self) -> &'static str {
        Self::WORDS.iter().find(|(_, kind)| *kind == self).map_or("", |(name, _)| name)
    }

    /// The keys of a term of this kind.
    pub fn keys(self) -> &'static [&'static str] {
        match self {
            Self::Harmonic | Self::PeriodicHarmonic => {
                &["kind", "axis", "center", "center_unit", "force_constant", "force_constant_unit", "convention"]
            }
            Self::Linear => &["kind", "axis", "slope", "slope_unit"],
            Self::OneSided => {
                &["kind", "axis", "bound", "bound_unit", "side", "force_constant", "force_constant_unit", "convention"]
            }
            Self::FlatBottomed => &[
                "kind",
                "axis",
                "center",
                "center_unit",
                "half_width",
                "half_width_unit",
                "force_constant",
                "force_constant_unit",
                "convention",
            ],
            Self::Tabulated => &[
                "kind",
                "axis",
                "file",
                "separator",
                "position_column",
                "energy_column",
                "position_unit",
                "energy_unit",
                "interpolation",
                "outside",
            ],
            Self::None => &["kind"],
        }
    }

    /// What to use on an axis with the other periodicity; `None` where the kind goes with the axis.
    pub fn refusal(self, periodic: bool) -> Option<&'static str> {
        match (self, periodic) {
            (Self::Harmonic, true) => Some("use `periodic-harmonic`, which acts on the nearest image"),
            (Self::Linear, true) => Some("use `tabulated`, if the energy closes on itself"),
            (Self::OneSided, true) => Some("use `flat-bottomed`, which has a wall on either side"),
            (Self::PeriodicHarmonic, false) => Some("use `harmonic`, or give the axis its `period`"),
            _ => None,
        }
    }
}
