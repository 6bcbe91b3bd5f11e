//! Which folders this desk uses.

use crate::Args;
use dewbound_session::Config;

/// The platform's folders with what the command line says laid over them. Where the system names no home folder,
/// everything lies in a folder beside the temporary files, and the desk still works.
pub(crate) fn config(args: &Args) -> Config {
    let mut config = Config::platform()
        .unwrap_or_else(|| Config::within(&std::env::temp_dir().join("dewbound")));
    if let Some(ledger) = &args.ledger {
        config.ledger.clone_from(ledger);
    }
    if let Some(office) = &args.office {
        config.office.clone_from(office);
    }
    config.as_of = args.as_of;
    config
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_command_line_wins() {
        let args = Args {
            ledger: Some("here".into()),
            office: Some("there".into()),
            as_of: Some(jiff::civil::date(2031, 5, 21)),
            ..Args::default()
        };
        let config = config(&args);
        assert_eq!(config.ledger, std::path::Path::new("here"));
        assert_eq!(config.office, std::path::Path::new("there"));
        assert_eq!(config.as_of, args.as_of);
        assert_ne!(config.demo_ledger, config.ledger);
    }
}
