//! The order of names: digits are compared as numbers, so `R2` stands before `R10`.

use std::cmp::Ordering;

/// Compares two names as a reader sorts them; a total order (equal only for equal names).
pub fn compare_names(first: &str, second: &str) -> Ordering {
    let (mut a, mut b) = (first, second);
    loop {
        match (a.chars().next(), b.chars().next()) {
            (None, None) => return first.cmp(second),
            (None, Some(_)) => return Ordering::Less,
            (Some(_), None) => return Ordering::Greater,
            (Some(x), Some(y)) if x.is_ascii_digit() && y.is_ascii_digit() => {
                let (digits_a, rest_a) = leading_digits(a);
                let (digits_b, rest_b) = leading_digits(b);
                let (bare_a, bare_b) =
                    (digits_a.trim_start_matches('0'), digits_b.trim_start_matches('0'));
                let order = bare_a.len().cmp(&bare_b.len()).then_with(|| bare_a.cmp(bare_b));
                if order != Ordering::Equal {
                    return order;
                }
                (a, b) = (rest_a, rest_b);
            }
            (Some(x), Some(y)) => {
                if x != y {
                    return x.cmp(&y);
                }
                (a, b) = (&a[x.len_utf8()..], &b[y.len_utf8()..]);
            }
        }
    }
}

fn leading_digits(text: &str) -> (&str, &str) {
    text.split_at(text.find(|c: char| !c.is_ascii_digit()).unwrap_or(text.len()))
}

#[cfg(test)]
mod tests {
    use super::compare_names;

    #[test]
    fn names_are_sorted_as_a_reader_would() {
        let mut names = ["R10", "R2", "R02", "C1", "R", "Rf", "R2a", "R1"];
        names.sort_by(|a, b| compare_names(a, b));
        assert_eq!(names, ["C1", "R", "R1", "R02", "R2", "R2a", "R10", "Rf"]);
    }
}
