"""Writes roots.txt, reference roots of polynomials.

Source: mpmath 1.3.0 (Python), polyroots at 300 digits, each root printed to 60
significant digits of either part. Run as

    python3 roots.py > roots.txt

A line "poly NAME c0 c1 …" gives the coefficients, ascending, as rationals p/q; the
lines "root RE IM" after it give its roots.
"""
import random
from fractions import Fraction
from math import factorial
from mpmath import mp, mpf, polyroots, nstr

mp.dps = 300
random.seed(1959)


def add(a, b):
    n = max(len(a), len(b))
    return [(a[i] if i < len(a) else 0) + (b[i] if i < len(b) else 0) for i in range(n)]


def mul(a, b):
    r = [Fraction(0)] * (len(a) + len(b) - 1)
    for i, x in enumerate(a):
        for j, y in enumerate(b):
            r[i + j] += x * y
    return r


def ladder(n):
    """a terminated ladder of n sections: series 1/10 + s, shunt s"""
    u, i = [Fraction(1)], [Fraction(1)]
    for _ in range(n):
        u = add(u, mul([Fraction(1, 10), Fraction(1)], i))
        i = add(i, mul([Fraction(0), Fraction(1)], u))
    return add(u, i)


def wilkinson(n):
    p = [Fraction(1)]
    for k in range(1, n + 1):
        p = mul(p, [Fraction(k), Fraction(1)])
    return p


def bessel(n):
    """the reverse Bessel polynomial"""
    return [Fraction(factorial(2 * n - k), 2 ** (n - k) * factorial(k) * factorial(n - k)) for k in range(n + 1)]


def perturbed():
    p = wilkinson(20)
    p[19] += Fraction(1, 2 ** 23)
    return p


POLYS = {
    "ladder10": ladder(10), "ladder20": ladder(20), "bessel15": bessel(15), "bessel30": bessel(30), "perturbed-wilkinson": perturbed(),
    "random30": [Fraction(random.randint(-10 ** 6, 10 ** 6)) for _ in range(31)],
    "spread12": [Fraction(random.randint(1, 99)) * Fraction(10) ** random.randint(-20, 20) for _ in range(25)],
    "exponential40": [Fraction(1, factorial(k)) for k in range(41)],
}
for name, p in POLYS.items():
    print("poly", name, *(f"{c.numerator}/{c.denominator}" for c in p))
    scale = max(abs(c) for c in p)
    for r in polyroots([mpf(c.numerator) / c.denominator for c in reversed(p)], maxsteps=2000, extraprec=3000):
        re, im = (r.real, r.imag) if hasattr(r, "imag") else (r, mpf(0))
        if abs(im) < abs(r) * mpf(10) ** -200:
            im = mpf(0)
        if abs(re) < abs(r) * mpf(10) ** -200:
            re = mpf(0)
        print("root", nstr(re, 60), nstr(im, 60))
