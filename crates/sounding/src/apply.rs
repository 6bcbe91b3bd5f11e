//! Amendments applied in order.

use crate::layers::{bridge_layer, disregard_above, drop_levels, mix_moisture};
use crate::reach::{SurfaceEdit, edit_surface};
use crate::{Amendment, Amendments, Daylight, Note, Profile, Working};

/// See [`Amendments::apply`].
pub(crate) fn apply(amendments: &Amendments, received: &Profile, daylight: Daylight) -> Working {
    let mut profile = received.clone();
    let mut notes: Vec<Note> = Vec::new();
    let edit = SurfaceEdit {
        temperature: amendments.surface_temperature(),
        dewpoint: amendments.surface_dewpoint(),
        reach: amendments.reach,
        daylight,
    };
    let mut reach = None;
    for entry in amendments.entries.iter().filter(|entry| entry.enabled) {
        match entry.amendment {
            Amendment::SurfaceTemperature { .. } | Amendment::SurfaceDewpoint { .. } => {
                if reach.is_none() {
                    reach = Some(edit_surface(&mut profile, edit, &mut notes));
                }
            }
            Amendment::BridgeLayer {
                bottom_pa,
                top_pa,
                humidity,
            } => {
                bridge_layer(&mut profile, bottom_pa, top_pa, humidity, &mut notes);
            }
            Amendment::DropLevels { bottom_pa, top_pa } => {
                drop_levels(&mut profile, bottom_pa, top_pa, &mut notes)
            }
            Amendment::MixMoisture {
                bottom_pa,
                top_pa,
                mixing_ratio,
            } => {
                mix_moisture(&mut profile, bottom_pa, top_pa, mixing_ratio, &mut notes);
            }
            Amendment::DisregardAbove { pressure_pa } => {
                disregard_above(&mut profile, pressure_pa, &mut notes)
            }
        }
    }
    // Without a surface edit the reach one would have is still told: it stands beside the handle.
    let reach = reach.unwrap_or_else(|| edit_surface(&mut profile, edit, &mut notes));
    Working {
        profile,
        reach,
        notes,
    }
}

#[cfg(test)]
mod tests {
    use crate::testing::{
        afternoon, any_amendments, any_fine_levels, any_level, config, received, strictly_falling,
    };
    use crate::{Amendments, Daylight, Numbers, Reach};
    use dewbound_thermo::Temperature;
    use proptest::prelude::*;

    fn any_profile() -> impl Strategy<Value = crate::Profile> {
        prop_oneof![
            2 => prop::collection::vec(any_level(), 0..40),
            1 => any_fine_levels(),
            2 => Just(afternoon()),
        ]
        .prop_map(|levels| received(levels).0)
    }

    fn any_daylight() -> impl Strategy<Value = Daylight> {
        prop_oneof![
            Just(Daylight::Day),
            Just(Daylight::Night),
            Just(Daylight::Unknown)
        ]
    }

    proptest! {
        #![proptest_config(config())]

        #[test]
        fn any_amendments_leave_a_sound_profile(
            profile in any_profile(), list in any_amendments(), daylight in any_daylight(),
        ) {
            let working = list.apply(&profile, daylight);
            let after = &working.profile;
            prop_assert!(strictly_falling(after));
            let columns = [
                after.height.len(), after.temperature.len(), after.dewpoint.len(), after.wind.len(), after.received.len(),
            ];
            prop_assert!(columns.iter().all(|&n| n == after.len()));
            prop_assert_eq!(after.surface.is_some(), profile.surface.is_some());
            prop_assert_eq!(after.surface_pressure(), profile.surface_pressure());
            for (t, td) in after.temperature.iter().zip(&after.dewpoint) {
                prop_assert!(t.is_none_or(f64::is_finite) && td.is_none_or(f64::is_finite));
                if let (Some(t), Some(td)) = (t, td) {
                    prop_assert!(td <= t, "dew point {} above temperature {}", td, t);
                }
            }
            prop_assert!(!working.reach.why.is_empty());
            let _ = Numbers::of(after);
            // The same input gives the same result.
            prop_assert_eq!(list.apply(&profile, daylight), working);
        }

        #[test]
        fn switched_off_is_as_received(
            profile in any_profile(), mut list in any_amendments(), daylight in any_daylight(),
        ) {
            for entry in &mut list.entries {
                entry.enabled = false;
            }
            let working = list.apply(&profile, daylight);
            prop_assert_eq!(working.profile, profile);
            prop_assert!(working.notes.is_empty());
        }

        #[test]
        fn surface_values_as_received_change_nothing(
            profile in any_profile(), daylight in any_daylight(),
            reach in prop::option::of(prop_oneof![Just(Reach::Level), Just(Reach::Mixed), Just(Reach::Tapered)]),
        ) {
            if let Some(air) = profile.surface_air() {
                let list = Amendments { reach, ..Amendments::default() }
                    .with_surface_temperature(air.temperature)
                    .with_surface_dewpoint(air.dewpoint);
                let working = list.apply(&profile, daylight);
                prop_assert_eq!(working.profile, profile);
                prop_assert!(working.notes.is_empty());
            }
        }

        #[test]
        fn order_of_the_two_surface_entries_does_not_matter(
            profile in any_profile(), daylight in any_daylight(), t in 250.0..315.0_f64, td in 250.0..305.0_f64,
            reach in prop_oneof![Just(Reach::Level), Just(Reach::Mixed), Just(Reach::Tapered)],
        ) {
            let (t, td) = (Temperature::from_k(t), Temperature::from_k(td));
            let list = Amendments { reach: Some(reach), ..Amendments::default() };
            let one = list.with_surface_temperature(t).with_surface_dewpoint(td).apply(&profile, daylight);
            let other = list.with_surface_dewpoint(td).with_surface_temperature(t).apply(&profile, daylight);
            prop_assert_eq!(one, other);
        }
    }
}
