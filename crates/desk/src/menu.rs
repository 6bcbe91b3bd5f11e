//! The bar at the head of the window: menus, messages, and in a narrow window the tray.

use crate::app::Paint;
use crate::ask::{Ask, Asks};
use crate::marks::{mark_space, weight_mark};
use crate::theme::bold;
use crate::tray;
use crate::units;
use crate::view::{DialogBox, Page};
use dewbound_session::chart::{SpeedUnit, TemperatureUnit};
use dewbound_session::{ACTIONS, Action, Menu, MessageId, Weight, wording};
use eframe::egui::{
    Align, Button, Label, Layout, MenuBar, Response, RichText, Ui, UiBuilder, vec2,
};

const MENUS: [(Menu, &str); 5] = [
    (Menu::File, "File"),
    (Menu::Edit, "Edit"),
    (Menu::Sounding, "Sounding"),
    (Menu::View, "View"),
    (Menu::Help, "Help"),
];

/// Pages of the centre.
const PAGES: [(Action, Page); 2] = [
    (Action::ShowChart, Page::Chart),
    (Action::ShowWinds, Page::Winds),
];

/// The bar.
pub(crate) fn bar_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let rect = ui.max_rect().shrink2(vec2(6.0, 1.0));
    ui.scope_builder(UiBuilder::new().max_rect(rect), |ui| {
        MenuBar::new().ui(ui, |ui| {
            for (menu, name) in MENUS {
                ui.menu_button(name, |ui| menu_ui(ui, paint, menu, asks));
            }
            pages_ui(ui, paint, asks);
            if paint.layout.tray.is_none() {
                let label = format!("Tray: {}", tray::waiting(paint));
                ui.menu_button(label, |ui| {
                    ui.set_min_width(320.0);
                    ui.set_max_width(340.0);
                    tray::rows_ui(ui, paint, asks, true);
                });
            }
            ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
                message_ui(ui, paint, asks);
            });
        });
    });
}

/// Which page the centre shows.
fn pages_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    ui.separator();
    for (action, page) in PAGES {
        let chosen = paint.view.page == page;
        let text = action.declaration().label;
        let text = if chosen {
            bold(text)
        } else {
            RichText::new(text)
        };
        let response = ui.add(Button::selectable(chosen, text));
        asked(response, paint, action, asks);
    }
    ui.separator();
}

fn menu_ui(ui: &mut Ui, paint: &Paint, menu: Menu, asks: &mut Asks) {
    ui.set_min_width(250.0);
    for declaration in ACTIONS {
        if declaration.menu == menu && entry_ui(ui, paint, declaration.action, asks) {
            ui.close();
        }
    }
    if menu == Menu::View {
        ui.separator();
        units_ui(ui, paint, asks);
    }
}

fn units_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let now = paint.view.units;
    for (unit, label) in [
        (TemperatureUnit::Celsius, "Temperature in °C"),
        (TemperatureUnit::Fahrenheit, "Temperature in °F"),
    ] {
        if ui.radio(now.temperature == unit, label).clicked() {
            asks.push(Ask::Units(units::with_temperature(now, unit)));
        }
    }
    for (unit, label) in [
        (SpeedUnit::Knots, "Wind in kt"),
        (SpeedUnit::MetresPerSecond, "Wind in m/s"),
    ] {
        if ui.radio(now.speed == unit, label).clicked() {
            asks.push(Ask::Units(units::with_speed(now, unit)));
        }
    }
}

/// Whether an action can be done now, or why not.
pub(crate) fn possible(paint: &Paint, action: Action) -> Result<(), String> {
    match paint.session.can(action) {
        // They are asked for.
        Err(why) if why == wording::INITIALS_FIRST => Ok(()),
        answer => answer,
    }
}

fn entry_ui(ui: &mut Ui, paint: &Paint, action: Action, asks: &mut Asks) -> bool {
    let declaration = action.declaration();
    let can = possible(paint, action);
    let mut button = Button::new(declaration.label).frame(false);
    if let Some(shortcut) = &declaration.shortcut {
        button = button.shortcut_text(RichText::new(shortcut.text()).small());
    }
    let chosen = match action {
        Action::ToggleTheme => paint.view.theme == crate::ThemeName::Dark,
        Action::ToggleTiming => paint.view.show_timing,
        Action::WindsToTwelve => paint.view.winds_top == 12_000.0,
        Action::WindsToSix => paint.view.winds_top == 6_000.0,
        Action::WindsToThree => paint.view.winds_top == 3_000.0,
        Action::ShowChart => paint.view.page == Page::Chart,
        Action::ShowWinds => paint.view.page == Page::Winds,
        _ => false,
    };
    let response = ui.add_enabled(can.is_ok(), button.selected(chosen));
    asked(response, paint, action, asks)
}

/// What every button of an action does: says what it is for, and asks for it.
pub(crate) fn asked(response: Response, paint: &Paint, action: Action, asks: &mut Asks) -> bool {
    let declaration = action.declaration();
    asks.describe(&response, || declaration.tooltip.to_owned());
    let clicked = response.clicked();
    if clicked {
        asks.push(Ask::Action(action));
    }
    let keys = declaration
        .shortcut
        .map(|shortcut| format!(" ({})", shortcut.text()))
        .unwrap_or_default();
    let response = response.on_hover_text(format!("{}{keys}", declaration.tooltip));
    if let Err(why) = possible(paint, action) {
        response.on_disabled_hover_text(why);
    }
    clicked
}

/// A button for an action.
pub(crate) fn action_button(ui: &mut Ui, paint: &Paint, action: Action, asks: &mut Asks) {
    let can = possible(paint, action).is_ok();
    let response = ui.add_enabled(can, Button::new(action.declaration().label));
    asked(response, paint, action, asks);
}

/// A small one.
pub(crate) fn small_action_button(ui: &mut Ui, paint: &Paint, action: Action, asks: &mut Asks) {
    let can = possible(paint, action).is_ok();
    let response = ui.add_enabled(can, Button::new(action.declaration().label).small());
    asked(response, paint, action, asks);
}

/// The one button that matters.
pub(crate) fn main_action_button(ui: &mut Ui, paint: &Paint, action: Action, asks: &mut Asks) {
    let can = possible(paint, action).is_ok();
    let theme = paint.theme;
    let text = bold(action.declaration().label);
    let button = if can {
        Button::new(text.color(theme.on_accent)).fill(theme.accent)
    } else {
        Button::new(text)
    };
    let response = ui.add_enabled(can, button);
    asked(response, paint, action, asks);
}

/// The newest message; the others behind a button.
fn message_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let messages = paint.session.messages();
    // A failure stays in front of whatever comes later.
    let Some(front) = messages
        .iter()
        .rev()
        .max_by_key(|message| message.weight == Weight::Failed)
    else {
        return;
    };
    dismiss_ui(ui, front.id, &front.line(), asks);
    if messages.len() > 1 {
        let all = ui.small_button(format!("All {}", messages.len()));
        asks.describe(&all, || "Enter shows all messages".to_owned());
        if all.clicked() {
            asks.push(Ask::Dialog(Some(DialogBox::Messages)));
        }
    }
    let colour = if front.weight == Weight::Failed {
        paint.theme.danger
    } else {
        paint.theme.ink
    };
    ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
        let space = mark_space(ui);
        weight_mark(ui.painter(), paint.theme, space, front.weight);
        ui.add(Label::new(RichText::new(front.line()).size(12.0).color(colour)).truncate())
            .on_hover_text(front.line());
    });
}

/// Puts a message away.
pub(crate) fn dismiss_ui(ui: &mut Ui, id: MessageId, line: &str, asks: &mut Asks) {
    let response = ui.small_button("Dismiss");
    asks.describe(&response, || format!("Dismiss: {line}"));
    if response.clicked() {
        asks.command(dewbound_session::Command::Dismiss(id));
    }
}
