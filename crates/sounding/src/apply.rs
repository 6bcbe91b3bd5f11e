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
