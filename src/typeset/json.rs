//! What `derive --format json` prints, and errors under `--format json`.
//!
//! Kept apart from the types of the engine, so that those can change and this cannot: a field may
//! be added, never altered. Fields stand in the order in which they are printed. Counts of terms
//! are strings because they pass 2⁶⁴ and JSON readers lose digits above 2⁵³.

use serde::Serialize;

/// The value of [`Derive::schema`].
pub const DERIVE_SCHEMA: &str = "cofactor/derive/1";

/// The whole output of `derive`.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Derive {
    /// Name and version of this format: [`DERIVE_SCHEMA`].
    pub schema: &'static str,
    /// The circuit's title; null when it has none.
    pub circuit: Option<String>,
    /// The symbols of the formulas, in the order of the circuit.
    pub symbols: Vec<Symbol>,
    /// One entry for each question.
    pub results: Vec<DeriveResult>,
    /// What the reader should know besides.
    pub warnings: Vec<Warning>,
}

/// A symbol of the formulas.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Symbol {
    /// As in the circuit: `Q1.gm`.
    pub name: String,
    /// As in `expression`s: `Q1_gm`.
    pub identifier: String,
    /// The SI unit's symbol: `Ω`, `S`, `s`, `V²/Hz`, `1`.
    pub unit: String,
    /// The exact nominal value in that unit, a decimal or a fraction; null without one.
    pub nominal: Option<String>,
    /// The tolerance as written: `1 %`; null without one.
    pub tolerance: Option<String>,
}

/// The answer to one question: a formula, or one for each source.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct DeriveResult {
    /// The name of the question: `H`.
    pub name: String,
    /// The question: `V(out) / Vin`.
    pub query: String,
    /// The formula, or the formulas of a superposition.
    #[serde(flatten)]
    pub answer: Answer,
}

/// What a result holds behind its name and query.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[serde(untagged)]
pub enum Answer {
    /// One ratio.
    Single(Box<Ratio>),
    /// A bare `V(..)` or `I(..)`.
    Superposition {
        /// One ratio for each independent source, in the order of the circuit.
        by_source: Vec<SourceRatio>,
    },
}

/// The share of one source in a superposition.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct SourceRatio {
    /// The independent source's name.
    pub source: String,
    /// Response over source.
    #[serde(flatten)]
    pub ratio: Ratio,
}

/// An exact ratio, in lowest terms.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Ratio {
    /// The SI unit's symbol.
    pub unit: String,
    /// The formula in plain ASCII: `+ - * / ^ ( )`, integers and identifiers.
    pub expression: String,
    /// The default shape, in the circuit language; may use `||`.
    pub compact: String,
    /// Named sub-expressions in order of use, in the nested shape only.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub definitions: Vec<Definition>,
    /// Coefficients above, by ascending powers of s; null where they are too long to expand.
    pub numerator: Option<Vec<Coefficient>>,
    /// Coefficients below, likewise.
    pub denominator: Option<Vec<Coefficient>>,
    /// Counts of terms where the coefficients are too long to expand.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub term_counts: Option<TermCounts>,
    /// The formula in LaTeX, for mathematics mode.
    pub latex: String,
    /// The coefficients with nominal values put in; null without these.
    pub numeric: Option<Numeric>,
    /// The comparison with a floating-point solution of the network.
    pub crosscheck: Crosscheck,
    /// The limits that were taken, in their order.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub limits: Vec<String>,
    /// What else was tried: a limit against the network, the parts of a feedback circuit.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub checks: Vec<Check>,
    /// Contributions and totals of a noise density, as fields of the result.
    #[serde(flatten)]
    pub noise: Option<Noise>,
}

/// Something that was tried besides the cross-check.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Check {
    /// What holds when it passed, for people.
    pub statement: String,
    /// Whether it holds.
    pub passed: bool,
}

/// What a noise density consists of, and what it adds up to. Its expressions are in the frequency
/// `f` in hertz, in `pi`, in the constants and in the symbols.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Noise {
    /// Every noisy element, in the order of the circuit.
    pub contributors: Vec<Contributor>,
    /// The mean square from 0 to infinity; null where it is infinite or of an order above 4.
    pub total: Option<TotalNoise>,
    /// The noise in the band; null without a band or without nominal values.
    pub in_band: Option<BandNoise>,
    /// The constants of nature in the expressions.
    pub constants: Vec<Constant>,
}

/// The share of one element in a noise density.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Contributor {
    /// The element, or a device's terminal for shot noise.
    pub element: String,
    /// Its share, in V²/Hz; `0` where it does not reach the voltage.
    pub expression: String,
}

/// A mean square over all frequencies.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct TotalNoise {
    /// The mean square in plain ASCII; it holds where the circuit is stable.
    pub expression: String,
    /// Of the expression: `V²`.
    pub unit: String,
    /// The root of its nominal value, in volt; null without nominal values.
    pub rms: Option<f64>,
}

/// The noise between two frequencies.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct BandNoise {
    /// The lower end, in hertz.
    pub from_hz: f64,
    /// The upper end, in hertz.
    pub to_hz: f64,
    /// The root of the mean square, in volt.
    pub rms: f64,
    /// A bound of its relative error.
    pub relative_error: f64,
}

/// A constant of nature, or the temperature.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Constant {
    /// As in `expression`s: `k_B`, `T_0`, `q_e`.
    pub name: String,
    /// The exact value.
    pub value: String,
    /// The SI unit's symbol.
    pub unit: String,
}

/// A named sub-expression.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Definition {
    /// `e1`, `e2`, …; never the name of a symbol.
    pub name: String,
    /// Plain ASCII; uses only symbols and definitions before it.
    pub expression: String,
}

/// The coefficient of one power of s.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Coefficient {
    /// The power of s.
    pub power: u32,
    /// The coefficient in plain ASCII.
    pub expression: String,
    /// How many terms it has when it is expanded.
    pub terms: String,
}

/// Counts of expanded terms, by ascending powers of s.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct TermCounts {
    /// Above.
    pub numerator: Vec<String>,
    /// Below.
    pub denominator: Vec<String>,
}

/// Numeric coefficients, by ascending powers of s: exact decimals or fractions, in lowest terms,
/// scaled so that the lowest coefficient below that is not 0 is 1.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Numeric {
    /// Above.
    pub numerator: Vec<String>,
    /// Below.
    pub denominator: Vec<String>,
}

/// A comparison with a floating-point solution.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Crosscheck {
    /// How many frequencies.
    pub points: usize,
    /// The lowest, in hertz.
    pub from_hz: f64,
    /// The highest, in hertz.
    pub to_hz: f64,
    /// Which values the symbols had.
    pub values: Values,
    /// The largest relative error.
    pub worst_relative_error: f64,
    /// True when the error is within what the arithmetic allows.
    pub passed: bool,
}

/// Which values the symbols have in a comparison.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Values {
    /// The circuit's.
    Nominal,
    /// Some are missing: all are random.
    Random,
}

/// A remark on the circuit or on a result.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Warning {
    /// A fixed word for programs.
    pub code: String,
    /// A sentence for people.
    pub message: String,
    /// The line of the file, from 1; null where it has no place.
    pub line: Option<u32>,
    /// The column, from 1, in characters; null where it has no place.
    pub column: Option<u32>,
}

/// What is printed on standard error when a command fails.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Failure {
    /// The fault.
    pub error: ErrorObject,
}

/// A fault.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct ErrorObject {
    /// A fixed word for programs.
    pub code: String,
    /// A sentence for people.
    pub message: String,
    /// The line of the file, from 1; null where it has no place.
    pub line: Option<u32>,
    /// The column, from 1, in characters; null where it has no place.
    pub column: Option<u32>,
    /// What to write instead; null where there is no advice.
    pub help: Option<String>,
}

#[cfg(test)]
mod tests {
    use expect_test::{Expect, expect};

    use super::*;

    #[track_caller]
    fn check(value: &impl Serialize, expected: Expect) {
        // Serialising these types does not fail.
        let text = serde_json::to_string_pretty(value).unwrap_or_else(|error| error.to_string());
        expected.assert_eq(&text);
    }

    fn ratio() -> Ratio {
        Ratio {
            unit: "1".to_owned(),
            expression: "1/(1 + s*R*C)".to_owned(),
            compact: "1/(1 + s*R*C)".to_owned(),
            definitions: Vec::new(),
            numerator: Some(vec![Coefficient {
                power: 0,
                expression: "1".to_owned(),
                terms: "1".to_owned(),
            }]),
            denominator: None,
            term_counts: None,
            latex: r"\frac{1}{1 + s\,R\,C}".to_owned(),
            numeric: None,
            crosscheck: Crosscheck {
                points: 41,
                from_hz: 10.0,
                to_hz: 1e6,
                values: Values::Nominal,
                worst_relative_error: 2.1e-15,
                passed: true,
            },
            limits: Vec::new(),
            checks: Vec::new(),
            noise: None,
        }
    }

    #[test]
    fn fields_stand_in_the_order_of_the_page() {
        let symbol = Symbol {
            name: "Q1.gm".to_owned(),
            identifier: "Q1_gm".to_owned(),
            unit: "S".to_owned(),
            nominal: Some("0.04".to_owned()),
            tolerance: None,
        };
        let result = DeriveResult {
            name: "H".to_owned(),
            query: "V(out) / Vin".to_owned(),
            answer: Answer::Single(Box::new(ratio())),
        };
        let warning = Warning {
            code: "unused".to_owned(),
            message: "`R9` is not used".to_owned(),
            line: Some(3),
            column: Some(9),
        };
        let derive = Derive {
            schema: DERIVE_SCHEMA,
            circuit: Some("Anti-alias filter".to_owned()),
            symbols: vec![symbol],
            results: vec![result],
            warnings: vec![warning],
        };
        check(
            &derive,
            expect![[r#"
            {
              "schema": "cofactor/derive/1",
              "circuit": "Anti-alias filter",
              "symbols": [
                {
                  "name": "Q1.gm",
                  "identifier": "Q1_gm",
                  "unit": "S",
                  "nominal": "0.04",
                  "tolerance": null
                }
              ],
              "results": [
                {
                  "name": "H",
                  "query": "V(out) / Vin",
                  "unit": "1",
                  "expression": "1/(1 + s*R*C)",
                  "compact": "1/(1 + s*R*C)",
                  "numerator": [
                    {
                      "power": 0,
                      "expression": "1",
                      "terms": "1"
                    }
                  ],
                  "denominator": null,
                  "latex": "\\frac{1}{1 + s\\,R\\,C}",
                  "numeric": null,
                  "crosscheck": {
                    "points": 41,
                    "from_hz": 10.0,
                    "to_hz": 1000000.0,
                    "values": "nominal",
                    "worst_relative_error": 2.1e-15,
                    "passed": true
                  }
                }
              ],
              "warnings": [
                {
                  "code": "unused",
                  "message": "`R9` is not used",
                  "line": 3,
                  "column": 9
                }
              ]
            }"#]],
        );
    }

    #[test]
    fn optional_fields_and_superposition() {
        let long = Ratio {
            definitions: vec![Definition {
                name: "e1".to_owned(),
                expression: "R1 + R2".to_owned(),
            }],
            numerator: None,
            term_counts: Some(TermCounts {
                numerator: vec!["1".to_owned()],
                denominator: vec!["94000000000000000".to_owned(), "1".to_owned()],
            }),
            numeric: Some(Numeric {
                numerator: vec!["1".to_owned()],
                denominator: vec!["1".to_owned(), "9.4e-5".to_owned()],
            }),
            ..ratio()
        };
        let by_source = vec![SourceRatio { source: "Vin".to_owned(), ratio: long }];
        let result = DeriveResult {
            name: "V".to_owned(),
            query: "V(out)".to_owned(),
            answer: Answer::Superposition { by_source },
        };
        check(
            &result,
            expect![[r#"
            {
              "name": "V",
              "query": "V(out)",
              "by_source": [
                {
                  "source": "Vin",
                  "unit": "1",
                  "expression": "1/(1 + s*R*C)",
                  "compact": "1/(1 + s*R*C)",
                  "definitions": [
                    {
                      "name": "e1",
                      "expression": "R1 + R2"
                    }
                  ],
                  "numerator": null,
                  "denominator": null,
                  "term_counts": {
                    "numerator": [
                      "1"
                    ],
                    "denominator": [
                      "94000000000000000",
                      "1"
                    ]
                  },
                  "latex": "\\frac{1}{1 + s\\,R\\,C}",
                  "numeric": {
                    "numerator": [
                      "1"
                    ],
                    "denominator": [
                      "1",
                      "9.4e-5"
                    ]
                  },
                  "crosscheck": {
                    "points": 41,
                    "from_hz": 10.0,
                    "to_hz": 1000000.0,
                    "values": "nominal",
                    "worst_relative_error": 2.1e-15,
                    "passed": true
                  }
                }
              ]
            }"#]],
        );
    }

    #[test]
    fn errors() {
        let error = ErrorObject {
            code: "unknown_node".to_owned(),
            message: "no node is called `grnd`".to_owned(),
            line: Some(4),
            column: Some(12),
            help: Some("did you mean `gnd`?".to_owned()),
        };
        check(
            &Failure { error },
            expect![[r#"
            {
              "error": {
                "code": "unknown_node",
                "message": "no node is called `grnd`",
                "line": 4,
                "column": 12,
                "help": "did you mean `gnd`?"
              }
            }"#]],
        );
    }
}
