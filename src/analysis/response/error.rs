//! Why a function has no curves.

use crate::analysis::AnalysisError;
use crate::analysis::roots::RootsError;

/// What stands against a response.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum ResponseError {
    /// A value is missing.
    #[error("a response needs numbers, and {0} {1} none")]
    NoValues(String, &'static str),
    /// The function is not finite at the nominal values.
    #[error("the function has no finite value at the nominal values")]
    NotFinite,
    /// The numeric coefficients are too much work.
    #[error("the coefficients with numbers put in would take too long")]
    TooLarge,
    /// Poles so close that the partial fractions cancel.
    #[error("poles lie so close together that their partial fractions cancel")]
    Cancelling,
    /// The ratio is not taken to its source.
    #[error("initial values need a ratio to the source that drives it, such as `V(out) / Vin`")]
    NotToSource,
    /// Something that stores no energy.
    #[error("`{0}` has no initial value: it is neither a capacitor nor an inductor")]
    NoState(String),
    /// The roots could not be found.
    #[error(transparent)]
    Roots(#[from] RootsError),
    /// The effect of an initial value could not be derived.
    #[error(transparent)]
    Analysis(#[from] AnalysisError),
}

impl ResponseError {
    /// A short name for programs and for the list of codes.
    pub fn code(&self) -> &'static str {
        match self {
            Self::NoValues(..) => "no-nominal-values",
            Self::NotFinite => "no-nominal-value",
            Self::TooLarge => "too-large",
            Self::Cancelling => "roots-too-close",
            Self::NotToSource => "not-to-source",
            Self::NoState(_) => "no-initial-value",
            Self::Roots(error) => error.code(),
            Self::Analysis(error) => error.code(),
        }
    }

    /// What to do about it.
    pub fn help(&self) -> Option<String> {
        let fixed = match self {
            Self::NoValues(..) => "give values in the file, as in `R1 = 10 kΩ` or `let gm = 2 mS`",
            Self::NotFinite => "change a value a little, or ask for the reciprocal",
            Self::TooLarge => "cut the circuit in parts",
            Self::Cancelling => "make values exactly equal, or further apart",
            Self::NotToSource => "ask for the ratio to the source itself",
            Self::NoState(_) => "name a capacitor (in volts) or an inductor (in amperes)",
            Self::Roots(error) => return error.help().map(str::to_owned),
            Self::Analysis(error) => return error.help(),
        };
        Some(fixed.to_owned())
    }

    /// The process exit code.
    pub fn exit_code(&self) -> u8 {
        match self {
            Self::NoValues(..) | Self::NotToSource | Self::NoState(_) => 2,
            Self::NotFinite => 3,
            Self::TooLarge | Self::Cancelling => 4,
            Self::Roots(error) => error.exit_code(),
            Self::Analysis(error) => error.exit_code(),
        }
    }
}
