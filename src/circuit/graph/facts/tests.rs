//! Facts of small circuits, written in the language of the circuit files.

use super::{Facts, facts};
use crate::circuit::{Circuit, ElementId};
use crate::language;
use pretty_assertions::assert_eq;

fn read(text: &str) -> Circuit {
    let reading = language::read(text);
    reading.circuit.unwrap_or_else(|| panic!("{text}: {:?}", reading.diagnostics))
}

fn of(text: &str) -> Facts {
    facts(&read(text))
}

fn names(text: &str, ids: &[ElementId]) -> Vec<String> {
    let circuit = read(text);
    ids.iter().map(|&id| circuit[id].name.clone()).collect()
}

#[test]
fn order_of_complexity() {
    let check = |text: &str, order: usize, exact: bool| {
        let found = of(text).order;
        assert_eq!((found.order, found.exact), (order, exact), "{text}\n{found:?}");
    };
    // Textbook cases (common practice): each loop and each cut-set takes one.
    let ring = "a > C1 > b > C2 > c > C3 > a\na > R1 > ground\nb > R2 > ground\nc > wire > d\n";
    check(ring, 2, true);
    check("m > L1 > a > R1 > ground\nm > L2 > b > R2 > ground\nm > L3 > ground\n", 2, true);
    check("a > voltage V1 > ground\na > C1 > ground\na > R1 > b > C2 > ground\n", 1, true);
    check("ground > current I1 > a > L1 > b > R1 > ground\nb > C1 > ground\n", 1, true);
    check(
        "in > R1 > a > C1 > ground\na > L1 > b > R2 || C2 > ground\nin > voltage V1 > gnd\n",
        3,
        true,
    );
    // A capacitor across an ideal output never sees a current that matters.
    check(
        "in > voltage V1 > gnd\nin > R1 > m > C1 > out > C2 > gnd\nopamp U1: plus gnd, minus m, output out\n",
        1,
        false,
    );
    // s in a value counts with its degree.
    check("in > voltage V1 > gnd\nin > Z1 = R + s*L + 1/(s*C) > gnd\n", 2, false);
}

#[test]
fn loops_and_cutsets_are_named() {
    let ring = "a > C1 > b > C2 > c > C3 > a\na > R1 > ground\nb > R2 > ground\nc > R3 > ground\n";
    assert_eq!(names(ring, &of(ring).order.capacitor_loops[0]), ["C1", "C2", "C3"]);
    let star = "m > L1 > a > R1 > ground\nm > L2 > b > R2 > ground\nm > L3 > ground\n";
    assert_eq!(names(star, &of(star).order.inductor_cutsets[0]), ["L1", "L2", "L3"]);
    let sources =
        "a > voltage V1 > ground\na > voltage V2 = 2*V(b) > ground\na > R1 > b > R2 > gnd\n";
    assert_eq!(names(sources, &of(sources).voltage_loop.expect("a loop")), ["V1", "V2"]);
    let stacked = "ground > current I1 > a > current I2 = g*V(b) > ground\nb > R > gnd\n";
    assert_eq!(names(stacked, &of(stacked).current_cutset.expect("a cut-set")), ["I1", "I2"]);
}

#[test]
fn counts_of_a_bridge() {
    let bridge = "a > voltage V1 > ground\na > R1 > b > R2 > ground\na > R3 > c > R4 > ground\nb > R5 > c > R6 > d\n";
    let found = of(bridge);
    assert_eq!((found.branches, found.loops, found.cutsets, found.parts.len()), (7, 3, 4, 1));
    assert!(found.planar && !found.series_parallel);
    assert_eq!(names(bridge, &found.bridges), ["R6"]);
    assert_eq!(found.cut_nodes.len(), 1);
    assert_eq!(found.charge_groups, []);
}

#[test]
fn capacitor_only_nodes_and_floating_parts() {
    let divider = "in > voltage V1 > ground\nin > C1 > out > C2 > ground\n";
    let found = of(divider);
    assert_eq!(found.charge_groups.len(), 1);
    assert_eq!(names(divider, &found.charge_groups[0].capacitors), ["C1", "C2"]);
    let floating = "in > voltage V1 > ground\nin > R1 > gnd\na > R2 > b\n";
    assert_eq!(of(floating).parts.len(), 2);
}

#[test]
fn complete_graphs_of_resistors() {
    let complete = |nodes: usize| {
        let mut text = String::new();
        for a in 0..nodes {
            for b in 0..a {
                let name = |node: usize| if node == 0 { "gnd".into() } else { format!("n{node}") };
                text.push_str(&format!("{} > R{a}_{b} > {}\n", name(a), name(b)));
            }
        }
        of(&text)
    };
    assert!(complete(4).planar && !complete(4).series_parallel);
    assert!(!complete(5).planar);
}
