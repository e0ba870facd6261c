//! A circuit over time by numeric integration: the trapezoidal rule on the nodal equations.
//!
//! G·x + C·x' = b for a step of 1 at t = 0, where x holds node voltages and the currents of sources, op-amps
//! and inductors. One short backward Euler step conserves charge and flux over the jump; then come
//! trapezoidal steps of three widths, extrapolated twice (Richardson 1911). One list of parts gives both the
//! equations and the text of the circuit file, and nothing here uses the library.

use std::fmt::Write;

/// A part between named nodes; values in SI units.
#[derive(Clone, Copy, Debug)]
pub(crate) enum Part {
    /// Ohm.
    R(&'static str, &'static str, f64),
    /// Farad, and the voltage before t = 0.
    C(&'static str, &'static str, f64, f64),
    /// Henry, and the current before t = 0.
    L(&'static str, &'static str, f64, f64),
    /// Coupling of two inductors, counted from 1 in the order of the list; henry.
    M(usize, usize, f64),
    /// The source: a step of 1 V.
    Step(&'static str),
    /// plus, minus, output.
    Opamp(&'static str, &'static str, &'static str),
    /// A voltage from this node to ground: factor times the voltage between two others.
    Follow(&'static str, f64, &'static str, &'static str),
}

use Part::{C, Follow, L, M, Opamp, R, Step};

/// The circuit file; the answer H is the voltage of `out` over the source.
pub(crate) fn file(parts: &[Part]) -> String {
    let mut text = String::new();
    let mut count = [0; 6];
    let mut next = |kind: usize| {
        count[kind] += 1;
        count[kind]
    };
    for part in parts {
        let _ = match *part {
            R(a, b, ohm) => writeln!(text, "{a} > R{} = {ohm:e} > {b}", next(0)),
            C(a, b, farad, _) => writeln!(text, "{a} > C{} = {farad:e} > {b}", next(1)),
            L(a, b, henry, _) => writeln!(text, "{a} > L{} = {henry:e} > {b}", next(2)),
            M(i, j, henry) => {
                let n = next(3);
                writeln!(text, "mutual M{n}: inductors L{i} L{j}, inductance = {henry:e}")
            }
            Step(a) => writeln!(text, "{a} > voltage Vin > ground"),
            Opamp(plus, minus, out) => {
                let n = next(4);
                writeln!(text, "opamp U{n}: plus {plus}, minus {minus}, output {out}")
            }
            Follow(a, gain, plus, minus) => {
                writeln!(text, "{a} > voltage E{} = {gain}*V({plus}, {minus}) > ground", next(5))
            }
        };
    }
    text + "ask H = V(out) / Vin\n"
}

/// What stands behind `--initial`, for every part with a value before t = 0.
pub(crate) fn initial(parts: &[Part]) -> String {
    let (mut capacitors, mut inductors) = (0, 0);
    let mut all = Vec::new();
    for part in parts {
        match *part {
            C(_, _, _, volts) => {
                capacitors += 1;
                all.push((volts, format!("C{capacitors} = {volts}")));
            }
            L(_, _, _, amperes) => {
                inductors += 1;
                all.push((amperes, format!("L{inductors} = {amperes}")));
            }
            _ => {}
        }
    }
    all.retain(|(value, _)| *value != 0.0);
    all.into_iter().map(|(_, text)| text).collect::<Vec<_>>().join(",")
}

/// Times and the voltage of `out`, at so many times up to `end`.
pub(crate) fn integrate(parts: &[Part], end: f64, samples: usize) -> Vec<(f64, f64)> {
    const STEPS: usize = 4096;
    let equations = Equations::new(parts);
    let runs = [1, 2, 4].map(|finer| equations.run(end, samples, STEPS * finer));
    let [coarse, middle, fine] = &runs;
    (0..samples)
        .map(|k| {
            let [a, b, c] = [coarse, middle, fine].map(|run| run[k].1);
            let (ab, bc) = ((4.0 * b - a) / 3.0, (4.0 * c - b) / 3.0);
            (fine[k].0, (16.0 * bc - ab) / 15.0)
        })
        .collect()
}

struct Equations {
    g: Vec<Vec<f64>>,
    c: Vec<Vec<f64>>,
    b: Vec<f64>,
    /// C·x before t = 0: charges and fluxes.
    stored: Vec<f64>,
    out: usize,
}

impl Equations {
    fn new(parts: &[Part]) -> Self {
        let mut names: Vec<&str> = Vec::new();
        for part in parts {
            let of: Vec<&str> = match *part {
                R(a, b, _) | C(a, b, ..) | L(a, b, ..) => vec![a, b],
                M(..) => vec![],
                Step(a) => vec![a],
                Opamp(a, b, c) | Follow(c, _, a, b) => vec![a, b, c],
            };
            names.extend(of);
        }
        names.retain(|name| *name != "ground");
        names.sort_unstable();
        names.dedup();
        let branches = parts.iter().filter(|part| !matches!(part, R(..) | C(..) | M(..))).count();
        let size = names.len() + branches;
        let node = |name: &str| names.iter().position(|other| *other == name);
        let mut all = Self {
            g: vec![vec![0.0; size]; size],
            c: vec![vec![0.0; size]; size],
            b: vec![0.0; size],
            stored: vec![0.0; size],
            out: node("out").expect("an output"),
        };
        let mut branch = names.len();
        let mut inductors = Vec::new();
        for part in parts {
            match *part {
                R(a, b, ohm) => across(&mut all.g, node(a), node(b), 1.0 / ohm),
                C(a, b, farad, volts) => {
                    across(&mut all.c, node(a), node(b), farad);
                    for (end, charge) in [(node(a), farad * volts), (node(b), -farad * volts)] {
                        if let Some(end) = end {
                            all.stored[end] += charge;
                        }
                    }
                }
                L(a, b, henry, amperes) => {
                    all.voltage(branch, node(a), node(b));
                    all.c[branch][branch] -= henry;
                    inductors.push((branch, amperes));
                    all.stored[branch] -= henry * amperes;
                    branch += 1;
                }
                M(i, j, henry) => {
                    let ((i, first), (j, second)) = (inductors[i - 1], inductors[j - 1]);
                    all.c[i][j] -= henry;
                    all.c[j][i] -= henry;
                    all.stored[i] -= henry * second;
                    all.stored[j] -= henry * first;
                }
                Step(a) => {
                    all.voltage(branch, node(a), None);
                    all.b[branch] = 1.0;
                    branch += 1;
                }
                Opamp(plus, minus, out) => {
                    for (end, sign) in [(node(plus), 1.0), (node(minus), -1.0)] {
                        if let Some(end) = end {
                            all.g[branch][end] += sign;
                        }
                    }
                    all.g[node(out).expect("an output")][branch] += 1.0;
                    branch += 1;
                }
                Follow(out, gain, plus, minus) => {
                    all.voltage(branch, node(out), None);
                    for (end, share) in [(node(plus), -gain), (node(minus), gain)] {
                        if let Some(end) = end {
                            all.g[branch][end] += share;
                        }
                    }
                    branch += 1;
                }
            }
        }
        all
    }

    /// A branch whose equation begins with the voltage between its nodes.
    fn voltage(&mut self, branch: usize, a: Option<usize>, b: Option<usize>) {
        for (end, sign) in [(a, 1.0), (b, -1.0)] {
            if let Some(end) = end {
                self.g[branch][end] += sign;
                self.g[end][branch] += sign;
            }
        }
    }

    fn run(&self, end: f64, samples: usize, steps: usize) -> Vec<(f64, f64)> {
        let size = self.b.len();
        // Short against everything, so that its own error, of second order, does not count.
        let jump = 1e-8 * end;
        let start = inverse(&combined(&self.c, 1.0 / jump, &self.g, 1.0));
        let right: Vec<f64> = (0..size).map(|i| self.stored[i] / jump + self.b[i]).collect();
        let mut x = product(&start, &right);
        let h = (end - jump) / steps as f64;
        let solve = inverse(&combined(&self.c, 2.0 / h, &self.g, 1.0));
        let onward = combined(&self.c, 2.0 / h, &self.g, -1.0);
        let mut found = vec![(jump, x[self.out])];
        for step in 1..=steps {
            let mut right = product(&onward, &x);
            right.iter_mut().zip(&self.b).for_each(|(value, b)| *value += 2.0 * b);
            x = product(&solve, &right);
            if step % (steps / (samples - 1)) == 0 && found.len() < samples {
                found.push((jump + h * step as f64, x[self.out]));
            }
        }
        found
    }
}

fn across(matrix: &mut [Vec<f64>], a: Option<usize>, b: Option<usize>, value: f64) {
    for (row, row_sign) in [(a, 1.0), (b, -1.0)] {
        for (column, sign) in [(a, 1.0), (b, -1.0)] {
            if let (Some(row), Some(column)) = (row, column) {
                matrix[row][column] += row_sign * sign * value;
            }
        }
    }
}

fn combined(a: &[Vec<f64>], of_a: f64, b: &[Vec<f64>], of_b: f64) -> Vec<Vec<f64>> {
    let row = |(a, b): (&Vec<f64>, &Vec<f64>)| {
        a.iter().zip(b).map(|(a, b)| of_a * a + of_b * b).collect()
    };
    a.iter().zip(b).map(row).collect()
}

fn product(matrix: &[Vec<f64>], x: &[f64]) -> Vec<f64> {
    matrix.iter().map(|row| row.iter().zip(x).map(|(a, b)| a * b).sum()).collect()
}

/// Gauss and Jordan with pivots, rows scaled first.
fn inverse(matrix: &[Vec<f64>]) -> Vec<Vec<f64>> {
    let size = matrix.len();
    let mut work: Vec<Vec<f64>> = matrix
        .iter()
        .enumerate()
        .map(|(i, row)| {
            let scale = row.iter().fold(0.0_f64, |largest, value| largest.max(value.abs()));
            let unit = (0..size).map(|j| if i == j { 1.0 / scale } else { 0.0 });
            row.iter().map(|value| value / scale).chain(unit).collect()
        })
        .collect();
    for column in 0..size {
        let pivot = (column..size)
            .max_by(|&i, &j| work[i][column].abs().total_cmp(&work[j][column].abs()))
            .expect("a row");
        work.swap(column, pivot);
        let divisor = work[column][column];
        work[column].iter_mut().for_each(|value| *value /= divisor);
        let pivot = work[column].clone();
        for (index, row) in work.iter_mut().enumerate() {
            let factor = row[column];
            if index != column && factor != 0.0 {
                row.iter_mut().zip(&pivot).for_each(|(value, p)| *value -= factor * p);
            }
        }
    }
    work.into_iter().map(|row| row[size..].to_vec()).collect()
}
