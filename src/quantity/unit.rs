//! Unit texts on input: `kN m`, `lbf·ft`, `N/mm²`, `5 %`; their dimension and exact conversion.

use super::{Dim, UnitSet};
use thiserror::Error;

/// One exact factor of a conversion, raised to a whole power.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct Factor {
    /// The exact number.
    pub number: f64,
    /// Its power, never 0.
    pub power: i32,
}

/// The exact factor from a typed unit to the printing set, as a product of powers of exact numbers.
#[derive(Clone, PartialEq, Debug, Default)]
pub struct Conversion {
    /// The factors in print order; empty if the typed unit is the set's own.
    pub factors: Vec<Factor>,
}

impl Conversion {
    /// The factor as a number.
    #[must_use]
    pub fn value(&self) -> f64 {
        self.factors.iter().fold(1.0, |product, factor| {
            let times = |n: u32| (0..n).fold(1.0, |p, _| p * factor.number);
            let whole = times(factor.power.unsigned_abs());
            if factor.power < 0 {
                product / whole
            } else {
                product * whole
            }
        })
    }
}

/// A unit as typed: its dimension, and what its force and length parts are in N and mm.
#[derive(Clone, PartialEq, Debug)]
pub struct Unit {
    /// Dimension of the unit.
    pub dim: Dim,
    parts: Vec<Part>,
}

/// A base unit raised to a whole power.
#[derive(Clone, Copy, PartialEq, Debug)]
struct Part {
    base: Base,
    power: i32,
}

/// What one atom of a unit text stands for.
#[derive(Clone, Copy, PartialEq, Debug)]
enum Base {
    /// Force: its size in N.
    Force(f64),
    /// Length: its size in mm.
    Length(f64),
    /// Angle: degree (true) or radian.
    Angle(bool),
    /// A bare ratio: one hundredth for percent.
    Percent,
}

/// Why a unit text is refused.
#[derive(Clone, PartialEq, Debug, Error)]
pub enum UnitError {
    /// A name that is no unit.
    #[error("`{0}` is not a unit")]
    Unknown(String),
    /// A mass where a force is meant.
    #[error("`{0}` is a mass")]
    Mass(String),
    /// A text that does not parse.
    #[error("`{0}` cannot be read as a unit")]
    Malformed(String),
}

/// One lbf in N, exact (international pound 0.453 592 37 kg times standard gravity 9.806 65 m/s²).
pub(super) const LBF: f64 = 4.448_221_615_260_5;
/// One inch in mm, exact (international yard, 1959).
pub(super) const INCH: f64 = 25.4;
/// One kgf in N, exact (standard gravity, 3rd CGPM 1901).
const KGF: f64 = 9.806_65;

/// Names that a unit is usually written with.
const USUAL: [&str; 20] = [
    "N", "kN", "MN", "kgf", "lbf", "kip", "mm", "cm", "m", "in", "ft", "Pa", "kPa", "MPa", "GPa",
    "psi", "ksi", "deg", "rad", "daN",
];

/// The unit that a name was most likely meant for: the same but for case or a plural `s`, or its word.
#[must_use]
pub fn near_unit(name: &str) -> Option<&'static str> {
    let low = name.to_lowercase();
    let words = [
        ("inches", "in"),
        ("feet", "ft"),
        ("degrees", "deg"),
        ("newton", "N"),
        ("°", "deg"),
        ("pounds", "lbf"),
        ("lbs", "lbf"),
        ("lb", "lbf"),
    ];
    let word = words
        .into_iter()
        .find(|(word, _)| *word == low)
        .map(|(_, unit)| unit);
    let bare = low.strip_suffix('s').unwrap_or(&low);
    word.or_else(|| {
        let like = |unit: &&&str| unit.to_lowercase() == low || unit.to_lowercase() == bare;
        USUAL.iter().find(like).copied()
    })
}

/// Names of atoms: text, and the bases it stands for with their powers.
fn atom(name: &str) -> Option<Vec<Part>> {
    let force = |newton: f64| {
        vec![Part {
            base: Base::Force(newton),
            power: 1,
        }]
    };
    let length = |mm: f64| {
        vec![Part {
            base: Base::Length(mm),
            power: 1,
        }]
    };
    let force_by_length = |newton: f64, mm: f64, power| {
        vec![
            Part {
                base: Base::Force(newton),
                power: 1,
            },
            Part {
                base: Base::Length(mm),
                power,
            },
        ]
    };
    let stress = |newton, mm| force_by_length(newton, mm, -2);
    let moment = |newton, mm| force_by_length(newton, mm, 1);
    Some(match name {
        "N" => force(1.0),
        "daN" => force(10.0),
        "kN" => force(1e3),
        "MN" => force(1e6),
        "kgf" => force(KGF),
        "lbf" => force(LBF),
        "kip" | "kips" => force(LBF * 1000.0),
        "mm" => length(1.0),
        "cm" => length(10.0),
        "m" => length(1e3),
        "in" | "inch" => length(INCH),
        "ft" => length(INCH * 12.0),
        "Pa" => stress(1.0, 1e3),
        "kPa" => stress(1e3, 1e3),
        "MPa" => stress(1.0, 1.0),
        "GPa" => stress(1e3, 1.0),
        "psi" => stress(LBF, INCH),
        "ksi" => stress(LBF * 1000.0, INCH),
        "Nm" => moment(1.0, 1e3),
        "kNm" => moment(1e3, 1e3),
        "Nmm" => moment(1.0, 1.0),
        "deg" | "°" => vec![Part {
            base: Base::Angle(true),
            power: 1,
        }],
        "rad" => vec![Part {
            base: Base::Angle(false),
            power: 1,
        }],
        "%" => vec![Part {
            base: Base::Percent,
            power: 1,
        }],
        _ => return None,
    })
}

/// Whether a name is a mass unit, which is refused with advice.
fn is_mass(name: &str) -> bool {
    matches!(
        name,
        "kg" | "g" | "t" | "tonne" | "lb" | "lbs" | "lbm" | "slug"
    )
}

impl Unit {
    /// Reads a unit text: atoms joined by space, `·`, `*`, `.` or `-`, powers as `^2` or `²`, one `/`.
    ///
    /// # Errors
    ///
    /// [`UnitError`] naming the atom that is unknown, a mass, or malformed.
    pub fn parse(text: &str) -> Result<Self, UnitError> {
        let mut parts: Vec<Part> = Vec::new();
        let mut dim = Dim::NONE;
        let mut sides = text.split('/');
        let above = sides.next().unwrap_or_default();
        let below = sides.next();
        if sides.next().is_some() || text.trim().is_empty() {
            return Err(UnitError::Malformed(text.to_owned()));
        }
        for (side, sign) in [(Some(above), 1), (below, -1)] {
            let Some(side) = side else { continue };
            let atoms: Vec<&str> = side
                .split([' ', '·', '*', '⋅', '.', '-', '(', ')'])
                .filter(|atom| !atom.is_empty())
                .collect();
            if atoms.is_empty() || (sign > 0 && atoms == ["1"] && below.is_none()) {
                return Err(UnitError::Malformed(text.to_owned()));
            }
            for word in atoms {
                if word == "1" {
                    continue;
                }
                let (name, power) =
                    split_power(word).ok_or_else(|| UnitError::Malformed(word.to_owned()))?;
                if is_mass(name) {
                    return Err(UnitError::Mass(name.to_owned()));
                }
                let bases = atom(name).ok_or_else(|| UnitError::Unknown(name.to_owned()))?;
                for part in bases {
                    let power = part.power * power * sign;
                    let step = match part.base {
                        Base::Force(_) => Dim::FORCE,
                        Base::Length(_) => Dim::LENGTH,
                        Base::Angle(_) => Dim::ANGLE,
                        Base::Percent => Dim::NONE,
                    };
                    dim = dim.times(step.power(f64::from(power)).unwrap_or_default());
                    parts.push(Part {
                        base: part.base,
                        power,
                    });
                }
            }
        }
        Ok(Self { dim, parts })
    }

    /// The exact conversion from this unit to the printing set (degrees to radians included).
    #[must_use]
    pub fn conversion(&self, set: UnitSet) -> Conversion {
        let force_of_set = match set {
            UnitSet::NewtonMillimetre | UnitSet::NewtonMetre => 1.0,
            UnitSet::KilonewtonMillimetre => 1e3,
            UnitSet::PoundInch => LBF,
            UnitSet::KipInch => LBF * 1000.0,
        };
        let length_of_set = match set {
            UnitSet::NewtonMillimetre | UnitSet::KilonewtonMillimetre => 1.0,
            UnitSet::NewtonMetre => 1e3,
            UnitSet::PoundInch | UnitSet::KipInch => INCH,
        };
        let mut factors: Vec<Factor> = Vec::new();
        let mut tens = 0;
        for part in &self.parts {
            match part.base {
                Base::Force(newton) => {
                    push_ratio(&mut factors, &mut tens, newton, force_of_set, part.power)
                }
                Base::Length(mm) => {
                    push_ratio(&mut factors, &mut tens, mm, length_of_set, part.power)
                }
                Base::Percent => tens -= 2 * part.power,
                Base::Angle(_) => {}
            }
        }
        if tens != 0 {
            factors.push(Factor {
                number: 10.0,
                power: tens,
            });
        }
        Conversion { factors }
    }

    /// Whether the unit is a plane angle in degrees.
    #[must_use]
    pub fn is_degree(&self) -> bool {
        matches!(
            self.parts.as_slice(),
            [Part {
                base: Base::Angle(true),
                power: 1
            }]
        )
    }
}

/// Splits `mm^2`, `mm²` or `mm2` into its name and power.
fn split_power(word: &str) -> Option<(&str, i32)> {
    if let Some((name, power)) = word.split_once('^') {
        return power
            .parse()
            .ok()
            .filter(|p: &i32| (1..=12).contains(p))
            .map(|p| (name, p));
    }
    for (mark, power) in [('²', 2), ('³', 3), ('⁴', 4)] {
        if let Some(name) = word.strip_suffix(mark) {
            return Some((name, power));
        }
    }
    let name = word.trim_end_matches(|c: char| c.is_ascii_digit());
    let digits = &word[name.len()..];
    if digits.is_empty() {
        Some((name, 1))
    } else {
        digits.parse().ok().map(|p| (name, p))
    }
}

/// Adds `(from/to)^power` to the factors, keeping powers of ten apart and only exact numbers.
fn push_ratio(factors: &mut Vec<Factor>, tens: &mut i32, from: f64, to: f64, power: i32) {
    let mut push = |number: f64, power: i32| {
        if (number - 1.0).abs() < 1e-15 {
            return;
        }
        match factors
            .iter_mut()
            .find(|f| (f.number - number).abs() < 1e-12 * number)
        {
            Some(known) => known.power += power,
            None => factors.push(Factor { number, power }),
        }
        factors.retain(|f| f.power != 0);
    };
    let (from, from_tens) = without_tens(from);
    let (to, to_tens) = without_tens(to);
    *tens += (from_tens - to_tens) * power;
    let ratio = from / to;
    if (ratio - 1.0).abs() < 1e-15 {
        return;
    }
    if (ratio - 12.0).abs() < 1e-12 {
        push(12.0, power);
    } else {
        push(from, power);
        push(to, -power);
    }
}

/// Takes whole thousands and tens of metric prefixes out of a factor: `4448.22` stays as lbf times 10³.
fn without_tens(size: f64) -> (f64, i32) {
    for (base, known) in [
        (LBF * 1000.0, (LBF, 3)),
        (1e6, (1.0, 6)),
        (1e3, (1.0, 3)),
        (10.0, (1.0, 1)),
    ] {
        if (size - base).abs() < 1e-12 * base {
            return known;
        }
    }
    (size, 0)
}
