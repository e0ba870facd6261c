//! Every picture keeps its nodes apart, its texts readable and its size bounded.

use super::{Drawing, MOST_ELEMENTS, draw};
use crate::circuit::graph::NodeSets;
use crate::circuit::{Circuit, Class, Element, ElementId, GROUND, Law, NodeId, Number, Value};
use crate::language;
use pretty_assertions::assert_eq;

fn read(text: &str) -> Circuit {
    let reading = language::read(text);
    reading.circuit.unwrap_or_else(|| panic!("{text}: {:?}", reading.diagnostics))
}

/// The circuits of the examples and of the textbook tests that can be read.
fn circuits() -> Vec<(String, Circuit)> {
    let mut all = Vec::new();
    for folder in ["examples", "tests/textbook"] {
        let path = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join(folder);
        let mut files: Vec<_> = std::fs::read_dir(path)
            .expect(folder)
            .filter_map(|entry| Some(entry.ok()?.path()))
            .collect();
        files.sort();
        for file in files.iter().filter(|file| file.extension().is_some_and(|e| e == "circuit")) {
            let text = std::fs::read_to_string(file).expect("a file");
            if let Some(circuit) = language::read(&text).circuit {
                all.push((file.display().to_string(), circuit));
            }
        }
    }
    assert!(all.len() > 30);
    all.push(("two-ports".to_owned(), two_ports()));
    all.push(("cascade".to_owned(), cascade(8)));
    all
}

/// A transformer, a gyrator, a nullor and coupled inductors in one.
fn two_ports() -> Circuit {
    let mut circuit = read(
        "in > voltage V1 > ground\nin > R1 > a > L1 = 1 mH > b > R2 > c\nb > L2 = 2 mH > ground\n\
         c > R3 > d > R4 > ground\nd > R5 > e > R6 > f\nf > R7 > ground\ne > R8 > g > R9 > h > R10 > f\n",
    );
    let node = |circuit: &Circuit, name: &str| circuit.node(name).expect("a node");
    let one = Value::Number(Number::from_integer(1.into()));
    let add = |circuit: &mut Circuit, name: &str, class, ends: (NodeId, NodeId), law| {
        let (plus, minus) = ends;
        circuit.elements.push(Element { name: name.into(), class, plus, minus, law, line: 0 });
    };
    let [a, c, d, e, g, h] = ["a", "c", "d", "e", "g", "h"].map(|name| node(&circuit, name));
    let law = Law::Transformer { ratio: one.clone(), secondary: (d, GROUND) };
    add(&mut circuit, "T1", Class::Transformer, (c, GROUND), law);
    let law = Law::Gyrator { conductance: one.clone(), second: (e, GROUND) };
    add(&mut circuit, "Y1", Class::Gyrator, (d, a), law);
    add(&mut circuit, "N1", Class::Nullor, (h, g), Law::Nullor(e, GROUND));
    let [first, second] =
        ["L1", "L2"].map(|name| -> ElementId { circuit.element(name).expect("an inductor") });
    let law = Law::Mutual { first, second, inductance: one };
    add(&mut circuit, "M1", Class::Mutual, (GROUND, GROUND), law);
    circuit
}

/// Transistor stages with feedback over two of them.
fn cascade(stages: usize) -> Circuit {
    let mut text = "n0 > voltage Vin > ground\n".to_owned();
    for stage in 1..=stages {
        let before = stage - 1;
        text.push_str(&format!(
            "bjt Q{stage}: base n{before}, collector n{stage}, emitter e{stage}, gm, rpi, ro, Cpi, Cmu\n\
             e{stage} > RE{stage} > ground\nn{stage} > RC{stage} = 4.7 kΩ > ground\n"
        ));
        if stage > 2 {
            text.push_str(&format!("n{stage} > RF{stage} > n{}\n", stage - 2));
        }
    }
    read(&text)
}

/// Names of nodes that the wires join although they are different.
fn false_joins(drawing: &Drawing) -> Vec<String> {
    let wires = &drawing.canvas.wires;
    let on = |wire: &[f64; 4], x: f64, y: f64| {
        let [x1, y1, x2, y2] = *wire;
        let close = |a: f64, b: f64| (a - b).abs() < 0.01;
        let between = |at: f64, a: f64, b: f64| at > a.min(b) - 0.01 && at < a.max(b) + 0.01;
        (close(x1, x2) && close(x, x1) && between(y, y1, y2))
            || (close(y1, y2) && close(y, y1) && between(x, x1, x2))
    };
    let mut sets = NodeSets::new(wires.len());
    for (a, wire) in wires.iter().enumerate() {
        for (b, other) in wires.iter().enumerate() {
            if on(other, wire[0], wire[1]) || on(other, wire[2], wire[3]) {
                sets.join(a as u32, b as u32);
            }
        }
    }
    let mut names = std::collections::BTreeMap::new();
    let mut joined = Vec::new();
    for text in drawing.canvas.texts.iter().filter(|text| text.face == super::canvas::Face::Node) {
        for (index, wire) in wires.iter().enumerate() {
            if on(wire, text.x, text.y + super::place::NAME_RISE) {
                let name = names.entry(sets.find(index as u32)).or_insert(&text.content);
                if *name != &text.content {
                    joined.push(format!("{name} {}", text.content));
                }
            }
        }
    }
    joined
}

#[test]
fn different_nodes_are_never_joined() {
    for (name, circuit) in circuits() {
        assert_eq!(false_joins(&draw(&circuit)), Vec::<String>::new(), "{name}");
    }
}

#[test]
fn texts_lie_on_nothing_and_inside_the_sheet() {
    for (name, circuit) in circuits() {
        let drawing = draw(&circuit);
        let texts = drawing.texts();
        let (wide, high) = drawing.size();
        for (index, (room, words)) in texts.iter().enumerate() {
            let inside =
                room.left >= 0.0 && room.top >= 0.0 && room.right <= wide && room.bottom <= high;
            assert!(inside, "{name}: `{words}` at {room:?} on {wide} by {high}");
            for (other, others_words) in &texts[index + 1..] {
                assert!(!room.overlaps(other), "{name}: `{words}` on `{others_words}`");
            }
            let sign = words.chars().count() == 1;
            for body in drawing.bodies().iter().filter(|_| !sign) {
                assert!(!room.overlaps(body), "{name}: `{words}` on a symbol");
            }
        }
    }
}

#[test]
fn every_element_is_named_and_the_bytes_are_the_same_again() {
    for (name, circuit) in circuits() {
        let drawing = draw(&circuit);
        for element in &circuit.elements {
            let named = drawing.texts().iter().any(|(_, words)| {
                *words == element.name || words.starts_with(&format!("{} ", element.name))
            });
            assert!(named, "{name}: {} is missing", element.name);
        }
        assert_eq!(drawing.svg(), draw(&circuit).svg(), "{name}");
    }
}

#[test]
fn a_large_circuit_gets_a_note() {
    let mut text = "n0 > voltage Vin > ground\n".to_owned();
    for section in 1..=MOST_ELEMENTS {
        text.push_str(&format!("n{} > R{section} > n{section} > C{section} > gnd\n", section - 1));
    }
    let drawing = draw(&read(&text));
    assert!(drawing.size().0 < 1000.0 && drawing.svg().contains("too many"));
}

#[test]
fn a_circuit_without_elements_has_a_sheet() {
    assert!(draw(&Circuit::default()).svg().starts_with("<svg"));
}
