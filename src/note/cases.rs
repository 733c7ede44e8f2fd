//! All cases and checks, the worst point of each: rows for the identity and for `cases.csv`.

use super::calculation::{Calculation, Outcome};
use super::margins::check_name;
use super::trace::Trace;
use crate::criteria::Governing;
use crate::formula::Printed;

/// Significant digits of a number in `cases.csv` and in the identity.
const DIGITS: usize = 6;

/// The worst points of one case, one for each strength check that takes it.
pub(super) fn of_case<'c>(
    calculation: &'c Calculation<'_>,
    case: usize,
) -> Vec<(String, &'c Governing, String)> {
    let mut found = Vec::new();
    for outcome in &calculation.outcomes {
        let Outcome::Assessed(asked) = outcome else {
            continue;
        };
        for strength in &asked.strength {
            // They stand in file order.
            let found_at = strength.per_case.binary_search_by_key(&case, |at| at.case);
            if let Ok(at) = found_at.map(|index| &strength.per_case[index]) {
                let part = at
                    .part
                    .map(|turn| format!(", {}", turn.word()))
                    .unwrap_or_default();
                let dim = asked.sheet.dim(&asked.sheet.checks[strength.check].demand);
                let unit = dim.map_or(String::new(), |dim| {
                    calculation.joint.units.value.label(dim)
                });
                let name = check_name(asked, strength.check);
                found.push((format!("{name}{part}"), at, unit));
            }
        }
    }
    found
}

/// A number as both places print it.
fn number(value: f64) -> String {
    Printed::of(value, DIGITS, DIGITS, 0.0).algebra()
}

/// Printed rows of all cases and limits, for the identity.
pub(super) fn rows(calculation: &Calculation<'_>) -> Vec<Vec<String>> {
    let mut rows = Vec::new();
    for (index, case) in calculation.joint.loads.cases.iter().enumerate() {
        for (check, at, _) in of_case(calculation, index) {
            rows.push(vec![
                case.name.value.clone(),
                check,
                number(at.demand),
                number(at.capacity),
            ]);
        }
    }
    for outcome in &calculation.outcomes {
        match outcome {
            Outcome::Assessed(asked) => rows.extend(asked.limits.iter().map(|limit| {
                vec![
                    asked.sheet.name.value.clone(),
                    number(limit.value),
                    number(limit.bound),
                ]
            })),
            Outcome::Refused(refusal) => {
                rows.push(vec![refusal.clause.clone(), refusal.reason.clone()])
            }
        }
    }
    rows
}

/// The trace's cases as CSV (RFC 4180).
pub(super) fn csv(trace: &Trace) -> String {
    let unit = &trace.units;
    let mut text = format!(
        "case,level,check,point,x ({0}),y ({0}),z ({0}),demand,capacity,unit,utilisation,margin\r\n",
        unit.length
    );
    for case in &trace.cases {
        for check in &case.checks {
            let mut cells = vec![
                quoted(&case.case),
                case.level.to_owned(),
                quoted(&check.check),
                quoted(&check.point),
            ];
            cells.extend(
                check
                    .position
                    .iter()
                    .chain([&check.demand, &check.capacity])
                    .map(|value| plain_number(*value)),
            );
            cells.push(quoted(&check.unit));
            cells.push(check.utilisation.map_or(String::new(), plain_number));
            cells.push(check.margin.map_or_else(
                || check.reason.as_deref().map_or(String::new(), quoted),
                plain_number,
            ));
            text.push_str(&cells.join(","));
            text.push_str("\r\n");
        }
    }
    text
}

/// A number for spreadsheets: six digits, with `e` for powers of ten.
fn plain_number(value: f64) -> String {
    let printed = Printed::of(value, DIGITS, DIGITS, 1e-12);
    let sign = if printed.negative { "-" } else { "" };
    match printed.exponent {
        Some(exponent) => format!("{sign}{}e{exponent}", printed.mantissa),
        None => format!("{sign}{}", printed.mantissa),
    }
}

/// A text as a CSV cell; a leading sign that spreadsheets would take for a formula is kept as text.
fn quoted(text: &str) -> String {
    let text = if text.starts_with(['=', '+', '-', '@']) {
        format!("'{text}")
    } else {
        text.to_owned()
    };
    if text.contains([',', '"', '\n', '\r']) {
        format!("\"{}\"", text.replace('"', "\"\""))
    } else {
        text
    }
}
