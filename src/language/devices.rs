//! The table of devices: roles, parameters, and the elements that each kind expands into.
//!
//! A device is a small-signal network between its terminals. Each row of `parts` makes one element,
//! if the parameter that it hangs on was written. A `split` puts an inner node behind a terminal:
//! with `rb` all parts but `rb` itself sit at the inner base. Signs follow the passive sign
//! convention: a transconductance drives its current from `plus` to `minus` through the device.

use crate::circuit::Unit;

/// One kind of device.
#[derive(Debug)]
pub(crate) struct Kind {
    /// The word in the file.
    pub(crate) word: &'static str,
    /// Terminals, all of one node each.
    pub(crate) roles: &'static [&'static str],
    /// Parameters and their units.
    pub(crate) parameters: &'static [(&'static str, Unit)],
    /// Parameters that need another one.
    pub(crate) needs: &'static [(&'static str, &'static str)],
    /// Inner nodes.
    pub(crate) splits: &'static [Split],
    /// Elements.
    pub(crate) parts: &'static [Part],
}

/// An inner node behind a terminal.
#[derive(Debug)]
pub(crate) struct Split {
    /// The parameter that makes it.
    pub(crate) parameter: &'static str,
    /// The terminal that it stands behind.
    pub(crate) terminal: &'static str,
    /// The inner node is named `DEVICE.suffix`.
    pub(crate) suffix: &'static str,
}

/// An element of the expansion.
#[derive(Debug)]
pub(crate) struct Part {
    /// When it exists.
    pub(crate) when: When,
    /// What it is.
    pub(crate) law: PartLaw,
    /// First node.
    pub(crate) plus: Pin,
    /// Second node.
    pub(crate) minus: Pin,
}

/// When a part exists; the element bears the device's name alone where `Whole` is said.
#[derive(Clone, Copy, Debug)]
pub(crate) enum When {
    /// The parameter was written; the element is named `DEVICE.parameter`.
    Given(&'static str),
    /// The parameter was written; the element is named like the device.
    GivenWhole(&'static str),
    /// The parameter was not written; the element is named like the device.
    Missing(&'static str),
}

/// The law of a part; its value is the parameter in [`When`].
#[derive(Clone, Copy, Debug)]
pub(crate) enum PartLaw {
    /// v = R·i.
    Resistor,
    /// i = s·C·v.
    Capacitor,
    /// i = g·v between these pins.
    CurrentBy(Pin, Pin),
    /// v = gain·v between these pins.
    VoltageBy(Pin, Pin),
    /// Norator at the part, nullator between these pins.
    Nullor(Pin, Pin),
}

/// A node that a part is tied to.
#[derive(Clone, Copy, Debug)]
pub(crate) enum Pin {
    /// The terminal, or the inner node behind it if there is one.
    At(&'static str),
    /// The terminal itself.
    Outer(&'static str),
    /// The reference node.
    Ground,
}

use Pin::{At, Ground, Outer};
use When::{Given, GivenWhole, Missing};

const fn part(when: When, law: PartLaw, plus: Pin, minus: Pin) -> Part {
    Part { when, law, plus, minus }
}

/// Kinds that can be built.
pub(crate) const KINDS: [Kind; 2] = [
    Kind {
        word: "opamp",
        roles: &["plus", "minus", "output"],
        parameters: &[("gain", Unit::ONE), ("rin", Unit::OHM), ("rout", Unit::OHM)],
        needs: &[("rin", "gain"), ("rout", "gain")],
        splits: &[Split { parameter: "rout", terminal: "output", suffix: "out" }],
        parts: &[
            part(Missing("gain"), PartLaw::Nullor(At("plus"), At("minus")), At("output"), Ground),
            part(
                GivenWhole("gain"),
                PartLaw::VoltageBy(At("plus"), At("minus")),
                At("output"),
                Ground,
            ),
            part(Given("rin"), PartLaw::Resistor, At("plus"), At("minus")),
            part(Given("rout"), PartLaw::Resistor, At("output"), Outer("output")),
        ],
    },
    Kind {
        word: "bjt",
        roles: &["base", "collector", "emitter"],
        parameters: &[
            ("gm", Unit::SIEMENS),
            ("rpi", Unit::OHM),
            ("ro", Unit::OHM),
            ("rb", Unit::OHM),
            ("rmu", Unit::OHM),
            ("Cpi", Unit::FARAD),
            ("Cmu", Unit::FARAD),
        ],
        needs: &[],
        splits: &[Split { parameter: "rb", terminal: "base", suffix: "base" }],
        parts: &[
            part(
                Given("gm"),
                PartLaw::CurrentBy(At("base"), At("emitter")),
                At("collector"),
                At("emitter"),
            ),
            part(Given("rpi"), PartLaw::Resistor, At("base"), At("emitter")),
            part(Given("ro"), PartLaw::Resistor, At("collector"), At("emitter")),
            part(Given("rb"), PartLaw::Resistor, Outer("base"), At("base")),
            part(Given("rmu"), PartLaw::Resistor, At("base"), At("collector")),
            part(Given("Cpi"), PartLaw::Capacitor, At("base"), At("emitter")),
            part(Given("Cmu"), PartLaw::Capacitor, At("base"), At("collector")),
        ],
    },
];

/// Kinds that the language has and that are not built yet.
const LATER: [&str; 8] =
    ["nullor", "transformer", "gyrator", "mutual", "mosfet", "jfet", "triode", "diode"];

/// The row of a kind.
pub(crate) fn kind(word: &str) -> Option<&'static Kind> {
    KINDS.iter().find(|kind| kind.word == word)
}

/// True for kinds that the language has and that are not built yet.
pub(crate) fn is_later(word: &str) -> bool {
    LATER.contains(&word)
}

/// True for the word of any kind.
pub(crate) fn is_kind(word: &str) -> bool {
    kind(word).is_some() || is_later(word)
}

/// The words of all kinds.
pub(crate) fn kinds() -> impl Iterator<Item = &'static str> {
    KINDS.iter().map(|kind| kind.word).chain(LATER)
}
