//! The batch kernel against a plain loop over the same fields and points.

use super::{least, seconds};
use seamnote::solve::{Batch, Field, Points};
use seamnote::weld::V3;

const CASES: usize = 100_000;
const POINTS: usize = 64;

/// Times the largest resultant of every case, and prints points per second.
pub(super) fn largest() {
    let centroid = V3::new(18.4, 60.0, 0.0);
    let mut next = numbers();
    let mut vector = |size: f64| V3::new(size * next(), size * next(), size * next());
    let fields: Vec<Field> = (0..CASES)
        .map(|_| Field {
            mean: vector(80.0),
            twist: vector(0.9),
            centroid,
        })
        .collect();
    let positions: Vec<V3> = (0..POINTS).map(|_| centroid + vector(90.0)).collect();
    let (batch, points) = (Batch::new(&fields), Points::new(&positions, centroid));
    let kernel = least(
        (0..15)
            .map(|_| seconds(|| batch.largest(&points)))
            .collect(),
    );
    let plain = least(
        (0..15)
            .map(|_| seconds(|| plain(&fields, &positions)))
            .collect(),
    );
    #[expect(clippy::cast_precision_loss, reason = "a count of a few millions")]
    let all = (CASES * POINTS) as f64;
    println!(
        "  {CASES} cases at {POINTS} points: {:.0} million points/s; {:.1} times a plain loop ({:.0})",
        all / kernel / 1e6,
        plain / kernel,
        all / plain / 1e6,
    );
}

/// The largest |f|² of each case and its point, one case after another.
fn plain(fields: &[Field], positions: &[V3]) -> Vec<(usize, f64)> {
    fields
        .iter()
        .map(|field| {
            let mut best = (0, -1.0);
            for (point, r) in positions.iter().enumerate() {
                let square = field.at(*r).norm_squared();
                if square > best.1 {
                    best = (point, square);
                }
            }
            best
        })
        .collect()
}

/// Numbers between −1 and 1, always the same ones.
///
/// Source: D. E. Knuth, *The Art of Computer Programming*, vol. 2, 3rd ed., 3.3.4, table 1, line 26.
fn numbers() -> impl FnMut() -> f64 {
    let mut state = 1_u64;
    move || {
        state = state
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        #[expect(clippy::cast_precision_loss, reason = "53 bits fit")]
        let unit = (state >> 11) as f64 / (1_u64 << 53) as f64;
        2.0 * unit - 1.0
    }
}
