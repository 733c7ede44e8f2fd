//! Loads: the cases as given, the case that is worked, and its moment about the centroid.

use super::builder::{Builder, Cell, Line, Sheet, number_column, word_column};
use super::points::AXES;
use super::text::{count, plain, slug, symbol};
use crate::formula::{Draft, FormulaError, Origin, Symbol, Value};
use crate::joint::{Case, LoadFrame, Triple};
use crate::load::Frame;
use crate::quantity::{Dim, Given};

/// Cases up to this number are listed in the note; the rest stand in the table of cases beside it.
pub(super) const CASES_IN_NOTE: usize = 60;

/// The values of a case in the joint frame.
#[derive(Clone, Copy)]
pub(super) struct CaseValues {
    /// Force.
    pub(super) force: [Value; 3],
    /// Moment about the point of application.
    pub(super) moment: [Value; 3],
    /// Moment about the centroid.
    pub(super) about: [Value; 3],
}

impl Builder<'_> {
    /// The frame that all cases are given in, if it is one.
    fn shared_frame(&self) -> Option<&str> {
        let mut frames = self
            .joint
            .loads
            .cases
            .iter()
            .map(|case| case.frame.as_ref().map(|frame| frame.name.value.as_str()));
        let first = frames.next()??;
        frames.all(|frame| frame == Some(first)).then_some(first)
    }

    /// The name of a case, with the frame of its own that its values are given in.
    fn framed_name(&self, case: &Case) -> String {
        match &case.frame {
            Some(frame) if self.shared_frame().is_none() => {
                format!("{} (in frame {})", case.name.value, frame.name.value)
            }
            _ => case.name.value.clone(),
        }
    }

    /// The level of the cases, where all have the same.
    pub(super) fn shared_level(&self) -> Option<&'static str> {
        let mut levels = self.joint.loads.cases.iter().map(|case| case.level.value);
        let first = levels.next()?;
        levels.all(|level| level == first).then(|| first.word())
    }

    /// The list of cases, in file order; `first` are the cases by rank, the one that governs in bold.
    pub(super) fn case_table(&mut self, first: &[usize], governs: bool) {
        let units = self.joint.units.value;
        let (force, moment) = (units.text(Dim::FORCE), units.text(Dim::MOMENT));
        let cases = &self.joint.loads.cases;
        let shown: Vec<usize> = if cases.len() <= CASES_IN_NOTE {
            (0..cases.len()).collect()
        } else {
            let mut chosen: Vec<usize> = first.iter().copied().take(CASES_IN_NOTE).collect();
            chosen.sort_unstable();
            chosen
        };
        let told = self
            .joint
            .loads
            .cases
            .iter()
            .any(|case| case.says.is_some());
        let level = self.shared_level();
        let mut columns = vec![word_column("case")];
        if level.is_none() {
            columns.push(word_column("level"));
        }
        if told {
            columns.push(word_column("what"));
        }
        let turned = cases.iter().all(|case| case.frame.is_some());
        for (base, unit) in [("F", &force), ("M", &moment)] {
            columns.extend(AXES.map(|axis| {
                let head = Symbol::of(base, &[axis]);
                let head = match (turned, base) {
                    (true, _) => head.with("given"),
                    (false, "M") => head.with("P"),
                    (false, _) => head,
                };
                number_column(symbol(&head), unit)
            }));
        }
        // A lone case governs without being told so.
        let rows_bold = cases.len() > 1 && governs;
        let mut rows = Vec::new();
        for index in shown {
            let case = self.joint.loads.cases[index].clone();
            let id = format!("case.{}-{}", index + 1, slug(&case.name.value));
            let mut cells = vec![Cell::Text(plain(&self.framed_name(&case)))];
            if level.is_none() {
                cells.push(Cell::Text(plain(case.level.value.word())));
            }
            if told {
                let says = case.says.as_ref().map_or("", |says| says.value.as_str());
                cells.push(Cell::Text(plain(says)));
            }
            for (base, triple, says) in [("F", &case.force, "Force"), ("M", &case.moment, "Moment")]
            {
                for axis in 0..3 {
                    let value =
                        self.case_input(index, &case, base, &triple.parts[axis], axis, says);
                    cells.push(self.cell(value));
                }
            }
            rows.push(Line {
                id,
                cells,
                strong: rows_bold && first.first() == Some(&index),
            });
        }
        let caption = self.case_caption(rows.len(), level, rows_bold);
        self.table(Sheet {
            id: "cases".to_owned(),
            caption: plain(&caption),
            formulas: Vec::new(),
            columns,
            rows,
            foot: None,
        });
        self.describe_cases(first);
    }

    /// The caption of the list of cases: how many stand there, their level, what is bold.
    fn case_caption(&self, shown: usize, level: Option<&str>, rows_bold: bool) -> String {
        let total = self.joint.loads.cases.len();
        let mut caption = if shown == total {
            format!("Load cases as given, {total} in all")
        } else {
            format!("Load cases as given: the {shown} that rank first of {total}")
        };
        if let Some(level) = level {
            caption.push_str(&format!("; level {level}"));
        }
        if rows_bold {
            caption.push_str("; governing case in bold");
        }
        if let Some(frame) = self.shared_frame() {
            caption.push_str(&format!("; components in frame {frame}"));
        }
        let framed = self
            .joint
            .loads
            .cases
            .iter()
            .filter(|case| case.frame.is_some())
            .count();
        if framed > 0 && framed < total {
            caption.push_str("; values of a case in a frame are components in it");
        }
        if shown < total {
            caption.push_str("; all stand in the table of cases");
        }
        caption
    }

    /// Words on the cases, where they act, and how many there are.
    fn describe_cases(&mut self, first: &[usize]) {
        let cases = self.joint.loads.cases.clone();
        let mut shown: Vec<usize> = first.iter().copied().take(CASES_IN_NOTE).collect();
        shown.sort_unstable();
        self.load_points(&shown);
        self.frame_tables(&shown);
        let count = count(cases.len(), "case", "cases");
        let run = match (self.unchecked.is_empty(), cases.len()) {
            (true, 1) => "it was run".to_owned(),
            (true, _) => "all were run, none skipped".to_owned(),
            (false, _) => format!(
                "no strength check takes the level of {}",
                self.unchecked.join(", ")
            ),
        };
        self.para(plain(&format!(
            "Actions on the weld group from the attached part; moments about the point of application, by the \
             right-hand rule. The file holds {count}; {run}. Components of one case are never mixed with another’s."
        )));
    }

    /// The point of application of a case, as given.
    fn load_point(&mut self, case: &Case) -> [Value; 3] {
        let framed = case.frame.is_some();
        let mut starts: Vec<usize> = self
            .joint
            .loads
            .cases
            .iter()
            .map(|case| case.at.place.start)
            .collect();
        starts.sort_unstable();
        starts.dedup();
        let number = starts
            .iter()
            .position(|start| *start == case.at.place.start)
            .unwrap_or_default()
            + 1;
        [0, 1, 2].map(|axis| {
            let symbol = Symbol::of(AXES[axis], &[if framed { "given" } else { "P" }]);
            let says = format!("Point of application, {}", AXES[axis]);
            let id = format!("load-point-{number}.{}", AXES[axis]);
            self.input(
                id,
                symbol,
                &says,
                &case.at.parts[axis],
                Origin::Input(case.at.place.clone()),
            )
        })
    }

    /// The table of points of application, each once with the cases that act there.
    fn load_points(&mut self, shown: &[usize]) {
        let unit = self.joint.units.value.length();
        let mut columns = vec![word_column("case")];
        let all = &self.joint.loads.cases;
        let turned = shown.iter().all(|case| all[*case].frame.is_some());
        let index = if turned { "given" } else { "P" };
        columns.extend(AXES.map(|axis| number_column(symbol(&Symbol::of(axis, &[index])), unit)));
        let mut points: Vec<(usize, Vec<String>)> = Vec::new();
        for index in shown {
            let case = &self.joint.loads.cases[*index];
            let name = self.framed_name(case);
            let start = |other: usize| self.joint.loads.cases[other].at.place.start;
            match points
                .iter_mut()
                .find(|(other, _)| start(*other) == start(*index))
            {
                Some((_, names)) => names.push(name),
                None => points.push((*index, vec![name])),
            }
        }
        let mut rows = Vec::new();
        for (at, (index, names)) in points.into_iter().enumerate() {
            let case = self.joint.loads.cases[index].clone();
            let mut cells = vec![Cell::Text(plain(&names.join(", ")))];
            for value in self.load_point(&case) {
                cells.push(self.cell(value));
            }
            rows.push(Line {
                id: format!("load-point-{}", at + 1),
                cells,
                strong: false,
            });
        }
        let mut caption = "Points of application as given".to_owned();
        if let Some(frame) = self.shared_frame() {
            caption.push_str(&format!(", in frame {frame}"));
        }
        let caption = plain(&caption);
        self.table(Sheet {
            id: "load-points".to_owned(),
            caption,
            formulas: Vec::new(),
            columns,
            rows,
            foot: None,
        });
    }

    /// A component of a case as given.
    fn case_input(
        &mut self,
        index: usize,
        case: &Case,
        base: &str,
        given: &Given,
        axis: usize,
        says: &str,
    ) -> Value {
        let frame = case.frame.as_ref().map_or(String::new(), |frame| {
            format!(", in frame {}", frame.name.value)
        });
        let id = format!(
            "case.{}-{}.{}{}",
            index + 1,
            slug(&case.name.value),
            base.to_lowercase(),
            AXES[axis]
        );
        let mut symbol = Symbol::of(base, &[AXES[axis]]);
        if base == "M" || case.frame.is_some() {
            symbol = symbol.with(if case.frame.is_some() { "given" } else { "P" });
        }
        let says = format!(
            "{says} along {} of case {}{frame}",
            AXES[axis], case.name.value
        );
        let says = if base == "M" {
            says.replace("along", "about")
        } else {
            says
        };
        self.input(
            id,
            symbol,
            &says,
            given,
            Origin::Input(case.force.place.clone()),
        )
    }

    /// Works a case: into the joint frame if it has another, then about the centroid.
    pub(super) fn work_case(&mut self, index: usize) -> Result<CaseValues, FormulaError> {
        let case = self.joint.loads.cases[index].clone();
        let tag = format!("case.{}-{}", index + 1, slug(&case.name.value));
        let mut part = |base: &str, triple: &Triple, says: &str| {
            [0, 1, 2]
                .map(|axis| self.case_input(index, &case, base, &triple.parts[axis], axis, says))
        };
        let force = part("F", &case.force, "Force");
        let moment = part("M", &case.moment, "Moment");
        let told = [force, moment, self.load_point(&case)];
        let [force, moment, at] = match &case.frame {
            None => told,
            Some(_) => self.turn_case(index, &tag, told)?,
        };
        let about = self.about_centroid(&tag, force, moment, at)?;
        Ok(CaseValues {
            force,
            moment,
            about,
        })
    }

    /// A case from its own frame into that of the joint: v = R v', p = o + R p'.
    fn turn_case(
        &mut self,
        index: usize,
        tag: &str,
        told: [[Value; 3]; 3],
    ) -> Result<[[Value; 3]; 3], FormulaError> {
        let case = self.joint.loads.cases[index].clone();
        let frame = case
            .frame
            .as_ref()
            .expect("only cases with a frame are turned");
        let mut env = self.env.clone();
        let (origin, axes) = self.frame_values(frame);
        for row in 0..3 {
            env.bind(&format!("o_{}", AXES[row]), origin[row]);
            for (column, value) in axes[row].iter().enumerate() {
                env.bind(&format!("R_{row}{column}"), *value);
            }
        }
        let mut out = told;
        for (kind, (base, what)) in [
            ("F", "Force"),
            ("M", "Moment at the point of application"),
            ("", "Point of application"),
        ]
        .into_iter()
        .enumerate()
        {
            for axis in 0..3 {
                env.bind(["v_0", "v_1", "v_2"][axis], told[kind][axis]);
            }
            for axis in 0..3 {
                let a = AXES[axis];
                let turn = format!("R_{axis}0*v_0 + R_{axis}1*v_1 + R_{axis}2*v_2");
                let formula = if base.is_empty() {
                    format!("o_{a} + {turn}")
                } else {
                    turn
                };
                let symbol = match base {
                    "F" => Symbol::of("F", &[a]),
                    "M" => Symbol::of("M", &[a, "P"]),
                    _ => Symbol::of(a, &["P"]),
                };
                let draft = Draft {
                    id: format!("{tag}.joint-{}{a}", base.to_lowercase()),
                    symbol,
                    says: format!("{what} in the joint frame, {a}"),
                    formula: &formula,
                    origin: Origin::Method("statics".to_owned()),
                    dim: None,
                };
                let value = self.ledger.step(draft, &env)?;
                self.show(value);
                out[kind][axis] = value;
            }
        }
        Ok(out)
    }

    /// The origin of a load's frame and its axes by rows, as given or made exactly square.
    fn frame_values(&mut self, frame: &LoadFrame) -> ([Value; 3], [[Value; 3]; 3]) {
        let turned = Frame::new(frame).expect("the frame was checked when the loads were laid out");
        let (name, tag) = (&frame.name.value, slug(&frame.name.value));
        let origin = [0, 1, 2].map(|row| {
            let says = format!("Origin of frame {name}, {}", AXES[row]);
            let id = format!("frame.{tag}.o-{}", AXES[row]);
            let place = Origin::Input(frame.origin.place.clone());
            self.input(
                id,
                Symbol::of("o", &[AXES[row]]),
                &says,
                &frame.origin.parts[row],
                place,
            )
        });
        let axes = [0, 1, 2].map(|row| {
            [0, 1, 2].map(|column| {
                let symbol = Symbol::of("a", &[AXES[row], AXES[column]]);
                let says = format!(
                    "Axis {} of frame {name}, component {}",
                    AXES[column], AXES[row]
                );
                let id = format!("frame.{tag}.r-{}{}", AXES[row], AXES[column]);
                let told = &frame.axes[column].parts[row];
                let origin = Origin::Input(frame.axes[column].place.clone());
                if (told.value - turned.r[(row, column)]).abs() < 1e-15 {
                    return self.input(id, symbol, &says, told, origin);
                }
                if let Some(known) = self.given.get(&id) {
                    return *known;
                }
                let formula = "axes as given, made exactly square and of unit length";
                let draft = Draft {
                    id: id.clone(),
                    symbol,
                    says,
                    formula,
                    origin,
                    dim: None,
                };
                let value = self.ledger.found(draft, turned.r[(row, column)], Dim::NONE);
                self.given.insert(id, value);
                value
            })
        });
        (origin, axes)
    }

    /// A table for each frame that cases are told in.
    fn frame_tables(&mut self, shown: &[usize]) {
        let mut done: Vec<String> = Vec::new();
        for index in shown {
            let Some(frame) = self.joint.loads.cases[*index].frame.clone() else {
                continue;
            };
            if done.contains(&frame.name.value) {
                continue;
            }
            done.push(frame.name.value.clone());
            let (origin, axes) = self.frame_values(&frame);
            let unit = self.joint.units.value.length();
            let mut columns = vec![word_column("component in the joint frame")];
            columns.push(number_column(symbol(&Symbol::of("o", &[])), unit));
            columns.extend(AXES.map(|axis| number_column(symbol(&Symbol::of("a", &[axis])), "")));
            let tag = slug(&frame.name.value);
            let mut rows = Vec::new();
            for row in 0..3 {
                let mut cells = vec![Cell::Text(plain(AXES[row])), self.cell(origin[row])];
                for value in axes[row] {
                    cells.push(self.cell(value));
                }
                rows.push(Line {
                    id: format!("frame.{tag}.{}", AXES[row]),
                    cells,
                    strong: false,
                });
            }
            let words = format!(
                "Frame {}: its origin and its axes x, y, z as columns",
                frame.name.value
            );
            self.table(Sheet {
                id: format!("frame-{tag}"),
                caption: plain(&words),
                formulas: Vec::new(),
                columns,
                rows,
                foot: None,
            });
        }
    }

    /// M_C = M + (P − C) × F.
    fn about_centroid(
        &mut self,
        tag: &str,
        force: [Value; 3],
        moment: [Value; 3],
        at: [Value; 3],
    ) -> Result<[Value; 3], FormulaError> {
        let mut env = self.env.clone();
        for axis in 0..3 {
            env.bind(&format!("F_{}", AXES[axis]), force[axis]);
            env.bind(&format!("M_{}P", AXES[axis]), moment[axis]);
            env.bind(&format!("{}_P", AXES[axis]), at[axis]);
        }
        let mut about = moment;
        for axis in 0..3 {
            let [a, b, c] = [AXES[axis], AXES[(axis + 1) % 3], AXES[(axis + 2) % 3]];
            let formula = format!("M_{a}P + ({b}_P - {b}_c)*F_{c} - ({c}_P - {c}_c)*F_{b}");
            let draft = Draft {
                id: format!("{tag}.moment-{a}"),
                symbol: Symbol::of("M", &[a]),
                says: format!(
                    "Moment about {a} through the centroid: the given moment and the force carried across"
                ),
                formula: &formula,
                origin: Origin::Method("statics".to_owned()),
                dim: None,
            };
            about[axis] = self.ledger.step(draft, &env)?;
            self.show(about[axis]);
        }
        Ok(about)
    }
}
