//! An invented warm-season sounding, for looking at pictures and for timing: no place, no date, no observation.

use dewbound_sounding::{Profile, Sampling, Wind};

/// Pressure (hPa), temperature and dew point (degC), wind direction and speed (degrees, m/s) at the bends of the profile.
const BENDS: [(f64, f64, f64, f64, f64); 13] = [
    (968.0, 31.0, 21.5, 165.0, 6.0),
    (925.0, 26.5, 19.8, 175.0, 11.0),
    (870.0, 21.6, 17.6, 185.0, 14.0),
    (845.0, 22.8, 11.0, 195.0, 15.0),
    (700.0, 10.2, -4.0, 225.0, 17.0),
    (640.0, 4.4, 2.6, 235.0, 18.0),
    (600.0, -2.8, -12.0, 240.0, 20.0),
    (500.0, -11.5, -24.0, 245.0, 25.0),
    (400.0, -24.0, -38.0, 250.0, 31.0),
    (300.0, -40.5, -55.0, 250.0, 39.0),
    (200.0, -56.0, -71.0, 255.0, 48.0),
    (150.0, -63.0, -79.0, 260.0, 40.0),
    (100.0, -67.0, -86.0, 270.0, 22.0),
];

/// The profile at `levels` evenly spaced in ln p, with a ripple of a few tenths of a degree like that of a fine sounding.
pub fn invented(levels: usize) -> Profile {
    let levels = levels.max(2);
    let (bottom, top) = (BENDS[0].0, BENDS[BENDS.len() - 1].0);
    let mut profile = Profile {
        surface: Some(0),
        sampling: Sampling::Fine,
        ..Profile::default()
    };
    let mut height = 390.0;
    let mut before: Option<(f64, f64)> = None;
    for level in 0..levels {
        let hpa = bottom * (top / bottom).powf(level as f64 / (levels - 1) as f64);
        let above = BENDS
            .iter()
            .position(|b| b.0 <= hpa + 1e-9)
            .unwrap_or(BENDS.len() - 1)
            .max(1);
        let (a, b) = (BENDS[above - 1], BENDS[above]);
        let share = (a.0 / hpa).ln() / (a.0 / b.0).ln();
        let mix = |x: f64, y: f64| x + share * (y - x);
        let n = level as f64;
        let ripple = if level == 0 {
            0.0
        } else {
            0.1 * (n * 0.037).sin() + 0.05 * (n * 1.71).sin()
        };
        let t = mix(a.1, b.1) + ripple;
        let td = (mix(a.2, b.2) + 3.0 * ripple).min(t);
        let kelvin = t + 273.15;
        if let Some((p, k)) = before {
            height += 287.05 / 9.80665 * 0.5 * (k + kelvin) * (p / hpa).ln();
        }
        before = Some((hpa, kelvin));
        profile.pressure.push(hpa * 100.0);
        profile.height.push(Some(height));
        profile.temperature.push(Some(kelvin));
        profile.dewpoint.push(Some(td + 273.15));
        profile.wind.push(Some(Wind {
            direction: mix(a.3, b.3),
            speed: mix(a.4, b.4),
        }));
        profile.received.push(Some(level));
    }
    profile
}
