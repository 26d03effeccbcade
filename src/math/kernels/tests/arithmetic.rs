//! Arithmetic, comparisons and choices.

use super::{SPECIAL, same, uniform};
use crate::math::kernels::{Arithmetic, Comparison, Operand, binary_column, compare_column, select_column};

#[test]
fn arithmetic_takes_columns_and_scalars_alike() {
    let a = uniform("a", -2.0, 2.0);
    let mut b = uniform("b", -2.0, 2.0);
    b[..SPECIAL.len()].copy_from_slice(&SPECIAL);
    let mut out = vec![f64::NAN; a.len()];
    let scalar = |number: usize| [0.5, f64::NAN, 0.0, f64::INFINITY][number % 4];
    use Operand::{Column, Scalar};
    for op in [
        Arithmetic::Add,
        Arithmetic::Subtract,
        Arithmetic::Multiply,
        Arithmetic::Divide,
        Arithmetic::Min,
        Arithmetic::Max,
    ] {
        let reference = |a: f64, b: f64| match op {
            Arithmetic::Add => a + b,
            Arithmetic::Subtract => a - b,
            Arithmetic::Multiply => a * b,
            Arithmetic::Divide => a / b,
            Arithmetic::Min | Arithmetic::Max if a.is_nan() || b.is_nan() => f64::NAN,
            Arithmetic::Min => a.min(b),
            Arithmetic::Max => a.max(b),
        };
        binary_column(op, &mut out, Column(&a), Column(&b));
        assert!(
            (0..a.len()).all(|i| same(out[i], reference(a[i], b[i])) && same(out[i], op.of(a[i], b[i]))),
            "{op:?}"
        );
        for number in 0..4 {
            let s = scalar(number);
            binary_column(op, &mut out, Column(&b), Scalar(s));
            assert!(
                (0..a.len()).all(|i| out[i] == reference(b[i], s) || same(out[i], reference(b[i], s))),
                "{op:?} {s}"
            );
            binary_column(op, &mut out, Scalar(s), Column(&b));
            assert!(
                (0..a.len()).all(|i| out[i] == reference(s, b[i]) || same(out[i], reference(s, b[i]))),
                "{op:?} {s}"
            );
            binary_column(op, &mut out, Scalar(s), Scalar(0.25));
            assert!(out.iter().all(|&out| same(out, reference(s, 0.25))), "{op:?} {s}");
        }
    }
}

#[test]
fn comparisons_give_one_or_zero() {
    let column = [1.0, 2.0, 3.0, f64::NAN, f64::INFINITY];
    for (comparison, expected) in [
        (Comparison::Less, [1.0, 0.0, 0.0, 0.0, 0.0]),
        (Comparison::LessOrEqual, [1.0, 1.0, 0.0, 0.0, 0.0]),
        (Comparison::Greater, [0.0, 0.0, 1.0, 0.0, 1.0]),
        (Comparison::GreaterOrEqual, [0.0, 1.0, 1.0, 0.0, 1.0]),
        (Comparison::Equal, [0.0, 1.0, 0.0, 0.0, 0.0]),
        (Comparison::NotEqual, [1.0, 0.0, 1.0, 1.0, 1.0]),
    ] {
        let mut out = [f64::NAN; 5];
        compare_column(comparison, &mut out, Operand::Column(&column), Operand::Scalar(2.0));
        assert_eq!(out, expected, "{comparison:?}");
        compare_column(comparison, &mut out, Operand::Column(&column), Operand::Column(&[2.0; 5]));
        assert_eq!(out, expected, "{comparison:?}");
    }
}

#[test]
fn a_choice_takes_nothing_from_the_other_branch() {
    let condition = [1.0, 0.0, 1.0, 0.0, 0.0];
    let a = [1.0, f64::NAN, 3.0, f64::NAN, f64::INFINITY];
    let b = [f64::NAN, 20.0, f64::NAN, 40.0, 50.0];
    let mut out = [f64::NAN; 5];
    select_column(&mut out, &condition, Operand::Column(&a), Operand::Column(&b));
    assert_eq!(out, [1.0, 20.0, 3.0, 40.0, 50.0]);
    select_column(&mut out, &condition, Operand::Scalar(7.0), Operand::Column(&b));
    assert_eq!(out, [7.0, 20.0, 7.0, 40.0, 50.0]);
    select_column(&mut out, &condition, Operand::Column(&a), Operand::Scalar(8.0));
    assert_eq!(out, [1.0, 8.0, 3.0, 8.0, 8.0]);
    select_column(&mut out, &condition, Operand::Scalar(7.0), Operand::Scalar(8.0));
    assert_eq!(out, [7.0, 8.0, 7.0, 8.0, 8.0]);
}
