//! Whether there is a display to open a window on.

use std::net::{TcpStream, ToSocketAddrs as _};
use std::time::Duration;

/// How long a display on another machine may take to answer before it counts as dead.
const PATIENCE: Duration = Duration::from_secs(3);

/// Why no window can be opened, as far as can be told without trying; `None` when there may be a display.
pub(crate) fn missing() -> Option<String> {
    if !cfg!(all(unix, not(target_os = "macos"))) {
        return None;
    }
    if set("WAYLAND_DISPLAY").is_some() || set("WAYLAND_SOCKET").is_some() {
        return None;
    }
    match set("DISPLAY") {
        None => Some("No display was found".to_owned()),
        Some(name) => match remote_port(&name) {
            Some((host, port)) if !answers(&host, port) => Some(dead()),
            _ => None,
        },
    }
}

/// The sentence for a display that doesn't answer.
pub(crate) fn dead() -> String {
    let name = set("WAYLAND_DISPLAY")
        .or_else(|| set("DISPLAY"))
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
    fn a_closed_port_does_not_answer() {
        let listener = std::net::TcpListener::bind("127.0.0.1:0").unwrap();
        let port = listener.local_addr().unwrap().port();
        assert!(answers("127.0.0.1", port));
        drop(listener);
        assert!(!answers("127.0.0.1", port));
    }
}
