//! The table of devices: roles, parameters, and the elements that each kind expands into.
//!
//! A device is a small-signal network between its terminals, at a bias point. Each row of `parts` makes
//! one element, if the parameter that it hangs on was written. A `split` puts an inner node behind a terminal:
//! with `rb` all parts but `rb` itself sit at the inner base. Signs follow the passive sign
//! convention: a transconductance drives its current from `plus` to `minus` through the device.
//! The models are drawn and their sources named in `docs/devices.md`.

use crate::circuit::{Class, Unit};

/// One kind of device.
#[derive(Debug)]
pub(crate) struct Kind {
    /// The word in the file.
    pub(crate) word: &'static str,
    /// Terminals.
    pub(crate) roles: &'static [Role],
    /// Parameters and their units.
    pub(crate) parameters: &'static [(&'static str, Unit)],
    /// Numbers that only serve the bias, and their units.
    pub(crate) numbers: &'static [(&'static str, Unit)],
    /// What needs something else.
    pub(crate) needs: &'static [Need],
    /// Pairs of parameters of which only one may be written.
    pub(crate) either: &'static [(&'static str, &'static str)],
    /// Inner nodes.
    pub(crate) splits: &'static [Split],
    /// Elements.
    pub(crate) parts: &'static [Part],
    /// Nominal values that the bias gives; empty where `at` means nothing.
    pub(crate) nominals: &'static [Nominal],
    /// Shot noise that the bias gives.
    pub(crate) shots: &'static [ShotRow],
}

/// A terminal, or a pair of them.
#[derive(Debug)]
pub(crate) struct Role {
    /// The word in the file.
    pub(crate) word: &'static str,
    /// What follows it.
    pub(crate) takes: Takes,
    /// The terminal whose node it has where it is not written.
    pub(crate) default: Option<&'static str>,
}

/// What a role takes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Takes {
    /// One node.
    Node,
    /// Two nodes.
    Port,
    /// The names of two inductors.
    Inductors,
}

/// Something that makes no sense without something else.
#[derive(Debug)]
pub(crate) struct Need {
    /// The parameter or number.
    pub(crate) parameter: &'static str,
    /// A parameter, a terminal or `at`.
    pub(crate) needed: &'static str,
    /// Why.
    pub(crate) reason: &'static str,
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
    /// Always; the element is named like the device.
    Always,
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
    /// v = R·i, a body that makes thermal noise.
    Resistor,
    /// v = r·i, the slope of a characteristic.
    Slope,
    /// i = s·C·v.
    Capacitor,
    /// i = g·v between these pins.
    CurrentBy(Pin, Pin),
    /// i = (µ/r)·v between these pins; r is that parameter.
    CurrentByOver(Pin, Pin, &'static str),
    /// v = gain·v between these pins.
    VoltageBy(Pin, Pin),
    /// Norator at the part, nullator between these pins.
    Nullor(Class, Pin, Pin),
    /// Primary at the part, secondary between these pins.
    Transformer(Pin, Pin),
    /// Port 1 at the part, port 2 between these pins.
    Gyrator(Pin, Pin),
}

/// A node that a part is tied to.
#[derive(Clone, Copy, Debug)]
pub(crate) enum Pin {
    /// The terminal, or the inner node behind it if there is one.
    At(&'static str),
    /// The terminal itself.
    Outer(&'static str),
    /// The second node of a pair.
    Second(&'static str),
    /// The reference node.
    Ground,
}

/// A nominal value by the bias current I and the thermal voltage V_T = k·T/q.
#[derive(Debug)]
pub(crate) struct Nominal {
    /// The parameter; the bias makes it exist.
    pub(crate) parameter: &'static str,
    /// A number of the device that it needs; without it the parameter is not made.
    pub(crate) factor: Option<&'static str>,
    /// The formula.
    pub(crate) formula: Formula,
}

/// How a nominal value follows from the bias; a missing factor counts as 1.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Formula {
    /// I / V_T.
    CurrentOverThermal,
    /// factor · V_T / I.
    ThermalOverCurrent,
    /// factor / I.
    OverCurrent,
}

/// Shot noise of a junction.
#[derive(Debug)]
pub(crate) struct ShotRow {
    /// The terminal that names it.
    pub(crate) terminal: &'static str,
    /// The other end.
    pub(crate) other: &'static str,
    /// The bias current is divided by this number, and unknown without it.
    pub(crate) over: Option<&'static str>,
}

use Pin::{At, Ground, Outer, Second};
use When::{Always, Given, GivenWhole, Missing};

const fn part(when: When, law: PartLaw, plus: Pin, minus: Pin) -> Part {
    Part { when, law, plus, minus }
}

const fn slope(parameter: &'static str, plus: &'static str, minus: &'static str) -> Part {
    part(Given(parameter), PartLaw::Slope, At(plus), At(minus))
}

const fn capacitor(parameter: &'static str, plus: &'static str, minus: &'static str) -> Part {
    part(Given(parameter), PartLaw::Capacitor, At(plus), At(minus))
}

const fn node(word: &'static str) -> Role {
    Role { word, takes: Takes::Node, default: None }
}

const fn port(word: &'static str) -> Role {
    Role { word, takes: Takes::Port, default: None }
}

/// A kind with nothing in it, to be filled.
const EMPTY: Kind = Kind {
    word: "",
    roles: &[],
    parameters: &[],
    numbers: &[],
    needs: &[],
    either: &[],
    splits: &[],
    parts: &[],
    nominals: &[],
    shots: &[],
};

const IDEAL: &str = "an ideal op-amp has none";
const TIED: &str = "without it the bulk is at the source";
const NO_BIAS: &str = "it only gives numbers at a bias";

/// All kinds.
pub(crate) const KINDS: [Kind; 10] = [
    Kind {
        word: "opamp",
        roles: &[node("plus"), node("minus"), node("output")],
        parameters: &[("gain", Unit::ONE), ("rin", Unit::OHM), ("rout", Unit::OHM)],
        needs: &[
            Need { parameter: "rin", needed: "gain", reason: IDEAL },
            Need { parameter: "rout", needed: "gain", reason: IDEAL },
        ],
        splits: &[Split { parameter: "rout", terminal: "output", suffix: "out" }],
        parts: &[
            part(
                Missing("gain"),
                PartLaw::Nullor(Class::Opamp, At("plus"), At("minus")),
                At("output"),
                Ground,
            ),
            part(
                GivenWhole("gain"),
                PartLaw::VoltageBy(At("plus"), At("minus")),
                At("output"),
                Ground,
            ),
            slope("rin", "plus", "minus"),
            part(Given("rout"), PartLaw::Slope, At("output"), Outer("output")),
        ],
        ..EMPTY
    },
    Kind {
        word: "nullor",
        roles: &[port("nullator"), port("norator")],
        parts: &[part(
            Always,
            PartLaw::Nullor(Class::Nullor, At("nullator"), Second("nullator")),
            At("norator"),
            Second("norator"),
        )],
        ..EMPTY
    },
    Kind {
        word: "transformer",
        roles: &[port("primary"), port("secondary")],
        parameters: &[("ratio", Unit::ONE)],
        parts: &[part(
            GivenWhole("ratio"),
            PartLaw::Transformer(At("secondary"), Second("secondary")),
            At("primary"),
            Second("primary"),
        )],
        ..EMPTY
    },
    Kind {
        word: "gyrator",
        roles: &[port("port1"), port("port2")],
        parameters: &[("conductance", Unit::SIEMENS)],
        parts: &[part(
            GivenWhole("conductance"),
            PartLaw::Gyrator(At("port2"), Second("port2")),
            At("port1"),
            Second("port1"),
        )],
        ..EMPTY
    },
    Kind {
        word: "mutual",
        roles: &[Role { word: "inductors", takes: Takes::Inductors, default: None }],
        parameters: &[("inductance", Unit::HENRY), ("factor", Unit::ONE)],
        either: &[("inductance", "factor")],
        ..EMPTY
    },
    Kind {
        word: "bjt",
        roles: &[node("base"), node("collector"), node("emitter")],
        parameters: &[
            ("gm", Unit::SIEMENS),
            ("rpi", Unit::OHM),
            ("ro", Unit::OHM),
            ("rb", Unit::OHM),
            ("rmu", Unit::OHM),
            ("Cpi", Unit::FARAD),
            ("Cmu", Unit::FARAD),
        ],
        numbers: &[("beta", Unit::ONE), ("VA", Unit::VOLT)],
        needs: &[
            Need { parameter: "beta", needed: "at", reason: NO_BIAS },
            Need { parameter: "VA", needed: "at", reason: NO_BIAS },
        ],
        splits: &[Split { parameter: "rb", terminal: "base", suffix: "base" }],
        parts: &[
            part(
                Given("gm"),
                PartLaw::CurrentBy(At("base"), At("emitter")),
                At("collector"),
                At("emitter"),
            ),
            slope("rpi", "base", "emitter"),
            slope("ro", "collector", "emitter"),
            part(Given("rb"), PartLaw::Resistor, Outer("base"), At("base")),
            slope("rmu", "base", "collector"),
            capacitor("Cpi", "base", "emitter"),
            capacitor("Cmu", "base", "collector"),
        ],
        nominals: &[
            Nominal { parameter: "gm", factor: None, formula: Formula::CurrentOverThermal },
            Nominal {
                parameter: "rpi",
                factor: Some("beta"),
                formula: Formula::ThermalOverCurrent,
            },
            Nominal { parameter: "ro", factor: Some("VA"), formula: Formula::OverCurrent },
        ],
        shots: &[
            ShotRow { terminal: "collector", other: "emitter", over: None },
            ShotRow { terminal: "base", other: "emitter", over: Some("beta") },
        ],
        ..EMPTY
    },
    Kind {
        word: "mosfet",
        roles: &[
            node("gate"),
            node("drain"),
            node("source"),
            Role { word: "bulk", takes: Takes::Node, default: Some("source") },
        ],
        parameters: &[
            ("gm", Unit::SIEMENS),
            ("gmb", Unit::SIEMENS),
            ("ro", Unit::OHM),
            ("Cgs", Unit::FARAD),
            ("Cgd", Unit::FARAD),
            ("Cdb", Unit::FARAD),
            ("Csb", Unit::FARAD),
        ],
        needs: &[
            Need { parameter: "gmb", needed: "bulk", reason: TIED },
            Need { parameter: "Cdb", needed: "bulk", reason: TIED },
            Need { parameter: "Csb", needed: "bulk", reason: TIED },
        ],
        parts: &[
            part(
                Given("gm"),
                PartLaw::CurrentBy(At("gate"), At("source")),
                At("drain"),
                At("source"),
            ),
            part(
                Given("gmb"),
                PartLaw::CurrentBy(At("bulk"), At("source")),
                At("drain"),
                At("source"),
            ),
            slope("ro", "drain", "source"),
            capacitor("Cgs", "gate", "source"),
            capacitor("Cgd", "gate", "drain"),
            capacitor("Cdb", "drain", "bulk"),
            capacitor("Csb", "source", "bulk"),
        ],
        ..EMPTY
    },
    Kind {
        word: "jfet",
        roles: &[node("gate"), node("drain"), node("source")],
        parameters: &[
            ("gm", Unit::SIEMENS),
            ("ro", Unit::OHM),
            ("Cgs", Unit::FARAD),
            ("Cgd", Unit::FARAD),
        ],
        parts: &[
            part(
                Given("gm"),
                PartLaw::CurrentBy(At("gate"), At("source")),
                At("drain"),
                At("source"),
            ),
            slope("ro", "drain", "source"),
            capacitor("Cgs", "gate", "source"),
            capacitor("Cgd", "gate", "drain"),
        ],
        ..EMPTY
    },
    Kind {
        word: "triode",
        roles: &[node("grid"), node("plate"), node("cathode")],
        parameters: &[
            ("mu", Unit::ONE),
            ("gm", Unit::SIEMENS),
            ("rp", Unit::OHM),
            ("Cgk", Unit::FARAD),
            ("Cgp", Unit::FARAD),
            ("Cpk", Unit::FARAD),
        ],
        needs: &[Need {
            parameter: "mu",
            needed: "rp",
            reason: "the plate current is (mu v_gk + v_pk)/rp",
        }],
        either: &[("mu", "gm")],
        parts: &[
            part(
                Given("mu"),
                PartLaw::CurrentByOver(At("grid"), At("cathode"), "rp"),
                At("plate"),
                At("cathode"),
            ),
            part(
                Given("gm"),
                PartLaw::CurrentBy(At("grid"), At("cathode")),
                At("plate"),
                At("cathode"),
            ),
            slope("rp", "plate", "cathode"),
            capacitor("Cgk", "grid", "cathode"),
            capacitor("Cgp", "grid", "plate"),
            capacitor("Cpk", "plate", "cathode"),
        ],
        ..EMPTY
    },
    Kind {
        word: "diode",
        roles: &[node("anode"), node("cathode")],
        parameters: &[("rd", Unit::OHM), ("Cd", Unit::FARAD)],
        parts: &[slope("rd", "anode", "cathode"), capacitor("Cd", "anode", "cathode")],
        nominals: &[Nominal {
            parameter: "rd",
            factor: None,
            formula: Formula::ThermalOverCurrent,
        }],
        shots: &[ShotRow { terminal: "anode", other: "cathode", over: None }],
        ..EMPTY
    },
];

/// The row of a kind.
pub(crate) fn kind(word: &str) -> Option<&'static Kind> {
    KINDS.iter().find(|kind| kind.word == word)
}

/// True for the word of any kind.
pub(crate) fn is_kind(word: &str) -> bool {
    kind(word).is_some()
}

/// The words of all kinds.
pub(crate) fn kinds() -> impl Iterator<Item = &'static str> {
    KINDS.iter().map(|kind| kind.word)
}

impl Kind {
    /// The words of its roles.
    pub(crate) fn role_words(&self) -> impl Iterator<Item = &'static str> {
        self.roles.iter().map(|role| role.word)
    }

    /// The place of a role.
    pub(crate) fn role(&self, word: &str) -> Option<usize> {
        self.roles.iter().position(|role| role.word == word)
    }

    /// The place of a parameter.
    pub(crate) fn parameter(&self, word: &str) -> Option<usize> {
        self.parameters.iter().position(|(own, _)| *own == word)
    }

    /// All that may be given with `=`.
    pub(crate) fn words(&self) -> impl Iterator<Item = &'static str> {
        self.parameters.iter().chain(self.numbers).map(|(word, _)| *word)
    }

    /// Whether a device of this kind does something without any parameter.
    pub(crate) fn works_alone(&self) -> bool {
        self.word == "mutual"
            || self.parts.iter().any(|part| matches!(part.when, Missing(_) | Always))
    }
}
