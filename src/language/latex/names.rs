//! Which symbol a LaTeX name is.
//!
//! A name is reduced to its letters and digits, subscript behind, Greek spelt out: `g_{\mathrm{m,Q1}}`
//! is `gmQ1`, and so is the symbol `Q1.gm`. Customs of the trade come second: `\omega_p` for `wp`,
//! `g_{m1}` for `Q1.gm`, `g_m` where one device has a `gm`.

use std::collections::BTreeMap;

/// The names of a circuit by what they are reduced to.
pub(crate) struct Names {
    /// For each reduced name the names of the circuit, the plain readings and the customary ones.
    exact: BTreeMap<String, Vec<String>>,
    customary: BTreeMap<String, Vec<String>>,
}

/// A name as LaTeX has it: what it is reduced to.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(crate) struct Name(pub(crate) String);

impl Name {
    /// A name as it is typed.
    pub(crate) fn of(text: &str) -> Self {
        Self(flattened(text))
    }
}

/// What a name may stand for.
pub(crate) enum Meaning<'a> {
    One(&'a str),
    Several(&'a [String]),
    Nothing,
}

impl Names {
    /// Of these names of a circuit.
    pub(crate) fn new<'n>(names: impl Iterator<Item = &'n str>) -> Self {
        let mut all = Self { exact: BTreeMap::new(), customary: BTreeMap::new() };
        for name in names {
            let (owner, own) = match name.rsplit_once('.') {
                Some((owner, own)) => (owner, own),
                None => ("", name),
            };
            put(&mut all.exact, format!("{}{}", flattened(own), flattened(owner)), name);
            let digits = owner.trim_start_matches(|c: char| !c.is_ascii_digit());
            let mut customary = Vec::new();
            if !owner.is_empty() {
                customary.push(format!("{}{digits}", flattened(own)));
                customary.push(flattened(own));
            }
            if let Some(rest) = own.strip_prefix('w').filter(|rest| !rest.is_empty()) {
                customary.push(format!("omega{}{}", flattened(rest), flattened(owner)));
            }
            customary.dedup();
            for key in customary {
                put(&mut all.customary, key, name);
            }
        }
        all
    }

    /// What a reduced name stands for; customs count only where no plain reading is there.
    pub(crate) fn meaning(&self, name: &Name) -> Meaning<'_> {
        let found = self.exact.get(&name.0).or_else(|| self.customary.get(&name.0));
        match found.map(Vec::as_slice) {
            Some([one]) => Meaning::One(one),
            Some(several) => Meaning::Several(several),
            None => Meaning::Nothing,
        }
    }

    /// Whether a reduced name is a plain reading of something.
    pub(crate) fn is_exact(&self, name: &str) -> bool {
        self.exact.contains_key(name)
    }

    /// All plain readings, for suggestions.
    pub(crate) fn known(&self) -> impl Iterator<Item = &str> {
        self.exact.values().flatten().map(String::as_str)
    }
}

fn put(map: &mut BTreeMap<String, Vec<String>>, key: String, name: &str) {
    let names = map.entry(key).or_default();
    if !names.iter().any(|known| known == name) {
        names.push(name.to_owned());
    }
}

/// The letters and digits of a name, Greek letters spelt out.
pub(crate) fn flattened(text: &str) -> String {
    let ascii = super::super::names::ascii_name(text);
    ascii.chars().filter(|c| c.is_alphanumeric()).collect()
}

/// The name of a Greek letter by its command, without the backslash.
pub(crate) fn greek_name(command: &str) -> Option<&str> {
    const LETTERS: [&str; 35] = [
        "alpha", "beta", "gamma", "delta", "epsilon", "zeta", "eta", "theta", "iota", "kappa",
        "lambda", "mu", "nu", "xi", "omicron", "pi", "rho", "sigma", "tau", "upsilon", "phi",
        "chi", "psi", "omega", "Gamma", "Delta", "Theta", "Lambda", "Xi", "Pi", "Sigma", "Upsilon",
        "Phi", "Psi", "Omega",
    ];
    let plain = command.strip_prefix("var").unwrap_or(command);
    LETTERS.contains(&plain).then_some(plain)
}

/// A left side in LaTeX reduced to its letters and digits; the argument of a function is left out.
pub(crate) fn left_side(text: &str) -> String {
    let text = text.replace("(f)", "").replace("(s)", "");
    let mut key = String::new();
    let mut rest = text.as_str();
    while let Some(first) = rest.chars().next() {
        rest = &rest[first.len_utf8()..];
        if first == '\\' {
            let letters = rest.bytes().take_while(u8::is_ascii_alphabetic).count();
            let (command, behind) = rest.split_at(letters);
            key.push_str(greek_name(command).unwrap_or_default());
            rest = behind;
        } else if first.is_alphanumeric() {
            key.push(first);
        }
    }
    flattened(&key)
}
