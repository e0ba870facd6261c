"""Makes tests/data/pencil.txt with numpy and SciPy (Python 3); their versions stand in the file.

Usage: python3 tests/scripts/pencil_goldens.py   (from the root of the package)

Each block is a circuit file that asks one function, then the lines `pole RE IM`: the finite generalised
eigenvalues of the pencil (G, C) of its nodal equations (G + s C) x = b, by QZ iteration in double
precision. The random numbers are seeded. Only circuits whose eigenvalues are well conditioned are kept.
"""

import random

import numpy
import scipy
import scipy.linalg

rng = random.Random(5)


class Circuit:
    """Lines of a file, and the matrices that they mean."""

    def __init__(self, nodes):
        self.nodes = nodes
        self.size = nodes
        self.entries = {"G": [], "C": []}
        self.lines = ["n1 > current Iin > ground"]
        self.count = 0

    def name(self, letter):
        self.count += 1
        return f"{letter}{self.count}"

    def add(self, which, row, column, value):
        self.entries[which].append((row, column, value))

    def conductance(self, which, a, b, value):
        """A two-terminal element between nodes a and b; node 0 is ground."""
        for row, column, sign in ((a, a, 1), (b, b, 1), (a, b, -1), (b, a, -1)):
            if row and column:
                self.add(which, row - 1, column - 1, sign * value)

    def walk(self, a, element, b):
        node = lambda k: f"n{k}" if k else "ground"
        self.lines.append(f"{node(a)} > {element} > {node(b)}")

    def resistor(self, a, b):
        value = rng.randint(2, 90)
        self.walk(a, f"{self.name('R')} = {value}", b)
        self.conductance("G", a, b, 1 / value)

    def capacitor(self, a, b):
        value = rng.randint(2, 90)
        self.walk(a, f"{self.name('C')} = {value} m", b)
        self.conductance("C", a, b, value * 1e-3)

    def inductor(self, a, b):
        value = rng.randint(2, 90)
        self.walk(a, f"{self.name('L')} = {value}", b)
        current = self.size
        self.size += 1
        for node, sign in ((a, 1), (b, -1)):
            if node:
                self.add("G", node - 1, current, sign)
                self.add("G", current, node - 1, sign)
        self.add("C", current, current, -value)

    def transconductance(self, a, b, c, d):
        """A current from a to b, by the voltage from c to d."""
        value = rng.randint(2, 90)
        name, gain = self.name("J"), self.name("g")
        node = lambda k: f"n{k}" if k else "ground"
        self.lines.append(f"let {gain} = {value} mS")
        self.walk(a, f"current {name} = {gain}*V({node(c)}, {node(d)})", b)
        for row, out in ((a, 1), (b, -1)):
            for column, sign in ((c, 1), (d, -1)):
                if row and column:
                    self.add("G", row - 1, column - 1, out * sign * value * 1e-3)

    def matrices(self):
        g, c = numpy.zeros((self.size, self.size)), numpy.zeros((self.size, self.size))
        for matrix, which in ((g, "G"), (c, "C")):
            for row, column, value in self.entries[which]:
                matrix[row, column] += value
        return g, c


def pair(nodes):
    return rng.sample(range(nodes + 1), 2)


def draw():
    circuit = Circuit(rng.randint(3, 7))
    for node in range(1, circuit.nodes + 1):
        circuit.resistor(node, rng.randrange(node))
    for _ in range(rng.randint(2, 5)):
        circuit.capacitor(*pair(circuit.nodes))
    for _ in range(rng.randint(0, 2)):
        circuit.inductor(*pair(circuit.nodes))
    for _ in range(rng.randint(0, 2)):
        circuit.transconductance(*pair(circuit.nodes), *pair(circuit.nodes))
    circuit.lines.append(f"ask H = V(n{circuit.nodes}) / Iin")
    return circuit


def poles(g, c):
    """Finite eigenvalues, or none where rounding could be seen in them."""
    (alpha, beta), left, right = scipy.linalg.eig(
        g, -c, left=True, right=True, homogeneous_eigvals=True
    )
    finite = numpy.abs(beta) > 1e-9 * numpy.abs(alpha)
    if numpy.any(finite & (numpy.abs(beta) < 1e-5 * numpy.abs(alpha))):
        return None
    values = alpha[finite] / beta[finite]
    bound = 1e-15 * (numpy.linalg.norm(g) + numpy.abs(values) * numpy.linalg.norm(c))
    slope = numpy.abs(numpy.einsum("ik,ij,jk->k", left.conj(), c, right))[finite]
    if len(values) == 0 or numpy.any(bound / slope > 1e-11 * numpy.abs(values)):
        return None
    return values


print_lines = [
    "# Circuits and the finite generalised eigenvalues of their pencils, made by",
    f"# tests/scripts/pencil_goldens.py with numpy {numpy.__version__} and SciPy {scipy.__version__}.",
]
kept = 0
while kept < 60:
    circuit = draw()
    g, c = circuit.matrices()
    found = poles(g, c)
    if found is None:
        continue
    source, probe = numpy.zeros(len(g)), numpy.zeros(len(g))
    source[0], probe[circuit.nodes - 1] = 1, 1
    values, left, right = scipy.linalg.eig(g, -c, left=True, right=True)
    # Residues: a pole that does not reach the answer is no pole of it.
    reach = numpy.abs((probe @ right) * (left.conj().T @ source))
    if numpy.any(reach[numpy.isfinite(values) & (numpy.abs(values) < 1e6)] < 1e-6):
        continue
    kept += 1
    print_lines += ["", *circuit.lines]
    for value in sorted(found, key=lambda value: (abs(value), value.imag)):
        print_lines.append(f"pole {value.real:.16e} {value.imag:.16e}")

with open("tests/data/pencil.txt", "w", encoding="utf-8") as file:
    file.write("\n".join(print_lines) + "\n")
