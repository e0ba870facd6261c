//! Units of expressions, and the units that bare parameters must have.
//!
//! The unit of an expression is linear in the unknown units of its parameters once exponents are
//! written down: a product adds, a power multiplies. Every sum and every element's value is an equation; they
//! are solved by elimination, one after the other, and one that cannot hold is an error at its place.

use super::definitions::{Definitions, Meaning};
use super::diagnostic::{Diagnostic, Span};
use super::names::{class_of_letter, unit_of};
use super::syntax::{Expression, ExpressionKind};
use crate::circuit::{Number, Unit};
use num_bigint::BigInt;
use num_traits::{One, Signed, ToPrimitive, Zero};
use rustc_hash::FxHashMap;
use std::collections::BTreeMap;

/// A base unit, or the unknown unit of a definition.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
enum Base {
    Volt,
    Ampere,
    Second,
    Kelvin,
    Unknown(usize),
}

/// A product of powers.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
struct Form(BTreeMap<Base, Number>);

impl Form {
    fn of(unit: Unit) -> Self {
        let exponents = [
            (Base::Volt, unit.volt),
            (Base::Ampere, unit.ampere),
            (Base::Second, unit.second),
            (Base::Kelvin, unit.kelvin),
        ];
        let integer = |exponent: i32| Number::from(BigInt::from(exponent));
        Self(
            exponents
                .into_iter()
                .filter(|(_, exponent)| *exponent != 0)
                .map(|(base, exponent)| (base, integer(exponent)))
                .collect(),
        )
    }

    fn unknown(id: usize) -> Self {
        Self(BTreeMap::from([(Base::Unknown(id), Number::from(BigInt::from(1)))]))
    }

    /// self · other^power.
    fn multiply(&mut self, other: &Self, power: &Number) {
        for (base, exponent) in &other.0 {
            let entry = self.0.entry(*base).or_insert_with(Number::zero);
            *entry += exponent * power;
            if entry.is_zero() {
                self.0.remove(base);
            }
        }
    }

    /// Replaces an unknown.
    fn substitute(&mut self, id: usize, solution: &Self) {
        if let Some(exponent) = self.0.remove(&Base::Unknown(id)) {
            self.multiply(solution, &exponent);
        }
    }

    /// The unit, where no unknown is left and the exponents are integers; an unknown counts as 1
    /// if `free_is_one`.
    fn unit(&self, free_is_one: bool) -> Option<Unit> {
        let mut unit = Unit::ONE;
        for (base, exponent) in &self.0 {
            let slot = match base {
                Base::Volt => &mut unit.volt,
                Base::Ampere => &mut unit.ampere,
                Base::Second => &mut unit.second,
                Base::Kelvin => &mut unit.kelvin,
                Base::Unknown(_) if free_is_one => continue,
                Base::Unknown(_) => return None,
            };
            if !exponent.is_integer() {
                return None;
            }
            // Units beyond this occur in no formula; the bound keeps later products safe.
            *slot = exponent.to_i32().filter(|exponent| exponent.abs() <= 10_000)?;
        }
        Some(unit)
    }
}

/// Solves for the units of a file.
pub(crate) struct UnitSolver<'d> {
    definitions: &'d Definitions,
    solved: FxHashMap<usize, Form>,
    pub(crate) faults: Vec<Diagnostic>,
}

impl<'d> UnitSolver<'d> {
    /// Starts with the units that classes, devices and `let` fix.
    pub(crate) fn new(definitions: &'d Definitions) -> Self {
        let solved = definitions
            .list
            .iter()
            .enumerate()
            .filter_map(|(id, definition)| Some((id, Form::of(definition.unit?))))
            .collect();
        Self { definitions, solved, faults: Vec::new() }
    }

    /// Takes in what the definitions' own expressions demand.
    pub(crate) fn read_definitions(&mut self) {
        let definitions = self.definitions;
        for id in definitions.order.iter().copied() {
            let definition = &definitions.list[id];
            if let Meaning::Expression(expression) = &definition.meaning {
                let Some(found) = self.form(expression) else { continue };
                let wanted = Form::unknown(id);
                self.equate(&wanted, found, |found, wanted| {
                    Diagnostic::error(
                        "wrong-unit",
                        expression.span,
                        format!(
                            "the value of `{}` is in {found} and must be in {wanted}",
                            definition.name
                        ),
                    )
                });
            }
        }
    }

    /// Demands that an expression has a unit.
    pub(crate) fn demand(&mut self, expression: &Expression, unit: Unit, what: &str) {
        let Some(found) = self.form(expression) else { return };
        self.equate(&Form::of(unit), found, |found, wanted| {
            Diagnostic::error(
                "wrong-unit",
                expression.span,
                format!("the {what} is in {found} and must be in {wanted}"),
            )
            .help("a number with a unit gets a name: `let k = 2 mS`")
        });
    }

    /// Where nothing tells the unit of a parameter, its letter does (`Rx` is in ohm).
    pub(crate) fn guess_free(&mut self) {
        for (id, definition) in self.definitions.list.iter().enumerate() {
            if matches!(definition.meaning, Meaning::Symbol { .. })
                && definition.unit.is_none()
                && let Some(class) = class_of_letter(&definition.name)
                && self.reduce(Form::unknown(id)) == Form::unknown(id)
            {
                self.solved.insert(id, Form::of(unit_of(class)));
            }
        }
    }

    /// The unit of a definition; dimensionless where nothing tells.
    pub(crate) fn unit(&mut self, id: usize) -> Unit {
        let form = self.reduce(Form::unknown(id));
        match form.unit(true) {
            Some(unit) => unit,
            None => {
                let definition = &self.definitions.list[id];
                self.faults.push(Diagnostic::error(
                    "unit-power",
                    definition.span,
                    format!(
                        "`{}` would need a unit with a power that is no small integer",
                        definition.name
                    ),
                ));
                Unit::ONE
            }
        }
    }

    /// The unit of an expression; `None` for what fits every unit (0) or cannot be told.
    fn form(&mut self, expression: &Expression) -> Option<Form> {
        match &expression.kind {
            ExpressionKind::Number(number) => (!number.is_zero()).then(Form::default),
            ExpressionKind::Name(name) if name == "s" => Some(Form::of(Unit::HERTZ)),
            ExpressionKind::Name(name) => {
                let id = self.definitions.find(name)?;
                Some(self.reduce(Form::unknown(id)))
            }
            ExpressionKind::Call(..) => None,
            ExpressionKind::Negative(inner) => self.form(inner),
            ExpressionKind::Power(base, exponent) => {
                let mut form = Form::default();
                form.multiply(&self.form(base)?, &Number::from(BigInt::from(*exponent)));
                Some(form)
            }
            ExpressionKind::Product(factors) => {
                let one = Number::from(BigInt::from(1));
                let mut product = Some(Form::default());
                for factor in factors {
                    // Every factor is visited, for the sums inside.
                    let form = self.form(factor);
                    product = product.zip(form).map(|(mut product, form)| {
                        product.multiply(&form, &one);
                        product
                    });
                }
                product
            }
            ExpressionKind::Sum(terms) => self.alike(terms, "added"),
            ExpressionKind::Parallel(branches) => self.alike(branches, "set in parallel"),
        }
    }

    fn alike(&mut self, terms: &[Expression], deed: &str) -> Option<Form> {
        let mut first: Option<(Form, Span)> = None;
        for term in terms {
            let Some(form) = self.form(term) else { continue };
            match &first {
                None => first = Some((form, term.span)),
                Some((known, place)) => {
                    let (known, place) = (known.clone(), *place);
                    self.equate(&known, form, |found, wanted| {
                        Diagnostic::error(
                            "unit-mismatch",
                            term.span,
                            format!("{wanted} and {found} are {deed}"),
                        )
                        .label(place, format!("this is in {wanted}"))
                    });
                }
            }
        }
        first.map(|(form, _)| self.reduce(form))
    }

    /// Demands `wanted` = `found`.
    fn equate(
        &mut self,
        wanted: &Form,
        found: Form,
        fault: impl FnOnce(String, String) -> Diagnostic,
    ) {
        let minus_one = Number::from(BigInt::from(-1));
        let wanted = self.reduce(wanted.clone());
        let found = self.reduce(found);
        let mut difference = found.clone();
        difference.multiply(&wanted, &minus_one);
        // An exponent of ±1 keeps the exponents of the solution integers; of those the latest, so that
        // a parameter that many values share stays free.
        let pivot = difference
            .0
            .iter()
            .filter_map(|(base, exponent)| match base {
                Base::Unknown(id) => Some((*id, exponent.clone())),
                _ => None,
            })
            .max_by_key(|(_, exponent)| exponent.abs().is_one());
        if let Some((id, exponent)) = pivot {
            difference.0.remove(&Base::Unknown(id));
            let mut solution = Form::default();
            solution.multiply(&difference, &(&minus_one / exponent));
            self.solved.insert(id, solution);
        } else if !difference.0.is_empty() {
            let show = |form: &Form| match form.unit(true) {
                Some(unit) => format!("`{unit}`"),
                None => "an odd unit".to_owned(),
            };
            self.faults.push(fault(show(&found), show(&wanted)));
        }
    }

    /// Puts in what is known.
    fn reduce(&mut self, mut form: Form) -> Form {
        while let Some(id) = self.known_in(&form) {
            self.compress(id);
            form.substitute(id, &self.solved[&id]);
        }
        form
    }

    /// Makes the solution of an unknown free of other known ones, and all that it rests on as
    /// well, so that a chain is walked once (as a union-find halves its paths).
    fn compress(&mut self, id: usize) {
        let mut stack = vec![id];
        while let Some(top) = stack.last().copied() {
            match self.known_in(&self.solved[&top]) {
                None => {
                    stack.pop();
                }
                Some(inner) if self.known_in(&self.solved[&inner]).is_some() => stack.push(inner),
                Some(inner) => {
                    let known = self.solved[&inner].clone();
                    if let Some(form) = self.solved.get_mut(&top) {
                        form.substitute(inner, &known);
                    }
                }
            }
        }
    }

    /// An unknown of the form that is solved.
    fn known_in(&self, form: &Form) -> Option<usize> {
        form.0.keys().find_map(|base| match base {
            Base::Unknown(id) if self.solved.contains_key(id) => Some(*id),
            _ => None,
        })
    }
}
