//! Explains a clause sheet: what it takes, what it needs, its steps in plain algebra, its limits.

use crate::criteria::{
    Capacity, CodeTable, From, Need, PointField, Property, RunField, Scope, Sheet, Side, Stated,
    Which,
};

/// The whole sheet as text.
pub(super) fn says(sheet: &Sheet) -> String {
    let mut out = format!("sheet {}\n  {}\n", sheet.name.value, sheet.title.value);
    let status = sheet.source.status.word();
    out += &format!("  source  {} ({status})\n", sheet.source.cited());
    out += &format!("  takes   {}\n", takes(sheet));
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

/// Levels, places, welds and ends that the sheet takes.
fn takes(sheet: &Sheet) -> String {
    let mut parts = Vec::new();
    let levels: Vec<&str> = sheet.levels.iter().map(|level| level.word()).collect();
    parts.push(match sheet.scope {
        Scope::Point => format!("every point of every {} case", levels.join(" or ")),
        Scope::Run => "every run, without loads".to_owned(),
    });
    if sheet.each_part {
        parts.push("attached and base part in turn".to_owned());
    }
    let welds: Vec<&str> = sheet.welds.iter().map(|weld| weld.says()).collect();
    parts.push(format!("run is {}", welds.join(" or ")));
    let ends: Vec<&str> = sheet.ends.iter().map(|end| end.word()).collect();
    parts.push(if ends.is_empty() {
        "free ends of any kind".to_owned()
    } else {
        format!("free ends {}", ends.join(" or "))
    });
    parts.join("; ")
}

fn need(need: &Need) -> String {
    let from: Vec<String> = need.from.iter().map(place).collect();
    let mut out = format!(
        "{}: {}, from {}    {}",
        need.name.value,
        need.kind.says(),
        from.join(", else "),
        need.says
    );
    if let Some(stated) = &need.stated {
        out += &format!(" [{}]", value(stated));
    }
    for (bound, words) in [(&need.least, "at least"), (&need.most, "at most")] {
        if let Some(bound) = bound {
            out += &format!(", {words} {}", bound.value);
        }
    }
    out
}

/// A default or the clause's own value, with its source.
fn value(stated: &Stated) -> String {
    let (inch, metric) = (&stated.text.inch, &stated.text.metric);
    let mut out = match (inch, metric) {
        (Some(inch), Some(metric)) if inch.value == metric.value => inch.value.clone(),
        (Some(inch), Some(metric)) => format!("{}; metric {}", inch.value, metric.value),
        (Some(one), None) | (None, Some(one)) => one.value.clone(),
        (None, None) => String::new(),
    };
    if let Some(source) = &stated.source {
        out += &format!(", {source} ({})", stated.status.word());
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

/// Where a need comes from, as the sheet writes it.
fn place(from: &From) -> String {
    match from {
        From::Point(field) => {
            let row = PointField::WORDS.iter().find(|row| row.1 == *field);
            format!("point.{}", row.map_or("", |row| row.0))
        }
        From::Run(field) => {
            let row = RunField::WORDS.iter().find(|row| row.1 == *field);
            format!("run.{}", row.map_or("", |row| row.0))
        }
        From::Part(which, property) => {
            let group = match which {
                Which::InTurn => "part",
                Which::Attached => "attached",
                Which::Base => "base",
                Which::Thinner => "thinner",
                Which::Thicker => "thicker",
                Which::Weaker => "weaker",
            };
            format!("{group}.{}", named(property))
        }
        From::Filler(property) => format!("filler.{}", named(property)),
        From::Check(name) => format!("check.{name}"),
        From::Clause => "the clause".to_owned(),
    }
}

fn named(property: &Property) -> &str {
    match property {
        Property::Material => "material",
        Property::Thickness => "thickness",
        Property::Named(name) => name,
    }
}
