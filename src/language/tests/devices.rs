//! Devices: their expansions, their numbers at a bias, couplings, and their refusals.

use super::{builds, circuit, codes, ratio, refuses};
use crate::circuit::Number;
use crate::language::read;
use pretty_assertions::assert_eq;

#[test]
fn ideal_blocks_expand_by_their_table() {
    builds("nullor X1: nullator a b, norator c ground", &["X1: c ground nullor a b"]);
    builds(
        "transformer T1: primary p ground, secondary s1 s2, ratio = n",
        &["T1: p ground ratio n to s1 s2"],
    );
    builds(
        "transformer T1: primary p ground, secondary s1 s2, ratio = 4",
        &["T1: p ground ratio T1.ratio to s1 s2"],
    );
    builds(
        "gyrator X1: port1 a ground, port2 b ground, conductance",
        &["X1: a ground gyrates X1.conductance to b ground"],
    );
    builds(
        "mutual M1: inductors L1 L2\na > L1 > ground\nb > L2 > ground",
        &[
            "M1: ground ground couples L1 L2 by M1",
            "L1: a ground Z (s*L1)",
            "L2: b ground Z (s*L2)",
        ],
    );
}

#[test]
fn amplifying_devices_expand_by_their_table() {
    builds(
        "mosfet M1: gate g, drain d, source x, gm, ro, Cgs, Cgd",
        &[
            "M1.gm: d x i = M1.gm*V(g, x)",
            "M1.ro: d x Z M1.ro",
            "M1.Cgs: g x Y (s*M1.Cgs)",
            "M1.Cgd: g d Y (s*M1.Cgd)",
        ],
    );
    builds(
        "mosfet M1: gate g, drain d, source x, bulk ground, gm = gm, gmb, Cdb, Csb",
        &[
            "M1.gm: d x i = gm*V(g, x)",
            "M1.gmb: d x i = M1.gmb*V(ground, x)",
            "M1.Cdb: d ground Y (s*M1.Cdb)",
            "M1.Csb: x ground Y (s*M1.Csb)",
        ],
    );
    builds(
        "jfet J1: gate g, drain d, source x, gm, ro, Cgs, Cgd",
        &[
            "J1.gm: d x i = J1.gm*V(g, x)",
            "J1.ro: d x Z J1.ro",
            "J1.Cgs: g x Y (s*J1.Cgs)",
            "J1.Cgd: g d Y (s*J1.Cgd)",
        ],
    );
    builds(
        "triode V1: grid g, plate p, cathode k, mu, rp, Cgk, Cgp, Cpk",
        &[
            "V1.mu: p k i = (V1.mu*V1.rp^-1)*V(g, k)",
            "V1.rp: p k Z V1.rp",
            "V1.Cgk: g k Y (s*V1.Cgk)",
            "V1.Cgp: g p Y (s*V1.Cgp)",
            "V1.Cpk: p k Y (s*V1.Cpk)",
        ],
    );
    builds(
        "triode V1: grid g, plate p, cathode k, gm, rp",
        &["V1.gm: p k i = V1.gm*V(g, k)", "V1.rp: p k Z V1.rp"],
    );
    builds(
        "diode D1: anode a, cathode ground, rd, Cd",
        &["D1.rd: a ground Z D1.rd", "D1.Cd: a ground Y (s*D1.Cd)"],
    );
}

#[test]
fn a_bias_gives_numbers_and_shot_noise() {
    let circuit = circuit(
        "bjt Q1: base b, collector c, emitter e, at 1 mA, beta = 100, VA = 50 V, rb = 10\n\
         diode D1: anode b, cathode ground, at 2 mA, Cd",
    );
    let number = |name: &str| circuit.symbol(name).and_then(|id| circuit[id].nominal.clone());
    // V_T = k·T/q at 300 K with the SI's k and q, by hand: 414.1947e-23/1.602176634e-19 V.
    let volts = ratio(4_141_947, 1) / ratio(160_217_663_400, 1) * ratio(1000, 1);
    let amperes = ratio(1, 1000);
    assert_eq!(number("Q1.gm"), Some(&amperes / &volts));
    assert_eq!(number("Q1.rpi"), Some(ratio(100, 1) * &volts / &amperes));
    assert_eq!(number("Q1.ro"), Some(ratio(50_000, 1)));
    assert_eq!(number("D1.rd"), Some(volts / ratio(2, 1000)));
    let shots: Vec<(&str, &str, &str, Number)> = circuit
        .shots
        .iter()
        .map(|shot| {
            let (plus, minus) = (&circuit[shot.plus].name, &circuit[shot.minus].name);
            (shot.name.as_str(), plus.as_str(), minus.as_str(), shot.current.clone())
        })
        .collect();
    let expected = [
        ("Q1.collector", "c", "e", ratio(1, 1000)),
        ("Q1.base", "Q1.base", "e", ratio(1, 100_000)),
        ("D1.anode", "b", "ground", ratio(2, 1000)),
    ];
    assert_eq!(shots, expected);
}

#[test]
fn slopes_are_noiseless_and_bodies_are_not() {
    let circuit = circuit(
        "block x(a)\na > R1 > ground\nend\nuse x S: a b\n\
         bjt Q1: base b, collector c, emitter e, gm, rb, rpi, ro, rmu\n\
         opamp U1: plus b, minus c, output d, gain = A0, rin, rout\n\
         triode V1: grid b, plate c, cathode e, mu, rp\ndiode D1: anode b, cathode c, rd\nc > R2 > e",
    );
    let names: Vec<&str> = circuit.noiseless.iter().map(|id| circuit[*id].name.as_str()).collect();
    let expected = ["Q1.rpi", "Q1.ro", "Q1.rmu", "U1.rin", "U1.rout", "V1.rp", "D1.rd"];
    assert_eq!(names, expected);
}

#[test]
fn a_bias_makes_what_its_numbers_allow() {
    builds("bjt Q1: base b, collector c, emitter e, at 1 mA", &["Q1.gm: c e i = Q1.gm*V(b, e)"]);
    builds(
        "let B = 100\nbjt Q1: base b, collector c, emitter e, at 1 mA, beta = 2*B, gm = gx",
        &["Q1.gm: c e i = gx*V(b, e)", "Q1.rpi: b e Z Q1.rpi"],
    );
    let warm = circuit("temperature 600 K\ndiode D1: anode a, cathode ground, at 1 A");
    let cold = circuit("diode D1: anode a, cathode ground, at 1 A");
    let double = cold.symbols[0].nominal.clone().map(|number| number * ratio(2, 1));
    assert_eq!(warm.symbols[0].nominal, double);
    let written = circuit("diode D1: anode a, cathode ground, at 1 A, rd = 5");
    assert_eq!(written.symbols[0].nominal, Some(ratio(5, 1)));
}

#[test]
fn couplings_get_their_numbers() {
    let check = |coils: (&str, &str), parameter: &str, expected: Option<Number>, notes: &[&str]| {
        let (first, second) = coils;
        let reading = read(&format!(
            "a > L1{first} > ground\nb > L2{second} > ground\nmutual M1: inductors L1 L2{parameter}\n\
             ask Z = impedance(a, b)"
        ));
        assert_eq!(codes(&reading), notes, "{parameter}");
        let circuit = reading.circuit.unwrap_or_default();
        let found = circuit.symbol("M1").and_then(|id| circuit[id].nominal.clone());
        assert_eq!(found, expected, "{parameter}");
    };
    let coils = (" = 4 mH", " = 9 mH");
    check(coils, ", factor = 0.5", Some(ratio(3, 1000)), &[]);
    check(coils, ", factor = -1", Some(ratio(-6, 1000)), &[]);
    check(coils, ", inductance = 2 mH", Some(ratio(2, 1000)), &[]);
    check(coils, "", None, &[]);
    check((" = 4 mH", " = L1"), ", factor = 0.5", Some(ratio(2, 1000)), &[]);
    check(("", " = 9 mH"), ", factor = 0.5", None, &["no-number"]);
    // √2 (from memory), to thirty digits.
    let digits: num_bigint::BigInt = "141421356237309504880168872421".parse().unwrap_or_default();
    let root = Number::from(digits) / Number::from(num_bigint::BigInt::from(10).pow(29));
    check((" = 1 H", " = 2 H"), ", factor = 1", Some(root), &["rounded"]);
}

#[test]
fn devices_have_their_own_messages() {
    let check = |line: &str, code: &str, column: u32, says: &str| {
        refuses(&format!("a > R1 > b\n{line}"), code, (2, column), says);
    };
    check("opamp U1: plus a, minus b", "missing-role", 7, "output");
    check("opamp U1: plus a, minus b, output c, rin", "needs", 38, "gain");
    check("opamp U1: plus a, minus b, output c, rout = 50", "needs", 38, "gain");
    check("opamp U1: plus a, minus b, output c, gian = A0", "unknown-item", 38, "`gain`");
    check("opamp U1: plus a, plus b, output c", "duplicate", 19, "twice");
    check("opamp U1: plus a b, minus b, output c", "role", 11, "one node");
    check("opamp U1: plus V+, minus b, output c", "bad-node", 16, "`Vp`");
    check("opamp R1: plus a, minus b, output c", "duplicate", 7, "element");
    check("opamp U1 plus a, minus b, output c", "syntax", 10, "`:`");
    check("opmap U1: plus a, minus b, output c", "unknown-kind", 1, "`opamp`");
    check("opamp U1: plus a, minus b, output c, at 1 mA", "bias", 41, "bjt");
    check("bjt Q1: base a, collector b, emitter ground", "no-parameters", 5, "gm");
    check("bjt Q1: base a, collector b, emitter ground, gm = 2 nF", "wrong-unit", 51, "`S`");
    check("bjt Q1: base a, collector b, emitter ground, gm, gm", "duplicate", 50, "twice");
    check("bjt Q1: base a, collector b, emitter ground, gm, beta = 9", "needs", 50, "at 1 mA");
    check("bjt Q1: base a, collector b, emitter ground, at 1 V", "wrong-unit", 49, "`A`");
    check("bjt Q1: base a, collector b, emitter ground, at -1 mA", "bias", 49, "above 0");
    check("bjt Q1: base a, collector b, emitter ground, at 1 A, at 1 A", "duplicate", 57, "twice");
    check("bjt Q1: base a, collector b, emitter ground, at 1 A, beta", "bias", 54, "number");
    check("bjt Q1: base a, collector b, emitter ground, at 1 A, beta = x", "bias", 54, "number");
    check("bjt Q1: base a, collector b, emitter ground, at 1 A, VA = 1 A", "wrong-unit", 59, "`V`");
    check("nullor X1: nullator a, norator b ground", "role", 12, "two nodes");
    check("nullor X1: nullator a b, norator b ground, gain", "unknown-item", 44, "none");
    check("transformer T1: primary a ground, secondary b ground", "no-parameters", 13, "ratio");
    check("transformer T1: primary a ground, ratio = n", "missing-role", 13, "secondary");
    check("gyrator X1: port1 a ground, port2 b ground, conductance = 5 Ω", "wrong-unit", 59, "`S`");
    check("mosfet M1: gate a, drain b, source ground, gm, gmb", "needs", 48, "bulk node");
    check("mosfet M1: gate a, drain b, source ground, gm, Csb", "needs", 48, "at the source");
    check("mosfet M1: gate a, drain b, source ground, gm, Cdb", "needs", 48, "at the source");
    check("triode V1: grid a, plate b, cathode ground, mu = 20", "needs", 45, "`rp = …`");
    check("triode V1: grid a, plate b, cathode ground, mu, gm, rp", "either", 49, "leave one");
    check("mutual M1: inductors L1", "role", 12, "two inductors");
    check("mutual M1: factor = 1", "missing-role", 8, "inductors");
    check("mutual M1: inductors R1 R1", "inductors", 22, "no inductor");
    let coil = "a > L1 > ground\nmutual M1: inductors L1";
    refuses(&format!("{coil} L3"), "unknown-element", (2, 25), "`L1`");
    refuses(&format!("{coil} L1"), "inductors", (2, 25), "itself");
    let coils = "a > L1 = 1 H > ground\nb > L2 = 1 H > ground\n";
    let couples = |rest: &str, code: &str, column: u32, says: &str| {
        refuses(&format!("{coils}mutual M1: inductors L1 L2, {rest}"), code, (3, column), says);
    };
    couples("factor = 1.01", "coupling", 38, "between -1 and 1");
    couples("factor = k", "coupling", 29, "is a number");
    couples("inductance = 1.1 H", "coupling", 8, "too large");
    couples("inductance = 1 H, factor = 1", "either", 47, "leave one");
    couples("inductance = 1 F", "wrong-unit", 42, "`H`");
    let current = format!("{coils}mutual M1: inductors L1 L2\nask Y = I(M1) / V(a)");
    refuses(&current, "unknown-element", (4, 11), "several currents");
}
