//! The window's state and the two halves of a frame.

use crate::args::{Args, ThemeName, ZOOM_RANGE};
use crate::ask::{Ask, Asks};
use crate::chart_frame::{Caches, ChartFrame};
use crate::config::config;
use crate::files::{Files, Picked, dropped, typed_paths};
use crate::layout::{Layout, Side};
use crate::preferences::{self, Preferences};
use crate::theme::Theme;
use crate::view::{DialogBox, Gesture, Page, Previewed, View};
use crate::winds_frame::WindsFrame;
use crate::{
    chart_frame, chart_keys, chart_view, dialogs, findings, fonts, handle, input, keys, menu,
    numbers, quantity, response, status, title, tray, verdict, winds_frame, winds_keys, winds_view,
};
use dewbound_session::chart::{SpeedUnit, TemperatureUnit};
use dewbound_session::{Action, Command, Item, Session, SurfaceQuantity, wording};
use eframe::egui::{self, Context, Rect, Ui, UiBuilder};
use jiff::Timestamp;
use std::path::PathBuf;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::{Duration, Instant};

/// Everything a panel may look at while it paints. Read only.
pub(crate) struct Paint<'a> {
    pub session: &'a Session,
    pub view: &'a View,
    pub theme: &'a Theme,
    pub now: Timestamp,
    pub layout: &'a Layout,
    pub chart: Option<&'a ChartFrame>,
    pub winds: Option<&'a WindsFrame>,
}

impl Paint<'_> {
    /// The current sounding.
    pub fn item(&self) -> Option<&Item> {
        self.session.current()
    }
}

/// The window.
pub struct Desk {
    pub(crate) session: Session,
    pub(crate) view: View,
    theme: Theme,
    /// As last kept, and where.
    chosen: Preferences,
    kept: PathBuf,
    files: Files,
    caches: Caches,
    asks: Asks,
    /// Geometry of the frame last painted; pointer and keys are read against it.
    pub(crate) seen: Option<ChartFrame>,
    pub(crate) winds_seen: Option<WindsFrame>,
    pub(crate) response_seen: Option<response::Seen>,
    layout: Layout,
    now: Timestamp,
    clock: fn() -> Timestamp,
    /// The hint speaks of arrow keys: the handle has yet to be given the keyboard.
    hint_focus: bool,
    frames: u64,
    started: Arc<AtomicBool>,
    closing: Option<eframe::Renderer>,
}

impl Desk {
    pub(crate) fn new(
        ctx: &Context,
        args: &Args,
        renderer: eframe::Renderer,
        started: Arc<AtomicBool>,
    ) -> Self {
        let mut session = Session::new(config(args));
        if args.paths.is_empty() {
            session.open_demo();
        } else {
            session.open_paths(args.paths.clone());
        }
        let mut desk = Self::with_session(ctx, session, args, Timestamp::now);
        if args.paths.is_empty() {
            desk.show_hint();
        }
        desk.started = started;
        desk.closing = args.close_after_first_frame.then_some(renderer);
        desk
    }

    /// A window on a session, with a clock of one's own.
    pub fn with_session(
        ctx: &Context,
        mut session: Session,
        args: &Args,
        clock: fn() -> Timestamp,
    ) -> Self {
        fonts::install(ctx);
        let kept = preferences::file(session.config());
        let mut chosen = Preferences::read(&kept);
        chosen.theme = args.theme.unwrap_or(chosen.theme);
        chosen.zoom = args.zoom.unwrap_or(chosen.zoom);
        let theme = Theme::of(chosen.theme);
        theme.install(ctx);
        ctx.options_mut(|options| options.zoom_with_keyboard = false);
        // Setting a zoom, even the present one, makes the next frame start anew.
        if chosen.zoom != ctx.zoom_factor() {
            ctx.set_zoom_factor(chosen.zoom);
        }
        let waker = ctx.clone();
        session.set_waker(Arc::new(move || waker.request_repaint()));
        Self {
            session,
            view: View::new(&chosen, args.debug_overlay),
            theme,
            chosen,
            kept,
            files: Files::default(),
            caches: Caches::default(),
            asks: Asks::default(),
            seen: None,
            winds_seen: None,
            response_seen: None,
            layout: Layout::of(ctx.content_rect()),
            now: clock(),
            clock,
            hint_focus: false,
            frames: 0,
            started: Arc::default(),
            closing: None,
        }
    }

    /// Shows the line over the chart until the first drag.
    pub fn show_hint(&mut self) {
        self.view.hint = true;
        self.hint_focus = true;
    }

    /// Waits until everything asked of the worker and the disk is done. For tests; a frame never waits.
    pub fn wait(&mut self) {
        self.session.wait();
    }

    /// The state behind the window.
    pub fn session(&self) -> &Session {
        &self.session
    }

    /// What comes before painting: everything asked for and typed is carried out and computed.
    pub fn before_painting(&mut self, ctx: &Context) {
        let begun = Instant::now();
        let before = self
            .session
            .current()
            .map(|item| (item.id(), item.revision()));
        let row = self.current_row();
        self.now = (self.clock)();
        self.take_in(ctx);
        for ask in std::mem::take(&mut self.asks.list) {
            self.carry_out(ctx, ask);
        }
        for action in keys::actions(ctx) {
            self.act(ctx, action);
        }
        handle::keys(ctx, self);
        chart_keys::keys(ctx, self);
        winds_keys::keys(ctx, self);
        input::pointer(ctx, self);
        self.focus_for_hint(ctx);
        let held = ctx.input(|input| input.pointer.any_down() || !input.keys_down.is_empty())
            || self
                .session
                .current()
                .is_some_and(|item| self.view.open_card(item.id()).is_some());
        self.session.hold_order(held);
        self.preview(ctx);
        self.layout = Layout::of(ctx.content_rect());
        let page = self.view.page;
        let shown = |wanted| self.session.current().filter(|_| page == wanted);
        self.winds_seen = shown(Page::Winds).and_then(|item| {
            let before = self.winds_seen.as_ref();
            winds_frame::prepare(ctx, item, &self.view, self.layout.page(), before)
        });
        self.seen = shown(Page::Chart).map(|item| {
            chart_frame::prepare(
                ctx,
                item,
                &self.view,
                self.layout.chart,
                self.seen.as_ref(),
                &mut self.caches,
            )
        });
        let chosen = Preferences::from(&self.view);
        if chosen != self.chosen {
            self.chosen = chosen;
            chosen.keep(self.kept.clone());
        }
        let after = self
            .session
            .current()
            .map(|item| (item.id(), item.revision()));
        if before != after {
            self.view.timing.computed(begun.elapsed());
        }
        let another = before.map(|(item, _)| item) != after.map(|(item, _)| item);
        self.view.reveal = another || row != self.current_row();
        if another {
            let name = self.session.current().map_or_else(
                || "Dewbound".to_owned(),
                |item| format!("{} · Dewbound", title::identity(item)),
            );
            ctx.send_viewport_cmd(egui::ViewportCommand::Title(name));
        }
    }

    /// Where the current sounding stands in the tray.
    fn current_row(&self) -> Option<usize> {
        let current = self.session.current()?.id();
        self.session
            .tray()
            .iter()
            .position(|row| row.item == current)
    }

    /// Files and worker results.
    fn take_in(&mut self, ctx: &Context) {
        self.session.poll();
        while let Some(picked) = self.files.picked() {
            match picked {
                Picked::Paths(paths) => self.session.open_paths(paths),
                Picked::Nothing => {}
                Picked::NoDialog => self.view.dialog = Some(DialogBox::Paths(String::new())),
            }
        }
        let paths = dropped(ctx);
        if !paths.is_empty() {
            self.session.open_paths(paths);
        }
    }

    /// The hint speaks of arrow keys, so the handle gets the keyboard as soon as there is one.
    fn focus_for_hint(&mut self, ctx: &Context) {
        if self.hint_focus && self.session.current().is_some() {
            self.hint_focus = false;
            let id = handle::handle_id(SurfaceQuantity::Dewpoint);
            ctx.memory_mut(|memory| memory.request_focus(id));
        }
    }

    fn preview(&mut self, ctx: &Context) {
        let wanted = self.asks.preview;
        let current = self.session.current();
        let up_to_date = match (&self.view.previewed, wanted, current) {
            (None, None, _) => true,
            (Some(had), Some(repair), Some(item)) => {
                had.item == item.id() && had.revision == item.revision() && had.repair == repair
            }
            _ => false,
        };
        if up_to_date {
            return;
        }
        self.view.previewed = wanted.zip(current).map(|(repair, item)| Previewed {
            item: item.id(),
            revision: item.revision(),
            repair,
            preview: item.preview(repair),
        });
        ctx.request_repaint();
    }

    fn carry_out(&mut self, ctx: &Context, ask: Ask) {
        match ask {
            Ask::Command(command) => self.apply(command),
            Ask::Action(action) => self.act(ctx, action),
            Ask::Tab(tab) => self.view.tab = tab,
            Ask::Parcel(parcel) => self.view.parcel = Some(parcel),
            Ask::Group(group) => self.view.toggle_group(group),
            Ask::Units(units) => self.view.units = units,
            Ask::Card(item, card) => self.view.card = card.map(|card| (item, card)),
            Ask::Dialog(dialog) => self.view.dialog = dialog,
            Ask::SignAndDecide(initials) => {
                self.view.dialog = None;
                self.session.apply(Command::SetInitials(initials));
                self.session.apply(Command::Decide);
            }
            Ask::OpenTyped(text) => {
                self.view.dialog = None;
                self.session.open_paths(typed_paths(&text));
            }
        }
    }

    /// Gives the session a command.
    pub(crate) fn apply(&mut self, command: Command) {
        self.session.apply(command);
    }

    /// Does what has a name.
    pub(crate) fn act(&mut self, ctx: &Context, action: Action) {
        match action {
            Action::OpenFiles => self.files.ask(ctx, false),
            Action::OpenFolder => self.files.ask(ctx, true),
            Action::OpenDemo => self.session.open_demo(),
            Action::Quit => ctx.send_viewport_cmd(egui::ViewportCommand::Close),
            Action::CopyLine => {
                if let Some(item) = self.session.current() {
                    ctx.copy_text(item.copy_line());
                }
            }
            Action::CopyNumbers => {
                if let Some(item) = self.session.current() {
                    let view = &self.view;
                    ctx.copy_text(quantity::as_text(item, view.units, &view.open_groups));
                }
            }
            Action::CopyWinds => {
                if let Some(item) = self.session.current() {
                    let unit = self.view.units.speed;
                    ctx.copy_text(dewbound_session::winds_as_text(item, unit));
                }
            }
            Action::ShowChart => self.turn_to(ctx, Page::Chart),
            Action::ShowWinds => self.turn_to(ctx, Page::Winds),
            Action::WindsToTwelve => self.winds_up_to(12_000.0),
            Action::WindsToSix => self.winds_up_to(6_000.0),
            Action::WindsToThree => self.winds_up_to(3_000.0),
            Action::ZoomIn => self.zoom(ctx, self.view.zoom + 0.1),
            Action::ZoomOut => self.zoom(ctx, self.view.zoom - 0.1),
            Action::ZoomReset => self.zoom(ctx, 1.0),
            Action::ToggleTheme => {
                self.view.theme = Theme::other(self.view.theme);
                self.theme = Theme::of(self.view.theme);
                self.theme.install(ctx);
            }
            Action::ToggleTiming => self.view.show_timing = !self.view.show_timing,
            Action::ShowKeys => self.view.dialog = Some(DialogBox::Keys),
            Action::ShowCaution => self.view.dialog = Some(DialogBox::About),
            Action::Decide => match self.session.can(action) {
                Err(why) if why == wording::INITIALS_FIRST => {
                    self.view.dialog = Some(DialogBox::Initials(String::new()));
                }
                // The session says why not, where it is not to be decided.
                _ => self.apply(Command::Decide),
            },
            other => {
                if let Some(command) = self.session.command_of(other) {
                    self.apply(command);
                }
            }
        }
    }

    /// Shows a page; what is read on it gets the keyboard.
    fn turn_to(&mut self, ctx: &Context, page: Page) {
        if self.view.page == page || self.dragging() {
            return;
        }
        self.view.page = page;
        let id = match page {
            Page::Chart => chart_frame::chart_id(),
            Page::Winds => winds_frame::strips_id(),
        };
        ctx.memory_mut(|memory| memory.request_focus(id));
    }

    /// Draws the winds up to a height; papers moved by hand fit it again.
    fn winds_up_to(&mut self, top: f64) {
        self.view.winds_top = top;
        self.view.hodographs.clear();
    }

    fn zoom(&mut self, ctx: &Context, zoom: f32) {
        let zoom = ((zoom * 10.0).round() / 10.0).clamp(*ZOOM_RANGE.start(), *ZOOM_RANGE.end());
        self.view.zoom = zoom;
        ctx.set_zoom_factor(zoom);
    }

    /// Sets a surface value, held to the steps shown.
    pub(crate) fn set_surface(&mut self, quantity: SurfaceQuantity, k: f64) {
        let unit = self.view.units.temperature;
        let shown = crate::units::shown(dewbound_session::thermo::Temperature::from_k(k), unit);
        let value = crate::units::from_shown((shown * 10.0).round() / 10.0, unit);
        if self
            .session
            .current()
            .and_then(|item| item.working_surface(quantity))
            .is_none_or(|now| (now.k() - value.k()).abs() > 1e-9)
        {
            self.session.apply(Command::SetSurface(quantity, value));
        }
    }

    /// The theme in force.
    pub fn theme_name(&self) -> ThemeName {
        self.view.theme
    }

    /// Units of temperature and wind shown.
    pub fn units(&self) -> (TemperatureUnit, SpeedUnit) {
        (self.view.units.temperature, self.view.units.speed)
    }

    /// Something is being dragged.
    pub(crate) fn dragging(&self) -> bool {
        matches!(
            self.view.gesture,
            Some(Gesture::Handle { .. } | Gesture::Response { .. } | Gesture::Motion { .. })
        )
    }

    /// Paints a frame. Nothing changes while it does; what was asked for is carried out before the next one.
    pub fn paint(&mut self, ui: &mut Ui) {
        let begun = Instant::now();
        let mut asks = Asks::default();
        let response_seen = self.painted(ui, &mut asks);
        if !asks.list.is_empty() || asks.preview != self.asks.preview {
            ui.ctx().request_repaint();
        }
        self.asks = asks;
        self.response_seen = response_seen;
        self.view.timing.painted(begun.elapsed(), Instant::now());
        // The age of the data moves on by itself.
        ui.ctx().request_repaint_after(Duration::from_secs(60));
    }

    fn painted(&self, ui: &mut Ui, asks: &mut Asks) -> Option<response::Seen> {
        let paint = Paint {
            session: &self.session,
            view: &self.view,
            theme: &self.theme,
            now: self.now,
            layout: &self.layout,
            chart: self.seen.as_ref(),
            winds: self.winds_seen.as_ref(),
        };
        let layout = &self.layout;
        // Software renderers pay for every pixel painted twice, so the desk shows only where no panel lies.
        for gap in layout.gaps() {
            ui.painter().rect_filled(gap, 0.0, self.theme.desk);
        }
        self.panel(ui, layout.bar, "bar", |ui| menu::bar_ui(ui, &paint, asks));
        if let Some(rect) = layout.tray {
            self.panel(ui, rect, "tray", |ui| tray::tray_ui(ui, &paint, asks));
        }
        self.panel(ui, layout.title, "title", |ui| {
            title::title_ui(ui, &paint, asks)
        });
        let seen = match self.view.page {
            Page::Chart => self.chart_page(ui, &paint, asks),
            Page::Winds => {
                self.panel(ui, layout.page(), "winds", |ui| {
                    winds_view::winds_ui(ui, &paint, asks);
                });
                None
            }
        };
        match layout.side {
            Side::Stacked { findings, numbers } => {
                self.panel(ui, findings, "findings", |ui| {
                    findings::findings_ui(ui, &paint, asks)
                });
                self.panel(ui, numbers, "numbers", |ui| {
                    numbers::numbers_ui(ui, &paint, asks)
                });
            }
            Side::Tabbed { cape, tabs } => {
                self.panel(ui, cape, "cape", |ui| numbers::cape_ui(ui, &paint, asks));
                self.panel(ui, tabs, "tabs", |ui| findings::tabs_ui(ui, &paint, asks));
            }
        }
        self.panel(ui, layout.verdict, "verdict", |ui| {
            verdict::verdict_ui(ui, &paint, asks)
        });
        self.panel(ui, layout.status, "status", |ui| {
            status::status_ui(ui, &paint, asks)
        });
        for rect in [layout.verdict, layout.status] {
            ui.painter().hline(
                rect.x_range(),
                rect.top(),
                egui::Stroke::new(1.0, self.theme.line),
            );
        }
        dialogs::dialog_ui(ui.ctx(), &paint, asks);
        dialogs::drop_ui(ui, &paint);
        status::timing_ui(ui, &paint);
        seen
    }

    /// The chart and the response under it.
    fn chart_page(&self, ui: &mut Ui, paint: &Paint, asks: &mut Asks) -> Option<response::Seen> {
        let layout = &self.layout;
        self.panel(ui, layout.chart, "chart", |ui| {
            chart_view::chart_ui(ui, paint, asks);
        });
        self.panel(ui, layout.sentence, "sentence", |ui| {
            response::sentence_ui(ui, paint, asks);
        });
        layout.response.and_then(|rect| {
            self.panel(ui, rect, "response", |ui| {
                response::response_ui(ui, paint, asks)
            })
        })
    }

    /// A panel in its rectangle; what it can't show is cut off there and nowhere else.
    fn panel<R>(
        &self,
        ui: &mut Ui,
        rect: Rect,
        name: &'static str,
        content: impl FnOnce(&mut Ui) -> R,
    ) -> R {
        ui.painter().rect_filled(rect, 0.0, self.theme.panel);
        ui.scope_builder(UiBuilder::new().id_salt(name).max_rect(rect), |ui| {
            ui.set_clip_rect(rect.intersect(ui.clip_rect()));
            content(ui)
        })
        .inner
    }
}

impl eframe::App for Desk {
    fn logic(&mut self, ctx: &Context, _frame: &mut eframe::Frame) {
        self.before_painting(ctx);
    }

    fn ui(&mut self, ui: &mut Ui, _frame: &mut eframe::Frame) {
        self.paint(ui);
        self.frames += 1;
        if self.frames > 2 {
            self.started.store(true, Ordering::Relaxed);
            if let Some(renderer) = self.closing.take() {
                eprintln!("Drawn with {renderer}.");
                ui.ctx().send_viewport_cmd(egui::ViewportCommand::Close);
            }
        } else {
            ui.ctx().request_repaint();
        }
    }

    fn clear_color(&self, _visuals: &egui::Visuals) -> [f32; 4] {
        self.theme.desk.to_normalized_gamma_f32()
    }
}
