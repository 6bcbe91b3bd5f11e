//! What the chart shows, computed before painting.

use crate::handle::{self, handle_id};
use crate::quantity::parcel_name;
use crate::view::{Gesture, View};
use dewbound_session::chart::{
    self, Bracket, BracketGrade, CandidateMark, Geometry, HeightScale, ParcelDrawing, Picture,
    Point, Readout, Scene, SurfaceMark, SurfaceMarks, Touch,
};
use dewbound_session::sounding::{Parcel, Profile};
use dewbound_session::thermo::{self, Air, MIXED_DEPTH, MOST_UNSTABLE_DEPTH, Method, Temperature};
use dewbound_session::trust::Grade;
use dewbound_session::{CandidateKind, Doubt, Item, ItemId, SurfaceQuantity, wording};
use eframe::egui::{Context, Id, Pos2, Rect};
use std::sync::Arc;

/// Identity of the chart in the window.
pub(crate) fn chart_id() -> Id {
    Id::unique("skew-t chart")
}

/// A place on the screen as a point of the display list.
pub(crate) fn to_point(position: Pos2) -> Point {
    Point::new(f64::from(position.x), f64::from(position.y))
}

/// The chart of one frame, ready to be painted, and what can be touched in it.
#[derive(Debug, Clone)]
pub(crate) struct ChartFrame {
    /// Of which sounding.
    pub item: ItemId,
    /// Where it is.
    pub rect: Rect,
    /// Where pressure and temperature lie.
    pub geometry: Geometry,
    /// Isopleths.
    pub background: Arc<Scene>,
    /// The sounding.
    pub foreground: Scene,
    /// Handles and brackets.
    pub touch: Touch,
    /// At the cursor.
    pub readout: Option<Readout>,
    /// Surface pressure of the working profile.
    surface: Option<thermo::Pressure>,
}

impl ChartFrame {
    /// Temperature at the surface level under a place on the screen: a handle moves along its isobar.
    pub fn surface_temperature_at(&self, position: Pos2) -> Option<Temperature> {
        let y = self.geometry.y(self.surface?);
        Some(
            self.geometry
                .temperature_at(Point::new(f64::from(position.x), y)),
        )
    }
}

/// What is kept from frame to frame.
#[derive(Debug, Default)]
pub(crate) struct Caches {
    background: Option<(Geometry, Arc<Scene>)>,
    heights: Option<(ItemId, HeightScale)>,
    band: Option<Band>,
}

/// Starts of a parcel at both ends of the interval, and what they were computed for.
#[derive(Debug)]
struct Band {
    item: ItemId,
    doubt: Arc<Doubt>,
    parcel: Parcel,
    starts: Option<[Air; 2]>,
}

impl Caches {
    fn background(&mut self, geometry: &Geometry) -> Arc<Scene> {
        if let Some((of, scene)) = &self.background
            && of == geometry
        {
            return Arc::clone(scene);
        }
        let scene = Arc::new(chart::background(geometry));
        self.background = Some((*geometry, Arc::clone(&scene)));
        scene
    }

    /// Heights of the sounding as received.
    fn heights(&mut self, item: &Item) -> &HeightScale {
        if self
            .heights
            .as_ref()
            .is_some_and(|(of, _)| *of != item.id())
        {
            self.heights = None;
        }
        let (_, heights) = self
            .heights
            .get_or_insert_with(|| (item.id(), HeightScale::of(item.received())));
        heights
    }

    /// Starts of the parcel at both ends of the interval; they stay while only the dew point is dragged.
    fn band(&mut self, item: &Item, parcel: Parcel) -> Option<[Air; 2]> {
        let doubt = &item.results().doubt;
        if let Some(band) = &self.band
            && band.item == item.id()
            && Arc::ptr_eq(&band.doubt, doubt)
            && band.parcel == parcel
        {
            return band.starts;
        }
        let starts = interval_starts(item, parcel);
        self.band = Some(Band {
            item: item.id(),
            doubt: Arc::clone(doubt),
            parcel,
            starts,
        });
        starts
    }
}

fn interval_starts(item: &Item, parcel: Parcel) -> Option<[Air; 2]> {
    let interval = item.results().doubt.interval.as_ref()?;
    let start = |dewpoint| {
        let working = item
            .document()
            .amendments
            .with_surface_dewpoint(dewpoint)
            .apply(item.received(), item.daylight());
        start_of(&working.profile, parcel)
    };
    Some([start(interval.low)?, start(interval.high)?])
}

fn start_of(profile: &Profile, parcel: Parcel) -> Option<Air> {
    if parcel == Parcel::Surface {
        return profile.surface_air();
    }
    let environment = profile.environment().ok()?;
    if parcel == Parcel::Mixed {
        return thermo::mixed_start(&environment, MIXED_DEPTH);
    }
    let rows = profile.environment_rows();
    let received = |level: usize| {
        rows.get(level)
            .and_then(|&row| profile.received.get(row))
            .is_some_and(Option::is_some)
    };
    thermo::most_unstable_start(&environment, MOST_UNSTABLE_DEPTH, received).map(|(_, air)| air)
}

/// Grade of a finding's bracket.
fn bracket_grade(grade: Grade, repaired: bool) -> BracketGrade {
    match grade {
        _ if repaired => BracketGrade::Repaired,
        Grade::Informative => BracketGrade::Informative,
        Grade::Doubtful => BracketGrade::Doubtful,
        Grade::Erroneous => BracketGrade::Erroneous,
    }
}

fn brackets(item: &Item, view: &View) -> Vec<Bracket> {
    let open = view.open_card(item.id());
    item.findings()
        .iter()
        .enumerate()
        .filter_map(|(index, finding)| {
            let bottom = finding.bottom.or(finding.top)?;
            let repaired = item
                .results()
                .cards
                .get(index)
                .is_some_and(|card| card.applied.is_some());
            Some(Bracket {
                number: index + 1,
                grade: bracket_grade(finding.grade, repaired),
                bottom,
                top: finding.top.unwrap_or(bottom),
                selected: open == Some(index),
            })
        })
        .collect()
}

/// A candidate in a word.
pub(crate) fn candidate_word(kind: CandidateKind) -> &'static str {
    match kind {
        CandidateKind::Reported => "reported",
        CandidateKind::MixedLayer => "mixed layer",
        CandidateKind::FirstLevels => "first levels",
        CandidateKind::PinnedLow | CandidateKind::PinnedHigh => "pinned",
    }
}

fn surface_marks(
    ctx: &Context,
    item: &Item,
    hovered: Option<chart::Handle>,
) -> Option<SurfaceMarks> {
    let pressure = item.results().working.profile.surface_pressure()?;
    let doubt = &item.results().doubt;
    let mark = |quantity: SurfaceQuantity| {
        let mut mark = SurfaceMark::new(item.working_surface(quantity)?);
        mark.focused = ctx.memory(|memory| memory.has_focus(handle_id(quantity)));
        mark.hovered = hovered == Some(handle::handle_of(quantity));
        if quantity == SurfaceQuantity::Dewpoint {
            mark.interval = doubt
                .interval
                .as_ref()
                .map(|interval| [interval.low, interval.high]);
            mark.candidates = doubt
                .candidates
                .iter()
                .filter_map(|candidate| {
                    Some(CandidateMark {
                        value: candidate.dewpoint?,
                        label: candidate_word(candidate.kind).to_owned(),
                        trusted: candidate.trusted,
                    })
                })
                .collect();
        }
        Some(mark)
    };
    Some(SurfaceMarks {
        pressure,
        temperature: mark(SurfaceQuantity::Temperature),
        dewpoint: mark(SurfaceQuantity::Dewpoint),
    })
}

/// Everything of the chart that is computed, before painting.
pub(crate) fn prepare(
    ctx: &Context,
    item: &Item,
    view: &View,
    rect: Rect,
    before: Option<&ChartFrame>,
    caches: &mut Caches,
) -> ChartFrame {
    let rect = rect.shrink(2.0);
    let frame = chart::Rect::new(
        f64::from(rect.left()),
        f64::from(rect.top()),
        f64::from(rect.width()),
        f64::from(rect.height()),
    );
    let window = view
        .charts
        .get(&item.id())
        .copied()
        .unwrap_or_else(|| chart::View::fit(item.received()));
    let geometry = Geometry::new(frame, window);
    let background = caches.background(&geometry);
    let parcel = view.parcel(item);
    let band = caches.band(item, parcel);
    let heights = caches.heights(item);
    let pointer = ctx
        .read_response(chart_id())
        .filter(|_| before.is_some_and(|before| before.item == item.id()))
        .and_then(|response| response.hover_pos());
    let hovered = match view.gesture {
        Some(Gesture::Handle { quantity, .. }) => Some(handle::handle_of(quantity)),
        Some(_) => None,
        None => before
            .zip(pointer)
            .and_then(|(before, pointer)| before.touch.handle_at(to_point(pointer))),
    };
    let cursor = pointer
        .or(view.cursor)
        .filter(|_| view.gesture.is_none() && hovered.is_none())
        .map(to_point)
        .filter(|point| geometry.plot().contains(*point));
    let brackets = brackets(item, view);
    let marks = surface_marks(ctx, item, hovered);
    let results = item.results();
    let working = &results.working.profile;
    let preview = view
        .previewed
        .as_ref()
        .filter(|previewed| previewed.item == item.id())
        .and_then(|previewed| previewed.preview.as_ref());
    let picture = Picture {
        received: Some(item.received()),
        preview: preview.map(|preview| &preview.working.profile),
        parcel: results.numbers.parcel(parcel).map(|ascent| ParcelDrawing {
            ascent,
            method: Method::default(),
            environment: None,
            interval: band,
            name: parcel_name(parcel),
        }),
        brackets: &brackets,
        surface: marks.as_ref(),
        heights: Some(heights),
        cursor,
        southern: item
            .sounding()
            .station
            .position
            .is_some_and(|position| position.latitude < 0.0),
        stamp: item.demo().then_some(wording::INVENTED),
        units: view.units,
        ..Picture::new(working)
    };
    let foreground = chart::foreground(&geometry, &picture);
    ChartFrame {
        item: item.id(),
        rect,
        geometry,
        background,
        foreground: foreground.scene,
        touch: foreground.touch,
        readout: foreground.readout,
        surface: working.surface_pressure(),
    }
}
