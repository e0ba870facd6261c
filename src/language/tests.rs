//! Every refusal of the language is a row here, and so is every thing that it accepts beside it.

mod blocks;
mod claims;
mod devices;

use super::{Reading, Severity, band, line_and_column, parse_expression, query, read, render};
use crate::circuit::{Circuit, Drive, Law, Number, Probe, Quantity, SymbolRole, Unit, Value};
use num_bigint::BigInt;
use pretty_assertions::assert_eq;

fn codes(reading: &Reading) -> Vec<&'static str> {
    reading.diagnostics.iter().map(|diagnostic| diagnostic.code).collect()
}

/// The circuit of a text without errors.
fn circuit(text: &str) -> Circuit {
    let reading = read(text);
    let errors: Vec<String> = reading
        .diagnostics
        .iter()
        .filter(|diagnostic| diagnostic.severity == Severity::Error)
        .map(|diagnostic| render(diagnostic, text, "t", false))
        .collect();
    assert!(errors.is_empty(), "{text}\n{}", errors.join("\n"));
    reading.circuit.unwrap_or_default()
}

/// `text` is refused with `code` at `line:column`, and a line of help or the message holds `says`.
fn refuses(text: &str, code: &str, place: (u32, u32), says: &str) {
    let reading = read(text);
    assert!(reading.circuit.is_none(), "accepted: {text}");
    let Some(fault) = reading.diagnostics.iter().find(|fault| fault.code == code) else {
        panic!("{text}: {:?} {:#?}", codes(&reading), reading.diagnostics);
    };
    assert_eq!(line_and_column(text, fault.span.start), place, "{text}: {fault:?}");
    let words = format!("{} {}", fault.message, fault.help.join(" "));
    assert!(words.contains(says), "{text}: {words}");
}

/// A walk with one value is refused.
fn refuses_value(value: &str, code: &str, says: &str) {
    refuses(&format!("in > R1 = {value} > ground"), code, (1, 11), says);
}

fn nominal(value: &str) -> Number {
    let circuit = circuit(&format!("in > {value} > ground"));
    circuit.symbols[0].nominal.clone().unwrap_or_else(|| panic!("{value} has no number"))
}

fn ratio(numerator: i64, denominator: i64) -> Number {
    Number::new(BigInt::from(numerator), BigInt::from(denominator))
}

#[test]
fn quantities_are_exact() {
    let check = |value: &str, numerator, denominator| {
        assert_eq!(nominal(value), ratio(numerator, denominator), "{value}");
    };
    check("R1 = 10 kΩ", 10_000, 1);
    check("R1 = 10kΩ", 10_000, 1);
    check("R1 = 10k", 10_000, 1);
    check("R1 = 10 kohm", 10_000, 1);
    check("R1 = 10 k\u{2126}", 10_000, 1);
    check("R1 = 0.1", 1, 10);
    check("R1 = .5 Ohm", 1, 2);
    check("R1 = 1.5e3", 1500, 1);
    check("R1 = 1e-3 Ω", 1, 1000);
    check("R1 = 10 m", 1, 100);
    check("R1 = 10 MΩ", 10_000_000, 1);
    check("C1 = 4.7 nF", 47, 10_000_000_000);
    check("C1 = 4.7 \u{b5}F", 47, 10_000_000);
    check("C1 = 4.7 \u{3bc}F", 47, 10_000_000);
    check("C1 = 4.7uF", 47, 10_000_000);
    check("R1 = 4k7", 4700, 1);
    check("R1 = 4K7", 4700, 1);
    check("R1 = 2R2", 22, 10);
    check("R1 = 47R", 47, 1);
    check("R1 = 0R47", 47, 100);
    check("C1 = 3u3", 33, 10_000_000);
    check("R1 = -5 kΩ", -5000, 1);
    check("G1 = 2 mS", 2, 1000);
    check("L1 = 10 \u{a0}µH", 1, 100_000);
}

#[test]
fn tolerances_are_absolute_and_keep_their_text() {
    let check = |value: &str, low: Number, high: Number, text: &str| {
        let circuit = circuit(&format!("in > {value} > ground"));
        let Some(tolerance) = &circuit.symbols[0].tolerance else { panic!("{value}") };
        assert_eq!((&tolerance.low, &tolerance.high), (&low, &high), "{value}");
        assert_eq!(tolerance.text, text);
    };
    check("R1 = 10 kΩ ± 1 %", ratio(-100, 1), ratio(100, 1), "1 %");
    check("R1 = 10k +/- 1%", ratio(-100, 1), ratio(100, 1), "1 %");
    check(
        "C1 = 10 pF ± 0.5 pF",
        ratio(-5, 10_000_000_000_000),
        ratio(5, 10_000_000_000_000),
        "0.5 pF",
    );
    check("C1 = 10 uF -20 % +80 %", ratio(-2, 1_000_000), ratio(8, 1_000_000), "-20 % +80 %");
}

#[test]
fn slips_in_quantities_have_their_own_messages() {
    refuses_value("1meg", "meg", "`1M`");
    refuses_value("1 Meg", "meg", "`1M`");
    refuses_value("10K", "capital-k", "`10 k`");
    refuses_value("10 KΩ", "capital-k", "`10 kΩ`");
    refuses_value("4,7 k", "decimal-comma", "`4.7`");
    refuses_value("10 000", "digit-groups", "`10000`");
    refuses_value("10 nF", "wrong-unit", "`F`");
    refuses_value("10 kg", "unknown-unit", "prefixes");
    refuses_value("1e999999999", "number-range", "exponent");
    refuses_value("1e99999999999999999999999999", "number-range", "exponent");
    refuses_value("10 UH", "unknown-unit", "micro");
    refuses("in > R1 = 10 kΩ ± 1 > ground", "tolerance", (1, 17), "± 1 %");
    refuses("in > R1 = 10 kΩ ± 1 nF > ground", "wrong-unit", (1, 17), "tolerance");
    refuses("in > C1 = 4R7 > ground", "wrong-unit", (1, 11), "F");
}

#[test]
fn slips_in_expressions_have_their_own_messages() {
    let check = |value: &str, code: &str, column: u32, says: &str| {
        refuses(&format!("in > Z1 = {value} > ground"), code, (1, column), says);
    };
    check("Ra Rb", "space-product", 11, "`Ra*Rb`");
    check("2*Ra Rb", "space-product", 13, "`Ra*Rb`");
    check("2Ra", "unknown-unit", 11, "prefixes");
    check("Rb + 2Ra", "number-letter", 16, "`2*Ra`");
    check("Rb + 4k7", "number-letter", 16, "let x = 4k7");
    check("Ra**2", "power-stars", 13, "`^`");
    check("Ra^x", "power", 14, "integer");
    check("Ra^0.5", "power", 14, "integer");
    check("Ra^9999999999", "power", 14, "integer");
    check("f(Ra)", "no-function", 11, "`f*(…)`");
    check("sqrt(Ra)", "no-function", 11, "let");
    check("Ra + j*Rb", "reserved", 16, "write `s`");
    check("w*La", "reserved", 11, "write `s`");
    check("Ra/0", "zero-divisor", 14, "zero");
    check("(Ra || Rb*2)", "mixed-parallel", 12, "`(Ra || Rb)*2` or `Ra || (Rb*2)`");
    check("(2*Ra || Rb)", "mixed-parallel", 12, "`2*(Ra || Rb)` or `(2*Ra) || Rb`");
    check("(Ra || Rb^2)", "mixed-parallel", 12, "`(Ra || Rb)^2` or `Ra || (Rb^2)`");
    check("(Ra", "parenthesis", 11, "`)`");
    check("Ra)", "syntax", 13, "no `(`");
    check("Ra +", "syntax", 16, "an expression");
    check("impedance(a, b)", "query-in-value", 11, "ask");
    check("Ra + V", "reserved", 16, "V(node)");
    refuses(
        "let x = a/b c\nin > R1 = x > ground",
        "space-after-slash",
        (1, 9),
        "`a/(b*c)` or `(a/b)*c`",
    );
}

#[test]
fn walks_have_their_own_messages() {
    refuses(
        "x > R1 > C1 > y",
        "element-as-node",
        (1, 10),
        "C1` looks like an element; put a node between",
    );
    refuses("x > Rf > Cf > y", "element-as-node", (1, 10), "put a node between");
    refuses("voltage Vin > ground", "element-as-node", (1, 1), "begins at a node");
    refuses("in > R1", "walk-end", (1, 6), "ends at a node");
    refuses("in > R1 > x > voltage Vx", "walk-end", (1, 15), "ends at a node");
    refuses("in > R1 > 0", "bad-node", (1, 11), "`ground`");
    refuses("V+ > R1 > ground", "bad-node", (1, 1), "`Vp`");
    refuses("x > R1 > in-", "bad-node", (1, 10), "`in_n`");
    refuses("x > R1 > in-\nx > R2 > ground", "bad-node", (1, 10), "`in_n`");
    refuses("a > Vin > ground", "no-class", (1, 5), "`voltage Vin`");
    refuses("a > Iin > ground", "no-class", (1, 5), "`current Iin`");
    refuses("a > r1 > ground", "no-class", (1, 5), "`resistor r1`");
    refuses("a > Load > ground", "no-class", (1, 5), "`resistor Load`");
    refuses("a > LineIn > ground", "no-class", (1, 5), "trade");
    refuses("a > resister R1 > ground", "unknown-class", (1, 5), "`resistor R1`");
    refuses("a > opamp U1 > ground", "unknown-class", (1, 5), "line of its own");
    refuses("a > R1 > b\na > R1 > c", "duplicate", (2, 5), "already names an element");
    refuses("a > Rin > b\nb > Rx > Rin", "duplicate", (2, 10), "already names an element");
    refuses("Rx > R1 > b\na > Rx > b", "duplicate", (2, 5), "already names a node");
    refuses("let R1 = 5 kΩ\na > R1 > b", "duplicate", (2, 5), "parameter");
    refuses("a > wire W1 > b", "wire", (1, 5), "a > wire > b");
    refuses("a > wire || R1 > b", "wire", (1, 5), "a > wire > b");
    refuses("R1 = 10k", "unknown-statement", (1, 1), "two nodes");
    refuses("aks H = V(out)", "unknown-statement", (1, 1), "`ask`");
    refuses("é > R1 > b", "unexpected-character", (1, 1), "Latin");
    refuses("a > R1 > b > \u{20ac}", "unexpected-character", (1, 14), "Latin");
    refuses("a > voltage V > ground", "reserved", (1, 13), "word of the language");
    refuses("a > resistor s > ground", "reserved", (1, 14), "word of the language");
}

#[test]
fn sources_have_their_own_messages() {
    let base = "in > voltage Vin > ground\nin > R1 > b\nb > R2 > ground\n";
    let check = |line: &str, code: &str, column: u32, says: &str| {
        refuses(&format!("{base}{line}"), code, (4, column), says);
    };
    check("b > voltage Vb = k*Vin > ground", "source-in-value", 20, "`V(in)`");
    check("b > voltage Vb = k > ground", "source-value", 18, "V(…)");
    check("b > current Ib = g*V(in) + h > ground", "source-value", 28, "every term");
    check("b > current Ib = V(in)*V(b) > ground", "not-linear", 18, "linear");
    check("b > current Ib = g/V(in) > ground", "not-linear", 20, "linear");
    check("b > current Ib = g*V(inn) > ground", "unknown-node", 22, "`in`");
    check("b > current Ib = g*I(R9) > ground", "unknown-element", 22, "`R1`");
    check("b > current Ib = 2*V(in) > ground", "wrong-unit", 18, "`S`");
    check("b > R3 = g*V(in) > ground", "access", 12, "current");
    check("b > R3 = Vin > ground", "source-in-value", 10, "`V(in)`");
    check("b > voltage Vx = 5 A > ground", "wrong-unit", 18, "`V`");
    check("b > resistor Vin > ground", "duplicate", 14, "element");
}

#[test]
fn values_have_their_own_messages() {
    refuses("a > R1 = R2 > b > R2 = R1 > ground", "circular", (1, 5), "R1 > R2 > R1");
    refuses("a > R1 = R1 > b", "circular", (1, 5), "R1 > R1");
    refuses("a > R1 = s*La > b", "s-in-value", (1, 5), "impedance");
    refuses("a > R1 > b > C1 > c > Z1 = R1*C1 + R1 > d", "unit-mismatch", (1, 36), "`s` and `Ω`");
    refuses("a > R1 > b > Z1 = R1 + 5 > d", "unit-mismatch", (1, 24), "`Ω` and `1`");
    refuses(
        "let tau = 750 us\na > R1 > b > Z1 = tau > d",
        "wrong-unit",
        (2, 19),
        "`s` and must be in `Ω`",
    );
    refuses("let x = 5 mV\nlet x = 6 mV", "duplicate", (2, 5), "already defined");
    refuses("let s = 5", "reserved", (1, 5), "word of the language");
    refuses("a > R1 = Q1.gm > b", "unknown-name", (1, 10), "no device `Q1`");
}

#[test]
fn questions_have_their_own_messages() {
    let base = "in > voltage Vin > ground\nin > R1 > out > R2 > ground\n";
    let check = |line: &str, code: &str, column: u32, says: &str| {
        refuses(&format!("{base}{line}"), code, (3, column), says);
    };
    check("ask H = V(outt) / Vin", "unknown-node", 11, "`out`");
    check("ask H = V(out) / Vi", "unknown-source", 18, "`Vin`");
    check("ask H = V(out) / out", "unknown-source", 18, "V(out)");
    check("ask H = V(out) / R1", "unknown-source", 18, "I(R1)");
    check("ask H = 2*V(out) / Vin", "no-query", 9, "a query is");
    check("ask R1 = V(out) / Vin", "ask-name", 5, "another name");
    let twice = format!("{base}ask H = V(out)\nask H = V(in)");
    refuses(&twice, "duplicate", (4, 5), "second");
    check("ask Z = impedance(in)", "arguments", 9, "two nodes");
    check("ask Z = impedance(in, in)", "empty-port", 9, "one node");
    check("ask H = v(out) / Vin", "no-function", 9, "`V(…)`");
    check("ask Z = impedance(in, ground) from Vin", "from", 36, "leave");
    check("ask s = V(out) / Vin", "reserved", 5, "");
    check("ask H = V(0) / Vin", "unknown-node", 11, "`ground`");
    let two = "a > voltage Va > ground\nb > voltage Vb > ground\na > R1 > x > R2 > b\n";
    refuses(&format!("{two}ask H = V(x)/V(x, b)"), "several-sources", (4, 9), "from Va");
    refuses("a > R1 > ground\nask H = V(a)", "no-source", (2, 9), "nothing drives");
    refuses("band 1 MHz to 10 Hz", "band", (1, 6), "lower");
    refuses("band 0 Hz to 10 Hz", "band", (1, 6), "above 0");
    refuses("band 1 s to 10 Hz", "wrong-unit", (1, 6), "hertz");
    refuses("temperature 20 C", "temperature-unit", (1, 13), "kelvin");
}

#[test]
fn every_code_is_explained() {
    let sources = [
        include_str!("ask.rs"),
        include_str!("bias.rs"),
        include_str!("blocks.rs"),
        include_str!("build.rs"),
        include_str!("claim.rs"),
        include_str!("claim_file.rs"),
        include_str!("claim_target.rs"),
        include_str!("latex/mod.rs"),
        include_str!("latex/reader.rs"),
        include_str!("definitions.rs"),
        include_str!("expand.rs"),
        include_str!("expression.rs"),
        include_str!("fault.rs"),
        include_str!("parse.rs"),
        include_str!("quantity.rs"),
        include_str!("queries.rs"),
        include_str!("scope.rs"),
        include_str!("sources.rs"),
        include_str!("symbols.rs"),
        include_str!("units.rs"),
        include_str!("walks.rs"),
        include_str!("warnings.rs"),
    ];
    let mut used: Vec<&str> = sources
        .iter()
        .flat_map(|source| {
            let calls = [
                "Diagnostic::error(",
                "Diagnostic::warning(",
                "Diagnostic::notice(",
                "self.error(",
                "fault(",
            ];
            calls.into_iter().flat_map(|call| source.split(call).skip(1))
        })
        .filter_map(|rest| rest.trim_start().strip_prefix('"')?.split('"').next())
        .filter(|code| !code.contains(' '))
        .collect();
    used.sort_unstable();
    used.dedup();
    let explained: Vec<&str> = super::CODES.iter().map(|(code, ..)| *code).collect();
    assert_eq!(explained, used);
}

#[test]
fn the_page_of_diagnostics_is_current() {
    use std::fmt::Write;
    let mut page = "# Diagnostics of the reader\n\n\
                    Each finding bears a code, which stays the same. This page is made from the list \
                    of codes by a test:\n`UPDATE_EXPECT=1 cargo test --lib page_of_diagnostics` writes it anew.\n\n\
                    | code | cause | remedy |\n| --- | --- | --- |\n"
        .to_owned();
    for (code, cause, remedy) in super::CODES {
        let escaped = |text: &str| text.replace('|', "\\|");
        // Writing into a string cannot fail.
        let _ = writeln!(page, "| `{code}` | {} | {} |", escaped(cause), escaped(remedy));
    }
    expect_test::expect_file!["../../docs/diagnostics.md"].assert_eq(&page);
}

/// The values of all elements, as text with the symbols' names.
fn laws(circuit: &Circuit) -> Vec<String> {
    circuit
        .elements
        .iter()
        .map(|element| {
            let control = |controls: &[crate::circuit::Control]| {
                let list: Vec<String> = controls
                    .iter()
                    .map(|control| {
                        let quantity = match control.quantity {
                            Quantity::Voltage(a, b) => {
                                format!("V({}, {})", circuit[a].name, circuit[b].name)
                            }
                            Quantity::Current(x) => format!("I({})", circuit[x].name),
                        };
                        format!("{}*{quantity}", show(circuit, &control.gain))
                    })
                    .collect();
                list.join(" + ")
            };
            let law = match &element.law {
                Law::Impedance(value) => format!("Z {}", show(circuit, value)),
                Law::Admittance(value) => format!("Y {}", show(circuit, value)),
                Law::VoltageSource => "voltage".to_owned(),
                Law::CurrentSource => "current".to_owned(),
                Law::ControlledVoltage(controls) => format!("v = {}", control(controls)),
                Law::ControlledCurrent(controls) => format!("i = {}", control(controls)),
                Law::Nullor(a, b) => format!("nullor {} {}", circuit[*a].name, circuit[*b].name),
                Law::Transformer { ratio, secondary: (a, b) } => {
                    let (a, b) = (&circuit[*a].name, &circuit[*b].name);
                    format!("ratio {} to {a} {b}", show(circuit, ratio))
                }
                Law::Gyrator { conductance, second: (a, b) } => {
                    let (a, b) = (&circuit[*a].name, &circuit[*b].name);
                    format!("gyrates {} to {a} {b}", show(circuit, conductance))
                }
                Law::Mutual { first, second, inductance } => {
                    let (a, b) = (&circuit[*first].name, &circuit[*second].name);
                    format!("couples {a} {b} by {}", show(circuit, inductance))
                }
            };
            let (plus, minus) = (&circuit[element.plus].name, &circuit[element.minus].name);
            format!("{}: {plus} {minus} {law}", element.name)
        })
        .collect()
}

fn show(circuit: &Circuit, value: &Value) -> String {
    let list = |values: &[Value], sign: &str| {
        let texts: Vec<String> = values.iter().map(|value| show(circuit, value)).collect();
        format!("({})", texts.join(sign))
    };
    match value {
        Value::Number(number) => number.to_string(),
        Value::Symbol(id) => circuit[*id].name.clone(),
        Value::S => "s".to_owned(),
        Value::Sum(terms) => list(terms, " + "),
        Value::Product(factors) => list(factors, "*"),
        Value::Parallel(branches) => list(branches, " || "),
        Value::Power(base, exponent) => format!("{}^{exponent}", show(circuit, base)),
        Value::Negative(inner) => format!("-{}", show(circuit, inner)),
    }
}

/// The elements of a text.
fn builds(text: &str, expected: &[&str]) {
    assert_eq!(laws(&circuit(text)), expected, "{text}");
}

#[test]
fn walks_set_signs_and_laws() {
    builds(
        "in > voltage Vin > ground\nin > R1 = 10 kΩ > x > C1 || L1 > GND",
        &[
            "Vin: in ground voltage",
            "R1: in x Z R1",
            "C1: x ground Y (s*C1)",
            "L1: x ground Z (s*L1)",
        ],
    );
    builds(
        "Ground > current Iin > in\nin>Z1>gnd",
        &["Iin: ground in current", "Z1: in ground Z Z1"],
    );
    builds("a > G1 > b > Y1 > 3", &["G1: a b Y G1", "Y1: b 3 Y Y1"]);
    builds("a > resistor Load > b", &["Load: a b Z Load"]);
    builds("a > R1 >\n  # the rest\n  b > C1 > c", &["R1: a b Z R1", "C1: b c Y (s*C1)"]);
    builds("a > Z1 = (Ra ||\n Rb) > b", &["Z1: a b Z (Ra || Rb)"]);
    builds("a > R1 = 1k ‖ R2 > b", &["R1: a b Z R1", "R2: a b Z R2"]);
    builds(
        "\u{feff}a > Rβ > b\r\nb > Rbeta2 > c\r\n",
        &["Rbeta: a b Z Rbeta", "Rbeta2: b c Z Rbeta2"],
    );
    builds("a > Z1 = Rs + s·Ls − Rp/2/k^-1^1 > b", &["Z1: a b Z (Rs + (s*Ls) + -(Rp*2^-1*k))"]);
    builds("a > Z1 = -(Ra + Rb)^2/Rc > b", &["Z1: a b Z -((Ra + Rb)^2*Rc^-1)"]);
}

#[test]
fn wires_make_one_node() {
    let circuit =
        circuit("a > R1 > b\nb > wire > c\nc > wire > ground\nd > R2 > e > wire > d2\nd2 > R3 > a");
    let names: Vec<&str> = circuit.nodes.iter().map(|node| node.name.as_str()).collect();
    assert_eq!(names, ["ground", "a", "d", "e"]);
    assert_eq!(circuit.nodes[0].aliases, ["b", "c"]);
    assert_eq!(circuit.nodes[3].aliases, ["d2"]);
}

#[test]
fn values_replace_symbols() {
    builds(
        "a > R1 > b > R2 = R1 > c > R3 = 2*R2 > d",
        &["R1: a b Z R1", "R2: b c Z R1", "R3: c d Z (2*R1)"],
    );
    builds(
        "let tau = R1 C1\na > R1 > b > C1 > c > Z1 = tau/C1 > d",
        &["R1: a b Z R1", "C1: b c Y (s*C1)", "Z1: c d Z ((R1*C1)*C1^-1)"],
    );
    let circuit = circuit("let k = 2 R\na > R1 = k > b > R2 = R1 > c");
    let names: Vec<&str> = circuit.definitions.iter().map(|known| known.name.as_str()).collect();
    assert_eq!(names, ["k", "R1", "R2"]);
}

#[test]
fn dependent_sources_are_sums() {
    let base = "b > R1 > e\np > Rsense > n\n";
    builds(
        &format!("{base}c > current Ic = gm*(V(b, e) - V(p)) + beta*I(R1) > e"),
        &[
            "R1: b e Z R1",
            "Rsense: p n Z Rsense",
            "Ic: c e i = gm*V(b, e) + -gm*V(p, ground) + beta*I(R1)",
        ],
    );
    builds(
        &format!("{base}c > voltage Va = A0/(1 + s/wp)*V(p, n) > gnd"),
        &[
            "R1: b e Z R1",
            "Rsense: p n Z Rsense",
            "Va: c ground v = (A0*(1 + (s*wp^-1))^-1)*V(p, n)",
        ],
    );
    builds(
        "a > R1 > b > voltage Vx = 0 V > ground\na > current Ix = 2*I(Vx) > ground",
        &["R1: a b Z R1", "Vx: b ground v = ", "Ix: a ground i = 2*I(Vx)"],
    );
}

#[test]
fn devices_expand_by_their_table() {
    builds("opamp U1: plus p, minus m, output o", &["U1: o ground nullor p m"]);
    builds(
        "opamp U1: plus p, minus m, output o, gain = A0, rin, rout = 50",
        &[
            "U1: U1.out ground v = A0*V(p, m)",
            "U1.rin: p m Z U1.rin",
            "U1.rout: U1.out o Z U1.rout",
        ],
    );
    builds(
        "opamp U1: plus p, minus m, output o, gain = 1e5",
        &["U1: o ground v = U1.gain*V(p, m)"],
    );
    builds(
        "bjt Q1: base b, collector c, emitter e, gm, rb = 10, rpi, Cmu",
        &[
            "Q1.gm: c e i = Q1.gm*V(Q1.base, e)",
            "Q1.rpi: Q1.base e Z Q1.rpi",
            "Q1.rb: b Q1.base Z Q1.rb",
            "Q1.Cmu: Q1.base c Y (s*Q1.Cmu)",
        ],
    );
    builds(
        "bjt Q1: base b, collector c, emitter e, gm = gm\nbjt Q2: base b, collector d, emitter e, gm = Q1.gm, ro = 1/gm",
        &["Q1.gm: c e i = gm*V(b, e)", "Q2.gm: d e i = gm*V(b, e)", "Q2.ro: d e Z (1*gm^-1)"],
    );
}

#[test]
fn symbols_stand_in_reference_order_with_units() {
    let circuit = circuit(
        "let wp\nin > voltage Vin > ground\nin > R10 > x > R2 > y > C1 > ground\ny > L1 > z > Z1 = Rz*pi + k*s*L1 > ground\n\
         bjt Q1: base y, collector z, emitter ground, gm = 2 mS\n\
         opamp U1: plus y, minus z, output z, gain = A0/(1 + s/wp)",
    );
    let listed: Vec<String> =
        circuit.symbols.iter().map(|symbol| format!("{} {}", symbol.name, symbol.unit)).collect();
    assert_eq!(
        listed,
        ["R2 Ω", "R10 Ω", "C1 F", "L1 H", "Q1.gm S", "A0 1", "Rz Ω", "k 1", "wp Hz", "pi 1"]
    );
    assert_eq!(circuit.symbols[4].role, SymbolRole::DeviceParameter);
    assert_eq!(circuit.symbols[4].nominal, Some(ratio(1, 500)));
}

#[test]
fn units_of_parameters_are_inferred() {
    let check = |text: &str, name: &str, unit: Unit| {
        let circuit = circuit(text);
        let symbol = circuit.symbols.iter().find(|symbol| symbol.name == name);
        assert_eq!(symbol.map(|symbol| symbol.unit), Some(unit), "{text}");
    };
    check("a > R1 = r*r*g > b > G1 = g > c", "r", Unit::OHM);
    check("a > C1 = tau/R1 > b > R1 > c", "tau", Unit::SECOND);
    check("let f0 = 5\na > Z1 = R1*f0/s > b > R1 > c", "f0", Unit::HERTZ);
    check("a > voltage V1 = rm*I(R1) > b > R1 > c", "rm", Unit::OHM);
    check("a > R1 = x > b > R2 = x + y > c", "y", Unit::OHM);
    check("a > R1 = x/y > b > R2 = x > c", "y", Unit::ONE);
    check("let a1 = a2\nlet a2 = q\na > R1 = a1 > b", "q", Unit::OHM);
}

#[test]
fn questions_find_their_source() {
    let base = "in > voltage Vin > ground\nin > R1 > out > R2 > ground\n";
    let ask = |extra: &str, text: &str| {
        let circuit = circuit(&format!("{base}{extra}\nask H = {text}"));
        let ask = circuit.asks[0].clone();
        (circuit, ask)
    };
    let (circuit, h) = ask("", "V(out)/Vin");
    let vin = circuit.element("Vin").map(Drive::Source);
    assert_eq!((h.text.as_str(), h.line, h.is_superposition()), ("V(out) / Vin", 4, false));
    assert_eq!(Some(h.transfers()[0].drive), vin);
    assert_eq!(h.transfers()[0].denominator, Probe::Drive);
    let (_, h) = ask("", "I(R2) / V(in)");
    assert_eq!(h.transfers()[0].unit, Unit::SIEMENS);
    let (_, h) = ask("", "Vin / I(R1)");
    assert_eq!((h.transfers()[0].numerator, h.transfers()[0].unit), (Probe::Drive, Unit::OHM));
    let second = "ground > current Ib > out";
    let (_, h) = ask(second, "V(out)");
    assert_eq!((h.transfers().len(), h.is_superposition()), (2, true));
    assert_eq!(h.transfers()[1].unit, Unit::OHM);
    let (circuit, h) = ask(second, "V(out, in) / V(out) from Ib");
    assert_eq!(Some(h.transfers()[0].drive), circuit.element("Ib").map(Drive::Source));
    // The denominator is set by one source: no `from` is needed.
    let (circuit, h) = ask(second, "V(out) / V(in)");
    assert_eq!(Some(h.transfers()[0].drive), circuit.element("Vin").map(Drive::Source));
    let (circuit, h) = ask(second, "impedance(ground, out)");
    assert_eq!(h.transfers()[0].removed, circuit.element("Ib").into_iter().collect::<Vec<_>>());
    let (_, h) = ask(second, "admittance(in, out)");
    assert_eq!((h.transfers()[0].numerator, h.transfers()[0].unit), (Probe::Drive, Unit::SIEMENS));
    assert!(h.transfers()[0].removed.is_empty());
}

#[test]
fn command_line_texts_are_read_against_the_circuit() {
    let circuit =
        circuit("in > voltage Vin > ground\nin > R1 > out > C1 > ground\nask H = V(out)/Vin");
    let name = |text: &str| query(&circuit, text).map(|ask| ask.name);
    assert_eq!(name("H"), Ok("H".to_owned()));
    assert_eq!(name("V(in) / I(R1)"), Ok("V(in) / I(R1)".to_owned()));
    let code = |text: &str| query(&circuit, text).map(|_| ()).map_err(|faults| faults[0].code);
    assert_eq!(code("V(outt)"), Err("unknown-node"));
    assert_eq!(code("G"), Err("no-query"));
    assert_eq!(code(""), Err("syntax"));
    let ends = band("10 Hz to 1 MHz").map(|band| (band.from, band.to));
    assert_eq!(ends, Ok((ratio(10, 1), ratio(1_000_000, 1))));
    assert!(band("10 Hz").is_err());
}

#[test]
fn formulas_are_read_against_the_circuit() {
    let circuit = circuit(
        "let tau = R1*C1\nin > voltage Vin > ground\nin > R1 > out > C1 > ground\nout > R2 = 2*R1 > ground\nbjt Q1: base in, collector out, emitter ground, gm",
    );
    let check = |text: &str, expected: &str| {
        let value = parse_expression(&circuit, text);
        assert_eq!(value.as_ref().map(|value| show(&circuit, value)), Ok(expected.to_owned()));
    };
    check("1/(1 + s R1 C1)", "(1*(1 + (s*R1*C1))^-1)");
    check("s C1 (R1 + R1)", "(s*C1*(R1 + R1))");
    check("Q1.gm + Q1_gm", "(Q1.gm + Q1.gm)");
    check("1 + s*tau", "(1 + (s*(R1*C1)))");
    check("R2", "(2*R1)");
    check("-R1 || (R1 + R1)", "-(R1 || (R1 + R1))");
}

#[test]
fn slips_in_formulas_have_their_own_messages() {
    let circuit = circuit("in > voltage Vin > ground\nin > R1 > out > C1 > ground");
    let check = |text: &str, code: &str, says: &str| {
        let Err(faults) = parse_expression(&circuit, text) else { panic!("{text}") };
        let words = format!("{} {}", faults[0].message, faults[0].help.join(" "));
        assert_eq!(faults[0].code, code, "{text}");
        assert!(words.contains(says), "{text}: {words}");
    };
    check("1/(1 + sR1C1)", "unknown-name", "`s R1 C1`");
    check("1/(1 + s R1 C2)", "unknown-name", "`C1`");
    check("V(out)", "access", "");
    check("1/s C1", "space-after-slash", "`1/(s*C1)` or `(1/s)*C1`");
    check("R1(1 + s)", "no-function", "`R1*(…)`");
    check("", "syntax", "end of the line");
}

#[test]
fn warnings_point_at_slips() {
    let check = |text: &str, code: &str, says: &str| {
        let reading = read(text);
        assert!(reading.circuit.is_some(), "{text}: {:?}", reading.diagnostics);
        let Some(found) = reading.diagnostics.iter().find(|found| found.code == code) else {
            panic!("{text}: {:?}", codes(&reading));
        };
        let words = format!("{} {}", found.message, found.help.join(" "));
        assert!(words.contains(says), "{text}: {words}");
    };
    check(
        "let beta\na > R1 > ground\na > R2 = beta*R1 > ground\na > R3 = bata*R1 > ground",
        "near-miss",
        "`beta`",
    );
    check("let gm\na > R1 > b > R2 > a", "unused", "gm");
    check("a > R1 > b\na > R2 > ground\na > R3 > ground", "open-end", "`R1` at node `b`");
    check("a > R1 > b\nb > wire > a", "both-ends", "R1");
    let quiet = read("a > R1 > b\na > R2 > ground\na > R3 > ground\nask Z = impedance(b, ground)");
    assert_eq!(codes(&quiet), Vec::<&str>::new());
}

#[test]
fn several_errors_are_found_in_one_run() {
    let text = "a > R1 = 10K > b\na > R2 = 4,7 k > b\nask H = V(\na > R3 > b\nband x";
    let reading = read(text);
    assert_eq!(codes(&reading), ["capital-k", "decimal-comma", "parenthesis", "syntax"]);
}

#[test]
fn marks_stand_under_the_fault() {
    let text = "a\t> R1 = 10 kΩ ± 1 % > b > R2 = 10 nF > c";
    let reading = read(text);
    expect_test::expect![[r#"
        error[wrong-unit]: `R2` is given in `F` and must be in `Ω`
         --> f:1:33
          |
        1 | a    > R1 = 10 kΩ ± 1 % > b > R2 = 10 nF > c
          |                                    ^^^^^
          |
          = help: write the value in Ω, or give it a name of another class"#]]
    .assert_eq(&render(&reading.diagnostics[0], text, "f", false));
}

#[test]
fn hostile_texts_are_answered_quickly() {
    let deep = format!("a > Z1 = {}Ra{} > b", "(".repeat(100_000), ")".repeat(100_000));
    let calls = format!("a > Z1 = {} > b", "f(".repeat(150));
    let signs = format!("a > Z1 = {}Ra > b", "-".repeat(100_000));
    let powers = format!("a > Z1 = Ra{} > b", "^1".repeat(100_000));
    let sum = format!("a > Z1 = {}Ra > b", "Ra + ".repeat(100_000));
    let chain: String =
        (1..10_000).map(|i| format!("n{i} > R{i} = R{} > n{}\n", i + 1, i + 1)).collect();
    let nested: String =
        (1..5_000).map(|i| format!("let x{} = 1/(1 + x{i})\n", i + 1)).collect::<String>()
            + "a > R1 = R2*x5000 > b";
    let doubling: String =
        (1..200).map(|i| format!("let x{} = x{i}*x{i}\n", i + 1)).collect::<String>()
            + "a > R1 = R2*x200 > b";
    let units: String = (1..200).map(|i| format!("let x{} = x{i}^1000\n", i + 1)).collect();
    // A fixed linear congruential generator (Knuth, TAOCP 2, 3.3.4) stands for random bytes.
    let mut state = 1_u64;
    let noise: Vec<u8> = (0..1_000_000)
        .map(|_| {
            state = state
                .wrapping_mul(6_364_136_223_846_793_005)
                .wrapping_add(1_442_695_040_888_963_407);
            (state >> 56) as u8
        })
        .collect();
    let noise = String::from_utf8_lossy(&noise).into_owned();
    let ascii: String = noise.bytes().map(|byte| char::from(32 + byte % 95)).collect();
    let lines: String =
        ascii.chars().enumerate().map(|(i, c)| if i % 40 == 0 { '\n' } else { c }).collect();
    for text in
        [deep, calls, signs, powers, sum, chain, nested, doubling, units, noise, ascii, lines]
    {
        let reading = read(&text);
        let shown = super::render_all(&reading.diagnostics, &text, "f", false);
        assert!(reading.circuit.is_some() || !shown.is_empty());
    }
    for text in [
        "",
        "\n",
        "#",
        "\u{feff}",
        "\"",
        "circuit \"",
        "a >",
        ">",
        "(",
        ")",
        "a > R1 = > b",
        "opamp U1:",
    ] {
        let reading = read(text);
        for diagnostic in &reading.diagnostics {
            assert!(!render(diagnostic, text, "f", false).is_empty());
        }
    }
}
