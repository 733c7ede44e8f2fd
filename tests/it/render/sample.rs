//! A note of several pages for the tests of the render room: every kind of block, long equations,
//! a table over a page. Its numbers are placeholders and do not compute.

use seamnote::note::doc::*;

/// Plain text.
pub(crate) fn t(text: &str) -> Text {
    vec![Inline::Plain { text: text.into() }]
}

fn plain(text: &str) -> Inline {
    Inline::Plain { text: text.into() }
}

fn emph(text: &str) -> Inline {
    Inline::Emph { text: text.into() }
}

fn maths(typst: &str, latex: &str, words: &str) -> Inline {
    Inline::Math {
        typst: typst.into(),
        latex: latex.into(),
        words: words.into(),
    }
}

fn num(text: &str) -> Text {
    let (whole, decimals) = match text.find('.') {
        Some(i) => text.split_at(i),
        None => (text, ""),
    };
    vec![Inline::Number {
        whole: whole.replace('-', "−"),
        decimals: decimals.into(),
        exponent: None,
        step: None,
    }]
}

fn power(text: &str, exponent: i32, step: &str) -> Text {
    let Inline::Number {
        whole, decimals, ..
    } = num(text).remove(0)
    else {
        unreachable!()
    };
    vec![Inline::Number {
        whole,
        decimals,
        exponent: Some(exponent),
        step: Some(step.into()),
    }]
}

fn line(typst: &str, words: &str) -> Line {
    Line {
        typst: typst.into(),
        words: words.into(),
        continued: false,
    }
}

fn more(typst: &str, words: &str) -> Line {
    Line {
        continued: true,
        ..line(typst, words)
    }
}

fn step(no: u32, id: &str, says: &str, lines: Vec<Line>, latex: &str, source: &[&str]) -> Block {
    Block::Step(Step {
        id: id.into(),
        no: no.to_string(),
        says: t(says),
        lines,
        latex: latex.into(),
        source: source.iter().map(|s| t(s)).collect(),
        mark: None,
        uses: Vec::new(),
    })
}

fn column(head: Text, unit: &str, align: Align) -> Column {
    let unit = if unit.is_empty() { Vec::new() } else { t(unit) };
    Column { head, unit, align }
}

fn row(cells: Vec<Text>) -> Row {
    Row {
        cells,
        strong: false,
        id: None,
    }
}

fn verdict() -> Verdict {
    Verdict {
        label: "least margin of safety".into(),
        figure: "+0.14".into(),
        lines: vec![
            vec![
                plain("Throat stress, EN 1993-1-8 4.5.3.2, at the upper end of the "),
                emph("upper edge"),
                plain(" (point 4), case "),
                Inline::Strong { text: "L07".into() },
                plain(" (ultimate)."),
            ],
            vec![
                plain("3 of 3 checks hold. 1 open item stands behind this margin: A2. "),
                Inline::StepRef {
                    id: "sigma-eq".into(),
                    text: "Step 6".into(),
                },
            ],
        ],
    }
}

fn inputs() -> Section {
    let rows = [
        (
            "bracket",
            "S355J2",
            "10",
            "355",
            "470",
            "EN 10025-2:2019, table 7",
        ),
        (
            "deck",
            "S355J2",
            "12",
            "355",
            "470",
            "EN 10025-2:2019, table 7, for nominal thicknesses up to 16 mm, with the certificate of the heat named in the purchase order",
        ),
        ("filler E71T-1", "", "", "", "480", "WPS-31 rev 2"),
    ];
    let rows = rows.map(|(name, material, thick, fy, fu, source)| {
        row(vec![
            t(name),
            t(material),
            num(thick),
            num(fy),
            num(fu),
            t(source),
        ])
    });
    Section {
        title: "Materials and allowables".into(),
        id: "materials".into(),
        blocks: vec![
            Block::Table(Table {
                id: "materials-table".into(),
                caption: t("Strengths as given, with their sources"),
                formulas: Vec::new(),
                columns: vec![
                    column(t("part"), "", Align::Left),
                    column(t("material"), "", Align::Left),
                    column(t("thickness"), "mm", Align::Point),
                    column(vec![maths("f_y", "f_y", "f y")], "MPa", Align::Point),
                    column(vec![maths("f_u", "f_u", "f u")], "MPa", Align::Point),
                    column(t("source"), "", Align::Left),
                ],
                rows: rows.into(),
                foot: None,
                uses: Vec::new(),
            }),
            Block::Heading {
                text: "Assumptions".into(),
            },
            Block::Items {
                items: vec![
                    Item {
                        label: "A1".into(),
                        text: t(
                            "The parts are rigid against the weld; the bracket is stiffened by its own flange over the whole depth, so that no effective width enters.",
                        ),
                        mark: None,
                        source: Some("mast-foot.yaml:31".into()),
                    },
                    Item {
                        label: "A2".into(),
                        text: t("Gust factor 1.4 on the mast-head load."),
                        mark: Some("to be verified".into()),
                        source: Some("mast-foot.yaml:32".into()),
                    },
                    Item {
                        label: String::new(),
                        text: t("Corrosion is prevented by coating."),
                        mark: None,
                        source: None,
                    },
                ],
            },
        ],
    }
}

fn geometry() -> Section {
    Section {
        title: "Axes and geometry".into(),
        id: "geometry".into(),
        blocks: vec![
            Block::Para {
                text: vec![
                    plain("The origin is the lower aft corner of the pad; "),
                    emph("x"),
                    plain(" forward, "),
                    emph("y"),
                    plain(" up, "),
                    emph("z"),
                    plain(" outboard. Throats are those of equal-leg fillets. The resultant is "),
                    maths(
                        "f = sqrt(f_x^2 + f_y^2)",
                        "f = \\sqrt{f_x^2 + f_y^2}",
                        "f is the root of f x squared plus f y squared",
                    ),
                    plain("."),
                ],
            },
            Block::Figure(FigureRef {
                name: "figure".into(),
                id: "figure.figure".into(),
                caption: t(
                    "The weld group in the faying plane, seen from outboard, with case L07. Scale 1:2; lengths in mm.",
                ),
                alt: "Channel of three fillets, open toward the load at x 210".into(),
            }),
        ],
    }
}

#[rustfmt::skip]
fn properties() -> Section {
    let mut blocks = vec![
        step(1, "t1", "Effective throat of the 6 mm fillets, equal legs at a right angle", vec![line(
            r##"t_1 = frac(h_1, sqrt(2)) = frac(6, sqrt(2)) = #res("4.243", "", "mm")"##,
            "t 1 is h 1 over root 2, is 6 over root 2, is 4.243 mm")],
            r"t_1 = \frac{h_1}{\sqrt{2}} = \frac{6}{\sqrt{2}} = \mathbf{4.243\ mm}",
            &["geometry", "mast-foot.yaml:14"]),
        step(2, "area", "Area of all throats", vec![line(
            r##"A = sum_i t_i L_i = #n("t1", "4.243") dot 80 + 5.657 dot 120 + #n("t1", "4.243") dot 80 = #res("1358", "", "mm^2")"##,
            "A is the sum of t i L i, is 1358 square mm")],
            r"A = \sum_i t_i L_i = 4.243 \cdot 80 + 5.657 \cdot 120 + 4.243 \cdot 80 = \mathbf{1358\ mm^2}",
            &["steps 1–3"]),
        step(3, "j", "Polar second moment about the centroid", vec![line(
            r##"J = I_(x x) + I_(y y) = #n("ixx", "3.254", "6") + #n("ixx", "0.9812", "6") = #res("4.235", "6", "mm^4")"##,
            "J is I x x plus I y y, is 4.235 times ten to the 6 mm to the fourth")],
            r"J = I_{xx} + I_{yy} = 3.254 \times 10^{6} + 0.9812 \times 10^{6} = \mathbf{4.235 \times 10^{6}\ mm^4}",
            &["steps 8, 9"]),
    ];
    blocks.push(properties_table());
    Section { title: "Line properties".into(), id: "properties".into(), blocks }
}

fn properties_table() -> Block {
    let runs = [
        ("lower edge", "4.243", "80", "339.4", "-7.14"),
        ("back edge", "5.657", "120", "678.8", "27.1"),
        ("upper edge", "4.243", "80", "339.4", "107.145"),
    ];
    let rows = runs.map(|(name, throat, length, area, y)| {
        row(vec![
            t(name),
            num(throat),
            num(length),
            num(area),
            num(y),
            power("3.254", 6, "ixx"),
        ])
    });
    let mut rows: Vec<Row> = rows.into();
    rows[0].id = Some("ixx".into());
    rows[1].cells[5] = power("12.25", 5, "t1");
    Block::Table(Table {
        id: "properties-table".into(),
        caption: t("Properties of the runs about the centroid"),
        formulas: Vec::new(),
        columns: vec![
            column(t("run"), "", Align::Left),
            column(vec![maths("t", "t", "t")], "mm", Align::Point),
            column(vec![maths("L", "L", "L")], "mm", Align::Point),
            column(
                vec![maths("A = t L", "A = t L", "A is t L")],
                "mm²",
                Align::Point,
            ),
            column(
                vec![maths("y - y_c", "y - y_c", "y less y c")],
                "mm",
                Align::Point,
            ),
            column(t("own and transfer"), "mm⁴", Align::Point),
        ],
        rows,
        foot: Some(row(vec![
            t("sum"),
            t(""),
            num("280"),
            num("1358"),
            t(""),
            power("4.235", 6, "j"),
        ])),
        uses: Vec::new(),
    })
}

#[rustfmt::skip]
fn stress() -> Section {
    Section { title: "Stress at the governing point".into(), id: "stress".into(), blocks: vec![
        step(4, "mz", "Moment about the centroid: the given moment and the force carried across", vec![
            line("M_z &= M_(z 0) + (x_P - x_c) F_y - (y_P - y_c) F_x", "M z is M z 0 plus the force carried across"),
            more(r##"&= 0 + (210 - 20) dot (-4200) - (60 - 60) dot 0 = #res("-7.980", "5", "N mm")"##, "is minus 7.980 times ten to the 5 N mm")],
            r"\begin{aligned} M_z &= M_{z0} + (x_P - x_c) F_y - (y_P - y_c) F_x \\ &= 0 + (210 - 20) \cdot (-4200) - (60 - 60) \cdot 0 = \mathbf{-7.980 \times 10^{5}\ N\,mm} \end{aligned}",
            &["mechanics", "steps 5, 12"]),
        step(5, "fx", "Stress along x, from the direct force and the torsion", vec![line(
            r##"f_x = frac(F_x, A) - frac(M_z (y - y_c), J) = frac(0, #n("area", "1358")) - frac(-#n("mz", "7.980", "5") dot (120 - 60), #n("j", "4.235", "6")) = #res("11.31", "", "MPa")"##,
            "f x is 11.31 MPa")],
            r"f_x = \frac{F_x}{A} - \frac{M_z (y - y_c)}{J} = \mathbf{11.31\ MPa}",
            &["method 4", "steps 7, 10, 14"]),
        step(6, "sigma-eq", "Equivalent stress on the throat", vec![line(
            r##"sigma_"eq" = sqrt(sigma_perp^2 + 3 (tau_perp^2 + tau_parallel^2)) = sqrt(8.02^2 + 3 (8.02^2 + 22.4^2)) = #res("42.0", "", "MPa")"##,
            "sigma eq is 42.0 MPa")],
            r"\sigma_{\mathrm{eq}} = \sqrt{\sigma_\perp^2 + 3(\tau_\perp^2 + \tau_\parallel^2)} = \mathbf{42.0\ MPa}",
            &["EN 1993-1-8", "4.5.3.2(6)"]),
        Block::Step(Step {
            id: "limit".into(), no: "7".into(),
            says: vec![plain("The correlation factor of S355 is taken from table 4.1; the clause asks for the lesser ultimate strength of the two parts joined, which both have")],
            lines: vec![
                line(r##"f_"w,Rd" &= frac(f_u, beta_w gamma_"M2") = frac(470, 0.9 dot 1.25) = #res("417.8", "", "N/mm^2")"##, "f w Rd is 417.8 N per square mm"),
                line(r##"phi = atan2(f_x, f_y) = atan2(11.31, 24.18) = 25.06#u("°") quad "where" quad 0 <= phi <= 90#u("°")"##, "phi is 25.06 degrees"),
                line(r##"U = max(frac(sigma_"eq", f_"w,Rd"), frac(abs(sigma_perp), 0.9 f_u \/ gamma_"M2")) = max(0.1005, 0.0237) = #res("0.1005", "", "")"##, "U is 0.1005")],
            latex: r"f_{\mathrm{w,Rd}} = \mathbf{417.8\ N/mm^2}".into(),
            source: ["EN 1993-1-8 4.5.3.2(6)", "table 4.1", "joints/bridge-deck/very_long_file_name_of_the_bracket_at_frame_17.yaml:14", "step 6"].map(t).into(),
            mark: Some("to be verified".into()),
            uses: vec![("sigma-eq".into(), "6".into())],
        }),
        step(8, "words", "No step in numbers: the case is worked by words only.", vec![], "", &["mechanics"]),
    ]}
}

fn cases() -> Section {
    let rows = (1..=40).map(|i| {
        let margin = if i == 7 {
            "0.14".to_owned()
        } else {
            format!("{}.{:02}", i % 13, (i * 37) % 100)
        };
        let mut cells = vec![
            t(&format!("L{i:02}")),
            t("gust abeam, mast raised"),
            num("0"),
            num(&format!("-{}", 4200 - 91 * i)),
            num(&format!("{}.{}", i * 17 % 400, i % 10)),
            num(&format!("0.{:03}", (i * 173) % 1000)),
        ];
        cells.push(if i == 12 {
            t("high")
        } else {
            num(&format!("+{margin}"))
        });
        Row {
            cells,
            strong: i == 7,
            id: None,
        }
    });
    Section {
        title: "Margins".into(),
        id: "margins".into(),
        blocks: vec![
            Block::Table(Table {
                id: "cases".into(),
                caption: vec![
                    plain("All cases in order of the file; the least margin in bold. "),
                    maths(
                        "M S = 1 \\/ U - 1",
                        "MS = 1/U - 1",
                        "M S is 1 over U less 1",
                    ),
                ],
                formulas: Vec::new(),
                columns: vec![
                    column(t("case"), "", Align::Left),
                    column(t("says"), "", Align::Left),
                    column(vec![maths("F_x", "F_x", "F x")], "N", Align::Point),
                    column(vec![maths("F_y", "F_y", "F y")], "N", Align::Point),
                    column(t("demand"), "MPa", Align::Point),
                    column(t("utilisation"), "", Align::Point),
                    column(t("MS"), "", Align::Point),
                ],
                rows: rows.collect(),
                foot: None,
                uses: Vec::new(),
            }),
            step(
                9,
                "ms",
                "Least margin of safety",
                vec![line(
                    r##""MS" = frac(1, U) - 1 = frac(1, #n("limit", "0.1005")) - 1 = #res("+8.95", "", "")"##,
                    "M S is plus 8.95",
                )],
                r"\mathrm{MS} = \frac{1}{U} - 1 = \mathbf{+8.95}",
                &["step 7"],
            ),
        ],
    }
}

fn ending() -> Section {
    Section {
        title: "Change record and signatures".into(),
        id: "signatures".into(),
        blocks: vec![
            Block::Table(Table {
                id: "changes".into(),
                caption: t("Issues"),
                formulas: Vec::new(),
                columns: vec![
                    column(t("issue"), "", Align::Left),
                    column(t("date"), "", Align::Left),
                    column(t("what changed"), "", Align::Left),
                ],
                rows: vec![
                    row(vec![t("A"), t("2026-03-02"), t("First issue")]),
                    row(vec![
                        t("B"),
                        t("2026-05-04"),
                        t("Loads of the revised sail plan"),
                    ]),
                ],
                foot: None,
                uses: Vec::new(),
            }),
            Block::Signatures {
                roles: ["prepared", "checked", "approved"].map(String::from).into(),
            },
        ],
    }
}

/// The sample note.
pub(crate) fn sample() -> Doc {
    Doc {
        head: Head {
            note: "SN-104".into(),
            title: "Mast foot bracket to deck plate".into(),
            issue: Some(("B".into(), "2026-05-04".into())),
            particulars: vec![
                "Stress note SN-104, issue B, 2026-05-04".into(),
                "drawing LM-2207 sheet 3".into(),
                "launch mast".into(),
            ],
            paper: "a4",
        },
        verdict: Some(verdict()),
        sections: vec![
            inputs(),
            geometry(),
            properties(),
            stress(),
            cases(),
            ending(),
        ],
        identity: Some("7f3a 91c2 08de".into()),
        state: "DRAFT — not signed".into(),
    }
}

/// A table that no line of the page holds: as many columns of numbers as asked for.
pub(crate) fn wide_table(numbers: usize) -> Table {
    let head = |at: usize| column(t(&format!("f{at}")), "N/mm", Align::Point);
    let mut columns = vec![
        column(t(""), "", Align::Left),
        column(t("run"), "", Align::Left),
    ];
    columns.extend((1..=numbers).map(head));
    columns.push(column(t("state"), "", Align::Left));
    let line = |run: usize| {
        let mut cells = vec![t(&run.to_string()), t(&format!("stiffener flange {run}"))];
        cells.extend((1..=numbers).map(|at| num(&format!("-{run}{at:02}.123456"))));
        cells.push(t("holds"));
        Row {
            id: Some(format!("wide.{run}")),
            ..row(cells)
        }
    };
    Table {
        id: "wide".into(),
        caption: t("Stresses of the runs"),
        formulas: Vec::new(),
        columns,
        rows: (1..=3).map(line).collect(),
        foot: None,
        uses: Vec::new(),
    }
}

/// A small drawing as the figure room emits them.
pub(crate) const DRAWING: &str = r##"box(width: 128mm, height: 60mm, {
  place(top + left, dx: 20mm, dy: 5mm, line(length: 40mm, stroke: 2pt))
  place(top + left, dx: 20mm, dy: 55mm, line(length: 40mm, stroke: 2pt))
  place(top + left, dx: 20mm, dy: 5mm, line(length: 50mm, angle: 90deg, stroke: 2.7pt))
  place(top + left, dx: 25mm, dy: 8mm, text(size: 8pt)[upper edge, leg 6])
  place(top + left, dx: 90mm, dy: 28mm, circle(radius: 1.5mm, stroke: 0.5pt))
})"##;
