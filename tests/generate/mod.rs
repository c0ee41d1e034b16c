//! Random statements, as trees without ranges.

use lyate::text::number;
use lyate::text::span::{Span, Spanned};
use lyate::text::tree::*;
use proptest::prelude::*;

fn spanned<T>(value: T) -> Spanned<T> {
    Spanned::new(value, Span::default())
}

fn formula() -> BoxedStrategy<Name> {
    prop_oneof![
        prop::sample::select(vec![
            "NH3", "NH4+", "OH-", "SO4^2-", "(NH4)2SO4", "Fe(CN)6^3-", "CaSO4·2H2O", "H2CO3*",
            "SO₄²⁻", "CaCO3(s)", "CaCO3(s, calcite)", "CO2(g)", "H2O(l)", "NaCl(aq)", "e-", "K",
            "T", "Ca+2", "SO4--", "SO42-", "Ca2+", "CaSO4.2H2O", "NH3-N", "Cit^3-",
        ])
        .prop_map(str::to_owned),
        "[A-Z][A-Za-z0-9]{0,6}(\\([A-Z][a-z0-9]{0,2}\\)[0-9]?)?(\\^?[0-9]?[+-])?(\\((s|g|l|aq)\\))?",
    ]
    .prop_map(spanned)
    .boxed()
}

fn gas() -> BoxedStrategy<Name> {
    "[A-Z][A-Za-z0-9]{0,4}\\(g\\)".prop_map(spanned).boxed()
}

fn string() -> BoxedStrategy<Name> {
    prop_oneof!["[a-zA-Z0-9 ,.#'°µ()=<>-]{0,20}", "[^\"\r\n]{0,12}"].prop_map(spanned).boxed()
}

fn number(signed: bool) -> BoxedStrategy<Number> {
    let text = prop_oneof![
        "[0-9]{1,6}(\\.[0-9]{1,8})?",
        "[0-9](\\.[0-9]{1,5})?[eE][+-]?[0-9]{1,2}",
        "10\\^-?[0-9]{1,2}",
        "[0-9](\\.[0-9]{1,5})?( ?[×x] ?)10\\^-?[0-9]{1,2}",
        "[0-9]×10⁻?[⁰¹²³⁴-⁹]",
    ];
    (text, any::<bool>())
        .prop_filter_map("a number", move |(text, negative)| {
            let (value, half_digit) = number::read(&text)?;
            let value = if signed && negative { -value } else { value };
            Some(Number { value, half_digit, text, span: Span::default() })
        })
        .boxed()
}

fn unit() -> BoxedStrategy<Name> {
    prop_oneof![
        prop::sample::select(vec![
            "mmol/L",
            "mol/kg",
            "µmol/L",
            "M",
            "mM",
            "µM",
            "g/m3",
            "g/m³",
            "% w/w",
            "%",
            "mL/L",
            "°C",
            "degC",
            "K",
            "atm",
            "µatm",
            "Pa",
            "kJ/mol",
            "kJ/(mol·K)",
            "J/(mol·K)",
            "mol·L^-1",
            "meq/L",
            "ppm",
        ])
        .prop_map(str::to_owned),
        "[b-df-z]{1,5}(/[A-Z][a-z]{0,2})?".prop_filter("no reserved word", |unit| {
            !["by", "to", "of", "from", "giving", "source", "valid", "with", "heat", "total"]
                .contains(&unit.split('/').next().unwrap_or_default())
        }),
    ]
    .prop_map(spanned)
    .boxed()
}

fn quantity(signed: bool) -> BoxedStrategy<Quantity> {
    let uncertainty = (number(false), any::<bool>())
        .prop_map(|(number, percent)| Uncertainty { number, percent });
    (
        number(signed),
        prop::option::of(uncertainty),
        prop::option::of(unit()),
        prop::option::of(formula()),
    )
        .prop_map(|(number, uncertainty, unit, basis)| Quantity {
            number,
            uncertainty,
            unit,
            basis,
            span: Span::default(),
        })
        .boxed()
}

fn fraction() -> BoxedStrategy<Option<Spanned<Fraction>>> {
    prop::option::of(
        (1i64..200, prop_oneof![Just(1i64), 2i64..20])
            .prop_map(|(numerator, denominator)| spanned(Fraction { numerator, denominator })),
    )
    .boxed()
}

fn members() -> BoxedStrategy<Vec<Member>> {
    prop::collection::vec(
        (fraction(), formula()).prop_map(|(coefficient, name)| Member {
            coefficient,
            name,
            span: Span::default(),
        }),
        1..4,
    )
    .boxed()
}

fn terms() -> BoxedStrategy<Vec<Term>> {
    let counted = (
        fraction(),
        prop_oneof![
            formula().prop_map(TermKind::Concentration),
            formula().prop_map(TermKind::Total),
            formula().prop_map(TermKind::Added),
            formula().prop_map(TermKind::Precipitated),
        ],
    );
    let amount = quantity(false).prop_map(|amount| (None, TermKind::Amount(amount)));
    prop::collection::vec(
        (any::<bool>(), prop_oneof![counted, amount]).prop_map(
            |(negative, (coefficient, what))| Term {
                negative,
                coefficient,
                what,
                span: Span::default(),
            },
        ),
        1..5,
    )
    .boxed()
}

fn subject() -> BoxedStrategy<Subject> {
    prop_oneof![
        prop::sample::select(vec![
            Subject::Ph,
            Subject::Poh,
            Subject::Pe,
            Subject::Potential,
            Subject::Alkalinity,
            Subject::Acidity,
            Subject::Hardness,
            Subject::CarbonateHardness,
            Subject::IonicStrength,
            Subject::BufferCapacity,
            Subject::ChargeImbalance,
        ]),
        formula().prop_map(Subject::Concentration),
        formula().prop_map(Subject::Activity),
        gas().prop_map(Subject::Pressure),
        formula().prop_map(Subject::Total),
        formula().prop_map(Subject::Fraction),
        formula().prop_map(Subject::SaturationIndex),
        formula().prop_map(Subject::Precipitated),
        formula().prop_map(Subject::Dose),
    ]
    .boxed()
}

/// Always with a unit: without one, the formula of the stock would be read as its unit.
fn strength() -> BoxedStrategy<Strength> {
    let unit = prop::sample::select(vec!["%", "% w/w", "mol/L", "g/L"]).prop_map(str::to_owned);
    (quantity(false), unit, prop::option::of(quantity(true)))
        .prop_map(|(value, unit, density)| Strength {
            value: Quantity { unit: Some(spanned(unit)), basis: None, ..value },
            density,
        })
        .boxed()
}

fn blend_part() -> BoxedStrategy<BlendPart> {
    (quantity(true), string(), prop::option::of(string()))
        .prop_map(|(mut share, file, case)| {
            // The percent sign after a bare number and its `±` is the share's own.
            if let Some(uncertainty) = share.uncertainty.as_mut().filter(|_| share.unit.is_none()) {
                uncertainty.percent = false;
            }
            share.basis = None;
            BlendPart { share, file, case, span: Span::default() }
        })
        .boxed()
}

fn balance_kind() -> BoxedStrategy<BalanceKind> {
    prop_oneof![
        Just(BalanceKind::Charge),
        Just(BalanceKind::Protons),
        formula().prop_map(BalanceKind::Component),
    ]
    .boxed()
}

fn expression() -> BoxedStrategy<Expression> {
    let leaf = prop_oneof![
        Just(Expression::T),
        (0u32..1000).prop_map(|n| Expression::Number(f64::from(n) / 8.0)),
        any::<f64>()
            .prop_filter("finite", |n| n.is_finite())
            .prop_map(|n| Expression::Number(n.abs())),
    ];
    leaf.prop_recursive(6, 40, 2, |inner| {
        let operator = prop::sample::select(vec![
            Operator::Add,
            Operator::Subtract,
            Operator::Multiply,
            Operator::Divide,
            Operator::Power,
        ]);
        prop_oneof![
            inner.clone().prop_map(|of| Expression::Negative(Box::new(of))),
            inner.clone().prop_map(|of| Expression::Log(Box::new(of))),
            inner.clone().prop_map(|of| Expression::Ln(Box::new(of))),
            (inner.clone(), operator, inner).prop_map(|(a, op, b)| Expression::Binary(
                Box::new(a),
                op,
                Box::new(b)
            )),
        ]
    })
    .boxed()
}

fn constant() -> BoxedStrategy<Constant> {
    let kinds = vec![
        ConstantKind::PKa,
        ConstantKind::PKsp,
        ConstantKind::LogBeta,
        ConstantKind::PK,
        ConstantKind::LogK,
        ConstantKind::K,
    ];
    prop_oneof![
        (prop::sample::select(kinds), quantity(true).prop_map(ConstantValue::Number)),
        (
            Just(ConstantKind::LogKOfT),
            expression().prop_map(|e| ConstantValue::Expression(spanned(e)))
        ),
    ]
    .prop_map(|(kind, value)| Constant { kind: spanned(kind), value, span: Span::default() })
    .boxed()
}

fn reaction() -> BoxedStrategy<Statement> {
    let maybe = || prop::option::of(quantity(true));
    (
        (members(), members(), prop::collection::vec(constant(), 0..3)),
        (maybe(), maybe(), maybe()),
        prop::option::of((quantity(true), quantity(true))),
        prop::option::of(string()),
    )
        .prop_map(|((left, right, constants), (enthalpy, heat_capacity, at), valid, source)| {
            Statement::Reaction(Box::new(Reaction {
                left,
                right,
                equation: Span::default(),
                constants,
                enthalpy,
                heat_capacity,
                at,
                valid,
                source,
            }))
        })
        .boxed()
}

/// Any statement that can be read, without ranges.
pub fn statement() -> BoxedStrategy<Statement> {
    let q = || quantity(true);
    let by = prop_oneof![
        (formula(), prop::option::of(strength()))
            .prop_map(|(name, stock)| By::Reagent(name, stock.map(Box::new))),
        formula().prop_map(By::Total)
    ];
    let relation = prop_oneof![
        q().prop_map(Relation::Equal),
        q().prop_map(Relation::Less),
        q().prop_map(Relation::LessOrEqual),
        q().prop_map(Relation::Greater),
        q().prop_map(Relation::GreaterOrEqual),
        (q(), q()).prop_map(|(a, b)| Relation::Between(a, b)),
    ];
    let over = prop_oneof![
        Just(Over::Ph),
        Just(Over::Temperature),
        formula().prop_map(Over::Reagent),
        formula().prop_map(Over::Total),
        string().prop_map(Over::Blend),
    ];
    let without = prop_oneof![
        subject().prop_map(Without::Hold),
        subject().prop_map(Without::Expect),
        formula().prop_map(Without::Total),
        formula().prop_map(Without::Add),
        balance_kind().prop_map(Without::Balance),
        formula().prop_map(Without::Precipitate),
        formula().prop_map(Without::Saturate),
        Just(Without::IonicStrength),
        Just(Without::Blend),
    ];
    let item = (formula(), prop::option::of(string()))
        .prop_map(|(name, title)| ComponentItem { name, title });
    prop_oneof![
        string().prop_map(|title| Statement::Problem { title }),
        ("[a-z]{1,8}", prop::option::of(any::<u32>())).prop_map(|(name, edition)| Statement::Use(
            Use::Set { name: spanned(name), edition: edition.map(spanned) }
        )),
        string().prop_map(|path| Statement::Use(Use::File { path })),
        q().prop_map(|value| Statement::Temperature { value }),
        "[a-z]{1,8}(-[a-z]{1,6}){0,2}"
            .prop_map(|model| Statement::Activity { model: spanned(model) }),
        q().prop_map(|value| Statement::IonicStrength { value }),
        (formula(), prop::option::of(formula()))
            .prop_map(|(symbol, formula)| Statement::Group { symbol, formula }),
        prop::collection::vec(item, 1..5).prop_map(|items| Statement::Component { items }),
        reaction(),
        (formula(), q()).prop_map(|(component, value)| Statement::Total { component, value }),
        (formula(), q(), prop::option::of(strength()), prop::option::of(members())).prop_map(
            |(reagent, amount, stock, giving)| Statement::Add { reagent, amount, stock, giving }
        ),
        prop::collection::vec(blend_part(), 1..4).prop_map(|parts| Statement::Blend { parts }),
        (subject(), q(), prop::option::of(by)).prop_map(|(subject, value, by)| Statement::Hold {
            subject: spanned(subject),
            value,
            by: by.map(spanned)
        }),
        formula().prop_map(|solid| Statement::Precipitate { solid }),
        formula().prop_map(|solid| Statement::Saturate { solid }),
        (balance_kind(), terms(), terms()).prop_map(|(kind, left, right)| Statement::Balance {
            kind: spanned(kind),
            left,
            right,
            equals: Span::default()
        }),
        (subject(), relation, prop::option::of(q()), prop::option::of(string())).prop_map(
            |(subject, relation, confidence, source)| Statement::Expect {
                subject: spanned(subject),
                relation,
                confidence,
                source
            }
        ),
        (over, q(), q(), prop::option::of(1u32..20_000)).prop_map(|(over, from, to, points)| {
            Statement::Curve { over: spanned(over), from, to, points: points.map(spanned) }
        }),
        string().prop_map(|title| Statement::Case { title }),
        without.prop_map(|without| Statement::Without(spanned(without))),
    ]
    .boxed()
}
