//! Why a claim cannot be judged.

use crate::analysis::roots::RootsError;

/// What stands against a verdict.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum CheckError {
    /// The result is too long to expand, so that equality cannot be proved; random values agree.
    #[error(
        "the result has too many terms for a proof; it agrees with the claim at {points} random points \
         modulo a prime, which proves nothing"
    )]
    TooLong {
        /// How many points.
        points: usize,
    },
    /// The claim divides by 0.
    #[error("the claim divides by 0")]
    DividesByZero,
    /// A root that the function does not have.
    #[error("the function has no {wanted}: it has {count} {kind}")]
    NoSuchRoot {
        /// `p3`, a pair of poles.
        wanted: String,
        /// How many there are.
        count: usize,
        /// `poles` or `zeros`.
        kind: &'static str,
    },
    /// The value grows beyond all bounds.
    #[error("the function has no finite value at {0}")]
    Infinite(&'static str),
    /// Numbers are needed, and some are missing.
    #[error("this claim is judged by numbers, and {0} no nominal value")]
    NoValues(String),
    /// The roots could not be found.
    #[error("{0}")]
    Roots(RootsError),
}

impl CheckError {
    /// A short name for programs and for the list of codes.
    pub fn code(&self) -> &'static str {
        match self {
            Self::TooLong { .. } => "terms",
            Self::DividesByZero => "division-by-zero",
            Self::NoSuchRoot { .. } => "no-such-root",
            Self::Infinite(_) => "infinite-limit",
            Self::NoValues(_) => "no-values",
            Self::Roots(error) => error.code(),
        }
    }

    /// What to do about it.
    pub fn help(&self) -> Option<String> {
        Some(match self {
            Self::TooLong { .. } => "put numbers in with `--keep`".to_owned(),
            Self::DividesByZero => "check the denominators of the formula".to_owned(),
            Self::NoSuchRoot { .. } => "`cofactor roots` lists the poles and zeros".to_owned(),
            Self::Infinite(_) => "claim the function itself".to_owned(),
            Self::NoValues(_) => {
                "give the elements values in the file, or claim with `=`".to_owned()
            }
            Self::Roots(error) => return error.help().map(str::to_owned),
        })
    }

    /// The process exit code: 4 for a work bound, 2 for a claim or a file that has to be mended.
    pub fn exit_code(&self) -> u8 {
        match self {
            Self::TooLong { .. } => 4,
            Self::Roots(error) => error.exit_code(),
            _ => 2,
        }
    }
}
