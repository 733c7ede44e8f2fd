//! A quantity as a user typed it: its text is kept, its value is in the printing set.

use super::{Conversion, Dim, Unit, UnitError, UnitSet};
use thiserror::Error;

/// A quantity as typed, with its value in the printing set (angles in rad).
#[derive(Clone, PartialEq, Debug)]
pub struct Given {
    /// The number as typed, without its unit: `-4.2`, `1/4`, `1 1/2`.
    pub number: String,
    /// The unit as typed; `None` where the file's own unit was meant.
    pub unit: Option<String>,
    /// Dimension.
    pub dim: Dim,
    /// The number as typed, as a number.
    pub typed: f64,
    /// The exact conversion from the typed unit to the printing set.
    pub conversion: Conversion,
    /// The value in the printing set; rad for an angle.
    pub value: f64,
}

/// Why a quantity text is refused.
#[derive(Clone, PartialEq, Debug, Error)]
pub enum GivenError {
    /// The number does not parse.
    #[error("`{0}` is not a number")]
    NotANumber(String),
    /// A decimal comma.
    #[error("`{0}` has a decimal comma; decimals take a point")]
    Comma(String),
    /// Not finite, or too large to be meant.
    #[error("`{0}` is not a finite number")]
    NotFinite(String),
    /// The unit is refused.
    #[error(transparent)]
    Unit(#[from] UnitError),
    /// A unit of the wrong kind.
    #[error("`{text}` is {found}, but {wanted} is needed here")]
    Kind {
        /// The text as typed.
        text: String,
        /// The kind it is.
        found: String,
        /// The kind that is needed.
        wanted: String,
    },
    /// An angle without a unit.
    #[error("`{0}` has no unit; an angle says `deg` or `rad`")]
    BareAngle(String),
    /// A stress without a unit in a set whose own stress unit nobody types.
    #[error("`{0}` has no unit; in this printing set a stress says its unit, as in `355 MPa`")]
    BareStress(String),
}

impl Given {
    /// Reads a quantity of dimension `dim`; a bare number takes the printing set's own unit.
    ///
    /// # Errors
    ///
    /// [`GivenError`] if the number, the unit or the kind is wrong.
    pub fn parse(text: &str, dim: Dim, set: UnitSet) -> Result<Self, GivenError> {
        let text = text.trim();
        let (number, unit) = split_unit(text);
        let typed = Self::typed_number(text)?;
        let Some(unit_text) = unit else {
            if dim == Dim::ANGLE && typed != 0.0 {
                return Err(GivenError::BareAngle(text.to_owned()));
            }
            let untyped = matches!(set, UnitSet::KilonewtonMillimetre | UnitSet::NewtonMetre);
            if dim == Dim::STRESS && untyped && typed != 0.0 {
                return Err(GivenError::BareStress(text.to_owned()));
            }
            return Ok(Self {
                number: number.to_owned(),
                unit: None,
                dim,
                typed,
                conversion: Conversion::default(),
                value: typed,
            });
        };
        let unit = Unit::parse(unit_text)?;
        if unit.dim != dim {
            return Err(GivenError::Kind {
                text: text.to_owned(),
                found: unit.dim.word(),
                wanted: dim.word(),
            });
        }
        let conversion = unit.conversion(set);
        let value = if unit.is_degree() {
            typed.to_radians()
        } else {
            typed * conversion.value()
        };
        if !value.is_finite() {
            return Err(GivenError::NotFinite(text.to_owned()));
        }
        Ok(Self {
            number: number.to_owned(),
            unit: Some(unit_text.to_owned()),
            dim,
            typed,
            conversion,
            value,
        })
    }

    /// The number of a quantity's text, whatever its unit.
    ///
    /// # Errors
    ///
    /// [`GivenError`] if the number is wrong.
    pub fn typed_number(text: &str) -> Result<f64, GivenError> {
        let text = text.trim();
        let typed = parse_number(split_unit(text).0)?;
        if typed.is_finite() {
            Ok(typed)
        } else {
            Err(GivenError::NotFinite(text.to_owned()))
        }
    }

    /// A quantity that the program itself states, such as a default, in the printing set.
    #[must_use]
    pub fn stated(number: &str, value: f64, dim: Dim) -> Self {
        Self {
            number: number.to_owned(),
            unit: None,
            dim,
            typed: value,
            conversion: Conversion::default(),
            value,
        }
    }

    /// The text as typed, number and unit.
    #[must_use]
    pub fn text(&self) -> String {
        match &self.unit {
            Some(unit) => format!("{} {unit}", self.number),
            None => self.number.clone(),
        }
    }

    /// Whether printing needs a conversion line: another unit than the set's, or a fraction.
    #[must_use]
    pub fn is_converted(&self) -> bool {
        !self.conversion.factors.is_empty() || self.number.contains('/')
    }
}

/// Splits a text into its number and its unit: the unit starts at the first letter, `°` or `%`
/// that is no exponent mark.
fn split_unit(text: &str) -> (&str, Option<&str>) {
    let mut previous = ' ';
    for (at, c) in text.char_indices() {
        let rest = &text[at..];
        let exponent = matches!(c, 'e' | 'E')
            && previous.is_ascii_digit()
            && rest[1..].starts_with(|d: char| d.is_ascii_digit() || d == '+' || d == '-');
        if (c.is_alphabetic() && !exponent) || c == '°' || c == '%' {
            return (text[..at].trim_end(), Some(rest.trim()));
        }
        previous = c;
    }
    (text, None)
}

/// Reads `12`, `-4.2`, `1.5e3`, `1/4`, `1 1/2`; refuses anything else.
fn parse_number(text: &str) -> Result<f64, GivenError> {
    let bad = || GivenError::NotANumber(text.to_owned());
    if text.contains(',') {
        return Err(GivenError::Comma(text.to_owned()));
    }
    let plain = |word: &str| -> Result<f64, GivenError> {
        let typed = word.strip_prefix('+').unwrap_or(word).replace('−', "-");
        if !typed.starts_with(|c: char| c.is_ascii_digit() || c == '-' || c == '.') {
            return Err(bad());
        }
        let value: f64 = typed.parse().map_err(|_| bad())?;
        if value.is_finite() {
            Ok(value)
        } else {
            Err(GivenError::NotFinite(text.to_owned()))
        }
    };
    let Some((above, below)) = text.split_once('/') else {
        return plain(text);
    };
    let (is_mixed, whole, above) = match above.trim().rsplit_once(' ') {
        Some((whole, above)) => (true, plain(whole.trim())?, above),
        None => (false, 0.0, above.trim()),
    };
    let (above, below) = (plain(above)?, plain(below.trim())?);
    if below <= 0.0 || (is_mixed && above.is_sign_negative()) {
        return Err(bad());
    }
    let fraction = above / below;
    Ok(if whole.is_sign_negative() {
        whole - fraction
    } else {
        whole + fraction
    })
}
