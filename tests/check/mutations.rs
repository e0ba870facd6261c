//! Single mistakes in textbook formulas: each is judged right, and the repair undoes it.

use cofactor::analysis::check::Judgement;
use cofactor::circuit::{Circuit, Number, SymbolId, Unit, Value};
use cofactor::language;

use super::value::{Draw, changed, evaluate, integer, operands, parts, show};
use super::{Bench, forms, word};

/// What is done to a formula.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Mistake {
    Sign,
    MissingTerm,
    Swap,
    Factor,
    Power,
    Unit,
}

const MISTAKES: [Mistake; 6] = [
    Mistake::Sign,
    Mistake::MissingTerm,
    Mistake::Swap,
    Mistake::Factor,
    Mistake::Power,
    Mistake::Unit,
];

/// How many mistakes are made in each formula.
const EACH: usize = 13;

struct Mutant {
    mistake: Mistake,
    formula: Value,
}

fn mutant(circuit: &Circuit, formula: &Value, mistake: Mistake, draw: &mut Draw) -> Option<Mutant> {
    let all = parts(formula);
    let of_kind = |wanted: &dyn Fn(&Value) -> bool| -> Vec<Vec<usize>> {
        all.iter().filter(|(_, part)| wanted(part)).map(|(path, _)| path.clone()).collect()
    };
    let pick = |paths: &[Vec<usize>], draw: &mut Draw| {
        if paths.is_empty() { None } else { Some(draw.of(paths).clone()) }
    };
    let is_sum = |part: &Value| matches!(part, Value::Sum(_));
    let with = |path: &[usize], change: &dyn Fn(&Value) -> Value| {
        Some(Mutant { mistake, formula: changed(formula, path, change) })
    };
    match mistake {
        Mistake::Sign => {
            let path = pick(&of_kind(&is_sum), draw)?;
            let place = draw.below(8);
            with(&path, &|part| {
                let mut terms = operands(part).to_vec();
                let place = place % terms.len();
                terms[place] = match &terms[place] {
                    Value::Negative(inner) => (**inner).clone(),
                    other => Value::Negative(Box::new(other.clone())),
                };
                Value::Sum(terms)
            })
        }
        Mistake::MissingTerm => {
            let path = pick(&of_kind(&is_sum), draw)?;
            let place = draw.below(8);
            with(&path, &|part| {
                let mut terms = operands(part).to_vec();
                terms.remove(place % terms.len());
                if terms.len() == 1 { terms.remove(0) } else { Value::Sum(terms) }
            })
        }
        Mistake::Swap => {
            let mut symbols: Vec<SymbolId> = Vec::new();
            formula.for_each_symbol(&mut |symbol| symbols.push(symbol));
            symbols.sort_unstable();
            symbols.dedup();
            let mut pairs = Vec::new();
            for (index, &a) in symbols.iter().enumerate() {
                for &b in &symbols[index + 1..] {
                    if circuit[a].unit == circuit[b].unit {
                        pairs.push((a, b));
                    }
                }
            }
            if pairs.is_empty() {
                return None;
            }
            let &(a, b) = draw.of(&pairs);
            let swap = |symbol| match symbol {
                _ if symbol == a => Some(Value::Symbol(b)),
                _ if symbol == b => Some(Value::Symbol(a)),
                _ => None,
            };
            Some(Mutant { mistake, formula: formula.replaced(&swap) })
        }
        Mistake::Factor => {
            let factors = [integer(2), Value::Power(Box::new(integer(2)), -1)];
            let factor = draw.of(&factors).clone();
            let path = draw.of(&all).0.clone();
            with(&path, &|part| Value::Product(vec![factor.clone(), part.clone()]))
        }
        Mistake::Power => {
            let is_name = |part: &Value| matches!(part, Value::Symbol(_) | Value::S);
            let path = pick(&of_kind(&is_name), draw)?;
            with(&path, &|part| Value::Power(Box::new(part.clone()), 2))
        }
        Mistake::Unit => {
            let path = pick(&of_kind(&is_sum), draw)?;
            let place = draw.below(8);
            let mut symbols = Vec::new();
            formula.for_each_symbol(&mut |symbol| symbols.push(symbol));
            symbols.retain(|&symbol| circuit[symbol].unit != Unit::ONE);
            let symbol = *draw.of(&symbols);
            with(&path, &|part| {
                let mut terms = operands(part).to_vec();
                let place = place % terms.len();
                terms[place] = Value::Product(vec![Value::Symbol(symbol), terms[place].clone()]);
                Value::Sum(terms)
            })
        }
    }
}

/// Numbers of no relation for the symbols.
fn numbers(circuit: &Circuit, seed: usize) -> (Vec<Number>, Number) {
    let mut draw = Draw::new(seed as u64 + 7);
    let mut number =
        || Number::new((draw.below(9000) + 1000).into(), (draw.below(900) + 101).into());
    (circuit.symbols.iter().map(|_| number()).collect(), number())
}

/// Whether two formulas have the same value at a few points; enough to tell two of these apart.
fn same(circuit: &Circuit, a: &Value, b: &Value) -> bool {
    (0..3).all(|seed| {
        let (symbols, s) = numbers(circuit, seed);
        evaluate(a, &symbols, &s) == evaluate(b, &symbols, &s)
    })
}

/// Whether the mistake, undone, is what the repair says: by its kind, or because what comes out is the
/// formula as it was.
fn is_undone(
    circuit: &Circuit,
    mistake: Mistake,
    original: &Value,
    mutant: &Value,
    judgement: &Judgement,
) -> bool {
    let Some(repair) = &judgement.repair else { return false };
    assert!(same(circuit, &repair.formula, original), "a repair that is wrong: {repair:?}");
    let kind = repair.change.kind();
    let by_kind = match mistake {
        Mistake::Sign => kind == "sign",
        Mistake::MissingTerm => kind == "missing_term",
        // In a plain ratio the two are one mistake.
        Mistake::Swap => kind == "swapped" || kind == "inverted",
        Mistake::Factor => kind == "factor",
        Mistake::Power | Mistake::Unit => kind == "power",
    };
    by_kind || show(circuit, &repair.formula) == show(circuit, original) && mutant != original
}

#[test]
#[expect(clippy::print_stdout, reason = "the share is a measurement")]
fn single_mistakes_are_judged_and_mended() {
    let mut draw = Draw::new(7);
    let (mut judged, mut undone, mut misses) = (0, 0, Vec::new());
    for form in forms() {
        let mut bench = Bench::new(&form.text);
        let original =
            language::parse_expression(&bench.circuit, &form.formula).expect("a formula");
        for attempt in 0..EACH {
            let mistake = MISTAKES[attempt % MISTAKES.len()];
            let Some(mutant) = mutant(&bench.circuit, &original, mistake, &mut draw) else {
                continue;
            };
            if same(&bench.circuit, &mutant.formula, &original) {
                continue;
            }
            let claim = format!("{} = {}", form.result, show(&bench.circuit, &mutant.formula));
            let judgement = bench.judge(&claim);
            let judgement = judgement.unwrap_or_else(|why| panic!("{}: {why}", form.circuit));
            let verdict = word(judgement.verdict);
            let circuit = &bench.circuit;
            check_verdict(
                circuit,
                &original,
                &mutant,
                &judgement,
                &format!("{}: {claim}", form.circuit),
            );
            if verdict == "equal_in_limit" {
                continue;
            }
            judged += 1;
            if is_undone(circuit, mutant.mistake, &original, &mutant.formula, &judgement) {
                undone += 1;
            } else {
                let found = judgement.repair.map(|repair| repair.change.kind());
                misses.push(format!("{:?} {found:?} {}: {claim}", mutant.mistake, form.circuit));
            }
        }
    }
    println!("{judged} mistakes, {undone} undone\n{}", misses.join("\n"));
    assert!(judged >= 400, "{judged} mistakes");
    assert!(undone * 100 >= judged * 90, "{undone} of {judged}:\n{}", misses.join("\n"));
}

/// The verdict against what is known of the mistake without the library.
fn check_verdict(
    circuit: &Circuit,
    original: &Value,
    mutant: &Mutant,
    judgement: &Judgement,
    what: &str,
) {
    let verdict = word(judgement.verdict);
    match mutant.mistake {
        Mistake::Unit => assert_eq!(verdict, "unit_error", "{what}"),
        // A power of a plain number is a wrong number; of anything else a wrong unit.
        Mistake::Power if verdict == "unit_error" => {}
        _ if verdict == "equal_in_limit" => {
            // Right in a limit is only what has lost something.
            let lost = (0..circuit.symbols.len()).any(|symbol| {
                depends(circuit, original, symbol) && !depends(circuit, &mutant.formula, symbol)
            });
            let lost_s = depends_on_s(circuit, original) && !depends_on_s(circuit, &mutant.formula);
            assert!(lost || lost_s, "{what}: a limit of nothing");
        }
        _ => assert_eq!(verdict, "different", "{what}"),
    }
}

/// Whether a formula changes with a symbol.
fn depends(circuit: &Circuit, formula: &Value, symbol: usize) -> bool {
    let (symbols, s) = numbers(circuit, 0);
    let mut changed = symbols.clone();
    changed[symbol] = &changed[symbol] * Number::from_integer(3.into());
    evaluate(formula, &symbols, &s) != evaluate(formula, &changed, &s)
}

fn depends_on_s(circuit: &Circuit, formula: &Value) -> bool {
    let (symbols, s) = numbers(circuit, 0);
    let other = &s * Number::from_integer(3.into());
    evaluate(formula, &symbols, &s) != evaluate(formula, &symbols, &other)
}
