//! Units as products of powers of volt, ampere, second and kelvin.

/// A coherent SI unit.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Unit {
    /// Power of the volt.
    pub volt: i32,
    /// Power of the ampere.
    pub ampere: i32,
    /// Power of the second.
    pub second: i32,
    /// Power of the kelvin.
    pub kelvin: i32,
}

impl Unit {
    /// The unit 1.
    pub const ONE: Self = Self::of(0, 0, 0);
    /// Volt.
    pub const VOLT: Self = Self::of(1, 0, 0);
    /// Ampere.
    pub const AMPERE: Self = Self::of(0, 1, 0);
    /// Second.
    pub const SECOND: Self = Self::of(0, 0, 1);
    /// Hertz, also radian per second: 1/s.
    pub const HERTZ: Self = Self::of(0, 0, -1);
    /// Ohm.
    pub const OHM: Self = Self::of(1, -1, 0);
    /// Siemens.
    pub const SIEMENS: Self = Self::of(-1, 1, 0);
    /// Farad.
    pub const FARAD: Self = Self::of(-1, 1, 1);
    /// Henry.
    pub const HENRY: Self = Self::of(1, -1, 1);

    const fn of(volt: i32, ampere: i32, second: i32) -> Self {
        Self { volt, ampere, second, kelvin: 0 }
    }

    /// The unit of a product.
    #[must_use]
    pub fn times(self, other: Self) -> Self {
        Self {
            volt: self.volt.saturating_add(other.volt),
            ampere: self.ampere.saturating_add(other.ampere),
            second: self.second.saturating_add(other.second),
            kelvin: self.kelvin.saturating_add(other.kelvin),
        }
    }

    /// The unit of an integer power.
    #[must_use]
    pub fn power(self, exponent: i32) -> Self {
        Self {
            volt: self.volt.saturating_mul(exponent),
            ampere: self.ampere.saturating_mul(exponent),
            second: self.second.saturating_mul(exponent),
            kelvin: self.kelvin.saturating_mul(exponent),
        }
    }

    /// The unit of a quotient.
    #[must_use]
    pub fn over(self, other: Self) -> Self {
        self.times(other.power(-1))
    }
}

impl std::fmt::Display for Unit {
    /// The SI name where there is one (`Ω`, `V²/Hz`), else a product of powers (`V·A⁻²·s`).
    fn fmt(&self, out: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        const NAMES: [(Unit, &str); 12] = [
            (Unit::ONE, "1"),
            (Unit::OHM, "Ω"),
            (Unit::SIEMENS, "S"),
            (Unit::FARAD, "F"),
            (Unit::HENRY, "H"),
            (Unit::VOLT, "V"),
            (Unit::AMPERE, "A"),
            (Unit::SECOND, "s"),
            (Unit::HERTZ, "Hz"),
            (Unit::of(2, 0, 1), "V²/Hz"),
            (Unit::of(0, 2, 1), "A²/Hz"),
            (Unit { kelvin: 1, ..Unit::ONE }, "K"),
        ];
        if let Some((_, name)) = NAMES.iter().find(|(unit, _)| unit == self) {
            return out.write_str(name);
        }
        let factors =
            [("V", self.volt), ("A", self.ampere), ("s", self.second), ("K", self.kelvin)];
        let mut first = true;
        for (name, exponent) in factors.into_iter().filter(|(_, exponent)| *exponent != 0) {
            if !first {
                out.write_str("·")?;
            }
            first = false;
            out.write_str(name)?;
            if exponent != 1 {
                for digit in exponent.to_string().chars() {
                    const SUPERSCRIPTS: [char; 10] =
                        ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
                    let raised =
                        digit.to_digit(10).map_or('⁻', |value| SUPERSCRIPTS[value as usize]);
                    write!(out, "{raised}")?;
                }
            }
        }
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::Unit;
    use pretty_assertions::assert_eq;

    #[test]
    fn units_print_by_their_si_names() {
        let check = |unit: Unit, expected: &str| assert_eq!(unit.to_string(), expected);
        check(Unit::ONE, "1");
        check(Unit::OHM, "Ω");
        check(Unit::VOLT.over(Unit::AMPERE), "Ω");
        check(Unit::OHM.times(Unit::FARAD), "s");
        check(Unit::VOLT.power(2).over(Unit::HERTZ), "V²/Hz");
        check(Unit::VOLT.over(Unit::AMPERE.power(2)).times(Unit::SECOND), "V·A⁻²·s");
        check(Unit::SECOND.power(-12), "s⁻¹²");
    }
}
