//! Line properties: the tables that a checker expects, run by run, and the sums.
//!
//! Straight runs fill the columns by their formulas; an arc's own properties are steps before the
//! tables, to which its cells link.

use super::builder::{Builder, Cell, Line, Sheet, number_column, word_column};
use super::doc::Text;
use super::points::{AXES, axes};
use super::text::{math, plain, symbol};
use crate::formula::{
    Draft, Env, FormulaError, Math, Origin, SumSet, Symbol, TERMS_ON_PAGE, Value,
};
use crate::weld::Segment;

/// A column of a property table.
struct Property {
    /// Name in formulas.
    name: &'static str,
    /// Symbol without the run's number.
    symbol: Symbol,
    /// Formula for a straight run; empty if the value is made elsewhere.
    formula: String,
    /// What it is, for the trace.
    says: &'static str,
    /// Whether the formula is that of every run, arcs included.
    every_run: bool,
    /// Name of the sum over the runs and what it is, for the last row of a table.
    sum: Option<(&'static str, &'static str)>,
}

/// What the sum of the areas is.
const AREA: &str = "Area of all throats";

/// The pairs of axes of second moments, with the names of the line integrals.
const PLANAR_PAIRS: [(&str, usize, usize); 3] = [("I_xx", 1, 1), ("I_yy", 0, 0), ("I_xy", 0, 1)];
/// The pairs in space: the symmetric products t ∫ ρ_a ρ_b ds.
const SPACE_PAIRS: [(&str, usize, usize); 6] = [
    ("S_xx", 0, 0),
    ("S_yy", 1, 1),
    ("S_zz", 2, 2),
    ("S_xy", 0, 1),
    ("S_yz", 1, 2),
    ("S_zx", 2, 0),
];

/// Names of the runs' own second moments, in the order of the pairs.
pub(super) const OWN: [&str; 6] = ["own_0", "own_1", "own_2", "own_3", "own_4", "own_5"];
/// Names of the transfer terms, in the order of the pairs.
const MOVED: [&str; 6] = [
    "moved_0", "moved_1", "moved_2", "moved_3", "moved_4", "moved_5",
];
/// Names of the sums of the own second moments, in the order of the pairs.
const OWN_SUMS: [&str; 6] = [
    "own_sum_0",
    "own_sum_1",
    "own_sum_2",
    "own_sum_3",
    "own_sum_4",
    "own_sum_5",
];
/// Names of the sums of the transfer terms, in the order of the pairs.
const MOVED_SUMS: [&str; 6] = [
    "moved_sum_0",
    "moved_sum_1",
    "moved_sum_2",
    "moved_sum_3",
    "moved_sum_4",
    "moved_sum_5",
];
/// Names of the runs' first moments, by axis.
const FIRST: [&str; 3] = ["first_x", "first_y", "first_z"];
/// Names of their sums, by axis.
const FIRST_SUMS: [&str; 3] = ["first_sum_x", "first_sum_y", "first_sum_z"];

impl Builder<'_> {
    /// The pairs that this group needs.
    pub(super) fn pairs(&self) -> &'static [(&'static str, usize, usize)] {
        if self.planar {
            &PLANAR_PAIRS
        } else {
            &SPACE_PAIRS
        }
    }

    /// The symbol of a second moment: I_xx, I_yy, I_xy in the plane, S_xx … in space.
    pub(super) fn pair_symbol(name: &str) -> Symbol {
        let (base, index) = name.split_once('_').expect("pairs are named base_index");
        Symbol::of(base, &[&index[..1], &index[1..]])
    }

    /// All tables and sums, up to the second moments of the group.
    pub(super) fn line_properties(&mut self) -> Result<(), FormulaError> {
        self.bind_ends();
        if self.is_trimmed() {
            self.shortenings();
        }
        self.arcs()?;
        self.lengths_table()?;
        self.first_moments()?;
        self.second_moments()?;
        self.group_moments()
    }

    /// Whether any stop shortens a run.
    pub(super) fn is_trimmed(&self) -> bool {
        self.runs.iter().any(|run| run.path != run.told)
    }

    /// Binds each straight run's end coordinates and shortenings to the names of the columns.
    fn bind_ends(&mut self) {
        for index in 0..self.runs.len() {
            let run = self.runs[index].clone();
            if let Segment::Straight { a, b } = run.told {
                for (letter, at) in [("a", a), ("b", b)] {
                    let values = self.point_at(at).expect("every end has a point").values;
                    for axis in 0..3 {
                        self.run_values[index]
                            .insert(format!("{}_{letter}", AXES[axis]), values[axis]);
                    }
                }
            }
        }
    }

    pub(super) fn slug_id(&self, index: usize, name: &str) -> String {
        format!("{}.{}", self.slugs[index], name.replace('_', "-"))
    }

    /// The environment of one run: its own values over those of the joint.
    pub(super) fn run_env(&self, index: usize) -> Env {
        let mut env = self.env.clone();
        for (name, value) in &self.run_values[index] {
            env.bind(name, *value);
        }
        env
    }

    /// Makes a value of a run and keeps it under `name`.
    pub(super) fn run_step(
        &mut self,
        index: usize,
        name: &str,
        base: &Symbol,
        says: &str,
        formula: &str,
    ) -> Result<Value, FormulaError> {
        let env = self.run_env(index);
        let draft = Draft {
            id: self.slug_id(index, name),
            symbol: base.with(&(index + 1).to_string()),
            says: format!("{says}, run {}", index + 1),
            formula,
            origin: Origin::Method("geometry".to_owned()),
            dim: None,
        };
        let value = self.ledger.step(draft, &env)?;
        self.run_values[index].insert(name.to_owned(), value);
        Ok(value)
    }

    /// The set `runs` with the given columns, for sums and heads.
    fn run_set(&self, columns: &[(&str, Symbol)]) -> SumSet {
        let symbols = columns
            .iter()
            .map(|(name, symbol)| ((*name).to_owned(), symbol.clone()))
            .collect();
        SumSet {
            index: "i".to_owned(),
            symbols,
            members: self.run_values.clone(),
        }
    }

    /// A table with a row for each run, or each straight run, and its formulas above it.
    fn run_table(
        &mut self,
        id: &str,
        caption: &str,
        properties: &[Property],
        straight_only: bool,
    ) -> Result<(), FormulaError> {
        for index in 0..self.runs.len() {
            if straight_only && !self.is_straight(index) {
                continue;
            }
            for property in properties {
                if !property.formula.is_empty()
                    && !self.run_values[index].contains_key(property.name)
                {
                    self.run_step(
                        index,
                        property.name,
                        &property.symbol,
                        property.says,
                        &property.formula,
                    )?;
                }
            }
        }
        let formulas = self.column_formulas(properties)?;
        let units = self.ledger.units();
        let mut columns = vec![word_column(""), word_column("run")];
        for property in properties {
            let value = self
                .run_values
                .iter()
                .find_map(|values| values.get(property.name));
            let unit = value
                .map(|value| units.text(self.ledger.get(*value).dim))
                .unwrap_or_default();
            columns.push(number_column(symbol(&property.symbol), &unit));
        }
        let members: Vec<usize> = (0..self.runs.len())
            .filter(|index| !straight_only || self.is_straight(*index))
            .collect();
        let mut rows = Vec::new();
        for index in members {
            let mut cells = vec![
                Cell::Text(plain(&(index + 1).to_string())),
                Cell::Text(plain(&self.runs[index].name)),
            ];
            for property in properties {
                let value = self.run_values[index][property.name];
                cells.push(self.cell(value));
            }
            rows.push(Line {
                id: format!("{id}.{}", self.slugs[index]),
                cells,
                strong: false,
            });
        }
        let foot = self.sums_row(id, properties)?;
        self.table(Sheet {
            id: id.to_owned(),
            caption: plain(caption),
            formulas,
            columns,
            rows,
            foot,
        });
        Ok(())
    }

    /// Whether there are too many runs for a step to write out the terms of a sum, so that tables
    /// end in the sums of their columns.
    fn sums_in_tables(&self) -> bool {
        self.runs.len() > TERMS_ON_PAGE
    }

    /// The last row of a table: the sums of its columns.
    fn sums_row(
        &mut self,
        table: &str,
        properties: &[Property],
    ) -> Result<Option<Line>, FormulaError> {
        let has_sums = properties.iter().any(|property| property.sum.is_some());
        if !has_sums || !self.sums_in_tables() {
            return Ok(None);
        }
        let mut cells = vec![Cell::Text(Text::new()), Cell::Text(plain("sum"))];
        for property in properties {
            cells.push(match property.sum {
                None => Cell::Text(Text::new()),
                Some((name, says)) => {
                    let column = [(property.name, property.symbol.clone())];
                    let formula = format!("sum(runs, {})", property.name);
                    let symbol = property.symbol.clone();
                    let value = self.sum(name, symbol, says, &column, &formula)?;
                    self.cell(value)
                }
            });
        }
        Ok(Some(Line {
            id: format!("sum.{table}"),
            cells,
            strong: false,
        }))
    }

    /// Whether a run is straight.
    pub(super) fn is_straight(&self, index: usize) -> bool {
        matches!(self.runs[index].path, Segment::Straight { .. })
    }

    /// The formulas of the columns, as straight runs fill them, one each.
    fn column_formulas(&self, properties: &[Property]) -> Result<Vec<Text>, FormulaError> {
        // Arcs fill some columns by steps of their own.
        let straight = (0..self.runs.len()).find(|index| self.is_straight(*index));
        let shown = straight.unwrap_or_default();
        let mut env = self.env.clone();
        let names: Vec<(String, Symbol)> = self.run_values[shown]
            .iter()
            .map(|(name, value)| {
                (
                    name.clone(),
                    column_symbol(name, &self.ledger.get(*value).symbol),
                )
            })
            .collect();
        let columns: Vec<(&str, Symbol)> = names
            .iter()
            .map(|(name, symbol)| (name.as_str(), symbol.clone()))
            .collect();
        let mut set = self.run_set(&columns);
        set.members = vec![self.run_values[shown].clone()];
        env.sets.insert("runs".to_owned(), set);
        let worked = properties
            .iter()
            .filter(|property| !property.formula.is_empty())
            .filter(|property| property.every_run || straight.is_some());
        worked
            .map(|property| {
                let (symbol, formula) = (&property.symbol, &property.formula);
                let formula = self.ledger.column_formula(&env, symbol, formula, "runs")?;
                Ok(vec![math(&inline(formula))])
            })
            .collect()
    }

    /// Directions, lengths, areas and centroids.
    fn lengths_table(&mut self) -> Result<(), FormulaError> {
        let axes = axes(self.planar);
        let trimmed = self.is_trimmed();
        let mut properties: Vec<Property> = Vec::new();
        for axis in axes {
            properties.push(Property {
                name: ["d_x", "d_y", "d_z"][*axis],
                symbol: Symbol::of("d", &[AXES[*axis]]),
                formula: format!("{0}_b - {0}_a", AXES[*axis]),
                says: "Extent from start to end",
                every_run: false,
                sum: None,
            });
        }
        let squares: Vec<String> = axes
            .iter()
            .map(|axis| format!("d_{}^2", AXES[*axis]))
            .collect();
        let root = format!("sqrt({})", squares.join(" + "));
        if trimmed {
            properties.push(Property {
                name: "L_0",
                symbol: Symbol::of("L", &["0"]),
                formula: root,
                says: "Length as given",
                every_run: false,
                sum: None,
            });
        } else {
            properties.push(Property {
                name: "L",
                symbol: Symbol::of("L", &[]),
                formula: root,
                says: "Length",
                every_run: false,
                sum: None,
            });
        }
        let mut second: Vec<Property> = Vec::new();
        second.push(Property {
            name: "t",
            symbol: Symbol::of("t", &[]),
            formula: String::new(),
            says: "Effective throat",
            every_run: false,
            sum: None,
        });
        if trimmed {
            second.push(Property {
                name: "L",
                symbol: Symbol::of("L", &[]),
                formula: "L_0 - e_a - e_b".to_owned(),
                says: "Effective length: less its stops",
                every_run: false,
                sum: None,
            });
        } else {
            second.extend(properties.pop());
        }
        second.push(Property {
            name: "A",
            symbol: Symbol::of("A", &[]),
            formula: "t*L".to_owned(),
            says: "Throat area",
            every_run: false,
            sum: Some(("A", AREA)),
        });
        for axis in axes {
            let a = AXES[*axis];
            let formula = if trimmed {
                format!("{a}_a + d_{a}*(e_a + L/2)/L_0")
            } else {
                format!("({a}_a + {a}_b)/2")
            };
            second.push(Property {
                name: ["x_m", "y_m", "z_m"][*axis],
                symbol: Symbol::of(a, &["m"]),
                formula,
                says: "Centroid of the run",
                every_run: false,
                sum: None,
            });
        }
        if self.sums_in_tables() {
            second.extend(axes.iter().map(|axis| first_moment(*axis)));
        }
        if trimmed {
            properties.push(Property {
                name: "e_a",
                symbol: Symbol::of("c", &["s"]),
                formula: String::new(),
                says: "Shortening at the start",
                every_run: false,
                sum: None,
            });
            properties.push(Property {
                name: "e_b",
                symbol: Symbol::of("c", &["e"]),
                formula: String::new(),
                says: "Shortening at the end",
                every_run: false,
                sum: None,
            });
        }
        if (0..self.runs.len()).any(|index| self.is_straight(index)) {
            self.run_table("extents", "Extents of the straight runs", &properties, true)?;
        }
        let caption = if self.sums_in_tables() {
            "Throats, lengths, areas, centroids and first moments"
        } else {
            "Throats, lengths, areas and centroids"
        };
        let caption = format!("{caption}{}", self.of_arcs());
        self.run_table("throats", &caption, &second, false)
    }

    /// Words for a caption whose formulas hold for straight runs alone.
    fn of_arcs(&self) -> &'static str {
        let straight = (0..self.runs.len()).filter(|index| self.is_straight(*index));
        match straight.count() {
            0 => "; arcs from their own steps",
            count if count == self.runs.len() => "",
            _ => "; the formulas are of straight runs, the values of arcs from their own steps",
        }
    }

    /// What each stop takes off: one leg, one throat, or nothing.
    fn shortenings(&mut self) {
        for index in 0..self.runs.len() {
            for (end, name) in ["e_a", "e_b"].into_iter().enumerate() {
                let value = match self.runs[index].ends[end] {
                    crate::weld::End::Stop { leg: true, .. } => {
                        let values = &self.run_values[index];
                        let of = |name: &str| values.get(name).copied();
                        let size = |value: Value| self.ledger.get(value).value;
                        // One leg of unequal ones is the larger.
                        match (of("leg_base"), of("leg_attached")) {
                            (Some(base), Some(attached)) if size(attached) > size(base) => {
                                Some(attached)
                            }
                            (Some(base), _) => Some(base),
                            (None, attached) => attached.or_else(|| of("t")),
                        }
                    }
                    crate::weld::End::Stop { leg: false, .. } => {
                        self.run_values[index].get("t").copied()
                    }
                    crate::weld::End::Continuous | crate::weld::End::Full => None,
                };
                let value = value.unwrap_or_else(|| {
                    let symbol = Symbol::of("c", &[if name.ends_with('a') { "s" } else { "e" }])
                        .with(&(index + 1).to_string());
                    let id = self.slug_id(index, name);
                    let zero = self.zero(
                        id,
                        symbol,
                        "No shortening at this end",
                        crate::quantity::Dim::LENGTH,
                    );
                    let why = match self.runs[index].ends[end] {
                        crate::weld::End::Continuous => "the bead goes on",
                        crate::weld::End::Full | crate::weld::End::Stop { .. } => {
                            "full size to its end"
                        }
                    };
                    self.ledger.get_mut(zero).origin = Origin::Method(why.to_owned());
                    zero
                });
                self.run_values[index].insert(name.to_owned(), value);
            }
        }
    }

    /// First moments and the centroid of the group.
    fn first_moments(&mut self) -> Result<(), FormulaError> {
        let axes = axes(self.planar);
        let in_table = self.sums_in_tables();
        if !in_table {
            let area = Symbol::of("A", &[]);
            let column = [("A", area.clone())];
            self.sum_step("A", area, AREA, &column, "sum(runs, A)")?;
        }
        for axis in axes {
            let a = AXES[*axis];
            let middle = format!("{a}_m");
            let columns = [
                ("A", Symbol::of("A", &[])),
                (middle.as_str(), Symbol::of(a, &["m"])),
            ];
            let says = format!("Centroid of the group, {a}");
            let formula = if in_table {
                format!("{}/A_w", FIRST_SUMS[*axis])
            } else {
                format!("sum(runs, A*{middle})/A_w")
            };
            let name = format!("{a}_c");
            self.sum_step(&name, Symbol::of(a, &["c"]), &says, &columns, &formula)?;
        }
        if self.planar {
            self.plane_height()?;
        }
        Ok(())
    }

    /// The height of the faying plane: the z of every point.
    fn plane_height(&mut self) -> Result<(), FormulaError> {
        let symbol = Symbol::of("z", &["c"]);
        let says = "Height of the faying plane: z of every point";
        let first = self
            .joint
            .weld
            .runs
            .first()
            .and_then(|spec| super::points::stated(spec).into_iter().next());
        let value = match first.cloned() {
            Some(triple) => {
                let origin = Origin::Input(triple.place.clone());
                self.input("plane.z".to_owned(), symbol, says, &triple.parts[2], origin)
            }
            None => self.zero(
                "plane.z".to_owned(),
                symbol,
                says,
                crate::quantity::Dim::LENGTH,
            ),
        };
        self.show(value);
        self.env.bind("z_c", value);
        Ok(())
    }

    /// A step that sums over the runs.
    fn sum_step(
        &mut self,
        name: &str,
        symbol: Symbol,
        says: &str,
        columns: &[(&str, Symbol)],
        formula: &str,
    ) -> Result<Value, FormulaError> {
        let value = self.sum(name, symbol, says, columns, formula)?;
        self.show(value);
        Ok(value)
    }

    /// A sum over the runs, bound to `name` and not yet shown.
    fn sum(
        &mut self,
        name: &str,
        symbol: Symbol,
        says: &str,
        columns: &[(&str, Symbol)],
        formula: &str,
    ) -> Result<Value, FormulaError> {
        let mut env = self.env.clone();
        env.sets.insert("runs".to_owned(), self.run_set(columns));
        let id = format!("group.{}", name.to_lowercase().replace('_', "-"));
        let bound = if name == "A" { "A_w" } else { name };
        let origin = Origin::Method("statics".to_owned());
        let draft = Draft {
            id,
            symbol,
            says: says.to_owned(),
            formula,
            origin,
            dim: None,
        };
        self.make(bound, draft, &env)
    }

    /// Own second moments, transfer terms, and their sums.
    fn second_moments(&mut self) -> Result<(), FormulaError> {
        let pairs = self.pairs();
        let own: Vec<Property> = pairs
            .iter()
            .zip(OWN.into_iter().zip(OWN_SUMS))
            .map(|((name, p, q), (own, sum))| Property {
                name: own,
                symbol: Self::pair_symbol(name).with("0"),
                formula: self.own_formula(*p, *q),
                says: "Second moment about the run’s own centroid",
                every_run: false,
                sum: Some((sum, "Sum of the runs’ own second moments")),
            })
            .collect();
        let caption = format!(
            "Second moments of the runs about their own centroids{}",
            self.of_arcs()
        );
        self.run_table("own", &caption, &own, false)?;
        let transfer: Vec<Property> = pairs
            .iter()
            .zip(MOVED.into_iter().zip(MOVED_SUMS))
            .map(|((name, p, q), (moved, sum))| {
                let (a, b) = (AXES[*p], AXES[*q]);
                let formula = if p == q {
                    format!("A*({a}_m - {a}_c)^2")
                } else {
                    format!("A*({a}_m - {a}_c)*({b}_m - {b}_c)")
                };
                Property {
                    name: moved,
                    symbol: Symbol::of("T", &[&name[2..3], &name[3..4]]),
                    formula,
                    says: "Transfer to the centroid of the group",
                    every_run: true,
                    sum: Some((sum, "Sum of the transfer terms")),
                }
            })
            .collect();
        self.run_table(
            "transfer",
            "Transfer terms to the centroid of the group",
            &transfer,
            false,
        )?;
        for (at, (name, ..)) in pairs.iter().enumerate() {
            let (o, q) = (OWN[at], MOVED[at]);
            let base = Self::pair_symbol(name);
            let columns = [
                (o, base.with("0")),
                (q, Symbol::of("T", &[&name[2..3], &name[3..4]])),
            ];
            let says = match *name {
                "I_xx" => "Second moment about x through the centroid".to_owned(),
                "I_yy" => "Second moment about y through the centroid".to_owned(),
                "I_xy" => "Product of inertia about the centroid".to_owned(),
                other => format!(
                    "Line integral of {}·{} about the centroid",
                    &other[2..3],
                    &other[3..4]
                ),
            };
            let formula = if self.sums_in_tables() {
                format!("{} + {}", OWN_SUMS[at], MOVED_SUMS[at])
            } else {
                format!("sum(runs, {o}) + sum(runs, {q})")
            };
            self.sum_step(name, base, &says, &columns, &formula)?;
        }
        Ok(())
    }

    fn own_formula(&self, p: usize, q: usize) -> String {
        let (a, b) = (AXES[p], AXES[q]);
        let product = if p == q {
            format!("d_{a}^2")
        } else {
            format!("d_{a}*d_{b}")
        };
        if self.is_trimmed() {
            format!("A*{product}*L^2/(12*L_0^2)")
        } else {
            format!("A*{product}/12")
        }
    }

    /// J and the determinant in the plane; the tensor K in space.
    fn group_moments(&mut self) -> Result<(), FormulaError> {
        if self.planar {
            self.step(
                Symbol::of("J", &[]),
                "Polar second moment about the centroid",
                "I_xx + I_yy",
                "statics",
            )?;
            return Ok(());
        }
        for (symbol, formula) in [
            ("xx", "S_yy + S_zz"),
            ("yy", "S_zz + S_xx"),
            ("zz", "S_xx + S_yy"),
            ("xy", "-S_xy"),
            ("yz", "-S_yz"),
            ("zx", "-S_zx"),
        ] {
            let symbol = Symbol::of("K", &[&symbol[..1], &symbol[1..]]);
            let says = format!(
                "Inertia tensor about the centroid, {}",
                &symbol.plain()[2..]
            );
            self.step(symbol, &says, formula, "statics")?;
        }
        Ok(())
    }
}

/// The first moment of a run's area, along an axis.
fn first_moment(axis: usize) -> Property {
    let a = AXES[axis];
    Property {
        name: FIRST[axis],
        symbol: Symbol::of("G", &[a]),
        formula: format!("A*{a}_m"),
        says: "First moment of the run’s area",
        every_run: true,
        sum: Some((FIRST_SUMS[axis], "First moment of all areas")),
    }
}

/// The symbol of a column: that of a run's value without the run's number or the point's.
fn column_symbol(name: &str, value: &Symbol) -> Symbol {
    let (base, index) = value.parts();
    match name {
        "t" | "L" | "A" => Symbol::of(name, &[]),
        "leg_base" | "leg_attached" => Symbol::of("h", &[]),
        "e_a" => Symbol::of("c", &["s"]),
        "e_b" => Symbol::of("c", &["e"]),
        "x_a" | "y_a" | "z_a" => Symbol::of(&name[..1], &["s"]),
        "x_b" | "y_b" | "z_b" => Symbol::of(&name[..1], &["e"]),
        "x_m" | "y_m" | "z_m" => Symbol::of(&name[..1], &["m"]),
        _ => {
            let kept: Vec<&str> = index[..index.len().saturating_sub(1)]
                .iter()
                .map(String::as_str)
                .collect();
            Symbol::of(base, &kept)
        }
    }
}

/// Fractions on the line, for running text.
fn inline(formula: Math) -> Math {
    match formula {
        Math::Fraction(above, below) => {
            let bracket = |math: Math| match math {
                Math::Terms(_) | Math::Product(_) => Math::Bracket(Box::new(math)),
                other => other,
            };
            let above = match *above {
                sum @ Math::Terms(_) => Box::new(Math::Bracket(Box::new(sum))),
                other => Box::new(other),
            };
            Math::Slash(above, Box::new(bracket(*below)))
        }
        Math::Relation(sign, left, right) => Math::Relation(sign, left, Box::new(inline(*right))),
        Math::Product(factors) => Math::Product(factors.into_iter().map(inline).collect()),
        Math::Terms(terms) => Math::Terms(
            terms
                .into_iter()
                .map(|(minus, term)| (minus, inline(term)))
                .collect(),
        ),
        other => other,
    }
}
