//! How far a shorter formula may be from the exact function.

/// Bounds of the error; all of them hold at once.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Goal {
    /// Decibels of magnitude over the band.
    pub magnitude_db: f64,
    /// Degrees of phase over the band.
    pub phase_deg: f64,
    /// Of every pole and zero in the band, relative to its size.
    pub roots: Option<f64>,
    /// Of every coefficient that the formula still has, relative to the exact one.
    pub coefficients: Option<f64>,
}

impl Default for Goal {
    /// 1 dB and 10°: what hand calculation with values of a tenth's accuracy is good for.
    fn default() -> Self {
        Self { magnitude_db: 1.0, phase_deg: 10.0, roots: None, coefficients: None }
    }
}

/// A goal that cannot be read.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error("`{text}` is no bound of an error: {reason}")]
pub struct GoalError {
    /// What was written.
    pub text: String,
    /// What is wrong with it.
    pub reason: &'static str,
}

impl Goal {
    /// Reads `0.5 dB, 5 deg`; what is not named is not bounded.
    ///
    /// # Errors
    /// Anything else than numbers above 0 of dB and degrees, each at most once.
    pub fn within(mut self, text: &str) -> Result<Self, GoalError> {
        let fail = |reason| GoalError { text: text.to_owned(), reason };
        let (mut db, mut deg) = (None, None);
        for part in text.split(',') {
            let part = part.trim();
            let end = part
                .find(|c: char| !(c.is_ascii_digit() || c == '.'))
                .ok_or_else(|| fail("it needs a unit, `dB` or `deg`"))?;
            let value = positive(&part[..end]).ok_or_else(|| fail("it needs numbers above 0"))?;
            let place = match part[end..].trim() {
                "dB" => &mut db,
                "deg" | "°" | "degree" | "degrees" => &mut deg,
                _ => return Err(fail("the units are `dB` and `deg`")),
            };
            if place.replace(value).is_some() {
                return Err(fail("a unit stands in it twice"));
            }
        }
        self.magnitude_db = db.unwrap_or(f64::INFINITY);
        self.phase_deg = deg.unwrap_or(f64::INFINITY);
        Ok(self)
    }

    /// Whether this deviation is within the bounds of magnitude and phase, 1 where it just is.
    pub(crate) fn used(&self, deviation: super::Deviation) -> f64 {
        let (db, deg) = (deviation.db / self.magnitude_db, deviation.deg / self.phase_deg);
        if db.is_nan() || deg.is_nan() { f64::INFINITY } else { db.max(deg) }
    }
}

/// Reads `5 %` as 0.05.
///
/// # Errors
/// Anything else than a percentage above 0.
pub fn percentage(text: &str) -> Result<f64, GoalError> {
    let fail = |reason| GoalError { text: text.to_owned(), reason };
    let number =
        text.trim().strip_suffix('%').ok_or_else(|| fail("it needs a percentage such as `5 %`"))?;
    let value = positive(number.trim()).ok_or_else(|| fail("it needs a number above 0"))?;
    Ok(value / 100.0)
}

fn positive(text: &str) -> Option<f64> {
    text.parse::<f64>().ok().filter(|value| value.is_finite() && *value > 0.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn goals_are_read() {
        let goal = Goal::default();
        let read = goal.within("0.5 dB, 5 deg");
        assert_eq!(read, Ok(Goal { magnitude_db: 0.5, phase_deg: 5.0, ..goal }));
        let read = goal.within("3°");
        assert_eq!(read, Ok(Goal { magnitude_db: f64::INFINITY, phase_deg: 3.0, ..goal }));
        for wrong in ["", "1", "dB", "1 dB 2 deg", "1 dB, 1 dB", "0 dB", "-1 dB", "1 db", "1 V"] {
            assert!(goal.within(wrong).is_err(), "{wrong}");
        }
        assert_eq!(percentage(" 5 %"), Ok(0.05));
        assert!(percentage("5").is_err() && percentage("0 %").is_err());
    }
}
