//! How the columns of a table share the line.
//!
//! Natural widths where all fit; else heads wrap; else short columns keep what they need and the long
//! ones share what is left in proportion to their need, none narrower than its longest word.

/// What a column asks of the line (pt), its sides included.
#[derive(Clone, Copy, Debug)]
pub(super) struct Need {
    /// Width with every cell and the head on one line.
    pub(super) natural: f64,
    /// Width with every cell on one line and the head at its widest word.
    pub(super) wrapped: f64,
    /// Width of the longest word of cells and head.
    pub(super) least: f64,
    /// Whether the typesetter measures the column; the widths are then a guess.
    pub(super) measured: bool,
}

impl Need {
    /// A column that the typesetter measures, with a guess of its width.
    pub(super) const fn measured(guess: f64) -> Self {
        Self {
            natural: guess,
            wrapped: guess,
            least: guess,
            measured: true,
        }
    }

    fn width(&self, points: f64) -> Width {
        if self.measured {
            Width::Auto
        } else {
            Width::Points(points)
        }
    }
}

/// A width as the typesetter takes it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Width {
    /// As the typesetter measures it.
    Auto,
    /// Fixed (pt).
    Points(f64),
}

/// The widths of columns on a line of `room` (pt); none if some word would not fit.
pub(super) fn widths(needs: &[Need], room: f64) -> Option<Vec<Width>> {
    let fit = |of: fn(&Need) -> f64| needs.iter().map(of).sum::<f64>() <= room;
    let all = |of: fn(&Need) -> f64| Some(needs.iter().map(|n| n.width(of(n))).collect());
    if fit(|n| n.natural) {
        all(|n| n.natural)
    } else if fit(|n| n.wrapped) {
        all(|n| n.wrapped)
    } else if fit(|n| n.least) {
        Some(shared(needs, room))
    } else {
        None
    }
}

/// Widths where the longest words do not fit: columns of words give up, so that their words break.
pub(super) fn squeezed(needs: &[Need], room: f64) -> Vec<Width> {
    let gives = |n: &&Need| n.least < n.wrapped;
    let firm: f64 = needs.iter().filter(|n| !gives(n)).map(|n| n.least).sum();
    let soft: f64 = needs.iter().filter(gives).map(|n| n.least).sum();
    let part = ((room - firm) / soft).clamp(0.3, 1.0);
    let points = |n: &Need| n.least * if gives(&n) { part } else { 1.0 };
    needs.iter().map(|n| n.width(points(n))).collect()
}

/// Short columns keep what they need; long ones share the rest in proportion to their need.
fn shared(needs: &[Need], room: f64) -> Vec<Width> {
    let even = |level: f64| move |n: &Need| n.wrapped.min(level.max(n.least));
    let line = level(room, |at| total(needs, even(at)) <= room);
    let mixed = |part: f64| {
        move |n: &Need| {
            if n.wrapped <= line {
                n.wrapped
            } else {
                n.least.max(part * n.wrapped)
            }
        }
    };
    let part = level(1.0, |at| total(needs, mixed(at)) <= room);
    let points = mixed(part);
    needs.iter().map(|n| n.width(points(n))).collect()
}

fn total(needs: &[Need], width: impl Fn(&Need) -> f64) -> f64 {
    needs.iter().map(width).sum()
}

/// The greatest level up to `most` that still fits, by halving.
fn level(most: f64, fits: impl Fn(f64) -> bool) -> f64 {
    const HALVINGS: usize = 40;
    let (mut low, mut high) = (0.0, most);
    for _ in 0..HALVINGS {
        let middle = 0.5 * (low + high);
        if fits(middle) {
            low = middle;
        } else {
            high = middle;
        }
    }
    low
}

#[cfg(test)]
mod tests {
    use super::*;

    fn need(natural: f64, least: f64) -> Need {
        Need {
            natural,
            wrapped: natural,
            least,
            measured: false,
        }
    }

    fn points(widths: Option<Vec<Width>>) -> Vec<f64> {
        let points = |w: Width| match w {
            Width::Auto => f64::NAN,
            Width::Points(points) => points,
        };
        let widths = widths.expect("the words fit");
        widths.into_iter().map(points).collect()
    }

    #[test]
    fn columns_that_fit_the_line_take_what_they_need() {
        let needs = [need(30.0, 10.0), need(50.0, 20.0)];
        assert_eq!(points(widths(&needs, 100.0)), [30.0, 50.0]);
    }

    #[test]
    fn short_columns_keep_their_width_and_long_ones_share_the_rest() {
        let needs = [need(20.0, 20.0), need(300.0, 30.0), need(150.0, 30.0)];
        let found = points(widths(&needs, 200.0));
        let wanted = [20.0, 120.0, 60.0];
        for (found, wanted) in found.iter().zip(wanted) {
            assert!((found - wanted).abs() < 1e-6, "{found}, not {wanted}");
        }
    }

    /// Whatever the columns, none is narrower than its longest word, and all stand on the line.
    #[test]
    fn no_column_is_narrower_than_its_longest_word() {
        let mut seed = 7_u32;
        let mut chance = |most: f64| {
            seed = seed.wrapping_mul(1_664_525).wrapping_add(1_013_904_223);
            most * f64::from(seed >> 8) / f64::from(1_u32 << 24)
        };
        let mut shared = 0;
        for _ in 0..2000 {
            let needs: Vec<Need> = (0..6)
                .map(|_| {
                    let least = 5.0 + chance(80.0);
                    need(least + chance(300.0), least)
                })
                .collect();
            let least: f64 = needs.iter().map(|n| n.least).sum();
            let found = widths(&needs, 400.0);
            assert_eq!(found.is_some(), least <= 400.0, "{needs:?}");
            if found.is_none() {
                continue;
            }
            shared += 1;
            let found = points(found);
            assert!(found.iter().sum::<f64>() <= 400.0 + 1e-6, "{found:?}");
            for (need, width) in needs.iter().zip(&found) {
                let within = need.least - 1e-6..=need.natural + 1e-6;
                assert!(within.contains(width), "{need:?} is given {width}");
            }
        }
        assert!(shared > 500, "only {shared} tables were shared out");
    }

    #[test]
    fn words_give_up_their_room_before_numbers_do() {
        let needs = [need(60.0, 60.0), need(200.0, 100.0)];
        assert!(widths(&needs, 120.0).is_none(), "the words do not fit");
        let found = points(Some(squeezed(&needs, 120.0)));
        assert_eq!(found, [60.0, 60.0]);
    }
}
