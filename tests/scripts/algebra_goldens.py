"""Makes tests/data/factorisations.txt and tests/data/gcds.txt with SymPy 1.14.0 (Python 3).

Usage: python3 tests/scripts/algebra_goldens.py   (from the root of the package)

Each line is one case, fields separated by " | ":
  factorisations: polynomial | content | factor ^^ multiplicity | ...
  gcds:           polynomial | polynomial | greatest common divisor
Variables are x0, x1, ...; the random numbers are seeded.
"""

import random

import sympy
from sympy import Poly, cyclotomic_poly, factor_list, gcd, symbols

X = symbols("x0:12")
rng = random.Random(20)


def some(variables, degree, terms, coefficient=9, linear=False):
    """A random polynomial; `linear` bounds the degree in all variables but the first by 1."""
    total = 0
    for _ in range(terms):
        term = rng.choice([c for c in range(-coefficient, coefficient + 1) if c])
        for place in range(variables):
            top = 1 if linear and place else degree
            term *= X[place] ** rng.randint(0, top)
        total += term
    return total if total != 0 else X[0] + 1


def text(expression):
    return str(Poly(expression, *X).as_expr().expand()).replace("**", "^")


def factored(expression):
    content, factors = factor_list(expression.expand(), *X)
    parts = [f"{text(factor)} ^^ {power}" for factor, power in factors]
    return " | ".join([text(expression), str(content), *parts])


def cases():
    yield cyclotomic_poly(15, X[0]) * cyclotomic_poly(7, X[0])
    yield X[0] ** 24 - 1
    yield X[0] ** 8 - 40 * X[0] ** 6 + 352 * X[0] ** 4 - 960 * X[0] ** 2 + 576
    yield X[1] ** 12 - X[2] ** 12
    yield (X[0] ** 2 + X[1] ** 2 - X[2] ** 2) ** 2 * (X[0] ** 3 - X[1] * X[2]) * 12
    yield (X[0] ** 2 * X[1] ** 2 + X[2] ** 2 + X[3] ** 2) * (X[0] ** 2 - X[1] ** 2 * X[2] ** 2 * X[3] ** 2 - 1)
    yield (X[1] ** 2 * X[0] ** 2 + 3) * (X[1] ** 2 * X[0] ** 2 - X[0] + 2) * (6 * X[1] ** 3 - X[0] ** 2)
    yield X[0] ** 4 + 64 * X[1] ** 4
    yield ((X[0] + X[1] + X[2]) ** 4 + 1).expand() * (X[0] * X[1] - X[2] ** 2)
    for degree in (2, 3, 5, 8):
        for _ in range(3):
            yield some(1, degree, 4) * some(1, degree, 4) * some(1, degree, 3)
    for variables, degree in ((2, 2), (2, 3), (2, 5), (3, 2), (3, 3), (4, 2), (5, 2)):
        for _ in range(4):
            yield some(variables, degree, 4) * some(variables, degree, 4)
        yield some(variables, degree, 3) ** 2 * some(variables, degree, 3)
        yield some(variables, degree, 3) * some(variables, degree, 3) * some(variables, degree, 3)
    for variables in (4, 6, 8):
        for _ in range(3):
            yield some(variables, 3, 5, 3, True) * some(variables, 2, 5, 3, True)
    for shift in (3, 4):
        first = some(3, 1, 5, 4)
        second = some(4, 1, 6, 4).subs(dict(zip(X[:4], X[shift : shift + 4])), simultaneous=True)
        yield first * second * 10
        yield some(4, 1, 7, 4)


def pairs():
    for variables, degree in ((1, 6), (2, 3), (3, 2), (4, 2)):
        for _ in range(5):
            common = some(variables, degree, 4)
            yield common * some(variables, degree, 4), common * some(variables, degree, 4)
    for variables in (5, 7):
        for _ in range(5):
            common = some(variables, 4, 5, 3, True)
            yield common * some(variables, 3, 5, 3, True), common * some(variables, 2, 6, 3, True)


def main():
    assert sympy.__version__ == "1.14.0", sympy.__version__
    with open("tests/data/factorisations.txt", "w", encoding="ascii") as out:
        for case in cases():
            print(factored(sympy.sympify(case)), file=out)
    with open("tests/data/gcds.txt", "w", encoding="ascii") as out:
        for a, b in pairs():
            a, b = a.expand(), b.expand()
            print(" | ".join([text(a), text(b), text(gcd(a, b))]), file=out)


main()
