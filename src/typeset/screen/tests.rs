//! Layouts as they appear, and their widths.

use expect_test::{Expect, expect};
use proptest::prelude::*;
use unicode_width::UnicodeWidthStr;

use super::*;
use crate::typeset::random::tree;

fn names() -> SymbolTable {
    SymbolTable::new(["R1", "R2", "C1", "C2", "tau", "β", "A0", "wp"])
}

fn x(index: u32) -> Formula {
    Formula::symbol(index)
}

fn n(value: i64) -> Formula {
    Formula::integer(value)
}

fn product(factors: impl IntoIterator<Item = Formula>) -> Formula {
    Formula::product(factors)
}

/// 1 + s·C2·(R1 + R2) + s²·R1·R2·C1·C2: the second-order low-pass of textbooks (Sallen & Key 1955).
fn second_order() -> Formula {
    let s_squared = Formula::power(Formula::s(), 2);
    Formula::sum([
        n(1),
        product([Formula::s(), x(3), Formula::sum([x(0), x(1)])]),
        product([s_squared, x(0), x(1), x(2), x(3)]),
    ])
}

#[track_caller]
fn check(formula: Formula, width: usize, expected: Expect) {
    let text = Screen { width, characters: Characters::Unicode }.equation("H", &formula, &names());
    assert!(text.lines().all(|line| line.width() <= width), "too wide:\n{text}");
    expected.assert_eq(&text);
}

#[track_caller]
fn check_ascii(formula: Formula, width: usize, expected: Expect) {
    let text = Screen { width, characters: Characters::Ascii }.equation("H", &formula, &names());
    assert!(text.is_ascii());
    assert!(text.lines().all(|line| line.width() <= width), "too wide:\n{text}");
    expected.assert_eq(&text);
}

#[test]
fn fractions_have_bars() {
    check(
        Formula::quotient(n(1), second_order()),
        80,
        expect![[r#"
                              1
        H = ─────────────────────────────────────
             1 + s·C2·(R1 + R2) + s²·R1·R2·C1·C2"#]],
    );
    check_ascii(
        Formula::quotient(n(1), second_order()),
        80,
        expect![[r#"
                              1
        H = --------------------------------------
             1 + s*C2*(R1 + R2) + s^2*R1*R2*C1*C2"#]],
    );
    check(
        Formula::quotient(x(1), x(0)).negative(),
        80,
        expect![[r#"
                   R2
            H = − ────
                   R1"#]],
    );
}

#[test]
fn short_inner_fractions_stay_in_line() {
    let pole = Formula::sum([n(1), Formula::quotient(Formula::s(), x(7))]);
    check(
        Formula::quotient(x(6), pole.clone()),
        80,
        expect![[r#"
                A0
        H = ──────────
             1 + s/wp"#]],
    );
    let nested = Formula::quotient(
        x(6),
        Formula::sum([n(1), Formula::quotient(second_order(), Formula::power(pole, 2))]),
    );
    check(
        nested,
        80,
        expect![[r#"
                                A0
        H = ───────────────────────────────────────────
                  1 + s·C2·(R1 + R2) + s²·R1·R2·C1·C2
             1 + ─────────────────────────────────────
                              (1 + s/wp)²"#]],
    );
}

#[test]
fn sums_products_powers_and_parallels_of_fractions() {
    let reactance = || Formula::quotient(n(1), product([Formula::s(), x(2)]));
    check(
        Formula::parallel([x(0), reactance()]),
        80,
        expect![[r#"
                   1
        H = R1 ∥ ──────
                  s·C1"#]],
    );
    check_ascii(
        Formula::product([x(5), Formula::parallel([x(0), reactance()]), x(1)]),
        80,
        expect![[r#"
                       /        1   \
            H = beta * |R1 || ------| * R2
                       \       s*C1 /"#]],
    );
    check(
        Formula::product([x(5), Formula::sum([x(0), reactance()])]),
        80,
        expect![[r#"
                ⎛       1   ⎞
        H = β · ⎜R1 + ──────⎟
                ⎝      s·C1 ⎠"#]],
    );
    check(
        Formula::power(Formula::quotient(x(4), x(5)), 2),
        80,
        expect![[r#"
            ⎛ τ ⎞²
        H = ⎜───⎟
            ⎝ β ⎠"#]],
    );
    check(
        Formula::sum([x(0), reactance().negative(), reactance()]),
        80,
        expect![[r#"
                   1        1
        H = R1 − ────── + ──────
                  s·C1     s·C1"#]],
    );
}

#[test]
fn one_line_without_fractions() {
    check(second_order(), 80, expect!["H = 1 + s·C2·(R1 + R2) + s²·R1·R2·C1·C2"]);
    check_ascii(
        second_order().negative(),
        80,
        expect!["H = -(1 + s*C2*(R1 + R2) + s^2*R1*R2*C1*C2)"],
    );
    let parallel = Formula::parallel([x(0), x(1)]);
    check(
        Formula::sum([Formula::power(x(5), 12), parallel.negative()]),
        80,
        expect!["H = β¹² − R1 ∥ R2"],
    );
}

#[test]
fn long_sums_break_before_operators() {
    check(
        second_order(),
        30,
        expect![[r#"
        H = 1 + s·C2·(R1 + R2)
            + s²·R1·R2·C1·C2"#]],
    );
    check(
        product([second_order(), second_order()]),
        40,
        expect![[r#"
            H = (1 + s·C2·(R1 + R2)
                  + s²·R1·R2·C1·C2)
                ·(1 + s·C2·(R1 + R2)
                  + s²·R1·R2·C1·C2)"#]],
    );
    check(
        product([x(6), second_order()]),
        24,
        expect![[r#"
            H = A0
                ·(1 + s·C2·(R1 + R2)
                  + s²·R1·R2·C1·C2)"#]],
    );
}

#[test]
fn a_wide_denominator_is_broken_under_its_bar() {
    let wide = Formula::sum((0..6).map(|power| {
        product([Formula::power(Formula::s(), power), x(0), x(3), Formula::sum([x(1), x(2)])])
    }));
    check(
        Formula::quotient(x(1), wide.clone()),
        60,
        expect![[r#"
                                R2
        H = ───────────────────────────────────────────
             R1·C2·(R2 + C1) + s·R1·C2·(R2 + C1)
             + s²·R1·C2·(R2 + C1) + s³·R1·C2·(R2 + C1)
             + s⁴·R1·C2·(R2 + C1) + s⁵·R1·C2·(R2 + C1)"#]],
    );
    check_ascii(
        Formula::quotient(x(1), wide).negative(),
        40,
        expect![[r#"
                            R2
            H = - -----------------------
                   R1*C2*(R2 + C1)
                   + s*R1*C2*(R2 + C1)
                   + s^2*R1*C2*(R2 + C1)
                   + s^3*R1*C2*(R2 + C1)
                   + s^4*R1*C2*(R2 + C1)
                   + s^5*R1*C2*(R2 + C1)"#]],
    );
}

#[test]
fn without_room_it_sticks_out() {
    let text = Screen { width: 3, characters: Characters::Unicode }.equation(
        "H(s)",
        &second_order(),
        &names(),
    );
    expect![[r#"
        H(s) = 1
            + s
            ·C2
            ·(R1
            + R2)
            + s²
            ·R1
            ·R2
            ·C1
            ·C2"#]]
    .assert_eq(&text);
    let text =
        Screen { width: 0, characters: Characters::Ascii }.equation("", &Formula::s(), &names());
    assert_eq!(text, "s");
}

#[test]
fn deep_and_long_formulas_are_lines() {
    let mut deep = x(0);
    for _ in 0..50_000 {
        deep = Formula::quotient(n(1), Formula::sum([x(1), deep]));
    }
    let text = Screen { width: 80, characters: Characters::Unicode }.equation("Z", &deep, &names());
    // Only the closing parentheses at the end cannot be broken.
    assert_eq!(text.lines().filter(|line| line.width() > 80).count(), 1);
    let long = Formula::sum((0..50_000).map(|index| product([x(index % 8), Formula::s()])));
    let text = Screen { width: 80, characters: Characters::Unicode }.equation("Z", &long, &names());
    assert!(text.lines().all(|line| line.width() <= 80));
}

proptest! {
    #[test]
    fn broken_lines_hold_the_whole_line(formula in tree(), width in 10_usize..60) {
        for characters in [Characters::Unicode, Characters::Ascii] {
            let line = line::Line::new(&formula, &names(), characters);
            let broken = line.broken("", 2, width);
            let squeezed = |text: &str| text.split_whitespace().collect::<String>();
            prop_assert_eq!(squeezed(&broken), squeezed(&line.into_text()));
        }
    }

    #[test]
    fn layouts_keep_to_the_width(formula in tree(), width in 40_usize..120) {
        let text = Screen { width, characters: Characters::Ascii }.equation("H", &formula, &names());
        prop_assert!(text.is_ascii());
        // What cannot be broken: a number, or a run of parentheses.
        let sticks_out = |line: &str| {
            width < line.width() && line.split_whitespace().all(|word| word.width() + 12 < width)
        };
        prop_assert!(!text.lines().any(sticks_out), "{}", text);
        prop_assert!(text.lines().all(|line| !line.ends_with(' ')), "{}", text);
    }
}
