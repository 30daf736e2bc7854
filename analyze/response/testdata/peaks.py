"""Greatest values for peaks_test.go, made apart from the Go code.

State equations written by hand, solved through their eigenvalues at 60 digits
(mpmath, which is general-purpose mathematics). The greatest value over a range is
found on a grid that is dense beside every oscillation and then by bisecting the
derivative at every high point of it; a least upper bound that is only approached is the steady amplitude.
Run it to make peaks.json.
"""
import json
import math
from mpmath import mp, mpf, mpc, matrix, eig, pi, nstr, lu_solve

mp.dps = 60


class Answer:
    """y(t) = Re of a sum of c·e^{pt} for x' = A x, x(0) = x0, output row y."""

    def __init__(self, a, x0, y):
        values, right = eig(matrix(a))
        w = lu_solve(right, matrix([mpc(v) for v in x0]))
        self.terms = []
        for k, p in enumerate(values):
            c = sum(y[i] * right[i, k] for i in range(len(y))) * w[k]
            self.terms.append((c, p))
        self.fast = [(complex(c), complex(p)) for c, p in self.terms]

    def at(self, t, order=0):
        return sum(c * p**order * mp.exp(p * t) for c, p in self.terms).real

    def rough(self, t):
        total = 0.0
        for c, p in self.fast:
            if p.real * t > -700:
                total += (c * complex(math.cos(p.imag * t), math.sin(p.imag * t)) * math.exp(p.real * t)).real
        return total

    def greatest(self, a, b, n, sign=1):
        """Every local maximum of the grid that comes near the greatest is refined."""
        grid = [sign * self.rough(a + (b - a) * k / n) for k in range(n + 1)]
        top = max(grid)
        near = top - 2e-3 * abs(top)
        best = None
        for k in range(n + 1):
            if grid[k] < near or k > 0 and grid[k - 1] > grid[k] or k < n and grid[k + 1] > grid[k]:
                continue
            lo, hi = (mpf(a) + (mpf(b) - mpf(a)) * j / n for j in (max(k - 1, 0), min(k + 1, n)))
            for _ in range(100):
                mid = (lo + hi) / 2
                if sign * self.at(mid, 1) > 0:
                    lo = mid
                else:
                    hi = mid
            value = sign * self.at(lo)
            if best is None or value > best[0]:
                best = value, lo
        return {"value": nstr(sign * best[0], 25), "at": nstr(best[1], 25)}


def front_end():
    ch, cw, rb, r1, r2, c1, c2 = map(mpf, ("12e-9", "3.3e-9", "1e6", "6800", "6800", "1.5e-9", "680e-12"))
    wt, a0, w, amplitude = 2 * pi * 10**7, mpf(10) ** 6, 2 * pi * 5000, mpf("1e-3")
    # cable, buf, out, b, x = a − out, and sin, cos of the source
    out = [mpf(0), mpf(0), mpf(1), mpf(0), mpf(0), mpf(0), mpf(0)]
    a_row = [0, 0, 1, 0, 1, 0, 0]
    rows = [
        [-1 / (rb * (ch + cw)), 0, 0, 0, 0, 0, ch / (ch + cw) * w],
        [wt, -wt - wt / a0, 0, 0, 0, 0, 0],
        [0, 0, -wt - wt / a0, wt, 0, 0, 0],
        [0, 0, 1 / r2 / c2, -1 / r2 / c2, 1 / r2 / c2, 0, 0],
        [0, 1 / r1 / c1, -(1 / r1 + 1 / r2) / c1, 1 / r2 / c1, -(1 / r1 + 1 / r2) / c1, 0, 0],
        [0, 0, 0, 0, 0, 0, w],
        [0, 0, 0, 0, 0, -w, 0],
    ]
    x0 = [0, 0, 0, 0, 0, 0, amplitude]
    v = Answer(rows, x0, out)
    node_a = Answer(rows, x0, [mpf(k) for k in a_row])
    vch = Answer(rows, x0, [mpf(-1), 0, 0, 0, 0, mpf(1), 0])

    def steady(f):
        return nstr(2 * max(abs(c) for c, p in f.terms if abs(p.real) < mpf(10) ** -30), 25)

    return {
        "out never above": steady(v),
        "a never above": steady(node_a),
        "ceramic never below minus": steady(vch),
        "out trough": v.greatest(0, 1e-2, 100000, -1),
        "out peak to 30 ms": v.greatest(0, 3e-2, 300000),
    }


def bank():
    c, r, l = mpf("2e-3"), mpf("0.01"), mpf("13.5e-6")
    v = Answer([[0, -1 / c], [1 / l, -r / l]], [900, 0], [mpf(1), mpf(0)])
    # from 5 s on, in units of e^{-5α}: the same equations with the state there
    alpha = r / l / 2
    start, slope = v.at(mpf(5)) * mp.exp(5 * alpha), v.at(mpf(5), 1) * mp.exp(5 * alpha)
    later = Answer([[0, -1 / c], [1 / l, -r / l]], [start, -c * slope], [mpf(1), mpf(0)])
    best = max((later.greatest(0, 3e-3, 3000, s) for s in (1, -1)), key=lambda e: abs(mpf(e["value"])))
    scale = mp.exp(-5 * alpha)
    return {"after 5 s": {"value": nstr(abs(mpf(best["value"])) * scale, 25), "at": nstr(5 + mpf(best["at"]), 25)}}


def driven(numerator, w0, q, w, end, n):
    """numerator/(s²+w0/q·s+w0²), numerator = (n0, n1), at sin(w·t)."""
    w0, q, w = mpf(w0), mpf(q), mpf(w)
    a = [[0, 1, 0, 0], [-w0 * w0, -w0 / q, 1, 0], [0, 0, 0, w], [0, 0, -w, 0]]
    v = Answer(a, [0, 0, 0, 1], [mpf(numerator[0]), mpf(numerator[1]), mpf(0), mpf(0)])
    return v.greatest(0, end, n)


def two_tones():
    a = [[-1, 1, 0, 1, 0], [0, 0, 10, 0, 0], [0, -10, 0, 0, 0], [0, 0, 0, 0, 10001], [0, 0, 0, -10001, 0]]
    return Answer(a, [0, 0, 1, 0, mpf(1) / 3], [mpf(1), 0, 0, 0, 0]).greatest(0, 7, 400000)


with open("peaks.json", "w") as f:
    json.dump(
        {
            "front end": front_end(),
            "bank": bank(),
            "driven": {
                "at resonance to 1 s": driven((0, 1000), 1000, 50, 1000, 1, 20000),
                "near resonance": driven((0, 1000), 1000, 1000, 1010, 10, 200000),
                "below resonance": driven((10**6, 0), 1000, 50, 730, 3, 60000),
                "two tones": two_tones(),
            },
        },
        f, indent=1,
    )
    f.write("\n")
