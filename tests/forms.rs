//! What stands beside a formula on request: the list of symbols, and sections by numbers.

use std::io::Write;
use std::process::{Command, Stdio};

use pretty_assertions::assert_eq;

fn derive(circuit: &str, options: &[&str]) -> String {
    let mut child = Command::new(env!("CARGO_BIN_EXE_cofactor"))
        .args(["derive", "-", "--quiet"])
        .args(options)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .spawn()
        .expect("the program starts");
    child.stdin.take().expect("a pipe").write_all(circuit.as_bytes()).expect("it reads");
    let output = child.wait_with_output().expect("the program ends");
    assert_eq!(output.status.code(), Some(0));
    String::from_utf8(output.stdout).expect("UTF-8")
}

/// The buoy's thermistor behind its lead, into a stage of unknown gain.
const THERMISTOR: &str = "
in > voltage Vin > ground
in > Rt = 10 kΩ ± 1 % > x > Cx = 4.7 nF -20 % +80 % > ground
x > Rl = 47 kΩ ± 500 Ω > ground
out > voltage Vamp = A0*V(x) > ground
ask H = V(out) / Vin
";

#[test]
fn symbols_with_unit_value_and_tolerance() {
    assert_eq!(
        derive(THERMISTOR, &["--where"]).split_once("where").expect("a list").1,
        "
  Rl  in Ω  47 kΩ ± 500 Ω
  Rt  in Ω  10 kΩ ± 1 %
  Cx  in F  4.7 nF -20 % +80 %
  A0  in 1
"
    );
    let ascii = derive(THERMISTOR, &["--where", "--ascii"]);
    assert!(ascii.contains("  Rl  in ohm  47 kohm +/- 500 ohm\n"), "{ascii}");
    let latex = derive(THERMISTOR, &["--where", "--format", "latex"]);
    let row = "R_{\\mathrm{l}} & \\mathrm{\\Omega} & 47\\,\\mathrm{k\\Omega} \\pm \\text{500 $\\Omega$} \\\\\n";
    assert!(latex.contains(row), "{latex}");
}

/// Doubly terminated fifth-order ladder with the element values 2·sin((2k − 1)π/10) of a
/// maximally flat response (published: S. Butterworth, Wireless Engineer 7, 1930; the values from
/// memory). Its poles lie on the unit circle: Q = 1/(2·cos 36°) = 0.618 and 1/(2·cos 72°) = 1.618.
const LADDER: &str = "
in > voltage Vin > ground
in > Ri = 1 Ω > a > C1 = 0.6180339887 F > ground
a > L2 = 1.6180339887 H > b > C3 = 2 F > ground
b > L4 = 1.6180339887 H > out > C5 = 0.6180339887 F > ground
out > Ro = 1 Ω > ground
ask H = V(out) / Vin
";

#[test]
fn sections_that_do_not_factor_are_given_by_numbers() {
    let text = derive(LADDER, &["--shape", "sections"]);
    let sections: Vec<&str> =
        text.lines().skip_while(|line| !line.contains("constant")).map(str::trim).collect();
    assert_eq!(
        sections,
        [
            "constant: gain = Ro/(Ri + Ro) = 0.5",
            "poles, order 5: no closed form, for it does not factor; at the nominal values",
            "w0 = 2π · 159.2 mHz, Q = 1.618",
            "w0 = 2π · 159.2 mHz, Q = 0.618",
            "w = 2π · 159.2 mHz",
        ]
    );
    // Without values there is nothing to say but that.
    let text = derive(&LADDER.replace("= 2 F", ""), &["--shape", "sections"]);
    assert!(text.trim_end().ends_with("no closed form, for it does not factor"), "{text}");
}
