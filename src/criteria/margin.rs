//! The least positive load factor that reaches a limit (method 6).

/// Load factor beyond which a limit counts as out of reach.
pub(super) const LARGEST: f64 = 1e6;
/// Steps from 0 to 1 in which a crossing is looked for.
const STEPS: u32 = 32;
/// Growth of the load factor beyond 1.
const GROWTH: f64 = 1.25;
/// Halvings of a bracket: 2⁻⁶⁰ of it is below the spacing of numbers.
const HALVINGS: u32 = 60;

/// The least positive λ at which `excess(λ)` = D − R reaches 0: 0 if the fixed terms exceed the
/// limit by themselves, infinite if nothing up to 1e6 reaches it.
///
/// Scans upward for the first change of sign, in steps of 1/32 up to 1 and of a quarter beyond,
/// then bisects. A value that is not a number counts as reached.
pub(super) fn least_factor(excess: impl Fn(f64) -> f64) -> f64 {
    let reached = |factor: f64| {
        let value = excess(factor);
        value.is_nan() || value >= 0.0
    };
    if excess(0.0) > 0.0 {
        return 0.0;
    }
    let mut low = 0.0;
    let mut high = 0.0;
    let mut found = false;
    for step in 1..=STEPS {
        high = f64::from(step) / f64::from(STEPS);
        if reached(high) {
            found = true;
            break;
        }
        low = high;
    }
    while !found {
        if low >= LARGEST {
            return f64::INFINITY;
        }
        high = (low * GROWTH).min(LARGEST);
        found = reached(high);
        if !found {
            low = high;
        }
    }
    for _ in 0..HALVINGS {
        let middle = f64::midpoint(low, high);
        if reached(middle) {
            high = middle
        } else {
            low = middle
        }
    }
    high
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Source: method 6, example: 0.5² + 0.5² has MS 0.41, not 1.00.
    #[test]
    fn the_least_factor_reaches_the_limit() {
        type Row<'a> = (&'a str, &'a dyn Fn(f64) -> f64, f64);
        #[rustfmt::skip]
        let rows: [Row<'_>; 6] = [
            ("linear",              &|l| 0.8 * l - 1.0,                       1.25),
            ("two squares",         &|l| 0.25 * l * l + 0.25 * l * l - 1.0,   std::f64::consts::SQRT_2),
            ("a fixed term",        &|l| 0.4 + 0.3 * l - 1.0,                 2.0),
            ("fails by itself",     &|l| 1.2 + 0.3 * l - 1.0,                 0.0),
            ("never",               &|_| -1.0,                                f64::INFINITY),
            ("twice, least counts", &|l| (l - 0.25) * (2.0 - l),              0.25),
        ];
        for (name, excess, wanted) in rows {
            let found = least_factor(excess);
            assert!(
                (found.is_infinite() && wanted.is_infinite())
                    || (found - wanted).abs() <= 1e-12 * wanted,
                "{name}: {found}, not {wanted}"
            );
        }
    }
}
