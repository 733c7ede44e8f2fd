//! Parses arguments, calls the library, prints and picks the exit code.

use clap::Parser;
use seamnote::cli::{Arguments, run};
use std::io::{IsTerminal, Write};
use std::process::ExitCode;

/// A faster allocator: typesetting makes many small allocations.
#[global_allocator]
static ALLOCATOR: mimalloc::MiMalloc = mimalloc::MiMalloc;

fn main() -> ExitCode {
    let arguments = Arguments::parse();
    let said = run(&arguments, std::io::stderr().is_terminal());
    // A closed pipe is no fault of the work done.
    let _ = std::io::stdout().write_all(said.out.as_bytes());
    let _ = std::io::stderr().write_all(said.err.as_bytes());
    ExitCode::from(said.code)
}
