//! Claims about poles, zeros, ω0, Q and gains, exact and by numbers.

use super::Bench;

const FILTER: &str = "in > voltage Vin > ground\n\
    in > R1 = 10 k ± 1 % > x > R2 = 10 k ± 1 % > y > C2 = 4.7 n ± 5 % > ground\n\
    x > C1 = 10 n ± 5 % > out\nopamp U1: plus y, minus out, output out\n\
    band 10 Hz to 100 kHz\nask H = V(out) / Vin\nask Zin = impedance(in, ground)\n\
    ask P = two_port(z, in ground, y ground)\n";

const LAG: &str = "in > voltage Vin > ground\nin > R1 = 1 k ± 5 % > out > R2 = 1 k ± 5 % > w > \
    C1 = 100 n ± 10 % > ground\nband 1 Hz to 1 MHz\nask H = V(out) / Vin\n";

#[track_caller]
fn check(text: &str, claims: &[(&str, &str)]) {
    let mut bench = Bench::new(text);
    for (claim, expected) in claims {
        assert_eq!(bench.verdict(claim), *expected, "{claim}");
    }
}

#[test]
fn pairs_are_known_by_their_squares() {
    check(
        FILTER,
        &[
            ("w0 = 1/sqrt(R1*R2*C1*C2)", "equal"),
            ("H.w0 = -1/sqrt(R1*R2*C1*C2)", "different"),
            ("w0^2 = 1/(R1*R2*C1*C2)", "equal"),
            ("H.p1.w0 = 1/sqrt(R1*R2*C1*C2)", "equal"),
            ("f0 = 1/(2*pi*sqrt(R1*R2*C1*C2))", "equal"),
            (r"f0 = \frac{1}{2\pi\sqrt{R_1 R_2 C_1 C_2}}", "equal"),
            ("f0 = 1/sqrt(R1*R2*C1*C2)", "different"),
            ("Q = sqrt(R1*R2*C1/C2)/(R1 + R2)", "equal"),
            ("Q = sqrt(R1*R2*C2/C1)/(R1 + R2)", "different"),
            ("Q ~ 0.73 within 1 %", "different"),
            ("Q ~ 0.73 within 6 %", "equal"),
            ("w0 ~ 14600", "equal"),
            ("w0 = R1*C1", "unit_error"),
        ],
    );
}

#[test]
fn rational_poles_and_zeros_are_exact() {
    check(
        LAG,
        &[
            ("p1 = -1/((R1 + R2)*C1)", "equal"),
            ("H.p1 = -1/(C1*(R1 + R2))", "equal"),
            ("p1 = 1/((R1 + R2)*C1)", "different"),
            ("p1 = -1/(R1*C1)", "equal_in_limit"),
            ("z1 = -1/(R2*C1)", "equal"),
            ("z1 = -1/(R1*C1)", "equal_in_limit"),
            ("p1 ~ -1/(2*R1*C1) within 6 %", "equal"),
            ("p1 ~ -1/(2*R1*C1) within 5 %", "different"),
            ("H(0) = 1", "equal"),
            ("H.dc = 1", "equal"),
            ("H(infinity) = R2/(R1 + R2)", "equal"),
            ("H.hf = R1/(R1 + R2)", "different"),
            ("H(infinity) ~ 0.5 within 6 %", "equal"),
        ],
    );
}

#[test]
fn mistakes_about_roots_are_named() {
    let kind = |text: &str, claim: &str| {
        let judgement = Bench::new(text).judge(claim).expect("a judgement");
        judgement.repair.map(|repair| repair.change.kind())
    };
    assert_eq!(kind(LAG, "p1 = 1/((R1 + R2)*C1)"), Some("sign"));
    assert_eq!(kind(LAG, "p1 = -1/(2*pi*(R1 + R2)*C1)"), Some("hertz"));
    assert_eq!(kind(FILTER, "f0 = 1/sqrt(R1*R2*C1*C2)"), Some("hertz"));
    assert_eq!(kind(FILTER, "Q = (R1 + R2)/sqrt(R1*R2*C1/C2)"), Some("inverted"));
    assert_eq!(kind(LAG, "H = (1 + w R2 C1)/(1 + w C1 (R1 + R2))"), Some("omega"));
    assert_eq!(kind(LAG, "H = (1 + 2 pi s R2 C1)/(1 + 2 pi s C1 (R1 + R2))"), Some("hertz"));
    assert_eq!(kind(LAG, "H = (1 + s C1 (R1 + R2))/(1 + s R2 C1)"), Some("inverted"));
}

#[test]
fn entries_of_two_ports_and_several_questions() {
    check(
        FILTER,
        &[
            ("Zin.p2 = -1/(R2*C1)", "equal"),
            ("Zin.p1 = 0", "equal"),
            ("Zin.p2 ~ -1/(R1*C1) within 5 %", "equal"),
            ("P.z11 = R1 + R2 + 1/(s C2) + s R1 R2 C1", "different"),
            ("V(y) / Vin = 1/(1 + s C2 (R1 + R2) + s^2 R1 R2 C1 C2)", "equal"),
        ],
    );
}

#[test]
fn an_approximation_is_judged_over_the_band() {
    check(
        LAG,
        &[
            ("H ~ 1 within 1 %", "different"),
            ("H ~ (1 + s R2 C1)/(1 + s C1 (R1 + R2)*1.01) within 2 %", "equal"),
            ("H ~ (1 + s R2 C1)/(1 + s C1 (R1 + R2)) within 0.1 %", "equal"),
            ("H ~ (1 + s R1 C1)/(1 + 2*s*C1*R1) within 12 %", "equal"),
        ],
    );
    // Both ends of the tolerances count: R1 and R2 are 5 % each.
    let judgement = Bench::new(LAG).judge("H(infinity) ~ 0.5 within 1 %").expect("a judgement");
    let near = judgement.nearness.expect("numbers");
    assert!(near.nominal < 1e-12 && (near.worst - 0.0526).abs() < 5e-3, "{near:?}");
}

#[test]
fn noise_densities_are_functions_of_f() {
    let text =
        "a > R1 = 1 k > b > C1 = 1 n > ground\na > wire > ground\nask N = noise_density(b)\n";
    check(
        text,
        &[
            ("N = 4 k_B T_0 R1/(1 + (2 pi f R1 C1)^2)", "equal"),
            (r"N = \frac{4 k_\mathrm{B} T_0 R_1}{1 + (2\pi f R_1 C_1)^2}", "equal"),
            ("N = 4 k_B T_0 R1", "equal_in_limit"),
            ("N = 2 k_B T_0 R1/(1 + (2 pi f R1 C1)^2)", "different"),
            ("N = 4 k_B R1", "unit_error"),
        ],
    );
}

#[test]
fn claims_that_cannot_be_judged_say_why() {
    let mut bench = Bench::new(LAG);
    let mut error = |claim: &str| bench.judge(claim).expect_err("an error");
    assert_eq!(error("p3 = -1/(R1*C1)"), "the function has no p3: it has 1 poles");
    assert_eq!(error("H = R1/(R1 - R1)"), "the claim divides by 0");
    let mut bare =
        Bench::new("in > voltage Vin > ground\nin > R1 > out > C1 > ground\nask H = V(out)/Vin\n");
    let why = bare.judge("H ~ 1").expect_err("no values");
    assert!(why.contains("`R1` and `C1` have no nominal value"), "{why}");
    assert_eq!(bare.verdict("p1 = -1/(R1*C1)"), "equal");
}

#[test]
fn what_a_wrong_claim_gets_right() {
    let judgement =
        Bench::new(FILTER).judge("H = 1/(1 + s C2 R1 + s^2 R1 R2 C1 C2)").expect("a judgement");
    let right = judgement.right.expect("a function");
    assert!(right.dc && right.high_frequency && right.poles == (2, 2));
    assert_eq!(judgement.differences.len(), 1);
    assert_eq!(judgement.differences[0].power, 1);
    let deviation = judgement.deviation.expect("numbers");
    assert!((deviation.magnitude_db - 6.02).abs() < 0.01, "{deviation:?}");
    let at = deviation.magnitude_at_hz.expect("a frequency");
    assert!((2200.0..2450.0).contains(&at), "{at}");
}
