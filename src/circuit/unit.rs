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
            volt: self.volt + other.volt,
            ampere: self.ampere + other.ampere,
            second: self.second + other.second,
            kelvin: self.kelvin + other.kelvin,
        }
    }

    /// The unit of an integer power.
    #[must_use]
    pub fn power(self, exponent: i32) -> Self {
        Self {
            volt: self.volt * exponent,
            ampere: self.ampere * exponent,
            second: self.second * exponent,
            kelvin: self.kelvin * exponent,
        }
    }

    /// The unit of a quotient.
    #[must_use]
    pub fn over(self, other: Self) -> Self {
        self.times(other.power(-1))
    }
}
