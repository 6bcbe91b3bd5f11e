//! The verdict bar: what was decided, why, by whom; and the line to copy.

use crate::app::Paint;
use crate::ask::Asks;
use crate::marks::{Mark, standing_mark};
use crate::menu::{action_button, main_action_button};
use crate::theme::bold;
use dewbound_session::ledger::Verdict;
use dewbound_session::trust::Grade;
use dewbound_session::{Action, Command, Item, Standing};
use eframe::egui::{
    Align, ComboBox, DragValue, Label, Layout, Response, RichText, Sense, TextEdit, Ui, UiBuilder,
    WidgetInfo, vec2,
};
use jiff::tz::TimeZone;

/// From this width on all choices stand side by side.
const WIDE: f32 = 1350.0;

/// The bar.
pub(crate) fn verdict_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let rect = ui.max_rect().shrink2(vec2(8.0, 4.0));
    ui.scope_builder(UiBuilder::new().max_rect(rect), |ui| {
        ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
            let Some(item) = paint.item() else {
                ui.label(RichText::new("No sounding to decide on.").weak());
                return;
            };
            standing_ui(ui, paint, item);
            if rect.width() >= WIDE {
                for choice in Choice::ALL {
                    choice_ui(ui, item, choice, asks);
                }
            } else {
                choices_ui(ui, item, asks);
            }
            pressure_ui(ui, item, asks);
            ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
                action_button(ui, paint, Action::CopyLine, asks);
                main_action_button(ui, paint, Action::Decide, asks);
                initials_ui(ui, paint, asks);
                reasons_ui(ui, item, asks);
            });
        });
    });
}

/// The four verdicts, without their pressure.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Choice {
    Accepted,
    AsAmended,
    Above,
    Contaminated,
}

impl Choice {
    const ALL: [Self; 4] = [
        Self::Accepted,
        Self::AsAmended,
        Self::Above,
        Self::Contaminated,
    ];

    const fn label(self) -> &'static str {
        match self {
            Self::Accepted => "Accepted",
            Self::AsAmended => "Accepted as amended",
            Self::Above => "Contaminated above",
            Self::Contaminated => "Contaminated",
        }
    }

    const fn of(verdict: &Verdict) -> Self {
        match verdict {
            Verdict::Accepted => Self::Accepted,
            Verdict::AcceptedAsAmended => Self::AsAmended,
            Verdict::ContaminatedAbove { .. } => Self::Above,
            Verdict::Contaminated => Self::Contaminated,
        }
    }

    fn verdict(self, item: &Item) -> Verdict {
        match self {
            Self::Accepted => Verdict::Accepted,
            Self::AsAmended => Verdict::AcceptedAsAmended,
            Self::Above => Verdict::ContaminatedAbove {
                pressure_pa: suspect_pressure(item),
            },
            Self::Contaminated => Verdict::Contaminated,
        }
    }
}

/// Where contamination would begin: the base of the worst finding that has a layer, else 500 hPa.
fn suspect_pressure(item: &Item) -> f64 {
    item.results()
        .order
        .iter()
        .filter_map(|&index| item.findings().get(index))
        .filter(|finding| finding.grade != Grade::Informative)
        .find_map(|finding| finding.bottom)
        .map_or(50_000.0, |pressure| pressure.pa())
}

fn chosen(item: &Item) -> Option<Choice> {
    item.document().verdict.as_ref().map(Choice::of)
}

fn ask_for(item: &Item, choice: Choice, asks: &mut Asks) {
    asks.command(Command::ChooseVerdict(Some(choice.verdict(item))));
}

fn choice_ui(ui: &mut Ui, item: &Item, choice: Choice, asks: &mut Asks) {
    let response = ui.radio(chosen(item) == Some(choice), choice.label());
    asks.describe(&response, || {
        format!("Verdict {}: Space chooses it", choice.label())
    });
    if response.clicked() {
        ask_for(item, choice, asks);
    }
}

fn choices_ui(ui: &mut Ui, item: &Item, asks: &mut Asks) {
    let text = chosen(item).map_or("Verdict…", Choice::label);
    let response = ComboBox::from_id_salt("verdict")
        .selected_text(text)
        .width(168.0)
        .show_ui(ui, |ui| {
            for choice in Choice::ALL {
                let response = ui.selectable_label(chosen(item) == Some(choice), choice.label());
                if response.clicked() {
                    ask_for(item, choice, asks);
                }
            }
        })
        .response;
    response.widget_info(|| {
        let mut info = WidgetInfo::labeled(eframe::egui::Role::ComboBox, true, "Verdict");
        info.current_text_value = Some(text.to_owned());
        info
    });
    asks.describe(&response, || format!("Verdict: {text}"));
}

fn pressure_ui(ui: &mut Ui, item: &Item, asks: &mut Asks) {
    let Some(Verdict::ContaminatedAbove { pressure_pa }) = item.document().verdict else {
        return;
    };
    let mut hpa = pressure_pa / 100.0;
    let response = ui.add(
        DragValue::new(&mut hpa)
            .range(1.0..=1100.0)
            .speed(1.0)
            .fixed_decimals(0)
            .suffix(" hPa"),
    );
    named(&response, "Contaminated above, hPa");
    asks.describe(&response, || {
        "Contaminated above this pressure: type a value".to_owned()
    });
    if response.changed() {
        asks.command(Command::ChooseVerdict(Some(Verdict::ContaminatedAbove {
            pressure_pa: hpa * 100.0,
        })));
    }
}

fn named(response: &Response, label: &str) {
    response.ctx.accesskit_node_builder(response.id, |node| {
        node.set_label(label);
    });
}

fn reasons_ui(ui: &mut Ui, item: &Item, asks: &mut Asks) {
    let mut text = item.document().reasons.clone();
    let width = (ui.available_width() - 4.0).max(60.0);
    let response = ui.add(
        TextEdit::singleline(&mut text)
            .hint_text("Reasons")
            .desired_width(width),
    );
    named(&response, "Reasons");
    asks.describe(&response, || {
        "Reasons for the verdict, in your words".to_owned()
    });
    if response.changed() {
        asks.command(Command::SetReasons(text));
    }
}

fn initials_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let Some(initials) = paint.session.initials() else {
        return;
    };
    let mut text = initials.to_owned();
    let response = ui.add(TextEdit::singleline(&mut text).desired_width(44.0));
    named(&response, "Initials");
    asks.describe(&response, || "Initials of whoever decides".to_owned());
    if response.changed() {
        asks.command(Command::SetInitials(text));
    }
}

/// How it stands: mark and words.
fn standing_ui(ui: &mut Ui, paint: &Paint, item: &Item) {
    let (rect, _) = ui.allocate_exact_size(vec2(20.0, 20.0), Sense::hover());
    standing_mark(
        ui.painter(),
        paint.theme,
        rect.center(),
        Mark::from(item.standing()),
    );
    let words = item.standing().words();
    ui.add(Label::new(bold(words).size(12.5)))
        .on_hover_ui(|ui| standing_details_ui(ui, item.standing()));
}

fn standing_details_ui(ui: &mut Ui, standing: &Standing) {
    match standing {
        Standing::Undecided => {
            ui.label("Nothing decided and nothing begun.");
        }
        Standing::Draft => {
            ui.label("Begun but not decided. The draft is kept across restarts.");
        }
        Standing::Keeping => {
            ui.label("Decided; not yet on the disk.");
        }
        Standing::Decided(decision) | Standing::DecidedOnEarlierData(decision) => {
            ui.label(format!(
                "{} by {} at {}",
                decision.verdict.words(),
                decision.initials,
                decision
                    .decided_at
                    .to_zoned(TimeZone::UTC)
                    .strftime("%H:%M UTC %a %-d %b %Y")
            ));
            if !decision.reasons.is_empty() {
                ui.label(&decision.reasons);
            }
            if matches!(standing, Standing::DecidedOnEarlierData(_)) {
                ui.label("Parts of this ascent have come in since: look again.");
            }
        }
    }
}
