//! A sheet in words: what it takes, where its needs come from, what stands where nobody gives a value.

use super::from::{From, PointField, Property, RunField, Which};
use super::sheet::{Need, Scope, Sheet, Stated};

impl Sheet {
    /// Levels, places, welds and ends that the sheet takes.
    #[must_use]
    pub fn takes_what(&self) -> String {
        let mut parts = Vec::new();
        let levels: Vec<&str> = self.levels.iter().map(|level| level.word()).collect();
        parts.push(match self.scope {
            Scope::Point => format!("every point of every {} case", levels.join(" or ")),
            Scope::Run => "every run, without loads".to_owned(),
        });
        if self.each_part {
            parts.push("attached and base part in turn".to_owned());
        }
        let welds: Vec<&str> = self.welds.iter().map(|weld| weld.says()).collect();
        parts.push(format!("run is {}", welds.join(" or ")));
        let ends: Vec<&str> = self.ends.iter().map(|end| end.word()).collect();
        parts.push(if ends.is_empty() {
            "free ends of any kind".to_owned()
        } else {
            format!("free ends {}", ends.join(" or "))
        });
        parts.join("; ")
    }
}

impl Need {
    /// Where it comes from, in the order in which places are tried, as the sheet writes them.
    #[must_use]
    pub fn places(&self) -> String {
        let from: Vec<String> = self.from.iter().map(place).collect();
        from.join(", else ")
    }

    /// Its default or the clause's own value, and its bounds; empty if it has none.
    #[must_use]
    pub fn limits(&self) -> String {
        let mut parts: Vec<String> = self.stated.iter().map(value).collect();
        for (bound, words) in [(&self.least, "at least"), (&self.most, "at most")] {
            parts.extend(bound.iter().map(|bound| format!("{words} {}", bound.value)));
        }
        parts.join("; ")
    }
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
