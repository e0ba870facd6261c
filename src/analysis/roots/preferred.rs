//! Preferred numbers for resistors and capacitors (IEC 60063).

/// A series of preferred numbers.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Series {
    /// Twelve a decade, for 10 %.
    E12,
    /// Twenty-four a decade, for 5 %.
    E24,
    /// Ninety-six a decade, for 1 %.
    E96,
}

/// IEC 60063, E24; every second one is E12. They are not the rounded powers between 2.7 and 4.7.
const E24: [u16; 24] = [
    100, 110, 120, 130, 150, 160, 180, 200, 220, 240, 270, 300, 330, 360, 390, 430, 470, 510, 560,
    620, 680, 750, 820, 910,
];

impl Series {
    /// All series.
    pub const ALL: [Self; 3] = [Self::E12, Self::E24, Self::E96];

    /// Its name in the standard.
    pub fn name(self) -> &'static str {
        match self {
            Self::E12 => "E12",
            Self::E24 => "E24",
            Self::E96 => "E96",
        }
    }

    /// The values of a decade, from 100 to 999.
    pub fn decade(self) -> Vec<u16> {
        match self {
            Self::E12 => E24.iter().step_by(2).copied().collect(),
            Self::E24 => E24.to_vec(),
            // Here the standard's numbers are the rounded powers.
            Self::E96 => (0..96)
                .map(|index| (100.0 * libm::pow(10.0, f64::from(index) / 96.0)).round() as u16)
                .collect(),
        }
    }

    /// The value nearest by ratio, as digits (100 to 999) and a power of ten; none for a value that is
    /// not positive.
    pub fn nearest(self, value: f64) -> Option<(u16, i32)> {
        if !(value.is_finite() && value > 0.0) {
            return None;
        }
        let decade = libm::log10(value).floor() as i32 - 2;
        let candidates = (decade - 1..=decade + 1)
            .flat_map(|power| self.decade().into_iter().map(move |digits| (digits, power)));
        let distance = |&(digits, power): &(u16, i32)| {
            (libm::log10(f64::from(digits)) + f64::from(power) - libm::log10(value)).abs()
        };
        candidates.min_by(|a, b| distance(a).total_cmp(&distance(b)))
    }
}

#[cfg(test)]
mod tests {
    use super::Series;

    #[test]
    fn nearest_values() {
        let check = |series: Series, value: f64, expected: (u16, i32)| {
            assert_eq!(series.nearest(value), Some(expected), "{value}");
        };
        check(Series::E12, 4.6e-9, (470, -11));
        check(Series::E24, 31.4e3, (300, 2));
        check(Series::E96, 31.4e3, (316, 2));
        check(Series::E12, 9.6, (100, -1));
        check(Series::E12, 1.0, (100, -2));
        assert_eq!(Series::E12.nearest(-1.0), None);
    }

    /// Some of the ninety-six (IEC 60063, from memory).
    #[test]
    fn ninety_six() {
        let decade = Series::E96.decade();
        for known in [100, 102, 105, 115, 147, 215, 301, 475, 499, 681, 750, 909, 953, 976] {
            assert!(decade.contains(&known), "{known}");
        }
        assert_eq!(decade.len(), 96);
    }
}
