//! A desk that decides about one sounding again and again, and says each time when the decision is kept. The test of
//! killing starts it and kills it.

use dewbound_session::ledger::Verdict;
use dewbound_session::{Command, Session, Standing};
use dewbound_tests::{desk, wire};
use std::io::{self, Write};
use std::path::PathBuf;

fn main() -> io::Result<()> {
    let folder = std::env::args_os()
        .nth(1)
        .map(PathBuf::from)
        .ok_or_else(|| io::Error::other("usage: decide-until-killed FOLDER"))?;
    let mut session = Session::new(desk::config(&folder));
    let message = wire::moist_screen(wire::Parts::OnlyFirst);
    session.open_bytes("ashgill.txt".to_owned(), message.into_bytes());
    session.wait();
    let mut out = io::stdout().lock();
    for number in 1_u32.. {
        let reasons = format!("reason {number}");
        session.apply(Command::ChooseVerdict(Some(Verdict::Contaminated)));
        session.apply(Command::SetReasons(reasons.clone()));
        session.apply(Command::Decide);
        session.wait();
        let kept = session.current().is_some_and(|item| {
            matches!(item.standing(), Standing::Decided(decision) if decision.reasons == reasons)
        });
        if !kept {
            return Err(io::Error::other(format!("{:?}", session.messages())));
        }
        writeln!(out, "kept {reasons}")?;
        out.flush()?;
    }
    Ok(())
}
