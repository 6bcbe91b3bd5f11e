//! Whether a start could feed a storm, told from bounds wherever they suffice.
//!
//! Lifting every start would cost hundreds of ascents. Here CAPE and CIN are bounded from both sides on a coarse grid, and
//! only a start whose bounds straddle a limit is lifted.
//!
//! - **Grid.** Cells of at most 0.05 in ln p over the whole profile. Of each: the exact integral of the environment's
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

use super::inflow::{LEAST_CAPE, LEAST_CIN, qualifies_lifted};
use crate::air::moist_exponent;
use crate::elementary::{exp, ln};
use crate::pseudoadiabat::{first_guess, latent_term, refine};
use crate::saturation::{E0, dln_e_water, exponent, virtual_temperature};
use crate::{Air, EPSILON, Environment, GAS_CONSTANT_DRY, KAPPA, REFERENCE_PRESSURE};

/// Widest cell in ln p.
const CELL: f64 = 0.05;
/// Spacing of the lattice in ln theta-e.
const LATTICE: f64 = 0.03;
/// Largest departure (K) of a parcel's virtual temperature from its chord over a cell.
const BULGE: f64 = 0.06;
/// Largest departure (K) of the environment from the chord between two nodes of its column.
const NODE_BULGE: f64 = crate::column::MOISTURE_BULGE;
/// Bounds this close (J/kg) to a limit don't decide: errors of the cubics and of [`lift`](crate::lift()).
const MARGIN: f64 = 2.0;

/// The environment in one cell and at its foot.
#[derive(Debug, Clone, Copy, Default)]
struct Cell {
    /// Virtual temperature at the foot, K.
    foot: f64,
    /// At the head.
    head: f64,
    /// Integral over z.
    integral: f64,
    /// Largest departure from the chord.
    departure: f64,
    /// Least virtual temperature from the foot up.
    least_above: f64,
}

/// Saturated virtual temperature (K) of one theta-e at the nodes, from the bottom up to where nothing of up to the next
/// theta-e of the lattice is buoyant, and its derivative with ln theta-e times the lattice's spacing.
#[derive(Debug)]
struct Row {
    number: i64,
    nodes: Vec<(f64, f64)>,
}

/// Judges starts of one environment.
pub(super) struct Judge<'e> {
    environment: &'e Environment,
    bottom: f64,
    width: f64,
    cells: Vec<Cell>,
    rows: Vec<Row>,
    /// ln theta-e and z of the LCL of starts that failed on CAPE.
    failed: Vec<(f64, f64)>,
    /// Values of the path under judgement.
    path: Vec<f64>,
    /// No start above this z is ever buoyant.
    end: f64,
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
    /// Area of the run of certainly positive cells now open, and bounds of the negative area beneath it.
    run: Option<(f64, (f64, f64))>,
    /// The run of most area.
    largest: (f64, (f64, f64)),
}

impl Sums {
    /// Adds a cell; `sign` when it is certain.
    #[inline]
    fn add(&mut self, areas: Areas, sign: Option<bool>) {
        if sign == Some(true) {
            let beneath = (self.negative_sure, self.negative.1);
            let (area, beneath) = self.run.unwrap_or((0.0, beneath));
            let run = (area + areas.positive.0, beneath);
            if run.0 > self.largest.0 {
                self.largest = run;
            }
            self.run = Some(run);
        } else {
            self.run = None;
        }
        self.positive.0 += areas.positive.0;
        self.positive.1 += areas.positive.1;
        self.negative.0 += areas.negative.0;
        self.negative.1 += areas.negative.1;
        if sign == Some(false) {
            self.negative_sure = self.negative.0;
        }
    }

    fn verdict(&self) -> Verdict {
        let [low, high] = [self.positive.0, self.positive.1].map(|area| GAS_CONSTANT_DRY * area);
        if high < LEAST_CAPE - MARGIN {
            return Verdict::FailsOnCape;
        }
        let (run, beneath) = self.largest;
        let run = GAS_CONSTANT_DRY * run;
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
        let (bottom, top) = environment.z_range();
        let count = ((top - bottom) / CELL).ceil().clamp(1.0, 1_000.0);
        let width = (top - bottom) / count;
        let cells = cells(environment, bottom, width, count as usize);
        let end = end(environment, &cells, bottom, width);
        Self {
            environment,
            bottom,
            width,
            cells,
            rows: Vec::new(),
            failed: Vec::new(),
            path: Vec::new(),
            end,
            #[cfg(test)]
            lifted: 0,
        }
    }

    /// The cell that holds z.
    fn cell_at(&self, z: f64) -> usize {
        (((z - self.bottom) / self.width) as usize).min(self.cells.len() - 1)
    }

    fn foot(&self, cell: usize) -> f64 {
        self.bottom + cell as f64 * self.width
    }

    /// Whether nothing that starts at this pressure (Pa) or above can be buoyant.
    pub fn is_over(&self, p: f64) -> bool {
        -ln(p) > self.end
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
        let top = self.foot(self.cells.len());
        if !(start.z_lcl < top && start.ln_theta_e.is_finite()) {
            return Verdict::FailsOnCape;
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
        let mut a = start.z;
        let mut buoyant_a = None;
        let mut cell = self.cell_at(a);
        let value = |z: f64| start.tv * exp(start.exponent * (start.z - z));
        while a < start.z_lcl {
            let Some(here) = self.cells.get(cell) else {
                break;
            };
            let (foot, head) = (self.foot(cell), self.foot(cell + 1));
            let b = head.min(start.z_lcl);
            let chord = |z: f64| here.foot + (here.head - here.foot) * (z - foot) / self.width;
            let from = buoyant_a.unwrap_or_else(|| value(a) - chord(a));
            let to = value(b) - chord(b);
            if b > a {
                let departure = here.departure + BULGE;
                sums.add(Areas::of_chord(from, to, b - a, departure), None);
            }
            buoyant_a = Some(to);
            a = b;
            if b < head {
                break;
            }
            cell += 1;
        }
    }

    fn add_saturated(&mut self, start: &Start, sums: &mut Sums) {
        let first = self.cell_at(start.z_lcl);
        self.fill_path(start.ln_theta_e, first);
        let path = &self.path;
        // The path begins one node below the cell of the LCL, and holds one beyond its last cell.
        for (k, values) in path.windows(4).enumerate() {
            let &[before, foot, head, after] = values else {
                continue;
            };
            let cell = first + k;
            let Some(here) = self.cells.get(cell) else {
                break;
            };
            let (mut a, mut b) = (foot - here.foot, head - here.head);
            let departure = here.departure + BULGE;
            if k == 0 {
                let share = ((start.z_lcl - self.foot(cell)) / self.width).clamp(0.0, 1.0);
                a += share * (b - a);
                let width = (1.0 - share) * self.width;
                let areas = Areas::of_chord(a, b, width, departure);
                let sign =
                    (a.abs().min(b.abs()) > departure && (a > 0.0) == (b > 0.0)).then_some(a > 0.0);
                sums.add(areas, sign);
                continue;
            }
            if a.abs().min(b.abs()) > departure && (a > 0.0) == (b > 0.0) {
                // Cubic through the four nodes.
                let integral = self.width / 24.0 * (13.0 * (foot + head) - before - after);
                let area = integral - here.integral;
                let (up, down) = (area.max(0.0), (-area).max(0.0));
                let areas = Areas {
                    positive: (up, up),
                    negative: (down, down),
                };
                sums.add(areas, Some(a > 0.0));
            } else {
                let extra = departure;
                (a, b) = (a, b);
                sums.add(Areas::of_chord(a, b, self.width, extra), None);
            }
        }
    }

    /// Virtual temperature of saturated air of a theta-e at the nodes from one below the foot of cell `first` to where it
    /// can't be buoyant any more, and one beyond.
    fn fill_path(&mut self, ln_theta_e: f64, first: usize) {
        let number = (ln_theta_e / LATTICE).floor();
        let s = ln_theta_e / LATTICE - number;
        let (low, high) = (self.row(number as i64), self.row(number as i64 + 1));
        self.path.clear();
        let (Some(low), Some(high)) = (self.rows.get(low), self.rows.get(high)) else {
            return;
        };
        // Cubic in s from values and derivatives at both ends.
        let (s2, s3) = (s * s, s * s * s);
        let weights = (
            2.0 * s3 - 3.0 * s2 + 1.0,
            s3 - 2.0 * s2 + s,
            3.0 * s2 - 2.0 * s3,
            s3 - s2,
        );
        let value = |(&(v0, m0), &(v1, m1)): (&(f64, f64), &(f64, f64))| {
            weights.0 * v0 + weights.1 * m0 + weights.2 * v1 + weights.3 * m1
        };
        let nodes = low.nodes.iter().zip(&high.nodes);
        if first == 0 {
            // Room for the node below the bottom.
            self.path.push(0.0);
            self.path.extend(nodes.map(value));
            if let [_, a, b, c, ..] = self.path[..] {
                self.path[0] = 3.0 * (a - b) + c;
            }
        } else {
            self.path.extend(nodes.skip(first - 1).map(value));
        }
        // One more beyond the end.
        if let [.., a, b, c] = self.path[..] {
            self.path.push(3.0 * (c - b) + a);
        }
    }

    /// Place of a row, made when it is not there yet.
    fn row(&mut self, number: i64) -> usize {
        if let Some(place) = self.rows.iter().position(|row| row.number == number) {
            return place;
        }
        let ln_theta_e = number as f64 * LATTICE;
        let mut nodes = Vec::with_capacity(48);
        let mut p = exp(-self.bottom);
        let thinner = exp(-self.width);
        let mut t = first_guess(exp(ln_theta_e), p);
        let mut slopes: Option<(f64, f64)> = None;
        for node in 0..=self.cells.len() {
            let (exact, state) = refine(ln_theta_e, p, t, 0.01);
            let per = 1.0 / (1.0 + state.w);
            let stretch = (1.0 + state.w / EPSILON) * per;
            let tv = exact * stretch;
            // At constant pressure: dTv = stretch dT + T (1/eps - 1) / (1 + w)² dw.
            let w_per_kelvin = state.w * (1.0 + state.w / EPSILON) * dln_e_water(exact);
            let tv_per_kelvin = stretch + exact * (1.0 / EPSILON - 1.0) * per * per * w_per_kelvin;
            nodes.push((tv, LATTICE * tv_per_kelvin / state.per_kelvin));
            let least = self
                .cells
                .get(node)
                .map_or(f64::INFINITY, |cell| cell.least_above);
            if tv * (1.0 + 1.1 * LATTICE) < least {
                break;
            }
            let (now, before) = (state.slope, slopes.map_or(state.slope, |(now, _)| now));
            slopes = Some((now, before));
            t = exact + self.width * (1.5 * now - 0.5 * before);
            p *= thinner;
        }
        self.rows.push(Row { number, nodes });
        self.rows.len() - 1
    }
}

/// The environment on the grid.
fn cells(environment: &Environment, bottom: f64, width: f64, count: usize) -> Vec<Cell> {
    let column = environment.column();
    let (z, tv, integral) = (&column.z, &column.tv, &column.tv_integral);
    let mut cells = vec![Cell::default(); count];
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
        // The end's own integral where that is nearer: exact at nodes.
        let part = share * step * 0.5 * (tv[i] + value);
        let chord = 0.5 * step * (tv[i] + tv[j]);
        (
            value,
            integral[i] + part + share * (integral[j] - integral[i] - chord),
        )
    };
    // Node at or below the foot.
    let mut node = 0;
    let (mut foot, mut before) = at(0, bottom);
    for (k, cell) in cells.iter_mut().enumerate() {
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
        let mut departure = 0.0_f64;
        let mut least = foot.min(head);
        for (z, tv) in z[first..=node].iter().zip(&tv[first..=node]) {
            if *z >= za {
                departure = departure.max((tv - foot - slope * (z - za)).abs());
                least = least.min(*tv);
            }
        }
        *cell = Cell {
            foot,
            head,
            integral: after - before,
            departure: departure + NODE_BULGE,
            least_above: least,
        };
        (foot, before) = (head, after);
    }
    let mut least = f64::INFINITY;
    for cell in cells.iter_mut().rev() {
        least = least.min(cell.least_above);
        // Between nodes it may be a little less.
        cell.least_above = least - NODE_BULGE;
    }
    cells
}

/// z above which no start is ever buoyant.
fn end(environment: &Environment, cells: &[Cell], bottom: f64, width: f64) -> f64 {
    let (levels, p) = (environment.levels(), environment.pressure());
    let humid = environment.humid_levels();
    let mut end = levels.z[humid - 1];
    for i in (0..humid - 1).rev() {
        let cell = (((levels.z[i] - bottom) / width) as usize).min(cells.len() - 1);
        let td = levels.td[i]
            .unwrap_or(0.0)
            .max(levels.td[i + 1].unwrap_or(0.0));
        // Below 240 K and above 50 hPa the virtual correction is less than 0.3 %.
        if !(td < 240.0 && p[i + 1] > 5_000.0 && td * 1.01 < cells[cell].least_above)
            && !(td < 220.0 && p[i + 1] > 500.0 && td * 1.01 < cells[cell].least_above)
        {
            break;
        }
        end = levels.z[i];
    }
    end
}
