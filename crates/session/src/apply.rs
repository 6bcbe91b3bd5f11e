//! What each command does.

use crate::history::Joining;
use crate::results::Effort;
use crate::sounding::{Amendments, Entry};
use crate::thermo::{Pressure, Temperature, Vector};
use crate::trust::{with_repair, without_repair};
use crate::wording::celsius;
use crate::{
    Command, Document, IntervalEnd, Item, ItemId, RepairId, Results, Session, SurfaceQuantity,
    Weight, draft, edit,
};

/// What a surface value may be, K: beyond every value ever measured at the ground, so beyond it is a slip of the hand.
const USABLE: std::ops::RangeInclusive<f64> = 173.15..=338.15;

/// Faster than any storm has moved, m/s: beyond it is a slip of the hand.
const FASTEST_MOTION: f64 = 100.0;

/// Why a change was refused, and what to do instead.
type Refusal = (String, &'static str);

impl Session {
    pub(crate) fn run(&mut self, command: Command) {
        match command {
            Command::Select(id) => self.select(id),
            Command::SelectNext => self.step(1),
            Command::SelectPrevious => self.step(-1),
            Command::Close(id) => self.close(id),

            Command::SetSurface(quantity, value) => {
                self.edit(|item, document| set_surface(item, document, quantity, value))
            }
            Command::Nudge {
                quantity,
                by_k,
                repeat,
            } => self.edit_joining(Some(Joining::Nudge(quantity)), repeat, |item, document| {
                let Some(value) = item.working_surface(quantity) else {
                    return Err(no_value(quantity));
                };
                set_surface(
                    item,
                    document,
                    quantity,
                    Temperature::from_k(value.k() + by_k),
                )
            }),
            Command::ResetSurface(quantity) => self.edit(|_, document| {
                edit::reset_surface(document, quantity);
                Ok(())
            }),
            Command::SetReach(reach) => self.edit(|_, document| {
                document.amendments.reach = reach;
                Ok(())
            }),
            Command::ApplyRepair(id) => self.repair(id, true),
            Command::WithdrawRepair(id) => self.repair(id, false),
            Command::AddAmendment(amendment) => self.edit(|_, document| {
                document.amendments.entries.push(Entry {
                    amendment,
                    enabled: true,
                    from_repair: None,
                });
                Ok(())
            }),
            Command::ToggleAmendment(index) => self.edit(|_, document| {
                if let Some(entry) = document.amendments.entries.get_mut(index) {
                    entry.enabled = !entry.enabled;
                }
                Ok(())
            }),
            Command::RemoveAmendment(index) => self.edit(|_, document| {
                if index < document.amendments.entries.len() {
                    document.amendments.entries.remove(index);
                }
                Ok(())
            }),
            Command::ClearAmendments => self.edit(|_, document| {
                document.amendments = Amendments::default();
                Ok(())
            }),
            Command::Pin(end, value) => self.edit(|_, document| pin(document, end, Some(value))),
            Command::PinAtWorking(end) => self.edit(|item, document| {
                let value = item
                    .working_surface(SurfaceQuantity::Dewpoint)
                    .ok_or_else(|| no_value(SurfaceQuantity::Dewpoint))?;
                pin(document, end, Some(value))
            }),
            Command::Unpin(end) => self.edit(|_, document| pin(document, end, None)),
            Command::PickLevel(level) => self.edit(|_, document| {
                document.picked_level_pa = level.map(Pressure::pa);
                Ok(())
            }),
            Command::SetStormMotion(motion) => {
                self.edit(|_, document| set_motion(document, motion))
            }
            Command::NudgeStormMotion { by, repeat } => {
                self.edit_joining(Some(Joining::Motion), repeat, |item, document| {
                    let now = document
                        .storm_motion()
                        .or(item.results().further.winds.motion_used)
                        .unwrap_or_default();
                    set_motion(document, Some(now + by))
                })
            }

            Command::Undo => self.travel(|item| {
                // In the middle of a drag, the step to take back is the drag.
                if item.history.in_gesture() {
                    item.history.cancel()
                } else {
                    item.history.undo()
                }
            }),
            Command::Redo => self.travel(|item| !item.history.in_gesture() && item.history.redo()),
            Command::BeginGesture => {
                if let Some(item) = self.current.and_then(|id| self.item_mut(id)) {
                    item.history.begin();
                }
            }
            Command::EndGesture => self.end_gesture(),
            Command::CancelGesture => self.travel(|item| item.history.cancel()),

            Command::ChooseVerdict(verdict) => self.edit(|_, document| {
                document.verdict = verdict;
                Ok(())
            }),
            Command::SetReasons(reasons) => {
                self.edit_joining(Some(Joining::Reasons), true, |_, document| {
                    document.reasons = reasons;
                    Ok(())
                })
            }
            Command::SetInitials(initials) => self.set_initials(&initials),
            Command::Decide => self.decide(),

            Command::CompareAscents => self.compare_ascents(),

            Command::SetPosition(position) => self.set_position(position),
            Command::Dismiss(id) => self.messages.retain(|message| message.id != id),
        }
    }

    fn edit(&mut self, change: impl FnOnce(&Item, &mut Document) -> Result<(), Refusal>) {
        self.edit_joining(None, false, change);
    }

    fn edit_joining(
        &mut self,
        kind: Option<Joining>,
        join: bool,
        change: impl FnOnce(&Item, &mut Document) -> Result<(), Refusal>,
    ) {
        let Some(item) = self.current() else { return };
        let id = item.id;
        let before = item.document().clone();
        let mut document = before.clone();
        if let Err((what, remedy)) = change(item, &mut document) {
            let about = item.sounding().station.label().to_owned();
            self.tell(Weight::Told, about, what, remedy);
            return;
        }
        let Some(item) = self.item_mut(id) else {
            return;
        };
        if item.history.set(document, kind, join) {
            let in_gesture = item.history.in_gesture();
            self.document_changed(id, &before);
            if !in_gesture {
                self.save_draft(id);
            }
        }
    }

    /// Moves along the history of the current item.
    fn travel(&mut self, go: impl FnOnce(&mut Item) -> bool) {
        let Some(item) = self.current.and_then(|id| self.item_mut(id)) else {
            return;
        };
        let id = item.id;
        let before = item.document().clone();
        let moved = go(item);
        // A drag given up where it began changes nothing, but what it left hasty is to be done in full.
        if moved || (item.results.is_hasty() && !item.in_gesture()) {
            self.document_changed(id, &before);
        }
        if moved {
            self.save_draft(id);
        }
    }

    fn end_gesture(&mut self) {
        let Some(item) = self.current.and_then(|id| self.item_mut(id)) else {
            return;
        };
        let id = item.id;
        let changed = item.history.end();
        if item.results.is_hasty() {
            let document = item.document().clone();
            self.document_changed(id, &document);
        }
        if changed {
            self.save_draft(id);
        }
    }

    /// Brings the results of an item up to its document, whose content was `before`.
    pub(crate) fn document_changed(&mut self, id: ItemId, before: &Document) {
        let revision = self.next_revision();
        let hold = self.hold;
        let Some(item) = self.item_mut(id) else {
            return;
        };
        let effort = if item.history.in_gesture() {
            Effort::InFrame
        } else {
            Effort::Full
        };
        let finer = item.results.is_hasty() && effort == Effort::Full;
        if item.document().computes_like(before) && !finer {
            item.results.revision = revision;
        } else {
            item.results = Results::next(
                &item.analysed,
                item.history.document(),
                revision,
                &item.results,
                hold,
                effort,
            );
        }
        self.refresh_standing(id);
    }

    pub(crate) fn save_draft(&mut self, id: ItemId) {
        let Some(item) = self.item(id) else { return };
        let path = draft::path(&self.config.drafts, &item.identity);
        if !item.is_draft() {
            self.files.remove(path);
            return;
        }
        match draft::encode(&item.identity, item.document()) {
            Ok(text) => self.files.replace(path, text),
            Err(error) => {
                let about = item.sounding().station.label().to_owned();
                self.tell(
                    Weight::Failed,
                    about,
                    format!("the draft can't be written: {error}"),
                    "Decide before closing the desk",
                );
            }
        }
    }

    fn repair(&mut self, id: RepairId, apply: bool) {
        self.edit(|item, document| {
            let Some((finding, repair)) = item.finding_and_repair(id) else {
                return Ok(());
            };
            document.amendments = if apply {
                with_repair(&document.amendments, finding, repair)
            } else {
                without_repair(&document.amendments, finding, repair)
            };
            Ok(())
        });
    }

    pub(crate) fn select(&mut self, id: ItemId) {
        if self.item(id).is_none() || self.current == Some(id) {
            return;
        }
        self.leave_current();
        self.current = Some(id);
    }

    fn leave_current(&mut self) {
        self.end_gesture();
        if let Some(item) = self.current.and_then(|id| self.item_mut(id)) {
            item.history.settle();
        }
    }

    fn step(&mut self, by: isize) {
        let here = self
            .tray
            .iter()
            .position(|row| Some(row.item) == self.current);
        let there = match here {
            Some(here) => here.checked_add_signed(by),
            None => Some(0),
        };
        if let Some(row) = there.and_then(|there| self.tray.get(there)) {
            self.select(row.item);
        }
    }

    fn close(&mut self, id: ItemId) {
        if self.current == Some(id) {
            self.leave_current();
            let here = self.tray.iter().position(|row| row.item == id);
            let next = here.and_then(|here| {
                let below = self.tray.get(here + 1);
                below.or_else(|| self.tray.get(here.checked_sub(1)?))
            });
            self.current = next.map(|row| row.item);
        }
        self.items.retain(|item| item.id != id);
    }
}

/// Sets the storm motion, or lets it go.
fn set_motion(document: &mut Document, motion: Option<Vector>) -> Result<(), Refusal> {
    // NaN is below no limit.
    if !motion.is_none_or(|motion| motion.speed() <= FASTEST_MOTION) {
        return Err((
            "no storm moves like this".to_owned(),
            "Give a motion of at most 100 m/s",
        ));
    }
    document.storm_motion_ms = motion.map(|motion| [motion.u, motion.v]);
    Ok(())
}

fn no_value(quantity: SurfaceQuantity) -> Refusal {
    (
        format!("there is no {} to move", quantity.words()),
        "Type a value to set it",
    )
}

/// Sets a surface value, held to Td <= T.
fn set_surface(
    item: &Item,
    document: &mut Document,
    quantity: SurfaceQuantity,
    value: Temperature,
) -> Result<(), Refusal> {
    if item.surface_row().is_none() {
        return Err((
            "the message has no surface level, so no surface value can be set".to_owned(),
            "Use the mixed or the most unstable parcel, or pick a level",
        ));
    }
    // NaN is in no range.
    if !USABLE.contains(&value.k()) {
        return Err((
            format!(
                "{} is not a {} anybody has measured",
                celsius(value),
                quantity.words()
            ),
            "Give a value from −100 to 65 °C",
        ));
    }
    let value = match quantity {
        SurfaceQuantity::Dewpoint => item
            .working_surface(SurfaceQuantity::Temperature)
            .map_or(value, |temperature| {
                Temperature::from_k(value.k().min(temperature.k()))
            }),
        SurfaceQuantity::Temperature => item
            .working_surface(SurfaceQuantity::Dewpoint)
            .map_or(value, |dewpoint| {
                Temperature::from_k(value.k().max(dewpoint.k()))
            }),
    };
    edit::set_surface(document, quantity, value);
    Ok(())
}

fn pin(
    document: &mut Document,
    end: IntervalEnd,
    value: Option<Temperature>,
) -> Result<(), Refusal> {
    let value = value.map(Temperature::k);
    if value.is_some_and(|value| !USABLE.contains(&value)) {
        return Err((
            "this is not a usable dew point".to_owned(),
            "Give a value from −100 to 65 °C",
        ));
    }
    match end {
        IntervalEnd::Low => document.pins.low_k = value,
        IntervalEnd::High => document.pins.high_k = value,
    }
    if let (Some(low), Some(high)) = (document.pins.low_k, document.pins.high_k)
        && low > high
    {
        return Err((
            "the drier end would lie above the moister end".to_owned(),
            "Unpin or move the other end first",
        ));
    }
    Ok(())
}
