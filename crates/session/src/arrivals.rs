//! What comes back from the workers.

use crate::history::History;
use crate::keeper::{News, Outcome};
use crate::ledger::{Decision, Problem};
use crate::opening::{Arrival, Fresh};
use crate::{Document, Item, ItemId, Session, Standing, Weight};

impl Session {
    pub(crate) fn take_in(&mut self, arrival: Arrival) {
        match arrival {
            Arrival::Sounding(fresh) => self.add(*fresh),
            Arrival::Told { about, what } => self.tell(Weight::Told, about, what, ""),
            Arrival::Failed {
                about,
                what,
                remedy,
            } => self.tell(Weight::Failed, about, what, remedy),
            Arrival::Draft { about, what } => self.tell(Weight::Failed, about, what, ""),
            Arrival::Done => self.batch_done(),
        }
    }

    fn add(&mut self, fresh: Fresh) {
        if let Some(same) = self
            .items
            .iter()
            .find(|item| item.identity == fresh.identity && !fresh.identity.parts.is_empty())
        {
            self.batch.push(same.id);
            return;
        }
        let id = ItemId(self.count());
        let mut results = fresh.results;
        results.revision = self.next_revision();
        self.items.push(Item {
            other: None,
            id,
            identity: fresh.identity,
            analysed: fresh.analysed,
            history: History::of(fresh.draft.unwrap_or_default()),
            results,
            standing: Standing::Undecided,
            baseline: Document::default(),
            decided_at: None,
            keeping: None,
        });
        self.batch.push(id);
        self.adopt(id);
        self.refresh_standing(id);
        if self.current.is_none() {
            self.current = Some(id);
        }
        self.refresh_tray();
    }

    /// All of one request is there: its worst sounding is shown, unless the user has turned to something else.
    fn batch_done(&mut self) {
        let batch = std::mem::take(&mut self.batch);
        if !self.busy_user {
            let worst = self.tray.iter().find(|row| batch.contains(&row.item));
            if let Some(id) = worst.map(|row| row.item) {
                self.select(id);
            }
        }
    }

    pub(crate) fn poll_ledgers(&mut self) -> bool {
        let news = self.ledger.poll();
        let changed = self.take_in_news(news);
        let news = self.demo_ledger.poll();
        self.take_in_news(news) || changed
    }

    fn take_in_news(&mut self, news: News) -> bool {
        if !news.changed {
            return false;
        }
        for outcome in news.outcomes {
            self.decided(outcome);
        }
        for failure in news.failures {
            self.tell(
                Weight::Failed,
                "",
                failure,
                "Until then no verdict can be kept",
            );
        }
        if !news.problems.is_empty() {
            let lines: Vec<String> = news.problems.iter().map(problem_text).collect();
            self.tell(
                Weight::Failed,
                "ledger",
                lines.join("\n"),
                "These lines were left as they are; all other decisions are read",
            );
        }
        let ids: Vec<ItemId> = self.items.iter().map(|item| item.id).collect();
        for id in ids {
            self.adopt(id);
            self.refresh_standing(id);
        }
        self.refresh_tray();
        true
    }

    /// A sounding nobody has touched at this desk is shown as it was decided, here or elsewhere.
    fn adopt(&mut self, id: ItemId) {
        let Some(item) = self.item(id) else { return };
        let Some(decision) = self.decision_on_these_data(item) else {
            return;
        };
        if item.keeping.is_some() || item.decided_at.is_some_and(|at| at >= decision.decided_at) {
            return;
        }
        let baseline = document_of(decision);
        let decided_at = decision.decided_at;
        let untouched = !item.is_draft() && !item.in_gesture();
        let before = item.document().clone();
        let Some(item) = self.item_mut(id) else {
            return;
        };
        item.decided_at = Some(decided_at);
        item.baseline = baseline.clone();
        if untouched {
            item.history = History::of(baseline);
            self.document_changed(id, &before);
        }
    }

    fn decision_on_these_data(&self, item: &Item) -> Option<&Decision> {
        match self
            .keeper_of(item)
            .standing(&item.identity.key, &item.identity.parts)?
        {
            crate::ledger::Standing::Decided(decision) => Some(decision),
            _ => None,
        }
    }

    fn decided(&mut self, outcome: Outcome) {
        let Outcome {
            item,
            decision,
            result,
        } = outcome;
        let about = decision.station_name.clone();
        if let Some(item) = self.item_mut(item)
            && let Some((at, document)) = item.keeping.take()
            && result.is_ok()
        {
            item.baseline = document;
            item.decided_at = Some(at);
        }
        match result {
            Ok(()) => {
                let which = if decision.demo {
                    " in the demo ledger"
                } else {
                    ""
                };
                let what = format!(
                    "kept{which}: {} ({})",
                    decision.verdict.words(),
                    decision.initials
                );
                self.tell(Weight::Done, about, what, "");
            }
            // The ledger's own sentence says what to do.
            Err(what) => self.tell(Weight::Failed, about, what, ""),
        }
        self.save_draft(item);
    }

    pub(crate) fn poll_disk(&mut self) -> bool {
        let failures = self.files.failures();
        let any = !failures.is_empty();
        for failure in failures {
            self.tell(
                Weight::Failed,
                failure.path.display().to_string(),
                format!("not written: {}", failure.source),
                "Free space or choose a folder you may write to; what is on the desk is still there, but would not survive closing it",
            );
        }
        any
    }
}

/// The document a decision was made on, as far as the ledger tells.
fn document_of(decision: &Decision) -> Document {
    Document {
        amendments: decision.amendments.clone(),
        verdict: Some(decision.verdict),
        reasons: decision.reasons.clone(),
        ..Document::default()
    }
}

fn problem_text(problem: &Problem) -> String {
    match problem.line {
        Some(line) => format!("{}, line {line}: {}", problem.file, problem.what),
        None => format!("{}: {}", problem.file, problem.what),
    }
}
