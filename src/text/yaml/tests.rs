mod hostile;

use super::documents;
use crate::text::{Kind, Node, Problems, Source};

/// What a file of this text shows when it is read.
#[track_caller]
pub(super) fn shows(text: &str, expected: &str) {
    let (_, problems) = read(text);
    assert_eq!(problems.to_string(), expected.trim_start_matches('\n'), "{text:?}");
}

fn read(text: &str) -> (Vec<(usize, Node)>, Problems) {
    let mut problems = Problems::new();
    let found = documents(&Source::new("s.yaml", text), &mut problems);
    (found, problems)
}

/// A node on one line: quoted texts in quotes, nothing as `~`.
fn brief(node: &Node) -> String {
    match &node.kind {
        Kind::Null => "~".to_owned(),
        Kind::Scalar(scalar) if scalar.quoted => format!("{:?}", scalar.text),
        Kind::Scalar(scalar) => scalar.text.clone(),
        Kind::List(list) => format!("[{}]", list.iter().map(brief).collect::<Vec<_>>().join(", ")),
        Kind::Map(map) => {
            let entries = map.iter().map(|(key, value)| format!("{}: {}", brief(key), brief(value)));
            format!("{{{}}}", entries.collect::<Vec<_>>().join(", "))
        }
    }
}

/// The documents of a text that holds no mistake, with their numbers.
#[track_caller]
fn briefs(text: &str) -> Vec<(usize, String)> {
    let (found, problems) = read(text);
    assert!(problems.is_empty(), "{problems}");
    found.iter().map(|(number, node)| (*number, brief(node))).collect()
}

/// The text of the file at every node, a list or map before what it holds.
fn pieces(node: &Node) -> Vec<&str> {
    let mut pieces = vec![&node.source.text[node.span.start..node.span.end]];
    match &node.kind {
        Kind::List(list) => list.iter().for_each(|node| pieces.extend(self::pieces(node))),
        Kind::Map(map) => map.iter().for_each(|(key, value)| {
            pieces.extend(self::pieces(key));
            pieces.extend(self::pieces(value));
        }),
        Kind::Null | Kind::Scalar(_) => {}
    }
    pieces
}

#[test]
fn scalars_are_kept_as_written() {
    let text =
        "[1.30e6, 010, yes, 1:30, 1e400, 0x1F, .nan, 1_000, +5, true, ~, null, '~', \"\", '010', -0.0]";
    assert_eq!(
        briefs(text),
        [(
            1,
            "[1.30e6, 010, yes, 1:30, 1e400, 0x1F, .nan, 1_000, +5, true, ~, ~, \"~\", \"\", \"010\", -0.0]"
                .to_owned()
        )]
    );
}

#[test]
fn examples_of_the_specification_read_as_it_says() {
    // YAML 1.2.2, chapter 2, examples 2.2, 2.3, 2.6, 2.13, 2.14, 2.15 and 2.18 (quoted from memory).
    let examples = [
        (
            "hr:  65    # Home runs\navg: 0.278 # Batting average\nrbi: 147   # Runs Batted In\n",
            "{hr: 65, avg: 0.278, rbi: 147}",
        ),
        (
            "american:\n- Boston Red Sox\n- Detroit Tigers\nnational:\n- New York Mets\n",
            "{american: [Boston Red Sox, Detroit Tigers], national: [New York Mets]}",
        ),
        (
            "Mark McGwire: {hr: 65, avg: 0.278}\nSammy Sosa: {\n    hr: 63,\n    avg: 0.288,\n }\n",
            "{Mark McGwire: {hr: 65, avg: 0.278}, Sammy Sosa: {hr: 63, avg: 0.288}}",
        ),
        ("# ASCII Art\n--- |\n  \\//||\\/||\n  // ||  ||__\n", r#""\\//||\\/||\n// ||  ||__\n""#),
        (
            "--- >\n  Mark McGwire's\n  year was crippled\n  by a knee injury.\n",
            r#""Mark McGwire's year was crippled by a knee injury.\n""#,
        ),
        (
            "--- >\n Sammy Sosa completed another\n fine season with great stats.\n\n   63 Home Runs\n   0.288 Batting Average\n\n What a year!\n",
            r#""Sammy Sosa completed another fine season with great stats.\n\n  63 Home Runs\n  0.288 Batting Average\n\nWhat a year!\n""#,
        ),
        (
            "plain:\n  This unquoted scalar\n  spans many lines.\n\nquoted: \"So does this\n  quoted scalar.\\n\"\n",
            r#"{plain: This unquoted scalar spans many lines., quoted: "So does this quoted scalar.\n"}"#,
        ),
    ];
    for (text, expected) in examples {
        assert_eq!(briefs(text), [(1, expected.to_owned())]);
    }
}

#[test]
fn every_node_knows_its_place() {
    let text = "\
# µ
a: 210 ± 30 nm  # µµ
'b': [x, \"µ \\\" µ\" ]  # µ
c: |  # µ > ]
  one

   two

# µ
d:
- x
-
- {e: f, g, h: [],}
i: >-

  fold
  ed
j: µ µ
   k
l:
";
    let (found, problems) = read(text);
    assert!(problems.is_empty(), "{problems}");
    assert_eq!(
        brief(&found[0].1),
        "{a: 210 ± 30 nm, \"b\": [x, \"µ \\\" µ\"], c: \"one\\n\\n two\\n\", d: [x, ~, {e: f, g: ~, h: []}], \
         i: \"\\nfold ed\", j: µ µ k, l: ~}"
    );
    assert_eq!(
        pieces(&found[0].1)[1..],
        [
            "a",
            "210 ± 30 nm",
            "'b'",
            "[x, \"µ \\\" µ\" ]",
            "x",
            "\"µ \\\" µ\"",
            "c",
            "|  # µ > ]\n  one\n\n   two",
            "d",
            "- x\n-\n- {e: f, g, h: [],}",
            "x",
            "-",
            "{e: f, g, h: [],}",
            "e",
            "f",
            "g",
            "g",
            "h",
            "[]",
            "i",
            ">-\n\n  fold\n  ed",
            "j",
            "µ µ\n   k",
            "l",
            "l",
        ]
    );
    assert_eq!(pieces(&found[0].1)[0], text[5..].trim_end().strip_suffix(':').unwrap());
}

#[test]
fn several_documents_are_numbered_and_empty_ones_passed_over() {
    let numbered = |list: &[(usize, &str)]| -> Vec<(usize, String)> {
        list.iter().map(|(number, text)| (*number, (*text).to_owned())).collect()
    };
    assert_eq!(briefs("# c\n---\na\n---\n# c\n---\nb\n...\n"), numbered(&[(1, "a"), (3, "b")]));
    assert_eq!(briefs("\u{feff}a: 1\r\n--- [b]\r\n"), numbered(&[(1, "{a: 1}"), (2, "[b]")]));
    assert_eq!(briefs("a: |\n  x\n---\nb"), numbered(&[(1, "{a: \"x\\n\"}"), (2, "b")]));
    for empty in ["", "\n", "# remark\n", "---\n", "---\n# remark\n...\n", "\u{feff}"] {
        shows(empty, "`s.yaml` is empty, or holds nothing but remarks\n   expected  a document in YAML\n");
    }
}

#[test]
fn a_wrong_document_leaves_the_others_readable() {
    let (found, problems) = read("a: 1\n---\nb: [\n---\nc: *x\n---\nd: \"\n---\ne: 5\n");
    let found: Vec<_> = found.iter().map(|(number, node)| (*number, brief(node))).collect();
    assert_eq!(found, [(1, "{a: 1}".to_owned()), (5, "{e: 5}".to_owned())]);
    let lines: Vec<_> = problems.iter().map(|p| p.place.as_ref().unwrap().line_column()).collect();
    assert_eq!(lines, [(3, 4), (5, 4), (7, 4)]);
}

#[test]
fn all_refusals_of_a_document_are_reported_together() {
    let (found, problems) = read("a: &x 1\nb: *x\na: 2\n? [c]\n: !t 3\n<<: {}\n");
    assert!(found.is_empty());
    assert_eq!(problems.len(), 6, "{problems}");
    let (_, problems) = read(&"- &x 1\n".repeat(5_000));
    assert_eq!(problems.len(), 100);
}

#[test]
fn documents_beyond_the_limit_are_refused_without_reading_any() {
    let (found, problems) = read(&"---\na: 1\n".repeat(65_536));
    assert_eq!((found.len(), problems.len()), (65_536, 0));
    shows(
        &"---\na: 1\n".repeat(65_537),
        "
s.yaml:131073:1  the file holds more than 65536 documents
      ---
      ~~~
   expected  several files
",
    );
}

#[test]
fn a_text_that_two_parsers_read_differently_is_refused() {
    shows(
        "a: {b:, c: 1}\n",
        "
s.yaml:1:6  a colon inside brackets has no blank after it
      a: {b:, c: 1}
           ~
   expected  `key: value` with a blank, or quotes around a text that holds a colon
",
    );
    shows(
        "-\tb\n",
        "
s.yaml:1:2  a tab stands where YAML takes only blanks
      -␉b
       ~
   expected  blanks
",
    );
    // What has no known reason is pointed at all the same.
    let source = Source::new("s.yaml", "a: b\nµ: c\n");
    let shown = |byte| super::accidents::unreadable(&source, &(5..11), byte).to_string();
    let line = "µ: c";
    for (byte, column, blanks) in
        [(None, 1, ""), (Some(1), 1, ""), (Some(4), 4, "   "), (Some(99), 5, "    ")]
    {
        let expected = format!(
            "\
s.yaml:2:{column}  versions of YAML disagree on how this is to be read
      {line}
      {blanks}~
   expected  quotes around a text that holds signs of YAML
"
        );
        assert_eq!(shown(byte), expected);
    }
}
