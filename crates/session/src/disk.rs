//! Small files replaced whole, off the frame.

use crate::wake::SharedWaker;
use std::fs::{self, File};
use std::io::{self, Write};
use std::path::{Path, PathBuf};
use std::sync::mpsc::{Receiver, Sender, channel};
use std::thread::JoinHandle;

/// A file that could not be written or removed.
#[derive(Debug)]
pub(crate) struct DiskFailure {
    pub path: PathBuf,
    pub source: io::Error,
}

enum Job {
    Replace(PathBuf, String),
    Remove(PathBuf),
    /// Answered when everything asked for before it is done.
    Flush(Sender<()>),
}

impl Job {
    fn path(&self) -> Option<&Path> {
        match self {
            Self::Replace(path, _) | Self::Remove(path) => Some(path),
            Self::Flush(_) => None,
        }
    }

    fn run(&self) -> io::Result<()> {
        match self {
            Self::Replace(path, content) => replace(path, content.as_bytes()),
            Self::Remove(path) => match fs::remove_file(path) {
                Err(error) if error.kind() != io::ErrorKind::NotFound => Err(error),
                _ => Ok(()),
            },
            Self::Flush(done) => {
                let _ = done.send(());
                Ok(())
            }
        }
    }
}

/// Writes small files on a thread of its own, in the order asked.
///
/// **Invariant:** a reader sees the old content or the new one, never a part. Dropping it waits until all is written.
pub(crate) struct SmallFiles {
    jobs: Option<Sender<Job>>,
    failures: Receiver<DiskFailure>,
    thread: Option<JoinHandle<()>>,
}

impl SmallFiles {
    pub(crate) fn start(waker: SharedWaker) -> Self {
        let (jobs, inbox) = channel::<Job>();
        let (outbox, failures) = channel();
        let thread = std::thread::spawn(move || {
            while let Ok(first) = inbox.recv() {
                let batch: Vec<Job> = std::iter::once(first).chain(inbox.try_iter()).collect();
                for (index, job) in batch.iter().enumerate() {
                    // A file that is replaced again right away need not be written twice.
                    let later = batch.iter().skip(index + 1);
                    if later
                        .take_while(|job| job.path().is_some())
                        .any(|later| later.path() == job.path())
                    {
                        continue;
                    }
                    if let Err(source) = job.run() {
                        let path = job.path().map(Path::to_owned).unwrap_or_default();
                        let _ = outbox.send(DiskFailure { path, source });
                        waker.wake();
                    }
                }
            }
        });
        Self {
            jobs: Some(jobs),
            failures,
            thread: Some(thread),
        }
    }

    pub(crate) fn replace(&self, path: PathBuf, content: String) {
        self.send(Job::Replace(path, content));
    }

    pub(crate) fn remove(&self, path: PathBuf) {
        self.send(Job::Remove(path));
    }

    /// Receives once everything asked for so far is on the disk or has failed.
    pub(crate) fn barrier(&self) -> Receiver<()> {
        let (done, wait) = channel();
        self.send(Job::Flush(done));
        wait
    }

    /// Waits for that.
    pub(crate) fn flush(&self) {
        let _ = self.barrier().recv();
    }

    pub(crate) fn failures(&self) -> Vec<DiskFailure> {
        self.failures.try_iter().collect()
    }

    fn send(&self, job: Job) {
        if let Some(jobs) = &self.jobs {
            // The thread ends only when this sender is dropped.
            let _ = jobs.send(job);
        }
    }
}

impl Drop for SmallFiles {
    fn drop(&mut self) {
        self.jobs = None;
        if let Some(thread) = self.thread.take() {
            let _ = thread.join();
        }
    }
}

/// Replaces a file: written beside it, synced, renamed over it.
fn replace(path: &Path, content: &[u8]) -> io::Result<()> {
    let folder = path.parent().unwrap_or_else(|| Path::new("."));
    fs::create_dir_all(folder)?;
    let mut beside = path.as_os_str().to_owned();
    beside.push(format!(".{}.part", std::process::id()));
    let beside = PathBuf::from(beside);
    let written = File::create(&beside)
        .and_then(|mut file| file.write_all(content).and_then(|()| file.sync_all()))
        .and_then(|()| fs::rename(&beside, path));
    if written.is_err() {
        let _ = fs::remove_file(&beside);
    }
    written
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_last_content_wins_and_nothing_is_left_beside_it() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("new").join("a.json");
        let files = SmallFiles::start(SharedWaker::default());
        files.replace(path.clone(), "one".to_owned());
        files.replace(path.clone(), "two".to_owned());
        files.flush();
        assert_eq!(fs::read_to_string(&path).unwrap(), "two");
        assert_eq!(fs::read_dir(path.parent().unwrap()).unwrap().count(), 1);
        files.remove(path.clone());
        files.remove(path.clone());
        drop(files);
        assert!(!path.exists());
    }

    #[test]
    fn a_failure_is_told() {
        let folder = tempfile::tempdir().unwrap();
        let file = folder.path().join("in-the-way");
        fs::write(&file, "x").unwrap();
        let files = SmallFiles::start(SharedWaker::default());
        files.replace(file.join("a.json"), "one".to_owned());
        files.flush();
        let failures = files.failures();
        assert_eq!(failures.len(), 1);
        assert_eq!(failures.first().unwrap().path, file.join("a.json"));
    }
}
