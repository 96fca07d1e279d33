//! Units of time.

use std::fmt;
use std::str::FromStr;

use serde::{Serialize, Serializer};

use super::UnitError;

/// The unit of simulated time.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum TimeUnit {
    /// Femtosecond, `fs`.
    Femtosecond,
    /// Picosecond, `ps`.
    Picosecond,
    /// Nanosecond, `ns`.
    Nanosecond,
    /// Microsecond, `us`.
    Microsecond,
}

impl TimeUnit {
    /// Every unit, in the order in which messages list them.
    pub const ALL: [Self; 4] = [Self::Femtosecond, Self::Picosecond, Self::Nanosecond, Self::Microsecond];

    /// The symbol, which is also a spelling that parses.
    #[must_use]
    pub const fn symbol(self) -> &'static str {
        match self {
            Self::Femtosecond => "fs",
            Self::Picosecond => "ps",
            Self::Nanosecond => "ns",
            Self::Microsecond => "us",
        }
    }

    /// The factor that takes a value in this unit to one in `other`.
    #[must_use]
    pub fn factor_to(self, other: Self) -> f64 {
        // Whole powers of ten up to 1e9 are exact, so one division rounds at most once.
        self.in_femtoseconds() / other.in_femtoseconds()
    }

    const fn in_femtoseconds(self) -> f64 {
        match self {
            Self::Femtosecond => 1.0,
            Self::Picosecond => 1e3,
            Self::Nanosecond => 1e6,
            Self::Microsecond => 1e9,
        }
    }
}

impl fmt::Display for TimeUnit {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.pad(self.symbol())
    }
}

impl Serialize for TimeUnit {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(self.symbol())
    }
}

impl FromStr for TimeUnit {
    type Err = UnitError;

    fn from_str(text: &str) -> Result<Self, UnitError> {
        match super::compound::normalized(text).as_str() {
            "fs" | "femtosecond" | "femtoseconds" => Ok(Self::Femtosecond),
            "ps" | "picosecond" | "picoseconds" => Ok(Self::Picosecond),
            "ns" | "nanosecond" | "nanoseconds" => Ok(Self::Nanosecond),
            // The micro sign and the Greek letter mu look alike but are two characters.
            "us" | "\u{b5}s" | "\u{3bc}s" | "microsecond" | "microseconds" => Ok(Self::Microsecond),
            _ => Err(UnitError::Unknown {
                quantity: "time unit",
                found: text.to_owned(),
                allowed: "one of `fs`, `ps`, `ns` or `us`",
            }),
        }
    }
}
