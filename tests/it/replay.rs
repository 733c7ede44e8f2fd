//! The promise of the trace: whoever evaluates the printed numbers of a line gets its printed result.
//!
//! The evaluator is not ours (exmex). Every joint of `joints/` is replayed here, four hundred
//! random ones in `settle`.

use crate::notes::demo;
use crate::schema::departures;
use seamnote::project::{complete_joint, read_surroundings, read_told};
use serde_json::Value;
use std::collections::{BTreeMap, BTreeSet};

/// Rounding of the replay itself, in units of the last printed digit.
const HAIR: f64 = 1e-6;

/// What the replay of a trace found.
#[derive(Debug, Default)]
pub(crate) struct Replayed {
    /// Lines whose printed numbers were evaluated.
    pub(crate) lines: usize,
    /// Lines whose symbols were evaluated with the full values.
    pub(crate) symbols: usize,
    /// Most significant digits of a computed line, and its id.
    pub(crate) digits: (usize, String),
    /// Largest miss in units of the last digit, and its id.
    pub(crate) miss: (f64, String),
    /// Lines that print 0 where their printed numbers or their value say otherwise.
    pub(crate) zeros: Vec<String>,
    /// What else does not hold, one line each.
    pub(crate) faults: Vec<String>,
}

impl Replayed {
    /// Keeps a fault of a line, apart if the line prints 0.
    fn tell(&mut self, is_zero: bool, fault: String) {
        if is_zero {
            self.zeros.push(fault);
        } else {
            self.faults.push(fault);
        }
    }
}

/// A number as printed: its value, one unit in its last digit, its significant digits.
pub(crate) fn keyed(printed: &str) -> (f64, f64, usize) {
    let (mantissa, exponent) = match printed.split_once("*10^") {
        Some((mantissa, exponent)) => (
            mantissa,
            exponent.trim_matches(|c| c == '(' || c == ')').to_owned(),
        ),
        None => (printed, "0".to_owned()),
    };
    let number = |text: String| -> f64 {
        text.parse()
            .unwrap_or_else(|_| panic!("{printed} is no printed number"))
    };
    let decimals = mantissa.split_once('.').map_or(0, |(_, after)| after.len());
    let power: i64 = exponent.parse().expect("a whole exponent");
    let unit = number(format!("1e{}", power - i64::try_from(decimals).unwrap()));
    let figures: String = mantissa.chars().filter(char::is_ascii_digit).collect();
    let mut figures = figures.trim_start_matches('0');
    if decimals == 0 {
        figures = figures.trim_end_matches('0');
    }
    (
        number(format!("{mantissa}e{exponent}")),
        unit,
        figures.len(),
    )
}

/// The value of plain algebra by an evaluator that is not ours.
fn evaluate(algebra: &str) -> Result<f64, String> {
    exmex::eval_str::<f64>(&algebra.replace("pi", "π")).map_err(|fault| fault.to_string())
}

/// Replays every line of a trace and holds its ids, uses and values against each other.
pub(crate) fn replay(trace: &Value) -> Replayed {
    let mut found = Replayed::default();
    let steps = trace["steps"].as_array().expect("a trace has steps");
    let mut known: BTreeMap<&str, &Value> = BTreeMap::new();
    for step in steps {
        let id = step["id"].as_str().unwrap();
        for used in step["uses"].as_array().unwrap() {
            if !known.contains_key(used.as_str().unwrap()) {
                found
                    .faults
                    .push(format!("{id}: uses {used}, which does not stand before it"));
            }
        }
        numbers(step, id, &mut found);
        symbols(step, id, &known, &mut found);
        if known.insert(id, step).is_some() {
            found.faults.push(format!("{id}: two lines have this id"));
        }
    }
    found
}

/// The printed numbers give the printed result, and the printed result is the value rounded.
fn numbers(step: &Value, id: &str, found: &mut Replayed) {
    let printed = step["printed"].as_str().unwrap();
    let (value, unit, digits) = keyed(printed);
    let kind = step["kind"].as_str().unwrap();
    if kind != "given" && digits > found.digits.0 {
        found.digits = (digits, format!("{id} = {printed}"));
    }
    let is_zero = value == 0.0;
    // A line that prints 0 must not read as another whole number.
    let bound = if is_zero { 0.5 } else { 1.0 };
    if let Some(algebra) = step["numbers"].as_str() {
        found.lines += 1;
        match evaluate(algebra) {
            Ok(replayed) => {
                let miss = (replayed - value).abs() / unit;
                if miss > found.miss.0 && !is_zero {
                    found.miss = (miss, format!("{id}: {algebra} = {replayed}, not {printed}"));
                }
                if miss.is_nan() || miss > bound + HAIR {
                    let fault = format!("{id}: {algebra} = {replayed}, not {printed}");
                    found.tell(is_zero, fault);
                }
            }
            Err(fault) => found.faults.push(format!("{id}: {algebra}: {fault}")),
        }
    } else if kind == "step" || kind == "converted" {
        found.faults.push(format!("{id}: a {kind} without numbers"));
    }
    if let Some(full) = step["value"].as_f64() {
        let full = if step["unit"] == "deg" {
            full.to_degrees()
        } else {
            full
        };
        // Half a unit, and what is lost where the value stands at the edge of it; a margin is rounded
        // down, a utilisation up, each by less than a unit.
        let side = if id.ends_with(".margin") {
            full - value
        } else if id.ends_with(".utilisation") {
            value - full
        } else {
            0.0
        };
        let one_sided = side >= -1e-12 * full.abs() && side > 0.0;
        let most = if one_sided { 1.0 } else { 0.5 };
        if (full - value).abs() > most * unit * (1.0 + HAIR) + 1e-12 * full.abs() {
            let fault = format!("{id}: prints {printed}, but holds {full}");
            found.tell(is_zero, fault);
        }
    } else if kind != "bound" {
        found.faults.push(format!("{id}: no value"));
    }
}

/// The symbols, taken at the full values of the lines used, give the full value.
fn symbols(step: &Value, id: &str, known: &BTreeMap<&str, &Value>, found: &mut Replayed) {
    let (Some(formula), Some(value)) = (step["formula"].as_str(), step["value"].as_f64()) else {
        return;
    };
    // Conditions, tables of words and constants with units are no arithmetic.
    let plain =
        !formula.contains("lookup(") && !formula.contains("when(") && !formula.contains(' ');
    if !plain {
        return;
    }
    let mut values: BTreeMap<&str, f64> = BTreeMap::new();
    for used in step["uses"].as_array().unwrap() {
        let Some(used) = known.get(used.as_str().unwrap()) else {
            return;
        };
        let (symbol, value) = (
            used["symbol"].as_str().unwrap(),
            used["value"].as_f64().unwrap(),
        );
        // Two lines may share a symbol, as the strengths of two parts do.
        if values
            .insert(symbol, value)
            .is_some_and(|other| other.to_bits() != value.to_bits())
        {
            return;
        }
    }
    let Some(algebra) = with_values(formula, &values) else {
        found
            .faults
            .push(format!("{id}: {formula} has a symbol that is not used"));
        return;
    };
    found.symbols += 1;
    let (printed, unit, _) = keyed(step["printed"].as_str().unwrap());
    // Differences of nearly equal numbers lose digits, but none that is printed.
    let allowed = if printed == 0.0 {
        let largest = values
            .values()
            .fold(1.0_f64, |size, value| size.max(value.abs()));
        (1e-6 * value.abs()).max(1e-12 * largest)
    } else {
        1e-3 * in_radians(step, unit)
    };
    match evaluate(&algebra) {
        Ok(replayed) if (replayed - value).abs() <= allowed => {}
        Ok(replayed) => found.faults.push(format!(
            "{id}: {formula}, {algebra} = {replayed}, not {value}"
        )),
        Err(fault) => found.faults.push(format!("{id}: {algebra}: {fault}")),
    }
}

/// A quantity as printed in the unit of the full value.
fn in_radians(step: &Value, printed: f64) -> f64 {
    if step["unit"] == "deg" {
        printed.to_radians()
    } else {
        printed
    }
}

/// A formula with its symbols replaced by numbers; `None` if one of them is unknown.
fn with_values(formula: &str, values: &BTreeMap<&str, f64>) -> Option<String> {
    const FUNCTIONS: [&str; 9] = [
        "sqrt", "sin", "cos", "tan", "atan2", "min", "max", "abs", "pi",
    ];
    let is_name = |c: char| c.is_alphanumeric() || c == '_';
    let mut out = String::new();
    let mut rest = formula;
    while let Some(c) = rest.chars().next() {
        let end = rest
            .find(|c| !is_name(c))
            .unwrap_or(rest.len())
            .max(c.len_utf8());
        let (token, after) = rest.split_at(end);
        rest = after;
        let is_number = token.starts_with(|c: char| c.is_ascii_digit());
        if !is_name(c) || is_number || FUNCTIONS.contains(&token) {
            out.push_str(token);
        } else {
            out.push_str(&format!("({})", values.get(token)?));
        }
    }
    Some(out)
}

#[test]
fn printed_numbers_are_read_as_keyed() {
    #[rustfmt::skip]
    let rows = [
        ("-4.243*10^6", -4.243e6, 1e3,   4),
        ("1*10^(-9)",   1e-9,     1e-9,  1),
        ("0.0310",      0.031,    1e-4,  3),
        ("1400",        1400.0,   1.0,   2),
        ("0",           0.0,      1.0,   0),
    ];
    for (printed, value, unit, digits) in rows {
        let (got, got_unit, got_digits) = keyed(printed);
        assert!(
            (got - value).abs() <= 1e-15 * value.abs(),
            "{printed}: {got}"
        );
        assert!(
            (got_unit / unit - 1.0).abs() < 1e-12,
            "{printed}: unit {got_unit}"
        );
        assert_eq!(got_digits, digits, "{printed}: digits");
    }
}

/// The replay must be able to fail: each kind of fault is found.
#[test]
fn a_line_that_does_not_replay_is_found() {
    let line = |id: &str, numbers: &str, value: f64, printed: &str, uses: &[&str]| {
        serde_json::json!({
            "id": id, "kind": "step", "symbol": id, "formula": "a/3", "numbers": numbers,
            "value": value, "printed": printed, "unit": "mm", "uses": uses,
        })
    };
    let given = serde_json::json!({
        "id": "a", "kind": "given", "symbol": "a", "formula": null, "numbers": null, "value": 2.0,
        "printed": "2", "unit": "mm", "uses": [],
    });
    let third = 2.0 / 3.0;
    #[rustfmt::skip]
    let rows = [
        (line("b", "(2/3)", third, "0.667", &["a"]),       0),
        (line("b", "(2/3)", third, "0.669", &["a"]),       2),
        (line("b", "(2.1/3)", third, "0.667", &["a"]),     1),
        (line("b", "(2/3)", 0.66667, "0.667", &["a"]),     1),
        (line("b", "(2/3)", third, "0.667", &[]),          1),
        (line("b", "(2/3)", third, "0.667", &["c"]),       1),
        (line("b", "(2/)", third, "0.667", &["a"]),        1),
        (line("a", "(2/3)", third, "0.667", &["a"]),       1),
    ];
    for (line, faults) in rows {
        let found = replay(&serde_json::json!({"steps": [given, line]}));
        assert_eq!(found.faults.len(), faults, "{line}: {found:?}");
        assert!(found.zeros.is_empty(), "{line}: {found:?}");
    }
    let zero = serde_json::json!({"steps": [given, line("b", "(2/3)", third, "0", &["a"])]});
    let found = replay(&zero);
    assert_eq!(found.zeros.len(), 2, "a false zero: {found:?}");
}

#[test]
fn every_line_of_every_demo_note_replays() {
    for (joint, produced) in demo() {
        let trace: Value = serde_json::from_str(&produced.note.trace_json()).unwrap();
        let found = replay(&trace);
        assert!(
            found.faults.is_empty() && found.zeros.is_empty(),
            "{}:\n{}\n{}",
            joint.stem,
            found.faults.join("\n"),
            found.zeros.join("\n")
        );
        // A note without a number has its geometry alone.
        let least = if produced.note.standing.margin.is_some() {
            40
        } else {
            20
        };
        assert!(
            found.lines > least && found.symbols > least,
            "{}: only {} lines were replayed, {} in symbols",
            joint.stem,
            found.lines,
            found.symbols
        );
    }
}

#[test]
fn every_demo_trace_conforms_to_its_schema() {
    let schema: Value = serde_json::from_str(seamnote::note::TRACE_SCHEMA).unwrap();
    for (joint, produced) in demo() {
        let trace: Value = serde_json::from_str(&produced.note.trace_json()).unwrap();
        let found = departures(&schema, &trace);
        assert!(found.is_empty(), "{}:\n{}", joint.stem, found.join("\n"));
    }
}

/// Every case is in the trace and in the table of cases, each with the same checks.
#[test]
fn every_case_of_a_demo_joint_is_in_its_trace() {
    for (joint, produced) in demo() {
        let trace: Value = serde_json::from_str(&produced.note.trace_json()).unwrap();
        let surroundings = read_surroundings(&joint.folder).unwrap();
        let completed = complete_joint(joint, &surroundings).unwrap();
        let told = read_told(&completed, &surroundings).unwrap();
        let names: Vec<&str> = told
            .loads
            .cases
            .iter()
            .map(|case| case.name.value.as_str())
            .collect();
        let cases = trace["cases"].as_array().unwrap();
        let traced: Vec<&str> = cases
            .iter()
            .map(|case| case["case"].as_str().unwrap())
            .collect();
        assert_eq!(traced, names, "{}: cases of the trace", joint.stem);
        let mut checks: BTreeMap<&str, BTreeSet<Vec<&str>>> = BTreeMap::new();
        for case in cases {
            let of_case = case["checks"].as_array().unwrap().iter();
            checks
                .entry(case["level"].as_str().unwrap())
                .or_default()
                .insert(
                    of_case
                        .map(|check| check["check"].as_str().unwrap())
                        .collect(),
                );
        }
        assert!(
            checks.values().all(|lists| lists.len() == 1),
            "{}: cases of one level have the same checks: {checks:?}",
            joint.stem
        );
    }
}
