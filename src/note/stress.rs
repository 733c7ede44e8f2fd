//! Stress at a point of a case, in steps: the scalar forms of method 4, sharing no code with the kernel.

use super::builder::Builder;
use super::calculation::Calculation;
use super::loads::CaseValues;
use super::margins::Site;
use super::points::{AXES, axes};
use crate::formula::{Bound, Draft, Env, FormulaError, Origin, Symbol, Value};
use crate::quantity::Dim;
use crate::solve::Regime;
use crate::weld::{Segment, ThroatRule, V3};
use std::collections::BTreeMap;
use std::f64::consts::FRAC_PI_2;

/// A point of a run in a case.
#[derive(Clone, Copy, PartialEq, Debug)]
pub(super) struct Spot {
    /// Index of the case.
    pub(super) case: usize,
    /// Index of the run.
    pub(super) run: usize,
    /// Parameter along the effective path.
    pub(super) p: f64,
    /// Side of the toe along n̂.
    pub(super) side: f64,
}

/// What the steps of one spot are written with: where they belong and the names they may use.
struct Sheet {
    tag: String,
    env: Env,
    /// What every symbol's index gains, to tell the stresses of a second bead from the first's.
    mark: &'static str,
}

impl Sheet {
    fn marked(&self, symbol: Symbol) -> Symbol {
        if self.mark.is_empty() {
            symbol
        } else {
            symbol.with(self.mark)
        }
    }
}

impl Builder<'_> {
    fn at(
        &mut self,
        sheet: &mut Sheet,
        name: &str,
        symbol: Symbol,
        says: &str,
        formula: &str,
        method: &str,
    ) -> Result<Value, FormulaError> {
        let draft = Draft {
            id: format!("{}.{}", sheet.tag, name.replace('_', "-").to_lowercase()),
            symbol: sheet.marked(symbol),
            says: says.to_owned(),
            formula,
            origin: Origin::Method(method.to_owned()),
            dim: None,
        };
        let value = self.ledger.step(draft, &sheet.env)?;
        self.show(value);
        sheet.env.bind(name, value);
        Ok(value)
    }

    fn find_at(
        &mut self,
        sheet: &mut Sheet,
        name: &str,
        symbol: Symbol,
        says: &str,
        method: &str,
        (value, dim): (f64, Dim),
    ) {
        let draft = Draft {
            id: format!("{}.{}", sheet.tag, name.replace('_', "-")),
            symbol: sheet.marked(symbol),
            says: says.to_owned(),
            formula: method,
            origin: Origin::Method("line method".to_owned()),
            dim: None,
        };
        let value = self.ledger.found(draft, value, dim);
        self.show(value);
        sheet.env.bind(name, value);
    }

    /// What a case needs once, whatever the point: the bending terms in the plane, θ in space.
    pub(super) fn case_terms(
        &mut self,
        tag: &str,
        case: usize,
        values: &CaseValues,
        regime: Regime,
    ) -> Result<Env, FormulaError> {
        let mut env = self.env.clone();
        for (axis, letter) in AXES.into_iter().enumerate() {
            env.bind(&format!("F_{letter}"), values.force[axis]);
            env.bind(&format!("M_{letter}"), values.about[axis]);
        }
        let mut sheet = Sheet {
            tag: tag.to_owned(),
            env,
            mark: if tag.ends_with("-twin") { "2" } else { "" },
        };
        match regime {
            Regime::Planar => {
                if self.bends(values) {
                    let determinant = match self.ledger.find("Delta") {
                        Some(known) => known,
                        None => {
                            let says = "Determinant of the second moments";
                            let symbol = Symbol::of("Delta", &[]);
                            self.step(symbol, says, "I_xx*I_yy - I_xy^2", "statics")?
                        }
                    };
                    sheet.env.bind("D", determinant);
                    let n = |axis| Symbol::of("N", &[axis]);
                    let says = "Numerator of the bending stress, the factor of y";
                    self.at(
                        &mut sheet,
                        "N_x",
                        n("x"),
                        says,
                        "M_x*I_yy + M_y*I_xy",
                        "line method",
                    )?;
                    let says = "Numerator of the bending stress, the factor of x";
                    self.at(
                        &mut sheet,
                        "N_y",
                        n("y"),
                        says,
                        "M_y*I_xx + M_x*I_xy",
                        "line method",
                    )?;
                }
            }
            Regime::Space => self.twist(&mut sheet, case)?,
            Regime::Collinear { u } => {
                for axis in 0..3 {
                    let symbol = Symbol::of("u", &[AXES[axis]]);
                    let says = format!("Direction of the line of the welds, {}", AXES[axis]);
                    let name = format!("u_{}", AXES[axis]);
                    self.find_at(
                        &mut sheet,
                        &name,
                        symbol,
                        &says,
                        "unit vector along the line",
                        (u[axis], Dim::NONE),
                    );
                }
                let line = if self.planar {
                    "J"
                } else {
                    "S_xx + S_yy + S_zz"
                };
                let says = "Second moment along the line of the welds";
                self.at(
                    &mut sheet,
                    "I_L",
                    Symbol::of("I", &["L"]),
                    says,
                    line,
                    "line method",
                )?;
            }
            Regime::Point => {}
        }
        Ok(sheet.env)
    }

    /// Whether a planar group bends out of its plane in a case.
    fn bends(&self, values: &CaseValues) -> bool {
        let moment = |axis: usize| {
            let entry = self.ledger.get(values.about[axis]);
            entry.value.abs() > self.ledger.floor(entry.dim)
        };
        moment(0) || moment(1)
    }

    /// θ from K θ = M, found, and the three lines that verify it.
    fn twist(&mut self, sheet: &mut Sheet, case: usize) -> Result<(), FormulaError> {
        let action = self.actions[case];
        let (_, moment) = action.about(self.properties.centroid);
        let from: Vec<Value> = [
            "K_xx", "K_yy", "K_zz", "K_xy", "K_yz", "K_zx", "M_x", "M_y", "M_z",
        ]
        .into_iter()
        .filter_map(|name| match sheet.env.names.get(name) {
            Some(Bound::Value(value)) => Some(*value),
            Some(Bound::Word(_)) | None => None,
        })
        .collect();
        let theta = self
            .properties
            .tensor
            .try_inverse()
            .map_or_else(crate::weld::V3::zeros, |inverse| inverse * moment);
        for axis in 0..3 {
            let symbol = Symbol::of("theta", &[AXES[axis]]);
            let says = format!(
                "Twist of the stress field about {}: the solution of Kθ = M",
                AXES[axis]
            );
            let name = format!("theta_{}", AXES[axis]);
            let dim = Dim::STRESS.over(Dim::LENGTH);
            self.find_at(
                sheet,
                &name,
                symbol,
                &says,
                "verified by the three lines that follow these",
                (theta[axis], dim),
            );
            if let Some(Bound::Value(found)) = sheet.env.names.get(&name) {
                self.ledger.get_mut(*found).rests_on.clone_from(&from);
            }
        }
        for (axis, formula) in [
            "K_xx*theta_x + K_xy*theta_y + K_zx*theta_z",
            "K_xy*theta_x + K_yy*theta_y + K_yz*theta_z",
            "K_zx*theta_x + K_yz*theta_y + K_zz*theta_z",
        ]
        .into_iter()
        .enumerate()
        {
            let a = AXES[axis];
            let says = format!("Verification: Kθ returns the moment about {a}");
            let returned = self.at(
                sheet,
                &format!("M_{a}K"),
                Symbol::of("M", &[a, "K"]),
                &says,
                formula,
                "line method",
            )?;
            if let Some(Bound::Value(wanted)) = sheet.env.names.get(&format!("M_{a}")) {
                self.ledger.get_mut(returned).rests_on = vec![*wanted];
            }
        }
        Ok(())
    }

    /// The position of a spot: `x`, `y`, `z` bound in the sheet.
    fn position(&mut self, sheet: &mut Sheet, spot: Spot) -> Result<(), FormulaError> {
        let run = self.runs[spot.run].clone();
        match &run.path {
            Segment::Straight { .. } => {
                let told_end = (spot.p <= 0.0 && run.path.point(0.0) == run.told.point(0.0))
                    || (spot.p >= 1.0 && run.path.point(1.0) == run.told.point(1.0));
                if told_end {
                    let at = run.path.point(spot.p);
                    let values = self
                        .point_at(at)
                        .expect("every told end has a point")
                        .values;
                    for axis in 0..3 {
                        sheet.env.bind(AXES[axis], values[axis]);
                    }
                    return Ok(());
                }
                let trimmed = self.is_trimmed();
                let from = match (spot.p <= 0.0, spot.p >= 1.0, trimmed) {
                    (true, _, _) => "e_a".to_owned(),
                    (_, true, true) => "(e_a + L)".to_owned(),
                    (_, true, false) => "L".to_owned(),
                    (false, false, _) => {
                        let length = run.path.length();
                        let says =
                            "Distance of the governing point from the effective start of the run";
                        let method = "found by search along the run";
                        self.find_at(
                            sheet,
                            "s",
                            Symbol::of("s", &[]),
                            says,
                            method,
                            (spot.p * length, Dim::LENGTH),
                        );
                        if trimmed {
                            "(e_a + s)".to_owned()
                        } else {
                            "s".to_owned()
                        }
                    }
                };
                let length = if trimmed { "L_0" } else { "L" };
                for axis in axes(self.planar) {
                    let a = AXES[*axis];
                    let formula = format!("{a}_a + d_{a}*{from}/{length}");
                    self.at(
                        sheet,
                        a,
                        Symbol::of(a, &[]),
                        &format!("Position of the point on the run, {a}"),
                        &formula,
                        "geometry",
                    )?;
                }
                Ok(())
            }
            Segment::Arc { from, sweep, .. } => {
                let theta = from + spot.p * sweep;
                let method = if spot.p <= 0.0 || spot.p >= 1.0 {
                    "at the end of the arc"
                } else {
                    "found by search along the arc"
                };
                let says = "Angle of the point on the arc";
                self.find_at(
                    sheet,
                    "theta",
                    Symbol::of("theta", &[]),
                    says,
                    method,
                    (theta, Dim::ANGLE),
                );
                if !self.planar {
                    self.arc_axes(spot.run);
                    for (name, value) in self.run_values[spot.run].clone() {
                        sheet.env.bind(&name, value);
                    }
                }
                for axis in axes(self.planar) {
                    let a = AXES[*axis];
                    let formula = match (self.planar, axis) {
                        (true, 0) => "x_0 + R*cos(theta)".to_owned(),
                        (true, _) => "y_0 + R*sin(theta)".to_owned(),
                        (false, _) => format!("{a}_0 + R*cos(theta)*u_{a} + R*sin(theta)*v_{a}"),
                    };
                    self.at(
                        sheet,
                        a,
                        Symbol::of(a, &[]),
                        &format!("Position of the point on the arc, {a}"),
                        &formula,
                        "geometry",
                    )?;
                }
                Ok(())
            }
        }
    }

    /// f_x, f_y, f_z and the resultant f at the spot.
    fn components(
        &mut self,
        sheet: &mut Sheet,
        values: &CaseValues,
        regime: Regime,
    ) -> Result<(), FormulaError> {
        let bends = self.bends(values);
        let formulas: [String; 3] = match regime {
            Regime::Planar => [
                "F_x/A_w - M_z*(y - y_c)/J".to_owned(),
                "F_y/A_w + M_z*(x - x_c)/J".to_owned(),
                if bends {
                    "F_z/A_w + (N_x*(y - y_c) - N_y*(x - x_c))/D".to_owned()
                } else {
                    "F_z/A_w".to_owned()
                },
            ],
            Regime::Space => [
                "F_x/A_w + theta_y*(z - z_c) - theta_z*(y - y_c)".to_owned(),
                "F_y/A_w + theta_z*(x - x_c) - theta_x*(z - z_c)".to_owned(),
                "F_z/A_w + theta_x*(y - y_c) - theta_y*(x - x_c)".to_owned(),
            ],
            Regime::Collinear { .. } => {
                let terms: Vec<String> = axes(self.planar)
                    .iter()
                    .map(|axis| format!("({0} - {0}_c)*u_{0}", AXES[*axis]))
                    .collect();
                let says = "Distance of the point from the centroid along the line";
                self.at(
                    sheet,
                    "s",
                    Symbol::of("s", &[]),
                    says,
                    &terms.join(" + "),
                    "geometry",
                )?;
                [
                    "F_x/A_w + (M_y*u_z - M_z*u_y)*s/I_L".to_owned(),
                    "F_y/A_w + (M_z*u_x - M_x*u_z)*s/I_L".to_owned(),
                    "F_z/A_w + (M_x*u_y - M_y*u_x)*s/I_L".to_owned(),
                ]
            }
            Regime::Point => AXES.map(|axis| format!("F_{axis}/A_w")),
        };
        for axis in 0..3 {
            let a = AXES[axis];
            let says = match (axis, regime) {
                (2, Regime::Planar) if bends => {
                    "Stress out of the plane, from the direct force and both bending moments"
                }
                (2, Regime::Planar) => "Stress out of the plane, from the direct force",
                (_, Regime::Planar) => {
                    "Stress along the axis, from the direct force and the torsion"
                }
                _ => "Stress along the axis, from the direct force and the moments",
            };
            let says = says.replace("the axis", a);
            self.at(
                sheet,
                &format!("f_{a}"),
                Symbol::of("f", &["w", a]),
                &says,
                &formulas[axis],
                "line method",
            )?;
        }
        let says = "Resultant stress on the throat area";
        self.at(
            sheet,
            "f",
            Symbol::of("f", &["w"]),
            says,
            "sqrt(f_x^2 + f_y^2 + f_z^2)",
            "line method",
        )?;
        Ok(())
    }

    /// Tangent t̂ of the run and, in space, n̂ = ẑ × t̂.
    fn directions(&mut self, sheet: &mut Sheet, spot: Spot) -> Result<(), FormulaError> {
        let run = self.runs[spot.run].clone();
        let length = if self.is_trimmed() { "L_0" } else { "L" };
        for axis in axes(self.planar) {
            let a = AXES[*axis];
            let formula = match &run.path {
                Segment::Straight { .. } => format!("d_{a}/{length}"),
                Segment::Arc { sweep, .. } => {
                    let (minus, plus) = if *sweep < 0.0 { ("", "-") } else { ("-", "") };
                    match (self.planar, axis) {
                        (true, 0) => format!("{minus}sin(theta)"),
                        (true, _) => format!("{plus}cos(theta)"),
                        (false, _) if *sweep < 0.0 => {
                            format!("sin(theta)*u_{a} - cos(theta)*v_{a}")
                        }
                        (false, _) => format!("cos(theta)*v_{a} - sin(theta)*u_{a}"),
                    }
                }
            };
            let says = format!("Direction of the run at the point, {a}");
            self.at(
                sheet,
                &format!("t_{a}"),
                Symbol::of("ell", &[a]),
                &says,
                &formula,
                "geometry",
            )?;
        }
        if !self.planar {
            self.normal_values(spot.run);
            for (name, value) in self.run_values[spot.run].clone() {
                sheet.env.bind(&name, value);
            }
            for axis in 0..3 {
                let [a, b, c] = [AXES[axis], AXES[(axis + 1) % 3], AXES[(axis + 2) % 3]];
                let says = format!("Direction across the run, {a}");
                let formula = format!("n_{b}*t_{c} - n_{c}*t_{b}");
                self.at(
                    sheet,
                    &format!("m_{a}"),
                    Symbol::of("n", &[a]),
                    &says,
                    &formula,
                    "geometry",
                )?;
            }
        }
        Ok(())
    }

    /// Components along, across and out of the run's plane.
    fn local_components(&mut self, sheet: &mut Sheet, spot: Spot) -> Result<(), FormulaError> {
        self.directions(sheet, spot)?;
        let dot = |v: &str, planar: bool| {
            let terms: Vec<String> = axes(planar)
                .iter()
                .map(|axis| format!("f_{0}*{v}_{0}", AXES[*axis]))
                .collect();
            terms.join(" + ")
        };
        let f = |part: &str| Symbol::of("f", &[part]);
        self.at(
            sheet,
            "f_par",
            f("par"),
            "Stress along the run",
            &dot("t", self.planar),
            "line method",
        )?;
        if self.planar {
            self.at(
                sheet,
                "f_n",
                f("n"),
                "Stress across the run, in the faying plane",
                "f_y*t_x - f_x*t_y",
                "line method",
            )?;
            let out = match sheet.env.names.get("f_z") {
                Some(bound) => bound.clone(),
                None => unreachable!("the components were worked before"),
            };
            sheet.env.names.insert("f_out".to_owned(), out);
        } else {
            let says = "Stress across the run, in its faying plane";
            self.at(sheet, "f_n", f("n"), says, &dot("m", false), "line method")?;
            let says = "Stress out of the run’s faying plane";
            self.at(
                sheet,
                "f_out",
                f("out"),
                says,
                &dot("n", false),
                "line method",
            )?;
        }
        Ok(())
    }

    /// σ⊥, τ⊥ and τ∥ on the throat plane.
    fn on_throat(&mut self, sheet: &mut Sheet, spot: Spot) -> Result<(), FormulaError> {
        let run = &self.runs[spot.run];
        let (plus, minus) = if spot.side < 0.0 {
            ("-", "+")
        } else {
            ("+", "-")
        };
        let negative = if spot.side < 0.0 { "-" } else { "" };
        let square = (run.angle - FRAC_PI_2).abs() < 1e-9;
        let (sigma, tau) = match &run.rule {
            ThroatRule::Complete { .. } => ("f_out".to_owned(), format!("{negative}f_n")),
            ThroatRule::UnequalLegs { .. } => {
                let root = "sqrt(leg_base^2 + leg_attached^2)";
                let first = if negative.is_empty() {
                    "leg_attached*f_n"
                } else {
                    "-leg_attached*f_n"
                };
                (
                    format!("(leg_attached*f_out {minus} leg_base*f_n)/{root}"),
                    format!("({first} + leg_base*f_out)/{root}"),
                )
            }
            _ if square => (
                format!("(f_out {minus} f_n)/sqrt(2)"),
                format!("(f_out {plus} f_n)/sqrt(2)"),
            ),
            _ => (
                format!("f_out*cos(psi/2) {minus} f_n*sin(psi/2)"),
                format!("f_out*sin(psi/2) {plus} f_n*cos(psi/2)"),
            ),
        };
        let told = if run.toe.is_some() {
            ""
        } else {
            "; side of the toe not stated, the worse of both"
        };
        let says = format!("Normal stress on the throat plane, tension positive{told}");
        self.at(
            sheet,
            "sigma_perp",
            Symbol::of("sigma", &["perp"]),
            &says,
            &sigma,
            "line method",
        )?;
        let says = "Shear stress on the throat plane, square to the run";
        self.at(
            sheet,
            "tau_perp",
            Symbol::of("tau", &["perp"]),
            says,
            &tau,
            "line method",
        )?;
        let says = "Shear stress on the throat plane, along the run";
        self.at(
            sheet,
            "tau_par",
            Symbol::of("tau", &["par"]),
            says,
            "f_par",
            "line method",
        )?;
        Ok(())
    }

    /// Works a spot: the stresses that `wanted` names, bound under `point_…` and `run_…`.
    pub(super) fn work_spot(
        &mut self,
        tag: &str,
        spot: Spot,
        values: &CaseValues,
        case_env: &Env,
        regime: Regime,
        wanted: &dyn Fn(&str) -> bool,
    ) -> Result<Env, FormulaError> {
        let mut env = case_env.clone();
        for (name, value) in &self.run_values[spot.run] {
            env.bind(name, *value);
        }
        let mut sheet = Sheet {
            tag: tag.to_owned(),
            env,
            mark: if tag.ends_with("-twin") { "2" } else { "" },
        };
        self.position(&mut sheet, spot)?;
        // In the plane every point has the height of the centroid.
        if let Some(height) = sheet.env.names.get("z_c").cloned() {
            sheet.env.names.entry("z".to_owned()).or_insert(height);
        }
        self.components(&mut sheet, values, regime)?;
        let on_throat = ["point_sigma_perp", "point_tau_perp", "point_tau_par"]
            .iter()
            .any(|name| wanted(name));
        let local = on_throat
            || ["point_f_par", "point_f_n", "point_f_z", "point_sin_phi"]
                .iter()
                .any(|name| wanted(name));
        if local {
            self.local_components(&mut sheet, spot)?;
        }
        if on_throat {
            self.on_throat(&mut sheet, spot)?;
        }
        if wanted("point_sin_phi") {
            let says = "Sine of the angle between the stress and the run";
            let formula = "sqrt(f_n^2 + f_out^2)/f";
            self.at(
                &mut sheet,
                "sin_phi",
                Symbol::of("s", &["phi"]),
                says,
                formula,
                "line method",
            )?;
        }
        if wanted("point_q") {
            self.at(
                &mut sheet,
                "q",
                Symbol::of("q", &[]),
                "Line load of the bead",
                "t*f",
                "line method",
            )?;
        }
        Ok(self.for_sheets(&sheet.env))
    }

    /// The line load on a plate, where two beads share it.
    pub(super) fn plate_load(
        &mut self,
        tag: &str,
        env: &mut Env,
        twin: Option<(usize, Option<[Value; 3]>)>,
        run: usize,
    ) -> Result<(), FormulaError> {
        let mut inner = env.clone();
        inner.bind("t", self.run_values[run]["t"]);
        if let Some(resultant) = env.names.get("point_f").cloned() {
            inner.names.insert("f".to_owned(), resultant);
        }
        let mut sheet = Sheet {
            tag: tag.to_owned(),
            env: inner,
            mark: if tag.ends_with("-twin") { "2" } else { "" },
        };
        let q = Symbol::of("q", &["p"]);
        match twin {
            None => {
                self.at(
                    &mut sheet,
                    "q_plate",
                    q,
                    "Line load on the plate, of this bead alone",
                    "t*f",
                    "statics",
                )?;
            }
            Some((other, None)) => {
                sheet.env.bind("t_2", self.run_values[other]["t"]);
                let says = "Line load on the plate, of both beads at this place";
                self.at(&mut sheet, "q_plate", q, says, "(t + t_2)*f", "statics")?;
            }
            Some((other, Some(stress))) => {
                sheet.env.bind("t_2", self.run_values[other]["t"]);
                for axis in 0..3 {
                    let a = AXES[axis];
                    sheet.env.bind(&format!("g_{a}"), stress[axis]);
                    let says = format!("Line load of both beads, {a}");
                    let formula = format!("t*f_{a} + t_2*g_{a}");
                    self.at(
                        &mut sheet,
                        &format!("q_{a}"),
                        Symbol::of("q", &[a]),
                        &says,
                        &formula,
                        "statics",
                    )?;
                }
                let says = "Line load on the plate, of both beads";
                self.at(
                    &mut sheet,
                    "q_plate",
                    q,
                    says,
                    "sqrt(q_x^2 + q_y^2 + q_z^2)",
                    "statics",
                )?;
            }
        }
        if let Some(value) = sheet.env.names.get("q_plate") {
            env.names.insert("point_q_plate".to_owned(), value.clone());
        }
        Ok(())
    }

    /// The names of a spot as clause sheets read them.
    fn for_sheets(&self, env: &Env) -> Env {
        const NAMES: [(&str, &str); 17] = [
            ("f", "point_f"),
            ("f_par", "point_f_par"),
            ("f_n", "point_f_n"),
            ("f_out", "point_f_z"),
            ("sigma_perp", "point_sigma_perp"),
            ("tau_perp", "point_tau_perp"),
            ("tau_par", "point_tau_par"),
            ("sin_phi", "point_sin_phi"),
            ("q", "point_q"),
            ("f_x", "f_x"),
            ("f_y", "f_y"),
            ("f_z", "f_z"),
            ("t", "run_throat"),
            ("L", "run_effective_length"),
            ("leg_base", "run_leg_base"),
            ("leg_attached", "run_leg_attached"),
            ("psi", "run_angle"),
        ];
        let mut out = Env::default();
        if env.names.get("leg_base") == env.names.get("leg_attached")
            && let Some(leg) = env.names.get("leg_base")
        {
            out.names.insert("run_leg".to_owned(), leg.clone());
        }
        for (from, to) in NAMES {
            if let Some(bound) = env.names.get(from) {
                out.names.insert(to.to_owned(), bound.clone());
            }
        }
        out
    }

    /// The stress by the printed formulas of a site at another place of the group.
    pub(super) fn stress_elsewhere(&self, calculation: &Calculation<'_>, site: &Site, r: V3) -> V3 {
        let mut others = vec![("x", r.x), ("y", r.y), ("z", r.z)];
        if let Regime::Collinear { u } = calculation.resistance.class.regime {
            others.push(("s", (r - calculation.properties.centroid).dot(&u)));
        }
        let part = |value: Value| self.ledger.value_at(value, &others).unwrap_or(f64::NAN);
        V3::from(site.stress.map(part))
    }

    /// The spots' stresses by name, for reuse by another bead.
    pub(super) fn stress_values(env: &Env) -> Option<[Value; 3]> {
        let of = |name: &str| match env.names.get(name) {
            Some(crate::formula::Bound::Value(value)) => Some(*value),
            Some(crate::formula::Bound::Word(_)) | None => None,
        };
        Some([of("f_x")?, of("f_y")?, of("f_z")?])
    }
}

/// Values of one case, worked once however many spots it has.
pub(super) type CaseTerms = BTreeMap<usize, (CaseValues, Env)>;
