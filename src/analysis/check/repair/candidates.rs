//! All single changes that are right modulo a prime, each with its cost.

use num_bigint::BigInt;
use num_traits::{One, Signed, ToPrimitive, Zero};

use super::needed::{Parts, monomial, operands, with_term};
use super::{Candidate, Change, Repair};
use crate::algebra::{Fraction, Var};
use crate::analysis::check::residues::Point;
use crate::circuit::{Number, Symbol, SymbolId, SymbolRole, Unit, Value};
use crate::elimination::{symbol_of, variable_of};

/// Each point differs from the first in one variable, by this factor.
const STEP: u64 = 2;
/// Powers that are recognised.
const HIGHEST: i32 = 6;

/// The costs: what goes wrong most often is cheapest.
mod cost {
    pub(super) const SIGN: u32 = 1_000;
    pub(super) const SWAPPED: u32 = 1_500;
    pub(super) const INVERTED: u32 = 1_600;
    pub(super) const ELEMENT: u32 = 1_800;
    pub(super) const FACTOR: u32 = 2_000;
    pub(super) const EXTRA_TERM: u32 = 2_500;
    pub(super) const POWER: u32 = 3_000;
    pub(super) const MISSING_TERM: u32 = 4_000;
    pub(super) const ODD: u32 = 1_200;
}

/// The candidates; none where the points cannot be evaluated.
pub(super) fn all(formula: &Value, exact: &Fraction, symbols: &[Symbol]) -> Option<Vec<Candidate>> {
    let search = Search::new(formula, exact, symbols)?;
    let mut found = Vec::new();
    search.parts(&mut found);
    search.everywhere(&mut found);
    Some(found)
}

/// number · Π variable^power, recognised from residues.
struct Monomial {
    number: Number,
    powers: Vec<(Var, i32)>,
}

struct Search<'a> {
    formula: &'a Value,
    symbols: &'a [Symbol],
    /// The variables of claim and result; point i + 1 is scaled in variable i.
    variables: Vec<Var>,
    points: Vec<Point>,
    /// The exact value at each point.
    wanted: Vec<u64>,
}

impl<'a> Search<'a> {
    fn new(formula: &'a Value, exact: &Fraction, symbols: &'a [Symbol]) -> Option<Self> {
        let mut variables: Vec<Var> = crate::analysis::check::values::variables(exact).collect();
        formula.for_each_symbol(&mut |symbol| variables.push(variable_of(symbol)));
        // A factor of π may be missing where nothing holds it.
        let pi = symbols.iter().position(|symbol| symbol.role == SymbolRole::Pi);
        variables.extend(pi.map(|index| Var(index as u32 + 1)));
        variables.push(Var::S);
        variables.sort_unstable();
        variables.dedup();
        let first = Point::random(symbols.len(), 0x0c1a_1002)?;
        let points: Vec<Point> = std::iter::once(first.clone())
            .chain(variables.iter().map(|&variable| first.scaled(variable, STEP)))
            .collect();
        let wanted = points.iter().map(|point| point.fraction(exact)).collect::<Option<_>>()?;
        Some(Self { formula, symbols, variables, points, wanted })
    }

    /// Changes of one part.
    fn parts(&self, found: &mut Vec<Candidate>) {
        let parts = Parts::new(self.formula);
        let residues: Vec<Vec<[Option<u64>; 2]>> = self
            .points
            .iter()
            .zip(&self.wanted)
            .map(|(point, &wanted)| parts.residues(point, wanted))
            .collect();
        for index in 0..parts.list.len() {
            let at: Option<Vec<[u64; 2]>> = residues
                .iter()
                .map(|all| match all[index] {
                    [Some(value), Some(needed)] => Some([value, needed]),
                    _ => None,
                })
                .collect();
            let Some(at) = at else { continue };
            for (cost, change, by) in self.of_part(&parts, index, &at) {
                let formula = parts.replaced(index, by);
                let leaves = leaves(parts.list[index].value);
                let cost = cost + leaves.min(99);
                found.push(Candidate { cost, repair: Repair::new(change, formula) });
            }
        }
    }

    /// The changes that give one part the value it needs.
    fn of_part(
        &self,
        parts: &Parts<'_>,
        index: usize,
        at: &[[u64; 2]],
    ) -> Vec<(u32, Change, Value)> {
        let part = parts.list[index].value;
        let parent = parts.list[index].parent.map(|parent| parts.list[parent].value);
        let mut changes = Vec::new();
        if at.iter().all(|[_, needed]| *needed == 0) {
            if matches!(parent, Some(Value::Sum(_))) {
                let zero = Value::Number(Number::zero());
                changes.push((cost::EXTRA_TERM, Change::ExtraTerm { term: part.clone() }, zero));
            }
            return changes;
        }
        let over = |f: &dyn Fn(&Point, u64, u64) -> Option<u64>| -> Option<Vec<u64>> {
            let all = self.points.iter().zip(at);
            all.map(|(point, [value, needed])| f(point, *value, *needed)).collect()
        };
        if let Some(ratio) = over(&|point, value, needed| point.quotient(needed, value))
            && let Some(ratio) = self.monomial(&ratio)
        {
            // A sign or a number belongs to a whole term, or to the number that stands there.
            let is_term =
                matches!(parent, None | Some(Value::Sum(_))) || matches!(part, Value::Number(_));
            let aside = if is_term { 0 } else { 110 };
            let found = self.times(part, &ratio);
            changes.extend(found.map(|(cost, change, by)| match change {
                Change::Sign { .. } | Change::Factor { .. } | Change::Turns { .. } => {
                    (cost + aside, change, by)
                }
                _ => (cost, change, by),
            }));
        }
        let inverse = |point: &Point, value: u64, needed: u64| Some(point.field.mul(value, needed));
        if over(&inverse).is_some_and(|products| products.iter().all(|&product| product == 1)) {
            let by = Value::Power(Box::new(part.clone()), -1);
            changes.push((cost::INVERTED, Change::Inverted { part: part.clone() }, by));
        }
        if let Some(rest) = over(&|point, value, needed| Some(point.field.sub(needed, value)))
            && let Some(term) = self.monomial(&rest)
        {
            let price = self.missing(&term, matches!(part, Value::Sum(_)), parent);
            let term = monomial(term.powers, &term.number);
            let by = with_term(part, term.clone());
            changes.push((price, Change::MissingTerm { term, part: part.clone() }, by));
        }
        let conductances = |point: &Point, value: u64, needed: u64| {
            Some(point.field.sub(point.quotient(1, needed)?, point.quotient(1, value)?))
        };
        if let Some(rest) = over(&conductances)
            && let Some(term) = self.monomial(&rest)
            && term.number.is_positive()
        {
            let length: u32 = term.powers.iter().map(|(_, power)| power.unsigned_abs()).sum();
            let inverse = term.powers.iter().map(|&(variable, power)| (variable, -power));
            let operand = monomial(inverse, &term.number.recip());
            let by = match part {
                Value::Parallel(list) => {
                    Value::Parallel(list.iter().cloned().chain([operand.clone()]).collect())
                }
                _ => Value::Parallel(vec![part.clone(), operand.clone()]),
            };
            let change = Change::MissingParallel { operand, part: part.clone() };
            changes.push((cost::MISSING_TERM + 50 + 300 * length, change, by));
        }
        changes
    }

    /// A missing term: short ones, in sums, without divisions.
    fn missing(&self, term: &Monomial, in_sum: bool, parent: Option<&Value>) -> u32 {
        let length: u32 = term.powers.iter().map(|(_, power)| power.unsigned_abs()).sum();
        let below = term.powers.iter().filter(|(_, power)| *power < 0).count() as u32;
        let odd = if term.number.abs().is_one() { 0 } else { cost::ODD };
        let place = match (in_sum, parent) {
            (true, _) => 0,
            // The sum above says the same.
            (false, Some(Value::Sum(_))) => 400,
            (false, _) => 200,
        };
        cost::MISSING_TERM + 100 * length + 250 * below + odd + place
    }

    /// A part that has to be multiplied by a monomial.
    fn times(&self, part: &Value, ratio: &Monomial) -> Option<(u32, Change, Value)> {
        let product = |factor: Value| match part {
            Value::Number(number) => match &factor {
                Value::Number(other) => Value::Number(number * other),
                _ => Value::Product(vec![part.clone(), factor]),
            },
            _ => Value::Product(vec![factor, part.clone()]),
        };
        let number = &ratio.number;
        let sign = if number.is_negative() { cost::ODD } else { 0 };
        match ratio.powers.as_slice() {
            [] if number.is_one() => None,
            [] if (-number).is_one() => {
                let by = match part {
                    Value::Negative(inner) => (**inner).clone(),
                    _ => Value::Negative(Box::new(part.clone())),
                };
                Some((cost::SIGN, Change::Sign { part: part.clone() }, by))
            }
            [] => {
                let factor = Value::Number(number.clone());
                let by = product(factor.clone());
                let price = cost::FACTOR + sign + oddness(number);
                Some((price, Change::Factor { part: part.clone(), factor }, by))
            }
            [(variable, power)] if self.is_pi(*variable) => {
                let factor = monomial([(*variable, *power)], number);
                let by = product(factor.clone());
                let price = cost::FACTOR + sign + 20 + oddness(number) + 50 * power.unsigned_abs();
                let turn = Number::from_integer(BigInt::from(2)).pow(*power);
                let part = part.clone();
                let change = match *number == turn {
                    true => Change::Turns { part, factor },
                    false => Change::Factor { part, factor },
                };
                Some((price, change, by))
            }
            powers => {
                if let Some(found) = self.other_element(part, powers, number) {
                    return Some(found);
                }
                let length: u32 = powers.iter().map(|(_, power)| power.unsigned_abs()).sum();
                let odd = if number.abs().is_one() { 0 } else { cost::ODD };
                let factor = monomial(powers.iter().copied(), number);
                let meant = simplified(part, powers, number).unwrap_or_else(|| product(factor));
                let price = cost::POWER + 400 * (length - 1) + sign + odd
                    // A power of a name that stands there is likelier than a new factor.
                    + if matches!(part, Value::Power(..) | Value::Symbol(_) | Value::S) { 0 } else { 40 };
                Some((price, Change::Power { part: part.clone(), meant: meant.clone() }, meant))
            }
        }
    }

    /// One element in the place of another of the same unit.
    fn other_element(
        &self,
        part: &Value,
        powers: &[(Var, i32)],
        number: &Number,
    ) -> Option<(u32, Change, Value)> {
        let [(a, p), (b, q)] = powers else { return None };
        if *p != -*q || !number.is_one() {
            return None;
        }
        let (meant, written) = if *p > 0 { (*a, *b) } else { (*b, *a) };
        let (meant, written) = (symbol_of(meant)?, symbol_of(written)?);
        if self.unit(meant) != self.unit(written) {
            return None;
        }
        let stands_there = match part {
            Value::Symbol(symbol) => *symbol == written,
            Value::Power(base, exponent) => {
                matches!(**base, Value::Symbol(symbol) if symbol == written)
                    && exponent.unsigned_abs() == p.unsigned_abs()
            }
            _ => false,
        };
        if !stands_there {
            return None;
        }
        let by = part.replaced(&|symbol| (symbol == written).then_some(Value::Symbol(meant)));
        Some((cost::ELEMENT, Change::Element { written, meant, everywhere: false }, by))
    }

    /// Changes wherever something stands.
    fn everywhere(&self, found: &mut Vec<Candidate>) {
        let is_right = |formula: &Value| {
            let mut all = self.points.iter().zip(&self.wanted).take(3);
            all.all(|(point, &wanted)| point.value(formula) == Some(wanted))
        };
        let mut try_it = |cost: u32, change: Change, formula: Value| {
            if is_right(&formula) {
                found.push(Candidate { cost, repair: Repair::new(change, formula) });
            }
        };
        let symbols: Vec<SymbolId> =
            self.variables.iter().filter_map(|&variable| symbol_of(variable)).collect();
        for (index, &a) in symbols.iter().enumerate() {
            for &b in &symbols[index + 1..] {
                if self.unit(a) != self.unit(b) {
                    continue;
                }
                let swap = |symbol: SymbolId| match symbol {
                    _ if symbol == a => Some(Value::Symbol(b)),
                    _ if symbol == b => Some(Value::Symbol(a)),
                    _ => None,
                };
                try_it(cost::SWAPPED, Change::Swapped(a, b), self.formula.replaced(&swap));
                for (written, meant) in [(a, b), (b, a)] {
                    let rename =
                        |symbol: SymbolId| (symbol == written).then_some(Value::Symbol(meant));
                    let change = Change::Element { written, meant, everywhere: true };
                    try_it(cost::ELEMENT + 50, change, self.formula.replaced(&rename));
                }
            }
        }
        self.frequencies(&mut try_it);
    }

    /// ω for `s`, and hertz for radians per second.
    fn frequencies(&self, try_it: &mut dyn FnMut(u32, Change, Value)) {
        let omega = self.symbols.iter().rposition(|symbol| symbol.name == "omega");
        if let Some(omega) = omega.map(|index| SymbolId(index as u32)) {
            let renamed = self.formula.replaced(&|symbol| (symbol == omega).then_some(Value::S));
            try_it(cost::SIGN, Change::Omega, renamed);
            try_it(cost::SIGN + 1, Change::Omega, squares_of_s(self.formula, omega));
        }
        let pi = self.symbols.iter().position(|symbol| symbol.role == SymbolRole::Pi);
        let Some(pi) = pi.map(|index| SymbolId(index as u32)) else { return };
        for power in [1, -1] {
            let factor = Value::Power(
                Box::new(Value::Product(vec![
                    Value::Number(Number::from_integer(2.into())),
                    Value::Symbol(pi),
                ])),
                power,
            );
            let scaled = Value::Product(vec![factor.clone(), Value::S]);
            let formula = with_s(self.formula, &scaled);
            try_it(cost::FACTOR, Change::Turns { part: Value::S, factor }, formula);
        }
    }

    fn unit(&self, symbol: SymbolId) -> Unit {
        self.symbols.get(symbol.0 as usize).map_or(Unit::ONE, |symbol| symbol.unit)
    }

    fn is_pi(&self, variable: Var) -> bool {
        symbol_of(variable)
            .and_then(|symbol| self.symbols.get(symbol.0 as usize))
            .is_some_and(|symbol| symbol.role == SymbolRole::Pi)
    }

    /// The monomial with these values at the points.
    fn monomial(&self, values: &[u64]) -> Option<Monomial> {
        let first = *values.first().filter(|&&value| value != 0)?;
        let point = &self.points[0];
        let field = &point.field;
        let mut powers = Vec::new();
        let mut product = 1;
        for (&variable, &value) in self.variables.iter().zip(&values[1..]) {
            let ratio = point.quotient(value, first)?;
            let power = (0..=HIGHEST)
                .flat_map(|power| [power, -power])
                .find(|&power| point.power(STEP, power) == Some(ratio))?;
            if power != 0 {
                powers.push((variable, power));
                product = field.mul(product, point.power(point.of(variable), power)?);
            }
        }
        let number = small_rational(point.quotient(first, product)?, field.modulus())?;
        Some(Monomial { number, powers })
    }
}

/// The fraction of small integers with that residue (Wang 1981).
fn small_rational(residue: u64, modulus: u64) -> Option<Number> {
    const LARGEST: i128 = 1 << 20;
    let (mut r0, mut r1) = (i128::from(modulus), i128::from(residue));
    let (mut t0, mut t1) = (0_i128, 1_i128);
    while r1 > LARGEST {
        let quotient = r0 / r1;
        (r0, r1) = (r1, r0 - quotient * r1);
        (t0, t1) = (t1, t0 - quotient * t1);
    }
    if t1 == 0 || t1.abs() > LARGEST || r1 == 0 {
        return None;
    }
    Some(Number::new(BigInt::from(r1), BigInt::from(t1)))
}

/// How unlikely a wrong factor is: 0 for powers of 2.
fn oddness(number: &Number) -> u32 {
    let size = number.abs();
    let parts = [size.numer().to_u64(), size.denom().to_u64()];
    match parts {
        [Some(a), Some(b)] if a.is_power_of_two() && b.is_power_of_two() && a * b <= 16 => 0,
        [Some(a), Some(b)] if a <= 12 && b <= 12 => 150,
        _ => cost::ODD,
    }
}

/// How many names and numbers stand in a value.
fn leaves(value: &Value) -> u32 {
    match operands(value) {
        [] => 1,
        parts => parts.iter().map(leaves).sum(),
    }
}

/// A single name or its power times a monomial of the same name, as a power.
fn simplified(part: &Value, powers: &[(Var, i32)], number: &Number) -> Option<Value> {
    let [(variable, power)] = powers else { return None };
    if !number.is_one() {
        return None;
    }
    let (base, own) = match part {
        Value::Power(base, own) => (&**base, *own),
        other => (other, 1),
    };
    let is_same = match base {
        Value::Symbol(symbol) => variable_of(*symbol) == *variable,
        Value::S => *variable == Var::S,
        _ => false,
    };
    is_same.then(|| match own + power {
        0 => Value::Number(Number::one()),
        1 => base.clone(),
        exponent => Value::Power(Box::new(base.clone()), exponent),
    })
}

/// With ω² as −s².
fn squares_of_s(value: &Value, omega: SymbolId) -> Value {
    let again = |parts: &[Value]| parts.iter().map(|part| squares_of_s(part, omega)).collect();
    match value {
        Value::Power(base, exponent) if **base == Value::Symbol(omega) && exponent % 2 == 0 => {
            let power = Value::Power(Box::new(Value::S), *exponent);
            if exponent % 4 == 0 { power } else { Value::Negative(Box::new(power)) }
        }
        Value::Number(_) | Value::Symbol(_) | Value::S => value.clone(),
        Value::Sum(parts) => Value::Sum(again(parts)),
        Value::Product(parts) => Value::Product(again(parts)),
        Value::Parallel(parts) => Value::Parallel(again(parts)),
        Value::Power(base, exponent) => {
            Value::Power(Box::new(squares_of_s(base, omega)), *exponent)
        }
        Value::Negative(inner) => Value::Negative(Box::new(squares_of_s(inner, omega))),
    }
}

/// With something in the place of `s`.
fn with_s(value: &Value, by: &Value) -> Value {
    let again = |parts: &[Value]| parts.iter().map(|part| with_s(part, by)).collect();
    match value {
        Value::S => by.clone(),
        Value::Number(_) | Value::Symbol(_) => value.clone(),
        Value::Sum(parts) => Value::Sum(again(parts)),
        Value::Product(parts) => Value::Product(again(parts)),
        Value::Parallel(parts) => Value::Parallel(again(parts)),
        Value::Power(base, exponent) => Value::Power(Box::new(with_s(base, by)), *exponent),
        Value::Negative(inner) => Value::Negative(Box::new(with_s(inner, by))),
    }
}
