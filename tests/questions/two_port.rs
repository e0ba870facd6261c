//! Two-port sets: conversions through z, reciprocity, and networks that are joined.

use super::{Draw, answer, form, read};
use cofactor::algebra::{Fraction, Polynomial};
use cofactor::analysis::AnalysisError;
use cofactor::circuit::{Circuit, Class, Element, Law, Number, Value};

type Matrix = [Fraction; 4];

/// The set of the ports (in, ground) and (out, ground); none where it does not exist.
fn set(circuit: &Circuit, word: &str) -> Option<Matrix> {
    set_of(circuit, word, "in ground, out ground")
}

fn set_of(circuit: &Circuit, word: &str, ports: &str) -> Option<Matrix> {
    let reference = if word.ends_with("scattering") { ", 50" } else { "" };
    match answer(circuit, &format!("P = two_port({word}, {ports}{reference})")) {
        Ok(entries) => entries.iter().map(form).collect::<Vec<_>>().try_into().ok(),
        Err(AnalysisError::NoParameters { .. }) => None,
        Err(error) => panic!("{word}: {error}"),
    }
}

fn whole(number: i64) -> Fraction {
    Polynomial::from(number).into()
}

fn determinant(m: &Matrix) -> Fraction {
    &(&m[0] * &m[3]) - &(&m[1] * &m[2])
}

fn over(m: &Matrix, divisor: &Fraction) -> Option<Matrix> {
    let inverse = divisor.recip()?;
    Some([&m[0] * &inverse, &m[1] * &inverse, &m[2] * &inverse, &m[3] * &inverse])
}

fn product(a: &Matrix, b: &Matrix) -> Matrix {
    let cell = |row: usize, column: usize| {
        &(&a[2 * row] * &b[column]) + &(&a[2 * row + 1] * &b[2 + column])
    };
    [cell(0, 0), cell(0, 1), cell(1, 0), cell(1, 1)]
}

fn sum(a: &Matrix, b: &Matrix) -> Matrix {
    [0, 1, 2, 3].map(|place| &a[place] + &b[place])
}

/// Every set from z, by the conversions of any textbook on two-ports (from memory).
fn from_z(word: &str, z: &Matrix) -> Option<Matrix> {
    let delta = determinant(z);
    let one = whole(1);
    let [z11, z12, z21, z22] = z.clone();
    match word {
        "z" => Some(z.clone()),
        "y" => over(&[z22, -&z12, -&z21, z11], &delta),
        "h" => over(&[delta, z12, -&z21, one], &z22),
        "g" => over(&[one, -&z12, z21, delta], &z11),
        "chain" => over(&[z11, delta, one, z22], &z21),
        "inverse_chain" => over(&[z22, delta, one, z11], &z12),
        _ => {
            // s = (z − R)·(z + R)⁻¹
            let r = whole(50);
            let minus = [&z11 - &r, z12.clone(), z21.clone(), &z22 - &r];
            let plus = [&z11 + &r, z12, z21, &z22 + &r];
            let inverse = [plus[3].clone(), -&plus[1], -&plus[2], plus[0].clone()];
            let s = over(&product(&minus, &inverse), &determinant(&plus))?;
            if word == "scattering" {
                return Some(s);
            }
            over(&[-&determinant(&s), s[0].clone(), -&s[3], one], &s[2])
        }
    }
}

const SETS: [&str; 8] =
    ["z", "y", "h", "g", "chain", "inverse_chain", "scattering", "transfer_scattering"];

#[test]
fn every_set_follows_from_z_and_is_refused_where_that_divides_by_zero() {
    let nodes = ["ground", "in", "out", "x"];
    let mut refused = 0;
    for seed in 0..24 {
        let mut draw = Draw::new(seed);
        let mut text = draw.network(&["R", "C", "G"], &nodes, 1);
        if seed % 2 == 0 {
            let (a, b) = draw.pair(&nodes);
            let (c, d) = draw.pair(&nodes);
            text.push_str(&format!("{a} > current Ix = gm*V({c}, {d}) > {b}\n"));
        }
        let circuit = read(&text);
        let Some(z) = set(&circuit, "z") else { continue };
        for word in SETS {
            let found = set(&circuit, word);
            refused += usize::from(found.is_none());
            assert_eq!(found, from_z(word, &z), "{word} of\n{text}");
        }
        if seed % 2 == 1 {
            assert_eq!(z[1], z[2], "reciprocity of\n{text}");
            if let Some(a) = set(&circuit, "chain") {
                assert_eq!(determinant(&a), whole(1), "{text}");
            }
        }
    }
    assert!(refused > 0, "no circuit lacked a set");
}

#[test]
fn joined_networks_multiply_and_add() {
    for seed in 100..108 {
        let mut draw = Draw::new(seed);
        let first = draw.network(&["R", "C", "L"], &["ground", "in", "out", "x"], 1);
        let second = draw.network(&["R", "C", "G"], &["ground", "in", "out"], 1);
        // All circuits get the symbols of both, so that their results can be compared.
        let both = format!("{first}{second}");
        let named = |text: &str| read_with_symbols_of(text, &both);
        let (a, b) = (named(&first), named(&second));
        let renamed = |text: &str, from: &str, to: &str| {
            text.replace(&format!("{from} >"), &format!("{to} >"))
                .replace(&format!("> {from}\n"), &format!("> {to}\n"))
        };
        let cascade = named(
            &(renamed(&first, "out", "m") + &renamed(&renamed(&second, "x", "x2"), "in", "m")),
        );
        for word in ["chain", "transfer_scattering"] {
            if let (Some(a), Some(b)) = (set(&a, word), set(&b, word)) {
                assert_eq!(set(&cascade, word), Some(product(&a, &b)), "{word}\n{first}\n{second}");
            }
        }
        let parallel = named(&both);
        if let (Some(a), Some(b)) = (set(&a, "y"), set(&b, "y")) {
            assert_eq!(set(&parallel, "y"), Some(sum(&a, &b)), "{first}\n{second}");
        }
        // In series: port 2 of the first network is isolated, so that the port conditions hold.
        let above = renamed(&renamed(&first, "ground", "in2"), "out", "far");
        let below = renamed(&renamed(&second, "in", "in2"), "out", "out2");
        let mut series = read_with_symbols_of(
            &format!("{above}{below}out > Ywide > out2\n"),
            &format!("{both}out > Ywide > ground\n"),
        );
        let node = |series: &Circuit, name: &str| series.node(name).expect("a node");
        let ends = (node(&series, "far"), node(&series, "in2"));
        let secondary = (node(&series, "out"), node(&series, "out2"));
        series.elements.push(Element {
            name: "T1".to_owned(),
            class: Class::Transformer,
            plus: ends.0,
            minus: ends.1,
            law: Law::Transformer {
                ratio: Value::Number(Number::from_integer(1.into())),
                secondary,
            },
            line: 0,
        });
        // Ywide only names the nodes before the transformer is there.
        series.elements.retain(|element| element.name != "Ywide");
        if let (Some(a), Some(b)) = (set(&a, "z"), set(&b, "z")) {
            assert_eq!(set(&series, "z"), Some(sum(&a, &b)), "{first}\n{second}");
        }
    }
}

/// The circuit of a text with the symbol table of another that has more symbols.
fn read_with_symbols_of(text: &str, all: &str) -> Circuit {
    let (mut circuit, whole) = (read(text), read(all));
    let own = circuit.symbols.clone();
    for value in circuit.elements.iter_mut().flat_map(|element| element.law.values_mut()) {
        *value =
            value.replaced(&|symbol| whole.symbol(&own[symbol.0 as usize].name).map(Value::Symbol));
    }
    circuit.symbols = whole.symbols;
    circuit
}

#[test]
fn refusals_say_which_sets_exist() {
    let check = |text: &str, word: &str, expected: &str| {
        let circuit = read(text);
        let reference = if word.ends_with("scattering") { ", 50" } else { "" };
        let query = format!("P = two_port({word}, in ground, out ground{reference})");
        let error = answer(&circuit, &query).expect_err("no such set");
        assert_eq!(error.exit_code(), 3);
        let told = format!("{error}; {}", error.help().unwrap_or_default());
        assert_eq!(told, expected);
    };
    check(
        "in > R1 > out\n",
        "z",
        "the z parameters of this circuit do not exist: the currents of the two ports cannot be \
         chosen independently; these exist: y, h, g, chain, inverse_chain, scattering, \
         transfer_scattering",
    );
    check(
        "in > R1 > ground\nin > voltage Vw = 0 V > out\n",
        "y",
        "the y parameters of this circuit do not exist: the voltages of the two ports cannot be \
         chosen independently; these exist: z, h, g, chain, inverse_chain, scattering, \
         transfer_scattering",
    );
    check(
        "in > R1 > ground\nout > R2 > ground\n",
        "chain",
        "the chain parameters of this circuit do not exist: the voltage and the current of port 2 \
         do not determine those of port 1; these exist: z, y, h, g, scattering",
    );
}

#[test]
fn entries_are_named_and_have_their_units() {
    let circuit = read("in > R1 > x > C1 > ground\nx > R2 > out\n");
    let check = |word: &str, expected: &str| {
        let reference = if word.ends_with("scattering") { ", 50" } else { "" };
        let query = format!("P = two_port({word}, in ground, out ground{reference})");
        let entries = answer(&circuit, &query).expect("a set");
        let found: Vec<String> =
            entries.iter().map(|entry| format!("{} {}", entry.name, entry.unit)).collect();
        assert_eq!(found.join(", "), expected);
    };
    check("z", "P.z11 Ω, P.z12 Ω, P.z21 Ω, P.z22 Ω");
    check("y", "P.y11 S, P.y12 S, P.y21 S, P.y22 S");
    check("h", "P.h11 Ω, P.h12 1, P.h21 1, P.h22 S");
    check("g", "P.g11 S, P.g12 1, P.g21 1, P.g22 Ω");
    check("chain", "P.a11 1, P.a12 Ω, P.a21 S, P.a22 1");
    check("inverse_chain", "P.b11 1, P.b12 Ω, P.b21 S, P.b22 1");
    check("scattering", "P.s11 1, P.s12 1, P.s21 1, P.s22 1");
    check("transfer_scattering", "P.t11 1, P.t12 1, P.t21 1, P.t22 1");
}

#[test]
fn isolated_ports_and_removed_sources() {
    // A transformer 2 : 1 has a chain matrix diag(2, 1/2) and neither z nor y.
    let mut circuit = read("in > Ra > ground\nout > Rb > ground\nin > voltage Vin > ground\n");
    let node = |name: &str| circuit.node(name).expect("a node");
    let (a, b) = (node("in"), node("out"));
    let ground = cofactor::circuit::GROUND;
    circuit.elements.retain(|element| !element.name.starts_with('R'));
    circuit.elements.push(Element {
        name: "T1".to_owned(),
        class: Class::Transformer,
        plus: a,
        minus: ground,
        law: Law::Transformer {
            ratio: Value::Number(Number::from_integer(2.into())),
            secondary: (b, ground),
        },
        line: 0,
    });
    let half = Fraction::ratio(1, 2).expect("not 0");
    let zero = Fraction::zero();
    assert_eq!(set(&circuit, "chain"), Some([whole(2), zero.clone(), zero, half]));
    assert_eq!(set(&circuit, "z"), None);
    assert_eq!(set(&circuit, "y"), None);
}
