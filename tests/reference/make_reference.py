"""Makes the reference tables beside this file.

    python -m pip install -r requirements.txt
    python make_reference.py

Nothing here is taken from the Rust code: formulas are written from their publications, integrals and roots are
SciPy's. Every table says in its header what it holds, in which units, how accurate it claims to be (`tolerance`,
what the tests hold the Rust code to) and where it comes from.
"""

import math
from importlib.metadata import version
from pathlib import Path

import numpy as np
from CoolProp.CoolProp import PropsSI
from earthkit.meteo.thermo import array as earthkit
from iapws._iapws import _Sublimation_Pressure, _Supercooled
from scipy.integrate import quad, solve_ivp
from scipy.optimize import brentq

HERE = Path(__file__).parent
DATE = "2026-12-01"

RD, RV, G, ZERO = 287.05, 461.52, 9.80665, 273.15
EPS = RD / RV
KAPPA = 0.2854


def write(name, about, provenance, tolerance, columns, rows):
    rows = list(rows)
    assert rows, name
    with open(HERE / f"{name}.csv", "w", newline="\n") as out:
        for line in about:
            out.write(f"# {line}\n")
        out.write(f"# tolerance: {tolerance}\n")
        packages = ", ".join(f"{p} {version(p)}" for p in provenance)
        out.write(f"# made by make_reference.py on {DATE} with {packages}\n")
        out.write(",".join(columns) + "\n")
        for row in rows:
            assert len(row) == len(columns) and all(math.isfinite(v) for v in row), (name, row)
            out.write(",".join(f"{v:.12g}" for v in row) + "\n")
    print(f"{name}.csv: {len(rows)} rows")


# ---- saturation -----------------------------------------------------------------------------------------------------


def supercooled_pressures(celsius):
    """Vapour pressure over supercooled water, Pa, for falling temperatures below 0 degC.

    Clausius-Clapeyron from the triple point (611.657 Pa at 273.16 K): latent heat = enthalpy of vapour minus enthalpy of
    liquid (IAPWS G12-15, supercooled water; its zero is the triple point, as in IAPWS-95). Vapour: saturated enthalpy
    2500.915 kJ/kg at the triple point (IAPWS-95) and an ideal gas of 1.861 kJ/(kg K) below it, so thin is it there;
    its compressibility is taken as 1 - 5.8e-4 (e / 611 Pa), IAPWS-95's at the triple point scaled with pressure.
    """
    triple = 273.16
    rv = 461.51805

    def latent(t, e):
        liquid = _Supercooled(t, max(e, 1.0) * 1e-6)["h"] * 1e3
        vapour = 2500.915e3 + 1861.0 * (t - triple)
        return vapour - liquid

    def slope(t, y):
        e = math.exp(y[0])
        return [latent(t, e) / (rv * t * t * (1 - 5.8e-4 * e / 611.657))]

    out = solve_ivp(
        slope,
        (triple, ZERO + min(celsius)),
        [math.log(611.657)],
        t_eval=[ZERO + c for c in celsius],
        rtol=1e-10,
        atol=1e-12,
    )
    return np.exp(out.y[0])


def murphy_koop(t):
    """Murphy & Koop (2005), QJRMS 131, eq. 10, Pa (coefficients from memory): a second opinion below 0 degC."""
    return math.exp(
        54.842763 - 6763.22 / t - 4.210 * math.log(t) + 0.000367 * t
        + math.tanh(0.0415 * (t - 218.8)) * (53.878 - 1331.22 / t - 9.44523 * math.log(t) + 0.014025 * t)
    )


def saturation():
    below = [c / 2 for c in range(-1, -71, -1)]
    above = [0.01] + [c / 2 for c in range(1, 71)]
    rows = list(zip(below, supercooled_pressures(below)))
    worst = max(abs(e / murphy_koop(ZERO + c) - 1) for c, e in rows)
    # At -35 degC the two differ by the latent heat of supercooled water, which was revised in between.
    assert worst < 4e-3, worst
    print(f"   supercooled: within {worst:.1e} of Murphy & Koop")
    rows += [(c, PropsSI("P", "T", ZERO + c, "Q", 1, "Water")) for c in above]
    write(
        "iapws_water",
        [
            "Saturation vapour pressure over water, pure phase.",
            "0.01 degC and above: IAPWS-95. Below: Clausius-Clapeyron from the triple point with the enthalpy of supercooled",
            f"water, IAPWS G12-15; within {worst:.0e} of Murphy & Koop (2005).",
            "units: temperature degC, vapour pressure Pa",
        ],
        ["CoolProp", "iapws", "scipy"],
        "0.003 relative (stated by Bolton 1980 for -35..35 degC)",
        ["temperature_c", "vapour_pressure_pa"],
        sorted(rows),
    )
    write(
        "iapws_ice",
        [
            "Sublimation pressure of ice, IAPWS R14-08, pure phase.",
            "units: temperature degC, vapour pressure Pa",
        ],
        ["iapws"],
        "0.01 relative (Sonntag on the formula over ice in WMO-No. 8, -65..0 degC; from memory)",
        ["temperature_c", "vapour_pressure_pa"],
        [(c, _Sublimation_Pressure(ZERO + c) * 1e6) for c in range(-65, 1)],
    )


# ---- formulas by another hand -----------------------------------------------------------------------------------------


def table_earthkit():
    rows = []
    for p in (1000e2, 950e2, 850e2, 700e2):
        for t in range(-20, 41, 5):
            for depression in (0.0, 1.0, 3.0, 8.0, 15.0, 30.0):
                tk = ZERO + t
                td = tk - depression
                a = np.array
                t_lcl = earthkit.lcl_temperature(a([tk]), a([td]), method="bolton")[0]
                theta_e = earthkit.ept_from_dewpoint(a([tk]), a([td]), a([p]), method="bolton39")[0]
                if theta_e <= 420:
                    rows.append((p, tk, td, t_lcl, theta_e))
    write(
        "earthkit_bolton",
        [
            "LCL temperature (Bolton 1980 eq. 15) and equivalent potential temperature (eq. 39) as coded in earthkit-meteo.",
            "Its saturation vapour pressure (611.21 Pa, 17.502, 32.19 K) and kappa (0.285691) differ from Bolton's by up to",
            "0.2 % (0..40 degC) and 0.1 %: 420 K ln(420/300) 0.002 = 0.29 K and 300 K ln(1000/700) 0.00029 = 0.03 K.",
            "Up to theta-e 420 K, which real air doesn't exceed by much.",
            "units: pressure Pa, temperatures K",
        ],
        ["earthkit-meteo"],
        "LCL temperature 1e-8 K; theta-e 0.32 K",
        ["pressure_pa", "temperature_k", "dewpoint_k", "lcl_temperature_k", "theta_e_k"],
        rows,
    )
    rows = []
    for theta_e in range(270, 391, 10):
        for p in range(100, 1051, 50):
            t = earthkit.temperature_on_moist_adiabat(
                np.array([float(theta_e)]), np.array([p * 100.0]), ept_method="bolton39", t_method="newton"
            )[0]
            # Colder than this its saturation is over a mixture of water and ice.
            if t >= 273.16:
                rows.append((theta_e, p * 100.0, t))
    write(
        "earthkit_pseudoadiabat",
        [
            "Temperature on the saturated pseudo-adiabat of Bolton's eq. 39, by Davies-Jones' (2008) one-step inversion in",
            "earthkit-meteo, above 0 degC (below, its saturation is over a mixture of water and ice). Its vapour, up to 0.2 %",
            "off Bolton's, gives 390 K ln(390/310) 0.002 = 0.18 K in theta-e, less than half of it in temperature.",
            "units: theta-e K, pressure Pa, temperature K",
        ],
        ["earthkit-meteo"],
        "0.1 K",
        ["theta_e_k", "pressure_pa", "temperature_k"],
        rows,
    )


# ---- the project's conventions, written again -------------------------------------------------------------------------


def e_sat(t):
    c = t - ZERO
    return 611.2 * math.exp(17.67 * c / (c + 243.5))


def w_of(e, p):
    return EPS * e / (p - e)


def tv_of(t, w):
    return t * (1 + w / EPS) / (1 + w)


def t_lcl(t, td):
    return 1 / (1 / (td - 56) + math.log(t / td) / 800) + 56


def theta_e_39(p, t, td):
    e = e_sat(td)
    w = w_of(e, p)
    tl = t_lcl(t, td)
    dry = t * (1e5 / (p - e)) ** KAPPA * (t / tl) ** (0.28 * w)
    return dry * math.exp((3036 / tl - 1.78) * w * (1 + 0.448 * w))


def pseudo_t(theta_e, p):
    """Brent's root of eq. 39 for saturated air."""
    def f(t):
        e = e_sat(t)
        w = w_of(e, p)
        return t * (1e5 / (p - e)) ** KAPPA * math.exp((3036 / t - 1.78) * w * (1 + 0.448 * w)) - theta_e

    # Between air too cold to hold any vapour and the dry adiabat, or where vapour would fill half the pressure.
    high = theta_e * (p / 1e5) ** KAPPA
    if e_sat(high) > 0.5 * p:
        high = brentq(lambda t: e_sat(t) - 0.5 * p, 150, 373)
    return brentq(f, 31, high + 1e-9, xtol=1e-12, rtol=1e-14)


def table_pseudoadiabat():
    write(
        "scipy_pseudoadiabat",
        [
            "Temperature on the saturated pseudo-adiabat of Bolton's (1980) eq. 39 with his eq. 10: Brent's root.",
            "units: theta-e K, pressure Pa, temperature K",
        ],
        ["scipy"],
        "1e-8 K",
        ["theta_e_k", "pressure_pa", "temperature_k"],
        [
            (theta_e, p * 100.0, pseudo_t(theta_e, p * 100.0))
            for theta_e in range(250, 421, 10)
            for p in [5, 10, 20, 30, 50, 70] + list(range(100, 1051, 50))
        ],
    )


def table_lapse_rate():
    """The pseudo-adiabatic lapse rate integrated directly: the same physics without eq. 39."""
    cpd, cpv = 1005.7, 1870.0

    def slope(x, y):
        t, p = y[0], math.exp(x)
        w = w_of(e_sat(t), p)
        lv = 2.501e6 - 2370.0 * (t - ZERO)
        gamma = G * (1 + w) * (1 + lv * w / (RD * t)) / (cpd + w * cpv + lv * lv * w * (EPS + w) / (RD * t * t))
        return [gamma * RD * tv_of(t, w) / G]

    rows = []
    for start in range(-10, 31, 5):
        pressures = [p * 100.0 for p in range(950, 199, -50)]
        out = solve_ivp(
            slope, (math.log(1e5), math.log(200e2)), [ZERO + start], t_eval=[math.log(p) for p in pressures],
            rtol=1e-10, atol=1e-10,
        )
        rows += [(ZERO + start, p, t) for p, t in zip(pressures, out.y[0])]
    write(
        "scipy_lapse_rate",
        [
            "Pseudo-adiabatic lapse rate (as in the AMS Glossary of Meteorology, from memory; cpd 1005.7, cpv 1870 J/(kg K),",
            "L = 2.501e6 - 2370 t J/kg) integrated from saturated air at 1000 hPa. Independent of eq. 39.",
            "units: start temperature K, pressure Pa, temperature K",
        ],
        ["scipy"],
        "0.2 K (error of eq. 39 against exact integration: Davies-Jones 2008)",
        ["start_temperature_k", "pressure_pa", "temperature_k"],
        rows,
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


def table_ascents():
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


# ---- CAPE of the Weisman & Klemp profile ---------------------------------------------------------------------------------


class WeismanKlemp:
    """Weisman & Klemp (1982), MWR 110, eq. 1-2: potential temperature and relative humidity against height; mixing
    ratio capped at qv0 near the ground. Surface pressure 1000 hPa (our choice); hydrostatic with virtual temperature.
    """

    z_tr, theta_tr, t_tr, theta_0 = 12000.0, 343.0, 213.0, 300.0
    cp = RD / KAPPA
    top = 20000.0

    def __init__(self, qv0):
        self.qv0 = qv0
        out = solve_ivp(
            lambda z, y: [-G / (RD * self.tv(z, math.exp(y[0])))], (0.0, self.top), [math.log(1e5)],
            rtol=1e-11, atol=1e-12, max_step=20.0, dense_output=True,
        )
        self.ln_p = lambda z: float(out.sol(z)[0])

    def theta(self, z):
        if z <= self.z_tr:
            return self.theta_0 + (self.theta_tr - self.theta_0) * (z / self.z_tr) ** 1.25
        return self.theta_tr * math.exp(G / (self.cp * self.t_tr) * (z - self.z_tr))

    def t(self, z, p):
        return self.theta(z) * (p / 1e5) ** KAPPA

    def w(self, z, p):
        rh = 1 - 0.75 * (z / self.z_tr) ** 1.25 if z <= self.z_tr else 0.25
        return min(self.qv0, rh * w_of(e_sat(self.t(z, p)), p))

    def tv(self, z, p):
        return tv_of(self.t(z, p), self.w(z, p))

    def td(self, z, p):
        w = self.w(z, p)
        y = math.log(p * w / (EPS + w) / 611.2)
        return ZERO + 243.5 * y / (17.67 - y)

    def ascent(self):
        """CAPE, CIN, LCL, LFC, EL of the surface parcel, by the conventions of the project."""
        p0 = 1e5
        t0, td0 = self.t(0, p0), self.td(0, p0)
        w0 = w_of(e_sat(td0), p0)
        tl = t_lcl(t0, td0)
        k = KAPPA * (1 - 0.28 * w0)
        p_lcl = p0 * (tl / t0) ** (1 / k)
        theta_e = theta_e_39(p0, t0, td0)
        z_lcl = brentq(lambda z: self.ln_p(z) - math.log(p_lcl), 0, self.top)

        def buoyancy(z, moist):
            p = math.exp(self.ln_p(z))
            if moist:
                t = pseudo_t(theta_e, p)
                parcel = tv_of(t, w_of(e_sat(t), p))
            else:
                parcel = tv_of(t0 * (p / p0) ** k, w0)
            return parcel - self.tv(z, p)

        def area(a, b, moist):
            # Rd (Tv' - Tv) d(-ln p) = g (Tv' - Tv) / Tv dz.
            f = lambda z: G * buoyancy(z, moist) / self.tv(z, math.exp(self.ln_p(z)))
            edges = [a] + [z for z in (self.z_tr,) if a < z < b] + [b]
            return sum(quad(f, u, v, epsabs=1e-4, epsrel=1e-7, limit=200)[0] for u, v in zip(edges, edges[1:]))

        def pieces(a, b, moist):
            grid = np.linspace(a, b, 400)
            values = [buoyancy(z, moist) for z in grid]
            cuts = [a]
            for u, v, fu, fv in zip(grid, grid[1:], values, values[1:]):
                if fu * fv < 0:
                    cuts.append(brentq(lambda z: buoyancy(z, moist), u, v, xtol=1e-9))
            cuts.append(b)
            return [(u, v, area(u, v, moist)) for u, v in zip(cuts, cuts[1:])]

        below = pieces(0.0, z_lcl, False)
        above = pieces(z_lcl, self.top, True)
        positive = [piece for piece in above if piece[2] > 0]
        lfc = max(positive, key=lambda piece: piece[2])[0]
        el = positive[-1][1]
        cin = sum(a for u, v, a in below + above if a < 0 and v <= lfc + 1e-6)
        p = lambda z: math.exp(self.ln_p(z))
        return sum(a for _, _, a in positive), cin, p_lcl, p(lfc), p(el)


def table_weisman_klemp():
    profile, results = [], []
    for qv0 in range(11, 17):
        wk = WeismanKlemp(qv0 / 1000)
        for z in range(0, 20001, 100):
            p = math.exp(wk.ln_p(z))
            profile.append((qv0, p, wk.t(z, p), wk.td(z, p)))
        results.append((qv0, *wk.ascent()))
    about = "Weisman & Klemp (1982, MWR 110) analytic profile, qv0 = 11..16 g/kg, surface pressure 1000 hPa"
    write(
        "weisman_klemp_profile",
        [about + ": levels every 100 m.", "units: qv0 g/kg, pressure Pa, temperatures K"],
        ["scipy"],
        "input of weisman_klemp.csv, no check of its own",
        ["qv0_gkg", "pressure_pa", "temperature_k", "dewpoint_k"],
        profile,
    )
    write(
        "weisman_klemp",
        [
            about + ".",
            "Surface parcel, virtual temperature on both sides, pseudo-adiabat of constant eq. 39 theta-e; integrated over the",
            "analytic profile (not its levels) with quad between roots of brentq.",
            "units: qv0 g/kg, CAPE and CIN J/kg, pressures Pa",
        ],
        ["scipy"],
        "0.005 relative for CAPE and CIN; 0.5 hPa for pressures",
        ["qv0_gkg", "cape_jkg", "cin_jkg", "lcl_pa", "lfc_pa", "el_pa"],
        results,
    )


# ---- heights --------------------------------------------------------------------------------------------------------------


def table_standard_atmosphere():
    """US Standard Atmosphere 1976 from its defining constants, checked against pressures printed in its tables."""
    gas, layers = 8314.32 / 28.9644, [
        (0.0, -6.5e-3), (11000.0, 0.0), (20000.0, 1.0e-3), (32000.0, 2.8e-3), (47000.0, 0.0),
    ]
    rows, t, p = [], 288.15, 101325.0
    for (base, lapse), (top, _) in zip(layers, layers[1:]):
        h = base
        while h < top:
            dh = h - base
            if lapse:
                ti = t + lapse * dh
                pi = p * (t / ti) ** (G / (gas * lapse))
            else:
                ti, pi = t, p * math.exp(-G * dh / (gas * t))
            rows.append((h, ti, pi))
            h += 250.0
        dh = top - base
        p = p * (t / (t + lapse * dh)) ** (G / (gas * lapse)) if lapse else p * math.exp(-G * dh / (gas * t))
        t += lapse * dh
    rows.append((47000.0, t, p))
    # Printed in the standard's table of layer bases (from memory), hPa.
    for h, printed in ((11000, 226.32), (20000, 54.749), (32000, 8.6802), (47000, 1.1091)):
        got = next(row[2] for row in rows if row[0] == h) / 100
        assert abs(got / printed - 1) < 5e-5, (h, got, printed)
    write(
        "standard_atmosphere_1976",
        [
            "US Standard Atmosphere 1976, from its defining constants (R* 8314.32, M 28.9644, g 9.80665); pressures of the layer",
            "bases agree with the printed ones (from memory) to five figures.",
            "units: geopotential height m, temperature K, pressure Pa",
        ],
        ["numpy"],
        "1 m or 5e-5 of the height (levels 250 m apart, virtual temperature taken linear in ln p)",
        ["height_m", "temperature_k", "pressure_pa"],
        rows,
    )


if __name__ == "__main__":
    saturation()
    table_earthkit()
    table_pseudoadiabat()
    table_lapse_rate()
    table_ascents()
    table_weisman_klemp()
    table_standard_atmosphere()
