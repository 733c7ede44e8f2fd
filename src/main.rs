//! Parses arguments, calls the library, prints and picks the exit code.

use clap::Parser;
use seamnote::cli::{Arguments, run};
use std::io::{ErrorKind, IsTerminal, Write};
use std::process::ExitCode;

/// A faster allocator: typesetting makes many small allocations.
#[global_allocator]
static ALLOCATOR: mimalloc::MiMalloc = mimalloc::MiMalloc;

/// From this many joints on, a terminal shows how far the work is.
const MANY: usize = 8;

fn main() -> ExitCode {
    let arguments = Arguments::parse();
    let terminal = std::io::stderr().is_terminal();
    let progress = |done, of| {
        if terminal && of >= MANY {
            show(done, of);
        }
    };
    let said = run(&arguments, terminal, &progress);
    let mut out = std::io::stdout();
    let told = out
        .write_all(said.out.as_bytes())
        .and_then(|()| out.flush());
    let _ = std::io::stderr().write_all(said.err.as_bytes());
    match told {
        // A reader that has seen enough closes the pipe: no fault of the work done.
        Err(fault) if fault.kind() != ErrorKind::BrokenPipe => {
            let _ = writeln!(std::io::stderr(), "error: standard output: {fault}");
            ExitCode::FAILURE
        }
        Ok(()) | Err(_) => ExitCode::from(said.code),
    }
}

/// Writes how far the work is over what stood in the line; after the last joint clears it.
fn show(done: usize, of: usize) {
    let line = if done < of {
        format!("\r{done} of {of} joints")
    } else {
        "\r\x1b[K".to_owned()
    };
    // A terminal that went away is no fault of the work done.
    let _ = std::io::stderr().write_all(line.as_bytes());
}
