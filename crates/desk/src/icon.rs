//! The window's icon, drawn here: a dew-point line with its ring.

use eframe::egui::IconData;

const SIZE: u32 = 64;

/// A ring at the foot of a slanting line, on chart paper.
pub(crate) fn icon() -> IconData {
    let mut rgba = Vec::with_capacity((SIZE * SIZE * 4) as usize);
    for y in 0..SIZE {
        for x in 0..SIZE {
            let (x, y) = (x as f32 + 0.5, y as f32 + 0.5);
            let ring = (x - 24.0).hypot(y - 46.0);
            let along = 46.0 - y;
            let line = (x - (24.0 + 0.45 * along)).abs();
            let drawn = (7.0..12.0).contains(&ring) || (along > 10.0 && line < 2.6 && y > 8.0);
            let colour: [u8; 3] = if drawn {
                [0x00, 0x66, 0x4a]
            } else {
                [0xfb, 0xf7, 0xee]
            };
            rgba.extend(colour);
            rgba.push(255);
        }
    }
    IconData {
        rgba,
        width: SIZE,
        height: SIZE,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn has_as_many_bytes_as_its_size_says() {
        let icon = icon();
        assert_eq!(icon.rgba.len(), (icon.width * icon.height * 4) as usize);
    }
}
