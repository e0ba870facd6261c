//! The program's own short formulas for roots, against those of the textbooks.

use super::roots;
use serde_json::Value;

/// What is expected of the first root of a list: its formula, or ω0² and Q² of a pair.
enum Short {
    Real(&'static str),
    Pair(&'static str, &'static str),
}
use Short::{Pair, Real};

/// The roots of `which` in their order, each with its formula; all within 10 % as the program says.
#[track_caller]
fn check(circuit: &str, which: &str, expected: &[Short]) {
    let found = roots(&format!("in > voltage Vin > ground\n{circuit}"), &[]);
    let mut list = found[which].as_array().expect("a list").iter();
    for short in expected {
        let root = list.next().expect("as many roots");
        let formula = &root["approximation"];
        let text = |field: &str| formula[field].as_str().unwrap_or_default().to_owned();
        match short {
            Real(expression) => assert_eq!(text("expression"), *expression),
            Pair(w0, q) => {
                assert_eq!((text("w0_squared").as_str(), text("q_squared").as_str()), (*w0, *q));
                // The other of the pair.
                assert_eq!(list.next().map(|other| &other["approximation"]), Some(formula));
            }
        }
        let error = formula["relative_error"].as_f64().expect("a number");
        assert!(error < 0.1, "{error}");
    }
    assert_eq!(
        list.next().and_then(|root| root["approximation"].as_object()),
        None::<&serde_json::Map<String, Value>>
    );
}

/// Two sections far apart: each is alone (common practice).
#[test]
fn separated_sections() {
    let ladder = "in > R1 = 1 kΩ > x > R2 = 100 kΩ > out > C2 = 10 pF > ground\nx > C1 = 1 µF > ground\nask H = V(out) / Vin\n";
    check(ladder, "poles", &[Real("-1/(R1*C1)"), Real("-1/(R2*C2)")]);
}

/// ω1 = 1/(Rs·(Cgs + Cgd·(1 + gm·RD))), zero at +gm/Cgd (Razavi, Design of Analog CMOS Integrated
/// Circuits, chapter 6; from memory).
#[test]
fn miller_effect() {
    let stage =
        "in > Rs = 100 kΩ > g > Cgs = 1 pF > ground\ng > Cgd = 1 pF > d\nd > RD = 5 kΩ > ground
d > current Id = gm*V(g) > ground\nlet gm = 5 mS\nask H = V(d) / Vin\n";
    let poles =
        [Real("-1/(Rs*(RD*Cgd*gm + Cgd + Cgs))"), Real("-(RD*Cgd*gm + Cgd + Cgs)/(RD*Cgd*Cgs)")];
    check(stage, "poles", &poles);
    check(stage, "zeros", &[Real("gm/Cgd")]);
}

/// ω0² = GBW/(Rf·Cin), damped by Cf (Graeme, Photodiode Amplifiers; from memory).
#[test]
fn transimpedance_amplifier() {
    let circuit = "m > Cin = 50 pF > ground\nm > Rf = 1 MΩ > out\nm > current Ip > ground\n
opamp U1: plus ground, minus m, output out, gain = wt/s\nlet wt = 6e6\nask Z = V(out) / Ip from Ip\n";
    check(circuit, "poles", &[Pair("wt/(Rf*Cin)", "Rf*Cin*wt")]);
}

/// ω0² = ωt/(Ro·CL), Q² = ωt·Ro·CL: a follower that rings (Franco, Design with Operational
/// Amplifiers; from memory).
#[test]
fn follower_with_a_capacitive_load() {
    let circuit = "out > CL = 10 nF > ground\nopamp U1: plus in, minus out, output out, gain = wt/s, rout = Ro
let wt = 6e6\nlet Ro = 100 Ω\nask H = V(out) / Vin\n";
    check(circuit, "poles", &[Pair("wt/(CL*Ro)", "CL*Ro*wt")]);
}

/// Bandwidth = gain-bandwidth product over the gain, 1 + R2/R1 ≈ R2/R1 (Sedra & Smith; from memory).
#[test]
fn gain_and_bandwidth() {
    let circuit = "out > R2 = 99 kΩ > m > R1 = 1 kΩ > ground
opamp U1: plus in, minus m, output out, gain = A0/(1 + s/wp)\nlet A0 = 100000\nlet wp = 60\nask H = V(out) / Vin\n";
    check(circuit, "poles", &[Real("-R1*A0*wp/R2")]);
}

/// ω0² = 1/(L·C), Q = √(L/C)/Rs while the load is light (common practice).
#[test]
fn resonant_circuit_with_a_light_load() {
    let circuit = "in > Rs = 1 Ω > x > L1 = 10 µH > out > C1 = 1 nF || RL = 1 MΩ > ground\nask H = V(out) / Vin\n";
    check(circuit, "poles", &[Pair("1/(C1*L1)", "L1/(Rs^2*C1)")]);
}

/// Low cut by the coupling capacitor and the load, high cut by the source and the stray capacitance
/// (Sedra & Smith; from memory).
#[test]
fn ac_coupled_stage() {
    let circuit = "in > Rs = 600 Ω > a > Cc = 1 µF > b > RL = 47 kΩ > ground\nb > CL = 100 pF > ground\nask H = V(b) / Vin\n";
    check(circuit, "poles", &[Real("-1/(RL*Cc)"), Real("-1/(Rs*CL)")]);
}

/// Zero at 1/(R2·C1), pole near 1/(R2·C2) for C1 ≫ C2 (Erickson & Maksimović, Fundamentals of Power
/// Electronics; from memory).
#[test]
fn error_amplifier() {
    let circuit = "in > R1 = 10 kΩ > m > R2 = 100 kΩ > x > C1 = 10 nF > out\nm > C2 = 33 pF > out
opamp U1: plus ground, minus m, output out\nask H = V(out) / Vin\n";
    check(circuit, "zeros", &[Real("-1/(R2*C1)")]);
    let found = roots(&format!("in > voltage Vin > ground\n{circuit}"), &[]);
    assert_eq!(found["poles"][1]["approximation"]["expression"], "-1/(R2*C2)");
}

/// Series resonance of a quartz, and its Q (Van Dyke 1928; from memory).
#[test]
fn quartz() {
    let circuit = "a > Lm = 3 H > x > Cm = 0.05 pF > y > Rm = 2 kΩ > ground\na > Cp = 10 pF > ground\nask Z = impedance(a, ground)\n";
    check(circuit, "zeros", &[Pair("1/(Cm*Lm)", "Lm/(Rm^2*Cm)")]);
}

/// Zero of the capacitor's series resistance, 1/(Resr·C) (Erickson & Maksimović; from memory).
#[test]
fn output_filter_with_a_lossy_capacitor() {
    let circuit = "in > L1 = 10 µH > out > R1 = 10 Ω > ground\nout > C1 = 100 µF > x > Resr = 20 mΩ > ground\nask H = V(out) / Vin\n";
    check(circuit, "zeros", &[Real("-1/(Resr*C1)")]);
    let found = roots(&format!("in > voltage Vin > ground\n{circuit}"), &[]);
    assert_eq!(found["poles"][0]["approximation"]["w0_squared"], "1/(C1*L1)");
}

/// p1 = −1/(gm2·R1·R2·Cc), zero at 1/(Cc·(1/gm2 − Rz)) (Gray, Hurst, Lewis & Meyer, chapter 9; from
/// memory).
#[test]
fn nulling_resistor() {
    let circuit = "x > R1 = 100 kΩ || C1 = 1 pF > ground\nout > R2 = 100 kΩ || C2 = 10 pF > ground
x > Cc = 5 pF > w > Rz = 4 kΩ > out\nx > current G1 = gm1*V(in) > ground\nout > current G2 = gm2*V(x) > ground
let gm1 = 1 mS\nlet gm2 = 5 mS\nask H = V(out) / Vin\n";
    check(circuit, "zeros", &[Real("-gm2/(Cc*(Rz*gm2 - 1))")]);
    let found = roots(&format!("in > voltage Vin > ground\n{circuit}"), &[]);
    assert_eq!(found["poles"][0]["approximation"]["expression"], "-1/(R1*R2*Cc*gm2)");
}

/// Lead network: zero at 1/(R1·C1), pole at 1/(R2·C1) for R1 ≫ R2 (common practice).
#[test]
fn lead_network() {
    let circuit = "in > R1 = 100 kΩ || C1 = 10 nF > out > R2 = 1 kΩ > ground\nask H = V(out)/Vin\n";
    check(circuit, "zeros", &[Real("-1/(R1*C1)")]);
    check(circuit, "poles", &[Real("-1/(R2*C1)")]);
}
