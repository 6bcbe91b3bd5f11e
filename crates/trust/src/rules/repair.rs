//! Repairs that more than one rule offers.

use crate::words::{celsius, layer, number};
use crate::{Repair, View};
use dewbound_sounding::thermo::{Pressure, Temperature};
use dewbound_sounding::{Amendment, BridgeHumidity, HumidityReported};

/// Temperature bridged between two believed levels of the column: humidity kept in the way the sonde reported it
/// first, the other way second; one repair when no humidity lies between them.
pub(super) fn bridges(view: &View, bottom: usize, top: usize) -> Vec<Repair> {
    let column = &view.column;
    let (bottom_pa, top_pa) = (column.pressure[bottom], column.pressure[top]);
    let span = layer(Pressure::from_pa(bottom_pa), Pressure::from_pa(top_pa));
    let bridge = |id, humidity, kept: &str| Repair {
        id,
        what: format!("Bridge {span}{kept}"),
        amendments: vec![Amendment::BridgeLayer {
            bottom_pa,
            top_pa,
            humidity,
        }],
    };
    if column.dewpoint[bottom..=top].iter().all(Option::is_none) {
        return vec![bridge("bridge", BridgeHumidity::RelativeHumidity, "")];
    }
    let rh = bridge(
        "bridge-rh-kept",
        BridgeHumidity::RelativeHumidity,
        ", humidity kept as RH",
    );
    let w = bridge(
        "bridge-w-kept",
        BridgeHumidity::MixingRatio,
        ", humidity kept as mixing ratio",
    );
    match view.context.sounding.humidity_reported {
        HumidityReported::RelativeHumidity => vec![rh, w],
        HumidityReported::DewPoint | HumidityReported::MixingRatio => vec![w, rh],
    }
}

/// The levels strictly between two believed ones left out. `None` when there are none.
pub(super) fn drop_between(view: &View, bottom: usize, top: usize) -> Option<Repair> {
    let pressure = |level: usize| view.column.pressure[level];
    let count = top
        .checked_sub(bottom)?
        .checked_sub(1)
        .filter(|&count| count > 0)?;
    let ((bottom_pa, top_pa), what) = if count == 1 {
        let p = pressure(bottom + 1);
        ((p, p), format!("Drop the level at {}", at(p)))
    } else {
        let (p, q) = (pressure(bottom), pressure(top));
        (
            (p, q),
            format!(
                "Drop the {count} levels inside {}",
                layer(Pressure::from_pa(p), Pressure::from_pa(q))
            ),
        )
    };
    Some(Repair {
        id: "drop-levels",
        what,
        amendments: vec![Amendment::DropLevels { bottom_pa, top_pa }],
    })
}

/// `652 hPa`.
pub(super) fn at(pa: f64) -> String {
    layer(Pressure::from_pa(pa), Pressure::from_pa(pa))
}

/// `652 and 651 hPa`, with tenths where whole numbers can't tell them apart.
pub(super) fn both(bottom: f64, top: f64) -> String {
    ends(bottom, top, "and")
}

/// `652 to 601 hPa`, with tenths where whole numbers can't tell the ends apart.
pub(super) fn from_to(bottom: f64, top: f64) -> String {
    ends(bottom, top, "to")
}

fn ends(bottom: f64, top: f64, between: &str) -> String {
    let text = |pa: f64, decimals| number(pa / 100.0, decimals);
    let decimals = usize::from(text(bottom, 0) == text(top, 0));
    format!(
        "{} {between} {} hPa",
        text(bottom, decimals),
        text(top, decimals)
    )
}

/// Surface dew point set.
pub(super) fn surface_dewpoint(id: &'static str, dewpoint: Temperature, because: &str) -> Repair {
    Repair {
        id,
        what: format!(
            "Set the surface dew point to {}, {because}",
            celsius(dewpoint)
        ),
        amendments: vec![Amendment::SurfaceDewpoint {
            dewpoint_k: dewpoint.k(),
        }],
    }
}

/// Surface temperature set.
pub(super) fn surface_temperature(
    id: &'static str,
    temperature: Temperature,
    because: &str,
) -> Repair {
    Repair {
        id,
        what: format!(
            "Set the surface temperature to {}, {because}",
            celsius(temperature)
        ),
        amendments: vec![Amendment::SurfaceTemperature {
            temperature_k: temperature.k(),
        }],
    }
}

/// Surface temperature and dew point set.
pub(super) fn surface_air(
    id: &'static str,
    temperature: Temperature,
    dewpoint: Temperature,
    because: &str,
) -> Repair {
    Repair {
        id,
        what: format!(
            "Set the surface temperature to {} and the dew point to {}, {because}",
            celsius(temperature),
            celsius(dewpoint)
        ),
        amendments: vec![
            Amendment::SurfaceTemperature {
                temperature_k: temperature.k(),
            },
            Amendment::SurfaceDewpoint {
                dewpoint_k: dewpoint.k(),
            },
        ],
    }
}

/// Mixing ratio of a layer set.
pub(super) fn mixed_moisture(
    id: &'static str,
    bottom: Pressure,
    top: Pressure,
    mixing_ratio: f64,
) -> Repair {
    Repair {
        id,
        what: format!(
            "Believe the surface: {} g/kg through {}",
            number(1000.0 * mixing_ratio, 1),
            layer(bottom, top)
        ),
        amendments: vec![Amendment::MixMoisture {
            bottom_pa: bottom.pa(),
            top_pa: top.pa(),
            mixing_ratio: Some(mixing_ratio),
        }],
    }
}
