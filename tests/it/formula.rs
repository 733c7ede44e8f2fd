//! The formula engine: every reading of a formula, its dimension, and the digit rule.

use seamnote::formula::{
    Draft, Env, Key, Ledger, Origin, Row, RowKey, SumSet, Symbol, Table, Value,
};
use seamnote::quantity::{Dim, Given, UnitSet};

/// A ledger in N and mm with a few named inputs.
fn bench() -> (Ledger, Env) {
    let mut ledger = Ledger::new(UnitSet::NewtonMillimetre, 1000.0, 100.0);
    let mut env = Env::default();
    let inputs = [
        ("a", Symbol::of("a", &[]), "3", Dim::LENGTH),
        ("b", Symbol::of("b", &[]), "-4.25", Dim::LENGTH),
        ("F_x", Symbol::of("F", &["x"]), "1000", Dim::FORCE),
        ("n", Symbol::of("n", &[]), "7", Dim::NONE),
        ("psi", Symbol::of("psi", &[]), "60 deg", Dim::ANGLE),
        ("L_w", Symbol::of("L", &["w"]), "3400", Dim::LENGTH),
    ];
    for (name, symbol, text, dim) in inputs {
        let given = Given::parse(text, dim, UnitSet::NewtonMillimetre).unwrap();
        let value = ledger.given(name.to_owned(), symbol, name.to_owned(), &given, origin());
        env.bind(name, value);
    }
    (ledger, env)
}

fn origin() -> Origin {
    Origin::Method("test".to_owned())
}

fn step(ledger: &mut Ledger, env: &Env, id: &str, formula: &str) -> Value {
    let draft = Draft {
        id: id.to_owned(),
        symbol: Symbol::of("r", &[id]),
        says: String::new(),
        formula,
        origin: origin(),
        dim: None,
    };
    ledger
        .step(draft, env)
        .unwrap_or_else(|fault| panic!("{formula}: {fault}"))
}

/// The whole equation in Typst, lines joined.
fn typst(ledger: &Ledger, value: Value) -> String {
    ledger
        .equation(value)
        .lines
        .iter()
        .map(|line| line.typst.as_str())
        .collect::<Vec<_>>()
        .join(" / ")
}

/// Numbers of a step by an evaluator that is not ours.
fn other_evaluator(numbers: &str) -> f64 {
    exmex::eval_str::<f64>(&numbers.replace("pi", "π"))
        .unwrap_or_else(|fault| panic!("{numbers}: {fault}"))
}

/// Precedence and signs as in the algebra of ISO 80000-2 and of every textbook; -2^2 is -4.
#[test]
fn values_follow_the_rules_of_algebra() {
    let (mut ledger, env) = bench();
    #[rustfmt::skip]
    let rows: [(&str, f64); 14] = [
        ("-2^2",                                   -4.0),
        ("2^3^2",                                  512.0),
        ("2 - 3 - 4",                              -5.0),
        ("12/3/2",                                 2.0),
        ("2*3^2",                                  18.0),
        ("(1 + 2)*3",                              9.0),
        ("sqrt(a^2 + 16*(1 mm)^2)/(1 mm)",         5.0),
        ("sin(30 deg)",                            0.5),
        ("cos(psi)",                               0.5),
        ("L_w/(17 m)",                             0.2),
        ("min(n, 3, 9)",                           3.0),
        ("max(a, abs(b))/(1 mm)",                  4.25),
        ("when(a < 2 mm, 1, a < 4 mm, 2, otherwise, 3)", 2.0),
        ("psi/(1 deg)",                            60.0),
    ];
    for (at, (formula, value)) in rows.into_iter().enumerate() {
        let step = step(&mut ledger, &env, &at.to_string(), formula);
        let got = ledger.get(step).value;
        assert!((got - value).abs() < 1e-12, "{formula}: {got}, not {value}");
    }
}

/// Every reading of one formula: typeset with numbers, LaTeX, algebra of the trace.
#[test]
fn one_formula_has_every_reading() {
    let (mut ledger, env) = bench();
    #[rustfmt::skip]
    let rows = [
        // formula          typst                                                                   numbers of the trace
        ("F_x/(a*a)",       r##"r_(0) &= frac(F_(x), a a) = frac(#n("F_x", "1000"), #n("a", "3") dot #n("a", "3")) = #res("111.1", "", "MPa")"##,
                                                                                                   "(1000/(3*3))"),
        ("a - b",           r##"r_(1) &= a - b = #n("a", "3") - (-#n("b", "4.25")) = #res("7.25", "", "mm")"##, "(3-(-4.25))"),
        ("b^2",             r##"r_(2) &= b^(2) = (-#n("b", "4.25"))^(2) = #res("18.06", "", "mm^2")"##, "((-4.25)^2)"),
        ("2*a*sin(psi/2)",  r##"r_(3) &= 2 a sin(psi \/ 2) = 2 dot #n("a", "3") dot sin(#n("psi", "60")#u("°") \/ 2) = #res("3", "", "mm")"##,
                                                                                                   "((2*3)*sin(((60*pi/180)/2)))"),
        ("-(a + b)",        r##"r_(4) &= -(a + b) = -(#n("a", "3") + (-#n("b", "4.25"))) = #res("1.25", "", "mm")"##, "(-(3+(-4.25)))"),
        ("min(a, b)",       r##"r_(5) &= min(a, b) = min(#n("a", "3"), -#n("b", "4.25")) = #res("-4.25", "", "mm") quad ("the second governs")"##,
                                                                                                   "min(3,(-4.25))"),
        ("L_w/(17 m)",      r##"r_(6) &= frac(L_(w), 17 "m") = frac(#n("L_w", "3400"), 17 dot 10^(3)) = #res("0.2", "", "")"##,
                                                                                                   "(3400/(17*(10^3)))"),
    ];
    for (at, (formula, printed, numbers)) in rows.into_iter().enumerate() {
        let value = step(&mut ledger, &env, &at.to_string(), formula);
        assert_eq!(typst(&ledger, value), printed, "typst of {formula}");
        assert_eq!(
            ledger.numbers_algebra(value).unwrap(),
            numbers,
            "trace of {formula}"
        );
        let replayed = other_evaluator(numbers);
        let printed = ledger.printed(value);
        assert!(
            (replayed - printed.value()).abs() <= printed.unit_in_last(),
            "{formula}: {replayed}"
        );
    }
}

#[test]
fn a_sum_runs_over_its_set_and_is_written_out_in_the_trace() {
    let (mut ledger, mut env) = bench();
    let mut set = SumSet {
        index: "i".to_owned(),
        ..SumSet::default()
    };
    set.symbols.insert("t".to_owned(), Symbol::of("t", &[]));
    set.symbols.insert("L".to_owned(), Symbol::of("L", &[]));
    for (at, (t, l)) in [("4.2", "80"), ("5.6", "120"), ("4.2", "80")]
        .into_iter()
        .enumerate()
    {
        let mut member = std::collections::BTreeMap::new();
        for (name, text) in [("t", t), ("L", l)] {
            let given = Given::parse(text, Dim::LENGTH, UnitSet::NewtonMillimetre).unwrap();
            let symbol = Symbol::of(name, &[&(at + 1).to_string()]);
            let value = ledger.given(
                format!("{name}{at}"),
                symbol,
                String::new(),
                &given,
                origin(),
            );
            member.insert(name.to_owned(), value);
        }
        set.members.push(member);
    }
    env.sets.insert("runs".to_owned(), set);
    let value = step(&mut ledger, &env, "A", "sum(runs, t*L)");
    assert!((ledger.get(value).value - 1344.0).abs() < 1e-9, "the sum");
    assert_eq!(
        ledger.numbers_algebra(value).unwrap(),
        "((4.2*80)+(5.6*120)+(4.2*80))"
    );
    assert_eq!(
        ledger.formula_algebra(value).unwrap(),
        "((t_1*L_1)+(t_2*L_2)+(t_3*L_3))"
    );
    assert!(
        typst(&ledger, value).starts_with("r_(A) &= scripts(sum)_i t_(i) L_(i) = "),
        "{}",
        typst(&ledger, value)
    );
    assert_eq!(ledger.uses(value).len(), 6, "every operand is linked");
}

/// A table lookup states its row; bounds are inclusive; outside it refuses.
/// Values: AISC 360-16/-22 table J2.4 (least fillet size by thinner part, in), read at second hand
/// through the published check values.
#[test]
fn a_lookup_prints_its_row_and_refuses_outside() {
    let (mut ledger, mut env) = bench();
    let length = |text: &str| Given::parse(text, Dim::LENGTH, UnitSet::NewtonMillimetre).unwrap();
    let rows = [("6", "3"), ("13", "5"), ("19", "6")];
    let table = Table {
        name: "w_least".to_owned(),
        cited: "table J2.4".to_owned(),
        key: Key::Quantity(Dim::LENGTH),
        dim: Dim::LENGTH,
        rows: rows
            .iter()
            .map(|(bound, value)| Row {
                key: RowKey::UpTo(Some(length(bound))),
                value: length(value),
            })
            .collect(),
    };
    env.tables.insert("w_least".to_owned(), table);
    let value = step(&mut ledger, &env, "w", "lookup(w_least, 6 mm)");
    assert!(
        (ledger.get(value).value - 3.0).abs() < 1e-12,
        "the bound is inclusive"
    );
    assert!(
        typst(&ledger, value).contains("row: up to 6"),
        "{}",
        typst(&ledger, value)
    );
    let draft = Draft {
        id: "x".to_owned(),
        symbol: Symbol::of("x", &[]),
        says: String::new(),
        formula: "lookup(w_least, 20 mm)",
        origin: origin(),
        dim: None,
    };
    let fault = ledger.step(draft, &env).unwrap_err().to_string();
    assert!(
        fault.contains("20 is outside the table `w_least`, which covers up to 6, over 6 up to 13"),
        "{fault}"
    );
}

/// A formula of wrong dimension is refused with its text, the place and both dimensions.
#[test]
fn wrong_dimensions_are_refused_with_place_and_both_dimensions() {
    let (mut ledger, env) = bench();
    #[rustfmt::skip]
    let rows = [
        ("a + F_x",                 0..7,   "a length and a force cannot be added"),
        ("a^2 - a",                 0..7,   "an area and a length cannot be subtracted"),
        ("sin(a)",                  4..5,   "a length stands where an angle is needed"),
        ("min(a, n)",               7..8,   "a length and a plain number cannot be compared"),
        ("when(a < F_x, 1, otherwise, 2)", 9..12, "a length and a force cannot be compared"),
        ("when(a < b, a, otherwise, n)",   26..27, "a length and a plain number cannot be branches of one choice"),
        ("2^a",                     2..3,   "a length stands where a plain number is needed"),
        ("a^n",                     2..3,   "the exponent over a quantity with a unit must be a plain number"),
        ("psi + 2",                 0..7,   "an angle and a plain number cannot be added"),
    ];
    for (formula, span, text) in rows {
        let draft = Draft {
            id: "x".to_owned(),
            symbol: Symbol::of("x", &[]),
            says: String::new(),
            formula,
            origin: origin(),
            dim: None,
        };
        let fault = ledger.step(draft, &env).unwrap_err();
        assert_eq!(fault.span, span, "{formula}");
        assert_eq!(
            fault.to_string(),
            format!("{text}, in the formula `{formula}`")
        );
    }
    let draft = Draft {
        id: "x".to_owned(),
        symbol: Symbol::of("x", &[]),
        says: String::new(),
        formula: "F_x/a",
        origin: origin(),
        dim: Some(Dim::STRESS),
    };
    let fault = ledger.step(draft, &env).unwrap_err().to_string();
    assert_eq!(
        fault,
        "the formula gives a line load, but a stress is declared, in the formula `F_x/a`"
    );
}

#[test]
fn faults_of_syntax_say_what_is_needed() {
    #[rustfmt::skip]
    let rows = [
        ("(a + b",     "`)` is needed at the end"),
        ("a +",        "a value is needed at the end"),
        ("a $ b",      "`$` cannot stand here"),
        ("min(a)",     "`min` takes two operands or more"),
        ("log(a)",     "`log` is not a function; there are sqrt, sin, cos, tan, abs, atan2, min, max, sum, lookup, when"),
        ("17 parsec",  "`parsec` is not a unit"),
        ("when(a, b)", "one of `<`, `<=`, `>`, `>=` is needed here, not `,`"),
    ];
    for (formula, text) in rows {
        let fault = seamnote::formula::parse(formula).unwrap_err().to_string();
        assert_eq!(fault, format!("{text}, in the formula `{formula}`"));
    }
    let deep = format!("{}a{}", "(".repeat(500), ")".repeat(500));
    assert!(
        seamnote::formula::parse(&deep).is_err(),
        "nesting is bounded"
    );
}

/// The digit rule: a difference of near values raises its operands until the line replays.
#[test]
fn digits_rise_where_a_line_would_not_replay() {
    let (mut ledger, mut env) = bench();
    let long = step(&mut ledger, &env, "1", "a*sqrt(2)*1000");
    env.bind("long", long);
    let longer = step(&mut ledger, &env, "2", "a*sqrt(2)*1000 + a*sqrt(3)/50");
    env.bind("longer", longer);
    let small = step(&mut ledger, &env, "3", "longer - long");
    assert!(
        ledger.replay_miss(small).unwrap().unwrap() > 1.0,
        "four digits do not replay"
    );
    ledger.settle().unwrap();
    assert!(
        ledger.replay_miss(small).unwrap().unwrap() <= 1.0 + 1e-6,
        "settled digits replay"
    );
    let replayed = other_evaluator(&ledger.numbers_algebra(small).unwrap());
    let printed = ledger.printed(small);
    assert!(
        (replayed - printed.value()).abs() <= printed.unit_in_last() * (1.0 + 1e-6),
        "{replayed}"
    );
    assert!(
        ledger.printed(longer).mantissa.len() > 5,
        "the operand was raised: {:?}",
        ledger.printed(longer)
    );
}

/// Inputs in another unit are converted on a line of their own; decimals stay as typed.
#[test]
fn conversions_are_lines_that_replay() {
    #[rustfmt::skip]
    let rows = [
        // text        kind           set                        numbers                     printed
        ("-4.2 kN",    Dim::FORCE,    UnitSet::NewtonMillimetre, "(-4.2*(10^3))",            "-4200"),
        ("1/4 in",     Dim::LENGTH,   UnitSet::NewtonMillimetre, "((1/4)*25.4)",             "6.35"),
        ("1/4 in",     Dim::LENGTH,   UnitSet::PoundInch,        "(1/4)",                    "0.25"),
        ("1 1/2 in",   Dim::LENGTH,   UnitSet::PoundInch,        "(1+(1/2))",                "1.5"),
        ("3 kip",      Dim::FORCE,    UnitSet::PoundInch,        "(3*(10^3))",               "3000"),
        ("2 ft·lbf",   Dim::MOMENT,   UnitSet::PoundInch,        "(2*12)",                   "24"),
        ("36 ksi",     Dim::STRESS,   UnitSet::NewtonMillimetre, "", ""),
    ];
    for (text, dim, set, numbers, printed) in rows {
        let mut ledger = Ledger::new(set, 1.0, 1.0);
        let given = Given::parse(text, dim, set).unwrap();
        let value = ledger.given(
            "x".to_owned(),
            Symbol::of("x", &[]),
            String::new(),
            &given,
            origin(),
        );
        ledger.settle().unwrap();
        let algebra = ledger.numbers_algebra(value).unwrap();
        if numbers.is_empty() {
            // NIST SP 811 (2008), appendix B.8: 1 ksi = 6.894 757 MPa.
            assert!(
                (ledger.get(value).value - 36.0 * 6.894_757).abs() < 36.0 * 0.5e-6,
                "{text}"
            );
        } else {
            assert_eq!(algebra.replace("(-4.2)", "-4.2"), numbers, "{text}");
            assert_eq!(ledger.printed(value).algebra(), printed, "{text}");
        }
        let replayed = other_evaluator(&algebra);
        let shown = ledger.printed(value);
        assert!(
            (replayed - shown.value()).abs() <= shown.unit_in_last(),
            "{text}: {replayed}"
        );
    }
}

/// The batch program gives what the single evaluator gives, to the bit.
#[test]
fn batch_and_single_evaluation_agree() {
    let (ledger, env) = bench();
    struct OneName<'a>(&'a Env, f64);
    impl seamnote::formula::Look for OneName<'_> {
        fn units(&self) -> UnitSet {
            UnitSet::NewtonMillimetre
        }
        fn dim(&self, _: &str, _: Option<&str>) -> Option<Dim> {
            Some(Dim::NONE)
        }
        fn value(&self, name: &str, _: Option<(&str, usize)>) -> Option<f64> {
            match name {
                "x" => Some(self.1),
                "k" => Some(0.75),
                _ => None,
            }
        }
        fn word(&self, _: &str) -> Option<&str> {
            None
        }
        fn members(&self, _: &str) -> Option<usize> {
            None
        }
        fn table(&self, name: &str) -> Option<&Table> {
            self.0.tables.get(name)
        }
        fn known(&self) -> Vec<&str> {
            vec!["x", "k"]
        }
    }
    drop(ledger);
    let formulas = [
        "sqrt(x^2 + 3*(k*x)^2)",
        "max(x, -x, k) + min(x, k)/2",
        "when(x < -1, x, x <= 1, k*x, otherwise, x^1.5)",
        "-x^3 + abs(x)*k - atan2(x, k)/(1 rad)*0.5",
    ];
    let points: Vec<f64> = (0..1000).map(|i| f64::from(i) * 0.007 - 3.0).collect();
    for formula in formulas {
        let node = seamnote::formula::parse(formula).unwrap();
        let fixed = OneName(&env, 0.0);
        let program = seamnote::formula::Program::compile(&node, formula, &["x"], &fixed).unwrap();
        let batch = program.run(&[&points], points.len());
        for (x, got) in points.iter().zip(batch) {
            let single = seamnote::formula::evaluate(&node, formula, &OneName(&env, *x)).unwrap();
            assert!(
                got.to_bits() == single.to_bits(),
                "{formula} at {x}: {got} and {single}"
            );
        }
    }
}
