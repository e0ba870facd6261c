//! How parts of a formula will look once they are set with fraction bars: how strongly they hold together,
//! how wide and how tall they are. What LaTeX and MathML share.

use num_rational::BigRational;
use num_traits::ToPrimitive;
use rustc_hash::FxHashMap;

use super::number;
use super::{Formula, View};

/// How strongly the typeset form holds together.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Binding {
    Sum,
    Parallel,
    Product,
    /// A fraction or a power: closed, except under an exponent.
    Closed,
    Atom,
}

/// How a part will look.
#[derive(Clone, Copy, Default)]
pub(super) struct Extent {
    /// Symbols, operators and numbers side by side.
    pub(super) width: usize,
    /// True where parentheses must grow.
    pub(super) tall: bool,
}

/// Extents by address: the formula is borrowed, so addresses stay.
pub(super) type Extents = FxHashMap<*const Formula, Extent>;

/// How strongly a formula holds together.
pub(super) fn binding(formula: &Formula) -> Binding {
    match formula.view() {
        View::Letter(_) => Binding::Atom,
        View::Number(value) => match number_form(value) {
            NumberForm::Digits => Binding::Atom,
            NumberForm::Fraction => Binding::Closed,
            NumberForm::Power => Binding::Product,
        },
        View::Quotient(..) | View::Power(..) => Binding::Closed,
        View::Product(_) => Binding::Product,
        View::Parallel(_) => Binding::Parallel,
        View::Sum(_) | View::Negative(_) => Binding::Sum,
    }
}

/// True where digits would run into the number before.
pub(super) fn begins_with_number(formula: &Formula) -> bool {
    match formula.view() {
        View::Number(_) => true,
        View::Power(base, _) => {
            matches!(base.view(), View::Number(value) if number_form(value) == NumberForm::Digits)
        }
        View::Quotient(above, below) => {
            [above, below]
                .iter()
                .all(|part| matches!(part.view(), View::Number(_) | View::Power(..)))
                && begins_with_number(above)
        }
        _ => false,
    }
}

/// How a number is set.
#[derive(PartialEq)]
pub(super) enum NumberForm {
    /// `12`, `0.25`.
    Digits,
    /// `\frac{1}{3}`.
    Fraction,
    /// `4.7\cdot 10^{-9}`.
    Power,
}

/// Fractions of small numbers are fractions; other numbers are decimals if they are short.
pub(super) fn number_form(value: &BigRational) -> NumberForm {
    const SMALL: u32 = 100;
    if value.is_integer() && value.numer().bits() < 50 {
        return NumberForm::Digits;
    }
    let is_small = |part: Option<u32>| part.is_some_and(|part| part < SMALL);
    if is_small(value.numer().to_u32()) && is_small(value.denom().to_u32()) {
        return NumberForm::Fraction;
    }
    if !number::is_short(value) {
        return NumberForm::Fraction;
    }
    if number::shortest(value).contains('e') { NumberForm::Power } else { NumberForm::Digits }
}

/// Extents of all parts, operands before operations; sums beyond the limit will be rows.
pub(super) fn extents(formula: &Formula, limit: usize) -> Extents {
    let mut extents = Extents::default();
    let mut pending = vec![(formula, false)];
    while let Some((formula, operands_done)) = pending.pop() {
        let address = std::ptr::from_ref(formula);
        if !operands_done {
            // A shared part is measured once.
            if !extents.contains_key(&address) {
                pending.push((formula, true));
                pending.extend(formula.operands().iter().map(|operand| (operand, false)));
            }
            continue;
        }
        let mut extent = measure(formula, |part| {
            extents.get(&std::ptr::from_ref(part)).copied().unwrap_or_default()
        });
        extent.tall |= matches!(formula.view(), View::Sum(_)) && limit < extent.width;
        extents.insert(address, extent);
    }
    extents
}

/// The extent of an operation from those of its operands.
fn measure(formula: &Formula, extent: impl Fn(&Formula) -> Extent) -> Extent {
    let side_by_side = |operands: &[Formula], between: usize| {
        operands.iter().map(&extent).fold(Extent::default(), |all, part| Extent {
            width: all.width.saturating_add(part.width).saturating_add(if all.width > 0 {
                between
            } else {
                0
            }),
            tall: all.tall || part.tall,
        })
    };
    match formula.view() {
        View::Number(value) => {
            Extent { width: 1, tall: number_form(value) == NumberForm::Fraction }
        }
        View::Letter(_) => Extent { width: 1, tall: false },
        // A subtracted term has counted its sign.
        View::Sum(terms) => {
            let signs = terms.iter().filter(|term| !term.is_negative()).count().saturating_sub(1);
            let all = side_by_side(terms, 0);
            Extent { width: all.width.saturating_add(signs), ..all }
        }
        View::Product(factors) => side_by_side(factors, 0),
        View::Parallel(operands) => side_by_side(operands, 1),
        View::Negative(operand) => {
            let part = extent(operand);
            Extent { width: part.width.saturating_add(1), ..part }
        }
        View::Quotient(above, below) => {
            Extent { width: extent(above).width.max(extent(below).width), tall: true }
        }
        View::Power(base, _) => extent(base),
    }
}
