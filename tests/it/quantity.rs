//! Units and their conversion factors, and quantities as typed.

use seamnote::quantity::{Dim, Given, GivenError, Unit, UnitError, UnitSet};

/// The factor from a typed unit to the set's own.
fn factor(unit: &str, set: UnitSet) -> f64 {
    Unit::parse(unit).unwrap().conversion(set).value()
}

/// Source: NIST Special Publication 811 (2008 edition), Appendix B.8; its factors are to SI base
/// and derived units. Seven digits are printed, fewer where a factor is exact.
#[test]
fn factors_match_the_published_table() {
    use UnitSet::NewtonMetre as Si;
    #[rustfmt::skip]
    let rows = [
        // unit            printed          half a unit of the last digit; 0 where exact (bold there)
        ("in",             2.54e-2,         0.0),
        ("ft",             3.048e-1,        0.0),
        ("in^2",           6.4516e-4,       0.0),
        ("lbf",            4.448_222,       0.5e-6),
        ("kip",            4.448_222e3,     0.5e-3),
        ("kgf",            9.806_65,        0.0),
        ("psi",            6.894_757e3,     0.5e-3),
        ("ksi",            6.894_757e6,     0.5),
        ("lbf/in",         1.751_268e2,     0.5e-4),
        ("lbf/ft",         1.459_390e1,     0.5e-5),
        ("lbf in",         1.129_848e-1,    0.5e-7),
        ("lbf ft",         1.355_818,       0.5e-6),
        ("kgf m",          9.806_65,        0.0),
        ("kgf/mm^2",       9.806_65e6,      0.0),
    ];
    for (unit, printed, tol) in rows {
        let got = factor(unit, Si);
        let miss = (got - printed).abs();
        // An exact factor may differ by the rounding of the few products that make it.
        let tol = tol + 4.0 * f64::EPSILON * printed;
        assert!(miss <= tol, "{unit}: {got}, not {printed}");
    }
}

/// The exact definitions: international yard and pound agreement 1959; 3rd CGPM 1901.
#[test]
fn pound_force_is_its_definition() {
    let exact = 0.453_592_37 * 9.806_65;
    let miss = (factor("lbf", UnitSet::NewtonMillimetre) - exact).abs();
    assert!(miss <= 1e-15, "lbf differs from its definition by {miss}");
}

#[test]
fn a_unit_and_its_way_back_make_one() {
    for set in UnitSet::ALL {
        for dim in [
            Dim::FORCE,
            Dim::LENGTH,
            Dim::STRESS,
            Dim::MOMENT,
            Dim::LINE_LOAD,
            Dim::SECOND,
        ] {
            let label = set.label(dim);
            let unit = Unit::parse(&label).unwrap();
            assert_eq!(unit.dim, dim, "{label}");
            let factors = unit.conversion(set).factors;
            assert!(factors.is_empty(), "{label} in its own set: {factors:?}");
        }
    }
    for (a, b, units) in [
        (UnitSet::NewtonMillimetre, UnitSet::KipInch, ("MPa", "ksi")),
        (
            UnitSet::KilonewtonMillimetre,
            UnitSet::PoundInch,
            ("kN mm", "lbf in"),
        ),
        (UnitSet::NewtonMetre, UnitSet::PoundInch, ("N/m", "lbf/in")),
    ] {
        let product = factor(units.0, b) * factor(units.1, a);
        assert!((product - 1.0).abs() < 1e-14, "{units:?}: {product}");
    }
}

/// Spellings of one unit, and kinds; the values follow from the exact definitions.
#[test]
fn quantities_read_as_typed() {
    use UnitSet::{KipInch, NewtonMillimetre as Mm, PoundInch};
    #[rustfmt::skip]
    let rows = [
        // text          dimension     set        number    unit            value
        ("6",            Dim::LENGTH,  Mm,        "6",      None,           6.0),
        ("5/16 in",      Dim::LENGTH,  Mm,        "5/16",   Some("in"),     0.3125 * 25.4),
        ("5/16 in",      Dim::LENGTH,  PoundInch, "5/16",   Some("in"),     0.3125),
        ("1 1/2 in",     Dim::LENGTH,  PoundInch, "1 1/2",  Some("in"),     1.5),
        ("-1 1/2",       Dim::LENGTH,  PoundInch, "-1 1/2", None,           -1.5),
        ("-1/2",         Dim::LENGTH,  PoundInch, "-1/2",   None,           -0.5),
        ("-0 1/2",       Dim::LENGTH,  PoundInch, "-0 1/2", None,           -0.5),
        ("0.25",         Dim::LENGTH,  PoundInch, "0.25",   None,           0.25),
        ("4.2 kN",       Dim::FORCE,   Mm,        "4.2",    Some("kN"),     4200.0),
        ("-4.2kN",       Dim::FORCE,   Mm,        "-4.2",   Some("kN"),     -4200.0),
        ("−4.2 kN",      Dim::FORCE,   Mm,        "−4.2",   Some("kN"),     -4200.0),
        ("1.5e3",        Dim::FORCE,   Mm,        "1.5e3",  None,           1500.0),
        ("1E3 N",        Dim::FORCE,   Mm,        "1E3",    Some("N"),      1000.0),
        ("2 kip",        Dim::FORCE,   PoundInch, "2",      Some("kip"),    2000.0),
        ("100 lbf",      Dim::FORCE,   KipInch,   "100",    Some("lbf"),    0.1),
        ("1.2 kN·m",     Dim::MOMENT,  Mm,        "1.2",    Some("kN·m"),   1.2e6),
        ("1.2 kN m",     Dim::MOMENT,  Mm,        "1.2",    Some("kN m"),   1.2e6),
        ("1.2 kN*m",     Dim::MOMENT,  Mm,        "1.2",    Some("kN*m"),   1.2e6),
        ("1.2 kN.m",     Dim::MOMENT,  Mm,        "1.2",    Some("kN.m"),   1.2e6),
        ("1.2 kNm",      Dim::MOMENT,  Mm,        "1.2",    Some("kNm"),    1.2e6),
        ("10 ft·lbf",    Dim::MOMENT,  PoundInch, "10",     Some("ft·lbf"), 120.0),
        ("10 lbf-ft",    Dim::MOMENT,  PoundInch, "10",     Some("lbf-ft"), 120.0),
        ("355 N/mm²",    Dim::STRESS,  Mm,        "355",    Some("N/mm²"),  355.0),
        ("355 N/mm^2",   Dim::STRESS,  Mm,        "355",    Some("N/mm^2"), 355.0),
        ("0.355 GPa",    Dim::STRESS,  Mm,        "0.355",  Some("GPa"),    355.0),
        ("50 ksi",       Dim::STRESS,  PoundInch, "50",     Some("ksi"),    50_000.0),
        ("5 %",          Dim::NONE,    Mm,        "5",      Some("%"),      0.05),
        ("180 deg",      Dim::ANGLE,   Mm,        "180",    Some("deg"),    std::f64::consts::PI),
        ("45°",          Dim::ANGLE,   Mm,        "45",     Some("°"),      std::f64::consts::FRAC_PI_4),
        ("0",            Dim::ANGLE,   Mm,        "0",      None,           0.0),
    ];
    for (text, dim, set, number, unit, value) in rows {
        let given = Given::parse(text, dim, set).unwrap_or_else(|error| panic!("{text}: {error}"));
        assert_eq!(
            (given.number.as_str(), given.unit.as_deref()),
            (number, unit),
            "{text}"
        );
        let miss = (given.value - value).abs();
        assert!(
            miss <= 2.0 * f64::EPSILON * value.abs(),
            "{text}: {} not {value}",
            given.value
        );
    }
}

#[test]
fn a_number_in_the_sets_own_unit_stays_as_typed() {
    for text in ["0.1", "0.25 in", "12.7"] {
        let given = Given::parse(text, Dim::LENGTH, UnitSet::PoundInch).unwrap();
        let typed: f64 = given.number.parse().unwrap();
        assert_eq!(given.value.to_bits(), typed.to_bits(), "{text}");
        assert!(!given.is_converted(), "{text} needs no conversion line");
    }
    assert!(
        Given::parse("1/4", Dim::LENGTH, UnitSet::PoundInch)
            .unwrap()
            .is_converted(),
        "a fraction is shown"
    );
    assert!(
        Given::parse("6 mm", Dim::LENGTH, UnitSet::PoundInch)
            .unwrap()
            .is_converted(),
        "mm in inches"
    );
}

#[test]
fn wrong_quantities_are_refused() {
    let refusal =
        |text: &str, dim: Dim| Given::parse(text, dim, UnitSet::NewtonMillimetre).unwrap_err();
    for text in [
        "",
        "six",
        "1 2",
        "1/0",
        "1/-2",
        "1 -1/2",
        "1/2/3",
        "--6",
        "6..0",
        "in",
        "_6",
        "0x10 mm mm/",
    ] {
        let error = refusal(text, Dim::LENGTH);
        let refused = matches!(error, GivenError::NotANumber(_) | GivenError::Unit(_));
        assert!(refused, "{text}: {error:?}");
    }
    for text in ["1,5", "1,5 mm", "1.000,5"] {
        assert!(
            matches!(refusal(text, Dim::LENGTH), GivenError::Comma(_)),
            "{text}"
        );
    }
    for text in ["inf", "nan", "1e999"] {
        let error = refusal(text, Dim::LENGTH);
        assert!(
            matches!(error, GivenError::NotFinite(_) | GivenError::NotANumber(_)),
            "{text}: {error:?}"
        );
    }
    for text in ["420 kg", "420 lb", "2 t", "1 lbm"] {
        assert!(
            matches!(
                refusal(text, Dim::FORCE),
                GivenError::Unit(UnitError::Mass(_))
            ),
            "{text}"
        );
    }
    for text in ["3 furlong", "3 kn", "3 NM", "3 Mpa"] {
        assert!(
            matches!(
                refusal(text, Dim::FORCE),
                GivenError::Unit(UnitError::Unknown(_))
            ),
            "{text}"
        );
    }
    assert!(
        matches!(refusal("90", Dim::ANGLE), GivenError::BareAngle(_)),
        "an angle has a unit"
    );
    let kinds = [
        ("6 N", Dim::LENGTH),
        ("6 mm", Dim::FORCE),
        ("6 N/mm", Dim::STRESS),
        ("6 mm", Dim::NONE),
    ];
    for (text, dim) in kinds {
        assert!(
            matches!(refusal(text, dim), GivenError::Kind { .. }),
            "{text}"
        );
    }
    assert_eq!(
        refusal("6 kN", Dim::LENGTH).to_string(),
        "`6 kN` is a force, but a length is needed here",
        "words"
    );
}
