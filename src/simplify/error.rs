//! Why there is no shorter formula.

/// What ended the search before it began, or before it found anything.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum SimplifyError {
    /// Symbols without nominal values.
    #[error("{} no nominal value, and what may be left out depends on it", listed(.0))]
    NoValues(Vec<String>),
    /// A result that is no transfer function of the circuit alone.
    #[error("only ratios, two-port entries and return ratios can be simplified")]
    NoFunction,
    /// The exact function is not finite at the nominal values.
    #[error("the function has no finite value in the band at the nominal values")]
    NotFinite,
    /// The time was over, or nothing that can be written meets the goal.
    #[error("no formula was found that can be written and meets the goal")]
    NothingFound,
}

impl SimplifyError {
    /// A short name for programs.
    pub fn code(&self) -> &'static str {
        match self {
            Self::NoValues(_) => "missing-value",
            Self::NoFunction => "not-simplified",
            Self::NotFinite => "not-finite",
            Self::NothingFound => "nothing-found",
        }
    }

    /// The exit code of the program.
    pub fn exit_code(&self) -> u8 {
        match self {
            Self::NoValues(_) | Self::NoFunction => 2,
            Self::NotFinite => 3,
            Self::NothingFound => 4,
        }
    }

    /// What to do.
    pub fn help(&self) -> &'static str {
        match self {
            Self::NoValues(_) => {
                "give a value in the file: `R1 = 10 kΩ`, `gm = 2 mS`, `let beta = 200`"
            }
            Self::NoFunction => "ask for `V(out) / Vin`, `impedance(a, b)` or the like",
            Self::NotFinite => "choose another band with `--band`",
            Self::NothingFound => "allow a larger error with `--within`, or more time",
        }
    }
}

fn listed(names: &[String]) -> String {
    const SHOWN: usize = 10;
    let quoted: Vec<String> = names.iter().take(SHOWN).map(|name| format!("`{name}`")).collect();
    let more = names.len().saturating_sub(SHOWN);
    let verb = if names.len() == 1 { "has" } else { "have" };
    match (quoted.split_last(), more) {
        (Some((last, rest)), 0) if !rest.is_empty() => {
            format!("{} and {last} {verb}", rest.join(", "))
        }
        (_, 0) => format!("{} {verb}", quoted.join("")),
        _ => format!("{} and {more} more {verb}", quoted.join(", ")),
    }
}
