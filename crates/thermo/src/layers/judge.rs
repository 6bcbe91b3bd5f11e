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

use super::inflow::{LEAST_CAPE, LEAST_CIN, SPACING, qualifies_lifted};
use crate::air::{moist_exponent, quick_ln_theta_e};
use crate::elementary::{exp, ln};
use crate::pseudoadiabat::{first_guess, latent_term, refine};
use crate::saturation::{E0, dln_e_water, exponent, mixing_ratio, virtual_temperature};
use crate::{Air, EPSILON, Environment, GAS_CONSTANT_DRY, KAPPA, REFERENCE_PRESSURE};

/// Widest cell in ln p, for profiles of few levels and for those of more than [`FINE`] nodes, where finer cells cost next to
/// nothing and an ascent much.
const CELL: [f64; 2] = [0.08, 0.04];
const FINE: usize = 1_000;
/// Spacing of the lattice in ln theta-e.
const LATTICE: f64 = 0.05;
/// Largest departure (K) of a parcel's virtual temperature from its chord over a cell, over the square of the cell's width:
/// found at most 3.5 for theta-e up to [`HOTTEST`].
const BULGE: f64 = 5.0;
/// ln of the largest theta-e (420 K) that is judged by bounds.
const HOTTEST: f64 = 6.04;
/// Largest departure (K) of the environment from the chord between two nodes of its column.
const NODE_BULGE: f64 = crate::column::MOISTURE_BULGE;
/// Bounds this close (J/kg) to a limit don't decide: errors of the cubics and of [`lift`](crate::lift()).
const MARGIN: f64 = 2.0;

/// The environment on the grid.
#[derive(Debug, Default)]
struct Grid {
    bottom: f64,
    width: f64,
    /// Largest departure of a parcel from its chord, K.
    bulge: f64,
    /// Virtual temperature at the nodes, K: one more than cells.
    node: Vec<f64>,
    /// Of each cell, the integral of virtual temperature over z less what the four-point rule makes of the nodes.
    bend: Vec<f64>,
    /// Largest departure from the chord.
    departure: Vec<f64>,
    /// Least virtual temperature from the foot up.
    least_above: Vec<f64>,
}

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

/// A verdict from bounds.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Verdict {
    Qualifies,
    FailsOnCape,
    FailsOnCin,
    Open,
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

/// Positive and negative area (both >= 0) of a straight line between two values over a width.
#[inline]
fn chord_areas(a: f64, b: f64, width: f64) -> (f64, f64) {
    if a >= 0.0 && b >= 0.0 {
        (0.5 * width * (a + b), 0.0)
    } else if a <= 0.0 && b <= 0.0 {
        (0.0, -0.5 * width * (a + b))
    } else {
        let per = 0.5 * width / (a - b).abs();
        let (up, down) = (a.max(b), a.min(b));
        (per * up * up, per * down * down)
    }
}

/// Bounds of the positive and negative area under a chord that may be off by `departure`.
#[derive(Debug, Clone, Copy, Default)]
struct Areas {
    positive: (f64, f64),
    negative: (f64, f64),
}

impl Areas {
    #[inline]
    fn of_chord(a: f64, b: f64, width: f64, departure: f64) -> Self {
        let (positive_high, negative_low) = chord_areas(a + departure, b + departure, width);
        let (positive_low, negative_high) = chord_areas(a - departure, b - departure, width);
        Self {
            positive: (positive_low, positive_high),
            negative: (negative_low, negative_high),
        }
    }
}

/// Sums on the way up.
#[derive(Debug, Default)]
struct Sums {
    positive: (f64, f64),
    negative: (f64, f64),
    /// Least negative area up to the last cell that is certainly negative.
    negative_sure: f64,
    /// Area of the run of certainly positive cells now open, 0 when none is, and bounds of the negative area beneath it.
    run: f64,
    beneath: (f64, f64),
    /// The run of most area, and the same of it.
    largest: f64,
    beneath_largest: (f64, f64),
}

impl Sums {
    #[inline]
    fn add_positive(&mut self, area: f64) {
        if self.run == 0.0 {
            self.beneath = (self.negative_sure, self.negative.1);
        }
        self.run += area;
        self.positive.0 += area;
        self.positive.1 += area;
        if self.run > self.largest {
            (self.largest, self.beneath_largest) = (self.run, self.beneath);
        }
    }

    #[inline]
    fn add_negative(&mut self, area: f64) {
        self.run = 0.0;
        self.negative.0 += area;
        self.negative.1 += area;
        self.negative_sure = self.negative.0;
    }

    #[inline]
    fn add_uncertain(&mut self, areas: Areas) {
        self.run = 0.0;
        self.positive.0 += areas.positive.0;
        self.positive.1 += areas.positive.1;
        self.negative.0 += areas.negative.0;
        self.negative.1 += areas.negative.1;
    }

    fn verdict(&self) -> Verdict {
        let [low, high] = [self.positive.0, self.positive.1].map(|area| GAS_CONSTANT_DRY * area);
        if high < LEAST_CAPE - MARGIN {
            return Verdict::FailsOnCape;
        }
        let (run, beneath) = (GAS_CONSTANT_DRY * self.largest, self.beneath_largest);
        if low < LEAST_CAPE + MARGIN || 2.0 * run < high + MARGIN {
            return Verdict::Open;
        }
        if GAS_CONSTANT_DRY * beneath.1 < -LEAST_CIN - MARGIN {
            Verdict::Qualifies
        } else if GAS_CONSTANT_DRY * beneath.0 > -LEAST_CIN + MARGIN {
            Verdict::FailsOnCin
        } else {
            Verdict::Open
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
        sums = Sums {
            negative: sums.negative,
            negative_sure: sums.negative.0,
            ..Sums::default()
        };
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

impl Grid {
    fn new(environment: &Environment) -> Self {
        let (bottom, top) = environment.z_range();
        let column = environment.column();
        let widest = CELL[usize::from(column.z.len() > FINE)];
        let count = ((top - bottom) / widest).ceil().clamp(3.0, 1_000.0);
        let width = (top - bottom) / count;
        let count = count as usize;
        let (z, tv, integral) = (&column.z, &column.tv, &column.tv_integral);
        let last = z.len() - 1;
        // Value and integral at a height in the step above node `i`, linear there.
        let at = |i: usize, height: f64| {
            let j = (i + 1).min(last);
            let step = z[j] - z[i];
            if step <= 0.0 {
                return (tv[i], integral[i]);
            }
            let share = ((height - z[i]) / step).clamp(0.0, 1.0);
            let value = tv[i] + share * (tv[j] - tv[i]);
            // What the column has over the chord, in proportion: exact at nodes.
            let over = integral[j] - integral[i] - 0.5 * step * (tv[i] + tv[j]);
            let part = share * (step * 0.5 * (tv[i] + value) + over);
            (value, integral[i] + part)
        };
        let mut grid = Self {
            bottom,
            width,
            bulge: BULGE * width * width,
            node: Vec::with_capacity(count + 1),
            bend: Vec::with_capacity(count),
            departure: Vec::with_capacity(count),
            least_above: Vec::with_capacity(count),
        };
        // Column's node at or below the foot.
        let mut node = 0;
        let (mut foot, mut before) = at(0, bottom);
        grid.node.push(foot);
        for k in 0..count {
            let (za, zb) = (bottom + k as f64 * width, bottom + (k + 1) as f64 * width);
            let first = node;
            while node < last && z[node + 1] <= zb {
                node += 1;
            }
            let (head, after) = if k + 1 == count {
                (tv[last], integral[last])
            } else {
                at(node, zb)
            };
            let slope = (head - foot) / width;
            let (mut departure, mut least) = (0.0_f64, foot.min(head));
            for (z, tv) in z[first..=node].iter().zip(&tv[first..=node]) {
                if *z >= za {
                    departure = departure.max((tv - foot - slope * (z - za)).abs());
                    least = least.min(*tv);
                }
            }
            grid.node.push(head);
            grid.bend.push(after - before);
            grid.departure.push(departure + NODE_BULGE);
            grid.least_above.push(least);
            (foot, before) = (head, after);
        }
        let mut least = f64::INFINITY;
        for above in grid.least_above.iter_mut().rev() {
            least = least.min(*above);
            // Between nodes it may be a little less.
            *above = least - NODE_BULGE;
        }
        for k in 0..count {
            let before = if k == 0 {
                grid.before()
            } else {
                grid.node[k - 1]
            };
            let after = grid.beyond(k + 2);
            grid.bend[k] -=
                width / 24.0 * (13.0 * (grid.node[k] + grid.node[k + 1]) - before - after);
        }
        grid
    }

    /// Virtual temperature at a node, or one past the last: there on the parabola through the last three.
    fn beyond(&self, node: usize) -> f64 {
        match (self.node.get(node), &self.node[..]) {
            (Some(value), _) => *value,
            (None, [.., a, b, c]) => 3.0 * (c - b) + a,
            (None, _) => 0.0,
        }
    }

    /// One before the first.
    fn before(&self) -> f64 {
        match &self.node[..] {
            [a, b, c, ..] => 3.0 * (a - b) + c,
            _ => 0.0,
        }
    }

    /// The cell that holds z.
    fn cell_at(&self, z: f64) -> usize {
        (((z - self.bottom) / self.width) as usize).min(self.bend.len() - 1)
    }

    fn foot(&self, cell: usize) -> f64 {
        self.bottom + cell as f64 * self.width
    }

    /// Values at foot and head, and the departure from the chord between them.
    fn cell(&self, cell: usize) -> Option<((f64, f64), f64)> {
        let departure = *self.departure.get(cell)?;
        Some((
            (*self.node.get(cell)?, *self.node.get(cell + 1)?),
            departure,
        ))
    }
}

/// z above which no start is ever buoyant.
fn end(environment: &Environment, grid: &Grid) -> f64 {
    let (levels, p) = (environment.levels(), environment.pressure());
    let humid = environment.humid_levels();
    let mut end = levels.z[humid - 1];
    for i in (0..humid - 1).rev() {
        let least = grid.least_above[grid.cell_at(levels.z[i])];
        let td = levels.td[i]
            .unwrap_or(0.0)
            .max(levels.td[i + 1].unwrap_or(0.0));
        // Vapour that little adds less than 1 % to temperature.
        let little = (td < 240.0 && p[i + 1] > 5_000.0) || (td < 220.0 && p[i + 1] > 500.0);
        if !(little && td * 1.01 < least) {
            break;
        }
        end = levels.z[i];
    }
    end
}
#[cfg(test)]
mod tests {
    use super::*;
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
