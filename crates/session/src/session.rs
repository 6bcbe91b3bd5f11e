//! The session: one door for changes, one for files, everything else to be read.

use crate::{Action, Command, Config, Item, ItemId, Message, TrayRow};
use std::path::PathBuf;
use std::sync::Arc;

/// Called from the worker when something has arrived, so that a window can wake up and [`Session::poll`].
pub type Waker = Arc<dyn Fn() + Send + Sync>;

/// The state of one desk.
pub struct Session {
    config: Config,
    items: Vec<Item>,
    tray: Vec<TrayRow>,
    current: Option<ItemId>,
    messages: Vec<Message>,
    initials: Option<String>,
    hold: bool,
}

impl Session {
    /// Opens a desk. Never fails: what can't be opened (ledger, thresholds, station table) becomes a message.
    pub fn new(_config: Config) -> Self {
        todo!()
    }

    /// Sets what wakes the window when the worker has something.
    pub fn set_waker(&mut self, _waker: Waker) {
        todo!()
    }

    /// Reads and analyses files (and the files of folders) on a worker; they arrive in [`Session::poll`].
    pub fn open_paths(&mut self, _paths: Vec<PathBuf>) {
        todo!()
    }

    /// The same for bytes that came without a path (dropped or pasted).
    pub fn open_bytes(&mut self, _name: String, _bytes: Vec<u8>) {
        todo!()
    }

    /// Opens the built-in tray of invented soundings.
    pub fn open_demo(&mut self) {
        todo!()
    }

    /// Takes in what the worker has finished. True when something changed.
    pub fn poll(&mut self) -> bool {
        todo!()
    }

    /// Waits for the worker to finish everything asked for so far (for the text tray and for tests; never in a frame).
    pub fn wait(&mut self) {
        todo!()
    }

    /// Files still being read.
    pub fn reading(&self) -> usize {
        todo!()
    }

    /// Applies a change; results are up to date when this returns.
    pub fn apply(&mut self, _command: Command) {
        todo!()
    }

    /// While true (pointer or key down, card open) cards and tray keep their order; when it turns false they are sorted anew.
    pub fn hold_order(&mut self, hold: bool) {
        self.hold = hold;
    }

    /// Whether an action can be done now; `Err` says why not, for the tooltip.
    pub fn can(&self, _action: Action) -> Result<(), String> {
        todo!()
    }

    /// The command an action stands for now; `None` for actions that are the window's own business, or can't be done.
    pub fn command_of(&self, _action: Action) -> Option<Command> {
        todo!()
    }

    /// All items, in the order opened.
    pub fn items(&self) -> &[Item] {
        &self.items
    }

    /// One item.
    pub fn item(&self, id: ItemId) -> Option<&Item> {
        self.items.iter().find(|item| item.id == id)
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
        self.initials.as_deref()
    }

    /// Folders and names.
    pub fn config(&self) -> &Config {
        &self.config
    }
}
