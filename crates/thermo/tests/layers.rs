//! Numbers of layers and of parcels: against outside values, closed forms, slow computations written from their
//! definitions, and what must hold for every profile.
#![allow(clippy::unwrap_used, clippy::expect_used)]

mod common;

use common::profiles::*;
use dewbound_thermo::*;
use proptest::prelude::*;

/// Pressure hPa, temperature degC, dew point degC: a summer day over the plains with a dry layer aloft.
const DAY: [(f64, f64, f64); 12] = [
    (960.0, 30.0, 20.0),
    (950.0, 29.0, 17.5),
    (850.0, 19.5, 15.5),
    (800.0, 17.0, 2.0),
    (700.0, 9.0, -14.0),
    (600.0, -0.5, -8.0),
    (500.0, -11.0, -20.0),
    (400.0, -23.5, -40.0),
    (300.0, -39.5, -55.0),
    (250.0, -49.0, -65.0),
    (200.0, -56.0, -72.0),
    (100.0, -62.0, -82.0),
];

fn day() -> Environment {
    let p = DAY.map(|level| level.0 * 100.0);
    let t = DAY.map(|level| level.1 + ZERO_CELSIUS);
    let td = DAY.map(|level| Some(level.2 + ZERO_CELSIUS));
    Environment::new(&p, &t, &td).unwrap()
}

/// Levels even in ln p with temperature and dew point by functions of pressure (Pa).
fn profile(
    levels: usize,
    (bottom, top): (f64, f64),
    t: impl Fn(f64) -> f64,
    td: impl Fn(f64) -> f64,
) -> Environment {
    let p: Vec<f64> = (0..levels)
        .map(|i| bottom * (top / bottom).powf(i as f64 / (levels - 1) as f64))
        .collect();
    let temperature: Vec<f64> = p.iter().map(|p| t(*p)).collect();
    let dewpoint: Vec<Option<f64>> = p.iter().map(|p| Some(td(*p))).collect();
    Environment::new(&p, &temperature, &dewpoint).unwrap()
}

fn surface(environment: &Environment) -> Lifted<'_> {
    Lifted::of(environment, environment.bottom(), Method::default()).unwrap()
}

fn numbers(environment: &Environment) -> LayerNumbers {
    LayerNumbers::of(environment, None)
}

fn hpa(value: f64) -> Pressure {
    Pressure::from_hpa(value)
}

/// Pressures in the middle of even slices of ln p, and the slices' depth in ln p.
fn slices(bottom: f64, top: f64, count: u32) -> (Vec<Pressure>, f64) {
    let h = (bottom / top).ln() / f64::from(count);
    let middle = |i: u32| Pressure::from_pa(bottom * (-(f64::from(i) + 0.5) * h).exp());
    ((0..count).map(middle).collect(), h)
}

fn assert_near(what: &str, found: f64, expected: f64, within: f64) {
    assert!(
        (found - expected).abs() <= within,
        "{what}: {found}, not {expected}"
    );
}

/// Values of this profile by earthkit-meteo 1.2.1 (theta-e by Bolton eq. 39, moist adiabat by Newton's method; slightly other
/// constants) and SciPy 1.15.3 (quadrature, Brent), with eq. 10 and the definitions written anew.
#[test]
fn a_summer_day_agrees_with_outside_computations() {
    let environment = day();
    let found = numbers(&environment);
    let downdraft = found.downdraft.unwrap();
    assert_near("origin", downdraft.origin.pa(), 70_500.0, 1e-6);
    assert_near("mean theta-e", downdraft.theta_e.k(), 320.141, 0.05);
    assert_near("wet bulb", downdraft.wet_bulb.k(), 273.893, 0.03);
    assert_near("downdraft CAPE", downdraft.cape, 1009.98, 1.5);
    assert_eq!(downdraft.warmer, 0.0);
    let wet_bulb_zero = found.wet_bulb_zero.unwrap();
    assert_near("wet-bulb zero", wet_bulb_zero.pressure.pa(), 70_270.7, 30.0);
    assert_near("its height", wet_bulb_zero.height, 2678.2, 4.0);
    assert_near(
        "water, less that above",
        found.precipitable_water.unwrap(),
        29.209_546,
        2e-5,
    );
    let [low, high] = [found.humidity_lowest_100hpa, found.humidity_700_to_500hpa];
    assert_near("humidity below", low.unwrap(), 0.599_545_484, 1e-7);
    assert_near("humidity aloft", high.unwrap(), 0.428_288_994, 1e-7);

    let lifted = surface(&environment);
    let found = ParcelNumbers::of(&environment, &lifted);
    assert_near("lifted index", found.lifted_index.unwrap(), -9.2586, 0.03);
    let convective = found.convective.unwrap();
    assert_near("CCL", convective.level.pressure.pa(), 80_284.483_5, 0.01);
    assert_near("CCL height", convective.level.height, 1_559.109_6, 1e-3);
    assert_near(
        "convective temperature",
        convective.temperature.k(),
        305.424_370_6,
        1e-6,
    );
}

/// US Standard Atmosphere 1976 with 50 % relative humidity: 14.53 kg/m² up to 100 hPa, by SciPy 1.15.3 with the vapour
/// pressure over liquid water of Murphy & Koop (2005). Lapse rates 6.5 K/km; 0 °C at 2,308 m (15 / 6.5 km).
#[test]
fn the_standard_atmosphere_has_its_water_and_lapse_rates() {
    let t = |p: f64| (288.15 * (p / 101_325.0).powf(287.05 * 0.0065 / GRAVITY)).max(216.65);
    let td = |p: f64| dewpoint_from_relative_humidity(Temperature::from_k(t(p)), 0.5).k();
    let found = numbers(&profile(400, (101_325.0, 10_000.0), t, td));
    assert_near(
        "water",
        found.precipitable_water.unwrap(),
        14.5307,
        0.004 * 14.53,
    );
    for humidity in [found.humidity_lowest_100hpa, found.humidity_700_to_500hpa] {
        assert_near("humidity", humidity.unwrap(), 0.5, 1e-5);
    }
    // Dry: geopotential heights as tabulated.
    let dry = numbers(&profile(400, (101_325.0, 10_000.0), t, |_| 40.0));
    for rate in [
        dry.lapse_rate_to_3km,
        dry.lapse_rate_3_to_6km,
        dry.lapse_rate_850_to_500hpa,
        dry.lapse_rate_700_to_500hpa,
    ] {
        assert_near("lapse rate", rate.unwrap(), 0.0065, 1e-7);
    }
    assert_near(
        "0 °C",
        dry.freezing_level.unwrap().height,
        15.0 / 0.0065,
        0.1,
    );
    // Bone dry, the wet bulb is far colder; humidity lowers the level where it reaches 0 °C.
    assert!(found.wet_bulb_zero.unwrap().height < found.freezing_level.unwrap().height);
}

/// An isothermal atmosphere of one dew point, where every integral has a closed form.
#[test]
fn an_isothermal_atmosphere_has_closed_forms() {
    let (t, td) = (280.0, 268.0);
    let environment = profile(7, (100_000.0, 20_000.0), |_| t, |_| td);
    let found = numbers(&environment);
    let e = saturation_vapour_pressure(Temperature::from_k(td)).pa();
    let water = EPSILON * e * ((100_000.0 - e) / (20_000.0 - e)).ln() / GRAVITY;
    assert_near("water", found.precipitable_water.unwrap(), water, 1e-6);
    let rh = e / saturation_vapour_pressure(Temperature::from_k(t)).pa();
    assert_near("humidity", found.humidity_lowest_100hpa.unwrap(), rh, 1e-9);
    assert_near("humidity", found.humidity_700_to_500hpa.unwrap(), rh, 1e-9);
    assert_near("lapse", found.lapse_rate_to_3km.unwrap(), 0.0, 1e-15);
    // It never freezes, nothing is mixed, nothing feeds a storm.
    assert_eq!(found.freezing_level, None);
    assert_eq!(found.mixed_layer_by_parcel, None);
    assert_eq!(found.inflow, None);
}

/// A dry-adiabatic layer under an inversion: lapse rate g kappa / Rd, mixed to its top.
#[test]
fn dry_adiabatic_air_is_mixed_to_its_top() {
    let t = |p: f64| {
        let theta = if p >= 80_000.0 {
            300.0
        } else {
            300.0 + (80_000.0 - p) / 1_000.0
        };
        theta * (p / 100_000.0).powf(KAPPA)
    };
    // A level at the kink.
    let p: Vec<f64> = (0..=160)
        .map(|i| 100_000.0 - 500.0 * f64::from(i))
        .collect();
    let temperature: Vec<f64> = p.iter().map(|p| t(*p)).collect();
    let environment = Environment::new(&p, &temperature, &vec![Some(40.0); p.len()]).unwrap();
    let top = numbers(&environment).mixed_layer_by_parcel.unwrap();
    // Between levels of one theta, temperature linear in ln p is a little higher than the adiabat (0.2 mK here).
    assert!(top.pressure.pa() > 79_000.0, "{top:?}");
    let superadiabatic: Vec<f64> = temperature
        .iter()
        .enumerate()
        .map(|(i, t)| if i == 0 { t + 1e-3 } else { *t })
        .collect();
    let environment = Environment::new(&p, &superadiabatic, &vec![Some(40.0); p.len()]).unwrap();
    let top = numbers(&environment).mixed_layer_by_parcel.unwrap();
    assert_near("top", top.pressure.pa(), 80_000.0, 50.0);
    let dry = profile(
        200,
        (100_000.0, 30_000.0),
        |p| 300.0 * (p / 1e5).powf(KAPPA),
        |_| 40.0,
    );
    assert_near(
        "dry-adiabatic lapse rate",
        numbers(&dry).lapse_rate_3_to_6km.unwrap(),
        GRAVITY * KAPPA / GAS_CONSTANT_DRY,
        1e-7,
    );
}

/// Wind that grows evenly with height in air of even stability: Ri is N² over the square of the shear at every height when
/// the wind at the ground is nil, and `0.25 (u0 + s h)² = N² h²` gives the height when it isn't.
#[test]
fn the_richardson_number_has_its_closed_form() {
    // theta_v = theta_0 (1 + a h), so that g (theta_v - theta_0) h / theta_0 = g a h².
    let (n2, shear, u0) = (1e-4, 0.012, 3.0);
    let a = n2 / GRAVITY;
    let (mut p, mut t, mut h) = (vec![100_000.0_f64], vec![295.0_f64], 0.0);
    let theta0 = 295.0;
    let c = GRAVITY * KAPPA / GAS_CONSTANT_DRY;
    // d(p^kappa)/dh = -kappa g p0^kappa / (Rd theta): integrated exactly.
    while h < 4_000.0 {
        h += 20.0;
        let exner = 1.0 - c / theta0 * (1.0 + a * h).ln() / a;
        p.push(100_000.0 * exner.powf(1.0 / KAPPA));
        t.push(theta0 * (1.0 + a * h) * exner);
    }
    let environment = Environment::new(&p, &t, &vec![Some(40.0); p.len()]).unwrap();
    let winds = |u0: f64, shear: f64| {
        WindProfile::new([0.0, 2_000.0, 4_000.0].map(|height| WindLevel {
            height,
            pressure: None,
            wind: Vector {
                u: u0 + shear * height,
                v: 0.0,
            },
        }))
        .unwrap()
    };
    let of = |winds| LayerNumbers::of(&environment, Some(&winds)).mixed_layer_by_richardson;
    let expected = 0.5 * u0 / (n2.sqrt() - 0.5 * shear);
    assert_near(
        "height",
        of(winds(u0, shear)).unwrap().height,
        expected,
        0.1,
    );
    // Calm at the ground: above 0.25 at once, or never.
    assert_eq!(of(winds(0.0, 0.012)), None);
    assert_eq!(of(winds(0.0, 0.03)), None);
    // No wind that high.
    let shallow = WindProfile::new([0.0, 300.0].map(|height| WindLevel {
        height,
        pressure: None,
        wind: Vector {
            u: u0 + shear * height,
            v: 0.0,
        },
    }));
    assert_eq!(of(shallow.unwrap()), None);
    assert_eq!(numbers(&environment).mixed_layer_by_richardson, None);
}

#[test]
fn parts_of_cape_are_what_a_plain_sum_says() {
    let environment = day();
    let lifted = surface(&environment);
    let found = ParcelNumbers::of(&environment, &lifted);
    let (middles, h) = slices(lifted.ascent.lcl.pressure.pa(), 10_000.0, 40_000);
    let (mut low, mut cold, mut all) = (0.0, 0.0, 0.0);
    for state in parcel_path(environment.bottom(), Method::default(), &middles) {
        let (t, tv) = environment.virtual_at(state.pressure).unwrap();
        let area = (GAS_CONSTANT_DRY * h * (state.virtual_temperature.k() - tv)).max(0.0);
        all += area;
        if environment.height_above_bottom(state.pressure).unwrap() < 3_000.0 {
            low += area;
        }
        if (-30.0..=-10.0).contains(&(t - ZERO_CELSIUS)) {
            cold += area;
        }
    }
    assert!(all > 2_000.0 && low > 20.0 && cold > 500.0);
    assert_near("all", lifted.ascent.cape, all, 0.3);
    assert_near("below 3 km", found.cape_below_3km.unwrap(), low, 0.1);
    assert_near(
        "-10 to -30 °C",
        found.cape_in_growth_zone.unwrap(),
        cold,
        0.2,
    );
    let depth = found.el_height.unwrap() - found.lfc_height.unwrap();
    assert_near(
        "normalised",
        found.normalised_cape.unwrap(),
        all / depth,
        1e-4,
    );
}

/// Warmed from the ground to its convective temperature, the air condenses at the convective condensation level (eq. 15
/// is good to 0.1 K or so: 150 Pa).
#[test]
fn heated_air_condenses_at_the_convective_condensation_level() {
    let environment = day();
    for start in [
        environment.bottom(),
        mixed_start(&environment, MIXED_DEPTH).unwrap(),
    ] {
        let lifted = Lifted::of(&environment, start, Method::default()).unwrap();
        let convective = ParcelNumbers::of(&environment, &lifted).convective.unwrap();
        let heated = Air {
            temperature: convective.temperature,
            dewpoint: dewpoint_from_mixing_ratio(
                environment.bottom().pressure,
                start.mixing_ratio(),
            ),
            ..environment.bottom()
        };
        assert_near(
            "LCL",
            heated.lcl().pressure.pa(),
            convective.level.pressure.pa(),
            300.0,
        );
        assert!(convective.level.pressure < lifted.ascent.lcl.pressure);
    }
}

#[test]
fn numbers_outside_the_profile_are_absent() {
    // A mountain station above 700 hPa whose sounding ends at 480 hPa, its humidity at 600 hPa.
    let p = [69_000.0, 65_000.0, 60_000.0, 55_000.0, 48_000.0];
    let t = [271.0, 272.5, 268.0, 263.0, 256.0];
    let td = [Some(265.0), Some(264.0), Some(260.0), None, None];
    let environment = Environment::new(&p, &t, &td).unwrap();
    let found = numbers(&environment);
    assert_eq!(found.lapse_rate_850_to_500hpa, None);
    assert_eq!(found.lapse_rate_700_to_500hpa, None);
    assert_eq!(found.lapse_rate_3_to_6km, None);
    assert_eq!(found.humidity_700_to_500hpa, None);
    assert_eq!(found.humidity_lowest_100hpa, None);
    assert_eq!(found.downdraft, None);
    assert_eq!(found.freezing_level, None);
    assert_eq!(found.wet_bulb_zero, None);
    assert_eq!(found.inflow, None);
    assert!(found.precipitable_water.unwrap() > 1.0);
    let high = environment.at(hpa(620.0)).unwrap();
    let lifted = Lifted::of(&environment, high, Method::default()).unwrap();
    let found = ParcelNumbers::of(&environment, &lifted);
    assert!(found.lifted_index.is_some() && found.lfc_height.is_none());
    assert_eq!(found.cape_below_3km, None);
    assert_eq!(found.normalised_cape, None);
    // Above 500 hPa.
    let high = Air {
        pressure: hpa(490.0),
        temperature: Temperature::from_k(257.0),
        dewpoint: Temperature::from_k(250.0),
    };
    let lifted = Lifted::of(&environment, high, Method::default()).unwrap();
    assert_eq!(ParcelNumbers::of(&environment, &lifted).lifted_index, None);
}

/// Integral means of any layer against a plain sum, and the mixed parcel as one of them.
#[test]
fn mean_parcels_are_those_of_plain_sums() {
    let environment = day();
    assert_eq!(
        mean_start(&environment, hpa(960.0), hpa(860.0)),
        mixed_start(&environment, MIXED_DEPTH)
    );
    for (bottom, top) in [(930.0, 880.0), (850.0, 700.0), (955.0, 952.0)] {
        let start = mean_start(&environment, hpa(bottom), hpa(top)).unwrap();
        let count = 20_000;
        let h = (bottom - top) / f64::from(count);
        let (mut theta, mut w) = (0.0, 0.0);
        for i in 0..count {
            let air = environment
                .at(hpa(bottom - (f64::from(i) + 0.5) * h))
                .unwrap();
            theta += air.potential_temperature().k() / f64::from(count);
            w += air.mixing_ratio() / f64::from(count);
        }
        assert_eq!(start.pressure, hpa(bottom));
        assert_near("theta", start.potential_temperature().k(), theta, 1e-6);
        assert_near("w", start.mixing_ratio(), w, 1e-9);
    }
    assert_eq!(mean_start(&environment, hpa(700.0), hpa(800.0)), None);
    // From below the ground: clipped, and lifted from the ground.
    let clipped = mean_start(&environment, hpa(1010.0), hpa(860.0));
    assert_eq!(clipped, mixed_start(&environment, MIXED_DEPTH));
}

/// Whether a parcel started at a pressure feeds a storm.
fn feeds(environment: &Environment, pressure: f64) -> Option<bool> {
    let start = environment.at(Pressure::from_pa(pressure))?;
    let ascent = lift(environment, start, Method::default()).unwrap();
    Some(ascent.cape >= 100.0 && ascent.cin.unwrap() >= -250.0)
}

/// The inflow layer by its definition: every start lifted.
fn plain_inflow(environment: &Environment) -> Option<(f64, f64)> {
    let p0 = environment.bottom().pressure.pa();
    let starts: Vec<(f64, bool)> = (0..)
        .map_while(|k| {
            let p = p0 - f64::from(k) * 500.0;
            Some((p, feeds(environment, p)?))
        })
        .collect();
    let first = starts.iter().position(|(_, good)| *good)?;
    let mut bottom = starts[first].0;
    if first > 0 {
        for &p in environment.pressure().iter().rev() {
            if p > bottom && p < starts[first - 1].0 {
                if feeds(environment, p) != Some(true) {
                    break;
                }
                bottom = p;
            }
        }
    }
    // Everything there is above the first start, in order; levels count only next to a failure.
    let mut top = starts[first].0;
    let mut k = first;
    loop {
        if let Some((p, true)) = starts.get(k + 1) {
            (top, k) = (*p, k + 1);
            continue;
        }
        let mut points: Vec<f64> = environment.pressure().to_vec();
        points.extend(starts.iter().map(|(p, _)| *p));
        points.sort_by(|a, b| b.total_cmp(a));
        let next = points
            .into_iter()
            .filter(|p| *p < top && *p > top - 500.0 + 1e-6)
            .find(|p| feeds(environment, *p) == Some(true));
        let Some(p) = next else { break };
        top = p;
        k = starts.iter().rposition(|(start, _)| *start >= p).unwrap();
    }
    Some((bottom, top))
}

fn check_inflow(environment: &Environment) {
    let found = numbers(environment)
        .inflow
        .map(|layer| (layer.bottom.pressure.pa(), layer.top.pressure.pa()));
    assert_eq!(found, plain_inflow(environment));
}

#[test]
fn the_inflow_layer_of_a_summer_day_is_its_moist_layer() {
    let environment = day();
    let layer = numbers(&environment).inflow.unwrap();
    assert_eq!(layer.bottom.pressure, environment.bottom().pressure);
    assert!(
        layer.top.pressure.hpa() < 855.0 && layer.top.pressure.hpa() > 800.0,
        "{layer:?}"
    );
    check_inflow(&environment);
    // After a cold night it is elevated.
    let p = DAY.map(|level| level.0 * 100.0);
    let mut t = DAY.map(|level| level.1 + ZERO_CELSIUS);
    let td = DAY.map(|level| Some(level.2.min(level.1) + ZERO_CELSIUS));
    t[0] -= 18.0;
    t[1] -= 10.0;
    let environment = Environment::new(&p, &t, &td).unwrap();
    let layer = numbers(&environment).inflow.unwrap();
    assert!(
        layer.bottom.pressure < environment.bottom().pressure,
        "{layer:?}"
    );
    check_inflow(&environment);
}

/// One-second data with the noise of a sensor, capped and not.
#[test]
fn noise_changes_no_verdict() {
    let mut seed = 20_261_201_u64;
    let mut noise = move || {
        seed = seed
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        (seed >> 33) as f64 / f64::from(1u32 << 31) - 0.5
    };
    let (mut some, mut elevated) = (0, 0);
    for case in 0..12 {
        let (moisture, cap) = (0.9 * f64::from(case) - 6.0, f64::from(case % 4));
        let (mut p, mut t, mut td) = (vec![], vec![], vec![]);
        for i in 0..2_000 {
            let z = 2.2 * f64::from(i) / 1_999.0;
            let (temperature, depression) = match z {
                z if z < 0.03 && case % 3 == 0 => (293.0 + 280.0 * z, 1.0),
                z if z < 0.15 => (304.0 - 78.0 * z, 11.0 - moisture - 50.0 * z),
                z if z < 0.21 => (292.3 + 20.0 * cap * (z - 0.15), 4.0 + 200.0 * (z - 0.15)),
                z if z < 1.6 => (292.3 + 1.2 * cap - 54.0 * (z - 0.21), 16.0),
                _ => (217.0 + 1.2 * cap, 20.0),
            };
            p.push(98_000.0 * (-z).exp());
            t.push(temperature + 0.1 * noise());
            td.push(Some(temperature - depression.max(0.3) + 0.3 * noise()));
        }
        let environment = Environment::new(&p, &t, &td).unwrap();
        check_inflow(&environment);
        if let Some(layer) = numbers(&environment).inflow {
            some += 1;
            elevated += i32::from(layer.bottom.height > 1.0);
        }
    }
    assert!(some > 3 && some < 12 && elevated > 0, "{some} {elevated}");
}

/// Downdraft CAPE by its definition: layer means and areas as plain sums. Position, mean theta-e (K), energy (J/kg).
fn plain_downdraft(environment: &Environment) -> Option<(f64, f64, f64)> {
    let p0 = environment.bottom().pressure.pa();
    environment.at(Pressure::from_pa(p0 - 40_000.0))?;
    let count = 40_000;
    let h = 40_000.0 / f64::from(count);
    let mut running = vec![0.0];
    for i in 0..count {
        let air = environment.at(Pressure::from_pa(p0 - (f64::from(i) + 0.5) * h))?;
        running.push(running[i as usize] + air.theta_e().k());
    }
    let mean = |k: usize| (running[k * 500 + 10_000] - running[k * 500]) / 10_000.0;
    let least = (0..=60).min_by(|a, b| mean(*a).total_cmp(&mean(*b)))?;
    let origin = p0 - 500.0 * least as f64 - 5_000.0;
    let theta_e = Temperature::from_k(mean(least));
    let (middles, h) = slices(p0, origin, 4_000);
    let energy = middles.iter().map(|pressure| {
        let t = temperature_on_pseudoadiabat(theta_e, *pressure);
        let air = Air {
            pressure: *pressure,
            temperature: t,
            dewpoint: t,
        };
        let (_, tv) = environment.virtual_at(*pressure).unwrap();
        (GAS_CONSTANT_DRY * h * (tv - air.virtual_temperature().k())).max(0.0)
    });
    Some((origin, theta_e.k(), energy.sum()))
}

fn check_downdraft(environment: &Environment) {
    let found = numbers(environment).downdraft;
    let Some((origin, theta_e, energy)) = plain_downdraft(environment) else {
        assert_eq!(found, None);
        return;
    };
    let found = found.unwrap();
    assert_near("mean theta-e", found.theta_e.k(), theta_e, 2e-4);
    // Two layers may be alike to rounding.
    if (found.origin.pa() - origin).abs() < 1.0 {
        assert_near("energy", found.cape, energy, 0.03 + 1e-4 * energy);
    }
}

/// The lowest pressure step of 2 Pa over which a quantity falls from above zero to zero or below.
fn plain_fall(environment: &Environment, value: impl Fn(Pressure) -> Option<f64>) -> Option<f64> {
    let mut p = environment.bottom().pressure.pa();
    (value(Pressure::from_pa(p))? > 0.0).then_some(())?;
    loop {
        p -= 2.0;
        if value(Pressure::from_pa(p))? <= 0.0 {
            return Some(p + 1.0);
        }
    }
}

/// Both absent, or within 1.1 Pa: a crossing found in steps of 2 Pa.
fn same_crossing(what: &str, found: Option<LevelAt>, plain: Option<f64>) {
    match (found, plain) {
        (Some(found), Some(plain)) => assert_near(what, found.pressure.pa(), plain, 1.1),
        (found, plain) => assert!(
            found.is_none() && plain.is_none(),
            "{what}: {found:?} {plain:?}"
        ),
    }
}

fn everything(
    environment: &Environment,
    winds: Option<&WindProfile>,
) -> Vec<(&'static str, Option<f64>)> {
    let found = LayerNumbers::of(environment, winds);
    let level = |level: Option<LevelAt>| level.map(|level| level.pressure.pa());
    vec![
        ("downdraft", found.downdraft.map(|d| d.cape)),
        ("warmer", found.downdraft.map(|d| d.warmer)),
        ("origin", found.downdraft.map(|d| d.origin.pa())),
        ("wet bulb", found.downdraft.map(|d| d.wet_bulb.k())),
        ("theta-e", found.downdraft.map(|d| d.theta_e.k())),
        ("water", found.precipitable_water),
        ("freezing", level(found.freezing_level)),
        ("freezing", found.freezing_level.map(|level| level.height)),
        ("wet-bulb zero", level(found.wet_bulb_zero)),
        ("lapse", found.lapse_rate_to_3km),
        ("lapse", found.lapse_rate_3_to_6km),
        ("lapse", found.lapse_rate_850_to_500hpa),
        ("lapse", found.lapse_rate_700_to_500hpa),
        ("humidity", found.humidity_lowest_100hpa),
        ("humidity", found.humidity_700_to_500hpa),
        ("mixed by parcel", level(found.mixed_layer_by_parcel)),
        ("mixed by Ri", level(found.mixed_layer_by_richardson)),
    ]
}

fn of_parcel(environment: &Environment, start: Air) -> Vec<(&'static str, Option<f64>)> {
    let lifted = Lifted::of(environment, start, Method::default()).unwrap();
    let found = ParcelNumbers::of(environment, &lifted);
    vec![
        ("LCL", found.lcl_height),
        ("LFC", found.lfc_height),
        ("EL", found.el_height),
        ("below 3 km", found.cape_below_3km),
        ("growth zone", found.cape_in_growth_zone),
        ("normalised", found.normalised_cape),
        ("lifted index", found.lifted_index),
        ("CCL", found.convective.map(|c| c.level.pressure.pa())),
        ("CCL height", found.convective.map(|c| c.level.height)),
        (
            "convective temperature",
            found.convective.map(|c| c.temperature.k()),
        ),
    ]
}

fn breeze() -> WindProfile {
    WindProfile::new(
        [(0.0, 2.0), (1_000.0, 9.0), (3_000.0, 14.0), (9_000.0, 35.0)].map(|(height, u)| {
            WindLevel {
                height,
                pressure: None,
                wind: Vector { u, v: 1.0 },
            }
        }),
    )
    .unwrap()
}

fn check_finite(numbers: Vec<(&'static str, Option<f64>)>) {
    for (what, number) in numbers {
        assert!(number.is_none_or(f64::is_finite), "{what}: {number:?}");
    }
}

proptest! {
    #![proptest_config(config())]

    #[test]
    fn numbers_are_finite(columns in columns(1..60), p in 100e2..1100e2_f64, t in 150.0..330.0_f64, td in 30.0..330.0_f64) {
        let environment = columns.environment();
        check_finite(everything(&environment, Some(&breeze())));
        let bottom = environment.bottom();
        let found = LayerNumbers::of(&environment, None);
        for level in [found.freezing_level, found.wet_bulb_zero, found.mixed_layer_by_parcel].into_iter().flatten() {
            prop_assert!(level.height >= 0.0 && level.pressure <= bottom.pressure && level.pressure >= environment.top());
        }
        if let Some(downdraft) = found.downdraft {
            prop_assert!(downdraft.cape >= 0.0 && downdraft.warmer <= 0.0);
        }
        check_finite(of_parcel(&environment, bottom));
        let start = Air { pressure: Pressure::from_pa(p), temperature: Temperature::from_k(t), dewpoint: Temperature::from_k(td) };
        if Lifted::of(&environment, start, Method::default()).is_some() {
            check_finite(of_parcel(&environment, start));
        }
    }

    /// The numbers belong to the interpolated profile, not to its levels.
    #[test]
    fn inserted_levels_change_no_number(columns in unstable(), shares in prop::collection::vec(0.0..1.0_f64, 1..80)) {
        let (coarse, fine) = (columns.environment(), with_levels_inserted(&columns, &shares).environment());
        let winds = breeze();
        let starts = |e: &Environment| [e.bottom(), mixed_start(e, MIXED_DEPTH).unwrap(), mean_start(e, hpa(900.0), hpa(830.0)).unwrap()];
        let all = |e: &Environment| {
            let mut all = everything(e, Some(&winds));
            for start in starts(e) {
                // The LFC of two layers of like size may be either's, and an area near nothing may vanish.
                all.extend(of_parcel(e, start));
            }
            all
        };
        let small = starts(&coarse).into_iter().any(|start| lift(&coarse, start, Method::default()).unwrap().buoyant.iter().any(|layer| layer.area < 1e-2));
        for ((what, a), (_, b)) in all(&coarse).into_iter().zip(all(&fine)) {
            if small && ["LFC", "EL", "normalised"].contains(&what) {
                continue;
            }
            match (a, b) {
                (Some(a), Some(b)) => prop_assert!(close(a, b, 1e-6), "{what}: {a} and {b}"),
                (a, b) => prop_assert!(a.is_none() && b.is_none(), "{what}: {a:?} and {b:?}"),
            }
        }
    }

    #[test]
    fn crossings_are_what_plain_steps_find(columns in unstable()) {
        let environment = columns.environment();
        let found = numbers(&environment);
        let at = |p: Pressure| environment.at(p);
        same_crossing("0 °C", found.freezing_level, plain_fall(&environment, |p| Some(at(p)?.temperature.c())));
        same_crossing("wet-bulb 0 °C", found.wet_bulb_zero, plain_fall(&environment, |p| Some(at(p)?.wet_bulb().c())));
        let bottom = environment.bottom();
        let theta_v = |air: Air| potential_temperature(air.pressure, air.virtual_temperature()).k();
        let mixed = plain_fall(&environment, |p| Some(theta_v(bottom) * (1.0 + 1e-9) - theta_v(at(p)?)));
        // In the first steps it is a matter of less than half a metre.
        let shallow = |p: f64| bottom.pressure.pa() - p < 4.5;
        let by_parcel = found.mixed_layer_by_parcel.filter(|level| !shallow(level.pressure.pa()));
        same_crossing("mixed", by_parcel, mixed.filter(|p| !shallow(*p)));
        let winds = breeze();
        let by_richardson = LayerNumbers::of(&environment, Some(&winds)).mixed_layer_by_richardson;
        same_crossing("Ri", by_richardson, plain_fall(&environment, |p| {
            let height = environment.height_above_bottom(p)?;
            let wind = winds.at(height)?.speed();
            Some(0.25 * wind * wind - GRAVITY / theta_v(bottom) * (theta_v(at(p)?) - theta_v(bottom)) * height)
        }));
        let w = bottom.mixing_ratio();
        let convective = ParcelNumbers::of(&environment, &surface(&environment)).convective;
        same_crossing("CCL", convective.map(|c| c.level), plain_fall(&environment, |p| {
            Some(environment.virtual_at(p)?.0 - dewpoint_from_mixing_ratio(p, w).k())
        }));
    }

    #[test]
    fn the_inflow_layer_is_that_of_the_plain_search(columns in unstable()) {
        check_inflow(&columns.environment());
    }

    #[test]
    fn so_it_is_in_any_profile(columns in columns(1..60)) {
        check_inflow(&columns.environment());
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: config().cases / 6, ..config() })]

    #[test]
    fn the_downdraft_is_that_of_plain_sums(dry in columns(20..60), moist in unstable()) {
        check_downdraft(&dry.environment());
        check_downdraft(&moist.environment());
    }

    /// Areas and means against plain sums, for parcels of all kinds.
    #[test]
    fn parts_of_areas_are_plain_sums(columns in unstable()) {
        let environment = columns.environment();
        let lifted = surface(&environment);
        let found = ParcelNumbers::of(&environment, &lifted);
        let (middles, h) = slices(lifted.ascent.lcl.pressure.pa().min(environment.bottom().pressure.pa()), environment.top().pa(), 20_000);
        // A slice holds up to half a J/kg: so much hangs on the side of a bound its middle is on.
        let (mut low, mut cold) = (0.0, 0.0);
        for state in parcel_path(environment.bottom(), Method::default(), &middles) {
            let (t, tv) = environment.virtual_at(state.pressure).unwrap();
            let area = (GAS_CONSTANT_DRY * h * (state.virtual_temperature.k() - tv)).max(0.0);
            low += if environment.height_above_bottom(state.pressure).unwrap() < 3_000.0 { area } else { 0.0 };
            cold += if (-30.0..=-10.0).contains(&(t - ZERO_CELSIUS)) { area } else { 0.0 };
        }
        prop_assert!((found.cape_below_3km.unwrap() - low).abs() < 0.6, "{found:?} {low}");
        prop_assert!((found.cape_in_growth_zone.unwrap_or(0.0) - cold).abs() < 0.6, "{found:?} {cold}");
        let p = environment.pressure();
        let (mut water, mut rh) = (0.0, 0.0);
        for pair in p.windows(2) {
            for i in 0..200 {
                let at = environment.at(Pressure::from_pa(pair[0] + (f64::from(i) + 0.5) / 200.0 * (pair[1] - pair[0]))).unwrap();
                water += at.mixing_ratio() * (pair[0] - pair[1]) / 200.0 / GRAVITY;
            }
        }
        for i in 0..20_000 {
            rh += environment.at(Pressure::from_pa(70_000.0 - f64::from(i) - 0.5)).unwrap().relative_humidity() / 20_000.0;
        }
        let found = numbers(&environment);
        prop_assert!((found.precipitable_water.unwrap() - water).abs() < 1e-3 * water, "{found:?} {water}");
        prop_assert!((found.humidity_700_to_500hpa.unwrap() - rh).abs() < 1e-6, "{found:?} {rh}");
    }
}
