//! The isopleths of a view.

use crate::{Geometry, Scene};

/// Isopleths, plot edge and axis labels. Depends on nothing but the geometry: keep it while that stays.
pub fn background(_geometry: &Geometry) -> Scene {
    Scene::default()
}

/// The background of the last geometry asked for.
#[derive(Debug, Clone, Default)]
pub struct BackgroundCache {
    kept: Option<(Geometry, Scene)>,
}

impl BackgroundCache {
    /// The background of this geometry, made anew only when it changed.
    pub fn get(&mut self, geometry: &Geometry) -> &Scene {
        if self.kept.as_ref().is_none_or(|(of, _)| of != geometry) {
            self.kept = None;
        }
        let (_, scene) = self
            .kept
            .get_or_insert_with(|| (*geometry, background(geometry)));
        scene
    }
}
