//! Every shape has the value of its fraction, exactly, on random fractions; what they look like.

use expect_test::{Expect, expect};
use num_rational::BigRational;

use super::*;
use crate::algebra::modular::Random;
use crate::circuit::SymbolRole;
use crate::typeset::{Dialect, SymbolTable, plain};

/// A value for each letter that is no root of what occurs here.
fn value(letter: Letter) -> Option<BigRational> {
    let number = |p: i64, q: i64| BigRational::new(p.into(), q.into());
    match letter {
        Letter::S => Some(number(7, 5)),
        Letter::Symbol(index) => {
            let index = i64::from(index);
            Some(number(index * index * 3 + 11, index * 7 + 2))
        }
        Letter::Pi => Some(number(22, 7)),
        Letter::Frequency | Letter::Definition(_) => None,
    }
}

/// A sum of products: of single variables, each at most once where `linear`.
fn polynomial(random: &mut Random, variables: u64, terms: u64, linear: bool) -> Polynomial {
    let mut parts = Vec::new();
    for _ in 0..=random.word() % terms {
        let powers: Vec<(Var, u32)> = (0..=variables)
            .filter_map(|variable| {
                let power = (random.word() % if linear { 2 } else { 3 }) as u32;
                (power > 0).then_some((Var(variable as u32), power))
            })
            .collect();
        let coefficient = random.word() % 7;
        parts.push((powers, BigInt::from(coefficient) - BigInt::from(2)));
    }
    Polynomial::from_terms(parts)
}

/// All terms with `degree` of the variables, `s` besides: homogeneous in units.
fn homogeneous(random: &mut Random, variables: u32, degree: usize, terms: u64) -> Polynomial {
    let mut parts = Vec::new();
    for _ in 0..=random.word() % terms {
        let mut chosen: Vec<u32> = (1..=variables).collect();
        while chosen.len() > degree {
            let place = random.word() as usize % chosen.len();
            chosen.remove(place);
        }
        let s = (random.word() % 3) as u32;
        let powers: Vec<(Var, u32)> =
            std::iter::once((Var::S, s)).chain(chosen.into_iter().map(|v| (Var(v), 1))).collect();
        parts.push((powers, BigInt::from(1)));
    }
    Polynomial::from_terms(parts)
}

fn fraction(random: &mut Random, case: u64) -> Option<Fraction> {
    let part = |random: &mut Random| match case % 4 {
        0 => polynomial(random, 4, 6, true),
        1 => &polynomial(random, 3, 3, true) * &polynomial(random, 4, 3, true),
        2 => homogeneous(random, 6, 3, 8),
        _ => {
            let product = &homogeneous(random, 4, 2, 3) * &homogeneous(random, 5, 2, 3);
            &product + &homogeneous(random, 5, 4, 3)
        }
    };
    let (n, d) = (part(random), part(random));
    let fraction = Fraction::new(&n, &d)?;
    match random.word() % 3 {
        0 => Some(&fraction + &Fraction::new(&part(random), &part(random))?),
        1 => Some(&fraction * &Fraction::from(polynomial(random, 3, 4, false))),
        _ => Some(fraction),
    }
}

/// Every second symbol is a capacitance.
fn some_capacitors() -> Vec<Symbol> {
    let symbol = |index: u32| Symbol {
        name: format!("x{index}"),
        role: SymbolRole::Parameter,
        unit: if index.is_multiple_of(2) { Unit::OHM } else { Unit::FARAD },
        nominal: None,
        tolerance: None,
    };
    (0..6).map(symbol).collect()
}

#[test]
fn every_shape_has_the_value_of_the_fraction() {
    let mut random = Random::new(20);
    let symbols = some_capacitors();
    let letters = Lettering { pi: None, symbols: &symbols };
    let shapes: [(&str, ShapeOf); 6] = [
        ("compact", compact),
        ("powers", powers),
        ("bode", bode),
        ("product", product),
        ("by-element", by_element),
        ("sections", |fraction, letters| sections(fraction, letters).0),
    ];
    for case in 0..64 {
        let Some(fraction) = fraction(&mut random, case) else { continue };
        let expected = fraction.evaluate(|variable| {
            value(letters.letter(variable)).unwrap_or_else(|| BigRational::from_integer(1.into()))
        });
        for (name, shape) in shapes {
            let formula = shape(&fraction, letters);
            assert_eq!(formula.evaluate(value), expected, "{name} of {fraction:?}: {formula:?}");
        }
    }
}

#[test]
fn compact_is_the_shortest_up_to_what_hides_the_powers() {
    let mut random = Random::new(21);
    let letters = Lettering::default();
    for case in 0..64 {
        let Some(fraction) = fraction(&mut random, case) else { continue };
        let count = compact(&fraction, letters).symbols();
        for other in [powers(&fraction, letters), product(&fraction, letters)] {
            assert!(count <= other.symbols(), "{fraction:?}: {other:?}");
        }
    }
}

/// The polynomial of an expression in `names`, with `+`, `-`, `*` and no parentheses.
fn read(text: &str, names: &[&str]) -> Polynomial {
    let mut sum = Polynomial::zero();
    for term in text.replace("- ", "+ -").split('+').map(str::trim) {
        let (sign, term) = term.strip_prefix('-').map_or((1, term), |rest| (-1, rest));
        let mut product = Polynomial::from(sign);
        for factor in term.split('*').map(str::trim) {
            let factor = match (factor.parse::<i64>(), factor) {
                (Ok(number), _) => Polynomial::from(number),
                (_, "s") => Polynomial::variable(Var::S),
                (_, name) => {
                    let place = names.iter().position(|known| *known == name);
                    Polynomial::variable(Var(place.expect("a known name") as u32 + 1))
                }
            };
            product = &product * &factor;
        }
        sum = &sum + &product;
    }
    sum
}

/// Symbols with the units that their first letters say.
fn symbols(names: &[&str]) -> Vec<Symbol> {
    let unit = |name: &str| match name.as_bytes()[0] {
        b'R' => Unit::OHM,
        b'C' => Unit::FARAD,
        b'L' => Unit::HENRY,
        b'g' => Unit::SIEMENS,
        _ => Unit::ONE,
    };
    let symbol = |name: &&str| Symbol {
        name: (*name).to_owned(),
        role: SymbolRole::Parameter,
        unit: unit(name),
        nominal: None,
        tolerance: None,
    };
    names.iter().map(symbol).collect()
}

type ShapeOf = fn(&Fraction, Lettering<'_>) -> Formula;

#[track_caller]
fn check_shape(shape: ShapeOf, names: &str, n: &str, d: &str, expected: Expect) {
    let names: Vec<&str> = names.split(' ').collect();
    let fraction = Fraction::new(&read(n, &names), &read(d, &names)).expect("a fraction");
    let (table, symbols) = (SymbolTable::new(names.iter().copied()), symbols(&names));
    let formula = shape(&fraction, Lettering { pi: None, symbols: &symbols });
    expected.assert_eq(&plain::text(&formula, &table, Dialect::Language));
}

#[track_caller]
fn check(names: &str, numerator: &str, denominator: &str, expected: Expect) {
    check_shape(compact, names, numerator, denominator, expected);
}

#[test]
fn compact_forms_read_as_written_by_hand() {
    check("R1 R2", "R1*R2", "R1 + R2", expect!["R1 || R2"]);
    check("A B C", "A*B + A*C", "A + B + C", expect!["A || (B + C)"]);
    check("g R1 R2 R3", "-g*R1*R2", "R1*R3 + R2*R3", expect!["-g*(R1 || R2)/R3"]);
    check("R C", "R", "1 + s*R*C", expect!["R/(1 + s*R*C)"]);
    check("R1 R2 C", "R2", "R1 + R2 + s*R1*R2*C", expect!["1/(1 + R1/R2 + s*R1*C)"]);
    check("R C", "1 - s*R*C", "1 + s*R*C", expect!["(1 - s*R*C)/(1 + s*R*C)"]);
    check(
        "R1 R2 R3 R4",
        "R2*R3 - R1*R4",
        "R1*R3 + R1*R4 + R2*R3 + R2*R4",
        expect!["R2/(R1 + R2) - R4/(R3 + R4)"],
    );
    check(
        "RL L1 L2 M",
        "s*L1*RL + s*s*L1*L2 - s*s*M*M",
        "RL + s*L2",
        expect!["s*L1 - s^2*M^2/(RL + s*L2)"],
    );
    check(
        "RE Rf gm1 gm2 RD",
        "-gm2*RE - gm2*gm1*RD*RE - gm2*gm1*RD*Rf",
        "1 + gm2*RE + gm2*RE*gm1*RD",
        expect!["-(1 + Rf/RE + 1/(gm1*RD))/(1 + (1 + 1/(RE*gm2))/(gm1*RD))"],
    );
    check("RL Rs n", "n*RL", "Rs + n*n*RL", expect!["n/(n^2 + Rs/RL)"]);
    check(
        "RD Rs gm Cgs Cgd",
        "-RD*gm + s*RD*Cgd",
        "1 + s*Rs*Cgs + s*Rs*Cgd + s*Rs*Cgd*gm*RD + s*RD*Cgd + s*s*Rs*RD*Cgs*Cgd",
        expect!["-RD*(gm - s*Cgd)/((1 + s*RD*Cgd)*(1 + s*Rs*Cgs) + s*Rs*Cgd*(1 + RD*gm))"],
    );
    check(
        "Ra Rb C1 C2",
        "2 + s*Ra*C1 + s*Rb*C2",
        "1 + s*Ra*C1 + s*Rb*C2 + s*s*Ra*Rb*C1*C2",
        expect!["1/(1 + s*Ra*C1) + 1/(1 + s*Rb*C2)"],
    );
    check("RS g r", "r + RS + RS*g*r", "1", expect!["RS + r*(1 + RS*g)"]);
    check("R1 R2 g1 g2", "g2 + g2*g1*R1", "g1 + g1*g2*R2", expect!["(R1 + 1/g1)/(R2 + 1/g2)"]);
    check("R r g", "-g*R*r", "R + r", expect!["-g*(R || r)"]);
    check("R m r", "m*R", "r + R + R*m", expect!["m/(1 + m + r/R)"]);
    check("R C g", "R*g*g + s*C", "g*g", expect!["R + s*C/g^2"]);
    check("R1 R2", "0*R1", "R1 + R2", expect!["0"]);
}

#[test]
fn capacitances_in_a_row_are_no_parallel() {
    check("C1 C2", "C1*C2", "C1 + C2", expect!["C1*C2/(C1 + C2)"]);
    check("L1 L2", "L1*L2", "L1 + L2", expect!["L1 || L2"]);
    check("R1 R2 g", "R1*R2", "R1 + R2 + g*R1*R2", expect!["(1/g) || R1 || R2"]);
}

const SALLEN_KEY: [&str; 3] = ["R1 R2 C1 C2", "1", "1 + s*C2*R1 + s*C2*R2 + s*s*R1*R2*C1*C2"];
const LOADED: [&str; 3] = ["R1 R2 C1", "R2", "R1 + R2 + s*R1*R2*C1"];
const RESONANCE: [&str; 3] = ["R1 C1 L1", "s*C1*R1", "1 + s*C1*R1 + s*s*C1*L1"];

#[test]
fn other_shapes() {
    let check = |shape: ShapeOf, [names, n, d]: [&str; 3], expected: Expect| {
        check_shape(shape, names, n, d, expected);
    };
    check(powers, SALLEN_KEY, expect!["1/(1 + s*C2*(R1 + R2) + s^2*R1*R2*C1*C2)"]);
    check(powers, LOADED, expect!["R2/(R1 + R2 + s*R1*R2*C1)"]);
    check(bode, LOADED, expect!["R2/((R1 + R2)*(1 + s*C1*(R1 || R2)))"]);
    check(bode, RESONANCE, expect!["s*R1*C1/(1 + s*R1*C1 + s^2*C1*L1)"]);
    check(product, LOADED, expect!["R2/(R1 + R2 + s*R1*R2*C1)"]);
    check(
        by_element,
        SALLEN_KEY,
        expect!["1/(1 + s*C2*(R1 + R2) + s^2*C2*(R1 + R2)*C1*(R1 || R2))"],
    );
    check(by_element, LOADED, expect!["R2/((R1 + R2)*(1 + s*C1*(R1 || R2)))"]);
    check(by_element, RESONANCE, expect!["s*R1*C1/(1 + s*R1*C1 + s^2*C1*L1)"]);
}

#[test]
fn sections_have_their_frequency_and_quality() {
    let [names, n, d] = SALLEN_KEY;
    let names: Vec<&str> = names.split(' ').collect();
    let fraction = Fraction::new(&read(n, &names), &read(d, &names)).expect("a fraction");
    let (_, sections) = sections(&fraction, Lettering::default());
    let table = SymbolTable::new(names.iter().copied());
    let text = |formula: &Formula| plain::text(formula, &table, Dialect::Language);
    let mut found = String::new();
    for section in &sections {
        for quantity in &section.quantities {
            let radicand = quantity.radicand.as_ref().map(text).unwrap_or_default();
            let factor = text(&quantity.factor);
            found.push_str(&format!(
                "{} {}: {factor} root {radicand}\n",
                section.order, quantity.name
            ));
        }
    }
    expect![[r#"
        0 gain: 1 root 
        2 w0: 1 root 1/(R1*R2*C1*C2)
        2 Q: 1/(R1 + R2) root R1*R2*C1/C2
    "#]]
    .assert_eq(&found);
}

/// The denominator of an RC ladder with different symbols in every section.
fn ladder(sections: u32) -> Polynomial {
    // D(k) and Y(k)·D(k), the input admittance times it, from the far end.
    let (mut whole, mut current) = (Polynomial::one(), Polynomial::zero());
    for section in 0..sections {
        let capacitor = Polynomial::monomial([(Var::S, 1), (Var(2 * section + 2), 1)], 1);
        let resistor = Polynomial::variable(Var(2 * section + 1));
        current = &current + &(&capacitor * &whole);
        whole = &whole + &(&resistor * &current);
    }
    whole
}

#[test]
fn long_polynomials_are_written_without_a_search() {
    for sections in [4, 7] {
        let fraction = Fraction::new(&Polynomial::one(), &ladder(sections)).expect("a fraction");
        let formula = compact(&fraction, Lettering::default());
        let value = |letter| match letter {
            Letter::Symbol(index) => Some(BigRational::from_integer((index + 2).into())),
            letter => value(letter),
        };
        let expected = fraction.evaluate(|variable| {
            value(Lettering::default().letter(variable)).expect("every letter has a value")
        });
        assert_eq!(formula.evaluate(value), expected);
        assert!(formula.symbols() < fraction.denominator().len() as u64 * 2);
    }
}
