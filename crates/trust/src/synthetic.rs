//! Invented ascents for the tests: true air, instruments that err in their own terms, and the two ways of sampling.
//!
//! Knows nothing of the rules.

use crate::{Context, Finding, Rule, Thresholds};
use dewbound_sounding::thermo::{
    Air, EPSILON, GAS_CONSTANT_DRY, GRAVITY, KAPPA, Pressure, REFERENCE_PRESSURE, Temperature,
    dewpoint_from_relative_humidity, saturation_mixing_ratio, saturation_vapour_pressure,
};
use dewbound_sounding::{
    Daylight, HumidityReported, Level, LevelKind, Numbers, Profile, Sampling, Sounding,
};

/// Ascent rate, m/s, and so metres a sample at one second.
pub const RATE: f64 = 5.0;

/// Deterministic random numbers (a 64-bit congruential generator, upper bits).
pub struct Dice(u64);

impl Dice {
    pub fn new(seed: u64) -> Self {
        let mut dice = Self(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15) ^ 0x1234_5678_9abc_def1);
        for _ in 0..4 {
            dice.uniform();
        }
        dice
    }

    pub fn uniform(&mut self) -> f64 {
        self.0 = self
            .0
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 11) as f64 / (1u64 << 53) as f64
    }

    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.uniform()
    }

    /// Near enough to normal: the sum of twelve uniform numbers.
    pub fn normal(&mut self) -> f64 {
        (0..12).map(|_| self.uniform()).sum::<f64>() - 6.0
    }
}

/// Air sampled every second of a balloon's rise.
#[derive(Clone)]
pub struct Ascent {
    pub z: Vec<f64>,
    pub p: Vec<f64>,
    pub t: Vec<f64>,
    /// Relative humidity over water, 0..1.
    pub rh: Vec<f64>,
}

/// A day with a mixed layer under an inversion, or a night with a ground inversion, and the free air above.
#[derive(Clone, Copy)]
pub struct Air0 {
    pub surface_hpa: f64,
    pub theta: f64,
    pub w: f64,
    pub mixed_m: f64,
    /// Excess of theta at the ground in the contact layer, fading over 25 m, K (negative: ground inversion, over 120 m).
    pub contact_k: f64,
    pub inversion_k: f64,
    /// Depth of the inversion, m.
    pub inversion_m: f64,
    /// Lapse rate above, K/m.
    pub lapse: f64,
    /// Relative humidity above.
    pub rh: f64,
    /// Saturated layer: base and top, m.
    pub cloud: Option<(f64, f64)>,
    pub top_m: f64,
}

impl Default for Air0 {
    fn default() -> Self {
        Self {
            surface_hpa: 985.0,
            theta: 303.0,
            w: 0.012,
            mixed_m: 1500.0,
            contact_k: 2.0,
            inversion_k: 3.0,
            inversion_m: 150.0,
            lapse: 0.0066,
            rh: 0.45,
            cloud: None,
            top_m: 17_500.0,
        }
    }
}

impl Air0 {
    /// A varied one.
    pub fn random(dice: &mut Dice) -> Self {
        let surface_hpa = dice.between(880.0, 1015.0);
        let theta = dice.between(292.0, 312.0);
        let mixed_m = dice.between(700.0, 2000.0);
        // No cloud in the mixed layer: there theta would not be constant.
        let p = 100.0 * surface_hpa * (-mixed_m / 8300.0).exp();
        let most = 0.85 * saturated(p, theta * (p / REFERENCE_PRESSURE).powf(KAPPA));
        Self {
            surface_hpa,
            theta,
            w: dice.between(0.004, 0.014).min(most),
            mixed_m,
            contact_k: dice.between(0.0, 3.0),
            inversion_k: dice.between(1.5, 6.0),
            inversion_m: dice.between(60.0, 300.0),
            lapse: dice.between(0.0058, 0.0078),
            rh: dice.between(0.15, 0.6),
            ..Self::default()
        }
    }

    pub fn ascent(&self) -> Ascent {
        let mut ascent = Ascent {
            z: Vec::new(),
            p: Vec::new(),
            t: Vec::new(),
            rh: Vec::new(),
        };
        let mut p = 100.0 * self.surface_hpa;
        let mut t_top_of_mixed = f64::NAN;
        let mut z = 0.0;
        while z <= self.top_m {
            let above = z - self.mixed_m;
            let mixed_t = self.theta * (p / REFERENCE_PRESSURE).powf(KAPPA);
            let t = if above <= 0.0 {
                t_top_of_mixed = mixed_t;
                let fade = if self.contact_k < 0.0 { 120.0 } else { 25.0 };
                mixed_t + self.contact_k * (-z / fade).exp()
            } else if above <= self.inversion_m {
                t_top_of_mixed + self.inversion_k * above / self.inversion_m
            } else {
                let free =
                    t_top_of_mixed + self.inversion_k - self.lapse * (above - self.inversion_m);
                // The tropopause and an isothermal stratosphere.
                free.max(213.0)
            };
            let mixed_rh = rh_of(p, t, self.w).min(0.98);
            let mut rh = if above <= 0.0 {
                mixed_rh
            } else {
                let share = (above / self.inversion_m).min(1.0);
                mixed_rh + share * (self.rh - mixed_rh)
            };
            if let Some((base, top)) = self.cloud {
                // Dry to saturated over 100 m at the base, back over 50 m at the top.
                let inside = ((z - base) / 100.0).min((top - z) / 50.0).clamp(0.0, 1.0);
                rh += inside * (0.99 - rh);
            }
            if t <= 213.5 {
                rh = 0.05;
            }
            ascent.z.push(z);
            ascent.p.push(p);
            ascent.t.push(t);
            ascent.rh.push(rh);
            p *= (-GRAVITY * RATE / (GAS_CONSTANT_DRY * t)).exp();
            z += RATE;
        }
        ascent
    }
}

pub fn rh_of(p: f64, t: f64, w: f64) -> f64 {
    let e = w * p / (EPSILON + w);
    e / saturation_vapour_pressure(Temperature::from_k(t)).pa()
}

pub fn theta_of(p: f64, t: f64) -> f64 {
    t * (REFERENCE_PRESSURE / p).powf(KAPPA)
}

impl Ascent {
    pub fn w(&self, i: usize) -> f64 {
        let e = self.rh[i] * saturation_vapour_pressure(Temperature::from_k(self.t[i])).pa();
        EPSILON * e / (self.p[i] - e)
    }

    pub fn set_w(&mut self, i: usize, w: f64) {
        self.rh[i] = rh_of(self.p[i], self.t[i], w);
    }

    pub fn at_height(&self, z: f64) -> usize {
        self.z
            .partition_point(|&other| other < z)
            .min(self.z.len() - 1)
    }

    pub fn end_at(&mut self, z: f64) {
        let n = self.at_height(z);
        for column in [&mut self.z, &mut self.p, &mut self.t, &mut self.rh] {
            column.truncate(n);
        }
    }

    /// Noise correlated over about 100 m, plus a little white noise.
    pub fn noisy(mut self, dice: &mut Dice, t_sigma: f64, rh_sigma: f64) -> Self {
        let keep = (-RATE / 100.0_f64).exp();
        let fresh = (1.0 - keep * keep).sqrt();
        let (mut t, mut rh) = (dice.normal(), dice.normal());
        for i in 0..self.z.len() {
            t = keep * t + fresh * dice.normal();
            rh = keep * rh + fresh * dice.normal();
            self.t[i] += t_sigma * t + 0.3 * t_sigma * dice.normal();
            self.rh[i] = (self.rh[i] + rh_sigma * rh).clamp(0.01, 1.0);
        }
        self
    }

    /// A thermometer that is wet from the height `from` for `seconds`, drawn to the wet bulb with time constant `tau` (s),
    /// then recovers with a time constant of 4 s. The vapour pressure is measured as it is.
    pub fn wet(mut self, from: f64, seconds: f64, tau: f64) -> Self {
        let start = self.at_height(from);
        let mut off = 0.0;
        for i in start..self.z.len() {
            let since = (i - start) as f64;
            let e = self.rh[i] * saturation_vapour_pressure(Temperature::from_k(self.t[i])).pa();
            let dewpoint =
                dewpoint_from_relative_humidity(Temperature::from_k(self.t[i]), self.rh[i]);
            let wet_bulb = Air {
                pressure: Pressure::from_pa(self.p[i]),
                temperature: Temperature::from_k(self.t[i]),
                dewpoint,
            }
            .wet_bulb()
            .k();
            let (target, tau) = if since < seconds {
                (wet_bulb - self.t[i], tau)
            } else {
                (0.0, 4.0)
            };
            off += (target - off) * (1.0 - (-1.0 / tau).exp());
            self.t[i] += off;
            self.rh[i] =
                (e / saturation_vapour_pressure(Temperature::from_k(self.t[i])).pa()).min(1.0);
            if since > seconds + 60.0 {
                break;
            }
        }
        self
    }

    /// A thermometer too cold by `bias` from `from` on, coming on over `over` m, for `depth` m.
    pub fn cold(mut self, from: f64, over: f64, depth: f64, bias: f64) -> Self {
        for i in 0..self.z.len() {
            let on = ((self.z[i] - from) / over)
                .min((from + depth - self.z[i]) / over)
                .clamp(0.0, 1.0);
            let e = self.rh[i] * saturation_vapour_pressure(Temperature::from_k(self.t[i])).pa();
            self.t[i] -= on * bias;
            self.rh[i] =
                (e / saturation_vapour_pressure(Temperature::from_k(self.t[i])).pa()).min(1.0);
        }
        self
    }

    fn level(&self, i: usize) -> Level {
        Level {
            pressure: Some(self.p[i]),
            height: Some(self.z[i] + 150.0),
            temperature: Some(self.t[i]),
            elapsed: Some(self.z[i] / RATE),
            kind: if i == 0 {
                LevelKind::Surface
            } else {
                LevelKind::Other
            },
            ..Level::default()
        }
    }

    /// One-second data with tenths of a kelvin and of a percent; pressure in hundredths of hPa.
    pub fn fine(&self) -> Sounding {
        let levels = (0..self.z.len())
            .map(|i| {
                let t = (self.t[i] * 10.0).round() / 10.0;
                let rh = (self.rh[i] * 1000.0).round() / 1000.0;
                Level {
                    pressure: Some(self.p[i].round()),
                    temperature: Some(t),
                    relative_humidity: Some(rh),
                    dewpoint: Some(dewpoint_from_relative_humidity(Temperature::from_k(t), rh).k()),
                    ..self.level(i)
                }
            })
            .collect();
        Sounding {
            levels,
            humidity_reported: HumidityReported::RelativeHumidity,
            temperature_step: 0.0,
            ..Sounding::default()
        }
    }

    /// A coded message: standard levels, and significant levels so that temperature is within 1 K and relative humidity
    /// within 15 % of straight lines in ln p (FM 35 practice, from memory); whole hPa, temperature to 0.2 K, dew-point depression to 0.1 K up to 5 K
    /// and to 1 K beyond.
    pub fn coded(&self) -> Sounding {
        self.coded_within(1.0)
    }

    /// The same with significant levels chosen so that temperature is within `tolerance`, K.
    pub fn coded_within(&self, tolerance: f64) -> Sounding {
        let last = self.z.len() - 1;
        let mut chosen = std::collections::BTreeSet::from([0, last]);
        for hpa in [
            1000.0, 925.0, 850.0, 700.0, 500.0, 400.0, 300.0, 250.0, 200.0, 150.0, 100.0,
        ] {
            let i = self.p.partition_point(|&p| p > 100.0 * hpa);
            if i > 0 && i < last {
                chosen.insert(i);
            }
        }
        loop {
            let marks: Vec<usize> = chosen.iter().copied().collect();
            let mut added = false;
            for pair in marks.windows(2) {
                let (a, b) = (pair[0], pair[1]);
                let line = |column: &[f64], i: usize| {
                    let share = (self.p[i] / self.p[a]).ln() / (self.p[b] / self.p[a]).ln();
                    (column[i] - column[a] - share * (column[b] - column[a])).abs()
                };
                let size = |i: usize| (line(&self.t, i) / tolerance).max(line(&self.rh, i) / 0.15);
                let worst = (a + 1..b).max_by(|&i, &j| size(i).total_cmp(&size(j)));
                if let Some(i) = worst.filter(|&i| size(i) > 1.0) {
                    added |= chosen.insert(i);
                }
            }
            if !added {
                break;
            }
        }
        let mut levels: Vec<Level> = Vec::new();
        for i in chosen {
            let p = (self.p[i] / 100.0).round() * 100.0;
            if levels.last().is_some_and(|level| level.pressure == Some(p)) {
                continue;
            }
            let t = (self.t[i] * 5.0).round() / 5.0;
            let td =
                dewpoint_from_relative_humidity(Temperature::from_k(self.t[i]), self.rh[i]).k();
            let depression = (self.t[i] - td).max(0.0);
            let depression = if depression <= 5.0 {
                (depression * 10.0).round() / 10.0
            } else {
                depression.round()
            };
            levels.push(Level {
                pressure: Some(p),
                temperature: Some(t),
                dewpoint: Some(t - depression),
                height: None,
                elapsed: None,
                ..self.level(i)
            });
        }
        if let Some(surface) = levels.first_mut() {
            surface.height = Some(150.0);
        }
        Sounding {
            levels,
            humidity_reported: HumidityReported::DewPoint,
            temperature_step: 0.2,
            ..Sounding::default()
        }
    }

    pub fn sampled(&self, sampling: Sampling) -> Sounding {
        match sampling {
            Sampling::Fine => self.fine(),
            Sampling::Coded => self.coded(),
        }
    }
}

pub const BOTH: [Sampling; 2] = [Sampling::Fine, Sampling::Coded];

/// A sounding with what a context needs.
pub struct Scene {
    pub sounding: Sounding,
    pub profile: Profile,
    pub numbers: Numbers,
    pub daylight: Daylight,
    pub thresholds: Thresholds,
}

impl Scene {
    pub fn new(sounding: Sounding, daylight: Daylight) -> Self {
        let (profile, _) = Profile::received(&sounding);
        let numbers = Numbers::of(&profile);
        Self {
            sounding,
            profile,
            numbers,
            daylight,
            thresholds: Thresholds::default(),
        }
    }

    pub fn day(sounding: Sounding) -> Self {
        Self::new(sounding, Daylight::Day)
    }

    pub fn context(&self) -> Context<'_> {
        Context {
            sounding: &self.sounding,
            profile: &self.profile,
            numbers: &self.numbers,
            daylight: self.daylight,
            thresholds: &self.thresholds,
        }
    }

    pub fn check(&self, rule: &dyn Rule) -> Vec<Finding> {
        rule.check(&self.context())
    }

    pub fn findings(&self) -> Vec<Finding> {
        crate::findings(&self.context())
    }
}

/// A few levels typed in: pressure (hPa), temperature and dew point (degC).
pub fn levels(rows: &[(f64, f64, f64)]) -> Sounding {
    let levels = rows
        .iter()
        .enumerate()
        .map(|(i, &(hpa, t, td))| Level {
            pressure: Some(100.0 * hpa),
            temperature: Some(Temperature::from_c(t).k()),
            dewpoint: Some(Temperature::from_c(td).k()),
            height: (i == 0).then_some(200.0),
            kind: if i == 0 {
                LevelKind::Surface
            } else {
                LevelKind::Other
            },
            line: Some(i + 1),
            ..Level::default()
        })
        .collect();
    Sounding {
        levels,
        temperature_step: 0.2,
        ..Sounding::default()
    }
}

/// Saturation mixing ratio, kg/kg.
pub fn saturated(p: f64, t: f64) -> f64 {
    saturation_mixing_ratio(Pressure::from_pa(p), Temperature::from_k(t))
}
