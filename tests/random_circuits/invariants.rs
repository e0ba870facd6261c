//! What must hold for the roots of every circuit: sums of their sensitivities by units, and a verdict
//! on stability that the places of the poles bear out.
//!
//! The equations of a network are homogeneous in each unit, and a root is a number in 1/s. Euler's
//! theorem makes of that: over all symbols, Σ exponent of the second × S = −1, and of the volt and of the
//! ampere 0. (An RC network, for one: Σ_R S = Σ_C S = −1.)

use cofactor::analysis::roots::{Nominal, RootFacts, Verdict, analyse};
use cofactor::analysis::{self, AnalysisError};
use cofactor::circuit::{Circuit, SymbolRole};
use cofactor::language;
use num_complex::Complex;

use crate::{Outcome, Random, generator, options, rational};

/// Judges the roots of the circuit of a seed at random values.
pub(crate) fn judge(seed: u64) -> Result<Outcome, String> {
    let Some(mut circuit) = language::read(&generator::circuit(seed).text()).circuit else {
        return Ok(Outcome::Refused);
    };
    let mut random = Random::new(seed ^ 0x1234);
    for symbol in circuit.symbols.iter_mut().filter(|symbol| symbol.role != SymbolRole::Pi) {
        symbol.nominal = Some(rational(&mut random));
    }
    let entries = match analysis::answer(&circuit, &circuit.asks[0], &options()) {
        Ok(entries) => entries,
        Err(AnalysisError::TooLarge { .. }) => return Ok(Outcome::Refused),
        Err(_) => return Ok(Outcome::Singular),
    };
    let told = |error: &dyn std::fmt::Display| format!("no roots: {error}");
    let nominal = Nominal::new(&circuit, &entries[0]).map_err(|error| told(&error))?;
    let report = analyse(&circuit, &entries[0], &nominal).map_err(|error| told(&error))?;
    for facts in report.poles.iter().chain(&report.zeros) {
        sums(&circuit, facts)?;
    }
    let expected = places(&report.poles);
    if expected.is_some_and(|expected| expected != report.verdict) {
        return Err(format!("{:?}, but {:?}", report.verdict, report.poles));
    }
    Ok(Outcome::Equal)
}

fn sums(circuit: &Circuit, facts: &RootFacts) -> Result<(), String> {
    let Some(sensitivities) = &facts.sensitivities else { return Ok(()) };
    let mut sums = [Complex::new(0.0, 0.0); 3];
    let mut size = 1.0;
    for one in sensitivities {
        let unit = circuit[one.symbol].unit;
        for (sum, exponent) in sums.iter_mut().zip([unit.second, unit.volt, unit.ampere]) {
            *sum += one.value * f64::from(exponent);
        }
        size += one.value.norm();
    }
    let off = |(sum, expected): (&Complex<f64>, f64)| (sum - expected).norm() > 1e-6 * size;
    if sums.iter().zip([-1.0, 0.0, 0.0]).any(off) {
        return Err(format!("sums {sums:?} of {facts:?}"));
    }
    Ok(())
}

/// The verdict by the places of the poles; none where a disc touches the axis.
fn places(poles: &[RootFacts]) -> Option<Verdict> {
    let roots = || poles.iter().map(|facts| facts.root);
    if roots().any(|root| root.value.re != 0.0 && root.value.re.abs() <= root.error_bound) {
        return None;
    }
    let on_axis = || roots().filter(|root| root.value.re == 0.0);
    Some(
        if roots().any(|root| root.value.re > 0.0) || on_axis().any(|root| root.multiplicity > 1) {
            Verdict::Unstable
        } else if on_axis().next().is_some() {
            Verdict::Marginal
        } else {
            Verdict::Stable
        },
    )
}
