//! The Greek letters, their names and their LaTeX commands.

/// A Greek letter.
pub(crate) struct Greek {
    pub(crate) letter: char,
    pub(crate) name: &'static str,
    /// The command, or the Latin letter of the same shape where LaTeX has no command.
    pub(crate) latex: &'static str,
}

macro_rules! table {
    ($($letter:literal $name:literal $latex:literal,)*) => {
        [$(Greek { letter: $letter, name: $name, latex: $latex },)*]
    };
}

const TABLE: [Greek; 48] = table! {
    'α' "alpha" "\\alpha", 'β' "beta" "\\beta", 'γ' "gamma" "\\gamma", 'δ' "delta" "\\delta",
    'ε' "epsilon" "\\varepsilon", 'ζ' "zeta" "\\zeta", 'η' "eta" "\\eta", 'θ' "theta" "\\theta",
    'ι' "iota" "\\iota", 'κ' "kappa" "\\kappa", 'λ' "lambda" "\\lambda", 'μ' "mu" "\\mu",
    'ν' "nu" "\\nu", 'ξ' "xi" "\\xi", 'ο' "omicron" "o", 'π' "pi" "\\pi",
    'ρ' "rho" "\\rho", 'σ' "sigma" "\\sigma", 'τ' "tau" "\\tau", 'υ' "upsilon" "\\upsilon",
    'φ' "phi" "\\varphi", 'χ' "chi" "\\chi", 'ψ' "psi" "\\psi", 'ω' "omega" "\\omega",
    'Α' "Alpha" "A", 'Β' "Beta" "B", 'Γ' "Gamma" "\\Gamma", 'Δ' "Delta" "\\Delta",
    'Ε' "Epsilon" "E", 'Ζ' "Zeta" "Z", 'Η' "Eta" "H", 'Θ' "Theta" "\\Theta",
    'Ι' "Iota" "I", 'Κ' "Kappa" "K", 'Λ' "Lambda" "\\Lambda", 'Μ' "Mu" "M",
    'Ν' "Nu" "N", 'Ξ' "Xi" "\\Xi", 'Ο' "Omicron" "O", 'Π' "Pi" "\\Pi",
    'Ρ' "Rho" "P", 'Σ' "Sigma" "\\Sigma", 'Τ' "Tau" "T", 'Υ' "Upsilon" "\\Upsilon",
    'Φ' "Phi" "\\Phi", 'Χ' "Chi" "X", 'Ψ' "Psi" "\\Psi", 'Ω' "Omega" "\\Omega",
};

/// The letter as a character, both signs of Unicode for µ and Ω included.
pub(crate) fn of_char(c: char) -> Option<&'static Greek> {
    let c = match c {
        '\u{b5}' => 'μ',
        '\u{2126}' => 'Ω',
        c => c,
    };
    TABLE.iter().find(|greek| greek.letter == c)
}

/// The letter of exactly that name.
pub(crate) fn of_name(name: &str) -> Option<&'static Greek> {
    TABLE.iter().find(|greek| greek.name == name)
}

/// The name of a Greek letter.
pub(crate) fn name_of(c: char) -> Option<&'static str> {
    of_char(c).map(|greek| greek.name)
}

/// A Greek letter or name at the beginning, and the rest.
///
/// A name counts only where no lower-case letter follows (`tau2`, `betaF`, not `etch`), and where
/// the letter does not look Latin: `Rho` is a resistor and not a P.
pub(crate) fn split_leading_name(text: &str) -> Option<(&'static Greek, &str)> {
    let first = text.chars().next()?;
    if let Some(greek) = of_char(first) {
        return Some((greek, &text[first.len_utf8()..]));
    }
    TABLE.iter().filter(|greek| greek.latex.starts_with('\\')).find_map(|greek| {
        let rest = text.strip_prefix(greek.name)?;
        (!rest.starts_with(char::is_lowercase)).then_some((greek, rest))
    })
}
