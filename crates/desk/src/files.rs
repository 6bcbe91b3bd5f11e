//! Where files come from: native dialogs off the frame, and files dropped on the window.

use eframe::egui;
use std::path::PathBuf;
use std::sync::mpsc::{Receiver, Sender, channel};
use std::time::{Duration, Instant};

/// A person needs longer than this to close a dialog; one that is gone sooner was never there.
const NO_DIALOG: Duration = Duration::from_millis(400);

/// What a native dialog came to.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(crate) enum Picked {
    /// These.
    Paths(Vec<PathBuf>),
    /// The person thought better of it.
    Nothing,
    /// The system shows no dialogs here.
    NoDialog,
}

/// Native dialogs at work.
#[derive(Debug)]
pub(crate) struct Files {
    sender: Sender<Picked>,
    receiver: Receiver<Picked>,
}

impl Default for Files {
    fn default() -> Self {
        let (sender, receiver) = channel();
        Self { sender, receiver }
    }
}

impl Files {
    /// Asks for files (or a folder) on a thread of its own.
    pub fn ask(&self, ctx: &egui::Context, folder: bool) {
        let dialog = rfd::AsyncFileDialog::new().set_title(if folder {
            "Open a folder of soundings"
        } else {
            "Open soundings"
        });
        // The request itself has to be made on this thread on some systems; waiting for it needn't.
        let (ctx, sender) = (ctx.clone(), self.sender.clone());
        let asked = Instant::now();
        let tell = move |paths: Option<Vec<PathBuf>>| {
            let picked = match paths {
                Some(paths) if !paths.is_empty() => Picked::Paths(paths),
                _ if asked.elapsed() < NO_DIALOG => Picked::NoDialog,
                _ => Picked::Nothing,
            };
            // A desk that is being closed no longer listens.
            let _ = sender.send(picked);
            ctx.request_repaint();
        };
        if folder {
            let folders = dialog.pick_folders();
            std::thread::spawn(move || {
                tell(
                    pollster::block_on(folders)
                        .map(|all| all.iter().map(|one| one.path().to_owned()).collect()),
                );
            });
        } else {
            let files = dialog.pick_files();
            std::thread::spawn(move || {
                tell(
                    pollster::block_on(files)
                        .map(|all| all.iter().map(|one| one.path().to_owned()).collect()),
                );
            });
        }
    }

    /// What has come back since the last frame.
    pub fn picked(&self) -> Option<Picked> {
        self.receiver.try_recv().ok()
    }
}

/// What was dropped on the window in this frame.
pub(crate) fn dropped(ctx: &egui::Context) -> Vec<PathBuf> {
    ctx.input(|input| {
        input
            .raw
            .dropped_files
            .iter()
            .map(|file| file.path().to_owned())
            .filter(|path| !path.as_os_str().is_empty())
            .collect()
    })
}

/// Paths typed by hand, one a line; a leading `~` means the home folder.
pub(crate) fn typed_paths(text: &str) -> Vec<PathBuf> {
    let home = std::env::var_os("HOME").map(PathBuf::from);
    text.lines()
        .map(|line| line.trim().trim_matches('"'))
        .filter(|line| !line.is_empty())
        .map(|line| match (line.strip_prefix("~/"), &home) {
            (Some(rest), Some(home)) => home.join(rest),
            _ => PathBuf::from(line),
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn one_path_a_line() {
        assert_eq!(
            typed_paths("  /data/a.txt \n\n\"/data/b c.csv\"\n"),
            [PathBuf::from("/data/a.txt"), PathBuf::from("/data/b c.csv")]
        );
    }
}
