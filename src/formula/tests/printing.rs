use proptest::prelude::{BoxedStrategy, Just, Strategy, prop_oneof};
use proptest::{prop_assert, prop_assert_eq, proptest};

use super::{entry, read};
use crate::formula::parser::parse;
use crate::formula::powers::exact_exponent;
use crate::formula::tree::Expr;
use crate::formula::{Binary, ExprKind, Formula, Function};
use crate::quantity::Unit;

#[test]
fn text_is_printed_with_the_parentheses_it_needs_and_no_others() {
    for (text, printed) in [
        ("((x))", "x"),
        ("(x+y)-(x-y)", "x + y - (x - y)"),
        ("(x*y)/(x/y)", "x * y / (x / y)"),
        ("x+(y*2)", "x + y * 2"),
        ("(x+y)*2", "(x + y) * 2"),
        ("-(x^2)", "-x^2"),
        ("(-x)^2", "(-x)^2"),
        ("-(x*y)", "-(x * y)"),
        ("(-x)*y", "-x * y"),
        ("x*(-y)", "x * -y"),
        ("--x", "--x"),
        ("(x^y)^2", "(x^y)^2"),
        ("x^(y^2)", "x^y^2"),
        ("x^(-2)", "x^-2"),
        ("x^(2/3)", "x^(2 / 3)"),
        ("x^-(1/4)", "x^-(1 / 4)"),
        ("2 [m] ^ 2", "(2 [m])^2"),
        ("1e-3*1e300*0.25", "0.001 * 1e300 * 0.25"),
        ("x × y · 2 − 1", "x * y * 2 - 1"),
        ("choose(not(x<y and(x=1 or y>=2)),x,0)", "choose(not (x < y and (x = 1 or y >= 2)), x, 0)"),
        ("choose((not x<y)and x<=2,1,2)", "choose(not x < y and x <= 2, 1, 2)"),
        ("max( x ,y, 2 )", "max(x, y, 2)"),
        ("fraction((x))", "fraction(x)"),
    ] {
        assert_eq!(read(text).root().to_string(), printed, "{text}");
    }
}

#[test]
fn the_span_of_a_node_holds_its_parentheses() {
    let text = "x * (y + 2)^3";
    let formula = read(text);
    let ExprKind::Binary(Binary::Multiply, _, power) = &formula.root().kind else { panic!("{formula:?}") };
    assert_eq!(&text[power.span.clone()], "(y + 2)^3");
    let ExprKind::Power(base, ..) = &power.kind else { panic!("{power:?}") };
    assert_eq!(&text[base.span.clone()], "(y + 2)");
}

fn node(kind: ExprKind) -> Expr {
    Expr { span: 0..0, kind }
}

fn number(value: f64, unit: Option<&str>) -> Expr {
    let unit = unit.map(|unit| Unit::read(unit).unwrap());
    let si = unit.as_ref().map_or(value, |unit| unit.to_si(value));
    node(ExprKind::Number { value, unit, si })
}

/// A power as the parser makes it: exact where its exponent is made of literals.
fn power(base: Expr, exponent: Expr) -> Option<Expr> {
    Some(node(match exact_exponent(&exponent).ok()? {
        Some(exact) => ExprKind::Power(Box::new(base), exact, Box::new(exponent)),
        None => ExprKind::Binary(Binary::Power, Box::new(base), Box::new(exponent)),
    }))
}

const OPERATORS: [Binary; 11] = [
    Binary::Add,
    Binary::Subtract,
    Binary::Multiply,
    Binary::Divide,
    Binary::Less,
    Binary::LessOrEqual,
    Binary::Greater,
    Binary::GreaterOrEqual,
    Binary::Equal,
    Binary::And,
    Binary::Or,
];

/// Any tree, whether or not its dimensions agree.
fn any_expr() -> BoxedStrategy<Expr> {
    let leaf = prop_oneof![
        (0.0..1e3).prop_map(|value: f64| number(value, None)),
        (-20i32..20).prop_map(|decade| number(format!("1e{decade}").parse().unwrap(), None)),
        (0u8..9).prop_map(|value| number(f64::from(value), None)),
        (0.0..1e3, proptest::sample::select(vec!["kg", "kJ/(mol h)", "µm^3", "1/s"]))
            .prop_map(|(value, unit)| number(value, Some(unit))),
        Just(node(ExprKind::Infinity)),
        proptest::sample::select(vec!["x", "diameter", "mass", "age"])
            .prop_map(|name| node(ExprKind::Name(name.to_owned()))),
    ];
    leaf.prop_recursive(6, 40, 3, |inner| {
        let two = || (inner.clone(), inner.clone());
        prop_oneof![
            inner.clone().prop_map(|x| node(ExprKind::Negate(Box::new(x)))),
            inner.clone().prop_map(|x| node(ExprKind::Not(Box::new(x)))),
            (proptest::sample::select(OPERATORS.to_vec()), two())
                .prop_map(|(operator, (a, b))| node(ExprKind::Binary(operator, Box::new(a), Box::new(b)))),
            two().prop_filter_map("an exponent that does not fit", |(base, exponent)| power(base, exponent)),
            inner.clone().prop_map(|x| node(ExprKind::Call(Function::Sqrt, vec![x]))),
            proptest::collection::vec(inner.clone(), 2..4)
                .prop_map(|arguments| node(ExprKind::Call(Function::Min, arguments))),
            (inner.clone(), two()).prop_map(|(c, (a, b))| node(ExprKind::Choose(
                Box::new(c),
                Box::new(a),
                Box::new(b)
            ))),
            inner.clone().prop_map(|x| node(ExprKind::Curve("fraction".to_owned(), Box::new(x)))),
        ]
    })
    .boxed()
}

proptest! {
    #[test]
    fn a_printed_tree_parses_to_itself(expr in any_expr()) {
        let printed = expr.to_string();
        let parsed = parse(&printed, &entry());
        prop_assert!(parsed.faults.is_empty(), "{}: {:?}", printed, parsed.faults);
        prop_assert_eq!(&parsed.root, &expr, "{}", printed);
    }

    #[test]
    fn a_tree_whose_dimensions_agree_is_set_in_balanced_tex(expr in any_expr()) {
        if let Ok(formula) = Formula::read(&expr.to_string(), &entry()) {
            let tex = formula.tex(&|_| None);
            prop_assert_eq!(tex.matches('{').count(), tex.matches('}').count(), "{}", tex);
            prop_assert_eq!(tex.matches("\\left").count(), tex.matches("\\right").count(), "{}", tex);
        }
    }
}
