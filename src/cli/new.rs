//! `wane new`: a starter scenario.

use super::args::NewArgs;
use super::failure::Failure;
use super::{Done, output};
use std::fs::{self, OpenOptions};
use std::io::{ErrorKind, Write};

pub fn run(args: &NewArgs) -> Result<Done, Failure> {
    let path = args.dir.join("scenario.toml");
    let shown = path.display();
    let fail = |e: std::io::Error| match e.kind() {
        ErrorKind::AlreadyExists => {
            Failure::Usage(format!("{shown} exists already: it is left as it is; choose another folder"))
        }
        _ => Failure::Usage(format!("cannot write {shown}: {e}")),
    };
    fs::create_dir_all(&args.dir).map_err(|e| match e.kind() {
        ErrorKind::AlreadyExists => Failure::Usage(format!("{} is not a folder", args.dir.display())),
        _ => fail(e),
    })?;
    // Creating only what does not exist leaves no gap between look and write.
    let mut file = OpenOptions::new().write(true).create_new(true).open(&path).map_err(fail)?;
    file.write_all(crate::scenario::starter().as_bytes()).map_err(fail)?;
    if !args.quiet {
        output::text(&format!("{shown} written. Next: wane forecast {shown}\n"))?;
    }
    Ok(Done::Well)
}
