//! The language's document and the language agree.

use super::{faults, read};
use crate::formula::{Function, is_reserved};

const DOCUMENT: &str = include_str!("../../../docs/formula-language.md");

#[test]
fn every_example_of_the_document_is_a_formula() {
    let block = DOCUMENT.split("```formula\n").nth(1).unwrap().split("```").next().unwrap();
    assert!(block.lines().count() >= 9);
    for line in block.lines() {
        let formula = read(line);
        assert_eq!(formula.text(), line);
    }
}

#[test]
fn the_document_lists_every_function() {
    let table = DOCUMENT.split("## Functions").nth(1).unwrap().split("## Values").next().unwrap();
    for function in Function::ALL {
        assert!(table.contains(&format!("`{}(", function.name())), "{}", function.name());
    }
    for word in "and or not infinity choose solve integral sum product least greatest".split(' ') {
        assert!(is_reserved(word), "{word}");
    }
}

#[test]
fn the_wrong_formula_of_the_document_has_the_faults_shown() {
    let block = DOCUMENT.split("```text\n").nth(2).unwrap().split("```").next().unwrap();
    let mut lines = block.lines();
    let found = faults(lines.next().unwrap());
    let shown: Vec<_> = lines
        .map(|line| {
            let (start, end) = (line.find('^').unwrap(), line.rfind('^').unwrap() + 1);
            let message = line[end..].trim_start().split("; ").next().unwrap();
            format!("{start}..{end} {message}")
        })
        .collect();
    assert_eq!(found.len(), shown.len(), "{found:?}");
    for (found, shown) in found.iter().zip(shown) {
        assert!(found.starts_with(&shown), "{found}, not {shown}");
    }
}
