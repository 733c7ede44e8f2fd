//! Symbols: a base letter with a structured index, declared and never guessed from underscores.

/// A symbol: a base and the parts of its index.
///
/// The base is one letter or the name of a Greek letter. A part of the index that is one letter is a
/// variable (italic); the name of a Greek letter, `perp` or `par` is that sign; anything else is
/// upright text.
#[derive(Clone, PartialEq, Eq, Debug, PartialOrd, Ord)]
pub struct Symbol {
    base: String,
    index: Vec<String>,
}

/// Names of signs: plain name, Typst, LaTeX, spoken.
const SIGNS: [(&str, &str, &str, &str); 27] = [
    ("MS", "\"MS\"", "\\mathrm{MS}", "margin of safety"),
    ("alpha", "alpha", "\\alpha", "alpha"),
    ("beta", "beta", "\\beta", "beta"),
    ("gamma", "gamma", "\\gamma", "gamma"),
    ("delta", "delta", "\\delta", "delta"),
    ("epsilon", "epsilon.alt", "\\varepsilon", "epsilon"),
    ("eta", "eta", "\\eta", "eta"),
    ("theta", "theta", "\\theta", "theta"),
    ("kappa", "kappa", "\\kappa", "kappa"),
    ("lambda", "lambda", "\\lambda", "lambda"),
    ("mu", "mu", "\\mu", "mu"),
    ("nu", "nu", "\\nu", "nu"),
    ("xi", "xi", "\\xi", "xi"),
    ("rho", "rho", "\\rho", "rho"),
    ("sigma", "sigma", "\\sigma", "sigma"),
    ("tau", "tau", "\\tau", "tau"),
    ("phi", "phi", "\\phi", "phi"),
    ("psi", "psi", "\\psi", "psi"),
    ("omega", "omega", "\\omega", "omega"),
    ("Delta", "Delta", "\\Delta", "capital delta"),
    ("Omega", "Omega", "\\Omega", "capital omega"),
    ("Sigma", "Sigma", "\\Sigma", "capital sigma"),
    ("Phi", "Phi", "\\Phi", "capital phi"),
    ("Psi", "Psi", "\\Psi", "capital psi"),
    ("perp", "perp", "\\perp", "perpendicular"),
    ("par", "parallel", "\\parallel", "parallel"),
    ("ell", "ell", "\\ell", "ell"),
];

/// The row of a sign, if `name` is one.
fn sign(name: &str) -> Option<&'static (&'static str, &'static str, &'static str, &'static str)> {
    SIGNS.iter().find(|row| row.0 == name)
}

/// Whether a text is one letter.
fn is_letter(text: &str) -> bool {
    text.len() == 1 && text.starts_with(|c: char| c.is_ascii_alphabetic())
}

/// The characters that upright text of an index may hold.
fn is_index_char(c: char) -> bool {
    c.is_ascii_alphanumeric() || matches!(c, '.' | ',' | '-' | '+')
}

impl Symbol {
    /// A symbol from its base and index parts.
    ///
    /// # Panics
    ///
    /// If the program itself declares a symbol that [`Symbol::declared`] refuses.
    #[must_use]
    pub fn of(base: &str, index: &[&str]) -> Self {
        let index = index.iter().map(|part| (*part).to_owned()).collect();
        Self::declared(base, index).expect("the program's own symbols are well formed")
    }

    /// The symbol without the number that tells one run's value from another's.
    #[must_use]
    pub fn family(&self) -> Self {
        let mut family = self.clone();
        let is_number = |part: &String| part.chars().all(|c| c.is_ascii_digit());
        if family.index.last().is_some_and(is_number) {
            family.index.pop();
        }
        family
    }

    /// A symbol as a user declares it, or a text saying what is wrong with it.
    ///
    /// # Errors
    ///
    /// If the base is neither one letter nor a Greek name, or an index part has odd characters.
    pub fn declared(base: &str, index: Vec<String>) -> Result<Self, String> {
        if !is_letter(base) && sign(base).is_none() {
            return Err(format!(
                "`{base}` is neither one letter nor the name of a Greek letter"
            ));
        }
        match index
            .iter()
            .find(|part| part.is_empty() || part.len() > 16 || !part.chars().all(is_index_char))
        {
            Some(part) => Err(format!(
                "`{part}` cannot stand in an index: letters and digits only"
            )),
            None => Ok(Self {
                base: base.to_owned(),
                index,
            }),
        }
    }

    /// The symbol with one more part in its index, such as the number of a run.
    #[must_use]
    pub fn with(&self, part: &str) -> Self {
        let mut longer = self.clone();
        longer.index.push(part.to_owned());
        longer
    }

    /// The plain name, as in the trace's algebra: `sigma_perp`, `I_xx`, `t_1`.
    #[must_use]
    pub fn plain(&self) -> String {
        let mut plain = self.base.clone();
        for (at, part) in self.index.iter().enumerate() {
            let tight = at > 0 && self.is_tight(at);
            if !tight {
                plain.push('_');
            }
            plain.extend(
                part.chars()
                    .map(|c| if c.is_ascii_alphanumeric() { c } else { '_' }),
            );
        }
        plain
    }

    /// Whether part `at` of the index follows its predecessor without a comma: letters of axes do.
    fn is_tight(&self, at: usize) -> bool {
        let pair = (self.index[at - 1].as_str(), self.index[at].as_str());
        matches!(
            pair,
            ("x" | "y" | "z", "x" | "y" | "z") | ("u" | "v", "u" | "v")
        )
    }

    /// The symbol in Typst maths.
    #[must_use]
    pub fn typst(&self) -> String {
        let part = |text: &str| match sign(text) {
            Some(row) => row.1.to_owned(),
            None if is_letter(text) || text.bytes().all(|c| c.is_ascii_digit()) => text.to_owned(),
            None => format!("\"{text}\""),
        };
        self.join(part, " ", "#sep()", |base, index| {
            format!("{base}_({index})")
        })
    }

    /// The symbol in LaTeX maths.
    #[must_use]
    pub fn latex(&self) -> String {
        let part = |text: &str| match sign(text) {
            Some(row) => row.2.to_owned(),
            None if is_letter(text) => text.to_owned(),
            None if text.chars().all(|c| c.is_ascii_digit()) => text.to_owned(),
            None => format!("\\mathrm{{{text}}}"),
        };
        self.join(part, " ", ",", |base, index| format!("{base}_{{{index}}}"))
    }

    /// The symbol in spoken words.
    #[must_use]
    pub fn words(&self) -> String {
        let part = |text: &str| sign(text).map_or_else(|| text.to_owned(), |row| row.3.to_owned());
        self.join(part, " ", " ", |base, index| format!("{base} {index}"))
    }

    /// The parts for styled running text: base, and index as one text with an italic flag for each part.
    #[must_use]
    pub fn parts(&self) -> (&str, &[String]) {
        (&self.base, &self.index)
    }

    fn join(
        &self,
        part: impl Fn(&str) -> String,
        tight: &str,
        apart: &str,
        whole: impl Fn(String, String) -> String,
    ) -> String {
        let base = part(&self.base);
        if self.index.is_empty() {
            return base;
        }
        let mut index = String::new();
        for (at, text) in self.index.iter().enumerate() {
            if at > 0 {
                index.push_str(if self.is_tight(at) { tight } else { apart });
            }
            index.push_str(&part(text));
        }
        whole(base, index)
    }

    /// A bound of its printed width, in widths of a digit; measured on the faces of the page.
    #[must_use]
    pub fn width(&self) -> f64 {
        let letter = |text: &str| match text {
            "M" | "W" | "MS" => 2.2,
            "m" | "w" => 1.9,
            text if text.starts_with(|c: char| c.is_ascii_uppercase()) => 1.6,
            _ => 1.3,
        };
        let part = |text: &str| {
            if is_letter(text) || sign(text).is_some() {
                0.72 * letter(text)
            } else {
                0.85 * text.len() as f64
            }
        };
        let commas = (1..self.index.len())
            .filter(|at| !self.is_tight(*at))
            .count();
        letter(&self.base)
            + self.index.iter().map(|text| part(text)).sum::<f64>()
            + 0.55 * commas as f64
    }
}
