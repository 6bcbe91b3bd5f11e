//! The session: one door for changes, one for files, everything else to be read.

use crate::disk::SmallFiles;
use crate::keeper::Keeper;
use crate::ledger::{Decision, Disk, RealDisk};
use crate::office::Remembered;
use crate::opening::{Desk, Opening, Wanted};
use crate::wake::SharedWaker;
use crate::{
    Command, Config, Item, ItemId, Message, MessageId, Office, Revision, TrayRow, Weight, office,
};
use std::fmt;
use std::path::PathBuf;
use std::sync::Arc;

/// Called from the workers when something has arrived, so that a window can wake up and [`Session::poll`].
pub type Waker = Arc<dyn Fn() + Send + Sync>;

/// The state of one desk.
///
/// **Invariant:** after every call the results of each item are those of its document; a command is never half applied.
pub struct Session {
    pub(crate) config: Config,
    pub(crate) items: Vec<Item>,
    pub(crate) tray: Vec<TrayRow>,
    pub(crate) current: Option<ItemId>,
    pub(crate) messages: Vec<Message>,
    pub(crate) remembered: Remembered,
    pub(crate) office: Arc<Office>,
    pub(crate) hold: bool,
    /// Soundings that came with the job being read.
    pub(crate) batch: Vec<ItemId>,
    /// The user has done something since the last files were asked for, so the view is not to jump.
    pub(crate) busy_user: bool,
    pub(crate) opening: Opening,
    pub(crate) files: SmallFiles,
    pub(crate) ledger: Keeper,
    pub(crate) demo_ledger: Keeper,
    waker: SharedWaker,
    counter: u64,
}

impl Session {
    /// Opens a desk. Never fails: what can't be opened (ledger, thresholds, station table) becomes a message.
    pub fn new(config: Config) -> Self {
        Self::with_disks(config, Box::new(RealDisk), Box::new(RealDisk))
    }

    /// The same, with the ledger and the demo ledger writing through these disks.
    pub fn with_disks(config: Config, ledger: Box<dyn Disk>, demo_ledger: Box<dyn Disk>) -> Self {
        let waker = SharedWaker::default();
        let (office, mut remembered, problems) = office::open(&config);
        if config.initials.is_some() {
            remembered.initials.clone_from(&config.initials);
        }
        let keeper = |folder: &PathBuf, disk| {
            Keeper::open(folder.clone(), config.desk.clone(), disk, waker.clone())
        };
        let mut session = Self {
            items: Vec::new(),
            tray: Vec::new(),
            current: None,
            messages: Vec::new(),
            remembered,
            office: Arc::new(office),
            hold: false,
            batch: Vec::new(),
            busy_user: false,
            opening: Opening::start(waker.clone()),
            files: SmallFiles::start(waker.clone()),
            ledger: keeper(&config.ledger, ledger),
            demo_ledger: keeper(&config.demo_ledger, demo_ledger),
            waker,
            counter: 0,
            config,
        };
        for problem in problems {
            session.tell(Weight::Failed, problem.about, problem.what, problem.remedy);
        }
        session
    }

    /// Sets what wakes the window when a worker has something.
    pub fn set_waker(&mut self, waker: Waker) {
        self.waker.set(waker);
    }

    /// Reads and analyses files, and the files of folders, on a worker; they arrive in [`Session::poll`].
    ///
    /// When all are there, the worst of them becomes the current one, unless the user has done something meanwhile.
    pub fn open_paths(&mut self, paths: Vec<PathBuf>) {
        self.want(Wanted::Paths(paths));
    }

    /// The same for bytes that came without a path (dropped or pasted).
    pub fn open_bytes(&mut self, name: String, bytes: Vec<u8>) {
        self.want(Wanted::Bytes(name, bytes));
    }

    /// Opens the built-in tray of invented soundings.
    pub fn open_demo(&mut self) {
        self.want(Wanted::Demo);
    }

    fn want(&mut self, wanted: Wanted) {
        self.busy_user = false;
        // Other desks may have decided on these soundings since.
        self.ledger.refresh();
        let desk = Desk {
            office: self.office.clone(),
            drafts: self.config.drafts.clone(),
            as_of: self.config.as_of,
        };
        self.opening.want(desk, wanted, self.files.barrier());
    }

    /// Takes in what the workers have finished. True when something changed.
    pub fn poll(&mut self) -> bool {
        let mut changed = false;
        while let Some(arrival) = self.opening.next() {
            self.take_in(arrival);
            changed = true;
        }
        changed |= self.poll_ledgers();
        changed |= self.poll_disk();
        changed
    }

    /// Waits for the workers to finish everything asked for so far (for the text tray and for tests; never in a frame).
    pub fn wait(&mut self) {
        self.ledger.wait();
        self.demo_ledger.wait();
        while self.opening.outstanding() > 0 {
            if let Some(arrival) = self.opening.wait_next() {
                self.take_in(arrival);
            }
        }
        self.poll();
        self.files.flush();
        self.poll_disk();
    }

    /// Jobs of reading still under way.
    pub fn reading(&self) -> usize {
        self.opening.outstanding()
    }

    /// Applies a change; results are up to date when this returns.
    pub fn apply(&mut self, command: Command) {
        let by_the_way = matches!(
            command,
            Command::Dismiss(_) | Command::SetInitials(_) | Command::CompareAscents
        );
        if !by_the_way {
            self.busy_user = true;
        }
        self.run(command);
        self.refresh_tray();
    }

    /// While true (pointer or key down, card open) cards and tray keep their order; when it turns false they are sorted anew.
    pub fn hold_order(&mut self, hold: bool) {
        if self.hold && !hold {
            for item in &mut self.items {
                item.results.sort();
            }
        }
        let sort = self.hold && !hold;
        self.hold = hold;
        if sort {
            self.refresh_tray();
        }
    }

    /// All items, in the order opened.
    pub fn items(&self) -> &[Item] {
        &self.items
    }

    /// One item.
    pub fn item(&self, id: ItemId) -> Option<&Item> {
        self.items.iter().find(|item| item.id == id)
    }

    pub(crate) fn item_mut(&mut self, id: ItemId) -> Option<&mut Item> {
        self.items.iter_mut().find(|item| item.id == id)
    }

    /// The current item.
    pub fn current(&self) -> Option<&Item> {
        self.item(self.current?)
    }

    /// Lines of the tray, in the order shown.
    pub fn tray(&self) -> &[TrayRow] {
        &self.tray
    }

    /// Messages, oldest first.
    pub fn messages(&self) -> &[Message] {
        &self.messages
    }

    /// Who is on shift; `None`: to be asked at the first verdict.
    pub fn initials(&self) -> Option<&str> {
        self.remembered.initials.as_deref()
    }

    /// Every decision in the ledger (or the demo ledger), oldest first; `None` while it is being read or written.
    pub fn decisions(&self, demo: bool) -> Option<&[Decision]> {
        if demo {
            &self.demo_ledger
        } else {
            &self.ledger
        }
        .decisions()
    }

    /// Folders and names.
    pub fn config(&self) -> &Config {
        &self.config
    }

    /// What the office has prepared.
    pub fn office(&self) -> &Office {
        &self.office
    }

    pub(crate) fn count(&mut self) -> u64 {
        self.counter += 1;
        self.counter
    }

    pub(crate) fn next_revision(&mut self) -> Revision {
        Revision(self.count())
    }

    pub(crate) fn tell(
        &mut self,
        weight: Weight,
        about: impl Into<String>,
        what: impl Into<String>,
        remedy: impl Into<String>,
    ) {
        let message = Message {
            id: MessageId(self.count()),
            weight,
            about: about.into(),
            what: what.into(),
            remedy: remedy.into(),
        };
        // Said again, it is said once, and last.
        self.messages.retain(|told| !told.says_like(&message));
        self.messages.push(message);
    }
}

impl fmt::Debug for Session {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("Session")
            .field("config", &self.config)
            .field("items", &self.items.len())
            .field("current", &self.current)
            .field("messages", &self.messages)
            .finish_non_exhaustive()
    }
}
