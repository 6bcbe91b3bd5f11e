//! Sections 7 to 10: sonde and launch time (31313), cloud (41414), regional (51515 and up) and national (61616 and up).

use super::{
    context::{Aside, Context, is_marker},
    framing::{Word, quote},
    groups::{cut, number},
};

/// Hour and minute of the launch, UTC.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Launch {
    pub hour: i8,
    pub minute: i8,
}

/// Reads everything from the first section number on. Only the launch time is used; the rest is set aside, to be named
/// once for the whole sounding.
pub(super) fn read(words: &[Word], context: &mut Context) -> Option<Launch> {
    let mut launch = None;
    let mut rest = words;
    while let Some((&head, after)) = rest.split_first() {
        // Sections stand in rising order: a smaller number inside a later one is part of its text.
        let length = after
            .iter()
            .take_while(|word| !(is_marker(word.text) && word.text > head.text))
            .count();
        let (body, next) = after.split_at_checked(length).unwrap_or((after, &[]));
        rest = next;
        let body = if head.text == "31313" {
            launch = launch.or_else(|| launch_time(body));
            body.iter()
                .filter(|word| launch_time(&[**word]).is_none())
                .copied()
                .collect()
        } else {
            body.to_vec()
        };
        if body.is_empty() {
            continue;
        }
        context.aside.push(Aside {
            what: match head.text.as_bytes().first() {
                Some(b'2') => "winds out of place",
                Some(b'3') => "sonde",
                Some(b'4') => "cloud",
                Some(b'5') => "regional",
                _ => "national",
            },
            text: format!("{} {}", head.text, quote(&body)),
            line: head.line,
        });
    }
    launch
}

/// `8GGgg`. The group before it (sonde type and tracking) starts with at most 7.
fn launch_time(body: &[Word]) -> Option<Launch> {
    body.iter().find_map(|word| {
        let hour = number(cut(word.text, 1, 3)).filter(|hour| *hour <= 23)?;
        let minute = number(cut(word.text, 3, 5)).filter(|minute| *minute <= 59)?;
        (word.text.len() == 5 && word.text.starts_with('8')).then_some(Launch {
            hour: i8::try_from(hour).ok()?,
            minute: i8::try_from(minute).ok()?,
        })
    })
}
