//! The environment on a coarse grid, as bounds of CAPE and CIN need it.

use crate::Environment;

/// Widest cell in ln p, for profiles of few levels and for those of more than [`FINE`] nodes, where finer cells cost next to
/// nothing and an ascent much.
const CELL: [f64; 2] = [0.08, 0.04];
const FINE: usize = 1_000;
/// Largest departure (K) of a parcel's virtual temperature from its chord over a cell, over the square of the cell's width:
/// found at most 3.5 for theta-e up to 420 K.
const BULGE: f64 = 5.0;
/// Largest departure (K) of the environment from the chord between two nodes of its column.
const NODE_BULGE: f64 = crate::column::MOISTURE_BULGE;

/// The environment on the grid.
#[derive(Debug, Default)]
pub(super) struct Grid {
    pub bottom: f64,
    pub width: f64,
    /// Largest departure of a parcel from its chord, K.
    pub bulge: f64,
    /// Virtual temperature at the nodes, K: one more than cells.
    pub node: Vec<f64>,
    /// Of each cell, the integral of virtual temperature over z less what the four-point rule makes of the nodes.
    pub bend: Vec<f64>,
    /// Largest departure from the chord.
    pub departure: Vec<f64>,
    /// Least virtual temperature from the foot up.
    pub least_above: Vec<f64>,
}

impl Grid {
    pub fn new(environment: &Environment) -> Self {
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
    pub fn beyond(&self, node: usize) -> f64 {
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
    pub fn cell_at(&self, z: f64) -> usize {
        (((z - self.bottom) / self.width) as usize).min(self.bend.len() - 1)
    }

    pub fn foot(&self, cell: usize) -> f64 {
        self.bottom + cell as f64 * self.width
    }

    /// Values at foot and head, and the departure from the chord between them.
    pub fn cell(&self, cell: usize) -> Option<((f64, f64), f64)> {
        let departure = *self.departure.get(cell)?;
        Some((
            (*self.node.get(cell)?, *self.node.get(cell + 1)?),
            departure,
        ))
    }
}

/// z above which no start is ever buoyant.
pub(super) fn end(environment: &Environment, grid: &Grid) -> f64 {
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
