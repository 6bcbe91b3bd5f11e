//! A wet thermometer leaving cloud: evaporation cools it until it is dry again.

use super::{repair, superadiabatic_aloft::autoconvective};
use crate::layers::{Falling, falling_layers};
use crate::words::{layer, number};
use crate::{Evidence, Finding, Grade, Rule, View};
use dewbound_sounding::thermo::{Air, Pressure, Temperature};

/// Depth over which the rise of theta is measured when looking for the end of the recovery in fine data, m.
const RECOVERY_STEP_M: f64 = 50.0;
/// The farthest the recovery may go on above the level where theta is back at its value in cloud, Pa.
const RECOVERY_GOES_ON: f64 = 3_000.0;

/// T drops towards the wet bulb on leaving cloud, and recovers.
pub struct WetThermometer;

/// What was seen.
struct Seen {
    falling: Falling,
    /// Where the thermometer has recovered.
    recovery: usize,
    /// Coldest level against the bridge, and by how much, K.
    coldest: usize,
    depressed: f64,
    /// T minus the wet bulb of the bridged air at the coldest level, K.
    above_wet_bulb: Option<f64>,
    /// Relative humidity in cloud and the lowest one below the recovery, 0..1.
    humidity: (f64, f64),
}

impl Rule for WetThermometer {
    fn id(&self) -> &'static str {
        "wet-thermometer"
    }

    fn title(&self) -> &'static str {
        "Wet thermometer above cloud"
    }

    fn source(&self) -> &'static str {
        "WMO-No. 8; US National Weather Service, upper-air data examples"
    }

    fn about(&self) -> &'static str {
        "A superadiabatic layer right above air at or near saturation, with fast drying: the temperature tends to the \
         wet bulb, then recovers. The humidity reported there is doubtful too."
    }

    fn thresholds(&self) -> &'static [&'static str] {
        &[
            "fine.average_hpa",
            "wet-thermometer.theta_drop_k",
            "wet-thermometer.near_saturation_pct",
            "wet-thermometer.drying_pct",
            "wet-thermometer.cloud_within_hpa",
            "wet-thermometer.recovery_hpa",
            "wet-thermometer.recovery_k_per_km",
            "wet-thermometer.below_wet_bulb_k",
            "mixed-layer.contact_hpa",
            "superadiabatic-aloft.autoconvective_m",
        ]
    }

    fn look(&self, view: &View) -> Vec<Finding> {
        let column = &view.column;
        let Some(&lowest) = column.pressure.first() else {
            return Vec::new();
        };
        // The layer in contact with the ground is another matter; fog on it is not.
        let start =
            column.first_at_or_above(lowest - 100.0 * view.threshold("mixed-layer.contact_hpa"));
        let least = view.threshold("wet-thermometer.theta_drop_k");
        let mut findings = Vec::new();
        let mut done = 0;
        for falling in falling_layers(&column.smooth_theta, start..column.len(), least) {
            let pressure = |level: usize| column.pressure[level];
            if falling.base < done
                || view.passes_mixed(pressure(falling.base), pressure(falling.top))
            {
                continue;
            }
            if let Some(seen) = examine(view, falling) {
                done = seen.recovery;
                findings.push(self.finding(view, &seen));
            }
        }
        findings
    }
}

fn examine(view: &View, falling: Falling) -> Option<Seen> {
    let column = &view.column;
    let percent = |name| view.threshold(name) / 100.0;
    let cloud = in_cloud(
        view,
        falling.base,
        percent("wet-thermometer.near_saturation_pct"),
    )?;
    let recovery = recovery(view, falling)?;
    let driest = (falling.base + 1..=recovery)
        .filter_map(|level| column.relative_humidity(level))
        .reduce(f64::min)?;
    if cloud - driest < percent("wet-thermometer.drying_pct") {
        return None;
    }
    let bridge = Bridge::new(view, falling.base, recovery);
    let (coldest, depressed) = (falling.base + 1..recovery)
        .map(|level| {
            (
                level,
                bridge.at(column.pressure[level]) - column.smooth_temperature(level),
            )
        })
        .max_by(|a, b| a.1.total_cmp(&b.1))?;
    let above_wet_bulb = column.dewpoint[coldest].map(|dewpoint| {
        let ambient = bridge.at(column.pressure[coldest]);
        let air = Air {
            pressure: Pressure::from_pa(column.pressure[coldest]),
            temperature: Temperature::from_k(ambient),
            dewpoint: Temperature::from_k(dewpoint.min(ambient)),
        };
        column.smooth_temperature(coldest) - air.wet_bulb().k()
    });
    // Evaporation can't take a thermometer below the wet bulb.
    if above_wet_bulb
        .is_some_and(|above| above < -view.threshold("wet-thermometer.below_wet_bulb_k"))
    {
        return None;
    }
    Some(Seen {
        falling,
        recovery,
        coldest,
        depressed,
        above_wet_bulb,
        humidity: (cloud, driest),
    })
}

/// Relative humidity of the nearly saturated air at or just below the foot of the layer.
fn in_cloud(view: &View, base: usize, near: f64) -> Option<f64> {
    let column = &view.column;
    let within = 100.0 * view.threshold("wet-thermometer.cloud_within_hpa");
    (0..=base)
        .rev()
        .take_while(|&level| column.pressure[level] <= column.pressure[base] + within)
        .filter(|&level| {
            column
                .saturation(level)
                .is_some_and(|saturation| saturation >= near)
        })
        .filter_map(|level| column.relative_humidity(level))
        .reduce(f64::max)
}

/// First level at which theta is back at its value in cloud, and on from there while it still rises as fast as only a
/// thermometer drying (or an inversion) makes it.
fn recovery(view: &View, falling: Falling) -> Option<usize> {
    let column = &view.column;
    let theta = &column.smooth_theta;
    let farthest =
        column.pressure[falling.base] - 100.0 * view.threshold("wet-thermometer.recovery_hpa");
    let back =
        (falling.top + 1..column.len()).find(|&level| theta[level] >= theta[falling.base])?;
    // In coded data the next level may be far away; it is the only witness all the same.
    if column.pressure[back] < farthest && (column.fine || back > falling.top + 1) {
        return None;
    }
    let fast = view.threshold("wet-thermometer.recovery_k_per_km") / 1000.0;
    let end = column.pressure[back] - RECOVERY_GOES_ON;
    let mut recovery = back;
    while column.pressure[recovery] > end {
        let step = if column.fine { RECOVERY_STEP_M } else { 0.0 };
        let ahead = column
            .thickness
            .partition_point(|&z| z < column.thickness[recovery] + step)
            .max(recovery + 1);
        let Some(&z) = column.thickness.get(ahead) else {
            break;
        };
        if theta[ahead] - theta[recovery] < fast * (z - column.thickness[recovery])
            || column.pressure[ahead] < end
        {
            break;
        }
        recovery = if column.fine { recovery + 1 } else { ahead };
    }
    Some(recovery)
}

/// Temperature linear in ln p between two levels.
struct Bridge {
    ln_bottom: f64,
    bottom: f64,
    slope: f64,
}

impl Bridge {
    fn new(view: &View, bottom: usize, top: usize) -> Self {
        let column = &view.column;
        let (ln_bottom, ln_top) = (column.pressure[bottom].ln(), column.pressure[top].ln());
        let (t_bottom, t_top) = (
            column.smooth_temperature(bottom),
            column.smooth_temperature(top),
        );
        Self {
            ln_bottom,
            bottom: t_bottom,
            slope: (t_top - t_bottom) / (ln_top - ln_bottom),
        }
    }

    fn at(&self, pa: f64) -> f64 {
        self.bottom + self.slope * (pa.ln() - self.ln_bottom)
    }
}

impl WetThermometer {
    fn finding(&self, view: &View, seen: &Seen) -> Finding {
        let column = &view.column;
        let pressure = |level: usize| Pressure::from_pa(column.pressure[level]);
        let (base, recovery) = (seen.falling.base, seen.recovery);
        let (bottom, top) = (pressure(base), pressure(recovery));
        let depth_m = column.thickness[recovery] - column.thickness[base];
        let (lapse, beyond) = autoconvective(view, &[seen.falling]);
        let mut evidence = vec![
            Evidence::new(
                "depressed_k",
                "temperature depressed by up to",
                seen.depressed,
                "K",
                1,
            ),
            Evidence::new(
                "depressed_at_hpa",
                "coldest at",
                pressure(seen.coldest).hpa(),
                "hPa",
                0,
            ),
            Evidence::new("theta_drop_k", "theta falls by", seen.falling.drop, "K", 1),
            Evidence::new(
                "depth_hpa",
                "depth in pressure until recovered",
                bottom.hpa() - top.hpa(),
                "hPa",
                0,
            ),
            Evidence::new(
                "depth_m",
                "depth in height until recovered",
                depth_m,
                "m",
                0,
            ),
            Evidence::new("recovered_at_hpa", "recovered at", top.hpa(), "hPa", 0),
            Evidence::new(
                "rh_in_cloud_pct",
                "relative humidity in cloud",
                100.0 * seen.humidity.0,
                "%",
                0,
            ),
            Evidence::new(
                "rh_above_pct",
                "lowest relative humidity above",
                100.0 * seen.humidity.1,
                "%",
                0,
            ),
        ];
        if let Some(above) = seen.above_wet_bulb {
            evidence.push(Evidence::new(
                "above_wet_bulb_k",
                "coldest temperature above the wet bulb of the bridged air",
                above,
                "K",
                1,
            ));
        }
        if let Some(lapse) = lapse {
            evidence.push(Evidence::new(
                "steepest_k_per_km",
                "steepest lapse rate over 50 m or more",
                1000.0 * lapse,
                "K/km",
                1,
            ));
        }
        Finding {
            rule: self.id(),
            title: self.title(),
            grade: if beyond { Grade::Erroneous } else { Grade::Doubtful },
            bottom: Some(bottom),
            top: Some(top),
            heights: view.heights(bottom, top),
            summary: format!(
                "Temperature reads up to {} K too cold over {} m above the cloud top ({}).",
                number(seen.depressed, 1),
                number(depth_m, 0),
                layer(bottom, top)
            ),
            evidence,
            guilty: "Water or ice from the cloud evaporates from the thermometer in the dry air above and cools it towards \
                     the wet bulb until it is dry. The kink isn't in the air: it adds buoyancy there and makes CAPE too \
                     high. The humidity in the layer is doubtful too."
                .into(),
            innocent: "Evaporation and radiation do cool the uppermost metres of a real cloud, and a sharp inversion can \
                       sit on it; but air this much colder than the cloud beneath would sink at once."
                .into(),
            caveat: if column.dewpoint[seen.coldest].is_none() {
                "No humidity was reported at the coldest level, so the wet bulb couldn't be compared.".into()
            } else {
                String::new()
            },
            repairs: repair::bridges(view, base, recovery),
            wind_only: false,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synthetic::{Air0, BOTH, Dice, Scene, levels};
    use dewbound_sounding::{Amendment, BridgeHumidity, Sampling};

    fn cloudy(dice: &mut Dice) -> (Air0, f64) {
        let base = dice.between(2600.0, 4200.0);
        let top = base + dice.between(300.0, 1500.0);
        let air = Air0 {
            cloud: Some((base, top)),
            rh: dice.between(0.1, 0.4),
            ..Air0::random(dice)
        };
        (air, top)
    }

    #[test]
    fn a_wet_thermometer_is_seen_with_its_depth_and_recovery() {
        for sampling in BOTH {
            let mut hits = 0;
            let cases = 40_u64;
            for seed in 0..cases {
                let mut dice = Dice::new(100 + seed);
                let (air, top) = cloudy(&mut dice);
                // Wet long enough for the thermometer to fall well below the cloud's theta.
                let wet_for = dice.between(15.0, 40.0);
                let ascent = air
                    .ascent()
                    .wet(top - 20.0, wet_for, 8.0)
                    .noisy(&mut dice, 0.1, 0.02);
                let at_top = ascent.p[ascent.at_height(top)];
                let found = Scene::day(ascent.sampled(sampling)).check(&WetThermometer);
                let hit = found.iter().find(|finding| {
                    finding
                        .bottom
                        .is_some_and(|b| b.pa() > at_top - 3_000.0 && b.pa() < at_top + 3_000.0)
                });
                hits += u64::from(hit.is_some());
            }
            assert!(hits * 100 >= cases * 95, "{sampling:?}: {hits} of {cases}");
        }
    }

    #[test]
    fn a_cloud_top_without_fault_is_silent() {
        for sampling in BOTH {
            for seed in 0..60 {
                let mut dice = Dice::new(300 + seed);
                let (air, _) = cloudy(&mut dice);
                let ascent = air.ascent().noisy(&mut dice, 0.1, 0.02);
                let found = Scene::day(ascent.sampled(sampling)).check(&WetThermometer);
                assert!(found.is_empty(), "{sampling:?} seed {seed}: {found:#?}");
            }
        }
    }

    #[test]
    fn bridges_keep_first_the_humidity_that_was_reported() {
        let mut dice = Dice::new(5);
        let air = Air0 {
            cloud: Some((2600.0, 3600.0)),
            rh: 0.2,
            ..Air0::default()
        };
        let ascent = air
            .ascent()
            .wet(3580.0, 30.0, 8.0)
            .noisy(&mut dice, 0.05, 0.01);
        for (sampling, first) in [
            (Sampling::Fine, BridgeHumidity::RelativeHumidity),
            (Sampling::Coded, BridgeHumidity::MixingRatio),
        ] {
            let found = Scene::day(ascent.sampled(sampling)).check(&WetThermometer);
            assert_eq!(found.len(), 1, "{sampling:?}");
            let Amendment::BridgeLayer {
                bottom_pa,
                top_pa,
                humidity,
            } = found[0].repairs[0].amendments[0]
            else {
                panic!("not a bridge")
            };
            assert_eq!(humidity, first);
            assert_eq!(found[0].repairs.len(), 2);
            let z = |p: f64| ascent.z[ascent.p.partition_point(|&q| q > p)];
            assert!((z(bottom_pa) - 3580.0).abs() < 60.0, "{}", z(bottom_pa));
            // Wet for 150 m, then four seconds' time constant: recovered within 100 m of that.
            assert!(z(top_pa) > 3700.0 && z(top_pa) < 3950.0, "{}", z(top_pa));
        }
    }

    #[test]
    fn colder_than_the_wet_bulb_is_not_the_wet_bulb() {
        // 8 K too cold at 640 hPa where the wet bulb is about 4 K below the bridged air.
        let rows = |cold: f64| {
            [
                (1000.0, 25.0, 18.0),
                (850.0, 15.0, 10.0),
                (660.0, 2.0, 1.8),
                (640.0, cold, -16.0),
                (620.0, 0.5, -20.0),
                (500.0, -10.0, -30.0),
                (300.0, -38.0, -55.0),
            ]
        };
        assert_eq!(
            Scene::day(levels(&rows(-2.0))).check(&WetThermometer).len(),
            1
        );
        assert!(
            Scene::day(levels(&rows(-9.0)))
                .check(&WetThermometer)
                .is_empty()
        );
    }

    #[test]
    fn it_names_the_cause_of_the_superadiabatic_layer() {
        let air = Air0 {
            cloud: Some((2600.0, 3600.0)),
            rh: 0.2,
            ..Air0::default()
        };
        let ascent = air
            .ascent()
            .wet(3580.0, 30.0, 8.0)
            .noisy(&mut Dice::new(9), 0.05, 0.01);
        for sampling in BOTH {
            let scene = Scene::day(ascent.sampled(sampling));
            assert_eq!(scene.check(&super::super::SuperadiabaticAloft).len(), 1);
            let rules: Vec<_> = scene
                .findings()
                .iter()
                .map(|finding| finding.rule)
                .collect();
            assert_eq!(rules, ["wet-thermometer"], "{sampling:?}");
        }
    }
}
