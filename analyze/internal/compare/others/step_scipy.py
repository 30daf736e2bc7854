"""The step response of a state-space system by scipy.signal.step.

Usage: step_scipy.py SPACE; writes "step ladder-10 METHOD µs v0 v1 …".
"""
import sys
import time

import numpy
from scipy import signal

with open(sys.argv[1]) as file:
    states, samples, interval = file.readline().split()
    rows = [[float(x) for x in line.split()] for line in file]
states, samples, interval = int(states), int(samples), float(interval)
a = numpy.array(rows)
b = numpy.zeros((states, 1))
b[0, 0] = 1000
c = numpy.zeros((1, states))
c[0, states - 1] = 1
system = signal.StateSpace(a, b, c, [[0]])
times = numpy.arange(samples) * interval
least, spent = float("inf"), 0
while spent < 2:
    started = time.process_time()
    _, values = signal.step(system, T=times)
    each = time.process_time() - started
    least, spent = min(least, each), spent + each
print("step ladder-10 signal.step", "%.3f" % (least * 1e6), *("%.17g" % v for v in values))
