//! Printed decimals: the only module that formats and rounds numbers.

use crate::quantity::real;

/// A number as printed: a decimal, possibly with a power of ten.
#[derive(Clone, PartialEq, Eq, Debug)]
pub struct Printed {
    /// Whether it is below zero.
    pub negative: bool,
    /// Digits with at most one point: `4.243`, `80`, `0`.
    pub mantissa: String,
    /// The power of ten, if printed as m × 10ⁿ.
    pub exponent: Option<i32>,
}

/// Values that a shorter decimal gives to this relative difference are printed as that decimal.
///
/// A few units in the last place of a double: what a sum of exact decimals may lose.
const EXACT: f64 = 1e-13;

/// Up to this many digits a tie is told from its neighbours.
const TIE_DIGITS: usize = 10;

/// From this power of ten on, m × 10ⁿ is printed.
const LARGE: i32 = 5;

/// Below this power of ten, m × 10ⁿ is printed.
const SMALL: i32 = -3;

impl Printed {
    /// `value` to `digits` significant digits; 0 at or under `floor`.
    ///
    /// A value that fewer digits give exactly is printed with those; one that at most `exact` digits
    /// give exactly is printed exactly.
    #[must_use]
    pub fn of(value: f64, digits: usize, exact: usize, floor: f64) -> Self {
        if value.abs() <= floor {
            return Self {
                negative: false,
                mantissa: "0".to_owned(),
                exponent: None,
            };
        }
        let size = value.abs();
        let (figures, power) = (1..=digits.max(exact))
            .map(|count| decompose(size, count))
            .find(|(figures, power)| (compose(figures, *power) - size).abs() <= EXACT * size)
            .unwrap_or_else(|| decompose(off_tie(size, digits), digits));
        let is_exact = (compose(&figures, power) - size).abs() <= EXACT * size;
        let count = i32::try_from(figures.len()).unwrap_or(i32::MAX);
        let negative = value < 0.0;
        if (SMALL..LARGE).contains(&power) && (is_exact || count > power) {
            return Self {
                negative,
                mantissa: fixed(&figures, power),
                exponent: None,
            };
        }
        let mantissa = if count > 1 {
            format!("{}.{}", &figures[..1], &figures[1..])
        } else {
            figures
        };
        Self {
            negative,
            mantissa,
            exponent: Some(power),
        }
    }

    /// A decimal as a user typed it; `value` is its value, used where the text has an exponent.
    #[must_use]
    pub fn typed(text: &str, value: f64) -> Self {
        let plain = text.trim().trim_start_matches('+').replace('−', "-");
        let body = plain.trim_start_matches('-');
        if body.is_empty() || !body.chars().all(|c| c.is_ascii_digit() || c == '.') {
            return Self::of(value, 15, 17, 0.0);
        }
        let mut mantissa = body.trim_end_matches('.').to_owned();
        if mantissa.starts_with('.') {
            mantissa.insert(0, '0');
        }
        Self {
            negative: plain.starts_with('-') && value != 0.0,
            mantissa,
            exponent: None,
        }
    }

    /// `value` with `decimals` digits after the point, rounded down (toward −∞) or up (toward +∞).
    ///
    /// From 10⁵ on, as m × 10ⁿ with as many decimals of m, rounded the same way.
    #[must_use]
    pub fn rounded(value: f64, decimals: i32, up: bool) -> Self {
        if value.abs() >= real::ten_to(LARGE) && value.is_finite() {
            let power = decompose(value.abs(), 17).1;
            let scaled = Self::rounded(value / real::ten_to(power), decimals, up);
            // Rounding away from 0 may carry: 9.999 to 10.00.
            return if scaled.value().abs() >= 10.0 {
                Self {
                    exponent: Some(power + 1),
                    ..Self::rounded(scaled.value() / 10.0, decimals, up)
                }
            } else {
                Self {
                    exponent: Some(power),
                    ..scaled
                }
            };
        }
        let scale = real::ten_to(decimals);
        // A value that stands on the grid to within rounding noise stays there.
        let scaled = value * scale;
        let nearest = scaled.round();
        let on_grid = (scaled - nearest).abs() < 1e-9 * nearest.abs().max(1.0);
        let whole = match (on_grid, up) {
            (true, _) => nearest,
            (false, true) => scaled.ceil(),
            (false, false) => scaled.floor(),
        };
        let places = usize::try_from(decimals).unwrap_or(0);
        Self {
            negative: whole < 0.0,
            mantissa: format!("{:.places$}", (whole / scale).abs()),
            exponent: None,
        }
    }

    /// The number that the printed text stands for.
    #[must_use]
    pub fn value(&self) -> f64 {
        let sign = if self.negative { "-" } else { "" };
        let text = format!("{sign}{}e{}", self.mantissa, self.exponent.unwrap_or(0));
        text.parse().expect("a printed number is a decimal")
    }

    /// One unit in the last printed digit.
    #[must_use]
    pub fn unit_in_last(&self) -> f64 {
        let decimals = self
            .mantissa
            .split_once('.')
            .map_or(0, |(_, decimals)| decimals.len());
        let decimals = i32::try_from(decimals).unwrap_or(i32::MAX);
        real::ten_to(self.exponent.unwrap_or(0) - decimals)
    }

    /// Whether it reads 0.
    #[must_use]
    pub fn is_zero(&self) -> bool {
        self.mantissa.chars().all(|c| c == '0' || c == '.')
    }

    /// The same number as m × 10ⁿ with the n asked for: the point moves in the printed digits, no
    /// digit is lost or rounded. `None` where it would have to move past the last digit, since a
    /// zero there would read as one more digit; a number that reads 0 stays 0.
    #[must_use]
    pub fn at_power(&self, power: i32) -> Option<Self> {
        if self.is_zero() {
            return Some(self.clone());
        }
        let (whole, decimals) = match self.mantissa.split_once('.') {
            Some((whole, decimals)) => (whole, decimals),
            None => (self.mantissa.as_str(), ""),
        };
        let digits = format!("{}{decimals}", whole.trim_start_matches('0'));
        let before = i32::try_from(digits.len() - decimals.len()).unwrap_or(i32::MAX);
        let point = before + self.exponent.unwrap_or(0) - power;
        let mantissa = match usize::try_from(point) {
            Ok(point) if point > digits.len() => return None,
            Ok(0) | Err(_) => {
                let zeros = usize::try_from(-point).unwrap_or(0);
                format!("0.{}{digits}", "0".repeat(zeros))
            }
            Ok(point) => match digits.split_at(point) {
                (whole, "") => lead(whole).to_owned(),
                (whole, decimals) => format!("{}.{decimals}", lead(whole)),
            },
        };
        Some(Self {
            negative: self.negative,
            mantissa,
            exponent: Some(power),
        })
    }

    /// How many digits are printed, zeros before and after the point included.
    #[must_use]
    pub fn count_digits(&self) -> usize {
        self.mantissa.chars().filter(char::is_ascii_digit).count()
    }

    /// A power of ten in running text: `10⁵`.
    #[must_use]
    pub fn power_text(power: i32) -> String {
        format!("10{}", superscript(power))
    }

    /// Plain text with an ASCII sign, as in the trace: `-4.243`, `3.254*10^6`.
    #[must_use]
    pub fn algebra(&self) -> String {
        let sign = if self.negative { "-" } else { "" };
        match self.exponent {
            Some(exponent) if exponent < 0 => format!("{sign}{}*10^({exponent})", self.mantissa),
            Some(exponent) => format!("{sign}{}*10^{exponent}", self.mantissa),
            None => format!("{sign}{}", self.mantissa),
        }
    }

    /// Running text with a true minus: `−4.243`, `3.254 × 10⁶`.
    #[must_use]
    pub fn text(&self) -> String {
        let sign = if self.negative { "−" } else { "" };
        match self.exponent {
            Some(exponent) => format!("{sign}{} × 10{}", self.mantissa, superscript(exponent)),
            None => format!("{sign}{}", self.mantissa),
        }
    }

    /// Running text that always shows a sign: `+0.14`.
    #[must_use]
    pub fn signed_text(&self) -> String {
        if self.negative {
            self.text()
        } else {
            format!("+{}", self.text())
        }
    }
}

/// A size whose tie is rounded up, as a calculator does, where the double stands just below it:
/// 19.575 is 19.574999999999999.
fn off_tie(size: f64, digits: usize) -> f64 {
    if digits <= TIE_DIGITS {
        size * (1.0 + EXACT)
    } else {
        size
    }
}

/// The digits of `size` to `count` significant figures (trailing zeros kept) and its power of ten.
fn decompose(size: f64, count: usize) -> (String, i32) {
    let text = format!("{size:.*e}", count - 1);
    let (mantissa, power) = text.split_once('e').expect("the e format has an exponent");
    (
        mantissa.replace('.', ""),
        power.parse().expect("an exponent is a whole number"),
    )
}

/// The value of digits times a power of ten.
fn compose(figures: &str, power: i32) -> f64 {
    format!("{}.{}e{power}", &figures[..1], &figures[1..])
        .parse()
        .expect("digits make a decimal")
}

/// Digits in fixed notation, zeros filled in.
fn fixed(figures: &str, power: i32) -> String {
    let Ok(whole) = usize::try_from(power + 1) else {
        let zeros = usize::try_from(-power - 1).unwrap_or(0);
        return format!("0.{}{figures}", "0".repeat(zeros));
    };
    if whole == 0 {
        return format!("0.{figures}");
    }
    if figures.len() <= whole {
        return format!("{figures}{}", "0".repeat(whole - figures.len()));
    }
    format!("{}.{}", &figures[..whole], &figures[whole..])
}

/// The whole part of a number without zeros at its start.
fn lead(whole: &str) -> &str {
    match whole.trim_start_matches('0') {
        "" => "0",
        digits => digits,
    }
}

/// A whole number in superscript characters.
fn superscript(number: i32) -> String {
    const RAISED: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    number
        .to_string()
        .chars()
        .map(|c| {
            c.to_digit(10)
                .and_then(|digit| RAISED.get(digit as usize))
                .copied()
                .unwrap_or('⁻')
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::Printed;

    #[test]
    fn values_print_with_the_digits_asked_for() {
        #[rustfmt::skip]
        let rows = [
            // value       digits  exact  printed
            (4.242_640_7,  4,      4,     "4.243"),
            (1_357.6,      4,      4,     "1358"),
            (12_345.6,     4,      4,     "1.235*10^4"),
            (80.0,         4,      4,     "80"),
            (-798_000.0,   4,      4,     "-7.98*10^5"),
            (0.3125,       4,      7,     "0.3125"),
            (7.9375,       4,      7,     "7.9375"),
            (7.9375,       4,      4,     "7.938"),
            (0.000_512_34, 4,      4,     "5.123*10^(-4)"),
            (0.001_234_56, 4,      4,     "0.001235"),
            (0.1 + 0.2,    4,      4,     "0.3"),
            (19.575,       4,      4,     "19.58"),
            (19.574_9,     4,      4,     "19.57"),
            (9_999.96,     4,      4,     "1.000*10^4"),
        ];
        for (value, digits, exact, printed) in rows {
            assert_eq!(
                Printed::of(value, digits, exact, 1e-12).algebra(),
                printed,
                "{value}"
            );
        }
        assert_eq!(
            Printed::of(1e-15, 4, 4, 1e-12).algebra(),
            "0",
            "under the floor"
        );
    }

    #[test]
    fn margins_round_down_and_utilisations_up() {
        assert_eq!(
            Printed::rounded(0.148_9, 2, false).signed_text(),
            "+0.14",
            "a margin"
        );
        assert_eq!(
            Printed::rounded(-0.001, 2, false).signed_text(),
            "−0.01",
            "a negative margin"
        );
        assert_eq!(
            Printed::rounded(0.871_01, 3, true).text(),
            "0.872",
            "a utilisation"
        );
        assert_eq!(
            Printed::rounded(0.5, 2, false).signed_text(),
            "+0.50",
            "on the grid"
        );
        #[rustfmt::skip]
        let rows = [
            (99_999.994,    false, "+99999.99"),
            (234_567.8,     false, "+2.34 × 10⁵"),
            (234_567.8,     true,  "+2.35 × 10⁵"),
            (9.999_9e7,     false, "+9.99 × 10⁷"),
            (9.999_9e7,     true,  "+1.00 × 10⁸"),
            (-2.001e6,      false, "−2.01 × 10⁶"),
            (7.136e204,     false, "+7.13 × 10²⁰⁴"),
        ];
        for (value, up, printed) in rows {
            assert_eq!(
                Printed::rounded(value, 2, up).signed_text(),
                printed,
                "{value}"
            );
        }
    }

    #[test]
    fn another_power_of_ten_moves_the_point_alone() {
        #[rustfmt::skip]
        let rows = [
            // mantissa  exponent  power  printed
            ("8.146",    Some(5),  5,     Some("8.146*10^5")),
            ("1.157",    Some(6),  5,     Some("11.57*10^5")),
            ("1.157",    Some(6),  3,     Some("1157*10^3")),
            ("1.157",    Some(6),  2,     None),
            ("1.157",    Some(6),  7,     Some("0.1157*10^7")),
            ("1358",     None,     5,     Some("0.01358*10^5")),
            ("1500",     None,     5,     Some("0.01500*10^5")),
            ("0.0310",   None,     -2,    Some("3.10*10^(-2)")),
            ("0.0310",   None,     -1,    Some("0.310*10^(-1)")),
            ("0.25",     None,     3,     Some("0.00025*10^3")),
            ("12.5",     None,     1,     Some("1.25*10^1")),
            ("2",        Some(6),  5,     None),
            ("0",        None,     5,     Some("0")),
        ];
        for (mantissa, exponent, power, wanted) in rows {
            let printed = Printed {
                negative: false,
                mantissa: mantissa.to_owned(),
                exponent,
            };
            let moved = printed.at_power(power);
            let text = moved.as_ref().map(Printed::algebra);
            assert_eq!(text.as_deref(), wanted, "{mantissa} at {power}");
            let same =
                moved.is_none_or(|moved| moved.value().to_bits() == printed.value().to_bits());
            assert!(same, "{mantissa} at {power} has another value");
        }
    }

    #[test]
    fn typed_decimals_stay_as_typed() {
        for text in ["0.25", "10.0", "-4.2", "210", "0"] {
            let value = text.parse().unwrap();
            assert_eq!(Printed::typed(text, value).algebra(), text, "as typed");
        }
        assert_eq!(
            Printed::typed("1.5e3", 1500.0).algebra(),
            "1500",
            "an exponent is written out"
        );
    }
}
