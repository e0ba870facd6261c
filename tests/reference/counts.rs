//! Published numbers of spanning trees and resistances of graphs, on generated networks.
//!
//! With one conductance for each edge, the denominator of the impedance between two nodes is the
//! sum of one product for each spanning tree, and the numerator that of the spanning forests of two
//! trees that part the nodes (Kirchhoff 1847, Maxwell 1892). For a graph that stays connected without
//! any one of its nodes nothing cancels, so the count of terms is the count of trees.

use crate::quantity;
use crate::support::{exact, program, rational::Rational};
use pretty_assertions::assert_eq;
use std::fmt::Write;

/// A graph: its number of nodes and its edges.
struct Graph(usize, Vec<(usize, usize)>);

/// Node 0 is the reference.
fn node(index: usize) -> String {
    if index == 0 { "ground".into() } else { format!("n{index}") }
}

impl Graph {
    /// The number of spanning trees, as terms of the denominator of the impedance from node 1 to 0.
    fn trees(&self) -> Result<String, String> {
        let mut text = String::new();
        for (k, &(a, b)) in self.1.iter().enumerate() {
            let _ = writeln!(text, "{} > G{} > {}", node(a), k + 1, node(b));
        }
        text.push_str("ask Z = impedance(n1, ground)\n");
        let derived = program::derive_text(&text)?;
        let result = program::result(&derived, "Z")?;
        quantity::terms(&result["denominator"], &result["term_counts"])
    }

    /// The resistances from node 0 to others, with 1 ohm for each edge.
    fn resistances(&self, to: &[usize]) -> Result<Vec<String>, String> {
        let mut text = String::from("let R = 1 ohm\n");
        for (k, &(a, b)) in self.1.iter().enumerate() {
            let _ = writeln!(text, "{} > R{} = R > {}", node(a), k + 1, node(b));
        }
        for other in to {
            let _ = writeln!(text, "ask Z{other} = impedance({}, ground)", node(*other));
        }
        let derived = program::derive_text(&text)?;
        to.iter()
            .map(|other| {
                let result = program::result(&derived, &format!("Z{other}"))?;
                Ok(Rational::of(result)?.dc()?.to_string())
            })
            .collect()
    }
}

fn grid(rows: usize, columns: usize) -> Graph {
    let mut edges = Vec::new();
    for row in 0..rows {
        for column in 0..columns {
            let here = row * columns + column;
            if column + 1 < columns {
                edges.push((here, here + 1));
            }
            if row + 1 < rows {
                edges.push((here, here + columns));
            }
        }
    }
    Graph(rows * columns, edges)
}

fn complete(n: usize) -> Graph {
    Graph(n, (0..n).flat_map(|a| (a + 1..n).map(move |b| (a, b))).collect())
}

fn ring(n: usize) -> Vec<(usize, usize)> {
    (0..n).map(|k| (k, (k + 1) % n)).collect()
}

/// `copies` rings of n nodes, each node joined to that of the next ring.
fn tube(n: usize, copies: usize) -> Graph {
    let mut edges = Vec::new();
    for copy in 0..copies {
        edges.extend(ring(n).into_iter().map(|(a, b)| (copy * n + a, copy * n + b)));
        if copy > 0 {
            edges.extend((0..n).map(|k| ((copy - 1) * n + k, copy * n + k)));
        }
    }
    Graph(n * copies, edges)
}

/// A ring of 2n nodes with its diameters.
fn moebius_ladder(n: usize) -> Graph {
    let mut edges = ring(2 * n);
    edges.extend((0..n).map(|k| (k, k + n)));
    Graph(2 * n, edges)
}

/// A hub (node 0) joined to every node of a ring, or of a path.
fn hub(n: usize, closed: bool) -> Graph {
    let mut edges: Vec<_> = (1..=n).map(|k| (0, k)).collect();
    edges.extend((1..n).map(|k| (k, k + 1)));
    if closed {
        edges.push((n, 1));
    }
    Graph(n + 1, edges)
}

fn cube(dimensions: usize) -> Graph {
    let corners = 1 << dimensions;
    let edges = (0..corners)
        .flat_map(|a| (0..dimensions).map(move |bit| (a, a ^ (1 << bit))))
        .filter(|(a, b)| a < b)
        .collect();
    Graph(corners, edges)
}

/// Two rings of n: the outer one plain, the inner one in steps of `step`, with spokes between.
fn two_rings(n: usize, step: usize) -> Graph {
    let mut edges = ring(n);
    edges.extend((0..n).map(|k| (k, n + k)));
    edges.extend((0..n).map(|k| (n + k, n + (k + step) % n)));
    Graph(2 * n, edges)
}

fn octahedron() -> Graph {
    let edges = (0..6).flat_map(|a| (a + 1..6).map(move |b| (a, b)));
    Graph(6, edges.filter(|(a, b)| b - a != 3).collect())
}

/// Poles 0 and 11, between them two rings of five in a zigzag.
fn icosahedron() -> Graph {
    let (upper, lower) = (|k: usize| 1 + k % 5, |k: usize| 6 + k % 5);
    let mut edges = Vec::new();
    for k in 0..5 {
        edges.extend([(0, upper(k)), (upper(k), upper(k + 1)), (lower(k), lower(k + 1))]);
        edges.extend([(upper(k), lower(k)), (upper(k), lower(k + 1)), (lower(k), 11)]);
    }
    Graph(12, edges)
}

/// Compares rows of (name, graph, published count) and reports all that differ.
#[track_caller]
fn check(rows: Vec<(String, Graph, &str)>) {
    let found: Vec<(String, Result<String, String>)> =
        rows.iter().map(|(name, graph, _)| (name.clone(), graph.trees())).collect();
    let published: Vec<(String, Result<String, String>)> =
        rows.into_iter().map(|(name, _, trees)| (name, Ok(trees.to_owned()))).collect();
    assert_eq!(found, published);
}

fn family(
    name: &str,
    first: usize,
    graph: impl Fn(usize) -> Graph,
    published: &[&'static str],
) -> Vec<(String, Graph, &'static str)> {
    (first..).zip(published).map(|(n, trees)| (format!("{name} {n}"), graph(n), *trees)).collect()
}

#[test]
fn square_grids() {
    // OEIS A007341.
    let published = ["4", "192", "100352", "557568000", "32565539635200", "19872369301840986112"];
    check(family("grid", 2, |n| grid(n, n), &published));
}

#[test]
fn complete_graphs() {
    // n^(n-2): A. Cayley, 1889.
    check(family("complete", 3, complete, &["3", "16", "125", "1296", "16807", "262144"]));
}

#[test]
fn ladders_of_two_rails() {
    // OEIS A001353 (from memory): a(n) = 4*a(n-1) - a(n-2).
    check(family("ladder", 2, |n| grid(2, n), &["4", "15", "56", "209", "780", "2911"]));
}

#[test]
fn rings_in_a_tube() {
    // OEIS A003753.
    check(family(
        "ring of 4 times path",
        1,
        |n| tube(4, n),
        &["4", "384", "31500", "2558976", "207746836"],
    ));
}

#[test]
fn prisms_and_moebius_ladders() {
    // OEIS A006235 and A020871.
    check(family("prism", 3, |n| tube(n, 2), &["75", "384", "1805", "8100", "35287"]));
    check(family("moebius ladder", 2, moebius_ladder, &["16", "81", "392", "1815", "8112"]));
}

#[test]
fn wheels_and_fans() {
    // OEIS A004146 and A001906 (from memory): L(2n) - 2 and F(2n).
    check(family("wheel", 3, |n| hub(n, true), &["16", "45", "121", "320", "841", "2205"]));
    check(family("fan", 2, |n| hub(n, false), &["3", "8", "21", "55", "144", "377"]));
}

#[test]
fn solids_and_the_petersen_graph() {
    // 384 and 42467328 published (FindStat St000096); the others from memory.
    let row = |name: &str, graph, trees| (name.to_owned(), graph, trees);
    check(vec![
        row("petersen", two_rings(5, 2), "2000"),
        row("cube", cube(3), "384"),
        row("octahedron", octahedron(), "384"),
        row("icosahedron", icosahedron(), "5184000"),
        row("dodecahedron", two_rings_of_pentagons(), "5184000"),
        row("cube of four dimensions", cube(4), "42467328"),
    ]);
}

/// The dodecahedron as the generalised Petersen graph of 10 and 2.
fn two_rings_of_pentagons() -> Graph {
    two_rings(10, 2)
}

#[test]
fn low_pass_ladders() {
    // F(2n + 1): the sum over the coefficients C(n + k, 2k) (A. M. Morgan-Voyce, 1959; from memory).
    let (mut found, mut published) = (Vec::new(), Vec::new());
    for (n, count) in [(1, "2"), (2, "5"), (3, "13"), (6, "233"), (10, "10946"), (20, "165580141")]
    {
        let mut text = String::from("n0 > voltage Vin > ground\n");
        for k in 1..=n {
            let _ = writeln!(text, "n{} > R{k} > n{k} > C{k} > ground", k - 1);
        }
        let _ = writeln!(text, "ask H = V(n{n}) / Vin");
        found.push(program::derive_text(&text).and_then(|derived| {
            let result = program::result(&derived, "H")?;
            quantity::terms(&result["denominator"], &result["term_counts"])
        }));
        published.push(Ok(count.to_owned()));
    }
    assert_eq!(found, published);
}

#[test]
fn resistances_of_solids_by_distance() {
    // F. J. van Steenwijk, Am. J. Phys. 66, 1998 (from memory); those of the cube are published widely.
    // The opposite corners of the cube of four dimensions: (1/d)*sum of 1/C(d-1, k), from memory.
    let check = |name: &str, graph: &Graph, to: &[usize], published: &[&str]| {
        let published: Vec<String> = published.iter().map(|text| (*text).to_owned()).collect();
        assert_eq!(graph.resistances(to), Ok(published), "{name}");
    };
    check("cube", &cube(3), &[1, 3, 7], &["7/12", "3/4", "5/6"]);
    check("octahedron", &octahedron(), &[1, 3], &["5/12", "1/2"]);
    check("icosahedron", &icosahedron(), &[1, 6, 11], &["11/30", "7/15", "1/2"]);
    check(
        "dodecahedron",
        &two_rings_of_pentagons(),
        &[1, 2, 3, 4, 5],
        &["19/30", "9/10", "16/15", "17/15", "7/6"],
    );
    check("cube of four dimensions", &cube(4), &[15], &["2/3"]);
    check("complete", &complete(6), &[1], &["1/3"]);
}

#[test]
fn every_conductance_has_its_share_of_the_trees() {
    // R. M. Foster, 1949 (from memory): over the edges, the resistances of a connected graph of
    // unit resistors add up to one less than its nodes.
    let graph = cube(3);
    let mut sum = exact::number("0").expect("a number");
    for shift in 0..8 {
        let moved = Graph(8, graph.1.iter().map(|&(a, b)| (a ^ shift, b ^ shift)).collect());
        for resistance in moved.resistances(&[1, 2, 4]).expect("resistances") {
            sum += exact::number(&resistance).expect("a number");
        }
    }
    // Each edge was met from both of its ends.
    assert_eq!(sum.to_string(), (2 * (graph.0 - 1)).to_string());
}
