//! Why a function has no list of roots.

/// What stands against poles and zeros.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum RootsError {
    /// A value is missing.
    #[error("poles and zeros need numbers, and {0} {1} none")]
    NoValues(String, &'static str),
    /// The function is not finite at the nominal values.
    #[error("the function has no finite value at the nominal values")]
    NotFinite,
    /// The numeric coefficients are too much work.
    #[error("the coefficients with numbers put in would take too long")]
    TooLarge,
    /// Two roots are closer together than any precision that is tried.
    #[error("two different roots are closer together than a part in 10^300")]
    TooClose,
    /// A root is too large or too small.
    #[error("a root lies beyond the range of numbers, 10^±290")]
    OutOfRange,
}

impl RootsError {
    /// A short name for programs and for the list of codes.
    pub fn code(&self) -> &'static str {
        match self {
            Self::NoValues(..) => "no-nominal-values",
            Self::NotFinite => "no-nominal-value",
            Self::TooLarge => "too-large",
            Self::TooClose => "roots-too-close",
            Self::OutOfRange => "roots-out-of-range",
        }
    }

    /// What to do about it.
    pub fn help(&self) -> Option<&'static str> {
        match self {
            Self::NoValues(..) => {
                Some("give values in the file, as in `R1 = 10 kΩ` or `let gm = 2 mS`")
            }
            Self::NotFinite => Some("change a value a little, or ask for the reciprocal"),
            Self::TooLarge => Some("cut the circuit in parts"),
            Self::TooClose | Self::OutOfRange => None,
        }
    }

    /// The process exit code: 2 where the file must change, 4 a bound of the work.
    pub fn exit_code(&self) -> u8 {
        match self {
            Self::NoValues(..) => 2,
            Self::NotFinite => 3,
            Self::TooLarge | Self::TooClose | Self::OutOfRange => 4,
        }
    }
}
