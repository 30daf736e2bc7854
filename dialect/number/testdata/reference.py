"""Writes functions.txt, the reference values of the elementary functions.

Source: mpmath 1.3.0 (Python) at 1600 bits; every value is printed to 110
significant digits, all of them right to within one unit of the last. Run as

    python3 reference.py > functions.txt

A line is: function, argument(s) as exact rationals p/q, value in decimal.
"""
import random
from fractions import Fraction
from mpmath import mp, mpf

mp.prec = 1600
random.seed(20260)
ONE = {"exp": mp.exp, "log": mp.log, "sin": mp.sin, "cos": mp.cos,
       "atan": mp.atan, "sqrt": mp.sqrt}


def real(q):
    return mpf(q.numerator) / q.denominator


def dyadic(value, bits):
    """value rounded to so many bits, as a fraction"""
    mantissa, exponent = mp.frexp(value)
    return Fraction(int(mp.nint(mantissa * mpf(2) ** bits))) * Fraction(2) ** (int(exponent) - bits)


def show(name, value, *arguments):
    print(name, *(f"{a.numerator}/{a.denominator}" for a in arguments), mp.nstr(value, 110, min_fixed=0, max_fixed=0))


def points(name):
    signed = name in ("exp", "sin", "cos", "atan")
    for _ in range(40):  # random, 64 bits, over a range of sizes
        size = random.randint(-70, 12)
        yield dyadic(mpf(random.choice([1, -1]) if signed else 1) * mpf(random.random() + 0.5) * mpf(2) ** size, 64)
    for _ in range(10):  # long arguments
        yield Fraction(random.getrandbits(400) * (random.choice([1, -1]) if signed else 1) + 1, random.getrandbits(395) + 1)
    if name in ("sin", "cos"):  # next to the multiples of a quarter turn
        for k in (1, 2, 3, 4, 7, 22, 355, 10 ** 6 + 1, 10 ** 30, 2 ** 200 + 1):
            for bits in (24, 53, 64, 128, 256, 500):
                yield dyadic(mp.pi / 2 * k, bits)
        yield Fraction(2) ** 300
        yield Fraction(10) ** 22
    if name == "exp":  # next to the points where the reduction changes
        for k in (1, 3, 64, 63, 1000, -1000, 12345):
            yield dyadic(mp.log(2) * k / 2, 64)
            yield dyadic(mpf(2 * k + 1) / 128, 64)
        yield Fraction(10 ** 4)
        yield Fraction(-10 ** 4)
        yield Fraction(1, 2 ** 200)
        yield Fraction(-1, 2 ** 200)
    if name == "log":  # next to 1 and far from it
        for e in (1, 2, 5, 10, 19, 20, 21, 30, 40, 63):
            yield 1 + Fraction(1, 2 ** e)
            yield 1 - Fraction(1, 2 ** e)
        for e in (100, 255, 700):
            yield 1 + Fraction(1, 2 ** e)
        for q in (Fraction(2) ** 1000, Fraction(1, 2 ** 1000), Fraction(3) ** 300, Fraction(7, 10) ** 400):
            yield q
    if name == "atan":
        for e in (1, 20, 24, 25, 26, 100, 300):
            yield Fraction(1, 2 ** e)
            yield Fraction(-(2 ** e))
    if name == "sqrt":
        for q in (Fraction(2), Fraction(1, 3), Fraction(10) ** 300, Fraction(10) ** -301, Fraction(2 ** 128 - 1), Fraction(2 ** 128 + 1)):
            yield q


for name, function in ONE.items():
    for q in points(name):
        if q == 0:
            continue
        show(name, function(real(q)), q)
for _ in range(60):
    y = dyadic(mpf(random.choice([1, -1])) * (random.random() + 0.5) * mpf(2) ** random.randint(-40, 40), 64)
    x = dyadic(mpf(random.choice([1, -1])) * (random.random() + 0.5) * mpf(2) ** random.randint(-40, 40), 64)
    show("atan2", mp.atan2(real(y), real(x)), y, x)
