//! Quantities: dimensions, the five printing sets, units on input and their exact conversion.
//!
//! Leaves formatting of digits to [`crate::formula`]. Exact definitions: 1 in = 25.4 mm,
//! 1 lbf = 4.448 221 615 260 5 N, 1 kgf = 9.806 65 N (international yard and pound agreement 1959;
//! standard gravity, 3rd CGPM 1901).

mod given;
pub mod real;
mod unit;

pub use given::{Given, GivenError};
pub use unit::{Conversion, Factor, Unit, UnitError, near_unit};

use std::fmt;

/// Exponents of force, length and angle, in twelfths, so that square and cube roots stay exact.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Debug, Default)]
pub struct Dim {
    /// Exponent of force (twelfths).
    pub force: i16,
    /// Exponent of length (twelfths).
    pub length: i16,
    /// Exponent of plane angle (twelfths).
    pub angle: i16,
}

impl Dim {
    /// A plain number or ratio.
    pub const NONE: Self = Self::of(0, 0, 0);
    /// A force.
    pub const FORCE: Self = Self::of(1, 0, 0);
    /// A length.
    pub const LENGTH: Self = Self::of(0, 1, 0);
    /// A plane angle.
    pub const ANGLE: Self = Self::of(0, 0, 1);
    /// An area.
    pub const AREA: Self = Self::of(0, 2, 0);
    /// A first moment of area, or a unit second moment of a line.
    pub const VOLUME: Self = Self::of(0, 3, 0);
    /// A second moment of area.
    pub const SECOND: Self = Self::of(0, 4, 0);
    /// A stress, force per area.
    pub const STRESS: Self = Self::of(1, -2, 0);
    /// A moment.
    pub const MOMENT: Self = Self::of(1, 1, 0);
    /// A line load, force per length.
    pub const LINE_LOAD: Self = Self::of(1, -1, 0);

    /// The dimension with whole exponents of force, length and angle.
    #[must_use]
    pub const fn of(force: i16, length: i16, angle: i16) -> Self {
        Self {
            force: force * 12,
            length: length * 12,
            angle: angle * 12,
        }
    }

    /// The dimension of a product.
    #[must_use]
    pub const fn times(self, other: Self) -> Self {
        Self {
            force: self.force + other.force,
            length: self.length + other.length,
            angle: self.angle + other.angle,
        }
    }

    /// The dimension of a quotient.
    #[must_use]
    pub const fn over(self, other: Self) -> Self {
        Self {
            force: self.force - other.force,
            length: self.length - other.length,
            angle: self.angle - other.angle,
        }
    }

    /// The dimension raised to `exponent`; `None` if a twelfth would be split or an exponent overflow.
    #[must_use]
    pub fn power(self, exponent: f64) -> Option<Self> {
        let scale = |twelfths: i16| -> Option<i16> {
            let exact = f64::from(twelfths) * exponent;
            let whole = exact.round();
            #[expect(
                clippy::cast_possible_truncation,
                reason = "the range is checked beside it"
            )]
            ((exact - whole).abs() < 1e-9 && whole.abs() < 12_000.0).then_some(whole as i16)
        };
        Some(Self {
            force: scale(self.force)?,
            length: scale(self.length)?,
            angle: scale(self.angle)?,
        })
    }

    /// The trade's word for the dimension, with its article, as used in error texts.
    #[must_use]
    pub fn word(self) -> String {
        match self {
            Self::NONE => "a plain number".into(),
            Self::FORCE => "a force".into(),
            Self::LENGTH => "a length".into(),
            Self::ANGLE => "an angle".into(),
            Self::AREA => "an area".into(),
            Self::SECOND => "a second moment of area".into(),
            Self::STRESS => "a stress".into(),
            Self::MOMENT => "a moment".into(),
            Self::LINE_LOAD => "a line load".into(),
            other => other.to_string(),
        }
    }
}

impl fmt::Display for Dim {
    /// Writes the dimension as a product of powers, such as `force length^-2`.
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let mut first = true;
        for (name, twelfths) in [
            ("force", self.force),
            ("length", self.length),
            ("angle", self.angle),
        ] {
            if twelfths == 0 {
                continue;
            }
            if !first {
                out.write_str(" ")?;
            }
            first = false;
            match (twelfths, twelfths % 12) {
                (12, _) => out.write_str(name)?,
                (_, 0) => write!(out, "{name}^{}", twelfths / 12)?,
                _ => write!(out, "{name}^({twelfths}/12)")?,
            }
        }
        if first {
            out.write_str("a plain number")
        } else {
            Ok(())
        }
    }
}

/// One coherent printing set: force and length give the rest, so that printed numbers hide no factor.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum UnitSet {
    /// N, mm, MPa.
    NewtonMillimetre,
    /// kN, mm, kN/mm².
    KilonewtonMillimetre,
    /// N, m, Pa.
    NewtonMetre,
    /// lbf, in, psi.
    PoundInch,
    /// kip, in, ksi.
    KipInch,
}

impl UnitSet {
    /// Every printing set, in the order in which help texts list them.
    pub const ALL: [Self; 5] = [
        Self::NewtonMillimetre,
        Self::KilonewtonMillimetre,
        Self::NewtonMetre,
        Self::PoundInch,
        Self::KipInch,
    ];

    /// The set that the two unit names make, if it is one of the five.
    #[must_use]
    pub fn from_names(force: &str, length: &str) -> Option<Self> {
        Self::ALL
            .into_iter()
            .find(|set| set.force() == force && set.length() == length)
    }

    /// The unit of force.
    #[must_use]
    pub const fn force(self) -> &'static str {
        match self {
            Self::NewtonMillimetre | Self::NewtonMetre => "N",
            Self::KilonewtonMillimetre => "kN",
            Self::PoundInch => "lbf",
            Self::KipInch => "kip",
        }
    }

    /// The unit of length.
    #[must_use]
    pub const fn length(self) -> &'static str {
        match self {
            Self::NewtonMillimetre | Self::KilonewtonMillimetre => "mm",
            Self::NewtonMetre => "m",
            Self::PoundInch | Self::KipInch => "in",
        }
    }

    /// The unit of stress.
    #[must_use]
    pub const fn stress(self) -> &'static str {
        match self {
            Self::NewtonMillimetre => "MPa",
            Self::KilonewtonMillimetre => "kN/mm²",
            Self::NewtonMetre => "Pa",
            Self::PoundInch => "psi",
            Self::KipInch => "ksi",
        }
    }

    /// Whether lengths of this set are inches, which chooses the inch table of a clause.
    #[must_use]
    pub const fn is_inch(self) -> bool {
        matches!(self, Self::PoundInch | Self::KipInch)
    }

    /// The unit of a dimension as factors with whole or broken powers; empty for a plain number.
    ///
    /// Stresses and their powers take the stress unit; angles are printed in degrees.
    #[must_use]
    pub fn unit_of(self, dim: Dim) -> Vec<(&'static str, f64)> {
        let power = |twelfths: i16| f64::from(twelfths) / 12.0;
        let mut factors = Vec::new();
        // Nobody reads the stress of a weld in GPa.
        let named = self != Self::KilonewtonMillimetre;
        if named && dim.force != 0 && dim.length == -2 * dim.force {
            factors.push((self.stress(), power(dim.force)));
        } else {
            if dim.force != 0 {
                factors.push((self.force(), power(dim.force)));
            }
            if dim.length != 0 {
                factors.push((self.length(), power(dim.length)));
            }
        }
        if dim.angle != 0 {
            factors.push(("deg", power(dim.angle)));
        }
        factors
    }

    /// The unit of a dimension in running text, with raised powers, such as `mm⁴`, `N/mm`, `N mm⁻³`.
    #[must_use]
    pub fn text(self, dim: Dim) -> String {
        const RAISED: [(char, char); 12] = [
            ('0', '⁰'),
            ('1', '¹'),
            ('2', '²'),
            ('3', '³'),
            ('4', '⁴'),
            ('5', '⁵'),
            ('6', '⁶'),
            ('7', '⁷'),
            ('8', '⁸'),
            ('9', '⁹'),
            ('-', '⁻'),
            ('.', '·'),
        ];
        let mut raised = false;
        let label = self.label(dim).replace("deg", "°");
        let raise = |c: char| {
            RAISED
                .iter()
                .find(|(plain, _)| *plain == c)
                .map_or(c, |(_, up)| *up)
        };
        label
            .chars()
            .filter_map(|c| {
                let is_mark = c == '^';
                raised = is_mark || (raised && (c.is_ascii_digit() || c == '-' || c == '.'));
                (!is_mark).then(|| if raised { raise(c) } else { c })
            })
            .collect()
    }

    /// The unit of a dimension in plain text, such as `N mm`, `mm^4`, `N/mm`; empty for a plain number.
    #[must_use]
    pub fn label(self, dim: Dim) -> String {
        let factors = self.unit_of(dim);
        let part = |name: &str, power: f64| {
            if (power - 1.0).abs() < 1e-9 {
                name.to_owned()
            } else {
                format!("{name}^{power}")
            }
        };
        let above: Vec<_> = factors
            .iter()
            .filter(|f| f.1 > 0.0)
            .map(|f| part(f.0, f.1))
            .collect();
        let below: Vec<_> = factors
            .iter()
            .filter(|f| f.1 < 0.0)
            .map(|f| part(f.0, -f.1))
            .collect();
        match (above.is_empty(), below.is_empty()) {
            (_, true) => above.join(" "),
            (true, false) => format!("1/{}", below.join(" ")),
            (false, false) => format!("{}/{}", above.join(" "), below.join(" ")),
        }
    }
}
