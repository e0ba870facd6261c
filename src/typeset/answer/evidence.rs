//! The evidence for an answer, in one line.

use crate::numeric::{ExactKind, Origin, Report};
use crate::typeset::number;

/// What the witnesses say, in one line; both values where one disagrees.
pub fn evidence(report: &Report) -> String {
    let mut said = Vec::new();
    for exact in &report.exact {
        let kind = match exact.kind {
            ExactKind::Identical => "identical over Q[s]".to_owned(),
            ExactKind::EqualAt { points, primes } => {
                format!("equal at {points} random points modulo {primes} primes")
            }
        };
        said.push(match &exact.failure {
            None => kind,
            Some((derived, witness)) => {
                format!("NOT {kind}: derived {derived}, witness {witness}")
            }
        });
    }
    let floating = &report.floating;
    let values = match report.origin {
        Origin::Nominal => "nominal",
        Origin::Random => "random",
    };
    let span = format!(
        "{} frequencies {} to {} at {values} values",
        floating.points,
        hertz(floating.from_hz),
        hertz(floating.to_hz)
    );
    said.push(match &floating.failure {
        None => format!(
            "{span}: worst difference {:.1e}, condition {:.0e}",
            floating.worst_relative_error, floating.largest_condition
        ),
        Some((at, derived, witness)) => {
            format!("{span} DISAGREES at {}: derived {derived}, witness {witness}", hertz(*at))
        }
    });
    said.join("; ")
}

fn hertz(value: f64) -> String {
    match num_rational::BigRational::from_float(value) {
        Some(exact) => number::quantity(&exact, "Hz", 3, number::Medium::Unicode),
        None => format!("{value} Hz"),
    }
}
