//! The k-port rule against the table of the classical elements, and small networks by hand.

use pretty_assertions::assert_eq;

use super::choice::{MultiPort, Pair};
use crate::algebra::{Polynomial, Var};

const AB: Pair = Pair(1, 2);
const CD: Pair = Pair(3, 4);

fn x(index: u32) -> Polynomial {
    Polynomial::variable(Var(index))
}

fn n(value: i64) -> Polynomial {
    Polynomial::from(value)
}

/// An element's alternatives up to one common sign, as {weight: merges}, sorted.
#[track_caller]
fn check(
    ports: &[Pair],
    a: Vec<Vec<Polynomial>>,
    b: Vec<Vec<Polynomial>>,
    mut expect: Vec<(Polynomial, Vec<Pair>, Vec<Pair>)>,
) {
    let choice = MultiPort { ports: ports.to_vec(), a, b }.choice();
    let mut found: Vec<(Polynomial, Vec<Pair>, Vec<Pair>)> = choice
        .alternatives
        .into_iter()
        .map(|alternative| (alternative.weight, alternative.current, alternative.voltage))
        .collect();
    let key = |entry: &(Polynomial, Vec<Pair>, Vec<Pair>)| (entry.1.clone(), entry.2.clone());
    found.sort_by_key(key);
    expect.sort_by_key(key);
    if found[0].0 != expect[0].0 {
        for entry in &mut found {
            entry.0 = -&entry.0;
        }
    }
    assert_eq!(found, expect);
}

#[test]
fn one_ports() {
    // v = R·i
    check(
        &[AB],
        vec![vec![n(1)]],
        vec![vec![-&x(1)]],
        vec![(n(1), vec![AB], vec![AB]), (x(1), vec![], vec![])],
    );
    // i = s·C·v
    let sc = &x(0) * &x(1);
    check(
        &[AB],
        vec![vec![-&sc]],
        vec![vec![n(1)]],
        vec![(n(1), vec![], vec![]), (sc.clone(), vec![AB], vec![AB])],
    );
}

#[test]
fn dependent_sources() {
    // i(ab) = g·v(cd)
    check(
        &[AB, CD],
        vec![vec![n(0), -&x(1)], vec![n(0), n(0)]],
        vec![vec![n(1), n(0)], vec![n(0), n(1)]],
        vec![(n(1), vec![], vec![]), (x(1), vec![AB], vec![CD])],
    );
    // v(ab) = μ·v(cd)
    check(
        &[AB, CD],
        vec![vec![n(1), -&x(1)], vec![n(0), n(0)]],
        vec![vec![n(0), n(0)], vec![n(0), n(1)]],
        vec![(n(1), vec![AB], vec![AB]), (-&x(1), vec![AB], vec![CD])],
    );
    // i(ab) = β·i in the short cd
    check(
        &[CD, AB],
        vec![vec![n(1), n(0)], vec![n(0), n(0)]],
        vec![vec![n(0), n(0)], vec![-&x(1), n(1)]],
        vec![(n(1), vec![CD], vec![CD]), (x(1), vec![AB], vec![CD])],
    );
    // v(ab) = r·i in the short cd
    check(
        &[CD, AB],
        vec![vec![n(1), n(0)], vec![n(0), n(1)]],
        vec![vec![n(0), n(0)], vec![-&x(1), n(0)]],
        vec![(n(1), vec![CD, AB], vec![CD, AB]), (-&x(1), vec![AB], vec![CD])],
    );
}

#[test]
fn a_current_source_that_follows_a_resistor() {
    // v(cd) = R·i(cd), i(ab) = β·i(cd)
    check(
        &[CD, AB],
        vec![vec![n(1), n(0)], vec![n(0), n(0)]],
        vec![vec![-&x(2), n(0)], vec![-&x(1), n(1)]],
        vec![(x(2), vec![], vec![]), (n(1), vec![CD], vec![CD]), (x(1), vec![AB], vec![CD])],
    );
}

#[test]
fn an_ideal_amplifier() {
    let (output, input) = (Pair(5, 0), Pair(1, 2));
    check(
        &[output, input],
        vec![vec![n(0), n(1)], vec![n(0), n(0)]],
        vec![vec![n(0), n(0)], vec![n(0), n(1)]],
        vec![(n(1), vec![output], vec![input])],
    );
}

#[test]
fn magnetic_two_ports() {
    let (s, l1, l2, m) = (x(0), x(1), x(2), x(3));
    // v1 = s·L1·i1 + s·M·i2, v2 = s·M·i1 + s·L2·i2
    check(
        &[AB, CD],
        vec![vec![n(1), n(0)], vec![n(0), n(1)]],
        vec![vec![-&(&s * &l1), -&(&s * &m)], vec![-&(&s * &m), -&(&s * &l2)]],
        vec![
            (&(&s * &s) * &(&(&l1 * &l2) - &(&m * &m)), vec![], vec![]),
            (&s * &l1, vec![CD], vec![CD]),
            (&s * &l2, vec![AB], vec![AB]),
            (-&(&s * &m), vec![AB], vec![CD]),
            (-&(&s * &m), vec![CD], vec![AB]),
            (n(1), vec![AB, CD], vec![AB, CD]),
        ],
    );
    // v1 = n·v2, i2 = −n·i1
    check(
        &[AB, CD],
        vec![vec![n(1), -&x(1)], vec![n(0), n(0)]],
        vec![vec![n(0), n(0)], vec![x(1), n(1)]],
        vec![
            (n(1), vec![AB], vec![AB]),
            (-&x(1), vec![CD], vec![AB]),
            (-&x(1), vec![AB], vec![CD]),
            (x(1).pow(2), vec![CD], vec![CD]),
        ],
    );
    // i1 = g·v2, i2 = −g·v1
    check(
        &[AB, CD],
        vec![vec![n(0), -&x(1)], vec![x(1), n(0)]],
        vec![vec![n(1), n(0)], vec![n(0), n(1)]],
        vec![
            (n(1), vec![], vec![]),
            (x(1), vec![AB], vec![CD]),
            (-&x(1), vec![CD], vec![AB]),
            // I(1,2) V(2,1) with −g² is I(1,2) V(1,2) with g².
            (x(1).pow(2), vec![AB, CD], vec![AB, CD]),
        ],
    );
}
mod networks {
    use num_bigint::BigUint;
    use num_traits::Zero;
    use pretty_assertions::assert_eq;

    use super::super::testing::{Bench, transfer};
    use super::super::{Elimination, EliminationError, Limits, symbol_of};
    use crate::algebra::{Polynomial, Var};
    use crate::circuit::{Circuit, Drive, Probe, Quantity, Transfer};

    fn solve(circuit: &Circuit, transfer: &Transfer) -> Result<Elimination, EliminationError> {
        Elimination::new(circuit, transfer, &Limits::default())
    }

    /// A polynomial with the circuit's names, terms as the algebra sorts them.
    fn shown(circuit: &Circuit, polynomial: &Polynomial) -> String {
        let mut terms: Vec<String> = polynomial
            .terms()
            .map(|(powers, coefficient)| {
                let mut factors: Vec<String> = powers
                    .map(|(variable, power)| {
                        let name = symbol_of(variable)
                            .map_or("s".to_owned(), |symbol| circuit[symbol].name.clone());
                        if power == 1 { name } else { format!("{name}^{power}") }
                    })
                    .collect();
                factors.sort();
                if coefficient != 1.into() || factors.is_empty() {
                    factors.insert(0, coefficient.to_string());
                }
                factors.join("*")
            })
            .collect();
        terms.sort();
        terms.join(" + ")
    }

    #[track_caller]
    fn check(bench: &Bench, transfer: &Transfer, numerator: &str, denominator: &str) {
        let answer = solve(&bench.circuit, transfer).expect("a unique solution");
        let (mut n, mut d) = answer.expand();
        if d.is_negative() {
            (n, d) = (-n, -d);
        }
        let found = (shown(&bench.circuit, &n), shown(&bench.circuit, &d));
        assert_eq!(found, (numerator.to_owned(), denominator.to_owned()));
    }

    #[test]
    fn a_divider_and_its_impedance() {
        let mut bench = Bench::new();
        let source = bench.voltage("Vin", "in", "0");
        bench.part("R1", "in", "out");
        bench.part("R2", "out", "0");
        let gain = bench.gain("out", source);
        check(&bench, &gain, "R2", "R1 + R2");
        let impedance = bench.impedance("out", "0");
        check(&bench, &impedance, "R1*R2", "R1 + R2");
        let current = transfer(
            Drive::Source(source),
            Probe::Current(crate::circuit::ElementId(2)),
            Probe::Drive,
        );
        check(&bench, &current, "1", "R1 + R2");
        // The source delivers the current, so its own is negative.
        let current = transfer(Drive::Source(source), Probe::Current(source), Probe::Drive);
        check(&bench, &current, "-1", "R1 + R2");
    }

    #[test]
    fn a_current_into_a_load() {
        let mut bench = Bench::new();
        let source = bench.current("Iin", "0", "out");
        bench.part("R1", "out", "0");
        bench.part("C1", "out", "0");
        let gain = bench.gain("out", source);
        check(&bench, &gain, "R1", "1 + C1*R1*s");
    }

    #[test]
    fn an_inverting_amplifier_and_a_second_order_filter() {
        let mut bench = Bench::new();
        let source = bench.voltage("Vin", "in", "0");
        bench.part("R1", "in", "m");
        bench.part("R2", "m", "out");
        bench.opamp("U1", "0", "m", "out");
        let gain = bench.gain("out", source);
        check(&bench, &gain, "-1*R2", "R1");

        let mut bench = Bench::new();
        let source = bench.voltage("Vin", "in", "0");
        bench.part("R1", "in", "x");
        bench.part("R2", "x", "y");
        bench.part("C2", "y", "0");
        bench.part("C1", "x", "out");
        bench.opamp("U1", "y", "out", "out");
        let gain = bench.gain("out", source);
        check(&bench, &gain, "1", "1 + C1*C2*R1*R2*s^2 + C2*R1*s + C2*R2*s");
    }

    #[test]
    fn dependent_sources() {
        let mut bench = Bench::new();
        let source = bench.voltage("Vin", "in", "0");
        let (input, ground) = (bench.node("in"), bench.node("0"));
        bench.controlled("g", "out", "0", Quantity::Voltage(input, ground));
        let load = bench.part("R1", "out", "0");
        bench.controlled("A", "a", "0", Quantity::Current(load));
        bench.part("R2", "a", "b");
        bench.part("R3", "b", "0");
        bench.controlled("k", "c", "0", Quantity::Current(load));
        bench.part("R4", "c", "0");
        let gain = bench.gain("out", source);
        check(&bench, &gain, "-1*R1*g", "1");
        let gain = bench.gain("a", source);
        check(&bench, &gain, "-1*A*g", "1");
        let gain = bench.gain("b", source);
        check(&bench, &gain, "-1*A*R3*g", "R2 + R3");
        let gain = bench.gain("c", source);
        check(&bench, &gain, "R4*g*k", "1");
    }

    #[test]
    fn a_mirror_follows_a_resistor_without_a_node_of_its_own() {
        let mut bench = Bench::new();
        let source = bench.voltage("Vin", "in", "0");
        let sense = bench.part("R1", "in", "0");
        bench.controlled("k", "out", "0", Quantity::Current(sense));
        bench.part("R2", "out", "0");
        let gain = bench.gain("out", source);
        check(&bench, &gain, "-1*R2*k", "R1");
    }

    #[test]
    fn parts_without_ground() {
        let mut bench = Bench::new();
        bench.part("R1", "a", "b");
        bench.part("R2", "b", "c");
        let whole = bench.impedance("a", "c");
        let answer = solve(&bench.circuit, &whole).expect("a difference inside one part");
        assert_eq!(answer.grounded_parts().len(), 1);
        check(&bench, &whole, "R1 + R2", "1");
        let to_ground = bench.impedance("a", "0");
        assert!(matches!(
            solve(&bench.circuit, &to_ground),
            Err(EliminationError::NoReturnPath(..))
        ));
    }

    #[test]
    fn no_unique_solution() {
        let mut bench = Bench::new();
        let source = bench.voltage("V1", "in", "0");
        bench.voltage("V2", "in", "0");
        bench.part("R1", "in", "0");
        let gain = bench.gain("in", source);
        assert_eq!(solve(&bench.circuit, &gain).err(), Some(EliminationError::Singular));
    }

    /// Whatever controls it, a voltage source with both ends on one node leaves its current open.
    #[test]
    fn a_controlled_source_on_one_node_has_no_unique_solution() {
        for inputs in [("x", "x"), ("x", "in")] {
            let mut bench = Bench::new();
            let source = bench.voltage("Vin", "in", "0");
            bench.part("R1", "in", "x");
            bench.part("R2", "x", "0");
            let control = Quantity::Voltage(bench.node(inputs.0), bench.node(inputs.1));
            bench.controlled("A", "0", "0", control);
            let gain = bench.gain("x", source);
            let answer = solve(&bench.circuit, &gain);
            assert_eq!(answer.err(), Some(EliminationError::Singular), "{inputs:?}");
        }
    }

    #[test]
    fn what_cannot_matter_is_left_out() {
        let mut bench = Bench::new();
        let source = bench.voltage("Vin", "in", "0");
        bench.part("R1", "in", "out");
        bench.part("C1", "out", "0");
        // Across the source; a part of its own; a dead end.
        bench.part("R2", "in", "0");
        bench.part("R3", "p", "q");
        bench.part("C3", "q", "p");
        bench.part("R4", "out", "end");
        let gain = bench.gain("out", source);
        check(&bench, &gain, "1", "1 + C1*R1*s");
        let answer = solve(&bench.circuit, &gain).expect("a unique solution");
        assert_eq!(answer.independent_elements().len(), 4);
    }

    /// Spanning trees of grids (OEIS A007341) and of complete graphs (Cayley 1889).
    #[test]
    fn spanning_trees_are_counted() {
        let trees = |bench: &mut Bench| {
            let impedance = bench.impedance("1", "0");
            let counts = solve(&bench.circuit, &impedance).expect("connected").count_terms();
            assert!(counts.exact);
            counts.denominator.iter().fold(BigUint::zero(), |sum, count| sum + count)
        };
        let name = |node: usize| if node == 0 { "0".to_owned() } else { node.to_string() };
        for (n, expect) in [
            (2, "4"),
            (3, "192"),
            (4, "100352"),
            (5, "557568000"),
            (6, "32565539635200"),
            (7, "19872369301840986112"),
        ] {
            let mut bench = Bench::new();
            for row in 0..n {
                for column in 0..n {
                    let node = row * n + column;
                    if column + 1 < n {
                        bench.part(&format!("Ga{node}"), &name(node), &name(node + 1));
                    }
                    if row + 1 < n {
                        bench.part(&format!("Gb{node}"), &name(node), &name(node + n));
                    }
                }
            }
            assert_eq!(trees(&mut bench).to_string(), expect, "grid {n}");
        }
        for n in 2..8_u32 {
            let mut bench = Bench::new();
            for a in 0..n as usize {
                for b in a + 1..n as usize {
                    bench.part(&format!("G{a}_{b}"), &name(a), &name(b));
                }
            }
            assert_eq!(trees(&mut bench), BigUint::from(n.pow(n - 2)), "complete graph {n}");
        }
    }

    #[test]
    fn integer_coefficients_agree_with_the_expansion() {
        let mut bench = Bench::new();
        let source = bench.voltage("Vin", "in", "0");
        bench.part("R1", "in", "x");
        bench.part("C1", "x", "0");
        bench.part("R2", "x", "out");
        bench.part("C2", "out", "0");
        bench.part("L1", "out", "0");
        let gain = bench.gain("out", source);
        let answer = solve(&bench.circuit, &gain).expect("a unique solution");
        let value = |variable: Var| {
            num_rational::BigRational::new((3 * variable.0 + 1).into(), (variable.0 + 2).into())
        };
        let [n, d] = answer.coefficients(value);
        let (pn, pd) = answer.expand();
        // One common factor: cross products agree.
        let at = |p: &Polynomial, k: usize| p.coefficient(Var::S, k as u32).evaluate(value);
        let first = (0..d.len()).find(|&k| !d[k].is_zero()).expect("not 0");
        for (integers, polynomial) in [(&n, &pn), (&d, &pd)] {
            for (k, integer) in integers.iter().enumerate() {
                assert_eq!(at(polynomial, k) * &d[first], at(&pd, first) * integer);
            }
        }
    }
}
