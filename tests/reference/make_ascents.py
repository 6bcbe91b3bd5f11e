"""Makes the reference ascents beside this file: invented profiles and what becomes of parcels in them.

    python -m pip install -r requirements.txt
    python make_ascents.py

Nothing here is taken from the Rust code: the definitions are the project's conventions, the integrals are SciPy's
`quad` between roots of `brentq`, and every parcel temperature is a root by `brentq`.
"""

import math

import numpy as np
from scipy.integrate import quad
from scipy.optimize import brentq

from make_reference import KAPPA, EPS, RD, ZERO, e_sat, pseudo_t, t_lcl, theta_e_39, tv_of, w_of, write

# Pressure hPa, temperature degC, dew point degC (None: not known). All invented.
PROFILES = [
    # Warm and moist under a cap.
    [(1000, 30, 21), (850, 18, 14), (800, 20, 2), (700, 11, -5), (500, -10, -30), (300, -40, -55), (200, -55, -75), (100, -60, -85)],
    # A buoyant layer under a lid, and two above it parted by a stable one.
    [(1000, 26, 22), (950, 21.5, 20), (900, 18.5, 16), (870, 24, 5), (700, 8, -10), (500, -12, -35), (450, -17, -40),
     (420, -10, -40), (400, -21, -45), (250, -50, -65), (200, -52, -75), (100, -60, -85)],
    # No humidity reported in the middle nor above 400 hPa.
    [(1008, 28, 24), (925, 23, 20), (850, 19, None), (700, 9, 1), (500, -7, -20), (400, -18, -38), (300, -33, None),
     (200, -54, None), (100, -76, None)],
    # Night: cold and moist at the ground, the best air above the inversion.
    [(990, 14, 13), (970, 19, 16), (940, 22, 17), (850, 17, 11), (700, 5, -4), (500, -14, -30), (300, -44, -60), (200, -56, -75), (100, -58, -85)],
    # Heated ground, deep and dry mixed layer, high base.
    [(880, 38, 4), (870, 35, 3), (700, 15.5, -1), (560, -2, -6), (500, -9, -15), (400, -23, -40), (300, -40, -60), (200, -56, -80), (100, -62, -85)],
    # Hardly any.
    [(1013, 15, 11), (900, 7, 5), (800, 1.5, -2), (700, -3.5, -12), (500, -19, -40), (300, -47, -65), (200, -52, -75), (100, -55, -85)],
    # Humid tropics to 70 hPa.
    [(1010, 29, 25), (1000, 28, 24.5), (950, 24.3, 22.5), (900, 21.5, 19), (800, 16.5, 12), (700, 9.7, 3), (600, 2, -6), (500, -5.7, -17),
     (400, -16, -30), (300, -31, -45), (250, -41, -54), (200, -54, -66), (150, -67.5, -78), (100, -79, -86), (70, -76, -88)],
    # Ends while still buoyant.
    [(1000, 27, 20), (850, 16, 12), (700, 5, -8), (500, -16, -30), (300, -46, -60)],
    # Cold air over a warm sea.
    [(1015, 4, 0), (1000, 2.6, -1), (850, -10, -12), (700, -22, -26), (500, -40, -46), (400, -48, -58), (300, -49, -65), (150, -50, -80)],
]


def noisy(seed, count):
    """Many levels with steps that a sensor's noise makes."""
    rng = np.random.default_rng(seed)
    levels = []
    for z in np.linspace(0, math.log(1005 / 110), count):
        p = 1005 * math.exp(-z)
        t = max((ZERO + 29) * math.exp(-KAPPA * 0.68 * z), 208) - ZERO + rng.normal(0, 0.25)
        td = t - 4 - 9 * z * rng.uniform(0.5, 1.6)
        levels.append((p, t, td))
    return levels


class Air:
    def __init__(self, levels):
        known = [(-math.log(p * 100), min(td, t) + ZERO) for p, t, td in levels if td is not None]
        self.z = [-math.log(p * 100) for p, _, _ in levels]
        self.t = [t + ZERO for _, t, _ in levels]
        zs, tds = zip(*known)
        self.td = [min(float(np.interp(z, zs, tds)), t) if z <= zs[-1] else None for z, t in zip(self.z, self.t)]

    def within(self, i, z):
        """T and Td (None: dry) at z in the segment above level i."""
        s = (z - self.z[i]) / (self.z[i + 1] - self.z[i])
        t = self.t[i] + s * (self.t[i + 1] - self.t[i])
        a, b = self.td[i], self.td[i + 1]
        return t, None if a is None or b is None else a + s * (b - a)

    def tv(self, i, z):
        t, td = self.within(i, z)
        return t if td is None else tv_of(t, w_of(e_sat(td), math.exp(-z)))

    def surface(self):
        return math.exp(-self.z[0]), self.t[0], self.td[0]

    def mixed(self):
        """Means over p of theta and w in the lowest 100 hPa."""
        p0 = math.exp(-self.z[0])
        theta, moisture = 0.0, 0.0
        for i in range(len(self.z) - 1):
            a, b = self.z[i], min(self.z[i + 1], -math.log(p0 - 1e4))
            if b <= a:
                break
            w = lambda z: w_of(e_sat(self.within(i, z)[1]), math.exp(-z))
            theta += quad(lambda z: self.within(i, z)[0] * (1e5 / math.exp(-z)) ** KAPPA * math.exp(-z), a, b, epsrel=1e-12)[0]
            moisture += quad(lambda z: w(z) * math.exp(-z), a, b, epsrel=1e-12)[0]
        t, w = theta / 1e4 * (p0 / 1e5) ** KAPPA, moisture / 1e4
        y = math.log(p0 * w / (EPS + w) / 611.2)
        return p0, t, min(ZERO + 243.5 * y / (17.67 - y), t)

    def most_unstable(self):
        p0 = math.exp(-self.z[0])
        air = [(math.exp(-z), t, td) for z, t, td in zip(self.z, self.t, self.td) if math.exp(-z) >= p0 - 3e4]
        return max((a for a in air if a[2] is not None), key=lambda a: theta_e_39(*a))

    def lift(self, start):
        p0, t0, td0 = start
        w0 = w_of(e_sat(td0), p0)
        k = KAPPA * (1 - 0.28 * w0)
        tl = t_lcl(t0, td0) if td0 < t0 else t0
        p_lcl = p0 * (tl / t0) ** (1 / k)
        theta_e = theta_e_39(p0, t0, td0)
        z0, z_lcl, z_top = -math.log(p0), -math.log(p_lcl), self.z[-1]

        def parcel(z, moist):
            p = math.exp(-z)
            if not moist:
                return tv_of(t0 * (p / p0) ** k, w0)
            t = pseudo_t(theta_e, p)
            return tv_of(t, w_of(e_sat(t), p))

        # Pieces of one sign: (from, to, area, above the LCL).
        pieces = []
        edges = sorted({z for z in [z0, z_lcl, *self.z] if z0 <= z <= z_top})
        for a, b in zip(edges, edges[1:]):
            moist = a >= z_lcl
            i = max(i for i in range(len(self.z) - 1) if self.z[i] <= a)
            f = lambda z: parcel(z, moist) - self.tv(i, z)
            grid = np.linspace(a, b, max(3, int((b - a) / 0.004) + 2))
            values = [f(z) for z in grid]
            cuts = [a]
            for u, v, fu, fv in zip(grid, grid[1:], values, values[1:]):
                if fu * fv < 0:
                    cuts.append(brentq(f, u, v, xtol=1e-13))
            cuts.append(b)
            for u, v in zip(cuts, cuts[1:]):
                area = RD * quad(f, u, v, epsabs=1e-7, epsrel=1e-10, limit=200)[0]
                pieces.append((u, v, area, moist))

        layers = []
        for u, v, area, moist in pieces:
            if moist and area > 0:
                if layers and abs(layers[-1][1] - u) < 1e-12:
                    layers[-1][1], layers[-1][2] = v, layers[-1][2] + area
                else:
                    layers.append([u, v, area])
        cape = sum(layer[2] for layer in layers)
        if not layers:
            return cape, None, p_lcl, None, None
        base = max(layers, key=lambda layer: layer[2])[0]
        cin = sum(area for u, v, area, _ in pieces if area < 0 and v <= base + 1e-12)
        top = layers[-1][1]
        return cape, cin, p_lcl, math.exp(-base), None if top >= z_top - 1e-12 else math.exp(-top)


def main():
    profiles = PROFILES + [noisy(seed, count) for seed, count in ((7, 40), (8, 90), (9, 160))]
    levels, results = [], []
    for number, profile in enumerate(profiles):
        levels += [
            (number, p * 100.0, t + ZERO, None if td is None else td + ZERO) for p, t, td in profile
        ]
        air = Air(profile)
        for parcel, start in enumerate((air.surface(), air.mixed(), air.most_unstable())):
            results.append((number, parcel, *start, *air.lift(start)))
    write(
        "ascent_profiles",
        [
            "Invented profiles: nine by hand, three with noise on 40 to 160 levels.",
            "units: pressure Pa, temperature and dew point K (an empty dew point is not known)",
        ],
        ["numpy"],
        "input of ascents.csv, no check of its own",
        ["profile", "pressure_pa", "temperature_k", "dewpoint_k"],
        levels,
    )
    write(
        "ascents",
        [
            "What becomes of the surface (0), mixed (1, lowest 100 hPa) and most unstable (2, lowest 300 hPa) parcel in each",
            "profile of ascent_profiles.csv, temperature and dew point linear in ln p: quad between levels and roots of brentq,",
            "every parcel temperature a root of eq. 39 (Bolton 1980), virtual temperature on both sides.",
            "units: pressures Pa, temperatures K, CAPE and CIN J/kg; empty: there is none",
        ],
        ["scipy"],
        "CAPE and CIN 1e-4 J/kg or 1e-6; start 1e-6 K; pressures 0.01 Pa",
        ["profile", "parcel", "start_pa", "start_k", "start_dewpoint_k", "cape_jkg", "cin_jkg", "lcl_pa", "lfc_pa", "el_pa"],
        results,
    )


if __name__ == "__main__":
    main()
