//! The prompt: what it answers, what keys do to it, what its screen shows.

mod dialogue;
mod filter;
mod keys;
mod page;
#[cfg(unix)]
mod pty;
#[cfg(unix)]
mod screen;

use scalewright::Session;
use scalewright::prompt::dialogue::Dialogue;
use scalewright::prompt::layout::Sheet;

/// A dialogue without colours.
fn dialogue(columns: usize) -> Dialogue<'static> {
    Dialogue::new(Session::new(), Sheet::plain(columns))
}

/// The entries of a session with what is said to each.
fn transcript(dialogue: &mut Dialogue<'_>, entries: &[&str]) -> String {
    let mut out = String::new();
    for entry in entries {
        let reply = dialogue.enter(entry);
        out.push_str(&format!(
            "~: {}\n{}",
            entry.replace('\n', "\n   "),
            reply.text()
        ));
    }
    out
}

/// Values for every open name of the momentum of the air: a whirl at a squall line.
const SQUALL_LINE: [&str; 9] = [
    "use atmosphere.momentum",
    "scale U = 40 m/s",
    "scale W = 10 m/s",
    "scale L = 150 m",
    "scale H = 1 km",
    "scale T = L/U",
    "scale dP = 15 hPa",
    "constant phi = 45 deg",
    "rank x_momentum",
];
