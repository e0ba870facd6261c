//! Tables of every notation.

use super::*;

fn ratio(above: i64, below: i64) -> BigRational {
    BigRational::new(above.into(), below.into())
}

fn power_of_ten(exponent: i64) -> BigRational {
    ten_to(exponent)
}

#[test]
fn shortest_is_exact() {
    for (value, expected) in [
        (ratio(0, 1), "0"),
        (ratio(-12, 1), "-12"),
        (ratio(1, 4), "0.25"),
        (ratio(-1, 3), "-1/3"),
        (ratio(1, 1024), "0.0009765625"),
        (ratio(47, 10_000_000_000), "4.7e-9"),
        (ratio(1_000_000, 1), "1000000"),
        (power_of_ten(14), "100000000000000"),
        (power_of_ten(15), "1e15"),
        (power_of_ten(-4), "0.0001"),
        (power_of_ten(-5), "1e-5"),
        (ratio(1_234_567_890_123_456_789, 1), "1234567890123456789"),
        (ratio(1, 1 << 60), "1/1152921504606846976"),
        (power_of_ten(-500), &format!("1/1{}", "0".repeat(500))),
    ] {
        assert_eq!(shortest(&value), expected);
        assert_eq!(is_short(&value), !expected.contains('/'));
    }
    assert_eq!(shortest_in(&ratio(-47, 10_000_000), Medium::Unicode), "−4.7·10⁻⁶");
    assert_eq!(shortest_in(&ratio(-47, 10_000_000), Medium::Latex), r"-4.7\cdot 10^{-6}");
}

#[test]
fn rounding_is_half_to_even() {
    for (value, digits, expected) in [
        (ratio(25, 1), 1, "20"),
        (ratio(35, 1), 1, "40"),
        (ratio(125, 1000), 2, "0.12"),
        (ratio(375, 1000), 2, "0.38"),
        (ratio(1_250_000_000_001, 10_000_000_000_000), 2, "0.13"),
        (ratio(9996, 10), 3, "1000"),
        (ratio(2, 3), 4, "0.6667"),
        (ratio(-2, 3), 0, "-0.7"),
        (ratio(1, 1), 5, "1"),
        (ratio(999_999, 1), 6, "999999"),
        (ratio(1_000_000, 1), 6, "1e6"),
        (ratio(1, 1000), 3, "0.001"),
        (ratio(1, 10_000), 3, "1e-4"),
    ] {
        assert_eq!(rounded(&value, digits, Medium::Ascii), expected);
    }
}

#[test]
fn powers_of_ten() {
    let thousand_and = ratio(159_155, 100);
    assert_eq!(scientific(&thousand_and, 3, Medium::Unicode), "1.59·10³");
    assert_eq!(scientific(&thousand_and, 3, Medium::Ascii), "1.59e3");
    assert_eq!(scientific(&thousand_and, 3, Medium::Latex), r"1.59\cdot 10^{3}");
    assert_eq!(scientific(&ratio(5, 1), 3, Medium::Ascii), "5");
    assert_eq!(engineering(&ratio(47, 100_000), 3, Medium::Ascii), "470e-6");
    assert_eq!(engineering(&ratio(-15_000, 1), 3, Medium::Unicode), "−15·10³");
    assert_eq!(engineering(&ratio(1234, 10), 2, Medium::Ascii), "120");
    for exponent in [-400, -31, -30, -1, 0, 1, 30, 31, 400] {
        let value = power_of_ten(exponent);
        let below = &value - &value * power_of_ten(-9);
        let expected = if exponent == 0 { "1".to_owned() } else { format!("1e{exponent}") };
        assert_eq!(scientific(&value, 3, Medium::Ascii), expected);
        assert_eq!(scientific(&below, 3, Medium::Ascii), expected);
    }
}

#[test]
fn quantities() {
    for (value, unit, unicode, ascii, latex) in [
        (ratio(47, 10_000_000_000), "F", "4.7 nF", "4.7 nF", r"4.7\,\mathrm{nF}"),
        (ratio(10_000, 1), "Ω", "10 kΩ", "10 kohm", r"10\,\mathrm{k\Omega}"),
        (ratio(159_155, 100), "Hz", "1.59 kHz", "1.59 kHz", r"1.59\,\mathrm{kHz}"),
        (ratio(22, 10_000_000), "H", "2.2 µH", "2.2 uH", r"2.2\,\mathrm{\mu H}"),
        (ratio(-1, 1000), "V", "−1 mV", "-1 mV", r"-1\,\mathrm{mV}"),
        (ratio(999_600, 1), "Ω", "1 MΩ", "1 Mohm", r"1\,\mathrm{M\Omega}"),
        (ratio(0, 1), "A", "0 A", "0 A", r"0\,\mathrm{A}"),
        (ratio(300, 1), "K", "300 K", "300 K", r"300\,\mathrm{K}"),
        (ratio(5, 2), "1", "2.5", "2.5", "2.5"),
        (ratio(200_000, 1), "1", "200000", "200000", "200000"),
        (
            ratio(166, 1_000_000_000_000_000),
            "V²/Hz",
            "1.66·10⁻¹³ V²/Hz",
            "1.66e-13 V^2/Hz",
            r"1.66\cdot 10^{-13}\,\mathrm{V^{2}/Hz}",
        ),
        (power_of_ten(-16), "F", "1·10⁻¹⁶ F", "", ""),
        (power_of_ten(15), "Hz", "", "1e15 Hz", ""),
    ] {
        for (medium, expected) in
            [(Medium::Unicode, unicode), (Medium::Ascii, ascii), (Medium::Latex, latex)]
        {
            if !expected.is_empty() {
                assert_eq!(quantity(&value, unit, 3, medium), expected);
            }
        }
    }
}

#[test]
fn floats_are_shortest() {
    for (value, expected) in [
        (0.1, "0.1"),
        (-0.0, "0"),
        (1e-7, "1e-7"),
        (2.1e-15, "2.1e-15"),
        (1e300, "1e300"),
        (123_456.75, "123456.75"),
        (-1.0, "-1"),
        (f64::NAN, "NaN"),
        (f64::NEG_INFINITY, "-inf"),
    ] {
        assert_eq!(float(value), expected);
    }
}
