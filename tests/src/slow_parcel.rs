//! CAPE and CIN the slow way: published formulas, bisection and rectangles, with nothing of `dewbound-thermo` in it.
//!
//! Bolton (1980, MWR 108, 1046-1053): eq. 10 saturation vapour pressure, eq. 15 condensation temperature, eq. 39
//! equivalent potential temperature with the dry potential temperature of (p - e) up to the condensation level.
//! Virtual temperature on both sides: Doswell & Rasmussen (1994, WAF 9, 625-629).

/// Ratio of the gas constants.
const EPS: f64 = 287.05 / 461.52;
/// Gas constant of dry air, J/kg/K.
const RD: f64 = 287.05;

/// The air at the levels: hPa, K, K; `None` is unknown humidity. Pressure falls.
pub type Levels = [(f64, f64, Option<f64>)];

/// One point of air: hPa, K, K.
#[derive(Debug, Clone, Copy)]
pub struct Point {
    /// hPa.
    pub p: f64,
    /// K.
    pub t: f64,
    /// K.
    pub td: f64,
}

/// What becomes of a parcel.
#[derive(Debug, Clone, Copy)]
pub struct Lifted {
    /// J/kg.
    pub cape: f64,
    /// J/kg; `None`: no free convection.
    pub cin: Option<f64>,
}

/// Bolton eq. 10, hPa.
fn vapour_pressure(t: f64) -> f64 {
    let celsius = t - 273.15;
    6.112 * (17.67 * celsius / (celsius + 243.5)).exp()
}

fn mixing_ratio(p: f64, e: f64) -> f64 {
    EPS * e / (p - e)
}

fn virtual_temperature(t: f64, w: f64) -> f64 {
    t * (1.0 + w / EPS) / (1.0 + w)
}

/// The root of a rising function between two bounds.
fn bisect(mut low: f64, mut high: f64, target: f64, f: impl Fn(f64) -> f64) -> f64 {
    for _ in 0..45 {
        let middle = 0.5 * (low + high);
        if f(middle) < target {
            low = middle;
        } else {
            high = middle;
        }
    }
    0.5 * (low + high)
}

/// Bolton eq. 15, K.
fn condensation_temperature(t: f64, td: f64) -> f64 {
    1.0 / (1.0 / (td - 56.0) + (t / td).ln() / 800.0) + 56.0
}

/// Bolton eq. 39, K: air of temperature `t` and vapour pressure `e` whose condensation temperature is `tl`.
fn theta_e(p: f64, t: f64, e: f64, tl: f64) -> f64 {
    let w = mixing_ratio(p, e);
    t * (1000.0 / (p - e)).powf(0.2854)
        * (t / tl).powf(0.28 * w)
        * ((3036.0 / tl - 1.78) * w * (1.0 + 0.448 * w)).exp()
}

fn theta_e_of(point: Point) -> f64 {
    let tl = condensation_temperature(point.t, point.td);
    theta_e(point.p, point.t, vapour_pressure(point.td), tl)
}

/// Levels as they count: dew points between known ones linear in ln p, none above the temperature.
fn filled(levels: &Levels) -> Vec<(f64, f64, Option<f64>)> {
    let known: Vec<(f64, f64)> = levels
        .iter()
        .filter_map(|&(p, t, td)| Some((p.ln(), td?.min(t))))
        .collect();
    let between = |z: f64| {
        known.windows(2).find_map(|pair| match *pair {
            [(below, low), (above, high)] if (above..=below).contains(&z) => {
                Some(low + (high - low) * (below - z) / (below - above))
            }
            _ => None,
        })
    };
    levels
        .iter()
        .map(|&(p, t, td)| (p, t, td.or_else(|| between(p.ln())).map(|td| td.min(t))))
        .collect()
}

/// Walks upward in equal steps of ln p: middle of the step, width, temperature, dew point (`None`: dry).
fn walk(
    levels: &Levels,
    bottom: f64,
    top: f64,
    step: f64,
    mut visit: impl FnMut(f64, f64, f64, Option<f64>),
) {
    let levels = filled(levels);
    let (from, to) = (bottom.ln(), top.ln());
    let count = ((from - to) / step).ceil().max(1.0);
    let width = (from - to) / count;
    let mut rest = levels.as_slice();
    for index in 0..count as usize {
        let z = from - (index as f64 + 0.5) * width;
        while let [_, (above, ..), ..] = rest
            && above.ln() > z
        {
            rest = &rest[1..];
        }
        let [(p0, t0, td0), (p1, t1, td1), ..] = *rest else {
            return;
        };
        let share = (p0.ln() - z) / (p0 / p1).ln();
        let td = td0.zip(td1).map(|(td0, td1)| td0 + share * (td1 - td0));
        visit(z.exp(), width, t0 + share * (t1 - t0), td);
    }
}

/// Start of the parcel mixed over the lowest 100 hPa: means over p of theta and w.
pub fn mixed_start(levels: &Levels, step: f64) -> Option<Point> {
    let &(bottom, ..) = levels.first()?;
    let (mut depth, mut theta, mut moisture) = (0.0, 0.0, 0.0);
    walk(levels, bottom, bottom - 100.0, step, |p, width, t, td| {
        if let Some(td) = td {
            depth += p * width;
            theta += p * width * t * (1000.0 / p).powf(0.2854);
            moisture += p * width * mixing_ratio(p, vapour_pressure(td.min(t)));
        }
    });
    let w = moisture / depth;
    let t = theta / depth * (bottom / 1000.0).powf(0.2854);
    let td = bisect(150.0, 350.0, bottom * w / (EPS + w), vapour_pressure);
    Some(Point {
        p: bottom,
        t,
        td: td.min(t),
    })
}

/// Start of the most unstable parcel: the level of largest theta-e in the lowest 300 hPa.
pub fn most_unstable_start(levels: &Levels) -> Option<Point> {
    let &(bottom, ..) = levels.first()?;
    levels
        .iter()
        .take_while(|(p, ..)| *p >= bottom - 300.0)
        .filter_map(|&(p, t, td)| {
            Some(Point {
                p,
                t,
                td: td?.min(t),
            })
        })
        .max_by(|a, b| theta_e_of(*a).total_cmp(&theta_e_of(*b)))
}

/// Lifts a parcel in steps of `step` in ln p.
pub fn lift(levels: &Levels, start: Point, step: f64) -> Option<Lifted> {
    let &(top, ..) = levels.last()?;
    let w = mixing_ratio(start.p, vapour_pressure(start.td));
    let exponent = 0.2854 * (1.0 - 0.28 * w);
    let tl = condensation_temperature(start.t, start.td);
    let condensation = start.p * (tl / start.t).powf(1.0 / exponent);
    let target = theta_e_of(start);

    // Areas of one sign above the condensation level, from the lowest; and what is negative below it.
    let mut runs: Vec<f64> = Vec::new();
    let mut negative_below = 0.0;
    walk(levels, start.p, top, step, |p, width, t, td| {
        let around = td.map_or(t, |td| {
            virtual_temperature(t, mixing_ratio(p, vapour_pressure(td)))
        });
        let rising = if p > condensation {
            virtual_temperature(start.t * (p / start.p).powf(exponent), w)
        } else {
            // Below the boiling point of water at this pressure, whatever theta-e.
            let boiling = bisect(150.0, 400.0, 0.5 * p, vapour_pressure);
            let t = bisect(120.0, boiling, target, |t| {
                theta_e(p, t, vapour_pressure(t), t)
            });
            virtual_temperature(t, mixing_ratio(p, vapour_pressure(t)))
        };
        let area = RD * (rising - around) * width;
        if p > condensation {
            negative_below += area.min(0.0);
        } else {
            match runs.last_mut() {
                Some(run) if (*run > 0.0) == (area > 0.0) => *run += area,
                _ => runs.push(area),
            }
        }
    });
    let cape = runs.iter().filter(|area| **area > 0.0).sum();
    let largest = runs
        .iter()
        .enumerate()
        .filter(|(_, area)| **area > 0.0)
        .max_by(|a, b| a.1.total_cmp(b.1))
        .map(|(index, _)| index);
    let cin = largest.map(|index| {
        let under = runs.iter().take(index).filter(|area| **area < 0.0);
        negative_below + under.sum::<f64>()
    });
    Some(Lifted { cape, cin })
}
