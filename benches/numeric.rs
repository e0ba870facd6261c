//! The witnesses on long and on wide networks, 41 frequencies each.

#![forbid(unsafe_code)]

use cofactor::circuit::{
    Circuit, Class, Drive, Element, ElementId, GROUND, Law, Node, NodeId, Number, Probe, Transfer,
    Unit, Value,
};
use cofactor::numeric::{PRIMES, Sweep, exact, modular_value, response};
use num_complex::Complex;

fn main() {
    divan::main();
}

/// An RC network with a source from ground to node 1.
fn network(nodes: u32, edges: &[(u32, u32)], last: u32) -> (Circuit, Transfer) {
    let mut circuit = Circuit::default();
    for k in 0..=nodes {
        circuit.nodes.push(Node { name: format!("n{k}"), aliases: Vec::new() });
    }
    let mut add = |name: String, class, plus, minus, law| {
        circuit.elements.push(Element { name, class, plus, minus, law, line: 0 });
    };
    let value = |k: u32| Value::Number(Number::new((8 + k % 57).into(), 16.into()));
    add("Vin".to_owned(), Class::Voltage, NodeId(1), GROUND, Law::VoltageSource);
    for (k, (a, b)) in (0..).zip(edges) {
        let law = Law::Impedance(value(k));
        add(format!("R{k}"), Class::Resistor, NodeId(*a), NodeId(*b), law);
    }
    for k in 2..=nodes {
        let law = Law::Admittance(Value::Product(vec![Value::S, value(k)]));
        add(format!("C{k}"), Class::Capacitor, NodeId(k), GROUND, law);
    }
    let transfer = Transfer {
        drive: Drive::Source(ElementId(0)),
        numerator: Probe::Voltage(NodeId(last), GROUND),
        denominator: Probe::Drive,
        removed: Vec::new(),
        unit: Unit::ONE,
    };
    (circuit, transfer)
}

fn ladder(sections: u32) -> (Circuit, Transfer) {
    let edges: Vec<_> = (1..=sections).map(|k| (k, k + 1)).collect();
    network(sections + 1, &edges, sections.min(20) + 1)
}

fn mesh(width: u32, height: u32) -> (Circuit, Transfer) {
    let at = |x: u32, y: u32| 1 + y * width + x;
    let mut edges = Vec::new();
    for y in 0..height {
        for x in 0..width {
            if x + 1 < width {
                edges.push((at(x, y), at(x + 1, y)));
            }
            if y + 1 < height {
                edges.push((at(x, y), at(x, y + 1)));
            }
        }
    }
    network(width * height, &edges, at(3, 3))
}

fn hertz() -> Vec<f64> {
    (0..41).map(|k| libm::pow(10.0, -2.0 + 0.1 * f64::from(k))).collect()
}

#[divan::bench]
fn ladder_1000_response(bencher: divan::Bencher<'_, '_>) {
    let (circuit, transfer) = ladder(1000);
    bencher.bench(|| response(&circuit, &transfer, &hertz(), &[]));
}

#[divan::bench]
fn mesh_500_response(bencher: divan::Bencher<'_, '_>) {
    let (circuit, transfer) = mesh(25, 20);
    bencher.bench(|| response(&circuit, &transfer, &hertz(), &[]));
}

#[divan::bench]
fn ladder_1000_examined(bencher: divan::Bencher<'_, '_>) {
    let (circuit, transfer) = ladder(1000);
    bencher.bench(|| examined(&circuit, &transfer));
}

#[divan::bench]
fn mesh_500_examined(bencher: divan::Bencher<'_, '_>) {
    let (circuit, transfer) = mesh(25, 20);
    bencher.bench(|| examined(&circuit, &transfer));
}

fn examined(circuit: &Circuit, transfer: &Transfer) -> f64 {
    let mut sweep = Sweep::new(circuit, transfer, &[]).expect("a sweep");
    let points = hertz().into_iter().map(|f| {
        let s = Complex::new(0.0, std::f64::consts::TAU * f);
        sweep.examine(s).expect("an answer").error_bound
    });
    points.fold(0.0, f64::max)
}

#[divan::bench]
fn mesh_500_modular(bencher: divan::Bencher<'_, '_>) {
    let (circuit, transfer) = mesh(25, 20);
    bencher.bench(|| modular_value(&circuit, &transfer, PRIMES[0], 12_345, &[]));
}

#[divan::bench(args = [5, 10, 20, 30])]
fn ladder_exact(bencher: divan::Bencher<'_, '_>, sections: u32) {
    let (circuit, transfer) = ladder(sections);
    bencher.bench(|| exact(&circuit, &transfer, &[]));
}

#[divan::bench(args = [4, 5, 6])]
fn mesh_exact(bencher: divan::Bencher<'_, '_>, width: u32) {
    let (circuit, transfer) = mesh(width, width);
    bencher.bench(|| exact(&circuit, &transfer, &[]));
}
