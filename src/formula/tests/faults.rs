use proptest::{prop_assert, proptest};

use super::{entry, faults, shown};
use crate::formula::Formula;

/// Wrong formulas, each after `> `, with all their faults; `# ` starts a group.
const WRONG: &str = include_str!("wrong-formulas.txt");

#[test]
fn every_wrong_formula_has_its_faults_with_their_bytes() {
    let cases: Vec<_> = WRONG.split("\n> ").skip(1).collect();
    assert!(cases.len() > 100, "{} cases", cases.len());
    for case in cases {
        let mut lines = case.lines();
        let text = lines.next().unwrap();
        let expected: Vec<_> = lines.take_while(|line| !line.is_empty() && !line.starts_with('#')).collect();
        assert_eq!(faults(text), expected, "{text}");
    }
}

#[test]
fn a_formula_without_text_is_refused() {
    assert_eq!(faults(""), ["0..0 the formula is empty; expected: an expression"]);
    assert_eq!(faults(" \n "), ["0..3 the formula is empty; expected: an expression"]);
}

#[test]
fn characters_that_do_not_show_are_named_by_their_number() {
    assert_eq!(
        faults("x\u{7}"),
        [
            "1..2 the character U+0007 cannot stand in a formula; expected: names of lower-case letters, digits and \
          `_`, numbers, and the operators `+ - * / ^`"
        ]
    );
    assert_eq!(
        faults("x\u{200b}"),
        [
            "1..4 the character U+200B cannot stand in a formula; expected: names of lower-case letters, digits and \
          `_`, numbers, and the operators `+ - * / ^`"
        ]
    );
}

#[test]
fn deep_nesting_is_refused_once() {
    let expected =
        "the formula nests more than 64 levels deep; expected: parts of it as relations of their own";
    let nests = [
        ("(".repeat(65) + "x" + &")".repeat(65), 65),
        ("(".repeat(4096), 65),
        ("-".repeat(4095) + "x", 65),
        ("x^".repeat(2000) + "x", 130),
        ("exp(".repeat(1000), 260),
        ("choose(x<y,1,".repeat(300), 839),
    ];
    for (text, place) in nests {
        assert_eq!(faults(&text), [format!("{place}..{} {expected}", place + length_at(&text, place))]);
    }
    let function_names = faults(&"sqrt ".repeat(800));
    assert!(function_names.last().unwrap().contains(expected), "{function_names:?}");
    assert!(Formula::read(&("(".repeat(64) + "x" + &")".repeat(64)), &entry()).is_ok());
}

/// The bytes of the token at `place` in the texts above.
fn length_at(text: &str, place: usize) -> usize {
    let word = text[place..].find(|c: char| !c.is_ascii_lowercase()).unwrap_or(text.len() - place);
    word.max(1)
}

#[test]
fn long_rows_and_long_texts_are_refused() {
    let row = |terms: usize| vec!["x"; terms].join("+");
    assert!(Formula::read(&row(256), &entry()).is_ok());
    assert_eq!(
        faults(&row(257)),
        [
            "0..513 the formula has 257 levels of operators; expected: at most 256; parts of it as relations of \
          their own"
        ]
    );
    assert!(faults(&row(2048))[0].starts_with("0..4095 the formula has 2048 levels"));
    assert!(faults(&format!("x^({})", row(2000)))[0].starts_with("0..4003 the formula has 2001 levels"));
    assert!(faults(&format!("x^({})", row(2000).replace('x', "1")))[0].contains("2001 levels"));
    assert_eq!(
        faults(&"x".repeat(4097)),
        ["0..4097 the formula has 4097 bytes; expected: at most 4096; parts of it as relations of their own"]
    );
}

#[test]
fn long_names_are_cut_in_messages() {
    let name = "z".repeat(1000);
    assert_eq!(
        faults(&name),
        [format!("0..1000 unknown name `{}…`; expected: a quantity, parameter or constant", "z".repeat(40))]
    );
}

/// Reads any text: it gives a formula or at least one fault, and every fault points at whole characters.
fn reads(text: &str) -> Result<(), String> {
    match Formula::read(text, &entry()) {
        Ok(formula) => {
            let printed = formula.root().to_string();
            let again =
                Formula::read(&printed, &entry()).map_err(|faults| format!("{printed}: {faults:?}"))?;
            if again.root() == formula.root() {
                Ok(())
            } else {
                Err(format!("{text} was printed as {printed}"))
            }
        }
        Err(faults) if faults.is_empty() => Err("refused without a fault".to_owned()),
        Err(faults) => match faults.iter().find(|fault| text.get(fault.span.clone()).is_none()) {
            Some(fault) => Err(format!("{} is off the characters", shown(fault))),
            None => Ok(()),
        },
    }
}

proptest! {
    #[test]
    fn no_text_panics(text in "\\PC{0,40}|[ -~\\s]{0,60}") {
        let result = reads(&text);
        prop_assert!(result.is_ok(), "{:?}", result);
    }

    #[test]
    fn no_row_of_pieces_panics(pieces in proptest::collection::vec(
        proptest::sample::select(vec![
            "x", "diameter", "mass", "2", "0.5", "1e3", "0", "infinity", "+", "-", "*", "/", "^", "(", ")", ",", "<",
            "<=", "=", "and", "or", "not", "choose(", "max(", "sqrt", "exp(", "fraction(", "[kg]", "[", "]", "²", "×",
            "**", "!", "?", "unknown", "kJ", ".", "_", "1.", "µ", "\u{0}", " ",
        ]), 0..24)) {
        let result = reads(&pieces.join(" "));
        prop_assert!(result.is_ok(), "{:?}", result);
        let result = reads(&pieces.concat());
        prop_assert!(result.is_ok(), "{:?}", result);
    }
}
