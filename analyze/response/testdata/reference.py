"""Figures for reference_test.go, made apart from the Go code.

The state equations of three networks of the buoy are written by hand, with
sources as extra states, and solved by the matrix exponential at 60 digits
(mpmath, which is general-purpose mathematics). Run it to make reference.json.
"""
import json
from mpmath import mp, mpf, matrix, expm

mp.dps = 60


def solve(a, x0, y, t):
    x = expm(matrix(a) * mpf(t), method="taylor") * matrix(x0)
    return mp.nstr(sum(c * v for c, v in zip(y, x)), 30)


def rows(a, state, source, y, times):
    """zero_input: the sources' states at zero; zero_state: the network's."""
    n = len(state)
    zi = [mpf(v) for v in state] + [mpf(0)] * len(source)
    zs = [mpf(0)] * n + [mpf(v) for v in source]
    return [{"t": t, "zero_input": solve(a, zi, y, t), "zero_state": solve(a, zs, y, t)} for t in times]


def supply_filter():
    r, l, c, rd, cd, load = map(mpf, ("0.5", "47e-6", "100e-6", "1", "470e-6", "24"))
    # i, v, vd, and the 12 V of the source
    a = [
        [-r / l, -1 / l, 0, 1 / l],
        [1 / c, -(1 / load + 1 / rd) / c, 1 / rd / c, 0],
        [0, 1 / rd / cd, -1 / rd / cd, 0],
        [0, 0, 0, 0],
    ]
    return rows(a, ["0.3", "2", "-1"], ["12"], [0, 1, 0, 0], ["20e-6", "150e-6", "1e-3", "5e-3"])


def bus_discharge():
    c, l1, l2, m, r1, r2 = map(mpf, ("2.2e-3", "1e-3", "0.4e-3", "0.5e-3", "0.2", "3"))
    d = l1 * l2 - m * m
    # v, i1, i2: L1 i1' + M i2' = v − R1 i1, M i1' + L2 i2' = −R2 i2
    a = [
        [0, -1 / c, 0],
        [l2 / d, -l2 * r1 / d, m * r2 / d],
        [-m / d, m * r1 / d, -l1 * r2 / d],
    ]
    return rows(a, ["48", "1.5", "-0.25"], [], [0, 0, 1], ["50e-6", "1e-3", "4e-3", "20e-3"])


def hydrophone():
    r, c, beta, gb, a0, w = map(mpf, ("1e6", "220e-12", "0.01", "6e6", "1e5", "20e3"))
    # vc across C, the amplifier's output, and 2 mV·sin, 2 mV·cos as states
    a = [
        [-1 / (r * c), 0, 1 / (r * c), 0],
        [-gb, -gb * (beta + 1 / a0), gb, 0],
        [0, 0, 0, w],
        [0, 0, -w, 0],
    ]
    return rows(a, ["1e-3", "0"], ["0", "2e-3"], [0, 1, 0, 0], ["10e-6", "100e-6", "1e-3", "3e-3"])


json.dump(
    {"supply filter": supply_filter(), "bus discharge": bus_discharge(), "hydrophone": hydrophone()},
    open("reference.json", "w"),
    indent=1,
)
