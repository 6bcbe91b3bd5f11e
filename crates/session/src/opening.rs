//! The worker that reads and analyses while the window goes on.

use crate::reading::{ReadFailure, ReadFile, STATION_TABLE, files_of, read_bytes, read_file};
use crate::wake::SharedWaker;
use crate::{Analysed, Document, Identity, Office, Results, demo, draft, wording};
use jiff::{Timestamp, civil::Date};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::PathBuf;
use std::sync::Arc;
use std::sync::mpsc::{Receiver, Sender, channel};

/// What the worker needs to know; replaced whole when it changes.
#[derive(Debug, Clone)]
pub(crate) struct Desk {
    pub office: Arc<Office>,
    pub drafts: PathBuf,
    pub as_of: Option<Date>,
}

/// Something to read.
pub(crate) enum Wanted {
    Paths(Vec<PathBuf>),
    Bytes(String, Vec<u8>),
    Demo,
}

/// One sounding, ready to be put into the tray.
pub(crate) struct Fresh {
    pub analysed: Arc<Analysed>,
    pub identity: Identity,
    /// The draft kept for it, if any.
    pub draft: Option<Document>,
    /// Results of the draft, else of the untouched document.
    pub results: Results,
}

/// What arrives from the worker.
pub(crate) enum Arrival {
    Sounding(Box<Fresh>),
    /// Something to be known about a file.
    Told {
        about: String,
        what: String,
    },
    Failed {
        about: String,
        what: String,
        remedy: &'static str,
    },
    /// A draft that can't be used.
    Draft {
        about: String,
        what: String,
    },
    /// One [`Wanted`] is finished.
    Done,
}

struct Job {
    desk: Desk,
    wanted: Wanted,
    drafts_written: Receiver<()>,
}

/// The worker.
pub(crate) struct Opening {
    jobs: Sender<Job>,
    arrivals: Receiver<Arrival>,
    outstanding: usize,
}

impl Opening {
    pub(crate) fn start(waker: SharedWaker) -> Self {
        let (jobs, inbox) = channel::<Job>();
        let (outbox, arrivals) = channel();
        std::thread::spawn(move || {
            let tell = |arrival| {
                let told = outbox.send(arrival).is_ok();
                waker.wake();
                told
            };
            for Job {
                desk,
                wanted,
                drafts_written,
            } in inbox
            {
                let _ = drafts_written.recv();
                if !read(&desk, wanted, &tell) || !tell(Arrival::Done) {
                    return;
                }
            }
        });
        Self {
            jobs,
            arrivals,
            outstanding: 0,
        }
    }

    /// `drafts_written` receives when every draft asked to be written by now is on the disk.
    pub(crate) fn want(&mut self, desk: Desk, wanted: Wanted, drafts_written: Receiver<()>) {
        let job = Job {
            desk,
            wanted,
            drafts_written,
        };
        if self.jobs.send(job).is_ok() {
            self.outstanding += 1;
        }
    }

    pub(crate) fn outstanding(&self) -> usize {
        self.outstanding
    }

    /// The next thing that has arrived.
    pub(crate) fn next(&mut self) -> Option<Arrival> {
        let arrival = self.arrivals.try_recv().ok();
        self.count(arrival)
    }

    /// The next thing, waiting for it while anything is outstanding.
    pub(crate) fn wait_next(&mut self) -> Option<Arrival> {
        if self.outstanding == 0 {
            return self.next();
        }
        let arrival = self.arrivals.recv().ok();
        if arrival.is_none() {
            self.outstanding = 0;
        }
        self.count(arrival)
    }

    fn count(&mut self, arrival: Option<Arrival>) -> Option<Arrival> {
        if matches!(arrival, Some(Arrival::Done)) {
            self.outstanding = self.outstanding.saturating_sub(1);
        }
        arrival
    }
}

/// Reads what is wanted. False when nobody listens any more.
fn read(desk: &Desk, wanted: Wanted, tell: &dyn Fn(Arrival) -> bool) -> bool {
    match wanted {
        Wanted::Paths(paths) => paths.into_iter().all(|path| match files_of(&path) {
            Ok(meant) => {
                let told = meant.station_tables.iter().all(|table| {
                    tell(Arrival::Told {
                        about: table.display().to_string(),
                        what: STATION_TABLE.to_owned(),
                    })
                });
                told && meant.files.into_iter().all(|file| {
                    let name = file.display().to_string();
                    guarded(desk, &name, tell, || {
                        read_file(&file, &desk.office, desk.as_of)
                    })
                })
            }
            Err(error) => tell(Arrival::Failed {
                about: path.display().to_string(),
                what: format!("can't be listed: {error}"),
                remedy: "Check that the folder exists and that you may read it",
            }),
        }),
        Wanted::Bytes(name, bytes) => guarded(desk, &name, tell, || {
            read_bytes(
                &name,
                &bytes,
                Some(Timestamp::now()),
                &desk.office,
                desk.as_of,
            )
        }),
        Wanted::Demo => demo::FILES.iter().all(|file| {
            guarded(desk, file.name, tell, || {
                read_bytes(file.name, file.bytes, None, &desk.office, None)
            })
        }),
    }
}

/// One file. A fault of ours in one file must not take the others with it, nor the window.
fn guarded(
    desk: &Desk,
    name: &str,
    tell: &dyn Fn(Arrival) -> bool,
    read: impl FnOnce() -> Result<ReadFile, ReadFailure>,
) -> bool {
    let told = catch_unwind(AssertUnwindSafe(|| deliver(desk, name, tell, read())));
    told.unwrap_or_else(|_| {
        tell(Arrival::Failed {
            about: name.to_owned(),
            what: "the program failed on this file, which is a defect of the program".to_owned(),
            remedy: "The other files are not touched by it; please report it with the file",
        })
    })
}

fn deliver(
    desk: &Desk,
    name: &str,
    tell: &dyn Fn(Arrival) -> bool,
    read: Result<ReadFile, ReadFailure>,
) -> bool {
    let file = match read {
        Ok(file) => file,
        Err(failure) => {
            return tell(Arrival::Failed {
                about: name.to_owned(),
                what: failure.what(name),
                remedy: failure.remedy(),
            });
        }
    };
    let notes: Vec<String> = file.notes.iter().map(wording::note).collect();
    if !notes.is_empty()
        && !tell(Arrival::Told {
            about: name.to_owned(),
            what: notes.join("\n"),
        })
    {
        return false;
    }
    file.soundings.into_iter().all(|analysed| {
        let identity = Identity::of(&analysed.sounding);
        let draft = match draft::load(&desk.drafts, &identity) {
            Ok(draft) => draft,
            Err(what) => {
                let about = analysed.sounding.station.label().to_owned();
                tell(Arrival::Draft { about, what });
                None
            }
        };
        let results = Results::of(&analysed, &draft.clone().unwrap_or_default());
        tell(Arrival::Sounding(Box::new(Fresh {
            analysed: Arc::new(analysed),
            identity,
            draft,
            results,
        })))
    })
}
