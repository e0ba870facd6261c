//! Poles and zeros of the handbooks' filters (tests/reference), and of random circuits by a numeric
//! library (tests/data/pencil.txt).

use super::{check_places, places, reference, roots};
use std::fs;

fn beside_tests(relative: &str) -> String {
    let path = format!("{}/tests/{relative}", env!("CARGO_MANIFEST_DIR"));
    fs::read_to_string(&path).unwrap_or_else(|error| panic!("{path}: {error}"))
}

/// `-0.5-0.8j`
fn complex(text: &str) -> (f64, f64) {
    let number = |text: &str| text.parse::<f64>().unwrap_or_else(|_| panic!("`{text}`"));
    let Some(body) = text.strip_suffix('j') else { return (number(text), 0.0) };
    let sign = |&(at, c): &(usize, char)| at > 0 && "+-".contains(c) && !body[..at].ends_with('e');
    let (at, _) = body.char_indices().rev().find(sign).unwrap_or((0, ' '));
    (if at == 0 { 0.0 } else { number(&body[..at]) }, number(&body[at..]))
}

/// Every row of the filters with a list of poles or zeros; the table names the sources.
#[test]
fn filters_have_their_published_poles_and_zeros() {
    let table = beside_tests("reference/b-filters.txt");
    let (mut found, mut rows, mut families) = (None, 0, std::collections::BTreeSet::new());
    for line in table.lines() {
        if let Some(file) = line.strip_prefix("file: ") {
            let stem = file.trim().trim_end_matches(".circuit");
            families.insert(stem.split('-').next().unwrap_or(stem).to_owned());
            found = Some(roots(&reference(stem), &[]));
            continue;
        }
        let fields: Vec<&str> = line.split(" | ").map(str::trim).collect();
        let [_, which @ ("poles" | "zeros"), list, tolerance] = fields[..] else { continue };
        let expected: Vec<(f64, f64)> = list.split(',').map(|one| complex(one.trim())).collect();
        let tolerance: f64 = tolerance.parse().expect("a tolerance");
        let list = &found.as_ref().expect("a file before its rows")[which];
        check_places(list, &expected, tolerance);
        rows += 1;
    }
    assert!(rows >= 15, "{rows}");
    for family in ["butterworth", "chebyshev", "bessel", "elliptic"] {
        assert!(families.contains(family), "{family}");
    }
}

/// The finite generalised eigenvalues of the nodal equations, which are the poles.
#[test]
fn random_circuits_have_the_eigenvalues_of_their_pencils() {
    let data = beside_tests("data/pencil.txt");
    let mut circuits = 0;
    for block in data.split("\n\n").skip(1) {
        let is_pole = |line: &&str| line.starts_with("pole ");
        let circuit: String =
            block.lines().filter(|line| !is_pole(line)).map(|line| format!("{line}\n")).collect();
        let expected: Vec<(f64, f64)> = block
            .lines()
            .filter(is_pole)
            .map(|line| {
                let parts: Vec<f64> =
                    line.split(' ').skip(1).map(|part| part.parse().expect("a number")).collect();
                (parts[0], parts[1])
            })
            .collect();
        let found = roots(&circuit, &[]);
        assert_eq!(places(&found["poles"]).len(), expected.len(), "{block}");
        check_places(&found["poles"], &expected, 1e-9);
        circuits += 1;
    }
    assert_eq!(circuits, 60);
}
