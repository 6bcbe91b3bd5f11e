//! Whether there is a display to open a window on.

use std::net::{TcpStream, ToSocketAddrs as _};
use std::time::Duration;

/// How long a display on another machine may take to answer before it counts as dead.
const PATIENCE: Duration = Duration::from_secs(3);

/// Why no window can be opened, as far as can be told without trying; `None` when there may be a display.
///
/// Knocking first spares the person what the drawing libraries have to say about a display that isn't there.
pub(crate) fn missing() -> Option<String> {
    if !cfg!(all(unix, not(target_os = "macos"))) {
        return None;
    }
    let wayland = set("WAYLAND_SOCKET").is_some()
        || set("WAYLAND_DISPLAY").is_some_and(|name| wayland_answers(&name));
    if wayland {
        return None;
    }
    match set("DISPLAY") {
        Some(name) if x11_answers(&name) => None,
        Some(_) => Some(dead()),
        None if set("WAYLAND_DISPLAY").is_some() => Some(dead()),
        None => Some("No display was found".to_owned()),
    }
}

fn x11_answers(name: &str) -> bool {
    if let Some((host, port)) = remote_port(name) {
        return answers(&host, port);
    }
    match local_number(name) {
        Some(number) => local_answers(number),
        // A name of a form not known here: let the window system try.
        None => true,
    }
}

/// Number of a display on this machine: ":7", ":7.0", "unix:7".
fn local_number(name: &str) -> Option<u16> {
    let (host, rest) = name.rsplit_once(':')?;
    if !matches!(host, "" | "unix") {
        return None;
    }
    rest.split('.').next()?.parse().ok()
}

#[cfg(unix)]
fn local_answers(number: u16) -> bool {
    use std::os::unix::net::UnixStream;
    let path = format!("/tmp/.X11-unix/X{number}");
    UnixStream::connect(&path).is_ok()
        || abstract_answers(&path)
        || number
            .checked_add(6000)
            .is_some_and(|port| answers("localhost", port))
}

#[cfg(not(unix))]
fn local_answers(_number: u16) -> bool {
    true
}

/// Sockets without a file, which some servers offer alone.
#[cfg(target_os = "linux")]
fn abstract_answers(path: &str) -> bool {
    use std::os::linux::net::SocketAddrExt as _;
    use std::os::unix::net::{SocketAddr, UnixStream};
    SocketAddr::from_abstract_name(path)
        .is_ok_and(|address| UnixStream::connect_addr(&address).is_ok())
}

#[cfg(all(unix, not(target_os = "linux")))]
fn abstract_answers(_path: &str) -> bool {
    false
}

#[cfg(unix)]
fn wayland_answers(name: &str) -> bool {
    use std::path::PathBuf;
    let path = PathBuf::from(name);
    let path = if path.is_absolute() {
        path
    } else {
        match set("XDG_RUNTIME_DIR") {
            Some(folder) => PathBuf::from(folder).join(path),
            None => return false,
        }
    };
    std::os::unix::net::UnixStream::connect(path).is_ok()
}

#[cfg(not(unix))]
fn wayland_answers(_name: &str) -> bool {
    false
}

/// The sentence for a display that doesn't answer.
pub(crate) fn dead() -> String {
    let name = set("DISPLAY")
        .or_else(|| set("WAYLAND_DISPLAY"))
        .map(|name| format!(" {name}"))
        .unwrap_or_default();
    format!("The display{name} does not answer")
}

/// Both kinds of display are offered: when one is dead the other may not be.
pub(crate) fn wayland_and_x11() -> bool {
    set("WAYLAND_DISPLAY").is_some() && set("DISPLAY").is_some()
}

fn set(name: &str) -> Option<String> {
    std::env::var(name).ok().filter(|value| !value.is_empty())
}

/// Host and port of an X display reached over the network; `None` for one on this machine or an odd name.
fn remote_port(name: &str) -> Option<(String, u16)> {
    let (host, rest) = name.rsplit_once(':')?;
    let host = host.rsplit('/').next().unwrap_or(host);
    if host.is_empty() || host == "unix" || name.starts_with('/') {
        return None;
    }
    let number: u16 = rest.split('.').next()?.parse().ok()?;
    // Display n listens on port 6000 + n (X protocol, appendix B).
    Some((host.to_owned(), number.checked_add(6000)?))
}

fn answers(host: &str, port: u16) -> bool {
    let host = host.trim_start_matches('[').trim_end_matches(']');
    match (host, port).to_socket_addrs() {
        Ok(mut addresses) => {
            addresses.any(|address| TcpStream::connect_timeout(&address, PATIENCE).is_ok())
        }
        Err(_) => false,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn display_names() {
        let check = |name: &str, expect: Option<(&str, u16)>| {
            assert_eq!(
                remote_port(name),
                expect.map(|(host, port)| (host.to_owned(), port)),
                "{name}"
            );
        };
        check(":0", None);
        check("unix:0", None);
        check("/private/tmp/launch/org.x:0", None);
        check("desk.example:10.0", Some(("desk.example", 6010)));
        check("192.0.2.1:0", Some(("192.0.2.1", 6000)));
        check("nonsense", None);
        check("host:65000", None);
    }

    #[test]
    fn local_names() {
        assert_eq!(local_number(":0"), Some(0));
        assert_eq!(local_number(":17.1"), Some(17));
        assert_eq!(local_number("unix:3"), Some(3));
        assert_eq!(local_number("desk.example:3"), None);
        assert_eq!(local_number("nonsense"), None);
    }

    #[test]
    fn a_closed_port_does_not_answer() {
        let listener = std::net::TcpListener::bind("127.0.0.1:0").unwrap();
        let port = listener.local_addr().unwrap().port();
        assert!(answers("127.0.0.1", port));
        drop(listener);
        assert!(!answers("127.0.0.1", port));
    }
}
