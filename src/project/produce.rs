//! From a joint file to the bytes of its outputs.

use super::ProjectError;
use super::outputs::{Output, stage};
use super::read::{JointFile, Surroundings, complete_joint, read_told};
use crate::criteria::Sheet;
use crate::figure::{SerifFaces, draw_note, standalone_source, typst_source};
use crate::note::{Calculation, Note, Outcome, sheet_page, write_note};
use crate::render::{Attachment, Drawings, Pdf, Press, Relation, RenderError, render_typst};
use std::collections::BTreeMap;
use std::path::Path;
use std::sync::Arc;
use std::sync::mpsc::{self, RecvTimeoutError};
use std::time::Duration;

/// Which outputs are wanted.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub struct Kinds {
    /// `note.pdf`.
    pub pdf: bool,
    /// `note.md` and its drawing.
    pub markdown: bool,
    /// `cases.csv`.
    pub cases: bool,
    /// `trace.json`.
    pub trace: bool,
}

impl Kinds {
    /// Every output.
    pub const ALL: Self = Self {
        pdf: true,
        markdown: true,
        cases: true,
        trace: true,
    };
}

/// How long a project's own templates may take over one note; the built-in ones take a tenth of a
/// second, of a joint with many runs some seconds.
const PATIENCE: Duration = Duration::from_secs(60);

/// What is built once and serves every note: the press and the metrics of its faces.
pub struct Workshop {
    press: Arc<Press>,
    faces: SerifFaces,
    patience: Duration,
}

impl Default for Workshop {
    fn default() -> Self {
        Self::new()
    }
}

impl Workshop {
    /// Builds the press.
    ///
    /// # Panics
    ///
    /// If the program was built without its faces.
    #[must_use]
    pub fn new() -> Self {
        Self {
            press: Arc::new(Press::new()),
            faces: SerifFaces::embedded().expect("the serif faces are built in"),
            patience: PATIENCE,
        }
    }

    /// The same workshop with another limit on the time that a project's own templates take.
    #[must_use]
    pub const fn with_patience(mut self, patience: Duration) -> Self {
        self.patience = patience;
        self
    }
}

/// A note with the bytes of its outputs.
#[derive(Debug)]
pub struct Produced {
    /// The note.
    pub note: Note,
    /// Outputs in the order in which they are renamed into place.
    pub outputs: Vec<Output>,
}

impl Workshop {
    /// Reads and computes a joint, and sets the outputs wanted. Writes nothing.
    ///
    /// # Errors
    ///
    /// [`ProjectError`] with the faults of the files, or what the typesetter refuses.
    pub fn produce(
        &self,
        joint: &JointFile,
        surroundings: &Surroundings,
        kinds: Kinds,
    ) -> Result<Produced, ProjectError> {
        let completed = complete_joint(joint, surroundings)?;
        let told = read_told(&completed, surroundings)?;
        let file = &completed.file;
        let calculation = Calculation::of(&told, &surroundings.library)?;
        let mut note = write_note(&calculation)?;
        let own = &surroundings.templates;
        let render = |fault: RenderError| own.explain(&file.name, fault);
        let drawings = if kinds.markdown || kinds.pdf {
            draw_note(&mut note, &self.faces)
        } else {
            Vec::new()
        };
        let trace = note.trace_json();
        let mut outputs = Vec::new();
        if kinds.markdown {
            let markdown = own.templates.markdown(&note.doc).map_err(render)?;
            outputs.push(Output::new("note.md", markdown));
            for (name, drawing) in &drawings {
                let svg = self.press.svg(&standalone_source(drawing));
                outputs.push(Output::new(&format!("{name}.svg"), svg.map_err(render)?));
            }
        }
        if kinds.pdf {
            let sources: Drawings = drawings
                .iter()
                .map(|(name, drawing)| ((*name).to_owned(), typst_source(drawing)))
                .collect();
            let source = own.templates.typst(&note.doc, &sources).map_err(render)?;
            let name = joint
                .path
                .file_name()
                .unwrap_or_default()
                .to_string_lossy()
                .into_owned();
            let mut attachments = vec![
                attachment(
                    &name,
                    "application/yaml",
                    Relation::Source,
                    "The joint file",
                    file.text.as_bytes(),
                ),
                attachment(
                    "trace.json",
                    "application/json",
                    Relation::Data,
                    "Every line of the calculation",
                    trace.as_bytes(),
                ),
            ];
            if let Some(shared) = &surroundings.shared {
                attachments.push(attachment(
                    "project.yaml",
                    "application/yaml",
                    Relation::Source,
                    "What the joints of the project share",
                    shared.file.text.as_bytes(),
                ));
            }
            attachments.extend(own.files.iter().map(|(name, file)| {
                attachment(
                    &format!("template-{name}"),
                    "text/plain",
                    Relation::Source,
                    "A template of the project",
                    file.text.as_bytes(),
                )
            }));
            attachments.extend(used_sheets(&calculation));
            let pdf = if own.is_built_in() {
                self.press.pdf(&source.text, &attachments)
            } else {
                self.bounded(source.text.clone(), attachments)
            };
            let pdf = pdf.map_err(|fault| render(source.explain(fault)))?;
            outputs.push(Output::new("note.pdf", pdf.bytes));
        }
        if kinds.cases {
            outputs.push(Output::new("cases.csv", note.cases_csv()));
        }
        if kinds.trace {
            outputs.push(Output::new("trace.json", trace));
        }
        Ok(Produced { note, outputs })
    }
}

impl Workshop {
    /// Sets a source that a project's own templates wrote, for as long as patience lasts.
    ///
    /// The typesetter cannot be stopped from within: a thread that is given up ends with the program.
    fn bounded(&self, text: String, attachments: Vec<Attachment>) -> Result<Pdf, RenderError> {
        let (sender, receiver) = mpsc::channel();
        let press = Arc::clone(&self.press);
        std::thread::spawn(move || {
            // Whoever waited may have given up.
            let _ = sender.send(press.pdf(&text, &attachments));
        });
        receiver.recv_timeout(self.patience).unwrap_or_else(|why| {
            Err(match why {
                RecvTimeoutError::Timeout => RenderError::TooLong(self.patience.as_secs_f64()),
                RecvTimeoutError::Disconnected => {
                    RenderError::Internal("the typesetter stopped".to_owned())
                }
            })
        })
    }
}

impl Workshop {
    /// A clause sheet typeset as a page, by the built-in templates.
    ///
    /// # Errors
    ///
    /// [`ProjectError::Render`] if it cannot be set.
    pub fn sheet_pdf(&self, sheet: &Sheet) -> Result<Vec<u8>, ProjectError> {
        let source = render_typst(&sheet_page(sheet), &Drawings::new());
        let pdf = source.and_then(|source| {
            let pdf = self.press.undated_pdf(&source.text);
            pdf.map_err(|fault| source.explain(fault))
        });
        let error = |fault| ProjectError::Render {
            joint: sheet.name.value.clone(),
            fault,
        };
        Ok(pdf.map_err(error)?.bytes)
    }
}

/// The clause sheets that a calculation used, each file once.
fn used_sheets(calculation: &Calculation<'_>) -> Vec<Attachment> {
    let mut files: BTreeMap<String, &str> = BTreeMap::new();
    for outcome in &calculation.outcomes {
        if let Outcome::Assessed(asked) = outcome {
            let file = &asked.sheet.place.file;
            let name = file.name.rsplit('/').next().unwrap_or_default();
            files.insert(format!("sheet-{name}"), &file.text);
        }
    }
    files
        .into_iter()
        .map(|(name, text)| {
            attachment(
                &name,
                "application/yaml",
                Relation::Source,
                "A clause sheet used",
                text.as_bytes(),
            )
        })
        .collect()
}

fn attachment(
    name: &str,
    mime: &str,
    relation: Relation,
    description: &str,
    bytes: &[u8],
) -> Attachment {
    Attachment {
        name: name.to_owned(),
        mime: mime.to_owned(),
        relation,
        description: description.to_owned(),
        bytes: bytes.to_vec(),
    }
}

/// Writes the outputs of a produced note under `out` and gives its folder's name.
///
/// # Errors
///
/// [`ProjectError::File`] naming what cannot be written.
pub fn written(produced: &Produced, joint: &JointFile, out: &Path) -> Result<String, ProjectError> {
    let folder = out.join(&joint.stem);
    stage(&folder, &produced.outputs)?;
    Ok(super::shown(&folder))
}
