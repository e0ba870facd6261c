//! Random circuits in the language: every kind of element, device and block.
//!
//! Three circuits in four are tame: passive elements join all nodes to ground, and what forces a
//! voltage (sources, op-amps, transformers) neither closes a loop of such nor hangs in the air, so that
//! nearly all of them have a unique solution. The others are wild: anything anywhere.

use cofactor::algebra::modular::Random;

/// The text of a circuit, in parts that may stand in any order: lines, and blocks as a whole.
pub(crate) struct Drawn {
    parts: Vec<String>,
}

impl Drawn {
    /// In the order in which the parts were drawn.
    pub(crate) fn text(&self) -> String {
        self.parts.join("\n") + "\n"
    }

    /// In another order.
    pub(crate) fn shuffled(&self, seed: u64) -> String {
        let mut random = Random::new(seed);
        let mut parts = self.parts.clone();
        for left in (1..parts.len()).rev() {
            parts.swap(left, (random.word() % (left as u64 + 1)) as usize);
        }
        parts.join("\n") + "\n"
    }
}

/// The circuit of a seed.
pub(crate) fn circuit(seed: u64) -> Drawn {
    let mut random = Random::new(seed);
    let wild = random.word().is_multiple_of(4);
    let nodes = (2 + random.word() % if wild { 7 } else { 6 }) as usize;
    let mut generator = Generator {
        random,
        wild,
        nodes,
        parts: Vec::new(),
        count: 0,
        sensed: Vec::new(),
        inductors: Vec::new(),
        forced_voltages: (0..nodes).collect(),
        free_currents: (0..nodes).collect(),
        has_blocks: false,
    };
    generator.write();
    Drawn { parts: generator.parts }
}

/// Own blocks, the second with the first inside.
const BLOCKS: [&str; 2] = [
    "block cell(a, b; R, C = 2 nF)\n  a > R > m > L1 || R1 = 2*R > b\n  m > C > ground\nend",
    "block stage(a, b, c; g, R = 3 kΩ)\n  use cell A: a a, b m, R = 2*R\n  \
     c > current G1 = g*V(m, b) > b\n  m > R2 = 1/g > b\nend",
];

/// A device: its word, its terminals, and parameters of which any may be left out, in groups.
struct Device {
    word: &'static str,
    letter: &'static str,
    terminals: &'static [&'static str],
    always: &'static [&'static str],
    maybe: &'static [&'static str],
}

const DEVICES: [Device; 8] = [
    Device {
        word: "bjt",
        letter: "Q",
        terminals: &["base", "collector", "emitter"],
        always: &["gm", "rpi"],
        maybe: &["ro", "rb", "Cpi", "Cmu", "rmu"],
    },
    Device {
        word: "bjt",
        letter: "Q",
        terminals: &["base", "collector", "emitter"],
        always: &["at 1 mA", "beta = 150"],
        maybe: &["VA = 50 V", "rb", "Cmu", "gm = gm"],
    },
    Device {
        word: "mosfet",
        letter: "M",
        terminals: &["gate", "drain", "source"],
        always: &["gm"],
        maybe: &["ro", "Cgs", "Cgd"],
    },
    Device {
        word: "mosfet",
        letter: "M",
        terminals: &["gate", "drain", "source", "bulk"],
        always: &["gm", "gmb"],
        maybe: &["ro", "Cgs", "Cgd", "Cdb", "Csb"],
    },
    Device {
        word: "jfet",
        letter: "J",
        terminals: &["gate", "drain", "source"],
        always: &["gm"],
        maybe: &["ro", "Cgs", "Cgd"],
    },
    Device {
        word: "triode",
        letter: "V",
        terminals: &["grid", "plate", "cathode"],
        always: &["mu", "rp"],
        maybe: &["Cgk", "Cgp", "Cpk"],
    },
    Device {
        word: "triode",
        letter: "V",
        terminals: &["grid", "plate", "cathode"],
        always: &["gm"],
        maybe: &["rp", "Cgp"],
    },
    Device {
        word: "diode",
        letter: "D",
        terminals: &["anode", "cathode"],
        always: &["rd"],
        maybe: &["Cd"],
    },
];

struct Generator {
    random: Random,
    wild: bool,
    /// Ground among them.
    nodes: usize,
    parts: Vec<String>,
    count: usize,
    /// Names of elements whose current can be sensed.
    sensed: Vec<String>,
    /// Inductors without a coupling.
    inductors: Vec<String>,
    /// For each node a node that voltages are forced against, up to one that stands for itself.
    forced_voltages: Vec<usize>,
    /// Likewise for branches whose current is whatever it must be.
    free_currents: Vec<usize>,
    has_blocks: bool,
}

type Nodes = (usize, usize);

impl Generator {
    fn below(&mut self, bound: usize) -> usize {
        (self.random.word() % bound as u64) as usize
    }

    fn one_in(&mut self, n: usize) -> bool {
        self.below(n) == 0
    }

    fn pick<'a>(&mut self, from: &[&'a str]) -> &'a str {
        from[self.below(from.len())]
    }

    fn name(&mut self, letter: &str) -> String {
        self.count += 1;
        format!("{letter}{}", self.count)
    }

    fn pair(&mut self) -> Nodes {
        loop {
            let (a, b) = (self.below(self.nodes), self.below(self.nodes));
            if a != b || (self.wild && self.one_in(40)) {
                return (a, b);
            }
        }
    }

    /// Nodes between which a voltage may be forced and any current flow.
    fn branch(&mut self) -> Option<Nodes> {
        let (voltages, currents) = (self.forcing()?, self.feeding()?);
        // A source does both at once.
        for pair in [voltages, currents] {
            if self.wild || (self.forces_anew(pair) && self.feeds_anew(pair)) {
                join(&mut self.forced_voltages, pair);
                join(&mut self.free_currents, pair);
                return Some(pair);
            }
        }
        None
    }

    fn forces_anew(&self, (a, b): Nodes) -> bool {
        top(&self.forced_voltages, a) != top(&self.forced_voltages, b)
    }

    fn feeds_anew(&self, (a, b): Nodes) -> bool {
        top(&self.free_currents, a) != top(&self.free_currents, b)
    }

    fn forcing(&mut self) -> Option<Nodes> {
        (0..20)
            .map(|_| self.pair())
            .collect::<Vec<_>>()
            .into_iter()
            .find(|&pair| self.wild || self.forces_anew(pair))
    }

    fn feeding(&mut self) -> Option<Nodes> {
        (0..20)
            .map(|_| self.pair())
            .collect::<Vec<_>>()
            .into_iter()
            .find(|&pair| self.wild || self.feeds_anew(pair))
    }

    fn walk(&mut self, (a, b): Nodes, element: &str) {
        if a != b {
            self.parts.push(format!("{} > {element} > {}", node(a), node(b)));
        }
    }

    /// Now and then matched to others of its kind by a shared parameter.
    fn value(&mut self, letter: &str) -> String {
        match self.below(10) {
            0 => format!(" = {letter}m"),
            1 => format!(" = {}*{letter}m", 2 + self.below(2)),
            2 if letter == "R" => format!(" = {} kΩ ± 1 %", 1 + self.below(9)),
            _ => String::new(),
        }
    }

    fn passive(&mut self, pair: Nodes, letters: &[&str]) {
        let letter = self.pick(letters);
        let (name, value) = (self.name(letter), self.value(letter));
        if pair.0 == pair.1 {
            return;
        }
        if letter == "L" && value.is_empty() {
            self.inductors.push(name.clone());
        }
        self.walk(pair, &format!("{name}{value}"));
        self.sensed.push(name);
    }

    fn control(&mut self) -> String {
        if !self.sensed.is_empty() && self.one_in(3) {
            let index = self.below(self.sensed.len());
            return format!("I({})", self.sensed[index]);
        }
        let (a, b) = self.pair();
        format!("V({}, {})", node(a), node(b))
    }

    fn dependent(&mut self) {
        let is_voltage = self.one_in(2);
        let pair = if is_voltage { self.branch() } else { Some(self.pair()) };
        let Some(pair) = pair else { return };
        let mut terms = Vec::new();
        for _ in 0..=self.below(3) / 2 {
            let gain = match self.below(6) {
                0 => format!("{}/(1 + s/{})", self.name("a"), self.name("w")),
                _ => self.name("k"),
            };
            terms.push(format!("{gain}*{}", self.control()));
        }
        if terms.len() == 1 && self.one_in(6) {
            // A plain number needs a control of the source's own kind.
            let (a, b) = self.pair();
            terms = match is_voltage {
                true => vec![format!("2*V({}, {})", node(a), node(b))],
                false if self.sensed.is_empty() => return,
                false => vec![format!("2*I({})", self.sensed[0])],
            };
        }
        let (class, name) = (if is_voltage { "voltage" } else { "current" }, self.name("X"));
        self.walk(pair, &format!("{class} {name} = {}", terms.join(" + ")));
    }

    fn opamp(&mut self) {
        let finite = self.one_in(2);
        let mut output = self.below(self.nodes);
        if !self.wild {
            let free = |at: usize| {
                let pair = (at, 0);
                self.feeds_anew(pair) && (!finite || self.forces_anew(pair))
            };
            let Some(found) =
                (0..self.nodes).map(|step| (output + step) % self.nodes).find(|&at| free(at))
            else {
                return;
            };
            output = found;
        }
        let Some((plus, minus)) = (if finite { Some(self.pair()) } else { self.forcing() }) else {
            return;
        };
        join(&mut self.free_currents, (output, 0));
        join(&mut self.forced_voltages, if finite { (output, 0) } else { (plus, minus) });
        let name = self.name("U");
        let mut line = format!(
            "opamp {name}: plus {}, minus {}, output {}",
            node(plus),
            node(minus),
            node(output)
        );
        if finite {
            line += self.pick(&[", gain = A0", ", gain = A0/(1 + s/wp)", ", gain", ", gain = 1e5"]);
            line += self.pick(&["", "", ", rin", ", rin = 1 MΩ"]);
            line += self.pick(&["", "", ", rout", ", rout = Rm"]);
        }
        self.parts.push(line);
    }

    fn nullor(&mut self) {
        let (Some(nullator), Some(norator)) = (self.forcing(), self.feeding()) else { return };
        join(&mut self.forced_voltages, nullator);
        join(&mut self.free_currents, norator);
        let name = self.name("N");
        self.parts.push(format!(
            "nullor {name}: nullator {}, norator {}",
            port(nullator),
            port(norator)
        ));
    }

    fn device(&mut self) {
        let device = &DEVICES[self.below(DEVICES.len())];
        let mut line = format!("{} {}:", device.word, self.name(device.letter));
        let mut at: Vec<usize> = Vec::new();
        for (index, terminal) in device.terminals.iter().enumerate() {
            let mut chosen = self.below(self.nodes);
            // Diodes and the control of transistors lie between two nodes.
            while !self.wild && index < 3.min(self.nodes) && at.contains(&chosen) {
                chosen = (chosen + 1) % self.nodes;
            }
            at.push(chosen);
            let comma = if index == 0 { "" } else { "," };
            line += &format!("{comma} {terminal} {}", node(chosen));
        }
        for parameter in device.always {
            line += &format!(", {parameter}");
        }
        for parameter in device.maybe {
            if self.one_in(3) {
                line += &format!(", {parameter}");
            }
        }
        self.parts.push(line);
    }

    fn mutual(&mut self) {
        while self.inductors.len() < 2 {
            let pair = self.pair();
            self.passive(pair, &["L"]);
        }
        let first = self.inductors.swap_remove(0);
        // The other may be coupled to a third.
        let second = self.below(self.inductors.len());
        let name = self.name("M");
        self.parts.push(format!("mutual {name}: inductors {first} {}", self.inductors[second]));
    }

    fn transformer(&mut self) {
        let Some(primary) = self.branch() else { return };
        let (name, secondary) = (self.name("T"), self.pair());
        let ratio = self.pick(&["ratio = n", "ratio", "ratio = 2"]);
        self.parts.push(format!(
            "transformer {name}: primary {}, secondary {}, {ratio}",
            port(primary),
            port(secondary)
        ));
    }

    fn gyrator(&mut self) {
        let (name, first, second) = (self.name("Y"), self.pair(), self.pair());
        let value = self.pick(&["", " = g", " = 2 mS"]);
        self.parts.push(format!(
            "gyrator {name}: port1 {}, port2 {}, conductance{value}",
            port(first),
            port(second)
        ));
    }

    fn block(&mut self) {
        if !self.has_blocks {
            self.has_blocks = true;
            self.parts.extend(BLOCKS.map(str::to_owned));
        }
        let (name, (a, b)) = (self.name("B"), self.pair());
        let line = if self.one_in(2) {
            let value = self.pick(&["", ", R", ", R = 10 kΩ, C = Cm", ", C = 1 nF"]);
            format!("use cell {name}: a {}, b {}{value}", node(a), node(b))
        } else {
            let (c, value) = (self.below(self.nodes), self.pick(&["", ", g = gm", ", g, R = Rm"]));
            format!("use stage {name}: a {}, b {}, c {}{value}", node(a), node(b), node(c))
        };
        self.parts.push(line);
    }

    fn one_port(&mut self) {
        let (pair, name) = (self.pair(), self.name("Z"));
        self.walk(pair, &format!("{name} = ((Ra + s*La) || (1/(s*Ca)))"));
    }

    fn write(&mut self) {
        let pair = self.pair();
        let class = self.pick(&["voltage", "current"]);
        if class == "voltage" {
            join(&mut self.forced_voltages, pair);
            join(&mut self.free_currents, pair);
        }
        self.parts.push(format!("{} > {class} Vin > {}", node(pair.0), node(pair.1)));
        if !self.wild {
            for outer in 1..self.nodes {
                let inner = self.below(outer);
                self.passive((outer, inner), &["R", "R", "R", "C", "L", "G"]);
            }
        }
        let extra = if self.wild { self.nodes + 1 } else { 2 };
        for _ in 0..extra + self.below(5) {
            match self.below(22) {
                0..=8 => {
                    let pair = self.pair();
                    self.passive(pair, &["R", "R", "R", "C", "C", "L", "G"]);
                }
                9..=11 => self.dependent(),
                12..=13 => self.opamp(),
                14..=16 => self.device(),
                17 => self.mutual(),
                18 => self.transformer(),
                19 => self.gyrator(),
                20 => self.nullor(),
                _ => self.block(),
            }
        }
        if self.one_in(8) {
            self.one_port();
        }
        let query = self.query();
        self.parts.push(format!("ask H = {query}"));
    }

    fn query(&mut self) -> String {
        let (a, b) = self.pair();
        let (a, b) = (node(a), node(b));
        match self.below(6) {
            0 => format!("impedance({a}, {b})"),
            1 => format!("admittance({a}, {b})"),
            2 if !self.sensed.is_empty() => {
                let index = self.below(self.sensed.len());
                format!("I({}) / Vin", self.sensed[index])
            }
            3 => {
                let low = usize::from(!self.wild);
                let below = low + self.below(self.nodes - low);
                format!("V({a}, {b}) / V({})", node(below))
            }
            _ => format!("V({a}, {b}) / Vin"),
        }
    }
}

fn node(index: usize) -> String {
    if index == 0 { "ground".to_owned() } else { format!("n{index}") }
}

fn port((a, b): Nodes) -> String {
    format!("{} {}", node(a), node(b))
}

fn top(parents: &[usize], mut at: usize) -> usize {
    while parents[at] != at {
        at = parents[at];
    }
    at
}

fn join(parents: &mut [usize], (a, b): Nodes) {
    let (a, b) = (top(parents, a), top(parents, b));
    parents[a] = b;
}
