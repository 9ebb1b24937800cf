//! Input that is no terminal: read to its end, answered like lines that were typed, with
//! answers and errors apart.

use std::io::{self, Read, Write};

use crate::limits::SCRIPT_BYTES;
use crate::prompt::Start;
use crate::prompt::dialogue::{Dialogue, Part, Reply};
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
    let mut write = |reply: Reply| -> io::Result<()> {
        for part in &reply.parts {
            match part {
                Part::Answer(text) => out.write_all(text.as_bytes())?,
                Part::Fault(text) => {
                    out.flush()?;
                    err.write_all(text.as_bytes())?;
                }
            }
        }
        worst = worst.max(reply.status.unwrap_or(Status::Ok));
        Ok(())
    };
    if let Some(start) = start {
        write(dialogue.start(&start.name, start.path.as_deref(), &start.text))?;
    }
    let reply = match read(input)? {
        Ok(text) => dialogue.enter(&text),
        Err(fault) => Reply::failed(fault),
    };
    write(reply)?;
    Ok(worst)
}

/// All of the input, or what is wrong with it.
fn read(input: &mut dyn Read) -> io::Result<Result<String, String>> {
    let mut bytes = Vec::new();
    input
        .take(SCRIPT_BYTES as u64 + 1)
        .read_to_end(&mut bytes)?;
    if bytes.len() > SCRIPT_BYTES {
        let fault = format!("[too-long] the input is longer than {SCRIPT_BYTES} bytes\n");
        return Ok(Err(fault));
    }
    Ok(String::from_utf8(bytes).map_err(|error| {
        let at = error.utf8_error().valid_up_to() + 1;
        format!("[not-utf8] the input is no UTF-8 text: byte {at} cannot be read\n")
    }))
}
