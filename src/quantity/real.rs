//! Transcendental functions, all through `libm`, so that every machine computes the same bits.

pub use libm::{acos, asin, atan2, cos, cosh, fabs, hypot, sin, sqrt, tan};

/// `base` raised to `exponent`; whole exponents up to 8 by repeated products, which a checker can redo.
#[must_use]
pub fn power(base: f64, exponent: f64) -> f64 {
    let whole = exponent.abs();
    if whole <= 8.0 && (whole - whole.round()).abs() < 1e-15 {
        let mut product = 1.0;
        let mut count = 0.0;
        while count < whole {
            product *= base;
            count += 1.0;
        }
        return if exponent < 0.0 {
            1.0 / product
        } else {
            product
        };
    }
    libm::pow(base, exponent)
}

/// Ten to a whole power, exact up to 10²².
#[must_use]
pub fn ten_to(exponent: i32) -> f64 {
    let mut product = 1.0;
    for _ in 0..exponent.unsigned_abs() {
        product *= 10.0;
    }
    if exponent < 0 { 1.0 / product } else { product }
}
