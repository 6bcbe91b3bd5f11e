//! What the page of the winds shows, computed before painting.

use crate::chart_frame::to_point;
use crate::motion::motion_id;
use crate::view::{Gesture, View};
use dewbound_session::chart::{
    self, Hodograph, HodographGeometry, HodographView, Scene, StripsView, WindStrips, WindsPicture,
    heights_up_to,
};
use dewbound_session::thermo::WindProfile;
use dewbound_session::{Item, ItemId, wording};
use eframe::egui::{Context, Id, Pos2, Rect, pos2, vec2};

/// Identity of the two strips in the window.
pub(crate) fn strips_id() -> Id {
    Id::unique("wind against height")
}

/// Identity of the hodograph's paper.
pub(crate) fn plane_id() -> Id {
    Id::unique("hodograph")
}

/// The page of one frame, ready to be painted, and what can be touched on it.
#[derive(Debug, Clone)]
pub(crate) struct WindsFrame {
    /// Of which sounding.
    pub item: ItemId,
    /// Where everything is.
    pub places: Places,
    /// The strips.
    pub strips_scene: Scene,
    /// Where winds lie on the hodograph.
    pub plane: HodographGeometry,
    /// The hodograph.
    pub hodograph: Hodograph,
    /// Height being read, m.
    pub cursor: Option<f64>,
}

/// Rectangles of the page.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Places {
    /// Direction and speed against height.
    pub strips: Rect,
    /// The hodograph.
    pub plane: Rect,
    /// The list of numbers.
    pub list: Rect,
}

/// Height of the whole list.
const LIST: f32 = 274.0;
/// The hodograph is at least this high where the whole list has room.
const LEAST_PLANE: f32 = 300.0;
const GAP: f32 = 4.0;

impl Places {
    /// In the page's rectangle.
    pub fn of(page: Rect) -> Self {
        let page = page.shrink(2.0);
        let width = (page.width() * 0.32).clamp(132.0, 300.0);
        let strips = Rect::from_min_size(page.min, vec2(width, page.height()));
        let left = strips.right() + GAP;
        let list = if page.height() - LIST >= LEAST_PLANE {
            LIST
        } else {
            (page.height() * 0.36).max(120.0)
        };
        let split = page.bottom() - list;
        Self {
            strips,
            plane: Rect::from_min_max(pos2(left, page.top()), pos2(page.right(), split)),
            list: Rect::from_min_max(pos2(left, split), page.max),
        }
    }
}

/// A rectangle of the screen for the display list.
fn to_chart(rect: Rect) -> chart::Rect {
    chart::Rect::new(
        f64::from(rect.left()),
        f64::from(rect.top()),
        f64::from(rect.width()),
        f64::from(rect.height()),
    )
}

/// Everything of the page that is computed, before painting; `None` where there is nothing to draw.
pub(crate) fn prepare(
    ctx: &Context,
    item: &Item,
    view: &View,
    page: Rect,
    before: Option<&WindsFrame>,
) -> Option<WindsFrame> {
    let further = &item.results().further;
    let profile = further.wind_profile.as_deref()?;
    let heights = heights_up_to(profile, view.winds_top)?;
    let places = Places::of(page);
    let set = item.document().storm_motion();
    let before = before.filter(|before| before.item == item.id());
    let dragged = matches!(view.gesture, Some(Gesture::Motion { .. }));
    // The paper stands still while the motion is dragged over it.
    let window =
        match (dragged, before) {
            (true, Some(before)) => before.plane.view(),
            _ => view.hodographs.get(&item.id()).copied().unwrap_or_else(|| {
                HodographView::fit(profile, &further.winds, set, view.winds_top)
            }),
        };
    let plane = HodographGeometry::new(to_chart(places.plane), window);
    let strips = WindStrips::new(
        to_chart(places.strips),
        StripsView::fit(profile, view.units.speed, view.winds_top),
    );
    let pointer = |id: Id| {
        ctx.read_response(id)
            .filter(|_| before.is_some() && view.gesture.is_none())
            .and_then(|response| response.hover_pos())
    };
    let over_plane = pointer(plane_id());
    let over_handle = over_plane
        .is_some_and(|at| before.is_some_and(|before| before.hodograph.is_on_handle(to_point(at))));
    let cursor = pointer(strips_id())
        .map(|at| strips.height_at(f64::from(at.y)))
        .or_else(|| {
            over_plane
                .filter(|_| !over_handle)
                .and_then(|at| nearest_height(profile, &plane, heights, at))
        })
        .or(view.height)
        .map(|height| height.clamp(heights[0], heights[1]));
    let picture = WindsPicture {
        set,
        focused: ctx.memory(|memory| memory.has_focus(motion_id())),
        hovered: dragged || over_handle,
        cursor,
        stamp: item.demo().then_some(wording::INVENTED),
        units: view.units,
        ..WindsPicture::new(profile, &further.winds)
    };
    Some(WindsFrame {
        item: item.id(),
        places,
        strips_scene: chart::wind_strips(&strips, &picture),
        plane,
        hodograph: chart::hodograph(&plane, &picture),
        cursor,
    })
}

/// Height of the part of the curve under the pointer; `None` away from it.
fn nearest_height(
    profile: &WindProfile,
    plane: &HodographGeometry,
    [bottom, top]: [f64; 2],
    at: Pos2,
) -> Option<f64> {
    const NEAR: f64 = 14.0;
    const STEPS: u32 = 240;
    (0..=STEPS)
        .filter_map(|step| {
            let height = bottom + f64::from(step) / f64::from(STEPS) * (top - bottom);
            let away = plane.point(profile.at(height)?).distance(to_point(at));
            (away <= NEAR).then_some((height, away))
        })
        .min_by(|a, b| a.1.total_cmp(&b.1))
        .map(|(height, _)| height)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::layout::{LEAST_WINDOW, Layout};

    #[test]
    fn every_part_has_room_in_every_window() {
        for (width, height) in [
            (LEAST_WINDOW.x, LEAST_WINDOW.y),
            (853.0, 533.0),
            (1099.0, 649.0),
            (1100.0, 650.0),
            (1280.0, 800.0),
            (2560.0, 1440.0),
        ] {
            let window = Rect::from_min_size(Pos2::ZERO, vec2(width, height));
            let layout = Layout::of(window);
            let page = layout.page();
            assert!(
                page.contains_rect(layout.chart) && !page.intersects(layout.verdict.shrink(0.1))
            );
            let places = Places::of(page);
            for rect in [places.strips, places.plane, places.list] {
                assert!(page.contains_rect(rect), "{width}x{height}: {rect:?}");
            }
            assert!(places.strips.width() >= 132.0);
            assert!(places.plane.width() >= 270.0 && places.plane.height() >= 240.0);
            assert!(places.list.height() >= 120.0);
        }
    }
}
