//! One power of ten for the numbers of a column, so that the eye can compare them.

use super::builder::{Cell, Sheet};
use super::doc::Align;
use crate::formula::{Ledger, Printed};

/// Most digits of a cell, place-holding zeros included; a wider spread keeps a power in each cell.
const MOST_DIGITS: usize = 8;

/// How far under the least power of the cells the common one may lie, so that small numbers beside
/// them keep few zeros.
const BELOW: i32 = 3;

/// Tables in which one column is held against another: their numbers keep one form.
const COMPARED: [&str; 2] = ["margin-table", "limit-table"];

/// The power of ten of each column of a sheet that gets one.
pub(super) fn powers(ledger: &Ledger, sheet: &Sheet) -> Vec<Option<i32>> {
    if COMPARED.contains(&sheet.id.as_str()) {
        return vec![None; sheet.columns.len()];
    }
    let rows = || sheet.rows.iter().chain(&sheet.foot);
    let column = |at: usize| rows().filter_map(move |row| row.cells.get(at));
    sheet
        .columns
        .iter()
        .enumerate()
        .map(|(at, head)| {
            let numbers = column(at).filter_map(|cell| printed(ledger, cell));
            let takes_power = head.align == Align::Point && !head.unit.is_empty();
            takes_power.then(|| common(&numbers.collect::<Vec<_>>()))?
        })
        .collect()
}

/// The number of a cell as the ledger prints it; a cell rounded for the eye keeps its own form.
fn printed(ledger: &Ledger, cell: &Cell) -> Option<Printed> {
    match cell {
        Cell::Own(value) | Cell::Linked(value) => Some(ledger.printed(*value)),
        Cell::Text(_) | Cell::Rounded { .. } => None,
    }
}

/// The power of ten with which the numbers read with the fewest digits, if any of them has one.
fn common(numbers: &[Printed]) -> Option<i32> {
    let given = || numbers.iter().filter_map(|number| number.exponent);
    let (least, most) = (given().min()?, given().max()?);
    let digits = |power: i32| -> Option<(usize, usize)> {
        let counts: Option<Vec<usize>> = numbers
            .iter()
            .map(|number| Some(number.at_power(power)?.count_digits()))
            .collect();
        let counts = counts?;
        Some((counts.iter().copied().max()?, counts.iter().sum()))
    };
    (least - BELOW..=most)
        .filter(|power| *power != 0)
        .filter_map(|power| Some((digits(power)?, -power)))
        .filter(|((longest, _), _)| *longest <= MOST_DIGITS)
        .min()
        .map(|(_, power)| -power)
}

#[cfg(test)]
mod tests {
    use super::common;
    use crate::formula::Printed;

    #[test]
    fn a_column_takes_the_power_that_reads_shortest() {
        let column = |values: &[f64]| -> Vec<Printed> {
            values
                .iter()
                .map(|value| Printed::of(*value, 4, 4, 0.0))
                .collect()
        };
        #[rustfmt::skip]
        let rows: [(&[f64], Option<i32>); 8] = [
            (&[814_600.0, 0.0, 1_157_000.0],  Some(5)),
            (&[80.0, 0.0, 1157.0],            None),
            (&[814_600.0],                    Some(5)),
            (&[814_600.0, 13.58],             Some(2)),
            (&[814_600.0, 0.001_358],         None),
            (&[2e6, 814_600.0],               Some(6)),
            (&[5.123e-4, 0.012_34],           Some(-4)),
            (&[8.146e5, 1.157e14],            None),
        ];
        for (values, power) in rows {
            assert_eq!(common(&column(values)), power, "{values:?}");
        }
    }
}
