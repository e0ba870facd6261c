//! Two-port sets, return ratios, noise, claims, limits and the temperature.

use super::{circuit, ratio, refuses, show};
use crate::circuit::{Circuit, Limit, LimitTo, NodeId, ParameterSet, Question, Unit, Value};
use crate::language::{claim_units, limit, query};
use pretty_assertions::assert_eq;

const BASE: &str = "in > voltage Vin > ground\nin > R1 > out > C1 > ground\n";

fn ask(extra: &str, text: &str) -> (Circuit, Question) {
    let circuit = circuit(&format!("{BASE}{extra}\nask Q = {text}"));
    let question = circuit.asks[0].question.clone();
    (circuit, question)
}

#[test]
fn two_ports_know_their_set_and_ports() {
    let check = |text: &str, set: ParameterSet, reference: Option<&str>| {
        let (circuit, question) = ask("let R0 = 50 Ω\nout > R2 = R0 > ground", text);
        let Question::TwoPort(ports) = question else { panic!("{text}") };
        let found = ports.reference.as_ref().map(|value| show(&circuit, value));
        assert_eq!((ports.set, found.as_deref()), (set, reference), "{text}");
        let name =
            |port: (NodeId, NodeId)| format!("{} {}", circuit[port.0].name, circuit[port.1].name);
        assert_eq!((name(ports.port1), name(ports.port2)), ("in ground".into(), "out in".into()));
        assert_eq!(ports.removed, circuit.element("Vin").into_iter().collect::<Vec<_>>());
    };
    check("two_port(z, in ground, out in)", ParameterSet::Z, None);
    check("two_port(y, in gnd, out in)", ParameterSet::Y, None);
    check("two_port(h, in ground, out in)", ParameterSet::H, None);
    check("two_port(g, in ground, out in)", ParameterSet::G, None);
    check("two_port(chain, in ground, out in)", ParameterSet::Chain, None);
    check("two_port(inverse_chain, in ground, out in)", ParameterSet::InverseChain, None);
    check("two_port(scattering, in ground, out in, 50)", ParameterSet::Scattering, Some("50"));
    check(
        "two_port(scattering, in ground, out in, 2.2 kΩ)",
        ParameterSet::Scattering,
        Some("2200"),
    );
    check("two_port(scattering, in ground, out in, 4k7)", ParameterSet::Scattering, Some("4700"));
    check(
        "two_port(transfer_scattering, in ground, out in, R0)",
        ParameterSet::TransferScattering,
        Some("R0"),
    );
    check(
        "two_port(scattering, in ground, out in, 2*R1)",
        ParameterSet::Scattering,
        Some("(2*R1)"),
    );
}

#[test]
fn a_reference_resistance_is_a_symbol_of_the_circuit() {
    let (circuit, question) =
        ask("let Rw = 75 Ω", "two_port(scattering, in ground, out ground, Rw)");
    let Some(symbol) = circuit.symbol("Rw") else { panic!("no symbol") };
    assert_eq!((circuit[symbol].unit, &circuit[symbol].nominal), (Unit::OHM, &Some(ratio(75, 1))));
    let Question::TwoPort(ports) = question else { panic!("no two-port") };
    assert_eq!(ports.reference, Some(Value::Symbol(symbol)));
    let (circuit, _) = ask("", "two_port(scattering, in ground, out ground, Z0)");
    assert_eq!(circuit.symbol("Z0").map(|id| circuit[id].unit), Some(Unit::OHM));
    assert_eq!(circuit.asks[0].text, "two_port(scattering, in ground, out ground, Z0)");
}

#[test]
fn return_ratios_find_their_source() {
    let check = |extra: &str, text: &str, element: &str| {
        let (circuit, question) = ask(extra, text);
        let Question::ReturnRatio(id) = question else { panic!("{text}") };
        assert_eq!(circuit[id].name, element);
    };
    check("opamp U1: plus in, minus out, output out, gain = A0", "return_ratio(U1)", "U1");
    let transistor = "bjt Q1: base in, collector out, emitter ground, gm, rpi";
    check(transistor, "return_ratio(Q1)", "Q1.gm");
    check(transistor, "return_ratio(Q1.gm)", "Q1.gm");
    check("out > current Ix = gm*V(in) > ground", "return_ratio(Ix)", "Ix");
}

#[test]
fn noise_is_asked_between_two_nodes() {
    let check = |text: &str, plus: &str, minus: &str| {
        let (circuit, question) = ask("", text);
        let Question::NoiseDensity(a, b) = question else { panic!("{text}") };
        assert_eq!((circuit[a].name.as_str(), circuit[b].name.as_str()), (plus, minus));
    };
    check("noise_density(out)", "out", "ground");
    check("noise_density(out, in)", "out", "in");
    let circuit = circuit(BASE);
    assert!(query(&circuit, "noise_density(out)").is_ok());
    let scattering = query(&circuit, "two_port(scattering, in ground, out ground, 2*R1)");
    assert!(scattering.is_ok());
}

#[test]
fn questions_about_networks_have_their_own_messages() {
    let check = |line: &str, code: &str, column: u32, says: &str| {
        refuses(&format!("{BASE}{line}"), code, (3, column), says);
    };
    check("ask P = two_port(z, in ground)", "arguments", 9, "two ports");
    check("ask P = two_port(z, in, out)", "arguments", 21, "two ports");
    check("ask P = two_port(z, in in, out ground)", "empty-port", 21, "one node");
    check("ask P = two_port(z, in ground, outt ground)", "unknown-node", 32, "`out`");
    check("ask P = two_port(chian, in ground, out ground)", "parameter-set", 18, "`chain`");
    check("ask P = two_port(q, in ground, out ground)", "parameter-set", 18, "sets are z, y");
    check("ask P = two_port(z, in ground, out ground, 50)", "reference", 44, "only `scattering`");
    check("ask P = two_port(scattering, in ground, out ground)", "reference", 9, "write it last");
    check("ask P = two_port(scattering, in ground, out ground, 0)", "reference", 53, "above 0");
    check("ask P = two_port(scattering, in ground, out ground, 5 F)", "wrong-unit", 53, "`Ω`");
    check("ask P = two_port(scattering, in ground, out ground, C1)", "wrong-unit", 53, "`Ω`");
    check("ask P = two_port(z, in ground, out ground, 50, 1)", "arguments", 48, "two ports");
    check("ask P = two_port(z, in ground, out ground) from Vin", "from", 49, "leave");
    check("ask T = return_ratio(R1)", "return-ratio", 22, "no dependent source");
    check("ask T = return_ratio(Vin)", "return-ratio", 22, "no dependent source");
    check("ask T = return_ratio(U9)", "return-ratio", 22, "`gm`");
    check("ask T = return_ratio()", "arguments", 9, "one dependent source");
    check("ask N = noise_density(outt)", "unknown-node", 23, "`out`");
    check("ask N = noise_density(out, out)", "empty-port", 9, "one node");
    check("ask N = noise_density()", "arguments", 9, "one node or two");
    let ideal = format!("{BASE}opamp U1: plus in, minus out, output out\nask T = return_ratio(U1)");
    refuses(&ideal, "return-ratio", (4, 22), "`gain = A0`");
}

#[test]
fn claims_keep_their_place_and_text() {
    let text =
        format!("{BASE}ask H = V(out)/Vin\nclaim H = 1/(1 + s R1·C1)  # by hand\nclaim H = 1");
    let circuit = circuit(&text);
    let shown: Vec<(&str, &str, u32)> = circuit
        .claims
        .iter()
        .map(|claim| (claim.name.as_str(), claim.text.as_str(), claim.line))
        .collect();
    assert_eq!(shown, [("H", "1/(1 + s R1·C1)", 4), ("H", "1", 5)]);
    assert_eq!(show(&circuit, &circuit.claims[0].formula), "(1*(1 + (s*R1*C1))^-1)");
    let (start, end) = circuit.claims[0].span;
    assert_eq!(&text[start..end], "1/(1 + s R1·C1)");
    let ports = format!("{BASE}ask P = two_port(z, in ground, out ground)\nclaim P.z21 = 1/(s*C1)");
    assert_eq!(super::circuit(&ports).claims[0].name, "P.z21");
}

#[test]
fn claims_have_their_own_messages() {
    let base = format!("{BASE}ask H = V(out)/Vin\nask P = two_port(z, in ground, out ground)\n");
    let check = |line: &str, code: &str, column: u32, says: &str| {
        refuses(&format!("{base}{line}"), code, (5, column), says);
    };
    check("claim G = 1", "claim-name", 7, "there are: H, P.z11");
    check("claim P = 1", "claim-name", 7, "`P.z21`");
    check("claim P.z31 = R1", "claim-name", 7, "`P.z11`");
    check("claim P.y21 = R1", "claim-name", 7, "`P.z21`");
    check("claim Hh = 1", "claim-name", 7, "`H`");
    check("claim H = 1/(1 + sR1C1)", "unknown-name", 18, "`s R1 C1`");
    check("claim H = 1/(1 + s R1 C2)", "unknown-name", 23, "`C1`");
    check("claim H = V(out)", "access", 11, "symbols");
    check("claim H = 1/s C1", "space-after-slash", 11, "`1/(s*C1)`");
    check("claim H.x = 1", "claim-name", 7, "");
    let two = "a > voltage Va > ground\nb > voltage Vb > ground\na > R1 > x > R2 > b\nask X = V(x)\nclaim X = 1";
    refuses(two, "claim-name", (5, 7), "several sources");
    refuses("a > R1 > ground\nclaim H = 1", "claim-name", (2, 7), "ask H");
}

#[test]
fn units_of_claims_are_findings() {
    let base = format!(
        "{BASE}ask H = V(out)/Vin\nask Z = impedance(in, ground)\nask P = two_port(h, in ground, out ground)\nask N = noise_density(out)\n"
    );
    let check = |line: &str, expected: Result<&str, (&str, &str, &str)>| {
        let text = format!("{base}{line}");
        let circuit = circuit(&text);
        let found = claim_units(&circuit, &circuit.claims[0]);
        let found = found.map(|unit| unit.to_string()).map_err(|clash| {
            let place = text[clash.span.start..clash.span.end].to_owned();
            (clash.left.to_string(), clash.right.to_string(), place)
        });
        let owned = |(left, right, place): (&str, &str, &str)| {
            (left.to_owned(), right.to_owned(), place.to_owned())
        };
        assert_eq!(found, expected.map(str::to_owned).map_err(owned), "{line}");
    };
    check("claim H = 1/(1 + s R1 C1)", Ok("1"));
    check("claim H = 0", Ok("1"));
    check("claim Z = R1 + 1/(s*C1)", Ok("Ω"));
    check("claim Z = 0 + R1", Ok("Ω"));
    check("claim Z = R1 || R1", Ok("Ω"));
    check("claim P.h22 = s C1", Ok("S"));
    check("claim H = 1/(1 + s R1)", Err(("1", "V·A⁻¹·s⁻¹", "s R1")));
    check("claim H = R1 C1 + R1", Err(("s", "Ω", "R1")));
    check("claim H = R1", Err(("1", "Ω", "R1")));
    check("claim Z = 1/(s R1)", Err(("Ω", "F", "1/(s R1)")));
    check("claim P.h21 = R1", Err(("1", "Ω", "R1")));
    check("claim N = R1", Err(("V²/Hz", "Ω", "R1")));
    check(
        "claim H = ((((s^1000)^1000)^1000)^1000)",
        Err(("1", "s⁻²¹⁴⁷⁴⁸³⁶⁴⁸", "((((s^1000)^1000)^1000)^1000)")),
    );
}

#[test]
fn limits_are_of_symbols_and_of_s() {
    let base = "in > voltage Vin > ground\nin > R1 > out > R2 = R1 > ground\n\
                opamp U1: plus in, minus out, output out, gain = 1e5, rin\n";
    let circuit = circuit(&format!(
        "{base}limit U1.gain to infinity\nlimit R1 to 0\nlimit s to 0\ntemperature 290 K"
    ));
    let shown: Vec<(Option<&str>, LimitTo)> = circuit
        .limits
        .iter()
        .map(|limit| (limit.symbol.map(|id| circuit[id].name.as_str()), limit.to))
        .collect();
    let expected =
        [(Some("U1.gain"), LimitTo::Infinity), (Some("R1"), LimitTo::Zero), (None, LimitTo::Zero)];
    assert_eq!(shown, expected);
    assert_eq!(circuit.temperature, Some(ratio(290, 1)));
    let typed = |text: &str| limit(&circuit, text).map_err(|faults| faults[0].code);
    let gain = circuit.symbol("U1.gain");
    assert_eq!(typed("U1.gain to infinity"), Ok(Limit { symbol: gain, to: LimitTo::Infinity }));
    assert_eq!(typed("U1_gain to 0"), Ok(Limit { symbol: gain, to: LimitTo::Zero }));
    assert_eq!(typed("s to infinity"), Ok(Limit { symbol: None, to: LimitTo::Infinity }));
    assert_eq!(typed("R2 to 0"), Err("limit"));
    assert_eq!(typed("R9 to 0"), Err("unknown-name"));
    assert_eq!(typed("R1 to 5"), Err("syntax"));
    let check = |line: &str, code: &str, column: u32, says: &str| {
        refuses(&format!("{base}{line}"), code, (4, column), says);
    };
    check("limit R2 to 0", "limit", 7, "stands for an expression");
    check("limit A0 to infinity", "unknown-name", 7, "no symbol");
    check("limit U1.gian to infinity", "unknown-name", 7, "`U1.gain`");
    let twice = format!("{base}limit R1 to 0\nlimit R1 to infinity");
    refuses(&twice, "duplicate", (5, 7), "second limit");
    check("temperature 0 K", "temperature", 13, "above 0");
    refuses("temperature 300 K\ntemperature 300 K", "duplicate", (2, 13), "second temperature");
}
