//! The superadiabatic layer in contact with the ground.

use super::{repair, superadiabatic_aloft, surface_mismatch::temperature_refuted};
use crate::layers::{Falling, falling_layers};
use crate::words::{layer, number};
use crate::{Evidence, Finding, Grade, Rule, View};
use dewbound_sounding::Daylight;
use dewbound_sounding::thermo::{KAPPA, Pressure, REFERENCE_PRESSURE, Temperature};

/// Share of the fall of theta within which the depth of the layer is counted: the rest fades into the mixed layer.
const MOST_OF_THE_FALL: f64 = 0.8;

/// Theta rising by more than this from the ground to the foot of the layer parts it from the ground, K.
const STABLE_BENEATH_K: f64 = 0.5;

/// The heated surface layer: normal by day and shallow, abnormal at night or deep.
pub struct SuperadiabaticContact;

impl Rule for SuperadiabaticContact {
    fn id(&self) -> &'static str {
        "superadiabatic-contact"
    }

    fn title(&self) -> &'static str {
        "Superadiabatic layer at the ground"
    }

    fn source(&self) -> &'static str {
        "common practice, no source"
    }

    fn about(&self) -> &'static str {
        "Theta falls with height from the ground, or from a level less than 50 hPa above it. A shallow layer of this \
         kind by day is normal and not shown; at night, or deep, or not reaching down to the ground, it is doubtful."
    }

    fn thresholds(&self) -> &'static [&'static str] {
        &[
            "fine.average_hpa",
            "superadiabatic-contact.theta_drop_k",
            "superadiabatic-contact.deep_hpa",
            "superadiabatic-contact.coded_allowance_k",
            "superadiabatic-aloft.above_surface_hpa",
            "mixed-layer.contact_hpa",
        ]
    }

    fn look(&self, view: &View) -> Vec<Finding> {
        let column = &view.column;
        let Some(surface) = column.surface_pressure() else {
            return Vec::new();
        };
        let least = view.threshold("superadiabatic-contact.theta_drop_k");
        let near = 100.0 * view.threshold("superadiabatic-aloft.above_surface_hpa");
        // Two such depths are searched so that a layer that starts below the limit is seen whole.
        let end = column.first_at_or_above(surface - 2.0 * near);
        falling_layers(&column.smooth_theta, 0..end, least)
            .into_iter()
            .filter(|layer| column.pressure[layer.base] > surface - near)
            .filter(|layer| {
                !view.passes_mixed(column.pressure[layer.base], column.pressure[layer.top])
            })
            .filter_map(|layer| self.finding(view, surface, layer))
            .collect()
    }
}

impl SuperadiabaticContact {
    fn finding(&self, view: &View, surface: f64, falling: Falling) -> Option<Finding> {
        let column = &view.column;
        let theta = &column.smooth_theta;
        let Falling {
            base,
            mut top,
            drop,
        } = falling;
        // No more stable air beneath its foot than noise makes.
        let attached = surface - column.pressure[base]
            <= 100.0 * view.threshold("mixed-layer.contact_hpa")
            && theta[0] >= theta[base] - STABLE_BENEATH_K;
        if attached {
            top = (base..=top)
                .find(|&level| theta[level] <= theta[base] - MOST_OF_THE_FALL * drop)
                .unwrap_or(top);
        }
        // One cause is one finding: a surface temperature proven wrong makes the layer.
        if attached && temperature_refuted(view) {
            return None;
        }
        let depth = (surface - column.pressure[top]) / 100.0;
        let deep = depth > view.threshold("superadiabatic-contact.deep_hpa");
        let daylight = view.context.daylight;
        if attached && daylight == Daylight::Day {
            let allowance = if column.fine {
                0.0
            } else {
                view.threshold("superadiabatic-contact.coded_allowance_k")
            };
            if !deep || drop < view.threshold("superadiabatic-contact.theta_drop_k") + allowance {
                return None;
            }
        }
        let (bottom_p, top_p) = (
            Pressure::from_pa(column.pressure[base]),
            Pressure::from_pa(column.pressure[top]),
        );
        let why = match (attached, daylight, deep) {
            (false, _, _) => {
                "stabler air beneath parts it from the ground, whose heating doesn't explain it"
            }
            (true, Daylight::Night, _) => "at night the ground cools the air",
            (true, Daylight::Unknown, _) => {
                "normal if the sun is heating the ground, not otherwise"
            }
            (true, Daylight::Day, _) => "deep for a layer heated by the ground",
        };
        let repairs = if attached {
            let mixed =
                Temperature::from_k(theta[top] * (surface / REFERENCE_PRESSURE).powf(KAPPA));
            // A dew point above the new temperature would be cut off: it is set to the same, as saturated air.
            let saturates = column.dewpoint.first().copied().flatten();
            let because = "mixed with the air above";
            vec![if saturates.is_some_and(|td| td > mixed.k()) {
                repair::surface_air("surface-air-saturated", mixed, mixed, because)
            } else {
                repair::surface_temperature("surface-temperature-from-sonde", mixed, because)
            }]
        } else {
            superadiabatic_aloft::repairs(view, base, top)
        };
        Some(Finding {
            rule: self.id(),
            title: if attached {
                self.title()
            } else {
                "Superadiabatic layer near the ground"
            },
            grade: Grade::Doubtful,
            bottom: Some(bottom_p),
            top: Some(top_p),
            heights: view.heights(bottom_p, top_p),
            summary: format!(
                "Theta falls by {} K in {}: {why}.",
                number(drop, 1),
                layer(bottom_p, top_p)
            ),
            evidence: vec![
                Evidence::new("theta_drop_k", "theta falls by", drop, "K", 1),
                Evidence::new("depth_hpa", "its top above the ground in pressure", depth, "hPa", 0),
                Evidence::new(
                    "depth_m",
                    "its top above the ground in height",
                    column.thickness[top] - column.thickness[0],
                    "m",
                    0,
                ),
            ],
            guilty: if attached {
                "The surface temperature is too high (a badly ventilated or sunlit screen, a value from another place or \
                 time), or the sonde still carried the warmth of the launch building. Surface parcels then start too \
                 warm: too much CAPE, too little inhibition."
            } else {
                "The level at its foot is too warm (the sonde still carried the warmth of the launch building) or the one \
                 at its top too cold, or one of them was miscoded."
            }
            .into(),
            innocent: if attached {
                "Cold air flowing over warm water or a warm town, or ground that was in full sun until shortly before \
                 launch, keeps a superadiabatic layer going."
            } else {
                "A shallow colder current at the ground (sea breeze, drainage, outflow) has slid under air that was \
                 heated before, or the balloon left the lee of a building or a hill."
            }
            .into(),
            caveat: if attached && daylight == Daylight::Unknown {
                format!(
                    "Day or night isn't known ({}), so an ordinary daytime layer can't be told apart.",
                    view.missing_for_daylight()
                )
            } else {
                String::new()
            },
            repairs,
            wind_only: false,
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synthetic::{Air0, BOTH, Dice, Scene, levels};

    #[test]
    fn normal_by_day_doubtful_at_night_and_when_unknown() {
        for sampling in BOTH {
            let ascent = Air0 {
                contact_k: 3.0,
                ..Air0::default()
            }
            .ascent()
            .noisy(&mut Dice::new(1), 0.05, 0.01);
            let check = |daylight| {
                Scene::new(ascent.sampled(sampling), daylight).check(&SuperadiabaticContact)
            };
            assert!(check(Daylight::Day).is_empty(), "{sampling:?}");
            let night = check(Daylight::Night);
            assert_eq!(night.len(), 1, "{sampling:?}");
            assert!(night[0].summary.contains("at night") && night[0].caveat.is_empty());
            let unknown = check(Daylight::Unknown);
            assert!(
                unknown[0].grade == Grade::Doubtful && unknown[0].caveat.contains("isn't known")
            );
        }
    }

    #[test]
    fn deep_is_doubtful_by_day_too() {
        // Theta falls by 4 K over the lowest 60 hPa.
        let rows = [
            (1000.0, 30.0, 15.0),
            (940.0, 20.9, 12.0),
            (850.0, 12.5, 8.0),
            (700.0, 3.0, -10.0),
            (500.0, -15.0, -30.0),
        ];
        let found = Scene::day(levels(&rows)).check(&SuperadiabaticContact);
        assert_eq!(found.len(), 1, "{found:#?}");
        assert!(found[0].summary.contains("deep"));
        assert_eq!(found[0].repairs[0].id, "surface-temperature-from-sonde");
    }

    #[test]
    fn a_layer_that_does_not_reach_the_ground_is_doubtful_by_day() {
        let rows = [
            (1000.0, 25.0, 15.0),
            (970.0, 24.0, 14.0),
            (955.0, 20.0, 13.0),
            (850.0, 13.0, 8.0),
            (500.0, -15.0, -30.0),
        ];
        let found = Scene::day(levels(&rows)).check(&SuperadiabaticContact);
        assert_eq!(found.len(), 1, "{found:#?}");
        assert!(found[0].summary.contains("parts it from the ground"));
        assert!(!found[0].title.contains("at the ground"));
    }
}
