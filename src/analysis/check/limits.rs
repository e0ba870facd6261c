//! In which limit a claim is right: elements to 0 or to infinity, then matched elements.
//!
//! Only symbols that the claim leaves out are tried, the smallest sets first; of the least size all sets
//! are found. A limit of a product is that of one of its factors here, since the claim holds neither.
//!
//! Candidates are tried modulo a prime, with random residues for everything that the claim keeps: then
//! numerator and denominator are short polynomials in the symbols left out, and a limit picks the
//! terms of the ruling power of each. What is left must be the claim's residue times what is below, term
//! by term. So a candidate has to keep a term in which that holds already, and nearly all are
//! discarded at once. What passes is confirmed by the exact limit of the fraction.

use std::cell::Cell;

use rustc_hash::FxHashSet;

use super::residues::Point;
use super::values::variables;
use crate::algebra::{Fraction, Polynomial, Var};
use crate::analysis::limits::fraction_limit;
use crate::circuit::{Circuit, Claim, Limit, LimitTo, SymbolId, SymbolRole, Value};
use crate::elimination::{fraction_of, symbol_of, variable_of};

/// One condition of an idealisation; several are taken in their order.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Step {
    /// A symbol, or `s`, goes to 0 or to infinity.
    Limit(Limit),
    /// The first symbol is equal to the second.
    Matched(SymbolId, SymbolId),
    /// The first symbol is to the second as the third is to the fourth.
    Proportional([SymbolId; 4]),
}

/// Terms that one search may touch: a bound by work, never by the clock.
const MOST_WORK: usize = 1_000_000;
/// Sets of matched elements that are continued.
const MOST_SETS: usize = 400;
/// Conditions of one set at most.
const MOST_STEPS: usize = 6;
/// Matched elements of one set at most, and limits beside them.
const MOST_MATCHES: usize = 3;
const MOST_BESIDE: usize = 2;

/// The least sets in which `exact` becomes `claimed`.
pub(super) fn search(
    circuit: &Circuit,
    claim: &Claim,
    exact: &Fraction,
    claimed: &Fraction,
) -> Vec<Vec<Step>> {
    let Some(problem) = Problem::new(circuit, claim, exact, claimed) else { return Vec::new() };
    let whole = problem.projection(exact);
    let found = problem.limits(&whole, MOST_STEPS, &[]);
    let mut found = if found.is_empty() { problem.matched(&whole) } else { found };
    // Alone, a limit of `s` says most; among others, one of elements does.
    let of_s = |step: &Step| matches!(step, Step::Limit(Limit { symbol: None, .. }));
    found.sort_by_key(|set| set.len() > 1 && set.iter().any(of_s));
    found
}

/// The first of some changed claims that is right in a limit, with the limits; elements are not matched.
pub(super) fn first_in_limit<T>(
    circuit: &Circuit,
    claim: &Claim,
    exact: &Fraction,
    claimed: &Fraction,
    changed: impl Iterator<Item = (T, Value)>,
) -> Option<(T, Value, Vec<Step>)> {
    let mut problem = Problem::new(circuit, claim, exact, claimed)?;
    let whole = problem.projection(exact);
    for (what, value) in changed {
        let Some(target) = problem.point.value(&value).filter(|&target| target != 0) else {
            continue;
        };
        problem.target = target;
        if !problem.is_promising(&whole) {
            continue;
        }
        let Ok(claimed) = fraction_of(&value) else { continue };
        let changed = Problem { claimed: &claimed, ..problem.clone() };
        if let Some(steps) = changed.limits(&whole, MOST_STEPS, &[]).into_iter().next() {
            return Some((what, value, steps));
        }
    }
    None
}

/// Whether a variable is `s` or a symbol of the circuit: no constant goes to a limit.
fn may_vary(circuit: &Circuit, variable: Var) -> bool {
    symbol_of(variable).is_none_or(|symbol| {
        let symbol = circuit.symbols.get(symbol.0 as usize);
        symbol.is_some_and(|symbol| symbol.role != SymbolRole::Pi)
    })
}

/// A polynomial in the symbols left out, over a prime field: exponents and residue of each term,
/// ascending.
type Terms = Vec<(Vec<i16>, u64)>;

/// Numerator and denominator.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
struct State {
    above: Terms,
    below: Terms,
}

#[derive(Clone)]
struct Problem<'a> {
    circuit: &'a Circuit,
    exact: &'a Fraction,
    claimed: &'a Fraction,
    left_out: Vec<Var>,
    point: Point,
    target: u64,
    /// Terms touched so far.
    work: Cell<usize>,
}

impl<'a> Problem<'a> {
    /// None where the claim leaves nothing out.
    fn new(
        circuit: &'a Circuit,
        claim: &Claim,
        exact: &'a Fraction,
        claimed: &'a Fraction,
    ) -> Option<Self> {
        let symbols = circuit.symbols.len() + claim.extra.len();
        let point = Point::random(symbols, 0x0c1a_1000)?;
        let target = point.fraction(claimed)?;
        let mut left_out: Vec<Var> = variables(exact)
            .filter(|&variable| !claimed.numerator().contains(variable))
            .filter(|&variable| !claimed.denominator().contains(variable))
            .filter(|&variable| may_vary(circuit, variable))
            .collect();
        left_out.sort_unstable();
        left_out.dedup();
        let work = Cell::new(0);
        let whole = Self { circuit, exact, claimed, left_out, point, target, work };
        (!whole.left_out.is_empty()).then_some(whole)
    }

    fn projection(&self, fraction: &Fraction) -> State {
        State {
            above: self.project(fraction.numerator()),
            below: self.project(fraction.denominator()),
        }
    }

    fn project(&self, polynomial: &Polynomial) -> Terms {
        let field = &self.point.field;
        let coefficients = polynomial.coefficients_modulo(field);
        let terms = polynomial.terms().zip(coefficients).map(|((powers, _), coefficient)| {
            let mut exponents = vec![0; self.left_out.len()];
            let mut residue = coefficient;
            for (variable, power) in powers.filter(|(_, power)| *power > 0) {
                match self.left_out.binary_search(&variable) {
                    Ok(index) => exponents[index] = power as i16,
                    Err(_) => {
                        let factor = field.pow(self.point.of(variable), power.into());
                        residue = field.mul(residue, factor);
                    }
                }
            }
            (exponents, residue)
        });
        self.collected(terms.collect())
    }

    /// Sorted, equal exponents added up, zeros dropped.
    fn collected(&self, mut terms: Terms) -> Terms {
        terms.sort_by(|a, b| a.0.cmp(&b.0));
        let mut sums: Terms = Vec::with_capacity(terms.len());
        for (exponents, residue) in terms {
            match sums.last_mut() {
                Some((last, sum)) if *last == exponents => {
                    *sum = self.point.field.add(*sum, residue);
                }
                _ => sums.push((exponents, residue)),
            }
        }
        sums.retain(|(_, residue)| *residue != 0);
        sums
    }

    /// Counts the terms of a state; false once the bound is passed.
    fn may_touch(&self, state: &State) -> bool {
        let work = self.work.get() + state.above.len() + state.below.len();
        self.work.set(work);
        work <= MOST_WORK
    }

    /// Whether the state is the claim, whatever the symbols that are left.
    fn is_target(&self, state: &State) -> bool {
        if state.below.is_empty() {
            return false;
        }
        if self.target == 0 {
            return state.above.is_empty();
        }
        let field = &self.point.field;
        state.above.len() == state.below.len()
            && state.above.iter().zip(&state.below).all(|(above, below)| {
                above.0 == below.0 && above.1 == field.mul(below.1, self.target)
            })
    }

    /// Whether some term above is the claim's residue times the one below: one has to stay to the end.
    fn is_promising(&self, state: &State) -> bool {
        if self.target == 0 {
            return true;
        }
        let field = &self.point.field;
        let mut below = state.below.iter().peekable();
        state.above.iter().any(|(exponents, residue)| {
            while below.next_if(|(other, _)| other < exponents).is_some() {}
            below.peek().is_some_and(|(other, factor)| {
                other == exponents && *residue == field.mul(*factor, self.target)
            })
        })
    }

    /// The limit in one symbol; none where it is infinite, or where the symbol is not there.
    fn limit(&self, state: &State, index: usize, to: LimitTo) -> Option<State> {
        let power = |terms: &Terms| {
            let powers = terms.iter().map(|(exponents, _)| exponents[index]);
            match to {
                LimitTo::Infinity => powers.max(),
                LimitTo::Zero => powers.min(),
            }
        };
        let both = state.above.iter().chain(&state.below);
        let mut powers = both.map(|(exponents, _)| exponents[index]);
        let first = powers.next()?;
        if powers.all(|power| power == first) {
            return None;
        }
        let below = power(&state.below)?;
        let above = power(&state.above)?;
        let grows = match to {
            LimitTo::Infinity => above > below,
            LimitTo::Zero => above < below,
        };
        if grows {
            return None;
        }
        let of = |terms: &Terms, power: i16| -> Terms {
            let ruling = terms.iter().filter(|(exponents, _)| exponents[index] == power);
            let mut ruling: Terms = ruling.cloned().collect();
            for (exponents, _) in &mut ruling {
                exponents[index] = 0;
            }
            ruling
        };
        let above = if above == below { of(&state.above, above) } else { Vec::new() };
        Some(State { above, below: of(&state.below, below) })
    }

    /// The least sets of limits from a state on, `before` being taken already.
    fn limits(&self, start: &State, most: usize, before: &[Step]) -> Vec<Vec<Step>> {
        let mut level: Vec<(Vec<(usize, LimitTo)>, State)> = vec![(Vec::new(), start.clone())];
        for _ in 0..most {
            let mut next = Vec::new();
            let mut found: Vec<Vec<Step>> = Vec::new();
            let mut seen: FxHashSet<(Vec<(usize, bool)>, State)> = FxHashSet::default();
            for (taken, state) in &level {
                for index in 0..self.left_out.len() {
                    if taken.iter().any(|(other, _)| *other == index) {
                        continue;
                    }
                    for to in [LimitTo::Infinity, LimitTo::Zero] {
                        if !self.may_touch(state) {
                            return found;
                        }
                        let Some(state) = self.limit(state, index, to) else { continue };
                        let mut taken = taken.clone();
                        taken.push((index, to));
                        if self.is_target(&state) {
                            self.confirm(before, &taken, &mut found);
                        } else if !state.above.is_empty() && self.is_promising(&state) {
                            let mut set: Vec<(usize, bool)> =
                                taken.iter().map(|&(i, to)| (i, to == LimitTo::Zero)).collect();
                            set.sort_unstable();
                            if seen.insert((set, state.clone())) {
                                next.push((taken, state));
                            }
                        }
                    }
                }
            }
            if !found.is_empty() {
                return found;
            }
            level = next;
        }
        Vec::new()
    }

    /// Takes a set into the list if it is exact and new.
    fn confirm(&self, before: &[Step], taken: &[(usize, LimitTo)], found: &mut Vec<Vec<Step>>) {
        let limits = taken
            .iter()
            .map(|&(index, to)| Step::Limit(Limit { symbol: symbol_of(self.left_out[index]), to }));
        let steps: Vec<Step> = before.iter().cloned().chain(limits).collect();
        let same = |other: &Vec<Step>| {
            other.len() == steps.len() && steps.iter().all(|step| other.contains(step))
        };
        if found.iter().any(same) {
            return;
        }
        let exact =
            steps.iter().try_fold(self.exact.clone(), |fraction, step| take(&fraction, step));
        if exact.as_ref() == Some(self.claimed) {
            found.push(steps);
        }
    }

    /// The least sets with matched elements, and limits beside them.
    fn matched(&self, whole: &State) -> Vec<Vec<Step>> {
        let mut level: Vec<(Vec<Step>, State)> = vec![(Vec::new(), whole.clone())];
        let mut best: Vec<Vec<Step>> = Vec::new();
        let mut least = usize::MAX;
        for matches in 1..=MOST_MATCHES {
            if matches > least {
                break;
            }
            let mut next = Vec::new();
            for (before, state) in &level {
                for step in self.matches(before, matches == 1) {
                    if !self.may_touch(state) {
                        return best;
                    }
                    let state = self.substituted(state, &step);
                    let mut steps = before.clone();
                    steps.push(step);
                    let mut found = Vec::new();
                    if self.is_target(&state) {
                        self.confirm(&steps, &[], &mut found);
                    } else if self.is_promising(&state) && self.target != 0 {
                        let beside = MOST_BESIDE.min(least.saturating_sub(matches));
                        found = self.limits(&state, beside, &steps);
                    }
                    for set in found {
                        if set.len() < least {
                            least = set.len();
                            best.clear();
                        }
                        let same = |other: &Vec<Step>| {
                            other.len() == set.len() && set.iter().all(|step| other.contains(step))
                        };
                        if set.len() == least && !best.iter().any(same) {
                            best.push(set);
                        }
                    }
                    if next.len() < MOST_SETS
                        && !matches!(steps.last(), Some(Step::Proportional(_)))
                    {
                        next.push((steps, state));
                    }
                }
            }
            level = next;
        }
        best
    }

    /// The matches that may follow; each symbol is replaced once, and later ones come later in the list.
    fn matches(&self, before: &[Step], proportional: bool) -> Vec<Step> {
        let replaced = |symbol: SymbolId| {
            before.iter().any(|step| matches!(step, Step::Matched(a, _) if *a == symbol))
        };
        let mut last = before.iter().filter_map(|step| match step {
            Step::Matched(a, _) => Some(*a),
            _ => None,
        });
        let last = last.next_back();
        let left_out: Vec<SymbolId> =
            self.left_out.iter().filter_map(|&variable| symbol_of(variable)).collect();
        let mut steps = Vec::new();
        for &a in left_out.iter().filter(|&&a| !replaced(a) && last.is_none_or(|last| a > last)) {
            let like: Vec<SymbolId> = self.alike(a);
            for &b in like.iter().filter(|&&b| !replaced(b)) {
                // Two symbols that are both left out are matched in one order only.
                if left_out.contains(&b) && b > a {
                    continue;
                }
                steps.push(Step::Matched(a, b));
            }
            if !proportional {
                continue;
            }
            for &b in &like {
                for (index, &c) in like.iter().enumerate() {
                    for &d in like.iter().skip(index + 1).filter(|&&d| c != b && d != b) {
                        steps.push(Step::Proportional([a, b, c, d]));
                        steps.push(Step::Proportional([a, b, d, c]));
                    }
                }
            }
        }
        steps
    }

    /// The other symbols of the function or the claim that are of the same kind.
    fn alike(&self, symbol: SymbolId) -> Vec<SymbolId> {
        let own = &self.circuit[symbol];
        let mut found: Vec<SymbolId> = variables(self.exact)
            .chain(variables(self.claimed))
            .filter_map(symbol_of)
            .filter(|&other| other != symbol)
            .filter(|other| {
                self.circuit
                    .symbols
                    .get(other.0 as usize)
                    .is_some_and(|other| other.unit == own.unit && other.role != SymbolRole::Pi)
            })
            .collect();
        found.sort_unstable();
        found.dedup();
        found
    }

    fn substituted(&self, state: &State, step: &Step) -> State {
        let (from, over) = match step {
            Step::Matched(a, b) => (*a, vec![(*b, 1)]),
            Step::Proportional([a, b, c, d]) => (*a, vec![(*b, 1), (*c, 1), (*d, -1)]),
            Step::Limit(_) => return state.clone(),
        };
        let Ok(place) = self.left_out.binary_search(&variable_of(from)) else {
            return state.clone();
        };
        let of = |terms: &Terms| {
            let changed = terms.iter().map(|(exponents, residue)| {
                let (mut exponents, mut residue) = (exponents.clone(), *residue);
                let power = std::mem::take(&mut exponents[place]);
                for &(symbol, sign) in over.iter().filter(|_| power != 0) {
                    let variable = variable_of(symbol);
                    match self.left_out.binary_search(&variable) {
                        Ok(index) => exponents[index] += power * sign,
                        Err(_) => {
                            let base = self.point.of(variable);
                            let factor = self.point.power(base, i32::from(power * sign));
                            residue = self.point.field.mul(residue, factor.unwrap_or(0));
                        }
                    }
                }
                (exponents, residue)
            });
            self.collected(changed.collect())
        };
        State { above: of(&state.above), below: of(&state.below) }
    }
}

/// A fraction under one more condition; none where the limit is infinite.
fn take(fraction: &Fraction, step: &Step) -> Option<Fraction> {
    match step {
        Step::Limit(limit) => {
            fraction_limit(fraction, limit.symbol.map_or(Var::S, variable_of), limit.to)
        }
        Step::Matched(a, b) => {
            let (a, b) = (variable_of(*a), Polynomial::variable(variable_of(*b)));
            let of = |polynomial: &Polynomial| polynomial.substitute(a, &b);
            Fraction::new(&of(fraction.numerator()), &of(fraction.denominator()))
        }
        Step::Proportional([a, b, c, d]) => {
            let [a, b, c, d] = [*a, *b, *c, *d].map(variable_of);
            let value = Polynomial::monomial([(b, 1), (c, 1)], 1);
            let of = |polynomial: &Polynomial| -> Fraction {
                let parts = polynomial.coefficients(a);
                let degree = parts.len().saturating_sub(1) as u32;
                // Σ p_k·(bc)^k·d^(n − k) over d^n.
                let terms = parts.iter().zip(0_u32..).map(|(part, power)| {
                    &(part * &value.pow(power)) * &Polynomial::monomial([(d, degree - power)], 1)
                });
                let below = Polynomial::monomial([(d, degree)], 1);
                Fraction::new(&Polynomial::sum(terms), &below).unwrap_or_else(Fraction::zero)
            };
            of(fraction.numerator()).checked_div(&of(fraction.denominator()))
        }
    }
}

/// The least sets of limits in which a value is a root of the polynomial in `s`: the limits of the roots are
/// the roots of what rules in the polynomial (the others go to infinity).
pub(super) fn of_root(
    circuit: &Circuit,
    claim: &Claim,
    polynomial: &Polynomial,
    value: &Fraction,
) -> Vec<Vec<Step>> {
    let symbols = circuit.symbols.len() + claim.extra.len();
    let Some(point) = Point::random(symbols, 0x0c1a_1001) else { return Vec::new() };
    let Some(residue) = point.fraction(value) else { return Vec::new() };
    let at_root = point.with(Var::S, residue);
    let left_out: Vec<Var> = polynomial
        .variables()
        .filter(|&variable| variable != Var::S && may_vary(circuit, variable))
        .filter(|&variable| !value.numerator().contains(variable))
        .filter(|&variable| !value.denominator().contains(variable))
        .collect();
    let mut level: Vec<(Vec<Step>, Polynomial)> = vec![(Vec::new(), polynomial.clone())];
    for _ in 0..MOST_BESIDE {
        let (mut next, mut found) = (Vec::new(), Vec::new());
        for (before, polynomial) in &level {
            for &variable in left_out.iter().filter(|&&variable| polynomial.contains(variable)) {
                for to in [LimitTo::Infinity, LimitTo::Zero] {
                    let power = match to {
                        LimitTo::Infinity => polynomial.degree(variable),
                        LimitTo::Zero => polynomial.trailing_degree(variable),
                    };
                    let ruling = polynomial.coefficient(variable, power);
                    if ruling.degree(Var::S) == 0 || ruling == *polynomial {
                        continue;
                    }
                    let mut steps = before.clone();
                    steps.push(Step::Limit(Limit { symbol: symbol_of(variable), to }));
                    if at_root.polynomial(&ruling) == 0 && has_root(&ruling, value) {
                        let same =
                            |other: &Vec<Step>| steps.iter().all(|step| other.contains(step));
                        if !found.iter().any(same) {
                            found.push(steps);
                        }
                    } else {
                        next.push((steps, ruling));
                    }
                }
            }
        }
        if !found.is_empty() {
            return found;
        }
        level = next;
    }
    Vec::new()
}

/// Whether the polynomial in `s` is 0 at a value.
fn has_root(polynomial: &Polynomial, value: &Fraction) -> bool {
    let parts = polynomial.coefficients(Var::S);
    let degree = parts.len().saturating_sub(1) as u32;
    let terms = parts.iter().zip(0_u32..).map(|(part, power)| {
        &(part * &value.numerator().pow(power)) * &value.denominator().pow(degree - power)
    });
    Polynomial::sum(terms).is_zero()
}
