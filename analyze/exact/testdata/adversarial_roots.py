"""Writes adversarial_roots.txt, reference roots of polynomials that are hard.

Source: MPSolve 3.2.1 (D. A. Bini, L. Robol; Debian package mpsolve), to 160 guaranteed
digits, 48 of which are kept. Run as

    python3 adversarial_roots.py > adversarial_roots.txt

A line "poly NAME c0 c1 …" gives the coefficients, ascending, as rationals, or
"build NAME" a polynomial that roots_reference_test.go builds by itself; the lines
"root RE IM" after it give its roots.
"""
import random
import subprocess
import tempfile
from fractions import Fraction

random.seed(1963)
ONE = Fraction(1)


def mul(a, b):
    r = [Fraction(0)] * (len(a) + len(b) - 1)
    for i, x in enumerate(a):
        if x:
            for j, y in enumerate(b):
                r[i + j] += x * y
    return r


def add(a, b):
    n = max(len(a), len(b))
    return [(a[i] if i < len(a) else 0) + (b[i] if i < len(b) else 0) for i in range(n)]


def product(factors):
    p = [ONE]
    for f in factors:
        p = mul(p, f)
    return p


def power(p, n):
    return product([p] * n)


def ladder(n):
    """the denominator of a terminated ladder with a filter's values, its sections unequal"""
    u, i = [ONE], [Fraction(1, 600)]
    for k in range(n):
        u = add(u, mul([Fraction(10 + k % 7, 10), Fraction(47 + k * 13 % 29, 100000)], i))
        i = add(i, mul([Fraction(1, 10 ** 6), Fraction(22 + k * 17 % 31, 10 ** 9)], u))
    return add(u, [50 * c for c in i])


def rc(n):
    """an open RC ladder of n equal sections: all roots real, crowded at -4"""
    u, i = [ONE], [Fraction(0)]
    for _ in range(n):
        i = add(i, mul([Fraction(0), ONE], u))
        u = add(u, i)
    return u


small = Fraction(1, 10 ** 12)
POLYS = {
    "cluster-real": product([[1 + k * small, ONE] for k in range(6)] + [[Fraction(3), ONE, ONE]]),
    "cluster-pairs": product([[1 + k * small, Fraction(1, 5), ONE] for k in range(4)] + [[1 + small ** 3, Fraction(2), ONE]]),
    "ring": add(power([ONE, ONE], 12), [-Fraction(1, 10 ** 72)]),
    "cancelled": add(power([ONE, ONE], 25), [-c for c in power([1 - Fraction(1, 10 ** 20), ONE + Fraction(1, 10 ** 25)], 25)]),
    "decades": [Fraction(random.choice([-1, 1]) * random.randint(1, 999), random.randint(1, 99)) * Fraction(10) ** random.randint(-300, 300) for _ in range(31)],
    "falling": [Fraction(10) ** (-15 * k * (k - 40) // 20) * random.randint(1, 9) for k in range(41)],
    "wilkinson-40": add(product([[Fraction(k), ONE] for k in range(1, 41)]), [Fraction(0)] * 39 + [Fraction(1, 2 ** 60)]),
    "rc-ladder-60": rc(60),
}


def short(number):
    """the first 48 digits of a number written 0.ddde±n; the zeros have no digits"""
    mantissa, exponent = number.strip().split("e")
    sign, digits = "-" * mantissa.startswith("-"), mantissa.split(".")[1]
    return "%s0.%se%s" % (sign, digits[:48], exponent) if digits else "0"


def solve(coefficients):
    with tempfile.NamedTemporaryFile("w", suffix=".pol") as file:
        lines = ["Monomial;", "Degree=%d;" % (len(coefficients) - 1), "Rational;", "Real;", ""]
        lines += ["%d/%d" % (c.numerator, c.denominator) for c in coefficients]
        file.write("\n".join(lines) + "\n")
        file.flush()
        out = subprocess.run(["mpsolve", "-au", "-Ga", "-o160", "-Oc", file.name], capture_output=True, text=True, check=True).stdout
    for line in out.split("\n"):
        if line.startswith("("):
            print("root", *(short(part) for part in line.strip("()").split(",")))


for name, p in POLYS.items():
    print("poly", name, *(str(c) for c in p))
    solve(p)
print("build ladder-200")
solve(ladder(200))
