"""Answers of general libraries to the questions of the tests.

One question a line, as JSON; one number a line back. Density of water: the formulation IAPWS-95 in
the library iapws. Volumes: the tank geometry of the library fluids. Loads: adaptive quadrature
(QUADPACK) in the library scipy, over the widths of an outline.
"""

import json
import math
import sys

from fluids.geometry import TANK
from iapws import IAPWS95
from scipy.integrate import quad


def water_density(t_c):
    """Density at atmospheric pressure, kg/m3."""
    return IAPWS95(T=t_c + 273.15, P=0.101325).rho


def lying_volume(diameter, length, level):
    """Volume of a lying cylinder with flat ends below a level, m3."""
    return TANK(D=diameter, L=length, horizontal=True).V_from_h(level)


def width(shape, a, b, s):
    """Width of an outline of width a and length b at s up the slope, m."""
    if shape == "rectangle":
        return a
    if shape == "ellipse":
        return a * math.sqrt(max(0.0, 1.0 - (2.0 * s / b - 1.0) ** 2))
    if shape == "triangle":  # apex up
        return a * (1.0 - s / b)
    raise ValueError(shape)


def load(shape, a, b, bottom, sine, level, weight, gas, line, size):
    """Integral of p (s - line) ds, or of p ds without a line; with size of absolute values."""

    def at(s):
        pressure = gas + weight * max(0.0, level - bottom - s * sine)
        value = pressure * (1.0 if line is None else s - line) * width(shape, a, b, s)
        return abs(value) if size else value

    kinks = [(level - bottom) / sine, (level + gas / weight - bottom) / sine, line, 0.5 * b]
    inside = sorted({s for s in kinks if s is not None and 0.0 < s < b})
    ends = [0.0, *inside, b]
    pieces = zip(ends, ends[1:])
    return sum(quad(at, low, high, epsabs=0.0, epsrel=1e-10, limit=400)[0] for low, high in pieces)


def main():
    known = {"water_density": water_density, "lying_volume": lying_volume, "load": load}
    for line in sys.stdin:
        question = json.loads(line)
        print(repr(float(known[question.pop("ask")](**question))))


main()
