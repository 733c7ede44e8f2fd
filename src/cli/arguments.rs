//! Arguments of the command line.

use clap::{Args, Parser, Subcommand, ValueEnum};
use std::path::PathBuf;

/// Stress notes for welded joints, from joint files.
#[derive(Parser, Debug)]
#[command(
    name = "seamnote",
    version,
    about,
    after_help = "\
Exit codes:
  0  everything asked for was done
  1  an input was refused, or an output could not be made
  2  the command line itself was wrong
  3  with --must-hold: a check does not hold, or gives no number

For use by qualified engineers; local codes and licensed practice govern."
)]
pub struct Arguments {
    /// What to do.
    #[command(subcommand)]
    pub command: Command,
}

/// What to do.
#[derive(Subcommand, Debug)]
pub enum Command {
    /// Write the notes of joints.
    #[command(after_help = "\
Examples:
  seamnote write                                every joint in joints/, into out/
  seamnote write joints/mast-foot.yaml          one joint
  seamnote write --only pdf,trace --out issue-B only the PDF notes and traces, elsewhere
  seamnote write --must-hold                    exit with 3 if a check does not hold

Each joint gets a folder of its own under the output folder: note.pdf, note.md with figure.svg,
cases.csv and trace.json. A joint that is refused leaves its earlier note untouched.")]
    Write {
        /// What to work on.
        #[command(flatten)]
        scope: ScopeArgs,
        /// Folder that the notes are written into.
        #[arg(long, value_name = "FOLDER", default_value = "out")]
        out: PathBuf,
        /// Only these outputs.
        #[arg(long, value_name = "OUTPUTS", value_delimiter = ',')]
        only: Vec<OutputKind>,
    },
    /// Compute joints up to their margins and say what is wrong; writes nothing.
    #[command(after_help = "\
Examples:
  seamnote vet                        every joint in joints/
  seamnote vet joints/mast-foot.yaml  one joint")]
    Vet {
        /// What to work on.
        #[command(flatten)]
        scope: ScopeArgs,
    },
    /// Show each value of joints as read, with the file and line that it comes from.
    #[command(after_help = "\
Example:
  seamnote show joints/mast-foot.yaml

A value comes from the joint file, from joints/project.yaml, or is a default of the program or of
a clause sheet. Writes nothing.")]
    Show {
        /// Joint files, or folders of them.
        #[arg(value_name = "PATH", required = true)]
        paths: Vec<PathBuf>,
    },
}

/// What to work on, and how.
#[derive(Args, Debug)]
pub struct ScopeArgs {
    /// Joint files, or folders of them.
    #[arg(value_name = "PATH", default_value = "joints")]
    pub paths: Vec<PathBuf>,
    /// Exit with 3 if a check does not hold or gives no number.
    #[arg(long)]
    pub must_hold: bool,
    /// Joints worked on at once; as many as the machine has cores if not given.
    #[arg(long, value_name = "NUMBER", value_parser = clap::value_parser!(u16).range(1..=256))]
    pub threads: Option<u16>,
}

/// An output of a note.
#[derive(Clone, Copy, PartialEq, Eq, Debug, ValueEnum)]
pub enum OutputKind {
    /// The PDF note, note.pdf.
    Pdf,
    /// The Markdown note, note.md, with its drawing, figure.svg.
    Markdown,
    /// The table of all cases, cases.csv.
    Cases,
    /// The trace for machines, trace.json.
    Trace,
}
