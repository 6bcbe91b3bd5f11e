//! The skew-T chart: what is drawn, prepared before painting; its keys; its nodes.

use crate::app::{Desk, Paint};
use crate::ask::{Ask, Asks};
use crate::chart_paint::{self, to_pos, to_rect};
use crate::handle::{self, handle_id};
use crate::quantity::parcel_name;
use crate::theme::bold;
use crate::units;
use crate::view::{Gesture, View};
use dewbound_session::chart::{
    self, Bracket, BracketGrade, CandidateMark, Geometry, HeightScale, Ink, ParcelDrawing, Picture,
    Point, Readout, Scene, SurfaceMark, SurfaceMarks, Touch,
};
use dewbound_session::sounding::{Parcel, Profile};
use dewbound_session::thermo::{
    self, Air, MIXED_DEPTH, MOST_UNSTABLE_DEPTH, Method, Temperature,
};
use dewbound_session::trust::Grade;
use dewbound_session::{CandidateKind, Doubt, Item, ItemId, SurfaceQuantity, wording};
use eframe::egui::{
    Align2, Context, CursorIcon, Event, EventFilter, FontId, Id, Key, Label, Pos2, Rect, RichText,
    Role, Sense, Stroke, StrokeKind, Ui, WidgetInfo, pos2, text::LayoutJob, vec2,
};
use std::collections::HashMap;
use std::sync::Arc;

/// The one line of help, until the first drag.
pub(crate) const HINT: &str =
    "Drag the ring at the foot of the dew-point line, or use the arrow keys";

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
    background: Arc<Scene>,
    /// The sounding.
    foreground: Scene,
    /// Handles and brackets.
    pub touch: Touch,
    /// At the cursor.
    readout: Option<Readout>,
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
    heights: HashMap<ItemId, HeightScale>,
    band: Option<(ItemId, Arc<Doubt>, Parcel, Option<[Air; 2]>)>,
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

    /// Starts of the parcel at both ends of the interval; they stay while only the dew point is dragged.
    fn band(&mut self, item: &Item, parcel: Parcel) -> Option<[Air; 2]> {
        let doubt = &item.results().doubt;
        if let Some((of, under, drawn, starts)) = &self.band
            && *of == item.id()
            && Arc::ptr_eq(under, doubt)
            && *drawn == parcel
        {
            return *starts;
        }
        let starts = interval_starts(item, parcel);
        self.band = Some((item.id(), Arc::clone(doubt), parcel, starts));
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
pub(crate) fn bracket_grade(grade: Grade, repaired: bool) -> BracketGrade {
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

fn candidate_word(kind: CandidateKind) -> &'static str {
    match kind {
        CandidateKind::Reported => "reported",
        CandidateKind::MixedLayer => "mixed layer",
        CandidateKind::PinnedLow | CandidateKind::PinnedHigh => "pinned",
    }
}

fn surface_marks(ctx: &Context, item: &Item, hovered: Option<chart::Handle>) -> Option<SurfaceMarks> {
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
                        trusted: true,
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
    let heights = caches
        .heights
        .entry(item.id())
        .or_insert_with(|| HeightScale::of(item.received()))
        .clone();
    let band = caches.band(item, view.parcel);
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
        parcel: results
            .numbers
            .parcel(view.parcel)
            .map(|ascent| ParcelDrawing {
                ascent,
                method: Method::default(),
                environment: None,
                interval: band,
                name: parcel_name(view.parcel),
            }),
        brackets: &brackets,
        surface: marks.as_ref(),
        heights: Some(&heights),
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
        background: caches.background(&geometry),
        foreground: foreground.scene,
        touch: foreground.touch,
        readout: foreground.readout,
        surface: working.surface_pressure(),
    }
}

/// Keys of the chart when it has the keyboard.
pub(crate) fn keys(ctx: &Context, desk: &mut Desk) {
    let id = chart_id();
    if !ctx.memory(|memory| memory.has_focus(id)) {
        desk.view.cursor = None;
        return;
    }
    ctx.memory_mut(|memory| {
        memory.set_focus_lock_filter(
            id,
            EventFilter {
                tab: false,
                horizontal_arrows: true,
                vertical_arrows: true,
                escape: false,
            },
        );
    });
    let Some(seen) = desk.seen.as_ref() else {
        return;
    };
    let mut geometry = seen.geometry;
    let mut window = None;
    let mut fitted = false;
    let mut cursor = desk.view.cursor;
    ctx.input_mut(|input| {
        input.events.retain(|event| {
            let Event::Key {
                key,
                pressed: true,
                modifiers,
                ..
            } = event
            else {
                return true;
            };
            if modifiers.command || modifiers.alt {
                return true;
            }
            if modifiers.shift && matches!(key, Key::ArrowUp | Key::ArrowDown) {
                let by = if *key == Key::ArrowUp { -4.0 } else { 4.0 };
                let start = cursor.unwrap_or_else(|| {
                    pos2(
                        geometry.plot().centre().x as f32,
                        geometry.plot().bottom as f32,
                    )
                });
                let plot = to_rect(geometry.plot());
                cursor = Some(plot.clamp(start + vec2(0.0, by)));
                return false;
            }
            let centre = geometry.plot().centre();
            let new = match key {
                Key::ArrowLeft => geometry.panned(30.0, 0.0),
                Key::ArrowRight => geometry.panned(-30.0, 0.0),
                Key::ArrowUp => geometry.panned(0.0, 30.0),
                Key::ArrowDown => geometry.panned(0.0, -30.0),
                Key::Plus | Key::Equals => geometry.zoomed(centre, 1.2),
                Key::Minus => geometry.zoomed(centre, 1.0 / 1.2),
                Key::Num0 => {
                    fitted = true;
                    return false;
                }
                _ => return true,
            };
            fitted = false;
            geometry = Geometry::new(geometry.frame(), new);
            window = Some(new);
            false
        });
    });
    let item = seen.item;
    if fitted {
        desk.view.charts.remove(&item);
    } else if let Some(window) = window {
        desk.view.charts.insert(item, window);
    }
    desk.view.cursor = cursor;
}

/// Paints the chart and lays out its nodes.
pub(crate) fn chart_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let (Some(frame), Some(item)) = (paint.chart, paint.item()) else {
        empty_ui(ui, paint, asks);
        return;
    };
    let theme = paint.theme;
    let painter = ui.painter().with_clip_rect(frame.rect.expand(1.0));
    painter.rect_filled(frame.rect, 2.0, theme.chart_ink(Ink::Paper));
    chart_paint::paint(&painter, &frame.background, theme);
    chart_paint::paint(&painter, &frame.foreground, theme);

    let mut response = ui.interact(frame.rect, chart_id(), Sense::drag());
    let label = format!("Skew-T chart of {}", item.sounding().station.label());
    response.widget_info(|| WidgetInfo::labeled(Role::GraphicsDocument, true, &label));
    ui.ctx().accesskit_node_builder(chart_id(), |node| {
        node.set_description(description(item, paint, frame));
    });
    if response.has_focus() {
        painter.rect_stroke(
            frame.rect,
            2.0,
            Stroke::new(2.0, theme.accent),
            StrokeKind::Inside,
        );
    }
    asks.describe(&response, || {
        frame.readout.as_ref().map_or_else(
            || format!("{label}: arrows move, + − zoom, 0 shows all, Shift+↑ reads values"),
            Readout::line,
        )
    });
    response = match paint.view.gesture {
        Some(Gesture::Pan) => response.on_hover_cursor(CursorIcon::Grabbing),
        Some(Gesture::Handle { .. }) => response.on_hover_cursor(CursorIcon::ResizeHorizontal),
        _ if over_handle(&response, frame) => response.on_hover_cursor(CursorIcon::ResizeHorizontal),
        _ => response,
    };
    drop(response);
    handle::handles_ui(ui, paint, item, asks);
    brackets_ui(ui, paint, item, frame, asks);
    areas_ui(ui, paint, item, frame);
    beside_handle(ui, paint, item, frame);
    hint_ui(ui, paint, frame);
}

fn over_handle(response: &eframe::egui::Response, frame: &ChartFrame) -> bool {
    response
        .hover_pos()
        .is_some_and(|position| frame.touch.handle_at(to_point(position)).is_some())
}

fn description(item: &Item, paint: &Paint, frame: &ChartFrame) -> String {
    let mut parts = vec![item.results().which_parcel.clone()];
    if item.demo() {
        parts.push(wording::INVENTED.to_owned());
    }
    for quantity in handle::QUANTITIES {
        parts.extend(handle::line(paint, item, quantity));
    }
    parts.extend(frame.readout.as_ref().map(Readout::line));
    parts.join(". ")
}

/// Brackets as buttons: the numbered disc opens the card.
fn brackets_ui(ui: &Ui, paint: &Paint, item: &Item, frame: &ChartFrame, asks: &mut Asks) {
    for &(number, place) in &frame.touch.brackets {
        let Some(index) = number.checked_sub(1) else {
            continue;
        };
        let Some(finding) = item.findings().get(index) else {
            continue;
        };
        let rect = to_rect(place);
        let response = ui.interact(rect, Id::unique(("bracket", number)), Sense::click());
        let label = format!("Finding {number} on the chart: {}", finding.title);
        response.widget_info(|| WidgetInfo::labeled(Role::Button, true, &label));
        if response.has_focus() {
            ui.painter().rect_stroke(
                rect.expand(2.0),
                2.0,
                Stroke::new(2.0, paint.theme.accent),
                StrokeKind::Outside,
            );
        }
        asks.describe(&response, || format!("{label}: Enter opens its card"));
        if response
            .on_hover_text(&finding.summary)
            .on_hover_cursor(CursorIcon::PointingHand)
            .clicked()
        {
            let open = paint.view.open_card(item.id()) == Some(index);
            asks.push(Ask::Card(item.id(), (!open).then_some(index)));
            asks.push(Ask::Tab(crate::view::Tab::Findings));
        }
    }
}

/// The hatched areas for those who can't see them.
fn areas_ui(ui: &Ui, paint: &Paint, item: &Item, frame: &ChartFrame) {
    let Some(ascent) = item.results().numbers.parcel(paint.view.parcel) else {
        return;
    };
    let name = parcel_name(paint.view.parcel);
    let plot = to_rect(frame.geometry.plot());
    let areas = [
        ("cape", format!("CAPE area of the {name}: {}", wording::cape(Some(ascent)))),
        (
            "cin",
            format!("CIN area of the {name}: {}", wording::energy(ascent.cin, false)),
        ),
    ];
    for (id, label) in areas {
        let response = ui.interact(
            Rect::from_min_size(plot.center(), vec2(1.0, 1.0)),
            Id::unique(("area", id)),
            Sense::empty(),
        );
        response.widget_info(|| WidgetInfo::labeled(Role::Label, true, &label));
    }
}

/// The reach of surface edits and the number being typed, beside the dew-point handle.
fn beside_handle(ui: &Ui, paint: &Paint, item: &Item, frame: &ChartFrame) {
    let painter = ui.painter().with_clip_rect(frame.rect);
    let theme = paint.theme;
    let plot = to_rect(frame.geometry.plot());
    if frame.touch.handle(chart::Handle::Dewpoint).is_some() {
        // In the row of the axis title, right of it: nearer to the handle it would cover the curves.
        let right = frame.rect.right_bottom() + vec2(-4.0, -3.0);
        let mut job = LayoutJob::simple_singleline(
            format!("edits reach: {}", item.results().working.reach.why),
            FontId::proportional(11.0),
            theme.quiet,
        );
        job.wrap.max_width = right.x - plot.center().x - 56.0;
        job.wrap.max_rows = 1;
        job.wrap.break_anywhere = true;
        let galley = painter.layout_job(job);
        let rect = Align2::RIGHT_BOTTOM.anchor_size(right, galley.size());
        painter.galley(rect.min, galley, theme.quiet);
    }
    if let Some(typing) = &paint.view.typing
        && let Some(place) = frame.touch.handle(handle::handle_of(typing.quantity))
    {
        let at = to_pos(place.centre) - vec2(0.0, 22.0);
        let text = format!(
            "{}_ {} · Enter sets",
            typing.text,
            units::sign(paint.view.units.temperature)
        );
        let galley = painter.layout_no_wrap(text, FontId::proportional(15.0), theme.ink);
        let mut rect = Align2::CENTER_BOTTOM.anchor_size(at, galley.size());
        // Never beyond the edge of the plot.
        let shift = (plot.left() + 8.0 - rect.left()).max(0.0)
            - (rect.right() - plot.right() + 8.0).max(0.0);
        rect = rect.translate(vec2(shift, 0.0));
        painter.rect_filled(rect.expand(4.0), 2.0, theme.card);
        painter.galley(rect.min, galley, theme.ink);
        painter.rect_stroke(
            rect.expand(4.0),
            2.0,
            Stroke::new(2.0, theme.accent),
            StrokeKind::Outside,
        );
    }
}

/// Shows it.
fn hint_ui(ui: &mut Ui, paint: &Paint, frame: &ChartFrame) {
    if !paint.view.hint {
        return;
    }
    let plot = to_rect(frame.geometry.plot());
    // In the margin above the plot, where it hides nothing but the upper temperature labels.
    let narrow = plot.width() < 520.0;
    let (left, right) = if narrow {
        (frame.rect.left(), frame.rect.right())
    } else {
        (plot.left(), plot.right())
    };
    let rect = Rect::from_min_max(
        pos2(left, frame.rect.top()),
        pos2(right, plot.top() - 1.0),
    );
    ui.painter().rect_filled(rect, 3.0, paint.theme.accent);
    ui.scope_builder(
        eframe::egui::UiBuilder::new()
            .id_salt("hint")
            .max_rect(rect.shrink2(vec2(8.0, 1.0))),
        |ui| {
            ui.horizontal_centered(|ui| {
                let text = if narrow {
                    RichText::new(HINT).size(11.0)
                } else {
                    bold(HINT).size(12.0)
                };
                ui.add(Label::new(text.color(paint.theme.on_accent)).truncate());
            });
        },
    );
}

/// What stands where the chart would be while there is nothing to show.
fn empty_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    ui.vertical_centered(|ui| {
        ui.add_space(ui.available_height() * 0.35);
        if paint.session.reading() > 0 {
            ui.label(format!("Reading {} files…", paint.session.reading()));
        } else {
            ui.label(bold("Nothing in the tray").size(16.0));
            ui.label("Drop files or folders on the window, or open them:");
            crate::menu::action_button(ui, paint, dewbound_session::Action::OpenFiles, asks);
            crate::menu::action_button(ui, paint, dewbound_session::Action::OpenDemo, asks);
        }
    });
}
