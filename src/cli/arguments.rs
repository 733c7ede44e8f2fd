//! Arguments of the command line.

use crate::quantity::UnitSet;
use clap::builder::PossibleValuesParser;
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

Each joint gets a folder of its own under the output folder: note.pdf, note.md with its drawings,
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
    /// Lay down a new project with one commented, working joint.
    #[command(after_help = "\
Examples:
  seamnote begin mast                                     a channel, in N and mm
  seamnote begin mast --pattern box --units kip,in        a box, in kip and in

Writes joints/ with the joint, a clause sheet to copy from, and the schemas that editors use.
A file that is there already is never written over.")]
    Begin {
        /// Folder of the project; it is made if there is none.
        #[arg(value_name = "FOLDER")]
        folder: PathBuf,
        /// Shape of the weld group.
        #[arg(long, value_name = "PATTERN", default_value = "channel", value_parser = PossibleValuesParser::new(PATTERNS))]
        pattern: String,
        /// Units that the note is printed in.
        #[arg(long, value_name = "UNITS", default_value = "N,mm", value_parser = PossibleValuesParser::new(UNITS.map(|row| row.0)))]
        units: String,
    },
    /// Say what a fault code, a clause sheet or a key means.
    #[command(after_help = "\
Examples:
  seamnote explain which-size               a fault code
  seamnote explain EN 1993-1-8 4.5.3.2      a clause sheet: needs, steps, limits
  seamnote explain EN 1993-1-8 4.5.3.2 --pdf clause.pdf
  seamnote explain weld.runs.toe            a key of joint files
  seamnote explain sheet.needs.from         a key of clause sheets")]
    Explain {
        /// A fault code, the name of a clause sheet, a key, or a value of checks; all names if none is given.
        #[arg(value_name = "THING")]
        thing: Vec<String>,
        /// Folder of joints, whose sheets can be named, too.
        #[arg(long, value_name = "FOLDER", default_value = "joints")]
        joints: PathBuf,
        /// Set the clause sheet as a page, its steps typeset, into this file instead.
        #[arg(long, value_name = "FILE")]
        pdf: Option<PathBuf>,
    },
    /// Print a JSON Schema, for editors and machines.
    #[command(after_help = "\
An editor that speaks the YAML language server's language finds a schema by the first line of a
joint file:
  # yaml-language-server: $schema=schemas/joint.schema.json")]
    Schema {
        /// What the schema is of.
        #[arg(value_name = "OF")]
        of: SchemaOf,
    },
    /// Print the completions of a shell.
    #[command(after_help = "\
Examples:
  seamnote completions bash > ~/.local/share/bash-completion/completions/seamnote
  seamnote completions fish > ~/.config/fish/completions/seamnote.fish
  seamnote completions zsh > \"${fpath[1]}/_seamnote\"")]
    Completions {
        /// The shell.
        #[arg(value_name = "SHELL")]
        shell: clap_complete::Shell,
    },
    /// Print the manual page of the program, or of one of its commands.
    #[command(after_help = "\
Examples:
  seamnote manual | man -l -
  seamnote manual write > seamnote-write.1")]
    Manual {
        /// One of the commands.
        #[arg(value_name = "COMMAND")]
        command: Option<String>,
    },
}

/// What a schema is of.
#[derive(Clone, Copy, PartialEq, Eq, Debug, ValueEnum)]
pub enum SchemaOf {
    /// A joint file.
    Joint,
    /// A project file.
    Project,
    /// A clause sheet.
    Sheet,
    /// The trace of a note.
    Trace,
}

/// The trade names of patterns, with hyphens for spaces.
const PATTERNS: [&str; 9] = [
    "single-line",
    "two-parallel-lines",
    "angle",
    "channel",
    "tee",
    "i-outline",
    "cruciform",
    "box",
    "circle",
];

/// Printing sets, each in one word.
pub(super) const UNITS: [(&str, UnitSet); 5] = [
    ("N,mm", UnitSet::NewtonMillimetre),
    ("kN,mm", UnitSet::KilonewtonMillimetre),
    ("N,m", UnitSet::NewtonMetre),
    ("lbf,in", UnitSet::PoundInch),
    ("kip,in", UnitSet::KipInch),
];

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
    /// The Markdown note, note.md, with its drawings.
    Markdown,
    /// The table of all cases, cases.csv.
    Cases,
    /// The trace for machines, trace.json.
    Trace,
}
