//! The worker that reads and analyses while the window goes on.

use crate::guard::{Defect, guarded};
use crate::reading::{ReadFailure, ReadFile, STATION_TABLE, files_of, read_bytes, read_file};
use crate::sounding::Sounding;
use crate::wake::SharedWaker;
use crate::{Analysed, Document, Identity, Office, Results, demo, draft, wording};
use jiff::{Timestamp, civil::Date};
use std::path::PathBuf;
use std::sync::Arc;
use std::sync::mpsc::{Receiver, Sender, TryRecvError, channel};

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
        let arrival = match self.arrivals.try_recv() {
            Ok(arrival) => Some(arrival),
            Err(TryRecvError::Empty) => None,
            Err(TryRecvError::Disconnected) => {
                self.outstanding = 0;
                None
            }
        };
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
                    deliver(desk, &name, tell, || {
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
        Wanted::Bytes(name, bytes) => deliver(desk, &name, tell, || {
            read_bytes(
                &name,
                &bytes,
                Some(Timestamp::now()),
                &desk.office,
                desk.as_of,
            )
        }),
        Wanted::Demo => demo::FILES.iter().all(|file| {
            deliver(desk, file.name, tell, || {
                read_bytes(file.name, file.bytes, None, &desk.office, None)
            })
        }),
    }
}

/// One file. Its soundings are told one by one, as soon as each is analysed.
fn deliver(
    desk: &Desk,
    name: &str,
    tell: &dyn Fn(Arrival) -> bool,
    read: impl FnOnce() -> Result<ReadFile, ReadFailure>,
) -> bool {
    let read = match guarded(read) {
        Ok(read) => read,
        Err(defect) => return tell(failed(name, &defect)),
    };
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
    file.soundings.into_iter().all(|sounding| {
        let label = sounding.station.label().to_owned();
        match guarded(|| prepare(desk, sounding)) {
            Ok((fresh, trouble)) => {
                let told = trouble.is_none_or(|what| tell(Arrival::Draft { about: label, what }));
                told && tell(Arrival::Sounding(Box::new(fresh)))
            }
            Err(defect) => tell(failed(&format!("{name}, {label}"), &defect)),
        }
    })
}

/// A sounding with all that follows from it, and trouble with its draft.
fn prepare(desk: &Desk, sounding: Sounding) -> (Fresh, Option<String>) {
    let analysed = Analysed::of(sounding, &desk.office.thresholds);
    let identity = Identity::of(&analysed.sounding);
    let (draft, trouble) = match draft::load(&desk.drafts, &identity) {
        Ok(draft) => (draft, None),
        Err(what) => (None, Some(what)),
    };
    let results = Results::of(&analysed, &draft.clone().unwrap_or_default());
    let fresh = Fresh {
        analysed: Arc::new(analysed),
        identity,
        draft,
        results,
    };
    (fresh, trouble)
}

fn failed(about: &str, defect: &Defect) -> Arrival {
    Arrival::Failed {
        about: about.to_owned(),
        what: defect.to_string(),
        remedy: Defect::REMEDY,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::sync::Mutex;

    #[test]
    fn a_fault_in_the_reader_is_told_and_the_next_file_is_read() {
        let desk = Desk {
            office: Arc::new(Office::default()),
            drafts: PathBuf::from("nowhere"),
            as_of: None,
        };
        let told = Mutex::new(Vec::new());
        let tell = |arrival: Arrival| {
            told.lock().unwrap().push(arrival);
            true
        };
        assert!(deliver(&desk, "bad", &tell, || panic!("on purpose")));
        let good = ReadFile {
            soundings: vec![Sounding::default()],
            notes: Vec::new(),
        };
        assert!(deliver(&desk, "good", &tell, || Ok(good)));
        let told = told.into_inner().unwrap();
        assert!(
            matches!(&told[..], [Arrival::Failed { about, .. }, Arrival::Sounding(_)] if about == "bad")
        );
    }
}
