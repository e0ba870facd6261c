//! LaTeX is read as a design note has it: what the program prints, and what people write.

use super::support::beside_tests;
use super::{Bench, word};
use cofactor::language;
use cofactor::typeset::answer;
use cofactor::typeset::answer::Answer;
use cofactor::typeset::shape::Shape;

/// Every formula of `derive --format latex`, in every shape, reads back equal.
fn reads_back(text: &str, name: &str) -> usize {
    const SHAPES: [Shape; 7] = [
        Shape::Compact,
        Shape::Powers,
        Shape::Bode,
        Shape::Product,
        Shape::ByElement,
        Shape::Sections,
        Shape::Nested,
    ];
    let mut bench = Bench::new(text);
    let mut judged = 0;
    for ask in bench.circuit.asks.clone() {
        let entries = bench.entries_of(&ask.name);
        for shape in SHAPES {
            let answer = Answer { circuit: &bench.circuit, ask: &ask, entries: &entries, shape };
            let printed = answer::latex(&answer);
            let claims = language::claims(&mut bench.circuit, &printed)
                .unwrap_or_else(|faults| panic!("{name} {shape:?}: {faults:?}\n{printed}"));
            assert!(claims.len() >= entries.len(), "{name} {shape:?}:\n{printed}");
            for claim in claims {
                let unit = language::claim_units(&bench.circuit, &claim).ok();
                let entry = bench.entry(&claim.answer);
                let judgement =
                    cofactor::analysis::check::judge(&bench.circuit, &claim, entry, unit)
                        .unwrap_or_else(|error| panic!("{name} {shape:?}: {error}"));
                assert_eq!(word(judgement.verdict), "equal", "{name} {shape:?}:\n{printed}");
                judged += 1;
            }
        }
    }
    judged
}

#[test]
fn what_is_printed_reads_back() {
    let mut judged = 0;
    for form in super::forms() {
        judged += reads_back(&form.text, &form.circuit);
    }
    let examples = beside_tests("../examples");
    let mut files: Vec<_> = std::fs::read_dir(examples)
        .expect("the examples")
        .filter_map(|entry| Some(entry.ok()?.path()))
        .filter(|path| path.extension().is_some_and(|ending| ending == "circuit"))
        .collect();
    files.sort();
    for file in files {
        let text = std::fs::read_to_string(&file).expect("a file");
        judged += reads_back(&text, &file.display().to_string());
    }
    assert!(judged > 500, "{judged} formulas");
}

const SIMPLE: &str = "in > voltage Vin > ground\n\
    bjt Q1: base in, collector out, emitter ground, gm, rpi, ro\nout > RC > ground\n\
    ask H = V(out) / Vin\nask Zin = impedance(in, ground)\n";
const RC: &str = "in > voltage Vin > ground\nin > R1 = 1 k > out > C1 > ground\nout > R2 > ground\n\
    out > Cf > ground\n    ask H = V(out)/Vin\nask Zin = impedance(in, ground)\nask P = two_port(z, in ground, out ground)\n";
const PLAIN: &str = "in > voltage Vin > ground\nin > R > out > C > ground\nout > L > ground\n\
    ask H = V(out)/Vin\nask Z = impedance(out, ground)\n";
const OPAMP: &str = "in > voltage Vin > ground\nin > R1 > m > R2 > out\n\
    opamp U1: plus ground, minus m, output out, gain = A0/(1 + s/wp)\nask H = V(out)/Vin\n";

/// Circuit and claim, in the styles that people have.
const BY_HAND: [(&str, &str); 44] = [
    (RC, r"H = \frac{R_2}{R_1 + R_2 + s (C_1 + C_f) R_1 R_2}"),
    (RC, r"H = \dfrac{R_2}{R_1+R_2+sR_1R_2(C_1+C_\mathrm{f})}"),
    (
        RC,
        r"H = \tfrac{R_{2}}{R_{1}+R_{2}} \cdot \frac{1}{1 + s (C_1+C_{\text{f}}) (R_1 \parallel R_2)}",
    ),
    (RC, r"H = $\frac{R_2}{R_1+R_2}\times\frac{1}{1+s\left(C_1+C_f\right)\left(R_1\|R_2\right)}$"),
    (RC, r"H = \left(1 + \frac{R_1}{R_2} + s R_1 \left[ C_1 + C_{\mathrm{f}} \right]\right)^{-1}"),
    (RC, r"H = \frac{1}{1 + R_1/R_2 + s\,R_1\,C_1 + s\,R_1\,C_f}"),
    (RC, r"H = \frac{ 1/R_1 }{ 1/R_1 + 1/R_2 + j\omega (C_1 + C_f) }"),
    (RC, r"H = \frac{\frac1{R_1}}{\frac1{R_1}+\frac1{R_2}+s(C_1+C_f)}"),
    (
        RC,
        r"H=\frac{R_2\parallel\frac{1}{s(C_1+C_f)}}{R_1+\left(R_2\parallel\frac{1}{s(C_1+C_f)}\right)}",
    ),
    (RC, r"H = \cfrac{1}{1 + \cfrac{R_1}{R_2} + s R_1 (C_1 + C_f)}"),
    (RC, r"H = \Bigl( \bigl( 1 + \tfrac{R_1}{R_2} \bigr) + s R_1 (C_1+C_f) \Bigr)^{-1}"),
    (RC, r"Z_{in} = R_1 + \frac{R_2}{1 + s R_2 (C_1 + C_f)}"),
    (RC, r"Z_{\mathrm{in}} = R_1 + R_2 \parallel \frac{1}{s(C_1 + C_f)}"),
    (RC, r"Zin = \frac{R_1 + R_2 + s R_1 R_2 (C_1 + C_\text{f})}{1 + s R_2 (C_1 + C_\text{f})}"),
    (RC, r"z_{21} = \frac{R_2}{1 + s R_2 (C_1 + C_f)}"),
    (RC, r"p_1 = -\frac{R_1 + R_2}{R_1 R_2 (C_1 + C_f)}"),
    (PLAIN, r"H = \frac{sL}{R + sL + s^2RLC}"),
    (PLAIN, r"H = \frac{s L}{R \left( 1 + \frac{s L}{R} + s^{2} L C \right)}"),
    (PLAIN, r"H = \frac{1}{1 + sRC + \frac{R}{sL}}"),
    (PLAIN, r"H = \frac{1}{1 + R\left(sC + \frac{1}{sL}\right)}"),
    (PLAIN, r"Z = \frac{sLR}{R + sL + s^2 RLC}"),
    (PLAIN, r"Z = R \parallel sL \parallel \frac{1}{sC}"),
    (PLAIN, r"Z = \left( \frac{1}{R} + sC + \frac{1}{sL} \right)^{-1}"),
    (PLAIN, r"Z = \frac{1}{\dfrac{1}{R} + j\omega C + \dfrac{1}{j \omega L}}"),
    (PLAIN, r"\omega_0 = \frac{1}{\sqrt{LC}}"),
    (PLAIN, r"\omega_{0} = 1/\sqrt{L C}"),
    (PLAIN, r"Q = R\sqrt{\frac{C}{L}}"),
    (PLAIN, r"f_0 = \frac{1}{2\pi\sqrt{LC}}"),
    (
        OPAMP,
        r"H = -\frac{R_2}{R_1} \cdot \frac{A_0}{A_0 + (1 + \frac{s}{\omega_p})(1 + \frac{R_2}{R_1})}",
    ),
    (OPAMP, r"H = - \frac{A_0 R_2}{A_0 R_1 + (R_1 + R_2) \left(1 + s/w_p\right)}"),
    (
        OPAMP,
        r"H = -\frac{R_2}{R_1}\,\frac{1}{1+\frac{1}{A_0}\left(1+\frac{s}{\omega_{\mathrm{p}}}\right)\left(1+\frac{R_2}{R_1}\right)}",
    ),
    (OPAMP, r"H = \frac{-A_{0}\omega_{p}R_{2}}{A_{0}\omega_{p}R_{1}+(s+\omega_{p})(R_{1}+R_{2})}"),
    (
        OPAMP,
        "H = \\frac{-R_2}{R_1}\n  \\frac{A_0}{A_0 + \\left( 1 + \\frac{s}{\\omega_p} \\right) \\left( 1 + \\frac{R_2}{R_1} \\right)}",
    ),
    (OPAMP, r"H(0) = -\frac{A_0 R_2}{R_2 + (1 + A_0) R_1}"),
    (OPAMP, r"H = -\frac{R_2/R_1}{1 + \frac{(1 + R_2/R_1)(1 + s/\omega_p)}{A_0}}"),
    (
        OPAMP,
        r"H = -\frac{R_2}{R_1}\frac{1}{1 + \left(1 + \frac{R_2}{R_1}\right)\frac{1 + \frac{s}{\omega_p}}{A_0}}",
    ),
    (SIMPLE, r"H = -g_m (r_o \parallel R_C)"),
    (SIMPLE, r"H = -g_{m} \left( r_{o} \| R_C \right)"),
    (SIMPLE, r"H = -g_{m1} \left(r_{o1} \parallel R_{C}\right)"),
    (SIMPLE, r"H = -g_{m,Q1} (r_{o,Q1} \parallel R_C)"),
    (SIMPLE, r"H = -g_{\mathrm{m,Q1}}\,\left(r_{\mathrm{o,Q1}} \parallel R_{\mathrm{C}}\right)"),
    (SIMPLE, r"H = -\frac{g_m}{\frac{1}{r_o}+\frac{1}{R_C}}"),
    (SIMPLE, r"H = -\frac{g_{m}r_{o}R_{C}}{r_{o}+R_{C}}"),
    (SIMPLE, r"Z_{in} = r_\pi"),
];

#[test]
fn hand_written_formulas_are_read() {
    for (text, claim) in BY_HAND {
        assert_eq!(Bench::new(text).verdict(claim), "equal", "{claim}");
    }
}

#[test]
fn doubts_are_errors_with_both_readings() {
    let check = |text: &str, claim: &str, says: &[&str]| {
        let reading = language::read(text);
        let mut circuit = reading.circuit.expect("a circuit");
        let faults = language::claim(&mut circuit, claim).expect_err(claim);
        let said = format!("{} {}", faults[0].message, faults[0].help.join(" "));
        for part in says {
            assert!(said.contains(part), "{claim}: {said}");
        }
    };
    let names = "in > voltage Vin > ground\nin > R > out > RC > ground\nout > C > ground\n\
                 let gm = 1 mS\nlet k\nout > resistor Rx = 1/gm/k > ground\nask H = V(out)/Vin\n";
    check(names, r"H = \frac{1}{1 + sRC}", &["two readings", "`s*RC`", "`s*R*C`"]);
    check(names, r"H = \frac{1}{1 + R/RC k}", &["two readings"]);
    check(OPAMP, r"H = -R_2/R_1 A_0 + \frac{1}{2}", &["two readings"]);
    check(OPAMP, r"H = 1/sR_1 + \frac{1}{2}", &["two readings"]);
    check(OPAMP, r"H = \frac{R_3}{R_1}", &["`R_3`"]);
    check(OPAMP, r"H = \frac{R_2}{R_1", &["ends too early"]);
    check(OPAMP, r"H = \sin{R_2}", &["`\\sin`"]);
    check(OPAMP, r"H = -\frac{A_0 R_2 \parallel R_1}{R_1}", &["two readings"]);
    let devices = "in > voltage Vin > ground\nbjt Q1: base in, collector out, emitter ground, gm, rpi\n\
                   mosfet M1: gate in, drain out, source ground, gm\nout > RC > ground\nask H = V(out)/Vin\n";
    check(devices, r"H = -g_{m1} R_C + \frac{1}{2}", &["`Q1.gm`", "`M1.gm`"]);
    check(devices, r"H = -g_m R_C + \frac{1}{2}", &["two readings"]);
}
