//! What can be done now, and which command an action stands for.

use crate::ledger::Verdict;
use crate::sounding::{MIXED_LAYER_LEAST_DEPTH, Reach};
use crate::thermo::Pressure;
use crate::trust::Grade;
use crate::{Action, Command, IntervalEnd, Item, Session, SurfaceQuantity};

impl Session {
    /// Whether an action can be done now; `Err` says why not, for the tooltip.
    pub fn can(&self, action: Action) -> Result<(), String> {
        let declaration = action.declaration();
        if declaration.window
            && !matches!(
                action,
                Action::CopyLine | Action::CopyNumbers | Action::CopyWinds
            )
        {
            return Ok(());
        }
        let item = self.current().ok_or("no sounding is open")?;
        let document = item.document();
        let need = |holds: bool, otherwise: &str| {
            if holds {
                Ok(())
            } else {
                Err(otherwise.to_owned())
            }
        };
        match action {
            Action::Undo => need(item.can_undo() || item.in_gesture(), "nothing to undo"),
            Action::Redo => need(item.can_redo() && !item.in_gesture(), "nothing to redo"),
            Action::ResetDewpoint => need(
                document.surface(SurfaceQuantity::Dewpoint).is_some(),
                "it is the received dew point",
            ),
            Action::ResetTemperature => need(
                document.surface(SurfaceQuantity::Temperature).is_some(),
                "it is the received temperature",
            ),
            Action::ResetMotion => need(
                document.storm_motion().is_some(),
                "it is the estimated motion",
            ),
            Action::ClearAmendments => need(
                !document.amendments.entries.is_empty(),
                "there are no amendments",
            ),
            Action::PinLow | Action::PinHigh => need(
                item.working_surface(SurfaceQuantity::Dewpoint).is_some(),
                "there is no surface dew point",
            ),
            Action::UnpinLow => need(document.pins.low_k.is_some(), "this end is not pinned"),
            Action::UnpinHigh => need(document.pins.high_k.is_some(), "this end is not pinned"),
            Action::ReachMixed | Action::ReachTapered => mixed_layer(item),
            Action::Decide => self.decidable().map(|_| ()),
            Action::SelectNext | Action::SelectPrevious => {
                need(self.tray().len() > 1, "there is no other sounding")
            }
            _ => Ok(()),
        }
    }

    /// The command an action stands for now; `None` for actions that are the window's own business, or can't be done.
    pub fn command_of(&self, action: Action) -> Option<Command> {
        self.can(action).ok()?;
        let item = self.current()?;
        Some(match action {
            Action::CloseItem => Command::Close(item.id()),
            Action::Undo => Command::Undo,
            Action::Redo => Command::Redo,
            Action::ResetDewpoint => Command::ResetSurface(SurfaceQuantity::Dewpoint),
            Action::ResetTemperature => Command::ResetSurface(SurfaceQuantity::Temperature),
            Action::ResetMotion => Command::SetStormMotion(None),
            Action::ClearAmendments => Command::ClearAmendments,
            Action::SelectNext => Command::SelectNext,
            Action::SelectPrevious => Command::SelectPrevious,
            Action::ReachDefault => Command::SetReach(None),
            Action::ReachLevel => Command::SetReach(Some(Reach::Level)),
            Action::ReachMixed => Command::SetReach(Some(Reach::Mixed)),
            Action::ReachTapered => Command::SetReach(Some(Reach::Tapered)),
            Action::PinLow => Command::PinAtWorking(IntervalEnd::Low),
            Action::PinHigh => Command::PinAtWorking(IntervalEnd::High),
            Action::UnpinLow => Command::Unpin(IntervalEnd::Low),
            Action::UnpinHigh => Command::Unpin(IntervalEnd::High),
            Action::Accept => Command::ChooseVerdict(Some(Verdict::Accepted)),
            Action::AcceptAsAmended => Command::ChooseVerdict(Some(Verdict::AcceptedAsAmended)),
            Action::ContaminatedAbove => Command::ChooseVerdict(Some(Verdict::ContaminatedAbove {
                pressure_pa: contaminated_above(item).pa(),
            })),
            Action::Contaminated => Command::ChooseVerdict(Some(Verdict::Contaminated)),
            Action::NoVerdict => Command::ChooseVerdict(None),
            Action::Decide => Command::Decide,
            Action::OpenFiles
            | Action::OpenFolder
            | Action::OpenDemo
            | Action::Quit
            | Action::CopyLine
            | Action::CopyNumbers
            | Action::CopyWinds
            | Action::ShowChart
            | Action::ShowWinds
            | Action::WindsToTwelve
            | Action::WindsToSix
            | Action::WindsToThree
            | Action::ZoomIn
            | Action::ZoomOut
            | Action::ZoomReset
            | Action::ToggleTheme
            | Action::ToggleTiming
            | Action::ShowKeys
            | Action::ShowCaution => return None,
        })
    }
}

/// Whether there is a mixed layer for a surface edit to reach through.
fn mixed_layer(item: &Item) -> Result<(), String> {
    let working = &item.results().working;
    let least = MIXED_LAYER_LEAST_DEPTH;
    match (working.profile.surface_pressure(), working.reach.mixed_top) {
        (Some(surface), Some(top)) if surface.pa() - top.pa() >= least.pa() => Ok(()),
        (Some(surface), Some(top)) => Err(format!(
            "the mixed layer is only {:.0} hPa deep, {:.0} are needed",
            surface.hpa() - top.hpa(),
            least.hpa()
        )),
        _ => Err("no mixed layer reaches the surface".to_owned()),
    }
}

/// Where "contaminated above" starts out: the bottom of the worst finding that has a layer above the surface, else the
/// pressure chosen before, else 500 hPa.
fn contaminated_above(item: &Item) -> Pressure {
    if let Some(Verdict::ContaminatedAbove { pressure_pa }) = item.document().verdict {
        return Pressure::from_pa(pressure_pa);
    }
    let surface = item.received().surface_pressure();
    item.results()
        .order
        .iter()
        .filter_map(|&index| item.findings().get(index))
        .filter(|finding| finding.grade > Grade::Informative)
        .filter_map(|finding| finding.bottom)
        .find(|bottom| surface.is_none_or(|surface| bottom.pa() < surface.pa()))
        .unwrap_or(Pressure::from_hpa(500.0))
}
