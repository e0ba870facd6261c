//! Idealisations of textbooks are found with the smallest set of limits (closed forms, from memory).

use super::Bench;
use cofactor::circuit::Circuit;
use cofactor::typeset::answer::check::step_text;

const INVERTING: &str =
    "in > R1 > m > R2 > out\nopamp U1: plus ground, minus m, output out, gain = A0\n";
const FOLLOWER: &str = "opamp U1: plus in, minus out, output out, gain = A0\n";
const EMITTER: &str =
    "bjt Q1: base in, collector out, emitter e, gm, rpi, ro\nout > RC > ground\ne > RE > ground\n";
const SOURCE: &str =
    "mosfet M1: gate in, drain out, source e, gm, ro\nout > RD > ground\ne > RS > ground\n";
const DIFFERENCE: &str = "in > R1 > p > R2 > ground\nground > R3 > m > R4 > out\n\
                          opamp U1: plus p, minus m, output out\n";
const DIVIDER: &str = "in > R1 > out > R2 > ground\nout > C1 > ground\n";
const TWIN: &str =
    "in > R1 > a > R2 > out\na > C3 > ground\nin > C1 > b > C2 > out\nb > R3 > ground\n";
const LADDER: &str = "in > R1 > a > R2 > out\na > C1 > ground\nout > C2 > ground\n";
const MILLER: &str = "in > R1 > a > C1 > ground\na > Cc > out\nground > current I2 = -gm2*V(a) > out\n\
                      out > R2 > ground\n";
const MIRROR: &str = "ground > current Iin > a\n\
                      bjt Q1: base a, collector a, emitter ground, gm, rpi\n\
                      bjt Q2: base a, collector out, emitter ground, gm, rpi\n\
                      out > voltage Vs = 0 V > ground\n";

/// Circuit, query, claim, and the least set.
const FOUND: [(&str, &str, &str, &str); 36] = [
    (INVERTING, "V(out) / Vin", "-R2/R1", "A0 to infinity"),
    (INVERTING, "impedance(m, ground)", "0", "A0 to infinity"),
    (INVERTING, "V(out) / Vin", "0", "A0 to 0"),
    (
        "m > R1 > ground\nm > R2 > out\nopamp U1: plus in, minus m, output out, gain = A0\n",
        "V(out) / Vin",
        "1 + R2/R1",
        "A0 to infinity",
    ),
    (FOLLOWER, "V(out) / Vin", "1", "A0 to infinity"),
    (
        "in > R1 > m > R2 > out\nopamp U1: plus ground, minus m, output out, gain = A0, rin, rout\nout > RL > ground\n",
        "V(out) / Vin",
        "-R2/R1",
        "A0 to infinity",
    ),
    (
        "in > R1 > m > C1 > out\nopamp U1: plus ground, minus m, output out, gain = A0\n",
        "V(out) / Vin",
        "-1/(s*R1*C1)",
        "A0 to infinity",
    ),
    (
        "in > R1 > m > C1 > out\nopamp U1: plus ground, minus m, output out, gain = A0\n",
        "V(out) / Vin",
        "-A0",
        "s to 0",
    ),
    (
        "in > R1 > m > R2 > out\nopamp U1: plus ground, minus m, output out, gain = wt/s\n",
        "V(out) / Vin",
        "-R2/R1",
        "wt to infinity",
    ),
    (
        "in > R1 > m > R2 > out\nopamp U1: plus ground, minus m, output out, gain = A0/(1 + s/wp)\n",
        "V(out) / Vin",
        "-R2/R1",
        "A0 to infinity",
    ),
    (
        "in > R1 > x > R2 > y > C2 > ground\nx > C1 > out\nopamp U1: plus y, minus out, output out, gain = A0\n",
        "V(out) / Vin",
        "1/(1 + s*C2*(R1 + R2) + s^2*R1*R2*C1*C2)",
        "A0 to infinity",
    ),
    (DIVIDER, "V(out) / Vin", "R2/(R1 + R2)", "s to 0"),
    (DIVIDER, "V(out) / Vin", "R2/(R1 + R2)", "C1 to 0"),
    (DIVIDER, "V(out) / Vin", "1/(1 + s*R1*C1)", "R2 to infinity"),
    (DIVIDER, "V(out) / Vin", "1/(s*R1*C1)", ""),
    (DIVIDER, "V(out) / Vin", "1", "R1 to 0"),
    (DIVIDER, "impedance(in, ground)", "R1 + R2", "s to 0"),
    (EMITTER, "V(out) / Vin", "-Q1.gm*RC/(1 + Q1.gm*RE)", "Q1.rpi to infinity, Q1.ro to infinity"),
    (EMITTER, "V(out) / Vin", "-RC/RE", "Q1.gm to infinity"),
    (EMITTER, "V(out) / Vin", "-Q1.gm*(Q1.ro || RC)", "RE to 0"),
    (EMITTER, "V(out) / Vin", "-Q1.gm*RC", "RE to 0, Q1.ro to infinity"),
    (EMITTER, "impedance(in, ground)", "Q1.rpi", "RE to 0"),
    (
        "bjt Q1: base in, collector ground, emitter out, gm, rpi\nout > RE > ground\n",
        "V(out) / Vin",
        "1",
        "Q1.gm to infinity",
    ),
    (
        "bjt Q1: base in, collector ground, emitter out, gm, rpi\nout > RE > ground\n",
        "impedance(in, ground)",
        "RE*Q1.gm*Q1.rpi + Q1.rpi + RE",
        "",
    ),
    (SOURCE, "V(out) / Vin", "-M1.gm*RD/(1 + M1.gm*RS)", "M1.ro to infinity"),
    (SOURCE, "V(out) / Vin", "-RD/RS", "M1.gm to infinity"),
    (SOURCE, "V(out) / Vin", "-M1.gm*(M1.ro || RD)", "RS to 0"),
    (DIFFERENCE, "V(out) / Vin", "R4/R3", "R2/R1 = R4/R3"),
    (DIFFERENCE, "V(out) / Vin", "R2/R1", "R4/R2 = R3/R1"),
    (TWIN, "V(out) / Vin", "1", "s to 0"),
    (LADDER, "V(out) / Vin", "1/(1 + s*R1*C1)", "C2 to 0"),
    (LADDER, "V(out) / Vin", "1/((1 + s*R1*C1)*(1 + s*R2*C2))", ""),
    (LADDER, "V(out) / Vin", "1/(1 + 3*s*R1*C1 + s^2*R1^2*C1^2)", "R2 = R1, C2 = C1"),
    (MILLER, "V(out) / Vin", "-gm2*R2", "s to 0"),
    (
        MILLER,
        "V(out) / Vin",
        "-gm2*R2/(1 + s*R1*(C1 + Cc) + s*Cc*R2*(1 + gm2*R1) + s^2*R1*R2*C1*Cc)*(1 - s*Cc/gm2)",
        "",
    ),
    (MIRROR, "I(Vs) / Iin", "-Q2.gm/Q1.gm", "Q1.rpi to infinity, Q2.rpi to infinity"),
];

fn sets(circuit: &Circuit, judgement: &cofactor::analysis::check::Judgement) -> Vec<Vec<String>> {
    let set = |steps: &Vec<_>| steps.iter().map(|step| step_text(circuit, step)).collect();
    judgement.limits.iter().map(set).collect()
}

#[test]
fn the_least_limits_are_found() {
    let mut found = 0;
    for (text, query, claim, expected) in FOUND {
        let text = format!("in > voltage Vin > ground\n{text}ask H = {query}\n");
        let text = if query.contains("Iin") {
            text.replace("in > voltage Vin > ground\n", "")
        } else {
            text
        };
        let mut bench = Bench::new(&text);
        let judgement = bench.judge(&format!("H = {claim}"));
        let judgement = judgement.unwrap_or_else(|why| panic!("{claim}: {why}\n{text}"));
        let sets = sets(&bench.circuit, &judgement);
        if expected.is_empty() {
            assert!(sets.is_empty(), "{claim} of\n{text}: {sets:?}");
            continue;
        }
        let mut wanted: Vec<&str> = expected.split(", ").collect();
        wanted.sort_unstable();
        let is_wanted = |set: &Vec<String>| {
            let mut set: Vec<&str> = set.iter().map(String::as_str).collect();
            set.sort_unstable();
            set == wanted
        };
        assert!(sets.iter().any(is_wanted), "{claim} of\n{text}: {sets:?}, not {expected}");
        assert!(sets.iter().all(|set| set.len() == wanted.len()), "{sets:?}");
        found += 1;
    }
    assert!(found >= 30, "{found} idealisations");
}

#[test]
fn no_limit_is_taken_of_what_a_claim_keeps() {
    let text = format!("in > voltage Vin > ground\n{DIVIDER}ask H = V(out) / Vin\n");
    let mut bench = Bench::new(&text);
    assert_eq!(bench.verdict("H = 1/(1 + R1/R2 + 2*s*R1*C1)"), "different");
    assert_eq!(bench.verdict("H = R2/R1"), "different");
    assert_eq!(bench.verdict("H = 2"), "different");
}
