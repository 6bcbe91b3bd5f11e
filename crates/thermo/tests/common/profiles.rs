//! Random profiles for the tests of properties.

use dewbound_thermo::*;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

/// Columns of a profile that a balloon could bring home: lapse rates from inversions to superadiabatic, any humidity,
/// gaps in it, dry above some level.
#[derive(Debug, Clone)]
pub struct Columns {
    pub p: Vec<f64>,
    pub t: Vec<f64>,
    pub td: Vec<Option<f64>>,
}

impl Columns {
    pub fn environment(&self) -> Environment {
        Environment::new(&self.p, &self.t, &self.td).unwrap()
    }
}

prop_compose! {
    fn step()(depth in 0.002..0.25_f64, lapse in -0.4..1.3_f64, depression in 0.0..30.0_f64, missing in 0..12) -> (f64, f64, f64, bool) {
        (depth, lapse, depression, missing == 0)
    }
}

prop_compose! {
    pub fn columns(levels: std::ops::Range<usize>)(
        bottom in 700e2..1040e2_f64,
        surface in 255.0..312.0_f64,
        first in 0.0..20.0_f64,
        steps in prop::collection::vec(step(), levels),
        humid_share in 0.3..1.6_f64,
    ) -> Columns {
        let (mut p, mut t) = (bottom, surface);
        let mut columns = Columns { p: vec![p], t: vec![t], td: vec![Some(t - first)] };
        let last_humid = (steps.len() as f64 * humid_share) as usize;
        for (i, (depth, lapse, depression, missing)) in steps.into_iter().enumerate() {
            // Above 80 hPa it would get too cold for any air: warm up instead.
            let lapse = if p < 80e2 { -0.2 } else { lapse };
            p *= (-depth).exp();
            // Dry adiabat: dT = kappa T d ln p.
            t = (t - lapse * KAPPA * t * depth).clamp(170.0, 320.0);
            columns.p.push(p);
            columns.t.push(t);
            // Never more vapour than a fifth of the pressure, or it isn't air.
            let limit = dewpoint_from_vapour_pressure(Pressure::from_pa(0.2 * p)).k();
            columns.td.push((!missing && i < last_humid).then_some((t - depression).min(limit)));
        }
        columns
    }
}

/// A profile that usually has CAPE: warm, moist below, conditionally unstable aloft.
pub fn unstable() -> impl Strategy<Value = Columns> {
    (
        12..60_usize,
        960e2..1020e2_f64,
        294.0..310.0_f64,
        1.0..9.0_f64,
        0.55..0.8_f64,
        any::<u64>(),
    )
        .prop_map(|(n, bottom, surface, depression, lapse, mut seed)| {
            let mut noise = move || {
                seed = seed
                    .wrapping_mul(6_364_136_223_846_793_005)
                    .wrapping_add(1_442_695_040_888_963_407);
                (seed >> 33) as f64 / f64::from(1u32 << 31) - 0.5
            };
            let mut columns = Columns {
                p: vec![],
                t: vec![],
                td: vec![],
            };
            let top = (bottom / 60e2_f64).ln();
            for i in 0..n {
                let z = top * i as f64 / (n - 1) as f64;
                let t = (surface * (-KAPPA * lapse * z).exp()).max(212.0) + noise();
                columns.p.push(bottom * (-z).exp());
                columns.t.push(t);
                columns.td.push(Some(
                    t - depression - (8.0 * z).min(20.0) * (0.5 + noise().abs()),
                ));
            }
            columns
        })
}

/// The columns with levels interpolated at these shares of their range in ln p.
pub fn with_levels_inserted(columns: &Columns, shares: &[f64]) -> Columns {
    let environment = columns.environment();
    let (bottom, top) = (columns.p[0].ln(), columns.p[columns.p.len() - 1].ln());
    // Gaps filled: a known dew point set into one would be a new thing to interpolate from.
    let mut result = Columns {
        td: environment.dewpoint().to_vec(),
        ..columns.clone()
    };
    for share in shares {
        let p = (bottom + (top - bottom) * share).exp();
        let place = result.p.partition_point(|&level| level > p);
        // Not so close to a level that rounding of ln p would be a lapse rate of its own.
        let close = |i: usize| {
            result
                .p
                .get(i)
                .is_none_or(|level| (level / p - 1.0).abs() < 1e-5)
        };
        if place == 0 || close(place - 1) || close(place) {
            continue;
        }
        let pressure = Pressure::from_pa(p);
        let (t, _) = environment.virtual_at(pressure).unwrap();
        result.p.insert(place, p);
        result.t.insert(place, t);
        result
            .td
            .insert(place, environment.at(pressure).map(|air| air.dewpoint.k()));
    }
    result
}

/// Agreement to `relative` of the larger number or of 1.
pub fn close(a: f64, b: f64, relative: f64) -> bool {
    (a - b).abs() <= relative * a.abs().max(b.abs()).max(1.0)
}

/// The same few hundred cases every time; with `DEWBOUND_LONG=1` many more, and new ones.
pub fn config() -> ProptestConfig {
    let long = std::env::var_os("DEWBOUND_LONG").is_some();
    ProptestConfig {
        cases: if long { 5_000 } else { 300 },
        rng_seed: if long {
            RngSeed::Random
        } else {
            RngSeed::Fixed(20_261_201)
        },
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}
