//! Standard drawing scales.

/// Scales in metric drawings, from large to small, as sheet to joint.
///
/// ISO 5455:1979 (1, 2, 5 and their tenfolds); the steps between are in common use, and let a group
/// fill its room.
const METRIC: [[f64; 2]; 39] = [
    [50.0, 1.0],
    [20.0, 1.0],
    [10.0, 1.0],
    [7.5, 1.0],
    [5.0, 1.0],
    [4.0, 1.0],
    [3.0, 1.0],
    [2.5, 1.0],
    [2.0, 1.0],
    [1.5, 1.0],
    [1.0, 1.0],
    [1.0, 1.5],
    [1.0, 2.0],
    [1.0, 2.5],
    [1.0, 3.0],
    [1.0, 4.0],
    [1.0, 5.0],
    [1.0, 7.5],
    [1.0, 10.0],
    [1.0, 15.0],
    [1.0, 20.0],
    [1.0, 25.0],
    [1.0, 30.0],
    [1.0, 40.0],
    [1.0, 50.0],
    [1.0, 75.0],
    [1.0, 100.0],
    [1.0, 150.0],
    [1.0, 200.0],
    [1.0, 250.0],
    [1.0, 300.0],
    [1.0, 400.0],
    [1.0, 500.0],
    [1.0, 750.0],
    [1.0, 1000.0],
    [1.0, 2000.0],
    [1.0, 5000.0],
    [1.0, 10_000.0],
    [1.0, 100_000.0],
];

/// Scales in inch drawings: halves of halves, and three quarters of them, as on an engineer's rule.
const INCH: [[f64; 2]; 27] = [
    [16.0, 1.0],
    [8.0, 1.0],
    [6.0, 1.0],
    [4.0, 1.0],
    [3.0, 1.0],
    [2.0, 1.0],
    [1.5, 1.0],
    [1.0, 1.0],
    [3.0, 4.0],
    [1.0, 2.0],
    [3.0, 8.0],
    [1.0, 4.0],
    [3.0, 16.0],
    [1.0, 8.0],
    [3.0, 32.0],
    [1.0, 16.0],
    [3.0, 64.0],
    [1.0, 32.0],
    [3.0, 128.0],
    [1.0, 64.0],
    [1.0, 96.0],
    [1.0, 128.0],
    [1.0, 192.0],
    [1.0, 256.0],
    [1.0, 512.0],
    [1.0, 4096.0],
    [1.0, 32_768.0],
];

/// A scale with its text for the caption.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Scale {
    /// Millimetres on the sheet for a unit of length.
    pub(super) factor: f64,
    /// Such as `1:2.5`.
    pub(super) text: String,
}

/// The standard scales for a length unit, from the largest down.
pub(super) fn standard(units: &str) -> Vec<Scale> {
    // 1 in = 25.4 mm exactly (international yard and pound agreement 1959).
    let mm = match units {
        "in" => 25.4,
        "m" => 1000.0,
        _ => 1.0,
    };
    let table: &[[f64; 2]] = if units == "in" { &INCH } else { &METRIC };
    table
        .iter()
        .map(|[sheet, joint]| Scale {
            factor: mm * sheet / joint,
            text: format!("{sheet}:{joint}"),
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Source: ISO 5455:1979 for the ratios; 1 in at half size is 12.7 mm on the sheet.
    #[test]
    fn scales_fall_and_read_as_ratios() {
        for units in ["mm", "m", "in"] {
            let all = standard(units);
            assert!(
                all.windows(2).all(|w| w[0].factor > w[1].factor),
                "{units}: not falling"
            );
        }
        assert!(
            standard("mm").iter().any(|s| s.text == "1:2.5"),
            "1:2.5 is missing"
        );
        let half = standard("in")
            .into_iter()
            .find(|s| s.text == "1:2")
            .unwrap();
        assert!((half.factor - 12.7).abs() < 1e-12, "half of 25.4");
    }
}
