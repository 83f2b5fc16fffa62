//! Standard output. A reader that has gone away is no error.

use std::io::{self, Write};

/// Prints a text with styles where standard output is a terminal.
pub fn text(text: &str) -> io::Result<()> {
    forgive(write_all(&mut anstream::stdout().lock(), text.as_bytes()))
}

/// Prints bytes as they are.
pub fn bytes(bytes: &[u8]) -> io::Result<()> {
    forgive(write_all(&mut io::stdout().lock(), bytes))
}

fn write_all(out: &mut impl Write, bytes: &[u8]) -> io::Result<()> {
    out.write_all(bytes)?;
    out.flush()
}

fn forgive(written: io::Result<()>) -> io::Result<()> {
    match written {
        Err(e) if e.kind() == io::ErrorKind::BrokenPipe => Ok(()),
        other => other,
    }
}
