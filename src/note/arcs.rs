//! Steps of an arc or circle: its length, its centroid and its own second moments (method 3).

use super::builder::Builder;
use super::lines::OWN;
use super::points::{AXES, axes};
use crate::formula::{Draft, FormulaError, Origin, Symbol, Value};
use crate::joint::{PathSpec, RunSpec};
use crate::quantity::{Dim, Given};
use crate::weld::{Segment, V3};
use std::f64::consts::PI;

/// Share of A R² under which the second moment of an arc toward its middle prints 0.
const FLAT: f64 = 1e-6;

/// Sweeps within this of a full turn are a circle (rad).
const FULL_TURN: f64 = 1e-9;

impl Builder<'_> {
    /// Works every arc of the group.
    pub(super) fn arcs(&mut self) -> Result<(), FormulaError> {
        for index in 0..self.runs.len() {
            let Segment::Arc { centre, sweep, .. } = self.runs[index].path else {
                continue;
            };
            let name = self.runs[index].name.clone();
            self.heading(&format!("Arc of run {}, {name}", index + 1));
            self.arc_inputs(index, centre);
            if (sweep.abs() - 2.0 * PI).abs() < FULL_TURN {
                self.circle(index)?;
            } else {
                self.open_arc(index, sweep > 0.0)?;
            }
        }
        Ok(())
    }

    /// Shows a step of a run and keeps its value.
    fn arc_step(
        &mut self,
        index: usize,
        name: &str,
        symbol: Symbol,
        says: &str,
        formula: &str,
    ) -> Result<Value, FormulaError> {
        let value = self.run_step(index, name, &symbol, says, formula)?;
        self.show(value);
        Ok(value)
    }

    fn arc_given(
        &mut self,
        index: usize,
        name: &str,
        symbol: Symbol,
        says: &str,
        given: &Given,
        origin: Origin,
    ) {
        let id = self.slug_id(index, name);
        let value = self.input(
            id,
            symbol.with(&(index + 1).to_string()),
            says,
            given,
            origin,
        );
        self.show(value);
        self.run_values[index].insert(name.to_owned(), value);
    }

    /// Radius, centre and angles as told.
    fn arc_inputs(&mut self, index: usize, centre: V3) {
        let spec: RunSpec = self.joint.weld.runs[self.runs[index].spec].clone();
        let (told, radius, angles) = match &spec.path {
            PathSpec::Arc {
                centre,
                radius,
                from,
                sweep,
            } => (centre, radius, Some((from, sweep))),
            PathSpec::Circle { centre, radius } => (centre, radius, None),
            PathSpec::Straight(_) | PathSpec::Polyline { .. } => return,
        };
        let number = format!("run {}", index + 1);
        let origin = Origin::Input(radius.place.clone());
        self.arc_given(
            index,
            "R",
            Symbol::of("r", &[]),
            &format!("Radius of {number}"),
            &radius.value,
            origin,
        );
        for axis in axes(self.planar) {
            let a = AXES[*axis];
            let symbol = Symbol::of(a, &["0"]);
            let says = format!("Centre of {number}, {a}");
            if (told.parts[*axis].value - centre[*axis]).abs() <= 1e-12 * self.properties.size {
                let origin = Origin::Input(told.place.clone());
                self.arc_given(
                    index,
                    &format!("{a}_0"),
                    symbol,
                    &says,
                    &told.parts[*axis],
                    origin,
                );
            } else {
                let id = self.slug_id(index, &format!("{a}_0"));
                let origin = Origin::Input(spec.place.clone());
                let symbol = symbol.with(&(index + 1).to_string());
                let formula = "laid out from the run as given";
                let draft = Draft {
                    id,
                    symbol,
                    says,
                    formula,
                    origin,
                    dim: None,
                };
                let value = self.ledger.found(draft, centre[*axis], Dim::LENGTH);
                self.show(value);
                self.run_values[index].insert(format!("{a}_0"), value);
            }
        }
        let Segment::Arc { from, sweep, .. } = self.runs[index].told else {
            return;
        };
        let full = (sweep.abs() - 2.0 * PI).abs() < FULL_TURN;
        if full && angles.is_none() {
            return;
        }
        for (name, symbol, says, value, given) in [
            (
                "theta_0",
                Symbol::of("theta", &["0"]),
                "Start angle",
                from,
                angles.map(|angles| angles.0),
            ),
            (
                "phi",
                Symbol::of("phi", &[]),
                "Swept angle",
                sweep,
                angles.map(|angles| angles.1),
            ),
        ] {
            let says = format!("{says} of {number}");
            match given.filter(|given| (given.value.value - value).abs() < 1e-12) {
                Some(given) => {
                    let origin = Origin::Input(given.place.clone());
                    self.arc_given(index, name, symbol, &says, &given.value, origin);
                }
                None => {
                    let draft = Draft {
                        id: self.slug_id(index, name),
                        symbol: symbol.with(&(index + 1).to_string()),
                        says,
                        formula: "laid out from the run, its bead and its pitch",
                        origin: Origin::Input(spec.place.clone()),
                        dim: None,
                    };
                    let value = self.ledger.found(draft, value, Dim::ANGLE);
                    self.show(value);
                    self.run_values[index].insert(name.to_owned(), value);
                }
            }
        }
    }

    /// A full circle.
    fn circle(&mut self, index: usize) -> Result<(), FormulaError> {
        self.arc_step(
            index,
            "L",
            Symbol::of("L", &[]),
            "Length of the circle",
            "2*pi*R",
        )?;
        for axis in axes(self.planar) {
            let centre = self.run_values[index][&format!("{}_0", AXES[*axis])];
            self.run_values[index].insert(format!("{}_m", AXES[*axis]), centre);
        }
        self.arc_step(index, "A", Symbol::of("A", &[]), "Throat area", "t*L")?;
        if !self.planar {
            self.normal_values(index);
        }
        for (at, (name, p, q)) in self.pairs().iter().enumerate() {
            let symbol = Self::pair_symbol(name).with("0");
            let says = "Second moment of the circle about its centre";
            let (a, b) = (AXES[*p], AXES[*q]);
            let formula = match (self.planar, p == q) {
                (true, true) => "A*R^2/2".to_owned(),
                (true, false) => {
                    let id = self.slug_id(index, OWN[at]);
                    let symbol = symbol.with(&(index + 1).to_string());
                    let value = self.zero(
                        id,
                        symbol,
                        "Product of inertia of a full circle",
                        Dim::SECOND,
                    );
                    self.show(value);
                    self.run_values[index].insert(OWN[at].to_owned(), value);
                    continue;
                }
                (false, true) => format!("A*R^2/2*(1 - n_{a}^2)"),
                (false, false) => format!("-A*R^2/2*n_{a}*n_{b}"),
            };
            self.arc_step(index, OWN[at], symbol, says, &formula)?;
        }
        Ok(())
    }

    /// The components of a run's faying normal.
    pub(super) fn normal_values(&mut self, index: usize) {
        let normal = self.runs[index].normal;
        for axis in 0..3 {
            let name = format!("n_{}", AXES[axis]);
            if self.run_values[index].contains_key(&name) {
                continue;
            }
            let says = format!("Faying normal of run {}, {}", index + 1, AXES[axis]);
            self.direction_value(
                index,
                &name,
                Symbol::of("k", &[AXES[axis]]),
                says,
                normal[axis],
            );
        }
    }

    /// A direction of a run as a found value.
    pub(super) fn direction_value(
        &mut self,
        index: usize,
        name: &str,
        symbol: Symbol,
        says: String,
        value: f64,
    ) -> Value {
        let spec = self.runs[index].spec;
        let draft = Draft {
            id: self.slug_id(index, name),
            symbol: symbol.with(&(index + 1).to_string()),
            says,
            formula: "unit vector of the direction as given",
            origin: Origin::Input(self.joint.weld.runs[spec].place.clone()),
            dim: None,
        };
        let value = self.ledger.found(draft, value, Dim::NONE);
        self.run_values[index].insert(name.to_owned(), value);
        value
    }

    /// The axes of an arc's plane, for groups in space.
    pub(super) fn arc_axes(&mut self, index: usize) {
        let Segment::Arc { u, v, .. } = self.runs[index].path else {
            return;
        };
        for (letter, axis) in [("u", u), ("v", v)] {
            for component in 0..3 {
                let name = format!("{letter}_{}", AXES[component]);
                if !self.run_values[index].contains_key(&name) {
                    let says = format!("Axis {letter} of the arc’s plane, {}", AXES[component]);
                    let value = self.direction_value(
                        index,
                        &name,
                        Symbol::of(letter, &[AXES[component]]),
                        says,
                        axis[component],
                    );
                    self.show(value);
                }
            }
        }
    }

    /// An arc that does not close, in its own axes u and v, then in those of the joint.
    fn open_arc(&mut self, index: usize, forward: bool) -> Result<(), FormulaError> {
        let trimmed = self.is_trimmed();
        let cut = |sign: &str, end: &str| {
            if trimmed {
                format!(" {sign} (180 deg)*{end}/(pi*R)")
            } else {
                String::new()
            }
        };
        let (low, high) = if forward {
            (
                format!("theta_0{}", cut("+", "e_a")),
                format!("theta_0 + phi{}", cut("-", "e_b")),
            )
        } else {
            (
                format!("theta_0 + phi{}", cut("+", "e_b")),
                format!("theta_0{}", cut("-", "e_a")),
            )
        };
        let theta = |end: &str| Symbol::of("theta", &[end]);
        self.arc_step(
            index,
            "theta_a",
            theta("a"),
            "Lower limit of the effective arc",
            &low,
        )?;
        self.arc_step(
            index,
            "theta_b",
            theta("b"),
            "Upper limit of the effective arc",
            &high,
        )?;
        let length = if trimmed {
            "pi*R*abs(phi)/(180 deg) - e_a - e_b"
        } else {
            "pi*R*abs(phi)/(180 deg)"
        };
        self.arc_step(
            index,
            "L",
            Symbol::of("L", &[]),
            "Effective length of the arc",
            length,
        )?;
        self.arc_step(index, "A", Symbol::of("A", &[]), "Throat area", "t*L")?;
        // The half angle from the length: a difference of near angles would cost a short arc its digits.
        let half = Symbol::of("beta", &[]);
        self.arc_step(
            index,
            "beta",
            half,
            "Half of the angle of the arc",
            "(90 deg)*L/(pi*R)",
        )?;
        let middle = Symbol::of("mu", &[]);
        self.arc_step(
            index,
            "mu",
            middle,
            "Angle of its middle",
            "(theta_a + theta_b)/2",
        )?;
        let says = "Centroid from the centre, toward the middle of the arc";
        self.arc_step(
            index,
            "c_r",
            Symbol::of("c", &["r"]),
            says,
            "2*R^2*sin(beta)/L",
        )?;
        let along = "c_r*cos(mu)";
        let across = "c_r*sin(mu)";
        self.arc_step(
            index,
            "c_u",
            Symbol::of("c", &["u"]),
            "Centroid from the centre, toward 0°",
            along,
        )?;
        self.arc_step(
            index,
            "c_v",
            Symbol::of("c", &["v"]),
            "Centroid from the centre, toward 90°",
            across,
        )?;
        if !self.planar {
            self.arc_axes(index);
        }
        for axis in axes(self.planar) {
            let a = AXES[*axis];
            let formula = match (self.planar, axis) {
                (true, 0) => "x_0 + c_u".to_owned(),
                (true, _) => "y_0 + c_v".to_owned(),
                (false, _) => format!("{a}_0 + c_u*u_{a} + c_v*v_{a}"),
            };
            self.arc_step(
                index,
                &format!("{a}_m"),
                Symbol::of(a, &["m"]),
                &format!("Centroid of the arc, {a}"),
                &formula,
            )?;
        }
        self.own_moments(index)
    }

    fn own_moments(&mut self, index: usize) -> Result<(), FormulaError> {
        let q = |a: &str, b: &str| Symbol::of("Q", &[a, b]);
        let says = "Second moment about the arc’s own centroid, toward its middle";
        let radial = "t*R^3*(L/(2*R) + sin(beta)*cos(beta) - 4*R*sin(beta)^2/L)";
        let depth = self.arc_step(index, "Q_r", Symbol::of("Q", &["r"]), says, radial)?;
        // The depth of a flat arc: a difference of terms of the size A R², of which it keeps little.
        let of = |name: &str| self.ledger.get(self.run_values[index][name]).value;
        let size = of("A") * of("R") * of("R");
        self.ledger.raise_floor(depth, FLAT * size);
        let says = "Second moment about the arc’s own centroid, square to that";
        self.arc_step(
            index,
            "Q_t",
            Symbol::of("Q", &["t"]),
            says,
            "t*R^3*(L/(2*R) - sin(beta)*cos(beta))",
        )?;
        let width = self.ledger.get(self.run_values[index]["Q_t"]).value;
        let says = "Second moment about the arc’s own centroid";
        let uu = "Q_r*cos(mu)^2 + Q_t*sin(mu)^2".to_owned();
        let vv = "Q_r*sin(mu)^2 + Q_t*cos(mu)^2".to_owned();
        let uv = "(Q_r - Q_t)*sin(mu)*cos(mu)";
        if self.planar {
            // In the plane u is x and v is y: I_yy is the integral of x², I_xx that of y².
            for (at, formula) in [(0, vv.as_str()), (1, uu.as_str()), (2, uv)] {
                let symbol = Self::pair_symbol(self.pairs()[at].0).with("0");
                let says = format!("{says}, {}", &self.pairs()[at].0[2..]);
                let value = self.arc_step(index, OWN[at], symbol, &says, formula)?;
                self.ledger.raise_floor(value, FLAT * width);
            }
            return Ok(());
        }
        for (name, symbol, formula) in [
            ("Q_uu", q("u", "u"), uu.as_str()),
            ("Q_vv", q("v", "v"), vv.as_str()),
            ("Q_uv", q("u", "v"), uv),
        ] {
            let says = format!("{says}, {}", &name[2..]);
            let value = self.arc_step(index, name, symbol, &says, formula)?;
            self.ledger.raise_floor(value, FLAT * width);
        }
        for (at, (name, p, r)) in self.pairs().iter().enumerate() {
            let (a, b) = (AXES[*p], AXES[*r]);
            let formula = if p == r {
                format!("Q_uu*u_{a}^2 + Q_vv*v_{a}^2 + 2*Q_uv*u_{a}*v_{a}")
            } else {
                format!("Q_uu*u_{a}*u_{b} + Q_vv*v_{a}*v_{b} + Q_uv*(u_{a}*v_{b} + u_{b}*v_{a})")
            };
            self.arc_step(
                index,
                OWN[at],
                Self::pair_symbol(name).with("0"),
                &format!("{says}, {a}{b}"),
                &formula,
            )?;
        }
        Ok(())
    }
}
