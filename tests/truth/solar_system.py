"""Writes solar-system.toml from eight-planets-j2000.csv: states turned into astrocentric elements at 50 digits (mpmath).

Run in this folder: python3 solar_system.py
"""
import csv
from mpmath import mp, mpf, sqrt, acos, atan2, sin, cos, pi, degrees

mp.dps = 50
# IAU 2015 Resolution B3 nominal GM of the Sun and IAU 2012 Resolution B2 astronomical unit, in au^3/day^2.
GM_NOMINAL = mpf("1.3271244e20") * 86400**2 / mpf(149597870700) ** 3


def cross(a, b):
    return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]


def dot(a, b):
    return sum(x * y for x, y in zip(a, b))


def elements(mu, r, v):
    distance = sqrt(dot(r, r))
    a = 1 / (2 / distance - dot(v, v) / mu)
    h = cross(r, v)
    e_vector = [x / mu - y / distance for x, y in zip(cross(v, h), r)]
    e = sqrt(dot(e_vector, e_vector))
    inclination = acos(h[2] / sqrt(dot(h, h)))
    node = atan2(h[0], -h[1])
    along = [cos(node), sin(node), mpf(0)]
    across = [x / sqrt(dot(h, h)) for x in cross(h, along)]
    argument = atan2(dot(e_vector, across), dot(e_vector, along))
    anomaly = atan2(dot(r, v) / sqrt(mu * a), 1 - distance / a)
    mean = anomaly - e * sin(anomaly)
    angles = [mp.fmod(degrees(x) + 360, 360) for x in (inclination, node, argument, mean)]
    return a, e, *angles


lines = [line for line in open("eight-planets-j2000.csv") if not line.startswith("#")]
bodies = list(csv.reader(lines))[1:]
sun_gm = mpf(bodies[0][1])
show = lambda x: mp.nstr(x, 18, min_fixed=-20)
out = [
    "# The eight planets of the Sun at J2000. A real system, for tests and reports only. Written by solar_system.py.",
    "#",
    "# Source: JPL ephemeris DE406 (Standish 1998) as packaged by B. Rhodes (Python package de406 1997.1, MIT), evaluated",
    "# at JD 2451545.0 TDB: tests/truth/eight-planets-j2000.csv. Ecliptic and equinox of J2000 in place of the sky plane;",
    "# Earth and Moon as one body. Masses are the ephemeris' G x mass over the nominal solar value of IAU 2015 B3.",
    "",
    'title = "Solar System"',
    'epoch = "2451545 JD"',
    "",
    "[star]",
    f'mass = "{show(sun_gm / GM_NOMINAL)} Msun"',
    'radius = "1 Rsun"',
]
for name, gm, *state in bodies[1:]:
    gm = mpf(gm)
    r, v = [mpf(x) for x in state[:3]], [mpf(x) for x in state[3:]]
    a, e, inclination, node, argument, mean = elements(sun_gm + gm, r, v)
    out += [
        "",
        "[[planet]]",
        f'name = "{name}"',
        f'semi_major_axis = "{show(a)} au"',
        f'mass = "{show(gm / GM_NOMINAL)} Msun"',
        f"eccentricity = {show(e)}",
        f'inclination = "{show(inclination)} deg"',
        f'ascending_node = "{show(node)} deg"',
        f'argument_of_pericentre = "{show(argument)} deg"',
        f'mean_anomaly = "{show(mean)} deg"',
    ]
open("solar-system.toml", "w").write("\n".join(out) + "\n")
