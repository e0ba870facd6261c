//! LaTeX as written. Each expected text was typeset once by KaTeX with errors on.

use expect_test::{Expect, expect};
use proptest::prelude::*;

use super::*;
use crate::typeset::random::tree;

fn names() -> SymbolTable {
    SymbolTable::new(["R1", "R2", "C1", "C2", "tau", "Q1.rpi", "U1.gain", "wp"])
}

fn x(index: u32) -> Formula {
    Formula::symbol(index)
}

fn n(value: i64) -> Formula {
    Formula::integer(value)
}

fn ratio(above: i64, below: i64) -> Formula {
    Formula::number(BigRational::new(above.into(), below.into()))
}

fn product(factors: impl IntoIterator<Item = Formula>) -> Formula {
    Formula::product(factors)
}

/// 1 + s·C2·(R1 + R2) + s²·R1·R2·C1·C2: the second-order low-pass of textbooks (Sallen & Key 1955).
fn second_order() -> Formula {
    Formula::sum([
        n(1),
        product([Formula::s(), x(3), Formula::sum([x(0), x(1)])]),
        product([Formula::power(Formula::s(), 2), x(0), x(1), x(2), x(3)]),
    ])
}

#[track_caller]
fn check(formula: Formula, expected: Expect) {
    expected.assert_eq(&Latex { names: &names(), width: 60 }.text(&formula));
}

#[test]
fn numbers_and_names() {
    check(ratio(-3, 2), expect![[r#"-\frac{3}{2}"#]]);
    check(ratio(1234, 1000), expect!["1.234"]);
    check(ratio(47, 10_000_000_000), expect![[r#"4.7\cdot 10^{-9}"#]]);
    check(ratio(1, 1234), expect![[r#"\frac{1}{1234}"#]]);
    check(
        product([ratio(1, 2), x(6), Formula::power(x(5), 2)]),
        expect![[r#"\frac{1}{2}\,\mathrm{gain}_{\mathrm{U1}}\,r_{\pi,\mathrm{Q1}}^{2}"#]],
    );
    check(
        product([n(2), Formula::pi(), Formula::frequency(), x(4)]),
        expect![[r#"2\,\pi\,f\,\tau"#]],
    );
    check(Formula::power(ratio(47, 10_000_000_000), 300), expect![[r#"(4.7\cdot 10^{-9})^{300}"#]]);
    check(product([n(3), Formula::power(n(10), 20_000)]), expect![[r#"3 \cdot 10^{20000}"#]]);
    check(Formula::power(Formula::definition(1), 2), expect!["e_{2}^{2}"]);
}

#[test]
fn fractions_and_parentheses() {
    check(
        Formula::quotient(n(1), second_order()),
        expect![[r#"\frac{1}{1 + s\,C_{2}\,(R_{1} + R_{2}) + s^{2}\,R_{1}\,R_{2}\,C_{1}\,C_{2}}"#]],
    );
    check(Formula::quotient(x(1), x(0)).negative(), expect![[r#"-\frac{R_{2}}{R_{1}}"#]]);
    check(Formula::sum([x(0), x(1)]).negative(), expect!["-(R_{1} + R_{2})"]);
    let pole = || Formula::sum([n(1), Formula::quotient(Formula::s(), x(7))]);
    check(
        product([x(6), pole()]),
        expect![[r#"\mathrm{gain}_{\mathrm{U1}} \left(1 + \frac{s}{w_{\mathrm{p}}}\right)"#]],
    );
    check(
        Formula::quotient(x(6), Formula::power(pole(), 2)),
        expect![[
            r#"\frac{\mathrm{gain}_{\mathrm{U1}}}{\left(1 + \frac{s}{w_{\mathrm{p}}}\right)^{2}}"#
        ]],
    );
    check(
        Formula::power(Formula::quotient(x(0), x(1)), 2),
        expect![[r#"\left(\frac{R_{1}}{R_{2}}\right)^{2}"#]],
    );
    check(Formula::power(product([x(0), x(2)]), 3), expect![[r#"(R_{1}\,C_{1})^{3}"#]]);
    check(Formula::power(Formula::power(x(0), i32::MAX), 2), expect!["R_{1}^{4294967294}"]);
    check(Formula::power(Formula::power(x(0), i32::MAX), 3), expect!["(R_{1}^{2147483647})^{3}"]);
    check(
        product([Formula::sum([x(0), x(1)]), pole(), x(3)]),
        expect![[r#"(R_{1} + R_{2}) \left(1 + \frac{s}{w_{\mathrm{p}}}\right)\,C_{2}"#]],
    );
}

#[test]
fn parallels() {
    let reactance = || Formula::quotient(n(1), product([Formula::s(), x(2)]));
    check(
        Formula::parallel([x(0), x(1), reactance()]),
        expect![[r#"R_{1} \parallel R_{2} \parallel \frac{1}{s\,C_{1}}"#]],
    );
    check(
        Formula::sum([x(0), Formula::parallel([x(1), reactance()])]),
        expect![[r#"R_{1} + \left(R_{2} \parallel \frac{1}{s\,C_{1}}\right)"#]],
    );
    check(
        product([x(7), Formula::parallel([x(0), x(1)])]),
        expect![[r#"w_{\mathrm{p}}\,(R_{1} \parallel R_{2})"#]],
    );
    check(
        Formula::parallel([x(0), product([Formula::s(), x(1)])]),
        expect![[r#"R_{1} \parallel s\,R_{2}"#]],
    );
    check(
        Formula::parallel([x(0).negative(), Formula::sum([x(1), x(3)])]),
        expect![[r#"(-R_{1}) \parallel (R_{2} + C_{2})"#]],
    );
    check(Formula::parallel([x(0), x(1)]).negative(), expect![[r#"-(R_{1} \parallel R_{2})"#]]);
    check(
        Formula::quotient(Formula::parallel([x(0), x(1)]), x(2)),
        expect![[r#"\frac{R_{1} \parallel R_{2}}{C_{1}}"#]],
    );
}

#[test]
fn long_sums_are_aligned() {
    let names = names();
    let narrow = Latex { names: &names, width: 10 };
    expect![[r#"
        \frac{1}{\begin{aligned}
        &1 + s\,C_{2}\,(R_{1} + R_{2}) \\
        & + s^{2}\,R_{1}\,R_{2}\,C_{1}\,C_{2}
        \end{aligned}}"#]]
    .assert_eq(&narrow.text(&Formula::quotient(n(1), second_order())));
    expect![[r#"
        \begin{aligned}
        D(s) &= 1 + s\,C_{2}\,(R_{1} + R_{2}) \\
        &\quad + s^{2}\,R_{1}\,R_{2}\,C_{1}\,C_{2}
        \end{aligned}"#]]
    .assert_eq(&narrow.equation("D(s)", &second_order()));
    let difference = Formula::sum([second_order(), x(0).negative(), x(1)]);
    expect![[r#"
        D = C_{1} \left(\begin{aligned}
        &1 + s\,C_{2}\,(R_{1} + R_{2}) \\
        & + s^{2}\,R_{1}\,R_{2}\,C_{1}\,C_{2} - R_{1} \\
        & + R_{2}
        \end{aligned}\right)"#]]
    .assert_eq(&narrow.equation("D", &product([x(2), difference])));
    let power = Formula::power(product([x(2), second_order()]), 2);
    expect![[r#"
        \left(C_{1} \left(\begin{aligned}
        &1 + s\,C_{2}\,(R_{1} + R_{2}) \\
        & + s^{2}\,R_{1}\,R_{2}\,C_{1}\,C_{2}
        \end{aligned}\right)\right)^{2}"#]]
    .assert_eq(&narrow.text(&power));
    expect!["R = R_{1} - R_{2}"]
        .assert_eq(&narrow.equation("R", &Formula::sum([x(0), x(1).negative()])));
}

#[test]
fn deep_and_long_formulas() {
    let mut deep = x(0);
    for _ in 0..50_000 {
        deep = Formula::quotient(n(1), Formula::sum([x(1), deep]));
    }
    let names = names();
    let latex = Latex { names: &names, width: 40 };
    assert!(latex.text(&deep).starts_with(r"\frac{1}{\begin{aligned}"));
    let long = Formula::sum((0..100_000).map(|index| product([x(index % 8), Formula::s()])));
    assert_eq!(latex.text(&long).matches(" + ").count(), 99_999);
}

proptest! {
    #[test]
    fn groups_are_balanced(formula in tree(), width in 1_usize..30) {
        let text = Latex { names: &names(), width }.equation("H", &formula);
        let count = |part: &str| text.matches(part).count();
        prop_assert_eq!(count("{"), count("}"));
        prop_assert_eq!(count("("), count(")"));
        prop_assert_eq!(count("\\left("), count("\\right)"));
        prop_assert_eq!(count("\\begin{"), count("\\end{"));
        // A second script of the same kind on one base is an error in TeX.
        prop_assert_eq!(count("}^{2}^{"), 0);
    }
}
