//! Whether a start could feed a storm, told from bounds wherever they suffice.
//!
//! Lifting every start would cost hundreds of ascents. Here CAPE and CIN are bounded from both sides on a coarse grid, and
//! only a start whose bounds straddle a limit is lifted.
//!
//! - **Grid.** Cells of at most 0.08 in ln p over the whole profile. Of each: the exact integral of the environment's
//!   virtual temperature, its values at the ends, and its largest departure from the chord between them.
//! - **Paths.** Saturated virtual temperature at the grid's nodes for theta-e on a lattice, solved exactly, with its derivative;
//!   cubic in ln theta-e between. Unsaturated ascent has a closed form.
//! - **Cells** whose ends are further from zero buoyancy than the departures of path and environment from their chords have
//!   one sign; their area is the difference of the two integrals. In the others the chord, moved by the
//!   departures, bounds the positive and the negative area.
//! - **CAPE** lies between the sums of the bounds. **LFC**: a run of cells of certain positive buoyancy with more area than all
//!   other positive area together is part of the largest layer; that begins no higher than the run and no lower than
//!   the last cell of certain negative buoyancy beneath it. Summed up to there, negative areas bound CIN.
//! - **Dominated starts.** Above the LCL virtual temperature depends on theta-e and pressure alone and rises with theta-e, and a
//!   lower LCL only adds to what is counted. So CAPE never falls with theta-e nor with a lower LCL: a start with no
//!   more theta-e and no lower LCL than one that failed on CAPE fails too.
//! - **The top.** Virtual temperature of a parcel falls on its way, and is below that of its dew point from the LCL on. Where
//!   that is below everything the environment has further up, nothing that starts there is ever buoyant.

use super::bounds::{Areas, MARGIN, Sums, Verdict};
use super::grid::{Grid, end};
use super::inflow::{LEAST_CIN, SPACING, qualifies_lifted};
use crate::air::{moist_exponent, quick_ln_theta_e};
use crate::elementary::{exp, ln};
use crate::pseudoadiabat::{first_guess, latent_term, refine};
use crate::saturation::{E0, dln_e_water, exponent, mixing_ratio, virtual_temperature};
use crate::{Air, EPSILON, Environment, GAS_CONSTANT_DRY, KAPPA, REFERENCE_PRESSURE};

/// Spacing of the lattice in ln theta-e.
const LATTICE: f64 = 0.05;
/// ln of the largest theta-e (420 K) that is judged by bounds.
const HOTTEST: f64 = 6.04;

/// Saturated virtual temperature (K) of one theta-e at the nodes, from the bottom up to where nothing of up to the next
/// theta-e of the lattice is buoyant, and its derivative with ln theta-e times the lattice's spacing.
#[derive(Debug)]
struct Row {
    number: i64,
    value: Vec<f64>,
    derivative: Vec<f64>,
}

/// Judges starts of one environment.
pub(super) struct Judge<'e> {
    environment: &'e Environment,
    grid: Grid,
    rows: Vec<Row>,
    /// ln theta-e and z of the LCL of starts that failed on CAPE.
    failed: Vec<(f64, f64)>,
    /// Buoyancy (K) of the path under judgement at the nodes.
    buoyancy: Vec<f64>,
    /// No start above this z is ever buoyant.
    end: f64,
    /// The level last asked for, with its ln theta-e and mixing ratio.
    last_level: Option<(usize, (f64, f64))>,
    /// How many starts had to be lifted.
    #[cfg(test)]
    pub lifted: usize,
}

/// What is needed of a start.
struct Start {
    z: f64,
    tv: f64,
    /// Exponent of the unsaturated ascent.
    exponent: f64,
    z_lcl: f64,
    ln_theta_e: f64,
}

impl Start {
    fn new(air: &Air) -> Self {
        let (p, t, td) = (air.pressure.pa(), air.temperature.k(), air.td());
        let e = E0 * exp(exponent(td));
        let w = EPSILON * e / (p - e);
        let ln_t = ln(t);
        let t_lcl = if td >= t || td <= 56.0 {
            td
        } else {
            1.0 / (1.0 / (td - 56.0) + ln(t / td) * (1.0 / 800.0)) + 56.0
        };
        let rise = ln_t - ln(t_lcl);
        let exponent = moist_exponent(w);
        let z = -ln(p);
        Self {
            z,
            tv: virtual_temperature(t, w),
            exponent,
            z_lcl: z + (rise / exponent).max(0.0),
            ln_theta_e: ln_t
                + KAPPA * ln(REFERENCE_PRESSURE / (p - e))
                + 0.28 * w * rise
                + latent_term(t_lcl, w),
        }
    }
}

impl<'e> Judge<'e> {
    pub fn new(environment: &'e Environment) -> Self {
        let grid = Grid::new(environment);
        let end = end(environment, &grid);
        Self {
            environment,
            grid,
            rows: Vec::new(),
            failed: Vec::new(),
            buoyancy: Vec::new(),
            end,
            last_level: None,
            #[cfg(test)]
            lifted: 0,
        }
    }

    /// Whether nothing that starts at this pressure (Pa) or above can be buoyant.
    pub fn is_over(&self, p: f64) -> bool {
        -ln(p) > self.end
    }

    /// The lowest pressure (Pa) such that everything between it and `p` fails, told from the levels around; `p` itself when
    /// that can't be told.
    ///
    /// Between two levels temperature and dew point are linear in ln p, so that ln theta-e stays below the larger of its
    /// two values but for a term of second order in the changes, and the LCL is above the start.
    pub fn fails_up_to(&mut self, p: f64) -> f64 {
        let (levels, pressures) = (self.environment.levels(), self.environment.pressure());
        let humid = self.environment.humid_levels();
        let mut reached = p;
        let mut above = pressures.partition_point(|&level| level >= p);
        let Some(mut below) = above.checked_sub(1) else {
            return p;
        };
        // Worth it only where levels are farther apart than starts.
        while above < humid && pressures[below] - pressures[above] > 2.0 * SPACING {
            let z = levels.z[below].max(-ln(reached));
            let Some(largest) = self.failed_below(z) else {
                break;
            };
            let (foot, head) = (self.level(below), self.level(above));
            let (Some(foot), Some(head)) = (foot, head) else {
                break;
            };
            let vapour = (exponent(levels.td[above].unwrap_or(0.0))
                - exponent(levels.td[below].unwrap_or(0.0)))
            .abs()
                + (levels.z[above] - levels.z[below]);
            let warmth = (levels.t[above] / levels.t[below] - 1.0).abs()
                + (levels.z[above] - levels.z[below]);
            let latent = 11.0 * foot.1.max(head.1);
            let second_order = 0.5 * (latent * (1.0 + latent) * vapour * vapour + warmth * warmth);
            if foot.0.max(head.0) + second_order > largest {
                break;
            }
            reached = pressures[above];
            (below, above) = (above, above + 1);
        }
        reached
    }

    /// Largest ln theta-e among the failed whose LCL is at or below z.
    fn failed_below(&self, z: f64) -> Option<f64> {
        let below = self.failed.iter().filter(|(_, lcl)| *lcl <= z);
        below.map(|(theta_e, _)| *theta_e).reduce(f64::max)
    }

    /// ln theta-e and mixing ratio of a level.
    fn level(&mut self, level: usize) -> Option<(f64, f64)> {
        if let Some((known, values)) = self.last_level
            && known == level
        {
            return Some(values);
        }
        let levels = self.environment.levels();
        let p = *self.environment.pressure().get(level)?;
        let (t, td) = (levels.t[level], levels.td[level]?);
        let values = (
            quick_ln_theta_e(p, t, td),
            mixing_ratio(p, E0 * exp(exponent(td))),
        );
        self.last_level = Some((level, values));
        Some(values)
    }

    /// Whether this start, air of the environment, qualifies: what lifting it would say.
    pub fn qualifies(&mut self, air: Air) -> bool {
        let start = Start::new(&air);
        let dominated =
            |&(theta_e, lcl): &(f64, f64)| start.ln_theta_e <= theta_e && start.z_lcl >= lcl;
        if self.failed.iter().any(dominated) {
            return false;
        }
        let verdict = self.verdict(&start);
        let (qualifies, fails_on_cape) = match verdict {
            Verdict::Qualifies => (true, false),
            Verdict::FailsOnCin => (false, false),
            Verdict::FailsOnCape => (false, true),
            Verdict::Open => {
                #[cfg(test)]
                {
                    self.lifted += 1;
                }
                qualifies_lifted(self.environment, air)
            }
        };
        if fails_on_cape {
            let lower =
                |&(theta_e, lcl): &(f64, f64)| theta_e <= start.ln_theta_e && lcl >= start.z_lcl;
            self.failed.retain(|other| !lower(other));
            self.failed.push((start.ln_theta_e, start.z_lcl));
        }
        qualifies
    }

    fn verdict(&mut self, start: &Start) -> Verdict {
        let top = self.grid.foot(self.grid.bend.len());
        if !(start.z_lcl < top && start.ln_theta_e.is_finite()) {
            return Verdict::FailsOnCape;
        }
        if start.ln_theta_e > HOTTEST {
            return Verdict::Open;
        }
        let mut sums = Sums::default();
        self.add_unsaturated(start, &mut sums);
        if GAS_CONSTANT_DRY * sums.negative.0 > -LEAST_CIN + MARGIN {
            return Verdict::FailsOnCin;
        }
        let mut sums = sums.above_lcl();
        self.add_saturated(start, &mut sums);
        sums.verdict()
    }

    fn add_unsaturated(&self, start: &Start, sums: &mut Sums) {
        let grid = &self.grid;
        let mut a = start.z;
        let mut cell = grid.cell_at(a);
        let value = |z: f64| start.tv * exp(start.exponent * (start.z - z));
        let mut from = None;
        while a < start.z_lcl {
            let Some((nodes, departure)) = grid.cell(cell) else {
                break;
            };
            let foot = grid.foot(cell);
            let b = (foot + grid.width).min(start.z_lcl);
            let chord = |z: f64| nodes.0 + (nodes.1 - nodes.0) * (z - foot) / grid.width;
            let left = from.unwrap_or_else(|| value(a) - chord(a));
            let right = value(b) - chord(b);
            if b > a {
                let areas = Areas::of_chord(left, right, b - a, departure + grid.bulge);
                sums.add_uncertain(areas);
            }
            (a, from) = (b, Some(right));
            cell += 1;
        }
    }

    fn add_saturated(&mut self, start: &Start, sums: &mut Sums) {
        let first = self.grid.cell_at(start.z_lcl);
        self.fill_buoyancy(start.ln_theta_e, first);
        let grid = &self.grid;
        let Some(departure) = grid.departure.get(first) else {
            return;
        };
        if let [_, foot, head, _, ..] = self.buoyancy[..] {
            let share = (start.z_lcl - grid.foot(first)) / grid.width;
            let share = share.clamp(0.0, 1.0);
            let (foot, width) = (foot + share * (head - foot), (1.0 - share) * grid.width);
            let areas = Areas::of_chord(foot, head, width, departure + grid.bulge);
            sums.add_uncertain(areas);
        }
        let width = grid.width * (1.0 / 24.0);
        // Buoyancy begins one node below the cell of the LCL, and ends one beyond its last cell.
        let cells = grid.departure.iter().zip(&grid.bend).skip(first + 1);
        let nodes = self.buoyancy.get(1..).unwrap_or(&[]);
        for (values, (departure, bend)) in nodes.array_windows::<4>().zip(cells) {
            let &[before, foot, head, after] = values;
            let departure = departure + grid.bulge;
            // Cubic through the four nodes.
            let area = || width * (13.0 * (foot + head) - before - after) - bend;
            if foot > departure && head > departure {
                sums.add_positive(area());
            } else if foot < -departure && head < -departure {
                sums.add_negative(-area());
            } else {
                sums.add_uncertain(Areas::of_chord(foot, head, grid.width, departure));
            }
        }
    }

    /// Buoyancy of saturated air of a theta-e at the nodes from one below the foot of cell `first` to where there can't be
    /// any more, and one beyond.
    fn fill_buoyancy(&mut self, ln_theta_e: f64, first: usize) {
        let number = (ln_theta_e / LATTICE).floor();
        let s = ln_theta_e / LATTICE - number;
        let (low, high) = (self.row(number as i64), self.row(number as i64 + 1));
        self.buoyancy.clear();
        let (Some(low), Some(high)) = (self.rows.get(low), self.rows.get(high)) else {
            return;
        };
        // Cubic in s from values and derivatives at both ends.
        let (s2, s3) = (s * s, s * s * s);
        let (a, b) = (2.0 * s3 - 3.0 * s2 + 1.0, s3 - 2.0 * s2 + s);
        let (c, d) = (3.0 * s2 - 2.0 * s3, s3 - s2);
        let from = first.saturating_sub(1);
        let end = low
            .value
            .len()
            .min(high.value.len())
            .min(self.grid.node.len());
        if from >= end {
            return;
        }
        if first == 0 {
            // The node below the bottom; the cell of the LCL makes no use of it.
            self.buoyancy.push(0.0);
        }
        let node = &self.grid.node[from..end];
        let (v0, v1) = (&low.value[from..end], &high.value[from..end]);
        let (m0, m1) = (&low.derivative[from..end], &high.derivative[from..end]);
        self.buoyancy.extend(
            (0..node.len()).map(|i| a * v0[i] + b * m0[i] + c * v1[i] + d * m1[i] - node[i]),
        );
        // Beyond the end, on the parabola of the path through the last three.
        let path = |buoyancy: &[f64], node: &[f64]| match (buoyancy, node) {
            ([.., a, b, c], [.., p, q, r]) => 3.0 * ((c + r) - (b + q)) + (a + p),
            _ => 0.0,
        };
        let beyond = path(&self.buoyancy, node) - self.grid.beyond(end);
        self.buoyancy.push(beyond);
    }

    /// Place of a row, made when it is not there yet.
    fn row(&mut self, number: i64) -> usize {
        if let Some(place) = self.rows.iter().position(|row| row.number == number) {
            return place;
        }
        let ln_theta_e = number as f64 * LATTICE;
        let count = self.grid.node.len();
        let (mut value, mut derivative) = (Vec::with_capacity(count), Vec::with_capacity(count));
        let mut p = exp(-self.grid.bottom);
        let thinner = exp(-self.grid.width);
        let mut t = first_guess(exp(ln_theta_e), p);
        // Slopes at this node and the two below it.
        let mut slopes = [0.0; 3];
        for node in 0..count {
            let (exact, state) = refine(ln_theta_e, p, t, 0.01);
            let per = 1.0 / (1.0 + state.w);
            let stretch = (1.0 + state.w / EPSILON) * per;
            let tv = exact * stretch;
            // At constant pressure: dTv = stretch dT + T (1/eps - 1) / (1 + w)² dw.
            let w_per_kelvin = state.w * (1.0 + state.w / EPSILON) * dln_e_water(exact);
            let tv_per_kelvin = stretch + exact * (1.0 / EPSILON - 1.0) * per * per * w_per_kelvin;
            value.push(tv);
            derivative.push(LATTICE * tv_per_kelvin / state.per_kelvin);
            let least = self.grid.least_above.get(node).copied();
            if least.is_some_and(|least| tv * (1.0 + 1.1 * LATTICE) < least) {
                break;
            }
            slopes = match node {
                0 => [state.slope; 3],
                1 => [state.slope, slopes[0], 2.0 * slopes[0] - state.slope],
                _ => [state.slope, slopes[0], slopes[1]],
            };
            // Three-step Adams-Bashforth: one Newton step is enough.
            let sum = 23.0 * slopes[0] - 16.0 * slopes[1] + 5.0 * slopes[2];
            t = exact + self.grid.width / 12.0 * sum;
            p *= thinner;
        }
        self.rows.push(Row {
            number,
            value,
            derivative,
        });
        self.rows.len() - 1
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::layers::inflow::LEAST_CAPE;
    use crate::{Method, Pressure, Temperature, lift, temperature_on_pseudoadiabat};

    /// Levels of a warm day with a cap; the dew point of the lowest 150 hPa is the one in question.
    fn environment(dewpoint: f64) -> Environment {
        let p: Vec<f64> = (0..80)
            .map(|i| 100_000.0 * (-0.05 * f64::from(i)).exp())
            .collect();
        let t = |z: f64| match z {
            z if z < 0.15 => 303.0 - 80.0 * z,
            z if z < 0.22 => 291.0 + 20.0 * (z - 0.15),
            z if z < 1.6 => 292.4 - 52.0 * (z - 0.22),
            _ => 220.6,
        };
        let z = |p: f64| (100_000.0 / p).ln();
        let temperature: Vec<f64> = p.iter().map(|p| t(z(*p))).collect();
        let td: Vec<Option<f64>> = p
            .iter()
            .map(|p| {
                let z = z(*p);
                let td = if z < 0.16 {
                    dewpoint - 12.0 * z
                } else {
                    t(z) - 15.0
                };
                Some(td.min(t(z)))
            })
            .collect();
        Environment::new(&p, &temperature, &td).unwrap()
    }

    /// Exact virtual temperature of saturated air of a theta-e.
    fn exactly(ln_theta_e: f64, z: f64) -> f64 {
        let p = Pressure::from_pa((-z).exp());
        let t = temperature_on_pseudoadiabat(Temperature::from_k(ln_theta_e.exp()), p);
        virtual_temperature(t.k(), crate::saturation_mixing_ratio(p, t))
    }

    #[test]
    fn paths_and_their_bulge_are_within_what_is_allowed() {
        let environment = environment(294.0);
        let mut judge = Judge::new(&environment);
        let (mut worst, mut bulge) = (0.0_f64, 0.0_f64);
        for k in 0..200 {
            let ln_theta_e = (270.0 + 0.75 * f64::from(k)).ln();
            judge.fill_buoyancy(ln_theta_e, 1);
            let count = judge.buoyancy.len() - 1;
            for (node, buoyancy) in judge.buoyancy[..count].iter().enumerate() {
                let z = judge.grid.foot(node);
                let path = buoyancy + judge.grid.node[node];
                worst = worst.max((path - exactly(ln_theta_e, z)).abs());
                let head = exactly(ln_theta_e, z + judge.grid.width);
                let middle = exactly(ln_theta_e, z + 0.5 * judge.grid.width);
                bulge = bulge.max((middle - 0.5 * (exactly(ln_theta_e, z) + head)).abs());
            }
        }
        let allowed = judge.grid.bulge;
        println!("paths {worst:e} K, bulge {bulge} K of {allowed} K");
        assert!(worst < 2e-3, "{worst:e} K");
        assert!(bulge < 0.75 * allowed, "{bulge} K");
    }

    /// Verdicts are those of lifting, and few starts need it.
    #[test]
    fn verdicts_are_those_of_lifting() {
        let (mut starts, mut lifted) = (0, 0);
        for dewpoint in 0..60 {
            let environment = environment(284.0 + 0.25 * f64::from(dewpoint));
            let mut judge = Judge::new(&environment);
            for k in 0..150 {
                let p = Pressure::from_pa(100_000.0 - 500.0 * f64::from(k));
                let air = environment.at(p).unwrap();
                let ascent = lift(&environment, air, Method::default()).unwrap();
                let expected =
                    ascent.cape >= LEAST_CAPE && ascent.cin.is_some_and(|cin| cin >= LEAST_CIN);
                assert_eq!(
                    judge.qualifies(air),
                    expected,
                    "{dewpoint} {p:?} {ascent:?}"
                );
                assert!(!expected || !judge.is_over(p.pa()));
                starts += 1;
            }
            lifted += judge.lifted;
        }
        println!("{lifted} of {starts} starts lifted");
        assert!(lifted < starts / 20, "{lifted} of {starts}");
    }
}
