//! From the command line to a window, or to the tray as text where no window can be had.
//!
//! The order: is there a display, does wgpu find an adapter, does the window come up. A drawing library that fails
//! takes the event loop with it, and a process has only one; so the program starts itself again, once, with the
//! other library. What has been tried travels in an environment variable, so that it can never go round.
//!
//! Where wgpu finds nothing but a software adapter, glow goes first: measured on one machine, the same window took a
//! quarter of the time to draw with software OpenGL.

use crate::{Args, Desk, Graphics, display, text};
use eframe::egui;
use std::ffi::OsString;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::process::{Command, ExitCode};
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Arc, Mutex, PoisonError};

/// Names what has been tried already, separated by commas.
const TRIED: &str = "DEWBOUND_TRIED";

/// Why there is no window.
#[derive(Debug, Clone, PartialEq, Eq)]
enum NoWindow {
    /// Nothing to show it on.
    Display(String),
    /// A display, but nothing that can draw on it.
    Graphics(String),
}

/// Runs the program to its end.
pub fn run(args: Args) -> ExitCode {
    let tried = Tried::from_environment();
    let why = match display::missing() {
        Some(why) => NoWindow::Display(why),
        None => match window(&args, &tried) {
            Ok(()) => return ExitCode::SUCCESS,
            Err(why) => why,
        },
    };
    let sentence = match &why {
        NoWindow::Display(why) => format!("{why}, so this is the tray as text."),
        NoWindow::Graphics(why) => {
            format!("No usable graphics on this display ({why}), so this is the tray as text.")
        }
    };
    text::print_tray(&args, &sentence)
}

/// Shows the window until it is closed, or says why it can't be shown.
fn window(args: &Args, tried: &Tried) -> Result<(), NoWindow> {
    let auto = args.graphics == Graphics::Auto;
    let renderer = match args.graphics {
        Graphics::Wgpu => eframe::Renderer::Wgpu,
        Graphics::Glow => eframe::Renderer::Glow,
        Graphics::Auto if tried.wgpu => eframe::Renderer::Glow,
        Graphics::Auto if tried.glow => eframe::Renderer::Wgpu,
        Graphics::Auto => match adapters() {
            Adapters::Hardware => eframe::Renderer::Wgpu,
            Adapters::Software => eframe::Renderer::Glow,
            Adapters::None => return tried.with_wgpu().start_again("wgpu finds no adapter"),
        },
    };
    match show(args, renderer) {
        Ok(()) => Ok(()),
        Err(NoWindow::Display(_)) if display::wayland_and_x11() && !tried.wayland => tried
            .with_wayland()
            .start_again("the Wayland display does not answer"),
        Err(NoWindow::Graphics(why)) if auto => match renderer {
            eframe::Renderer::Wgpu if !tried.glow => tried.with_wgpu().start_again(&why),
            eframe::Renderer::Glow if !tried.wgpu => tried.with_glow().start_again(&why),
            _ => Err(NoWindow::Graphics(why)),
        },
        Err(why) => Err(why),
    }
}

/// What wgpu finds to draw with.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Adapters {
    None,
    Software,
    Hardware,
}

fn adapters() -> Adapters {
    use eframe::egui_wgpu::WgpuSetup;
    let quiet = QuietPanics::new(Arc::default());
    let found = catch_unwind(|| {
        pollster::block_on(async {
            let backends = match WgpuSetup::without_display_handle() {
                WgpuSetup::CreateNew(new) => new.instance_descriptor.backends,
                WgpuSetup::Existing(_) => eframe::wgpu::Backends::all(),
            };
            let instance = WgpuSetup::without_display_handle().new_instance().await;
            let all = instance.enumerate_adapters(backends).await;
            let software = |adapter: &eframe::wgpu::Adapter| {
                adapter.get_info().device_type == eframe::wgpu::DeviceType::Cpu
            };
            if all.is_empty() {
                Adapters::None
            } else if all.iter().all(software) {
                Adapters::Software
            } else {
                Adapters::Hardware
            }
        })
    });
    drop(quiet);
    found.unwrap_or(Adapters::None)
}

/// One attempt at a window. Panics of the window system before the first frames count as "no window".
fn show(args: &Args, renderer: eframe::Renderer) -> Result<(), NoWindow> {
    let started = Arc::new(AtomicBool::new(false));
    let options = eframe::NativeOptions {
        renderer,
        // Nothing here fades, and software renderers pay for it in every pixel.
        dithering: false,
        viewport: egui::ViewportBuilder::default()
            .with_title("Dewbound")
            .with_app_id("dewbound")
            .with_inner_size([1440.0, 900.0])
            .with_min_inner_size(crate::layout::LEAST_WINDOW)
            .with_drag_and_drop(true)
            .with_icon(crate::icon::icon()),
        ..Default::default()
    };
    let quiet = QuietPanics::new(Arc::clone(&started));
    let outcome = catch_unwind(AssertUnwindSafe(|| {
        let args = args.clone();
        let started = Arc::clone(&started);
        eframe::run_native(
            "dewbound",
            options,
            Box::new(move |creation| {
                Ok(Box::new(Desk::new(
                    &creation.egui_ctx,
                    &args,
                    renderer,
                    started,
                )))
            }),
        )
    }));
    let last_words = quiet.last_words();
    match outcome {
        Ok(Ok(())) => Ok(()),
        Ok(Err(error)) => Err(no_window(&error)),
        Err(panic) if started.load(Ordering::Relaxed) => std::panic::resume_unwind(panic),
        Err(_) => Err(NoWindow::Graphics(
            last_words.unwrap_or_else(|| "the window system gave up".to_owned()),
        )),
    }
}

fn no_window(error: &eframe::Error) -> NoWindow {
    match error {
        eframe::Error::Winit(_) | eframe::Error::WinitEventLoop(_) => {
            NoWindow::Display(display::dead())
        }
        // What these libraries say runs over many lines and helps nobody who can't mend a driver.
        eframe::Error::Glutin(_) | eframe::Error::NoGlutinConfigs(..) => {
            NoWindow::Graphics("OpenGL has no driver for it".to_owned())
        }
        eframe::Error::OpenGL(_) => NoWindow::Graphics("its OpenGL is too old".to_owned()),
        eframe::Error::Wgpu(_) => NoWindow::Graphics("wgpu can't draw on it".to_owned()),
        other => NoWindow::Graphics(first_line(&other.to_string())),
    }
}

fn first_line(text: &str) -> String {
    text.lines()
        .next()
        .unwrap_or_default()
        .trim_end_matches('.')
        .to_owned()
}

/// What earlier runs of this same start have tried.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
struct Tried {
    wgpu: bool,
    glow: bool,
    wayland: bool,
}

impl Tried {
    fn from_environment() -> Self {
        Self::parse(&std::env::var(TRIED).unwrap_or_default())
    }

    fn parse(list: &str) -> Self {
        let has = |name| list.split(',').any(|word| word == name);
        Self {
            wgpu: has("wgpu"),
            glow: has("glow"),
            wayland: has("wayland"),
        }
    }

    fn list(self) -> String {
        [
            (self.wgpu, "wgpu"),
            (self.glow, "glow"),
            (self.wayland, "wayland"),
        ]
        .into_iter()
        .filter_map(|(tried, word)| tried.then_some(word))
        .collect::<Vec<_>>()
        .join(",")
    }

    fn with_wgpu(self) -> Self {
        Self { wgpu: true, ..self }
    }

    fn with_glow(self) -> Self {
        Self { glow: true, ..self }
    }

    fn with_wayland(self) -> Self {
        Self {
            wayland: true,
            ..self
        }
    }

    /// Starts the program again with this list. Never comes back where the system can replace a running program.
    fn start_again(self, why: &str) -> Result<(), NoWindow> {
        if self == Self::from_environment() {
            return Err(NoWindow::Graphics(why.to_owned()));
        }
        eprintln!("Starting once more, with {}: {why}.", self.instead());
        let program = std::env::current_exe().map_err(|error| {
            NoWindow::Graphics(format!("{why}; starting again failed: {error}"))
        })?;
        let arguments: Vec<OsString> = std::env::args_os().skip(1).collect();
        let mut command = Command::new(program);
        command.args(arguments).env(TRIED, self.list());
        if self.wayland {
            command
                .env_remove("WAYLAND_DISPLAY")
                .env_remove("WAYLAND_SOCKET");
        }
        replace(command)
            .map_err(|error| NoWindow::Graphics(format!("{why}; starting again failed: {error}")))
    }

    fn instead(self) -> &'static str {
        match (self.wgpu, self.glow) {
            (true, _) => "OpenGL",
            (_, true) => "wgpu",
            _ => "X11",
        }
    }
}

#[cfg(unix)]
fn replace(mut command: Command) -> std::io::Result<()> {
    use std::os::unix::process::CommandExt as _;
    Err(command.exec())
}

#[cfg(not(unix))]
fn replace(mut command: Command) -> std::io::Result<()> {
    let status = command.status()?;
    std::process::exit(status.code().unwrap_or(1));
}

/// Keeps panics of the window system off the terminal until the window is up; the sentence we print says enough.
struct QuietPanics {
    heard: Arc<Mutex<Option<String>>>,
}

impl QuietPanics {
    fn new(started: Arc<AtomicBool>) -> Self {
        let heard = Arc::new(Mutex::new(None));
        let slot = Arc::clone(&heard);
        let usual = std::panic::take_hook();
        std::panic::set_hook(Box::new(move |info| {
            if started.load(Ordering::Relaxed) {
                usual(info);
            } else {
                let words = info.payload_as_str().unwrap_or("the window system gave up");
                *slot.lock().unwrap_or_else(PoisonError::into_inner) = Some(first_line(words));
            }
        }));
        Self { heard }
    }

    fn last_words(&self) -> Option<String> {
        self.heard
            .lock()
            .unwrap_or_else(PoisonError::into_inner)
            .clone()
    }
}

impl Drop for QuietPanics {
    fn drop(&mut self) {
        // Back to the standard hook. A panic in flight may not change hooks; it keeps the quiet one.
        if !std::thread::panicking() {
            drop(std::panic::take_hook());
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_was_tried_survives_the_restart() {
        for tried in [
            Tried::default(),
            Tried::default().with_wgpu(),
            Tried::default().with_glow(),
            Tried::default().with_wayland(),
            Tried::default().with_wgpu().with_wayland(),
        ] {
            assert_eq!(Tried::parse(&tried.list()), tried);
        }
    }

    #[test]
    fn a_sentence_has_one_line() {
        assert_eq!(first_line("no config.\nlong story"), "no config");
        assert_eq!(first_line(""), "");
    }
}
