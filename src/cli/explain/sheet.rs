//! Explains a clause sheet: what it takes, what it needs, its steps in plain algebra, its limits.

use crate::criteria::{Capacity, CodeTable, From, Library, Need, Sheet, Side};

/// The whole sheet as text.
pub(super) fn says(sheet: &Sheet) -> String {
    let mut out = format!("sheet {}\n  {}\n", sheet.name.value, sheet.title.value);
    let status = sheet.source.status.word();
    out += &format!("  source  {} ({status})\n", sheet.source.cited());
    out += &format!("  takes   {}\n", sheet.takes_what());
    let covers: Vec<&str> = sheet.covers.iter().map(|path| path.word()).collect();
    out += &format!("  covers  {}\n", covers.join(", "));
    section(&mut out, "needs", sheet.needs.iter().map(need));
    section(&mut out, "tables", sheet.tables.iter().map(table));
    let steps = sheet.steps.iter().map(|step| {
        format!(
            "{} = {}    {}",
            step.name.value, step.formula.value, step.says
        )
    });
    section(&mut out, "steps", steps);
    let checks = sheet.checks.iter().map(|check| {
        let capacity = match &check.capacity {
            Capacity::Name(name) | Capacity::Number(name, _) => name,
        };
        let tail = if check.proportional {
            ""
        } else {
            "; margin by load factor"
        };
        format!(
            "{}: {} <= {capacity}    {}{tail}",
            check.name.value, check.demand, check.says
        )
    });
    section(&mut out, "checks", checks);
    let limits = sheet.limits.iter().map(|limit| {
        let sign = match limit.side {
            Side::AtLeast => ">=",
            Side::AtMost => "<=",
        };
        format!(
            "{}: {} {sign} {}    {}",
            limit.name.value, limit.value, limit.bound, limit.says
        )
    });
    section(&mut out, "limits", limits);
    let holds = sheet
        .validity
        .iter()
        .map(|condition| format!("{}    {}", condition.holds.value, condition.says));
    section(&mut out, "valid where", holds);
    section(
        &mut out,
        "assumes",
        sheet.assumptions.iter().map(|told| told.value.clone()),
    );
    let mark = sheet.mark().map(|mark| format!("to be verified: {mark}"));
    let cautions = sheet.cautions.iter().map(|told| told.value.clone());
    section(&mut out, "cautions", cautions.chain(mark));
    out
}

fn section(out: &mut String, head: &str, lines: impl Iterator<Item = String>) {
    let lines: Vec<String> = lines.collect();
    if !lines.is_empty() {
        *out += &format!("  {head}\n    {}\n", lines.join("\n    "));
    }
}

fn need(need: &Need) -> String {
    let mut out = format!(
        "{}: {}, from {}    {}",
        need.name.value,
        need.kind.says(),
        need.places(),
        need.says
    );
    let limits = need.limits();
    if !limits.is_empty() {
        out += &format!(" [{limits}]");
    }
    out
}

fn table(table: &CodeTable) -> String {
    let variants = [("inch", &table.rows.inch), ("metric", &table.rows.metric)];
    let same = table.rows.inch == table.rows.metric;
    let mut out = format!("{}, {}", table.name.value, table.cited);
    for (system, rows) in variants.into_iter().skip(usize::from(same)) {
        let Some(rows) = rows else { continue };
        let rows: Vec<String> = rows
            .iter()
            .map(|(key, value)| format!("{} → {}", key.value, value.value))
            .collect();
        let head = if same {
            String::new()
        } else {
            format!("{system}: ")
        };
        out += &format!("\n      {head}{}", rows.join("; "));
    }
    out
}

/// What a value is that a check gives to sheets, by sheet.
pub(super) fn value_says(name: &str, library: &Library) -> Option<String> {
    let given = |need: &&Need| {
        let by_check = |from: &From| matches!(from, From::Check(given) if given == name);
        need.from.iter().any(by_check)
    };
    let lines: Vec<String> = library
        .sheets()
        .filter_map(|sheet| {
            let told = sheet.needs.iter().find(given)?;
            let limits = told.limits();
            let tail = if limits.is_empty() {
                limits
            } else {
                format!(" [{limits}]")
            };
            Some(format!("  {}: {}{tail}", sheet.name.value, told.says))
        })
        .collect();
    (!lines.is_empty()).then(|| format!("value {name} of a check\n{}\n", lines.join("\n")))
}
