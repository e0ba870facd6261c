//! A reader of plain expressions over complex doubles: `+ - * / ^ ( )`, numbers, names.

use num_complex::Complex;

type C = Complex<f64>;

/// The value of `text`; `value` gives each name its number.
///
/// # Panics
/// Where the text is no expression or a name has no value.
pub(crate) fn evaluate(text: &str, value: &dyn Fn(&str) -> C) -> C {
    let mut reader = Reader { rest: text, value };
    let result = reader.sum();
    assert!(reader.rest.trim().is_empty(), "`{}` is left over in `{text}`", reader.rest);
    result
}

struct Reader<'a> {
    rest: &'a str,
    value: &'a dyn Fn(&str) -> C,
}

impl Reader<'_> {
    fn takes(&mut self, sign: char) -> bool {
        self.rest = self.rest.trim_start();
        match self.rest.strip_prefix(sign) {
            Some(rest) => {
                self.rest = rest;
                true
            }
            None => false,
        }
    }

    fn sum(&mut self) -> C {
        let mut total = if self.takes('-') { -self.product() } else { self.product() };
        loop {
            if self.takes('+') {
                total += self.product();
            } else if self.takes('-') {
                total -= self.product();
            } else {
                return total;
            }
        }
    }

    fn product(&mut self) -> C {
        let mut total = self.power();
        loop {
            if self.takes('*') {
                total *= self.power();
            } else if self.takes('/') {
                total /= self.power();
            } else {
                return total;
            }
        }
    }

    fn power(&mut self) -> C {
        let base = self.atom();
        if !self.takes('^') {
            return base;
        }
        let exponent = self.atom();
        base.powi(exponent.re as i32)
    }

    fn atom(&mut self) -> C {
        if self.takes('(') {
            let inner = self.sum();
            assert!(self.takes(')'), "no `)` before `{}`", self.rest);
            return inner;
        }
        let word = |c: char| c.is_ascii_alphanumeric() || c == '_' || c == '.';
        let end = self.rest.find(|c: char| !word(c)).unwrap_or(self.rest.len());
        let (token, rest) = self.rest.split_at(end);
        self.rest = rest;
        match token.parse::<f64>() {
            Ok(number) => C::new(number, 0.0),
            Err(_) => (self.value)(token),
        }
    }
}
