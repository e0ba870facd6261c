//! The signs of elements, in the manner of IEC 60617: a rectangle, two plates, half circles, a circle
//! with a line along the wire for a voltage and across it for a current; a diamond where controlled.
//!
//! Every two-terminal sign lies between −18 and 18 along its wire.

use super::canvas::{Anchor, Canvas, Face, Room, number};
use super::scheme::{BlockKind, Symbol};

/// Half the length of a sign along its wire.
pub(super) const HALF: f64 = 18.0;

/// A frame of reference: along the wire and across it.
#[derive(Clone, Copy)]
struct Frame {
    x: f64,
    y: f64,
    upright: bool,
}

impl Frame {
    fn at(self, along: f64, across: f64) -> (f64, f64) {
        if self.upright {
            (self.x - across, self.y + along)
        } else {
            (self.x + along, self.y + across)
        }
    }

    fn lines(self, points: &[(f64, f64)], close: bool) -> String {
        let mut data = String::new();
        for (index, &(along, across)) in points.iter().enumerate() {
            let (x, y) = self.at(along, across);
            data.push(if index == 0 { 'M' } else { 'L' });
            data.push_str(&format!("{} {}", number(x), number(y)));
        }
        if close {
            data.push('Z');
        }
        data
    }

    fn wire(self, canvas: &mut Canvas, from: f64, to: f64) {
        let ((x1, y1), (x2, y2)) = (self.at(from, 0.0), self.at(to, 0.0));
        canvas.wire(x1, y1, x2, y2);
    }
}

/// Draws a two-terminal sign about its middle.
pub(super) fn single(
    canvas: &mut Canvas,
    symbol: Symbol,
    (x, y): (f64, f64),
    upright: bool,
    reversed: bool,
) {
    let frame = Frame { x, y, upright };
    let across = match symbol {
        Symbol::Resistor | Symbol::General(_) => 7.0,
        Symbol::Capacitor => 11.0,
        Symbol::Inductor => 6.0,
        Symbol::Voltage { .. } | Symbol::Current { .. } => 14.0,
    };
    let (a, b) = (frame.at(-HALF, -across), frame.at(HALF, across));
    canvas.bodies.push(Room {
        left: a.0.min(b.0),
        top: a.1.min(b.1),
        right: a.0.max(b.0),
        bottom: a.1.max(b.1),
    });
    match symbol {
        Symbol::Resistor | Symbol::General(_) => {
            let corners = [(-HALF, -across), (HALF, -across), (HALF, across), (-HALF, across)];
            canvas.path(&frame.lines(&corners, true));
            if let Symbol::General(letter) = symbol {
                canvas.sign(x, y + 3.5, &letter.to_string());
            }
        }
        Symbol::Capacitor => {
            frame.wire(canvas, -HALF, -3.5);
            frame.wire(canvas, 3.5, HALF);
            let plates =
                [-3.5, 3.5].map(|along| frame.lines(&[(along, -across), (along, across)], false));
            canvas.path(&plates.concat());
        }
        Symbol::Inductor => {
            let mut data = frame.lines(&[(-HALF, 0.0)], false);
            for turn in 1..=4 {
                let (x, y) = frame.at(9.0f64.mul_add(f64::from(turn), -HALF), 0.0);
                data.push_str(&format!("A4.5 5.5 0 0 1 {} {}", number(x), number(y)));
            }
            // The radii follow the wire.
            let data = if upright { data.replace("A4.5 5.5", "A5.5 4.5") } else { data };
            canvas.path(&data);
        }
        Symbol::Voltage { controlled } => {
            source(canvas, frame, controlled);
            canvas.path(&frame.lines(&[(-14.0, 0.0), (14.0, 0.0)], false));
            let at = if reversed { 22.0 } else { -22.0 };
            let plus = [
                frame.lines(&[(at - 3.0, 9.0), (at + 3.0, 9.0)], false),
                frame.lines(&[(at, 6.0), (at, 12.0)], false),
            ];
            canvas.path(&plus.concat());
        }
        Symbol::Current { controlled } => {
            source(canvas, frame, controlled);
            let half = if controlled { 9.0 } else { 14.0 };
            canvas.path(&frame.lines(&[(0.0, -half), (0.0, half)], false));
            let way = if reversed { -1.0 } else { 1.0 };
            let tip = [(26.0 * way, 0.0), (18.0 * way, -4.0), (18.0 * way, 4.0)];
            canvas.solid(&frame.lines(&tip, true));
        }
    }
}

fn source(canvas: &mut Canvas, frame: Frame, controlled: bool) {
    frame.wire(canvas, -HALF, -14.0);
    frame.wire(canvas, 14.0, HALF);
    if controlled {
        let corners = [(-15.0, 0.0), (0.0, -12.0), (15.0, 0.0), (0.0, 12.0)];
        canvas.path(&frame.lines(&corners, true));
    } else {
        canvas.circle(frame.x, frame.y, 14.0);
    }
}

/// Ground below a wire's end.
pub(super) fn ground(canvas: &mut Canvas, x: f64, y: f64) {
    canvas.wire(x, y, x, y + 5.0);
    for (half, down) in [(8.0, 5.0), (5.0, 8.5), (2.0, 12.0)] {
        canvas.wire(x - half, y + down, x + half, y + down);
    }
}

/// Half the width of a block's body.
pub(super) const BODY: f64 = 26.0;

/// An amplifier about the middle of its left edge and tip; `plus` says how far above or below the
/// middle its inputs are.
pub(super) fn amplifier(canvas: &mut Canvas, (x, y): (f64, f64), inputs: [f64; 2]) {
    canvas.path(&format!(
        "M{left} {}L{left} {}L{} {}Z",
        number(y - 36.0),
        number(y + 36.0),
        number(x + BODY + 2.0),
        number(y),
        left = number(x - BODY),
    ));
    for (at, sign) in inputs.into_iter().zip(["+", "−"]) {
        canvas.sign(x - BODY + 8.0, y + at + 3.5, sign);
    }
    canvas.bodies.push(Room { left: x - BODY, top: y - 36.0, right: x + 2.0, bottom: y + 36.0 });
}

/// A box with two pins on each side.
pub(super) fn two_port(canvas: &mut Canvas, kind: BlockKind, x: f64, top: f64, bottom: f64) {
    let room = Room { left: x - BODY, top: top - 12.0, right: x + BODY, bottom: bottom + 12.0 };
    canvas.path(&format!(
        "M{} {}H{}V{}H{}Z",
        number(room.left),
        number(room.top),
        number(room.right),
        number(room.bottom),
        number(room.left)
    ));
    canvas.bodies.push(room);
    let middle = f64::midpoint(top, bottom);
    let mut arc = |x: f64, radius: f64, sweep: u8| {
        let x = number(x);
        canvas.path(&format!(
            "M{x} {}A{radius} {radius} 0 0 {sweep} {x} {}",
            number(middle - radius),
            number(middle + radius)
        ));
    };
    match kind {
        BlockKind::Transformer => {
            for turn in [-1.0, 0.0, 1.0] {
                for (side, sweep) in [(-7.0, 1), (7.0, 0)] {
                    let (y1, y2) = (middle + turn * 8.0 - 4.0, middle + turn * 8.0 + 4.0);
                    let x = number(x + side);
                    canvas.path(&format!("M{x} {}A4 4 0 0 {sweep} {x} {}", number(y1), number(y2)));
                }
            }
            for side in [-12.0, 12.0] {
                canvas.dot(x + side, middle - 13.0);
            }
        }
        BlockKind::Gyrator => {
            arc(x - 14.0, 10.0, 1);
            arc(x + 14.0, 10.0, 0);
        }
        BlockKind::Nullor | BlockKind::Amplifier => {
            canvas.path(&format!(
                "M{} {m}a5 9 0 1 0 10 0a5 9 0 1 0 -10 0",
                number(x - 19.0),
                m = number(middle)
            ));
            canvas.circle(x + 6.0, middle, 6.0);
            canvas.circle(x + 15.0, middle, 6.0);
        }
    }
}

impl Canvas {
    /// A small sign inside a symbol.
    fn sign(&mut self, x: f64, y: f64, content: &str) {
        self.text(x, y, Anchor::Middle, Face::Sign, content);
    }
}
