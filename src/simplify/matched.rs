//! Which symbols a designer means to be equal: the same parameter of two devices with one bias, and the
//! elements at the same terminals of two such devices (emitter resistors of a mirror, loads of a pair).

use crate::circuit::{Circuit, Element, Law, Symbol, SymbolId, SymbolRole, Value};

/// Parameters of two devices this close may be taken for one.
const DEVICES: f64 = 0.3;
/// Elements this close may be taken for one.
const ELEMENTS: f64 = 0.02;

/// The pairs of a circuit that may be taken for one; the first may go.
#[derive(Clone, Debug, Default)]
pub(crate) struct Matched {
    pairs: Vec<(SymbolId, SymbolId)>,
}

impl Matched {
    /// By names, values and places.
    pub(crate) fn new(circuit: &Circuit, symbols: &[Symbol], values: &[f64]) -> Self {
        let near = |a: SymbolId, b: SymbolId, bound: f64| {
            (values[a.0 as usize] / values[b.0 as usize] - 1.0).abs() <= bound
        };
        let ids = || (0..symbols.len() as u32).map(SymbolId);
        let mut pairs = Vec::new();
        for a in ids() {
            for b in ids().filter(|&b| b != a && are_one_parameter(symbols, a, b)) {
                let biased_alike =
                    match [a, b].map(|id| transconductance(symbols, &symbols[id.0 as usize])) {
                        [Some(a), Some(b)] => near(a, b, DEVICES),
                        _ => true,
                    };
                if biased_alike && near(a, b, DEVICES) {
                    pairs.push((a, b));
                }
            }
        }
        let alike = |a: &Element, b: &Element| {
            matches!((own_symbol(symbols, a), own_symbol(symbols, b)), (Some(a), Some(b))
                if near(a, b, DEVICES))
        };
        for x in &circuit.elements {
            for y in circuit.elements.iter().filter(|y| y.name != x.name && y.class == x.class) {
                let (Some(a), Some(b)) = (own_symbol(symbols, x), own_symbol(symbols, y)) else {
                    continue;
                };
                let passive = symbols[a.0 as usize].role == SymbolRole::Element(x.class);
                if passive && near(a, b, ELEMENTS) && stand_alike(circuit, x, y, &alike) {
                    pairs.push((a, b));
                }
            }
        }
        Self { pairs }
    }

    /// The pairs among these symbols.
    pub(crate) fn among<'a>(
        &'a self,
        present: &'a [SymbolId],
    ) -> impl Iterator<Item = (SymbolId, SymbolId)> + 'a {
        let is_present = |id: &SymbolId| present.contains(id);
        self.pairs.iter().copied().filter(move |(a, b)| is_present(a) && is_present(b))
    }
}

/// Whether two symbols are the same parameter of two devices.
fn are_one_parameter(symbols: &[Symbol], a: SymbolId, b: SymbolId) -> bool {
    let [a, b] = [a, b].map(|id| &symbols[id.0 as usize]);
    let parameter = |symbol: &Symbol| symbol.name.rsplit_once('.').map(|(_, last)| last.to_owned());
    let devices = [a, b].iter().all(|symbol| symbol.role == SymbolRole::DeviceParameter);
    devices && a.unit == b.unit && parameter(a) == parameter(b)
}

/// The transconductance of the device that a parameter belongs to.
fn transconductance(symbols: &[Symbol], of: &Symbol) -> Option<SymbolId> {
    let (device, _) = of.name.rsplit_once('.')?;
    let is_its = |symbol: &Symbol| symbol.name.strip_prefix(device) == Some(".gm");
    let place = symbols.iter().position(is_its)?;
    u32::try_from(place).ok().map(SymbolId)
}

/// The symbol that an element is named after.
fn own_symbol(symbols: &[Symbol], element: &Element) -> Option<SymbolId> {
    let place = symbols.iter().position(|symbol| symbol.name == element.name)?;
    u32::try_from(place).ok().map(SymbolId)
}

/// Whether two elements lead from one node to the same terminals of two devices that are alike.
fn stand_alike(
    circuit: &Circuit,
    x: &Element,
    y: &Element,
    alike: &dyn Fn(&Element, &Element) -> bool,
) -> bool {
    let ends = |of: &Element| [(of.plus, of.minus), (of.minus, of.plus)];
    let is_device = |element: &&Element| {
        element.name.ends_with(".gm")
            && matches!(&element.law, Law::ControlledCurrent(controls)
            if controls.iter().all(|control| matches!(control.gain, Value::Symbol(_))))
    };
    ends(x).iter().any(|&(far_x, near_x)| {
        ends(y).iter().filter(|(far_y, _)| *far_y == far_x).any(|&(_, near_y)| {
            circuit.elements.iter().filter(is_device).any(|d| {
                circuit.elements.iter().filter(is_device).any(|e| {
                    let same_terminal = (d.minus == near_x && e.minus == near_y)
                        || (d.plus == near_x && e.plus == near_y);
                    d.name != e.name && same_terminal && alike(d, e)
                })
            })
        })
    })
}
