//! Deciding: verdict, reasons, initials, and what is typed once and remembered.

use crate::keeper::Keeper;
use crate::ledger::{self, Decision, Verdict};
use crate::office::Remembered;
use crate::sounding::{Parcel, Position};
use crate::{Analysed, Item, ItemId, Results, Session, Standing, Weight};
use jiff::Timestamp;
use std::sync::Arc;

impl Session {
    pub(crate) fn keeper_of(&self, item: &Item) -> &Keeper {
        if item.demo() {
            &self.demo_ledger
        } else {
            &self.ledger
        }
    }

    /// Why the current draft can't be decided yet; `Ok` with its verdict when it can.
    pub(crate) fn decidable(&self) -> Result<Verdict, String> {
        let item = self.current().ok_or("no sounding is open")?;
        let document = item.document();
        if matches!(item.standing, Standing::Keeping) {
            return Err("the verdict is being kept".to_owned());
        }
        let verdict = document.verdict.ok_or("choose a verdict first")?;
        let amended = document
            .amendments
            .entries
            .iter()
            .any(|entry| entry.enabled);
        match verdict {
            Verdict::Accepted if amended => Err(
                "amendments are in force: choose \"accepted as amended\", or remove them"
                    .to_owned(),
            ),
            Verdict::AcceptedAsAmended if !amended => {
                Err("nothing is amended: choose \"accepted\", or amend first".to_owned())
            }
            Verdict::Accepted => Ok(()),
            _ if document.reasons.trim().is_empty() => {
                Err("say why: the next shift reads the reasons".to_owned())
            }
            _ => Ok(()),
        }?;
        if self.initials().is_none() {
            return Err(crate::wording::INITIALS_FIRST.to_owned());
        }
        if matches!(item.standing, Standing::Decided(_)) {
            return Err("this is decided already; change something to decide anew".to_owned());
        }
        Ok(verdict)
    }

    pub(crate) fn decide(&mut self) {
        let verdict = match self.decidable() {
            Ok(verdict) => verdict,
            Err(why) => {
                let about = self
                    .current()
                    .map_or("", |item| item.sounding().station.label())
                    .to_owned();
                self.tell(Weight::Told, about, format!("not decided: {why}"), "");
                return;
            }
        };
        let (Some(item), Some(initials)) = (self.current(), self.initials()) else {
            return;
        };
        let numbers = &item.results.numbers;
        let decision = Decision {
            sounding: item.identity.key.clone(),
            station_name: item.sounding().station.label().to_owned(),
            parts: item.identity.parts.clone(),
            verdict,
            reasons: item.document().reasons.trim().to_owned(),
            initials: initials.to_owned(),
            decided_at: Timestamp::now(),
            amendments: item.document().amendments.clone(),
            cape_jkg: Parcel::ALL.map(|parcel| numbers.parcel(parcel).map(|ascent| ascent.cape)),
            demo: item.demo(),
        };
        let (id, demo, document) = (item.id, item.demo(), item.document().clone());
        if let Some(item) = self.item_mut(id) {
            item.history.settle();
            item.keeping = Some((decision.decided_at, document));
            item.standing = Standing::Keeping;
        }
        let keeper = if demo {
            &mut self.demo_ledger
        } else {
            &mut self.ledger
        };
        keeper.keep(id, decision);
    }

    /// How an item stands now. While the ledger is away what was known of it still counts.
    pub(crate) fn refresh_standing(&mut self, id: ItemId) {
        let Some(item) = self.item(id) else { return };
        let draft = if item.is_draft() {
            Standing::Draft
        } else {
            Standing::Undecided
        };
        let standing = if item.keeping.is_some() {
            Standing::Keeping
        } else {
            match self
                .keeper_of(item)
                .standing(&item.identity.key, &item.identity.parts)
            {
                Some(ledger::Standing::Decided(decision)) if !item.is_draft() => {
                    Standing::Decided(decision.clone())
                }
                Some(ledger::Standing::DecidedOnEarlierData(decision)) => {
                    Standing::DecidedOnEarlierData(decision.clone())
                }
                Some(_) => draft,
                None => match &item.standing {
                    known @ (Standing::Decided(_) | Standing::DecidedOnEarlierData(_))
                        if !item.is_draft() =>
                    {
                        known.clone()
                    }
                    _ => draft,
                },
            }
        };
        if let Some(item) = self.item_mut(id) {
            item.standing = standing;
        }
    }

    pub(crate) fn set_initials(&mut self, initials: &str) {
        let initials = initials.trim();
        let initials = (!initials.is_empty()).then(|| initials.to_owned());
        if self.remembered.initials != initials {
            self.remembered.initials = initials;
            self.remember();
        }
    }

    /// The position of the current station; its soundings are analysed anew, since day and night may now be known.
    pub(crate) fn set_position(&mut self, position: Position) {
        let Some(item) = self.current() else { return };
        let station = &item.sounding().station;
        let label = station.label().to_owned();
        if !(position.latitude.abs() <= 90.0 && position.longitude.abs() <= 180.0) {
            self.tell(
                Weight::Told,
                label,
                format!(
                    "{}, {} is not a position",
                    position.latitude, position.longitude
                ),
                "Latitude -90 to 90 and longitude -180 to 180, north and east positive",
            );
            return;
        }
        let Some(station) = station.canonical_id() else {
            let only = item.id;
            self.relocate(only, position);
            self.tell(
                Weight::Told,
                label,
                "the message names no station, so this position can't be remembered",
                "",
            );
            return;
        };
        let ids: Vec<ItemId> = self
            .items
            .iter()
            .filter(|item| item.sounding().station.canonical_id().as_deref() == Some(&station))
            .map(Item::id)
            .collect();
        for id in ids {
            self.relocate(id, position);
        }
        self.remembered.positions.insert(station, position);
        Arc::make_mut(&mut self.office)
            .positions
            .clone_from(&self.remembered.positions);
        self.remember();
    }

    fn relocate(&mut self, id: ItemId, position: Position) {
        let revision = self.next_revision();
        let office = self.office.clone();
        let Some(item) = self.item_mut(id) else {
            return;
        };
        let mut sounding = (*item.analysed.sounding).clone();
        sounding.station.position = Some(position);
        item.analysed = Arc::new(Analysed::of(sounding, &office.thresholds));
        item.results = Results::of(&item.analysed, item.history.document());
        item.results.revision = revision;
    }

    fn remember(&mut self) {
        match self.remembered.encode() {
            Ok(text) => self
                .files
                .replace(Remembered::path(&self.config.office), text),
            Err(error) => self.tell(
                Weight::Failed,
                "remembered.json",
                format!("not written: {error}"),
                "",
            ),
        }
    }
}
