//! Input that is no terminal: read to its end, answered like lines that were typed, with
//! answers and errors apart.

use std::io::{self, Read, Write};

use crate::limits::SCRIPT_BYTES;
use crate::prompt::Start;
use crate::prompt::dialogue::Dialogue;
use crate::prompt::layout::Sheet;
use crate::session::{Session, Status};

/// Answers all of an input; the status is that of the worst entry.
///
/// # Errors
/// What reading and writing meet.
pub fn run(
    session: Session<'_>,
    start: Option<&Start>,
    input: &mut dyn Read,
    out: &mut dyn Write,
    err: &mut dyn Write,
    sheet: Sheet,
) -> io::Result<Status> {
    let mut dialogue = Dialogue::new(session, sheet);
    let mut worst = Status::Ok;
    let mut write = |reply: crate::prompt::dialogue::Reply| -> io::Result<Status> {
        err.write_all(reply.err.as_bytes())?;
        out.write_all(reply.out.as_bytes())?;
        Ok(reply.status.unwrap_or(Status::Ok))
    };
    if let Some(start) = start {
        worst = write(dialogue.start(&start.name, start.path.as_deref(), &start.text))?;
    }
    let mut bytes = Vec::new();
    input
        .take(SCRIPT_BYTES as u64 + 1)
        .read_to_end(&mut bytes)?;
    if bytes.len() > SCRIPT_BYTES {
        let text = format!("[too-long] the input is longer than {SCRIPT_BYTES} bytes\n");
        err.write_all(text.as_bytes())?;
        return Ok(Status::Invalid);
    }
    let text = match String::from_utf8(bytes) {
        Ok(text) => text,
        Err(error) => {
            let at = error.utf8_error().valid_up_to() + 1;
            let text = format!("[not-utf8] the input is no UTF-8 text: byte {at} cannot be read\n");
            err.write_all(text.as_bytes())?;
            return Ok(Status::Invalid);
        }
    };
    Ok(worst.max(write(dialogue.enter(&text))?))
}
