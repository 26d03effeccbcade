//! Deep, long, repeated and random texts: none ends in a panic, none takes long.

use std::fmt::Write as _;
use std::sync::Arc;
use std::time::{Duration, Instant};

use proptest::prelude::{ProptestConfig, any, prop_assert, prop_assert_eq, proptest};
use proptest::sample::select;

use super::{read, shows};
use crate::text::yaml::documents;
use crate::text::{Fault, Kind, Node, Problems, Source};

/// Opens and closes `depth` times.
fn nested(open: &str, close: &str, depth: usize) -> String {
    format!("{}1{}", open.repeat(depth), close.repeat(depth))
}

#[test]
fn nesting_ends_at_a_depth_of_64() {
    for (open, close) in [("[", "]"), ("{a: ", "}"), ("- ", ""), ("? ", "")] {
        let (found, problems) = read(&nested(open, close, 64));
        if open == "? " {
            // A map as a key is refused whatever its depth.
            assert!(problems.iter().all(|problem| problem.message == "a key is a map"), "{problems}");
        } else {
            assert!(problems.is_empty() && found.len() == 1, "{open}: {problems}");
        }
        let (_, problems) = read(&nested(open, close, 65));
        let deepest = "lists and maps stand more than 64 deep within each other";
        assert_eq!(problems.iter().filter(|problem| problem.message == deepest).count(), 1, "{problems}");
    }
    shows(
        &format!("a:\n  {}", nested("[", "", 64)),
        &format!(
            "
s.yaml:2:66  lists and maps stand more than 64 deep within each other
      {}1
      {}~
   expected  a flatter document
",
            "[".repeat(64),
            " ".repeat(63)
        ),
    );
}

#[test]
fn a_document_of_too_many_nodes_is_refused_wherever_they_stand() {
    let most = "the document holds more than 100000 keys and values";
    // The list and its elements.
    let list = |elements: usize| "- 1\n".repeat(elements);
    assert!(read(&list(99_999)).1.is_empty());
    assert_eq!(read(&format!("{}---\n{}", list(99_999), list(99_999))).0.len(), 2);
    for text in [
        list(100_000),
        format!("[{}", "1, ".repeat(200_000)),
        format!("- ? - [{}", "1, ".repeat(500_000)),
        format!("!t &a {{{}", "a: b, ".repeat(300_000)),
        format!("*a [{}", "[], ".repeat(500_000)),
        format!("[{}", "[".repeat(500_000)),
        format!("\"x\": {{{}", "a, ".repeat(500_000)),
    ] {
        let (found, problems) = read(&text);
        let messages: Vec<_> = problems.iter().map(|problem| problem.message.as_str()).collect();
        assert!(found.is_empty() && messages.ends_with(&[most]), "{}: {messages:?}", &text[..9]);
    }
    // Signs of YAML in a text of many lines are no nodes.
    assert!(read(&format!("a: |\n{}", "  b, [c], {d: e} 'f' \"g\"\n".repeat(50_000))).1.is_empty());
}

/// How long reading takes; the limits are generous, for machines that are busy.
fn time(text: &str) -> Duration {
    let source = Source::new("s.yaml", text);
    let started = Instant::now();
    let mut problems = Problems::new();
    let found = documents(&source, &mut problems);
    assert!(!found.is_empty() || !problems.is_empty());
    let _ = problems.to_string();
    started.elapsed()
}

#[test]
fn hostile_nesting_is_refused_at_once() {
    for open in [
        "[",
        "{a: ",
        "- ",
        "? ",
        "[{a: ",
        "- [",
        "a: [",
        "{? ",
        "[? ",
        "- ? ",
        "'",
        "\"",
        "!t ",
        "&a ",
        "- - - - &a ",
    ] {
        let took = time(&open.repeat(100_000));
        assert!(took < Duration::from_millis(500), "{open}: {took:?}");
    }
    let mut bomb = "a0: &a0 [x, x]\n".to_owned();
    for level in 1..40 {
        let below = level - 1;
        writeln!(bomb, "a{level}: &a{level} [*a{below}, *a{below}, *a{below}]").unwrap();
    }
    assert!(time(&bomb) < Duration::from_millis(100));
}

#[test]
fn long_texts_are_read_in_time_that_grows_with_their_length() {
    let repeated = [
        "- a: 1\n",
        "---\na: 1\na: 2\n",
        "---\na: [1}\n",
        "---\na: x: y\n",
        "---\n- &a x\n",
        "---\n\ta\n",
        "---\na: \"\n",
        "---\na: 'b'c\n",
        "a b\n",
        "# remark\n",
        "\n",
        " ",
        "[1, 2],",
        "a,",
        "'a' ",
        "µ: ",
        "- µ # µ\n",
        "a: |\n",
        " |\n  µ\n",
        "- \"µ\"\n",
        "---\n",
        "...\n",
        "- [a: b]\n",
        ": ",
        "? a\n",
        "\t",
        "-\t",
        "a:b\n",
        "\\",
        "{a: b},\n",
        "}",
        "x:\n y: z\n ",
    ];
    for piece in repeated {
        for prefix in ["", "[", "\"", "|\n ", "a: "] {
            let (short, long) = (piece.repeat(20_000 / piece.len()), piece.repeat(640_000 / piece.len()));
            let took = time(&format!("{prefix}{long}"));
            // Eight times more than 32 times the time of a text 32 times shorter, or a quarter of a second, is too much.
            let limit = (time(&format!("{prefix}{short}")) * 32 * 8).max(Duration::from_millis(1_500));
            assert!(took < limit, "{prefix}{piece}: {took:?}");
        }
    }
}

fn check_nodes(node: &Node) -> Result<(), String> {
    let raw = node.source.text.get(node.span.start..node.span.end).ok_or("a span cuts a character")?;
    match &node.kind {
        Kind::Null => {}
        Kind::Scalar(scalar) => {
            if !scalar.quoted && !raw.contains(['\n', '\r']) && raw != scalar.text {
                return Err(format!("{raw:?} was read as {:?}", scalar.text));
            }
            for at in 0..=scalar.text.len() {
                let place = node.fault_place(at..at + 1);
                if place.span.start < node.span.start || place.span.end > node.span.end.max(node.span.start) {
                    return Err(format!("{at} of {:?} stands outside {raw:?}", scalar.text));
                }
                let _ = node.problem(Fault::new(at..at, "x")).to_string();
            }
        }
        Kind::List(list) => list.iter().try_for_each(check_nodes)?,
        Kind::Map(map) => {
            map.iter().try_for_each(|(key, value)| check_nodes(key).and_then(|()| check_nodes(value)))?;
        }
    }
    Ok(())
}

fn check_any_text(text: &str) -> Result<(), String> {
    let source = Source::new("s.yaml", text);
    let started = Instant::now();
    let mut problems = Problems::new();
    let found = documents(&source, &mut problems);
    let shown = problems.to_string();
    if started.elapsed() > Duration::from_secs(2) {
        return Err("took too long".to_owned());
    }
    if found.is_empty() == problems.is_empty() && found.is_empty() {
        return Err("neither a document nor a problem".to_owned());
    }
    if shown.chars().any(|c| c.is_control() && c != '\n') {
        return Err("a control character passed through".to_owned());
    }
    found.iter().try_for_each(|(_, node)| {
        assert!(Arc::ptr_eq(&node.source, &source));
        check_nodes(node)
    })
}

/// Pieces from which YAML, right and wrong, is put together.
const PIECES: &[&str] = &[
    "a",
    "b: ",
    "key:",
    "- ",
    "-",
    "\n",
    "\n  ",
    "\n    ",
    "  ",
    " ",
    "[",
    "]",
    "{",
    "}",
    ", ",
    ",",
    ": ",
    ":",
    "#",
    " # c",
    "\"",
    "'",
    "''",
    "|",
    ">",
    "|\n",
    "a: |\n  ",
    "a: >-\n  ",
    "&x ",
    "*x",
    "!t ",
    "? ",
    "%",
    "@",
    "`",
    "\t",
    "\n---\n",
    "\n...\n",
    "µ",
    "\r\n",
    "\r",
    "\u{85}",
    "\\",
    "\\n",
    "\\\n",
    "\\u00b5",
    "<<: ",
    "~",
    "null",
    "1.5",
    "\u{feff}",
    "\u{2028}",
    "\u{7}",
    "\u{202e}",
    "細胞",
    "+",
    "2",
];

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn any_text_ends_in_documents_or_problems(text in any::<String>()) {
        prop_assert_eq!(check_any_text(&text), Ok(()));
    }

    #[test]
    fn anything_like_yaml_ends_in_documents_or_problems(
        pieces in proptest::collection::vec(select(PIECES), 0..40)
    ) {
        prop_assert_eq!(check_any_text(&pieces.concat()), Ok(()));
    }

    #[test]
    fn a_text_in_quotes_comes_back_with_every_character_in_place(
        text in "[ -~µ±\n]{0,40}", needle in 0_usize..40
    ) {
        let quoted = format!("a: {:?}\n", text);
        let (found, problems) = read(&quoted);
        prop_assert!(problems.is_empty(), "{}", problems);
        let Kind::Map(entries) = &found[0].1.kind else { panic!("{quoted}") };
        let value = &entries[0].1;
        let Kind::Scalar(scalar) = &value.kind else { panic!("{quoted}") };
        prop_assert_eq!(&scalar.text, &text);
        if let Some(c) = text[text.floor_char_boundary(needle)..].chars().next() {
            let start = text.floor_char_boundary(needle);
            let place = value.fault_place(start..start + c.len_utf8());
            let raw = &quoted[place.span.start..place.span.end];
            let expected = match c {
                '"' => "\\\"".to_owned(),
                '\\' => "\\\\".to_owned(),
                '\n' => "\\n".to_owned(),
                other => other.to_string(),
            };
            prop_assert_eq!(raw, expected);
        }
    }
}
