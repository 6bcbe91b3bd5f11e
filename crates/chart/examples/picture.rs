use dewbound_chart::*;
fn main() {
    let dir = std::env::args().nth(1).unwrap_or_else(|| ".".to_owned());
    for (w, h) in [(600.0, 500.0), (1000.0, 800.0), (1600.0, 1100.0)] {
        let frame = Rect::new(0.0, 0.0, w, h);
        let g = Geometry::new(frame, View::default());
        for (name, palette) in [("light", Palette::Light), ("dark", Palette::Dark)] {
            std::fs::write(format!("{dir}/bg-{w}-{name}.svg"), svg(frame, &[&background(&g)], palette)).unwrap();
        }
    }
}
