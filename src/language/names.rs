//! Names: their ASCII form, reserved words, class letters, and the nearest known name to a typo.

use crate::circuit::{Class, Unit};

/// Greek letters, capital and small, from alpha on as Unicode orders them.
const GREEK: [&str; 25] = [
    "alpha", "beta", "gamma", "delta", "epsilon", "zeta", "eta", "theta", "iota", "kappa",
    "lambda", "mu", "nu", "xi", "omicron", "pi", "rho", "sigma", "sigma", "tau", "upsilon", "phi",
    "chi", "psi", "omega",
];

/// A name with Greek letters spelled out: `β` and `beta` are one name.
pub(crate) fn ascii_name(text: &str) -> String {
    let mut name = String::with_capacity(text.len());
    for character in text.chars() {
        let code = character as usize;
        match character {
            'α'..='ω' => name.push_str(GREEK[code - 'α' as usize]),
            'Α'..='Ω' => {
                let spelled = GREEK[code - 'Α' as usize];
                name.push_str(&spelled[..1].to_uppercase());
                name.push_str(&spelled[1..]);
            }
            other => name.push(other),
        }
    }
    name
}

/// The names of queries.
pub(crate) const QUERIES: [&str; 5] =
    ["impedance", "admittance", "return_ratio", "two_port", "noise_density"];

/// True for a name that the language keeps for itself in expressions.
pub(crate) fn is_reserved(name: &str) -> bool {
    matches!(name, "s" | "pi" | "V" | "I" | "wire" | "infinity" | "from" | "to")
        || is_ground(name)
        || QUERIES.contains(&name)
}

/// The reference node, in any case of letters.
pub(crate) fn is_ground(name: &str) -> bool {
    name.eq_ignore_ascii_case("ground") || name.eq_ignore_ascii_case("gnd")
}

/// The class words.
pub(crate) const CLASS_WORDS: [(&str, Class); 8] = [
    ("resistor", Class::Resistor),
    ("capacitor", Class::Capacitor),
    ("inductor", Class::Inductor),
    ("conductance", Class::Conductance),
    ("impedance", Class::Impedance),
    ("admittance", Class::Admittance),
    ("voltage", Class::Voltage),
    ("current", Class::Current),
];

/// The class of a class word.
pub(crate) fn class_of_word(word: &str) -> Option<Class> {
    CLASS_WORDS.iter().find(|(name, _)| *name == word).map(|(_, class)| *class)
}

/// The class word of a class.
pub(crate) fn word_of_class(class: Class) -> &'static str {
    CLASS_WORDS.iter().find(|(_, own)| *own == class).map_or("opamp", |(word, _)| word)
}

/// The unit of a class's value.
pub(crate) fn unit_of(class: Class) -> Unit {
    match class {
        Class::Capacitor => Unit::FARAD,
        Class::Inductor => Unit::HENRY,
        Class::Conductance | Class::Admittance => Unit::SIEMENS,
        Class::Voltage | Class::Opamp => Unit::VOLT,
        Class::Current => Unit::AMPERE,
        Class::Resistor | Class::Impedance => Unit::OHM,
        Class::Nullor | Class::Transformer => Unit::ONE,
        Class::Gyrator => Unit::SIEMENS,
        Class::Mutual => Unit::HENRY,
    }
}

/// Trade words whose first letter would mislead; a name that begins with one needs its class word.
pub(crate) const TRADE_WORDS: [&str; 58] = [
    "Cable",
    "Calibration",
    "Carrier",
    "Cascode",
    "Cathode",
    "Cell",
    "Channel",
    "Choke",
    "Clamp",
    "Clock",
    "Coax",
    "Coil",
    "Collector",
    "Comparator",
    "Connector",
    "Contact",
    "Control",
    "Converter",
    "Core",
    "Coupling",
    "Crystal",
    "Gain",
    "Gap",
    "Gate",
    "Generator",
    "Grid",
    "Guard",
    "Gyrator",
    "Lamp",
    "Laser",
    "Latch",
    "Lead",
    "Leak",
    "Led",
    "Level",
    "Limiter",
    "Line",
    "Link",
    "Load",
    "Loop",
    "Loudspeaker",
    "Rail",
    "Ratio",
    "Receiver",
    "Rectifier",
    "Reed",
    "Ref",
    "Reference",
    "Regulator",
    "Relay",
    "Reset",
    "Resonator",
    "Return",
    "Ring",
    "Rotor",
    "Yoke",
    "Zener",
    "Zero",
];

/// The trade word that a name begins with, as a word of its own (`Load`, `Load2`, `LineIn`).
pub(crate) fn trade_word(name: &str) -> Option<&'static str> {
    TRADE_WORDS.iter().copied().find(|word| {
        name.get(..word.len()).is_some_and(|head| head.eq_ignore_ascii_case(word))
            && !name[word.len()..].starts_with(|c: char| c.is_ascii_lowercase())
    })
}

/// A name without those of the blocks around it.
pub(crate) fn local(name: &str) -> &str {
    name.rsplit('.').next().unwrap_or(name)
}

/// The class that a name's first letter tells, if it may.
pub(crate) fn class_of_letter(name: &str) -> Option<Class> {
    let name = local(name);
    if trade_word(name).is_some() {
        return None;
    }
    Some(match name.chars().next()? {
        'R' => Class::Resistor,
        'C' => Class::Capacitor,
        'L' => Class::Inductor,
        'G' => Class::Conductance,
        'Z' => Class::Impedance,
        'Y' => Class::Admittance,
        _ => return None,
    })
}

/// True for names like `C1`: a class's letter and a number.
pub(crate) fn looks_like_element(name: &str) -> bool {
    class_of_letter(name).is_some() && local(name)[1..].starts_with(|c: char| c.is_ascii_digit())
}

/// The known name nearest to a typo: at most one slip, two in long names, or other capitals.
pub(crate) fn nearest<'n>(
    typed: &str,
    known: impl IntoIterator<Item = &'n str>,
) -> Option<&'n str> {
    let allowed = if typed.len() > 5 { 2 } else { 1 };
    known
        .into_iter()
        .filter(|name| *name != typed)
        .filter(|name| name.len().abs_diff(typed.len()) <= allowed)
        .filter_map(|name| {
            let slips = if name.eq_ignore_ascii_case(typed) { 0 } else { distance(typed, name) };
            // A single letter is near to every other one, which tells nothing.
            (slips <= allowed && (typed.len().max(name.len()) > 1 || slips == 0))
                .then_some((slips, name))
        })
        .min()
        .map(|(_, name)| name)
}

/// Slips between two words: insertions, deletions, replacements and swaps of neighbours
/// (the optimal string alignment distance of Damerau 1964).
fn distance(left: &str, right: &str) -> usize {
    let left: Vec<char> = left.chars().collect();
    let right: Vec<char> = right.chars().collect();
    let width = right.len() + 1;
    let mut table = vec![0; (left.len() + 1) * width];
    for row in 0..=left.len() {
        for column in 0..width {
            table[row * width + column] = if row == 0 {
                column
            } else if column == 0 {
                row
            } else {
                let replaced = usize::from(left[row - 1] != right[column - 1]);
                let mut best = (table[(row - 1) * width + column] + 1)
                    .min(table[row * width + column - 1] + 1)
                    .min(table[(row - 1) * width + column - 1] + replaced);
                if row > 1
                    && column > 1
                    && left[row - 1] == right[column - 2]
                    && left[row - 2] == right[column - 1]
                {
                    best = best.min(table[(row - 2) * width + column - 2] + 1);
                }
                best
            };
        }
    }
    table[left.len() * width + right.len()]
}

/// A key that sorts names as people do: digits compare as numbers (`R2` before `R10`).
pub(crate) fn natural_key(name: &str) -> Vec<(u8, usize, String)> {
    let mut key: Vec<(u8, usize, String)> = Vec::new();
    let mut rest = name;
    while !rest.is_empty() {
        let digits = rest.bytes().take_while(u8::is_ascii_digit).count();
        let end = if digits > 0 {
            digits
        } else {
            rest.find(|c: char| c.is_ascii_digit()).unwrap_or(rest.len())
        };
        let (chunk, after) = rest.split_at(end);
        if digits > 0 {
            let number = chunk.trim_start_matches('0');
            key.push((0, number.len(), number.to_owned()));
        } else {
            key.push((1, 0, chunk.to_owned()));
        }
        rest = after;
    }
    // `R01` and `R1` are two names: the written form decides last.
    key.push((0, 0, name.to_owned()));
    key
}
