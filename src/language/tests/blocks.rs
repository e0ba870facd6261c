//! Own blocks: names inside, parameters, nesting, bounds and refusals.

use super::{builds, circuit, codes, ratio, refuses};
use crate::circuit::SymbolRole;
use crate::language::read;
use pretty_assertions::assert_eq;

const SECTION: &str = "block section(a, b; R, C)\n  a > R > b > C > ground\nend\n";

#[test]
fn blocks_are_put_in_with_names_of_their_own() {
    builds(
        &format!(
            "{SECTION}use section S1: a in, b n1\nuse section S2: a n1, b out, R = 10 kΩ, C = 2*S1.C"
        ),
        &[
            "S1.R: in n1 Z S1.R",
            "S1.C: n1 ground Y (s*S1.C)",
            "S2.R: n1 out Z S2.R",
            "S2.C: out ground Y (s*2*S1.C)",
        ],
    );
    let circuit = circuit(&format!("{SECTION}use section S1: a in, b n1, R = 10 kΩ"));
    let symbol = circuit.symbol("S1.R").map(|id| circuit[id].nominal.clone());
    assert_eq!(symbol, Some(Some(ratio(10_000, 1))));
    assert_eq!(circuit.elements[0].line, 2);
}

#[test]
fn what_a_block_owns_gets_its_name() {
    builds(
        "block stage(a, b; gain, Rx = 2*R0)\na > R1 = Rx > x > R2 = k*Rx > GND\nlet k = 3\n\
         x > L1 > ground\nb > L2 > ground\nmutual M1: inductors L1 L2\n\
         b > current Ic = gm*V(x, a) + gain*I(R1) > ground\n\
         opamp U1: plus x, minus b, output b, gain = gain\n\
         b > R3 = U1.gain*R1 > ground\nend\n\
         use stage S1: a in, b out, gain = 1e5",
        &[
            "S1.R1: in S1.x Z (2*R0)",
            "S1.R2: S1.x ground Z (S1.k*(2*R0))",
            "S1.L1: S1.x ground Z (s*S1.L1)",
            "S1.L2: out ground Z (s*S1.L2)",
            "S1.M1: ground ground couples S1.L1 S1.L2 by S1.M1",
            "S1.Ic: out ground i = gm*V(S1.x, in) + S1.gain*I(S1.R1)",
            "S1.U1: out ground v = S1.gain*V(S1.x, out)",
            "S1.R3: out ground Z (S1.gain*(2*R0))",
        ],
    );
}

#[test]
fn blocks_may_use_blocks_and_be_used_before() {
    builds(
        "use two T: a in, b out, R = 5 Ω\nblock two(a, b; R)\nuse one A: a a, b m, R\n\
         use one B: a m, b b, R = 2*R\nend\nblock one(a, b; R = 1k)\na > R > b\nend\nin > C1 > ground",
        &["T.A.R: in T.m Z T.A.R", "T.B.R: T.m out Z (2*T.R)", "C1: in ground Y (s*C1)"],
    );
    let circuit = circuit("block one(a; g)\na > R1 = 1/g > ground\nend\nuse one S: a in, g = 5 mS");
    let symbol = circuit.symbol("S.g").map(|id| (circuit[id].role, circuit[id].nominal.clone()));
    assert_eq!(symbol, Some((SymbolRole::DeviceParameter, Some(ratio(5, 1000)))));
    assert!(
        circuit.symbol("S.g").is_some_and(|id| circuit[id].unit == crate::circuit::Unit::SIEMENS)
    );
}

#[test]
fn blocks_have_their_own_messages() {
    let check = |line: &str, code: &str, column: u32, says: &str| {
        refuses(&format!("{SECTION}{line}"), code, (4, column), says);
    };
    check("use section S1: a in", "missing-role", 13, "`b`");
    check("use section S1: a in, b out, Q = 5", "unknown-item", 30, "parameters: R, C");
    check("use section S1: a in, b out, RR = 5", "unknown-item", 30, "`R`");
    check("use section S1: a in, a in, b out", "duplicate", 23, "twice");
    check("use section S1: a in, b out, R, R", "duplicate", 33, "twice");
    check("use section S1: a in x, b out", "role", 17, "one node");
    check("use section S1: a 0, b out", "bad-node", 19, "`ground`");
    check("use sektion S1: a in, b out", "unknown-block", 5, "`section`");
    check("use filter S1: a in, b out", "unknown-block", 5, "define it");
    check("use section S1: a in, b out, at 1 mA", "bias", 33, "block");
    check("use section S1: a in, b out, C = 5 Ω", "wrong-unit", 34, "`F`");
    let taken = format!("{SECTION}use section R1: a in, b out\nin > R1 > out");
    refuses(&taken, "duplicate", (5, 6), "a device");
    check("end", "block-end", 1, "closes no block");
    check("block x(a; b)\na > R1 > ground", "block-end", 7, "never closed");
    check("block x(a; a)\na > R1 > ground\nend", "duplicate", 12, "twice");
    check("block section(a)\na > R1 > ground\nend", "duplicate", 7, "second block");
    refuses("block x(a)\nask H = V(a)\nend", "block-statement", (2, 1), "no place");
    refuses("block x(a)\nblock y(a)\nend", "block-statement", (2, 1), "no place");
    refuses("block x(a)\na > R.1 > ground\nend\nuse x S: a in", "bad-name", (2, 5), "dot");
    refuses(
        "block x(a; R)\na > R = 5 > ground\nend\nuse x S: a in",
        "block-parameter",
        (2, 5),
        "default",
    );
    refuses("block x(a)\na > foo > ground\nend\nuse x S: a in", "no-class", (2, 5), "class");
    refuses("block x(a)\nuse x S: a a\nend", "circular", (2, 5), "uses itself");
    let two = "block x(a)\nuse y S: a a\nend\nblock y(a)\nuse x S: a a\nend\nuse x S: a in";
    refuses(two, "circular", (5, 5), "uses itself");
    let labels = read("block x(a)\na > R1 = 5 nF > ground\nend\nuse x S: a in");
    assert_eq!(labels.diagnostics[0].labels[0].text, "used here");
}

#[test]
fn growth_and_nesting_are_bounded() {
    let chain = |levels: usize, uses: usize| -> String {
        let mut text = "block b0(a)\na > R1 > ground\nend\n".to_owned();
        for level in 1..=levels {
            text += &format!("block b{level}(a)\n");
            for copy in 0..uses {
                text += &format!("use b{} S{copy}: a a\n", level - 1);
            }
            text += "end\n";
        }
        text + &format!("use b{levels} S: a in\nask Z = impedance(in, ground)\n")
    };
    let doubling = read(&chain(60, 2));
    assert_eq!(codes(&doubling), ["too-large"]);
    let deep = read(&chain(10_000, 1));
    assert_eq!(codes(&deep), ["nesting"]);
    assert_eq!(circuit(&chain(90, 1)).elements.len(), 1);
    assert_eq!(circuit(&chain(8, 2)).elements.len(), 256);
}
