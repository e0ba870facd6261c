//! Textbook formulas written in unfamiliar ways are proved equal.

use super::value::{Draw, changed, integer, inverse, parts, show};
use super::{Bench, forms, word};
use cofactor::circuit::Value;
use cofactor::language;

/// Changes of one part that keep the value and the units.
fn rewritten(part: &Value, draw: &mut Draw) -> Value {
    let rotated = |list: &[Value], draw: &mut Draw| {
        let mut list = list.to_vec();
        let steps = draw.below(list.len());
        list.rotate_left(steps);
        list
    };
    match (part, draw.below(6)) {
        (Value::Sum(terms), 0) => Value::Sum(rotated(terms, draw)),
        // a + b = a·(1 + b/a)
        (Value::Sum(terms), _) => {
            let first = terms[0].clone();
            let rest = terms[1..]
                .iter()
                .map(|term| Value::Product(vec![term.clone(), inverse(first.clone())]));
            let inside = Value::Sum(std::iter::once(integer(1)).chain(rest).collect());
            Value::Product(vec![first.clone(), inside])
        }
        (Value::Product(factors), 0) => Value::Product(rotated(factors, draw)),
        // x·(a + b) = x·a + x·b
        (Value::Product(factors), _) if factors.iter().any(|f| matches!(f, Value::Sum(_))) => {
            let place = factors.iter().position(|f| matches!(f, Value::Sum(_))).expect("a sum");
            let Value::Sum(terms) = &factors[place] else { return part.clone() };
            let terms = terms.iter().map(|term| {
                let mut factors = factors.clone();
                factors[place] = term.clone();
                Value::Product(factors)
            });
            Value::Sum(terms.collect())
        }
        (Value::Parallel(branches), 0 | 1) => Value::Parallel(rotated(branches, draw)),
        // 1/(1/a + 1/b)
        (Value::Parallel(branches), 2 | 3) => {
            inverse(Value::Sum(branches.iter().cloned().map(inverse).collect()))
        }
        // a·b/(a + b)
        (Value::Parallel(branches), _) if branches.len() == 2 => {
            let sum = inverse(Value::Sum(branches.clone()));
            Value::Product(branches.iter().cloned().chain([sum]).collect())
        }
        (Value::Power(base, 2), _) => Value::Product(vec![(**base).clone(), (**base).clone()]),
        // 2x − x, x∥x·2, 1/(1/x), −(−x)
        (_, 1) => {
            let twice = Value::Product(vec![integer(2), part.clone()]);
            Value::Sum(vec![twice, Value::Negative(Box::new(part.clone()))])
        }
        (_, 2) => {
            Value::Product(vec![integer(2), Value::Parallel(vec![part.clone(), part.clone()])])
        }
        (_, 3) => inverse(inverse(part.clone())),
        (_, 4) => Value::Negative(Box::new(Value::Negative(Box::new(part.clone())))),
        // x·x/x
        _ => Value::Product(vec![part.clone(), part.clone(), inverse(part.clone())]),
    }
}

#[test]
fn rewritten_textbook_formulas_are_equal() {
    let mut draw = Draw::new(2024);
    let mut judged = 0;
    for form in forms() {
        let mut bench = Bench::new(&form.text);
        let plain = language::parse_expression(&bench.circuit, &form.formula).expect("a formula");
        for _ in 0..5 {
            let mut formula = plain.clone();
            for _ in 0..4 {
                let all = parts(&formula);
                let (path, part) = draw.of(&all);
                let by = rewritten(part, &mut draw);
                formula = changed(&formula, &path.clone(), &|_| by.clone());
            }
            let claim = format!("{} = {}", form.result, show(&bench.circuit, &formula));
            let judgement = bench.judge(&claim);
            let judgement = judgement.unwrap_or_else(|why| panic!("{}: {why}", form.circuit));
            assert_eq!(word(judgement.verdict), "equal", "{}: {claim}", form.circuit);
            judged += 1;
        }
    }
    assert!(judged >= 200, "{judged} claims");
}

/// By hand: (circuit, claim), each in a form that no program would print.
const BY_HAND: [(&str, &str); 36] = [
    ("loaded-divider", "H = 1/(1 + R1/R2 + R1/RL)"),
    ("loaded-divider", "H = (1/R1)/(1/R1 + 1/R2 + 1/RL)"),
    ("loaded-divider", "H = R2 RL/(R1 R2 + R1 RL + R2 RL)"),
    ("loaded-divider", r"H = \frac{R_2 \parallel R_L}{R_1 + (R_2 \parallel R_L)}"),
    ("phase-lead", "H = R2/(R2 + (R1 || (1/(s*C1))))"),
    ("phase-lead", "H = (R2/(R1 + R2)) (1 + s R1 C1)/(1 + s C1 (R1 || R2))"),
    ("charge-divider", "H = (1/(s*C2))/(1/(s*C1) + 1/(s*C2))"),
    ("charge-divider", "H = 1/(1 + C2/C1)"),
    ("capacitive-amplifier", "H = -(s C1)/(s C2)"),
    ("series-rlc", "H = (1/(s*C1))/(R1 + s*L1 + 1/(s*C1))"),
    ("series-rlc", "H = (1/(L1*C1))/(s^2 + s*R1/L1 + 1/(L1*C1))"),
    ("wien-equal", "H = 1/(3 + s*R*C + 1/(s*R*C))"),
    ("wien-equal", r"H = \frac{1}{3 + sRC + \frac{1}{sRC}}"),
    ("twin-t-matched", "H = (s^2 + 1/(R*C)^2)/(s^2 + 4*s/(R*C) + 1/(R*C)^2)"),
    ("twin-t-matched", "H = 1/(1 + 4/(s*R*C + 1/(s*R*C)))"),
    ("rc-ladder-two", "H = 1/((1 + s R1 C1)(1 + s R2 C2) + s R1 C2)"),
    ("rc-ladder-three-equal", "H = 1/((s R C)^3 + 5 (s R C)^2 + 6 s R C + 1)"),
    ("bridge-open", "H = (R2 R3 - R1 R4)/((R1 + R2)(R3 + R4))"),
    ("delta-arms", "Z = Rab (Rbc + Rca)/(Rab + Rbc + Rca)"),
    ("inverting-finite-gain", "H = -(R2/R1)/(1 + (1 + R2/R1)/A0)"),
    ("difference-positive-input", "H = (R4/(R3 + R4)) ((R1 + R2)/R1)"),
    ("leaky-integrator", "H = -(R2 || (1/(s*C1)))/R1"),
    ("all-pass", "H = 2/(1 + s R3 C1) - 1"),
    ("all-pass", "H = (1/(R3*C1) - s)/(1/(R3*C1) + s)"),
    ("sallen-key-low-pass", "H = 1/(1 + s R1 C2 + s R2 C2 (1 + s R1 C1))"),
    ("sallen-key-high-pass", "H = s^2 R1 R2 C1 C2/(1 + s R1 (C1 + C2) + s^2 R1 R2 C1 C2)"),
    ("impedance-converter", "Z = s (C4 R1 R3 R5/R2)"),
    ("gyrator-inductor", "Z = (R1 g^2 + s C1)/g^2"),
    ("negative-impedance", "Z = -Z1/(R2/R1)"),
    (
        "common-emitter",
        r"H = -g_{m,Q1}\left(r_{o,Q1}\parallel R_C\right)\frac{r_{\pi,Q1}}{R_s+r_{\pi,Q1}}",
    ),
    ("emitter-follower-input", "Z = Q1.rpi + RE + Q1.gm Q1.rpi RE"),
    ("source-degenerated-output", r"Z = r_o + R_S + g_m r_o R_S"),
    ("cathode-follower", "H = (V1.mu/(1 + V1.mu)) Rk/(Rk + V1.rp/(1 + V1.mu))"),
    ("ideal-transformer", "H = (1/n) n^2 RL/(n^2 RL + Rs)"),
    ("coupled-coils", "Z = s L1 + (s M1)^2/(-RL - s L2)"),
    ("l-section", "Z = s L1 + (RL || (1/(s*C1)))"),
];

#[test]
fn formulas_by_hand_are_equal() {
    let forms = forms();
    for (name, claim) in BY_HAND {
        let form = forms.iter().find(|form| form.circuit == name).expect(name);
        assert_eq!(Bench::new(&form.text).verdict(claim), "equal", "{name}: {claim}");
    }
}

#[test]
fn equality_is_never_a_matter_of_sampling() {
    let text = "in > voltage Vin > ground\nin > R1 = 1 k > out > R2 = 1 k > ground\n\
                out > C1 = 1 n > ground\nask H = V(out) / Vin\n";
    let mut bench = Bench::new(text);
    // Equal at the nominal values at every frequency, and far below the resolution of a double.
    assert_eq!(bench.verdict("H = R1/(R1 + R2 + s R1 R2 C1)"), "different");
    let tiny = "H = R2/(R1 + R2 + s R1 R2 C1) + (1 - R1/R2)*1e-40";
    assert_eq!(bench.verdict(tiny), "different");
    let tinier = "H = (R2 + R1*1e-300)/(R1 + R2 + s R1 R2 C1)";
    assert_eq!(bench.verdict(tinier), "different");
    // Equal at every integer from 0 to 9 that s*R1*C1 may be.
    let factors: Vec<String> = (0..10).map(|k| format!("(s R1 C1 - {k})")).collect();
    let vanishing = format!("H = R2/(R1 + R2 + s R1 R2 C1) + {}", factors.join("*"));
    assert_eq!(bench.verdict(&vanishing), "different");
}
