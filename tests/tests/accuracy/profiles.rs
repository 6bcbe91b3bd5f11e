//! Invented profiles, plausible and nasty, always the same.

use dewbound_thermo::*;

/// A small generator of numbers (multiplier and increment of Knuth's MMIX, from memory).
pub struct Dice(u64);

impl Dice {
    pub fn new(seed: u64) -> Self {
        let mut dice = Self(seed.wrapping_mul(0x9E37_79B9_7F4A_7C15) ^ 0x5DEE_CE66);
        for _ in 0..4 {
            dice.unit();
        }
        dice
    }

    /// 0..1.
    fn unit(&mut self) -> f64 {
        self.0 = self
            .0
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 11) as f64 / (1u64 << 53) as f64
    }

    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.unit()
    }

    fn chance(&mut self, share: f64) -> bool {
        self.unit() < share
    }
}

/// Columns of a profile: Pa, K, K.
#[derive(Debug, Clone, Default)]
pub struct Columns {
    pub p: Vec<f64>,
    pub t: Vec<f64>,
    pub td: Vec<Option<f64>>,
}

impl Columns {
    pub fn environment(&self) -> Environment {
        Environment::new(&self.p, &self.t, &self.td).unwrap()
    }

    /// hPa, K, K.
    pub fn in_hpa(&self) -> Vec<(f64, f64, Option<f64>)> {
        let levels = self.p.iter().zip(&self.t).zip(&self.td);
        levels.map(|((p, t), td)| (p / 100.0, *t, *td)).collect()
    }
}

/// What a profile is made by.
struct Recipe {
    shape: &'static str,
    bottom: f64,
    top: f64,
    surface: f64,
    levels: usize,
    /// Layers from the bottom: depth in ln p, share of the dry-adiabatic lapse rate. The last goes on.
    layers: Vec<(f64, f64)>,
    /// Coldest air, K: the stratosphere.
    coldest: f64,
    /// Relative humidity at the ground, per unit of ln p less, never below the third.
    humidity: (f64, f64, f64),
    /// Standard deviation, roughly, of temperature and dew point between levels, K.
    noise: f64,
    /// Share of dew points missing in between, and the share of levels that have humidity.
    missing: f64,
    humid: f64,
}

/// The shapes, one after the other.
pub const SHAPES: usize = 12;

fn recipe(shape: usize, dice: &mut Dice) -> Recipe {
    let mut plain = Recipe {
        shape: "plain",
        bottom: dice.between(960e2, 1030e2),
        top: dice.between(60e2, 150e2),
        surface: dice.between(291.0, 307.0),
        levels: dice.between(14.0, 45.0) as usize,
        layers: vec![
            (dice.between(0.03, 0.2), dice.between(0.8, 1.0)),
            (9.0, dice.between(0.58, 0.74)),
        ],
        coldest: dice.between(200.0, 216.0),
        humidity: (dice.between(0.55, 0.95), dice.between(0.1, 0.6), 0.1),
        noise: 0.0,
        missing: 0.0,
        humid: 1.0,
    };
    let lapse = dice.between(0.6, 0.76);
    match shape % SHAPES {
        0 => {}
        1 => {
            plain.shape = "capped";
            plain.layers = vec![
                (dice.between(0.08, 0.2), 0.95),
                (dice.between(0.02, 0.06), dice.between(-1.5, -0.2)),
                (9.0, lapse),
            ];
        }
        2 => {
            plain.shape = "several buoyant layers";
            plain.layers = vec![(0.1, 0.9)];
            for _ in 0..5 {
                plain.layers.push((dice.between(0.1, 0.35), lapse + 0.1));
                plain
                    .layers
                    .push((dice.between(0.03, 0.12), dice.between(-0.8, 0.1)));
            }
            plain.layers.push((9.0, 0.6));
            plain.levels = 70;
        }
        3 => {
            plain.shape = "night";
            plain.surface -= 8.0;
            plain.layers = vec![
                (dice.between(0.02, 0.05), dice.between(-3.0, -1.0)),
                (9.0, lapse),
            ];
            plain.humidity.0 = 0.97;
        }
        4 => {
            plain.shape = "dry top and gaps";
            plain.missing = 0.2;
            plain.humid = dice.between(0.3, 0.8);
        }
        5 => {
            plain.shape = "fine and noisy";
            plain.levels = dice.between(300.0, 1500.0) as usize;
            plain.noise = dice.between(0.05, 0.3);
        }
        6 => {
            plain.shape = "near neutral";
            plain.noise = 0.1;
            plain.levels = 60;
        }
        7 => {
            plain.shape = "heated ground, deep mixed layer";
            plain.bottom = dice.between(840e2, 930e2);
            plain.surface = dice.between(303.0, 314.0);
            plain.layers = vec![
                (0.01, dice.between(2.0, 6.0)),
                (dice.between(0.25, 0.5), 1.0),
                (9.0, lapse),
            ];
            plain.humidity = (dice.between(0.1, 0.25), -0.8, 0.1);
        }
        8 => {
            plain.shape = "very coarse";
            plain.levels = dice.between(4.0, 8.0) as usize;
        }
        9 => {
            plain.shape = "cold";
            plain.surface = dice.between(255.0, 282.0);
            plain.layers = vec![(dice.between(0.1, 0.5), 0.95), (9.0, lapse)];
            plain.humidity.0 = 0.9;
        }
        10 => {
            plain.shape = "ends early";
            plain.top = dice.between(250e2, 600e2);
        }
        _ => {
            plain.shape = "humid tropics";
            plain.surface = dice.between(299.0, 304.0);
            plain.coldest = 192.0;
            plain.layers = vec![(0.06, 0.98), (0.6, 0.52), (9.0, dice.between(0.6, 0.68))];
            plain.humidity = (0.88, 0.15, 0.3);
            plain.top = 70e2;
        }
    }
    plain
}

/// Profile `number` of the collection.
pub fn profile(number: usize) -> Columns {
    let mut dice = Dice::new(number as u64 + 1);
    let recipe = recipe(number, &mut dice);
    let height = (recipe.bottom / recipe.top).ln();
    // Uneven steps, as messages have.
    let mut heights: Vec<f64> = (0..recipe.levels)
        .map(|level| {
            let even = level as f64 / (recipe.levels - 1) as f64;
            let shift = dice.between(-0.35, 0.35) / recipe.levels as f64;
            height
                * if level == 0 {
                    0.0
                } else {
                    (even + shift).min(1.0)
                }
        })
        .collect();
    heights.sort_by(f64::total_cmp);
    heights.dedup_by(|a, b| (*a - *b).abs() < 1e-5);

    let mut columns = Columns::default();
    let theta_e = Air {
        pressure: Pressure::from_pa(recipe.bottom),
        temperature: Temperature::from_k(recipe.surface),
        dewpoint: Temperature::from_k(recipe.surface - 3.0),
    }
    .theta_e();
    let neutral_offset = dice.between(-0.4, 0.4);
    let last_humid = (heights.len() as f64 * recipe.humid).ceil() as usize;
    for (level, &z) in heights.iter().enumerate() {
        let p = recipe.bottom * (-z).exp();
        let (mut below, mut ln_t) = (0.0, recipe.surface.ln());
        for (depth, share) in &recipe.layers {
            let part = (z - below).clamp(0.0, *depth);
            ln_t -= KAPPA * share * part;
            below += depth;
        }
        let mut t = ln_t.exp().max(recipe.coldest);
        if recipe.shape == "near neutral" && z > 0.08 {
            // What the ground's own parcel would be, but for a little.
            let saturated = temperature_on_pseudoadiabat(theta_e, Pressure::from_pa(p));
            t = saturated.k().max(recipe.coldest) + neutral_offset;
        }
        t += dice.between(-1.7, 1.7) * recipe.noise;
        let (ground, fall, least) = recipe.humidity;
        let rh = (ground - fall * z).clamp(least, 1.0) * dice.between(0.85, 1.0);
        let td = dewpoint_from_relative_humidity(Temperature::from_k(t), rh).k();
        let td = td + dice.between(-1.7, 1.7) * recipe.noise;
        let known = level == 0 || (level < last_humid && !dice.chance(recipe.missing));
        columns.p.push(p);
        columns.t.push(t);
        columns.td.push(known.then_some(td.min(t)));
    }
    columns
}

/// The surface, mixed and most unstable parcel of an environment.
pub fn starts(environment: &Environment) -> Vec<Air> {
    let mut starts = vec![environment.bottom()];
    starts.extend(mixed_start(environment, MIXED_DEPTH));
    let most_unstable = most_unstable_start(environment, MOST_UNSTABLE_DEPTH, |_| true);
    starts.extend(most_unstable.map(|(_, air)| air));
    starts
}
