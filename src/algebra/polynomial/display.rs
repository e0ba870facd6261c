//! Plain ASCII for debugging: `2*x0^2*x1 - x3 + 5`. Not the form of any answer.

use std::fmt;

use num_bigint::BigInt;
use num_traits::{One, Signed};

use super::Polynomial;

impl fmt::Display for Polynomial {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.is_zero() {
            return out.write_str("0");
        }
        for (place, (powers, coefficient)) in self.terms().enumerate() {
            match (place, coefficient.is_negative()) {
                (0, true) => out.write_str("-")?,
                (0, false) => {}
                (_, true) => out.write_str(" - ")?,
                (_, false) => out.write_str(" + ")?,
            }
            let size: BigInt = coefficient.abs();
            let mut separator = "";
            if !size.is_one() || powers.clone().next().is_none() {
                write!(out, "{size}")?;
                separator = "*";
            }
            for (variable, exponent) in powers {
                write!(out, "{separator}x{}", variable.0)?;
                if exponent > 1 {
                    write!(out, "^{exponent}")?;
                }
                separator = "*";
            }
        }
        Ok(())
    }
}

impl fmt::Debug for Polynomial {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        fmt::Display::fmt(self, out)
    }
}
