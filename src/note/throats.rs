//! Steps from sizes as told to effective throats: one step for each size, not for each run.

use super::builder::Builder;
use crate::formula::{Bound, Draft, Env, FormulaError, Origin, Symbol, Value};
use crate::joint::{RunSpec, SizeSpec};
use crate::quantity::{Dim, Given};
use crate::source::Told;
use crate::weld::{Run, ThroatRule};
use std::collections::BTreeSet;
use std::f64::consts::FRAC_PI_2;

/// Letters that tell the sizes of a note apart.
const LETTERS: &[u8] = b"abcdefghijklmnopqrstuvw";

/// A size worked out: its throat, its legs on base and attached part, the angle if it is skewed.
#[derive(Clone)]
struct Size {
    throat: Value,
    legs: Vec<Value>,
    angle: Option<Value>,
}

impl Builder<'_> {
    /// Works out each distinct size, shows it, and gives every run its throat `t` and legs.
    pub(super) fn throats(&mut self) -> Result<(), FormulaError> {
        let mut sizes: Vec<(String, Size)> = Vec::new();
        let keys: Vec<String> = self.runs.iter().map(|run| self.size_key(run)).collect();
        let distinct: BTreeSet<&String> = keys.iter().collect();
        let lettered = distinct.len() > 1;
        for (index, key) in keys.iter().enumerate() {
            let known = sizes
                .iter()
                .find(|(known, _)| known == key)
                .map(|(_, size)| size.clone());
            let size = match known {
                Some(known) => known,
                None => {
                    let letter = LETTERS.get(sizes.len()).copied().unwrap_or(b'z') as char;
                    let letter = if lettered {
                        letter.to_string()
                    } else {
                        String::new()
                    };
                    let run = &self.runs[index];
                    let size = self.size(&self.joint.weld.runs[run.spec], run, &letter)?;
                    sizes.push((key.clone(), size.clone()));
                    size
                }
            };
            self.run_values[index].insert("t".to_owned(), size.throat);
            for (name, leg) in ["leg_base", "leg_attached"].iter().zip(&size.legs) {
                self.run_values[index].insert((*name).to_owned(), *leg);
            }
            if let Some(angle) = size.angle {
                self.run_values[index].insert("psi".to_owned(), angle);
            }
        }
        Ok(())
    }

    /// What tells the sizes of runs apart: the rule, and legs that are told beside a throat.
    fn size_key(&self, run: &Run) -> String {
        let leg = match &self.joint.weld.runs[run.spec].size {
            SizeSpec::Throat { leg: Some(leg), .. } => leg.value.value,
            SizeSpec::Throat { leg: None, .. }
            | SizeSpec::Fillet { .. }
            | SizeSpec::Unequal { .. }
            | SizeSpec::Partial { .. }
            | SizeSpec::Complete { .. } => 0.0,
        };
        format!("{:?} {:?} {leg:?}", run.rule, run.angle)
    }

    fn length_of(&mut self, base: &str, letter: &str, says: &str, given: &Told<Given>) -> Value {
        self.length_at(lettered(base, letter), says, given)
    }

    /// A length as told, with its symbol.
    fn length_at(&mut self, symbol: Symbol, says: &str, given: &Told<Given>) -> Value {
        let id = format!("size.{}", symbol.plain().to_lowercase().replace('_', "-"));
        let value = self.input(
            id,
            symbol,
            says,
            &given.value,
            Origin::Input(given.place.clone()),
        );
        self.show(value);
        value
    }

    /// The throat of one size and the legs on base and attached part.
    fn size(&mut self, spec: &RunSpec, run: &Run, letter: &str) -> Result<Size, FormulaError> {
        let rule = &run.rule;
        let mut env = Env::default();
        let mut formula;
        let mut says = "Effective throat".to_owned();
        let mut legs = Vec::new();
        match (&spec.size, rule) {
            (SizeSpec::Fillet { leg, .. }, ThroatRule::EqualLegs { angle, gap, .. }) => {
                let h = self.length_of("h", letter, "Leg of the fillet, along both faces", leg);
                env.bind("h", h);
                legs = vec![h, h];
                let leg = self.worked_leg(spec, *gap, letter, &mut env, "h");
                if (angle - FRAC_PI_2).abs() < 1e-12 {
                    says.push_str(", equal legs at a right angle");
                    formula = format!("{leg}/sqrt(2)");
                } else {
                    self.angle(spec, run, letter, &mut env)?;
                    says.push_str(", equal legs along faces at the angle between them");
                    formula = format!("{leg}*cos(psi/2)");
                }
            }
            (SizeSpec::Fillet { leg, .. }, ThroatRule::SquareLegs { gap, .. }) => {
                let h = self.length_of("W", letter, "Leg of the fillet, square to the face", leg);
                env.bind("W", h);
                legs = vec![h, h];
                let leg = self.worked_leg(spec, *gap, letter, &mut env, "W");
                self.angle(spec, run, letter, &mut env)?;
                says.push_str(", legs measured square to the faces");
                formula = format!("{leg}/(2*sin(psi/2))");
            }
            (
                SizeSpec::Unequal {
                    on_base,
                    on_attached,
                },
                ThroatRule::UnequalLegs { gap, .. },
            ) => {
                // Indices of the parts: 1 attached, 2 base.
                let symbol = |part: &str| lettered("h", letter).with(part);
                let base = self.length_at(symbol("2"), "Leg on the base part", on_base);
                let attached = self.length_at(symbol("1"), "Leg on the attached part", on_attached);
                env.bind("h_1", attached);
                env.bind("h_2", base);
                legs = vec![base, attached];
                let one = self.worked_leg(spec, *gap, letter, &mut env, "h_1");
                let two = self.worked_leg(spec, *gap, letter, &mut env, "h_2");
                says.push_str(", unequal legs at a right angle");
                formula = format!("{one}*{two}/sqrt({one}^2 + {two}^2)");
            }
            (SizeSpec::Throat { throat, leg }, _) => {
                let t = self.length_of("t", letter, "Effective throat as stated", throat);
                if let Some(leg) = leg {
                    let h = self.length_of("h", letter, "Leg of the fillet as stated", leg);
                    legs = vec![h, h];
                }
                return self.stated_size(spec, run, letter, t, legs);
            }
            (SizeSpec::Partial { throat }, _) => {
                let says = "Effective throat of the partial penetration weld as stated";
                let t = self.length_of("t", letter, says, throat);
                return self.stated_size(spec, run, letter, t, legs);
            }
            (_, ThroatRule::Complete { part, .. }) => {
                let thickness = self.joint.parts[*part].thickness.clone();
                let thickness =
                    thickness.expect("complete penetration was laid out from this thickness");
                let says = format!(
                    "Complete penetration: thickness of {}",
                    self.joint.parts[*part].name.value
                );
                let t = self.length_of("t", letter, &says, &thickness);
                return Ok(Size {
                    throat: t,
                    legs,
                    angle: None,
                });
            }
            _ => unreachable!("a rule follows from its size"),
        }
        if let Some((extra, record)) = &spec.penetration {
            let says = format!("Deep-penetration allowance, qualified by {}", record.value);
            let e = self.length_of("e", letter, &says, extra);
            env.bind("e", e);
            formula.push_str(" + e");
        }
        let symbol = lettered("t", letter);
        let id = format!("size.{}", symbol.plain().replace('_', "-"));
        let name = symbol.plain();
        let value = self.make(&name, geometry(id, symbol, says, &formula), &env)?;
        self.show(value);
        let angle = match env.names.get("psi") {
            Some(Bound::Value(angle)) => Some(*angle),
            Some(Bound::Word(_)) | None => None,
        };
        Ok(Size {
            throat: value,
            legs,
            angle,
        })
    }

    /// A size whose throat is stated: its throat plane still halves the angle between the faces.
    fn stated_size(
        &mut self,
        spec: &RunSpec,
        run: &Run,
        letter: &str,
        throat: Value,
        legs: Vec<Value>,
    ) -> Result<Size, FormulaError> {
        let mut env = Env::default();
        if (run.angle - FRAC_PI_2).abs() > 1e-9 {
            self.angle(spec, run, letter, &mut env)?;
        }
        let angle = match env.names.get("psi") {
            Some(Bound::Value(angle)) => Some(*angle),
            Some(Bound::Word(_)) | None => None,
        };
        Ok(Size {
            throat,
            legs,
            angle,
        })
    }

    /// The angle between the faces.
    fn angle(
        &mut self,
        spec: &RunSpec,
        run: &Run,
        letter: &str,
        env: &mut Env,
    ) -> Result<(), FormulaError> {
        let says = "Dihedral angle between the faces";
        let id = |symbol: &Symbol| format!("size.{}", symbol.plain().replace('_', "-"));
        let symbol = lettered("psi", letter);
        let Some(given) = &spec.between else {
            let given = Given::stated("90", FRAC_PI_2, Dim::ANGLE);
            let origin = Origin::Method("not given: a right angle".to_owned());
            let value = self.input(id(&symbol), symbol, says, &given, origin);
            self.show(value);
            env.bind("psi", value);
            return Ok(());
        };
        let origin = Origin::Input(given.place.clone());
        if (given.value.value - run.angle).abs() < 1e-9 {
            let value = self.input(id(&symbol), symbol, says, &given.value, origin);
            self.show(value);
            env.bind("psi", value);
            return Ok(());
        }
        // The bead on the far side of the plate fills the supplement of the angle that is told.
        let near = lettered("psi", letter).with("0");
        let told = self.input(
            id(&near),
            near,
            "Dihedral angle on the near side",
            &given.value,
            origin,
        );
        self.show(told);
        let mut inner = Env::default();
        inner.bind("psi_0", told);
        let says = "Dihedral angle on the far side of the plate".to_owned();
        let name = symbol.plain();
        let id = id(&symbol);
        let value = self.make(&name, geometry(id, symbol, says, "180 deg - psi_0"), &inner)?;
        self.show(value);
        env.bind("psi", value);
        Ok(())
    }

    /// The leg as a formula reads it: less the root gap where the gap exceeds the free one.
    fn worked_leg(
        &mut self,
        spec: &RunSpec,
        gap: f64,
        letter: &str,
        env: &mut Env,
        leg: &str,
    ) -> String {
        match (&spec.gap, gap > 0.0) {
            (Some(given), true) => {
                if !env.names.contains_key("g") {
                    let says = "Root gap over 1/16 in: taken off the leg in full";
                    let value = self.length_of("g", letter, says, given);
                    let mark =
                        "fit-up rule for root gaps (AWS D1.1) recalled from memory".to_owned();
                    self.ledger.get_mut(value).mark = Some(mark);
                    env.bind("g", value);
                }
                format!("({leg} - g)")
            }
            _ => leg.to_owned(),
        }
    }
}

/// A symbol with the letter of its size, if the note has several sizes.
fn lettered(base: &str, letter: &str) -> Symbol {
    if letter.is_empty() {
        Symbol::of(base, &[])
    } else {
        Symbol::of(base, &[letter])
    }
}

/// A step of geometry.
fn geometry(id: String, symbol: Symbol, says: String, formula: &str) -> Draft<'_> {
    let origin = Origin::Method("geometry".to_owned());
    Draft {
        id,
        symbol,
        says,
        formula,
        origin,
        dim: None,
    }
}
