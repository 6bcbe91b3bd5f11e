//! Keeping decisions without making a frame wait for a disk.

use crate::ItemId;
use crate::ledger::{self};
use crate::ledger::{Decision, Disk, Ledger, Problem, RealDisk, SoundingKey};
use crate::wake::SharedWaker;
use std::collections::{BTreeSet, VecDeque};
use std::path::PathBuf;
use std::sync::mpsc::{Receiver, TryRecvError, channel};

/// What came of a decision.
#[derive(Debug)]
pub(crate) struct Outcome {
    pub item: ItemId,
    pub decision: Decision,
    pub result: Result<(), String>,
}

/// What has happened to a ledger since the last look.
#[derive(Debug, Default)]
pub(crate) struct News {
    /// Decisions kept or not kept.
    pub outcomes: Vec<Outcome>,
    /// The ledger could not be opened or read again.
    pub failures: Vec<String>,
    /// Files and lines that can't be used, when they were read anew.
    pub problems: Vec<Problem>,
    /// Standings may have changed.
    pub changed: bool,
}

enum Job {
    Keep(ItemId, Box<Decision>),
    Refresh,
}

type Answer = (Option<Ledger>, Option<Outcome>, Option<String>);

/// One ledger. While it is being written or read it is away on a thread; jobs wait their turn.
///
/// **Invariant:** an [`Outcome`] says `Ok` only after [`Ledger::keep`] has returned `Ok`, that is, after the sync.
pub(crate) struct Keeper {
    folder: PathBuf,
    desk: String,
    ledger: Option<Ledger>,
    away: Option<Receiver<Answer>>,
    /// The decision that is away with it.
    in_flight: Option<(ItemId, Decision)>,
    queue: VecDeque<Job>,
    news: News,
    told: Vec<Problem>,
    waker: SharedWaker,
}

impl Keeper {
    /// Begins to open the ledger; `disk` is what it writes through.
    pub(crate) fn open(
        folder: PathBuf,
        desk: String,
        disk: Box<dyn Disk>,
        waker: SharedWaker,
    ) -> Self {
        let mut keeper = Self {
            folder,
            desk,
            ledger: None,
            away: None,
            in_flight: None,
            queue: VecDeque::new(),
            news: News::default(),
            told: Vec::new(),
            waker,
        };
        keeper.send_open(Some(disk));
        keeper
    }

    fn send_open(&mut self, disk: Option<Box<dyn Disk>>) {
        let (folder, desk) = (self.folder.clone(), self.desk.clone());
        self.send(move || {
            let disk = disk.unwrap_or_else(|| Box::new(RealDisk));
            match Ledger::with_disk(&folder, &desk, disk) {
                Ok(ledger) => (Some(ledger), None, None),
                Err(error) => (None, None, Some(error.to_string())),
            }
        });
    }

    fn send(&mut self, work: impl FnOnce() -> Answer + Send + 'static) {
        let (outbox, inbox) = channel();
        let waker = self.waker.clone();
        self.away = Some(inbox);
        std::thread::spawn(move || {
            let answer = work();
            let _ = outbox.send(answer);
            waker.wake();
        });
    }

    /// Asks for a decision to be kept.
    pub(crate) fn keep(&mut self, item: ItemId, decision: Decision) {
        self.queue.push_back(Job::Keep(item, Box::new(decision)));
        self.start();
    }

    /// Reads the folder again, for what other desks have decided.
    pub(crate) fn refresh(&mut self) {
        if !self.queue.iter().any(|job| matches!(job, Job::Refresh)) {
            self.queue.push_back(Job::Refresh);
        }
        self.start();
    }

    /// Starts the next job if the ledger is at hand.
    fn start(&mut self) {
        if self.away.is_some() || self.queue.is_empty() {
            return;
        }
        let Some(mut ledger) = self.ledger.take() else {
            // It could not be opened; the folder may be there by now.
            self.send_open(None);
            return;
        };
        match self.queue.pop_front() {
            Some(Job::Keep(item, decision)) => {
                self.in_flight = Some((item, (*decision).clone()));
                self.send(move || {
                    let result = ledger
                        .keep((*decision).clone())
                        .map_err(|error| error.to_string());
                    let outcome = Outcome {
                        item,
                        decision: *decision,
                        result,
                    };
                    (Some(ledger), Some(outcome), None)
                });
            }
            Some(Job::Refresh) => self.send(move || {
                let failure = ledger.refresh().err().map(|error| error.to_string());
                (Some(ledger), None, failure)
            }),
            None => self.ledger = Some(ledger),
        }
    }

    /// Takes in what the thread has answered.
    pub(crate) fn poll(&mut self) -> News {
        while let Some(inbox) = &self.away {
            match inbox.try_recv() {
                Ok(answer) => self.take_in(Some(answer)),
                Err(TryRecvError::Disconnected) => self.take_in(None),
                Err(TryRecvError::Empty) => break,
            }
        }
        std::mem::take(&mut self.news)
    }

    /// Waits until everything asked for is done; what happened is told by the next [`Keeper::poll`].
    pub(crate) fn wait(&mut self) {
        while let Some(inbox) = &self.away {
            let answer = inbox.recv().ok();
            self.take_in(answer);
        }
    }

    fn take_in(&mut self, answer: Option<Answer>) {
        self.away = None;
        let (ledger, outcome, failure) = answer.unwrap_or_else(|| {
            (
                None,
                None,
                Some(format!(
                    "ledger folder {}: the writer stopped",
                    self.folder.display()
                )),
            )
        });
        if let Some((item, decision)) = self.in_flight.take()
            && outcome.is_none()
        {
            self.news.outcomes.push(Outcome {
                item,
                decision,
                result: Err("it is not known to be kept: the writer stopped; look at the record, then decide again".to_owned()),
            });
        }
        self.ledger = ledger;
        self.news.changed = true;
        self.news.outcomes.extend(outcome);
        if let Some(ledger) = &self.ledger
            && ledger.problems() != self.told
        {
            self.told = ledger.problems().to_vec();
            self.news.problems.clone_from(&self.told);
        }
        if let Some(failure) = failure {
            // Nothing that waits can be kept now; each is told, so that nobody believes it was.
            for job in std::mem::take(&mut self.queue) {
                if let Job::Keep(item, decision) = job {
                    self.news.outcomes.push(Outcome {
                        item,
                        decision: *decision,
                        result: Err(format!("not kept: {failure}")),
                    });
                }
            }
            self.news.failures.push(failure);
        }
        self.start();
    }

    /// How a sounding stands; `None` while the ledger is away.
    pub(crate) fn standing(
        &self,
        key: &SoundingKey,
        parts: &BTreeSet<String>,
    ) -> Option<ledger::Standing<'_>> {
        self.ledger
            .as_ref()
            .map(|ledger| ledger.standing(key, parts))
    }

    /// All decisions, oldest first; `None` while the ledger is away.
    pub(crate) fn decisions(&self) -> Option<&[Decision]> {
        self.ledger.as_ref().map(Ledger::decisions)
    }
}

impl Drop for Keeper {
    /// A verdict given just before the desk closes is still kept.
    fn drop(&mut self) {
        self.wait();
    }
}
