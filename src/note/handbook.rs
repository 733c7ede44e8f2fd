//! The handbook's unit properties beside the sums, where the group is a pattern of one size.
//!
//! Centroid and second moments hold only in the orientation in which the handbook draws the
//! pattern; of a turned or mirrored one the polar second moment alone is compared.

use super::builder::{Builder, Cell, Line, Sheet, word_column};
use super::doc::{Align, Column};
use super::text::{plain, symbol};
use crate::formula::{Draft, Env, FormulaError, Origin, Symbol, Value};
use crate::joint::{GivenAt, PatternSpec};
use crate::weld::handbook;

/// The closed form of what is none, such as the centroid of a circle from its own origin.
const NONE: &str = "0";

/// What the handbook tells of a pattern.
struct Told {
    /// Place in [`handbook::Algebra`].
    index: usize,
    /// Symbol of the unit property.
    unit: Symbol,
    /// Words for the unit property.
    says: &'static str,
    /// Name of the value of the group summed before.
    sum: &'static str,
    /// The group's value from the unit property: a name of the pattern's origin to add, or the throat.
    whole: &'static str,
}

impl Builder<'_> {
    /// Prints the handbook's values, the sums and their difference.
    pub(super) fn handbook(&mut self) -> Result<(), FormulaError> {
        let Some(pattern) = self.joint.weld.pattern.clone() else {
            return Ok(());
        };
        let Some(algebra) = self.handbook_algebra(&pattern) else {
            return Ok(());
        };
        let drawn_so = pattern
            .turned
            .as_ref()
            .is_none_or(|turned| turned.value.value == 0.0)
            && !pattern.mirrored;
        let unit = |base: &str, index: &[&str]| Symbol::of(base, index);
        let mut told = Vec::new();
        if drawn_so {
            let says = "Centroid of the unit lines from the pattern’s origin, by the handbook";
            told.push(Told {
                index: 1,
                unit: unit("x", &["u"]),
                says,
                sum: "x_c",
                whole: "x_o + q_u",
            });
            told.push(Told {
                index: 2,
                unit: unit("y", &["u"]),
                says,
                sum: "y_c",
                whole: "y_o + q_u",
            });
            let says = "Second moment of the unit lines, by the handbook";
            told.push(Told {
                index: 3,
                unit: unit("I", &["u", "x", "x"]),
                says,
                sum: "I_xx",
                whole: "t*q_u",
            });
            told.push(Told {
                index: 4,
                unit: unit("I", &["u", "y", "y"]),
                says,
                sum: "I_yy",
                whole: "t*q_u",
            });
        }
        let says = "Polar second moment of the unit lines, by the handbook";
        told.push(Told {
            index: 6,
            unit: unit("J", &["u"]),
            says,
            sum: "J",
            whole: "t*q_u",
        });
        self.para(plain(
            "Handbook: the group is a pattern of one size, so the unit properties of the machine-design handbooks \
             (Shigley, tables 9-1 and 9-2; Blodgett, section 7.4), times the throat, must give the sums above.",
        ));
        let mut env = self.pattern_env(&pattern);
        env.bind("t", self.run_values[0]["t"]);
        let mut rows = Vec::new();
        let mut worst: f64 = 0.0;
        // A second moment that is none has no formula to work out.
        let worked = |told: &Told| told.index < 3 || algebra[told.index] != NONE;
        for told in told.into_iter().filter(worked) {
            let value = self.by_handbook(&told, algebra[told.index], &env)?;
            let sum = self.group_value(told.sum);
            let (found, summed) = (self.ledger.get(value).value, self.ledger.get(sum).value);
            let scale = if told.index < 3 {
                self.properties.size
            } else {
                summed.abs().max(f64::MIN_POSITIVE)
            };
            worst = worst.max((found - summed).abs() / scale);
            rows.push(self.handbook_row(&told, value, sum));
        }
        let head = |text: &str| Column {
            head: plain(text),
            unit: Vec::new(),
            align: Align::Point,
        };
        let columns = vec![
            word_column("property"),
            head("handbook"),
            head("sum of the runs"),
            word_column("unit"),
        ];
        let caption = plain("Handbook properties beside the sums");
        self.table(Sheet {
            id: "handbook".to_owned(),
            caption,
            formulas: Vec::new(),
            columns,
            rows,
            foot: None,
        });
        let says = "Largest difference of a handbook value from its sum, as a part of it (centroids: of the group’s size)";
        self.bound(
            "agreement.handbook",
            Symbol::of("delta", &["hb"]),
            says,
            worst,
        );
        Ok(())
    }

    /// The closed forms, if the group is just this pattern in one size.
    fn handbook_algebra(&self, pattern: &PatternSpec) -> Option<handbook::Algebra> {
        let first = self.runs.first()?;
        let one_size = self
            .runs
            .iter()
            .all(|run| (run.throat - first.throat).abs() < 1e-12 * run.throat);
        let full = self.runs.iter().all(|run| run.path == run.told);
        let value = |given: &Option<GivenAt>| given.as_ref().map_or(0.0, |given| given.value.value);
        let (shape, doubled) = (pattern.shape.value, pattern.doubled);
        let (b, d, r) = (
            value(&pattern.width),
            value(&pattern.depth),
            value(&pattern.radius),
        );
        let unit = handbook::unit_line(shape, doubled, b, d, r)?;
        let alone = (unit.length - self.properties.length).abs() <= 1e-9 * unit.length;
        if one_size && full && alone {
            handbook::algebra(shape, doubled)
        } else {
            None
        }
    }

    /// Width, depth, radius and origin of the pattern as told.
    fn pattern_env(&mut self, pattern: &PatternSpec) -> Env {
        let mut env = Env::default();
        for (name, says, given) in [
            ("b", "Width of the pattern", &pattern.width),
            ("d", "Depth of the pattern", &pattern.depth),
            ("r", "Radius of the pattern", &pattern.radius),
        ] {
            if let Some(given) = given {
                let origin = Origin::Input(given.place.clone());
                let id = format!("pattern.{name}");
                let value = self.input(id, Symbol::of(name, &[]), says, &given.value, origin);
                self.show(value);
                env.bind(name, value);
            }
        }
        for (axis, name) in ["x", "y"].into_iter().enumerate() {
            let origin = Origin::Input(pattern.at.place.clone());
            let says = format!("Origin of the pattern, {name}");
            let id = format!("pattern.at-{name}");
            let value = self.input(
                id,
                Symbol::of(name, &["o"]),
                &says,
                &pattern.at.parts[axis],
                origin,
            );
            env.bind(&format!("{name}_o"), value);
        }
        env
    }

    fn by_handbook(
        &mut self,
        told: &Told,
        algebra: &str,
        env: &Env,
    ) -> Result<Value, FormulaError> {
        let mut env = env.clone();
        let mut whole = told.whole;
        if algebra == NONE {
            // The centroid is the pattern's own origin.
            whole = whole.trim_end_matches(" + q_u");
        } else {
            let draft = Draft {
                id: format!(
                    "handbook.unit-{}",
                    told.sum.to_lowercase().replace('_', "-")
                ),
                symbol: told.unit.clone(),
                says: told.says.to_owned(),
                formula: algebra,
                origin: Origin::Clause("Shigley, tables 9-1, 9-2".to_owned()),
                dim: None,
            };
            let unit = self.ledger.step(draft, &env)?;
            self.show(unit);
            env.bind("q_u", unit);
        }
        let draft = Draft {
            id: format!("handbook.{}", told.sum.to_lowercase().replace('_', "-")),
            symbol: self
                .ledger
                .get(self.group_value(told.sum))
                .symbol
                .with("hb"),
            says: "The same of the group".to_owned(),
            formula: whole,
            origin: Origin::Clause("Shigley, chapter 9".to_owned()),
            dim: None,
        };
        if told.index < 3 {
            let moved = Draft {
                origin: Origin::Method("geometry".to_owned()),
                ..draft
            };
            return self.shown_step(moved, &env);
        }
        self.shown_step(draft, &env)
    }

    fn shown_step(&mut self, draft: Draft<'_>, env: &Env) -> Result<Value, FormulaError> {
        let value = self.ledger.step(draft, env)?;
        self.show(value);
        Ok(value)
    }

    /// A value of the group by the name under which the sums bound it.
    fn group_value(&self, name: &str) -> Value {
        match self.env.names.get(name) {
            Some(crate::formula::Bound::Value(value)) => *value,
            Some(crate::formula::Bound::Word(_)) | None => {
                unreachable!("the sums were made before")
            }
        }
    }

    fn handbook_row(&mut self, told: &Told, value: Value, sum: Value) -> Line {
        let entry = self.ledger.get(sum);
        let unit = self.joint.units.value.text(entry.dim);
        let name = symbol(&entry.symbol);
        let id = format!("handbook-row-{}", told.sum.to_lowercase().replace('_', "-"));
        let cells = vec![
            Cell::Text(vec![name]),
            self.cell(value),
            self.cell(sum),
            Cell::Text(plain(&unit)),
        ];
        Line {
            id,
            cells,
            strong: false,
        }
    }
}
