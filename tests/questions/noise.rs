//! Noise densities: what thermodynamics demands of passive networks, and shot noise.

use super::{Draw, answer, form, formula, fraction, read};
use cofactor::algebra::{Fraction, Var};
use cofactor::analysis::Entry;
use cofactor::circuit::{Circuit, Number, Shot};
use cofactor::elimination::symbol_of;
use num_traits::{Signed, ToPrimitive, Zero};

fn noise(circuit: &Circuit, query: &str) -> Entry {
    let mut entries = answer(circuit, query).unwrap_or_else(|error| panic!("{query}: {error}"));
    entries.remove(0)
}

/// A formula over the symbols of the result, `k_B` and `T_0` among them.
fn over(entry: &Entry, text: &str) -> Fraction {
    formula(&Circuit { symbols: entry.symbols.clone(), ..Circuit::default() }, text)
}

/// A number for every symbol, and the frequency 3/7; π may be any number, as long as it is one.
fn value(entry: &Entry, variable: Var) -> Number {
    match symbol_of(variable) {
        None => Number::new(3.into(), 7.into()),
        Some(symbol) => {
            let index = symbol.0 as usize;
            assert!(index < entry.symbols.len());
            Number::new((2 * index as i64 + 3).into(), (index as i64 + 5).into())
        }
    }
}

/// Real and imaginary part of numerator and denominator at s = j·2π·f.
fn parts(fraction: &Fraction, omega: &Number, value: &dyn Fn(Var) -> Number) -> [[Number; 2]; 2] {
    [fraction.numerator(), fraction.denominator()].map(|polynomial| {
        let mut sums = [Number::zero(), Number::zero()];
        let mut power = Number::from_integer(1.into());
        for (index, part) in polynomial.coefficients(Var::S).iter().enumerate() {
            let term = part.evaluate(value) * &power;
            let term = if index % 4 >= 2 { -term } else { term };
            sums[index % 2] += term;
            power *= omega;
        }
        sums
    })
}

#[test]
fn one_ports_have_the_noise_of_their_resistance() {
    // S = 4·k_B·T·Re Z (H. Nyquist, Phys. Rev. 32, 1928), exactly.
    for seed in 0..12 {
        let mut draw = Draw::new(seed);
        let text = draw.network(&["R", "C", "L", "G"], &["ground", "a", "b", "c"], 1);
        let circuit = read(&text);
        if circuit.symbols.iter().all(|symbol| symbol.unit != cofactor::circuit::Unit::OHM) {
            continue;
        }
        let entry = noise(&circuit, "noise_density(a)");
        let impedance = fraction(&circuit, "impedance(a, ground)");
        let value = |variable: Var| value(&entry, variable);
        let pi = symbol_value(&entry, "pi");
        let omega = Number::new(6.into(), 7.into()) * pi;
        let [[nr, ni], [dr, di]] = parts(&impedance, &omega, &value);
        let resistance = (&nr * &dr + &ni * &di) / (&dr * &dr + &di * &di);
        let four = Number::from_integer(4.into());
        let expected =
            four * symbol_value(&entry, "k_B") * symbol_value(&entry, "T_0") * resistance;
        assert_eq!(form(&entry).evaluate(value), Some(expected), "{text}");
    }
}

fn symbol_value(entry: &Entry, name: &str) -> Number {
    let index = entry.symbols.iter().position(|symbol| symbol.name == name).expect(name);
    value(entry, Var(index as u32 + 1))
}

#[test]
fn one_capacitor_has_the_mean_square_of_its_temperature() {
    // k_B·T/C at the capacitor of any network of resistors (equipartition).
    for seed in 20..28 {
        let mut draw = Draw::new(seed);
        let text = draw.network(&["R", "G"], &["ground", "a", "b", "c"], 2) + "a > C99 > ground\n";
        let entry = noise(&read(&text), "noise_density(a)");
        let total = entry.noise.as_ref().and_then(|noise| noise.total.as_ref());
        let square = &total.expect("a total").square;
        assert_eq!(*square, over(&entry, "k_B*T_0/C99"), "{text}");
    }
}

#[test]
fn mean_squares_of_higher_order() {
    let total = |text: &str, expected: &str| {
        let entry = noise(&read(text), "noise_density(a)");
        let noise = entry.noise.as_ref().expect("a noise density");
        let square = &noise.total.as_ref().expect("a total").square;
        assert_eq!(*square, over(&entry, expected), "{text}");
    };
    // Every capacitor that stands alone has k_B·T/C, whatever is around it (equipartition).
    total("a > C1 > ground\na > R1 > b > C2 > ground\nb > R2 > ground\n", "k_B*T_0/C1");
    // Without a way to ground the two keep their charge: what is left is C2/(C1 + C2) of that.
    total("a > C1 > ground\na > R1 > b > C2 > ground\n", "k_B*T_0*C2/(C1*(C1 + C2))");
    total("a > C1 > ground\na > R1 > b > C2 > ground\nb > L1 > ground\n", "k_B*T_0/C1");
    total("a > C1 > ground\na > R1 || L1 > b > C2 > ground\nb > L2 > ground\n", "k_B*T_0/C1");
    total("a > C1 > ground\na > R1 > ground\na > L1 > ground\n", "k_B*T_0/C1");
    // White noise that nothing limits has none.
    let entry = noise(&read("a > R1 > ground\n"), "noise_density(a)");
    assert!(entry.noise.is_some_and(|noise| noise.total.is_none()));
    assert_eq!(entry.notices.last().map(|notice| notice.code), Some("infinite-total"));
}

#[test]
fn shares_add_up_and_models_are_silent() {
    let circuit = read(
        "in > voltage Vin > ground\nin > R1 > b\nbjt Q1: base b, collector c, emitter ground, gm, rpi, ro, rb\n\
         c > RC > ground\nc > C1 > ground\n",
    );
    let entry = noise(&circuit, "noise_density(c)");
    let noise = entry.noise.as_ref().expect("a noise density");
    let names: Vec<&str> = noise.contributors.iter().map(|share| share.element.as_str()).collect();
    assert_eq!(names, ["R1", "Q1.rb", "RC"]);
    let sum = noise.contributors.iter().fold(Fraction::zero(), |sum, share| &sum + &share.density);
    assert_eq!(sum, form(&entry));
}

#[test]
fn without_noisy_elements_there_is_no_noise() {
    let entry = noise(&read("a > C1 > ground\na > L1 > ground\n"), "noise_density(a)");
    assert!(form(&entry).is_zero());
}

#[test]
fn bias_currents_add_shot_noise() {
    let mut circuit = read("a > R1 = 1 k > ground\nband 1 Hz to 101 Hz\n");
    let node = circuit.node("a").expect("a node");
    circuit.shots.push(Shot {
        name: "D1.anode".to_owned(),
        plus: node,
        minus: cofactor::circuit::GROUND,
        current: Number::new(1.into(), 1000.into()),
    });
    let entry = noise(&circuit, "noise_density(a)");
    assert_eq!(form(&entry), over(&entry, "4*k_B*T_0*R1 + 2*q_e*R1^2/1000"));
    // 2·q·1 mA·1 kΩ² + 4kT·1 kΩ = 3.369696e-16 V²/Hz, over 100 Hz.
    let density: f64 = 2.0 * 1.602_176_634e-19 * 1e-3 * 1e6 + 4.0 * 1.380_649e-23 * 300.0 * 1e3;
    let band = entry.noise.and_then(|noise| noise.band).expect("a band");
    assert!((band.rms / (density * 100.0).sqrt() - 1.0).abs() < 1e-9, "{band:?}");
    assert!(band.relative_error < 1e-9);
}

#[test]
fn devices_at_a_bias_are_noisy_by_their_currents() {
    // Base and collector of a transistor at 1 mA with β = 100 have shot noise of 2q·10 µA and 2q·1 mA.
    let circuit = read(
        "in > voltage Vin > ground\nbjt Q1: base in, collector c, emitter ground, at 1 mA, beta = 100\n\
         c > RC = 1 k > ground\n",
    );
    let entry = noise(&circuit, "noise_density(c)");
    // The base is driven by a voltage, so only the collector's current and RC reach the output.
    assert_eq!(form(&entry), over(&entry, "4*k_B*T_0*RC + 2*q_e*RC^2/1000"));
    let noise = entry.noise.as_ref().expect("a noise density");
    assert_eq!(noise.contributors.len(), circuit.shots.len() + 1);
}

#[test]
fn nominal_totals_and_bands_agree() {
    let circuit = read(
        "in > voltage Vin > ground\nin > R1 = 10 k > a > C1 = 1 nF > ground\nband 1 mHz to 1 GHz\n",
    );
    let entry = noise(&circuit, "noise_density(a)");
    let noise = entry.noise.expect("a noise density");
    let total = noise.total.and_then(|total| total.rms).expect("a value");
    // √(k_B·300 K/1 nF)
    assert!((total / (1.380_649e-23_f64 * 300.0 / 1e-9).sqrt() - 1.0).abs() < 1e-12);
    let band = noise.band.expect("a band");
    // What is above 1 GHz: 2/π·15.9 kHz/1 GHz of it.
    assert!(((band.rms / total) - 1.0).abs() < 1e-5, "{band:?}");
    let numeric = entry.numeric.expect("numbers");
    assert!(numeric.numerator[0].is_positive());
    assert!((numeric.numerator[0].to_f64().unwrap_or(0.0) / 1.656_778_8e-16 - 1.0).abs() < 1e-9);
}

#[test]
fn limits_reach_the_noisy_elements_too() {
    let entry = |limit: &str| {
        let circuit = read(&format!("a > R1 > ground\na > R2 > ground\nlimit {limit}\n"));
        noise(&circuit, "noise_density(a)")
    };
    let open = entry("R2 to infinity");
    assert_eq!(form(&open), over(&open, "4*k_B*T_0*R1"));
    let shorted = entry("R2 to 0");
    assert!(form(&shorted).is_zero());
}
