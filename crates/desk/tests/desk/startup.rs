//! The program as a process, where there is no window to be had.

use crate::support::skipped;
use std::path::{Path, PathBuf};
use std::process::{Child, Command, Output, Stdio};

fn program(home: &Path) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_dewbound"));
    command
        .env_remove("DISPLAY")
        .env_remove("WAYLAND_DISPLAY")
        .env_remove("WAYLAND_SOCKET")
        .env_remove("DEWBOUND_TRIED")
        .env("HOME", home)
        .env("XDG_DATA_HOME", home.join("data"))
        .env("XDG_CONFIG_HOME", home.join("config"))
        .stdin(Stdio::null());
    command
}

/// One plain sentence, then the tray as text, exit 0.
fn check_text(output: &Output, sentence: &str) {
    let out = String::from_utf8_lossy(&output.stdout);
    let err = String::from_utf8_lossy(&output.stderr);
    assert!(output.status.success(), "{:?}\n{out}\n{err}", output.status);
    assert!(out.starts_with(sentence), "{out}\n{err}");
    let first = out.lines().next().unwrap();
    assert_eq!(first.matches(". ").count(), 0, "one sentence: {first}");
    assert!(first.ends_with("so this is the tray as text."), "{first}");
    for wanted in ["INVENTED DATA", "CAPE", "official warnings"] {
        assert!(out.contains(wanted), "no {wanted} in\n{out}");
    }
    assert!(!err.contains("panicked"), "{err}");
}

#[cfg(all(unix, not(target_os = "macos")))]
mod without_a_window {
    use super::*;

    #[test]
    fn no_display() {
        let home = tempfile::tempdir().unwrap();
        let output = program(home.path()).output().unwrap();
        check_text(&output, "No display was found");
    }

    #[test]
    fn a_dead_display() {
        let home = tempfile::tempdir().unwrap();
        let output = program(home.path())
            .env("DISPLAY", ":64321")
            .output()
            .unwrap();
        check_text(&output, "The display :64321 does not answer");
    }

    #[test]
    fn a_dead_display_on_another_machine() {
        // A port that was free a moment ago stands for a machine that doesn't answer.
        let port = std::net::TcpListener::bind("127.0.0.1:0")
            .unwrap()
            .local_addr()
            .unwrap()
            .port();
        let Some(number) = port.checked_sub(6000) else {
            return;
        };
        let home = tempfile::tempdir().unwrap();
        let output = program(home.path())
            .env("DISPLAY", format!("127.0.0.1:{number}"))
            .output()
            .unwrap();
        check_text(&output, "The display 127.0.0.1:");
    }

    #[test]
    fn a_dead_wayland_display() {
        let home = tempfile::tempdir().unwrap();
        let output = program(home.path())
            .env("WAYLAND_DISPLAY", "nowhere-0")
            .env("XDG_RUNTIME_DIR", home.path())
            .output()
            .unwrap();
        check_text(&output, "The display nowhere-0 does not answer");
    }

    #[test]
    fn given_files_are_shown_instead_of_the_demonstration() {
        let home = tempfile::tempdir().unwrap();
        let file = home.path().join("one.csv");
        let mut text = String::from("pressure_hpa,temperature_c,dewpoint_c\n");
        for (p, t, td) in [
            (1000.0, 28.0, 20.0),
            (850.0, 17.0, 14.0),
            (700.0, 6.0, -2.0),
            (500.0, -12.0, -25.0),
            (300.0, -41.0, -55.0),
            (200.0, -56.0, -70.0),
        ] {
            text.push_str(&format!("{p},{t},{td}\n"));
        }
        std::fs::write(&file, text).unwrap();
        let output = program(home.path()).arg(&file).output().unwrap();
        let out = String::from_utf8_lossy(&output.stdout);
        assert!(output.status.success(), "{out}");
        assert!(!out.contains("INVENTED DATA"), "{out}");
        assert!(out.contains("official warnings"), "{out}");
    }

    #[test]
    fn a_closed_pipe_is_no_error() {
        let home = tempfile::tempdir().unwrap();
        let mut child = program(home.path())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .unwrap();
        drop(child.stdout.take());
        let output = child.wait_with_output().unwrap();
        let err = String::from_utf8_lossy(&output.stderr);
        assert!(
            output.status.success() && !err.contains("panicked"),
            "{err}"
        );
    }

    #[test]
    fn no_usable_graphics() {
        let Some(server) = Server::start(&["-extension", "GLX"]) else {
            skipped("no_usable_graphics", "Xvfb is not installed");
            return;
        };
        let home = tempfile::tempdir().unwrap();
        let output = without_graphics(&mut program(home.path()))
            .env("DISPLAY", &server.name)
            .output()
            .unwrap();
        check_text(&output, "No usable graphics on this display");
        let err = String::from_utf8_lossy(&output.stderr);
        assert_eq!(
            err.matches("Starting once more, with OpenGL").count(),
            1,
            "it starts itself again once, with glow: {err}"
        );
    }

    #[test]
    fn without_an_adapter_it_starts_again_with_glow() {
        let Some(server) = Server::start(&["+extension", "GLX"]) else {
            skipped(
                "without_an_adapter_it_starts_again_with_glow",
                "Xvfb is not installed",
            );
            return;
        };
        let home = tempfile::tempdir().unwrap();
        let output = program(home.path())
            .arg("--close-after-first-frame")
            .env("DISPLAY", &server.name)
            // wgpu may use Vulkan only, and Vulkan has no drivers.
            .env("WGPU_BACKEND", "vulkan")
            .env("VK_DRIVER_FILES", "/nonexistent")
            .env("VK_ICD_FILENAMES", "/nonexistent")
            .env("LIBGL_ALWAYS_SOFTWARE", "1")
            .output()
            .unwrap();
        let err = String::from_utf8_lossy(&output.stderr);
        assert!(output.status.success(), "{err}");
        assert!(err.contains("Starting once more, with OpenGL"), "{err}");
        if err.contains("No usable graphics")
            || String::from_utf8_lossy(&output.stdout).contains("No usable graphics")
        {
            skipped(
                "without_an_adapter_it_starts_again_with_glow",
                "no software OpenGL is installed",
            );
            return;
        }
        assert!(err.contains("Drawn with glow"), "{err}");
    }

    #[test]
    fn where_opengl_fails_it_starts_again_with_wgpu() {
        let name = "where_opengl_fails_it_starts_again_with_wgpu";
        let Some(server) = Server::start(&["-extension", "GLX"]) else {
            skipped(name, "Xvfb is not installed");
            return;
        };
        let home = tempfile::tempdir().unwrap();
        let output = program(home.path())
            .arg("--close-after-first-frame")
            .env("DISPLAY", &server.name)
            // OpenGL has no drivers; Vulkan has those of the machine.
            .env("WGPU_BACKEND", "vulkan")
            .env("__EGL_VENDOR_LIBRARY_FILENAMES", "/nonexistent")
            .env("__GLX_VENDOR_LIBRARY_NAME", "nonexistent")
            .env("LIBGL_DRIVERS_PATH", "/nonexistent")
            .output()
            .unwrap();
        let err = String::from_utf8_lossy(&output.stderr);
        let out = String::from_utf8_lossy(&output.stdout);
        assert!(output.status.success(), "{err}");
        if out.contains("No usable graphics") {
            skipped(name, "no Vulkan driver is installed");
            return;
        }
        assert!(err.contains("Drawn with wgpu"), "{out}\n{err}");
        assert!(err.matches("Starting once more").count() <= 1, "{err}");
    }

    #[test]
    fn a_window_comes_up() {
        let Some(server) = Server::start(&["+extension", "GLX"]) else {
            skipped("a_window_comes_up", "Xvfb is not installed");
            return;
        };
        let home = tempfile::tempdir().unwrap();
        let output = program(home.path())
            .arg("--close-after-first-frame")
            .env("DISPLAY", &server.name)
            .output()
            .unwrap();
        let err = String::from_utf8_lossy(&output.stderr);
        let out = String::from_utf8_lossy(&output.stdout);
        assert!(output.status.success(), "{err}");
        if out.contains("No usable graphics") {
            skipped("a_window_comes_up", "no software renderer is installed");
            return;
        }
        assert!(err.contains("Drawn with "), "{out}\n{err}");
    }

    fn without_graphics(command: &mut Command) -> &mut Command {
        command
            .env("VK_DRIVER_FILES", "/nonexistent")
            .env("VK_ICD_FILENAMES", "/nonexistent")
            .env("__EGL_VENDOR_LIBRARY_FILENAMES", "/nonexistent")
            .env("__EGL_VENDOR_LIBRARY_DIRS", "/nonexistent")
            .env("__GLX_VENDOR_LIBRARY_NAME", "nonexistent")
            .env("LIBGL_DRIVERS_PATH", "/nonexistent")
    }
}

/// A virtual display of our own, ended with it.
struct Server {
    child: Child,
    name: String,
}

impl Server {
    fn start(extra: &[&str]) -> Option<Self> {
        let xvfb: PathBuf = std::env::split_paths(&std::env::var_os("PATH")?)
            .map(|folder| folder.join("Xvfb"))
            .find(|file| file.is_file())?;
        // The server picks a free number and writes it when it is ready.
        let mut child = Command::new(xvfb)
            // Without a desktop the last window to close would make the server begin anew, deaf for a moment.
            .args(["-noreset", "-displayfd", "1", "-screen", "0", "1280x800x24"])
            .args(extra)
            .stdin(Stdio::null())
            .stdout(Stdio::piped())
            .stderr(Stdio::null())
            .spawn()
            .ok()?;
        let mut line = String::new();
        let mut reader = std::io::BufReader::new(child.stdout.take()?);
        std::io::BufRead::read_line(&mut reader, &mut line).ok()?;
        let name = format!(":{}", line.trim());
        Some(Self { child, name })
    }
}

impl Drop for Server {
    fn drop(&mut self) {
        let _ = self.child.kill();
        let _ = self.child.wait();
    }
}
