"""Makes the reference ascents beside this file: invented profiles and what becomes of parcels in them; direct and
reversible ascents.

    python -m pip install -r requirements.txt
    python make_ascents.py

Nothing here is taken from the Rust code: the definitions are the project's conventions, the integrals are SciPy's
`quad` between roots of `brentq`, every temperature on a pseudo-adiabat a root by `brentq`, every other one by `solve_ivp`.
"""

import math

import numpy as np
from scipy.integrate import quad, solve_ivp
from scipy.optimize import brentq

from make_reference import KAPPA, EPS, RD, ZERO, e_sat, pseudo_t, t_lcl, theta_e_39, tv_of, w_of, write

# ---- default ascents through profiles ------------------------------------------------------------------------------

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


def table_ascents():
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


# ---- integrated ascents ---------------------------------------------------------------------------------------------------


class Kept:
    """Moist air with its condensate, per kg of dry air, by its enthalpy and density; slopes come from differences.

    Written from conservation, not from a lapse-rate formula: for the closed system d h = V dp with
    h = cpd T + r_v h_v + r_l h_l + r_i h_i and V = Rd T / p_d; for the pseudo-adiabatic one the condensate leaves with its
    enthalpy, so that d h minus the enthalpy of what leaves = V dp. Heat capacities and latent heats of Emanuel (1994),
    Atmospheric Convection (from memory). Enthalpy of vapour at 0 degC is the zero.
    """

    cpd, cpv, cl, ci = 1005.7, 1870.0, 4190.0, 2106.0
    lv, lf = 2.501e6, 3.337e5
    ice_at = ZERO - 20.0

    def __init__(self, ice, total=None):
        self.ice, self.total, self.formula = ice, total, "water"

    def stay(self, t):
        """Keeps to the formula that holds from t downward, also a little beyond it: smooth for the integration."""
        self.formula = "water" if not self.ice or t > ZERO else "mixture" if t > self.ice_at else "ice"
        return {"water": ZERO, "mixture": self.ice_at, "ice": None}[self.formula] if self.ice else None

    def liquid(self, t):
        return {"water": 1.0, "mixture": (t - self.ice_at) / (ZERO - self.ice_at), "ice": 0.0}[self.formula]

    def e(self, t):
        """Bolton eq. 10 over water; WMO-No. 8 annex 4.B over ice (from memory); linear mixture between."""
        c, f = t - ZERO, self.liquid(t)
        return f * e_sat(t) + (1 - f) * 611.2 * math.exp(22.46 * c / (c + 272.62))

    def vapour(self, t, p):
        return w_of(self.e(t), p)

    def h_vapour(self, t):
        return self.cpv * (t - ZERO)

    def h_condensed(self, t):
        """A kilogram of condensate."""
        f, c = self.liquid(t), t - ZERO
        return f * (self.cl * c - self.lv) + (1 - f) * (self.ci * c - self.lv - self.lf)

    def enthalpy(self, t, vapour, condensed):
        return self.cpd * (t - ZERO) + vapour * self.h_vapour(t) + condensed * self.h_condensed(t)

    def slope(self, x, t):
        """dT / d ln p: d h = V dp solved for dT, derivatives of h by central differences."""
        p = math.exp(x)
        volume_p = RD * t * p / (p - self.e(t))
        dt, dx = 1e-3, 1e-5
        if self.total is not None:
            h = lambda t, x: self.enthalpy(t, *self.split(t, math.exp(x)))
        else:
            # What condenses leaves with its enthalpy at t: no condensate, and its enthalpy counted as of now.
            gone, base = self.h_condensed(t), self.vapour(t, p)
            def h(t, x):
                vapour = self.vapour(t, math.exp(x))
                return self.enthalpy(t, vapour, 0.0) + (base - vapour) * gone
        h_t = (h(t + dt, x) - h(t - dt, x)) / (2 * dt)
        h_x = (h(t, x + dx) - h(t, x - dx)) / (2 * dx)
        return (volume_p - h_x) / h_t

    def split(self, t, p):
        vapour = self.vapour(t, p)
        return vapour, self.total - vapour

    def start(self, t, p):
        """From saturation over water to saturation over the mixture, at constant pressure and enthalpy."""
        total = w_of(e_sat(t), p)
        if not self.ice or t >= ZERO:
            return t, total
        before = self.enthalpy(t, total, 0.0)
        def excess(warmer):
            self.stay(warmer)
            vapour = self.vapour(warmer, p)
            return self.enthalpy(warmer, vapour, total - vapour) - before
        return brentq(excess, t, ZERO, xtol=1e-12, rtol=1e-14), total

    def ascend(self, t, p, pressures):
        """Temperatures at falling pressures, restarted at 0 and -20 degC, where the slope jumps."""
        x, out = math.log(p), []
        left = [math.log(q) for q in pressures]
        while left:
            limit = self.stay(t)
            event = lambda x, y: y[0] - (limit or 0.0)
            event.terminal, event.direction = True, -1
            # Short steps: between its own the method interpolates, and that error is not controlled.
            run = solve_ivp(
                lambda x, y: [self.slope(x, y[0])], (x, left[-1]), [t], method="DOP853", rtol=1e-10, atol=1e-10,
                t_eval=left, events=event, max_step=0.02,
            )
            assert run.success, run.message
            out += [y for y in np.ravel(run.y)]
            left = left[len(run.t):]
            if run.status == 1:
                x, t = run.t_events[0][0], limit
        assert len(out) == len(pressures)
        return out


def table_processes():
    pressures = [50.0, 100.0, 150.0, 200.0, 250.0, 300.0, 400.0, 500.0, 600.0, 700.0, 850.0]
    pressures = [p * 100.0 for p in reversed(pressures)]
    for name, keeps, ice in [
        ("scipy_direct_water", False, False),
        ("scipy_direct_ice", False, True),
        ("scipy_reversible_water", True, False),
        ("scipy_reversible_ice", True, True),
    ]:
        rows = []
        for p0 in (1050e2, 900e2, 750e2, 600e2):
            for start in range(-30, 36, 5):
                first, total = Kept(ice).start(ZERO + start, p0)
                air = Kept(ice, total if keeps else None)
                above = [p for p in pressures if p < p0]
                for p, t in zip(above, air.ascend(first, p0, above)):
                    air.stay(t)
                    vapour = air.vapour(t, p)
                    # Emanuel (1994) eq. 4.3.6 (from memory).
                    density = t * (1 + vapour / EPS) / (1 + (total if keeps else vapour))
                    rows.append((p0, ZERO + start, p, t, density))
        write(
            name,
            [
                ("Reversible" if keeps else "Pseudo-adiabatic")
                + " ascent of air saturated over water at its start, condensing to "
                + ("water above 0 degC, ice below -20 degC, a linear mixture between." if ice else "water."),
                "Enthalpy balance (cpd 1005.7, cpv 1870, cl 4190, ci 2106 J/(kg K); latent heats at 0 degC 2.501e6 and 3.337e5",
                "J/kg; from memory of Emanuel 1994) integrated by DOP853, derivatives of enthalpy by differences.",
                "units: pressures Pa, temperatures K; density temperature "
                + ("with the weight of the condensate" if keeps else "= virtual temperature"),
            ],
            ["scipy"],
            "1e-6 K",
            ["start_pressure_pa", "start_temperature_k", "pressure_pa", "temperature_k", "density_temperature_k"],
            rows,
        )


if __name__ == "__main__":
    table_ascents()
    table_processes()
