use crate::text::yaml::tests::shows;

#[test]
fn a_missing_blank_after_a_colon_is_explained() {
    shows(
        "diameter:210 nm\nwidth: 3\n",
        r#"
s.yaml:1:1  a blank is missing after the colon
      diameter:210 nm
      ~~~~~~~~~~~~~~~
   expected  `diameter: 210 nm`
"#,
    );
    shows(
        "organism:\n  width: 3\n  diameter:210 nm  # outer\n",
        r#"
s.yaml:3:3  a blank is missing after the colon
      diameter:210 nm  # outer
      ~~~~~~~~~~~~~~~
   expected  `diameter: 210 nm`
"#,
    );
    shows(
        "organism:\n  diameter:210 nm\n  length: 4\n",
        r#"
s.yaml:2:3  a blank is missing after the colon
      diameter:210 nm
      ~~~~~~~~~~~~~~~
   expected  `diameter: 210 nm`
"#,
    );
    shows(
        "a: {width:[1, 2]}\n",
        r#"
s.yaml:1:5  a blank is missing after the colon
      a: {width:[1, 2]}
          ~~~~~~
   expected  `width: […]`
"#,
    );
    shows(
        "a: {width:210 nm, b: 1}\n",
        r#"
s.yaml:1:5  a blank is missing after the colon
      a: {width:210 nm, b: 1}
          ~~~~~~~~~~~~
   expected  `width: 210 nm`
"#,
    );
    shows(
        "a: {b: 1, width:\"x\"}\n",
        r#"
s.yaml:1:11  a blank is missing after the colon
      a: {b: 1, width:"x"}
                ~~~~~~~~~
   expected  `width: "x"`
"#,
    );
}

#[test]
fn a_text_that_begins_with_a_sign_of_yaml_is_explained() {
    shows(
        "a: *best\n",
        r#"
s.yaml:1:4  a text cannot begin with `*`, which is an alias in YAML
      a: *best
         ~~~~~
   expected  quotes: `"*best"`, or the value itself in place of an alias
"#,
    );
    shows(
        "a: * b # c\n",
        r#"
s.yaml:1:4  a text cannot begin with `*`, which is an alias in YAML
      a: * b # c
         ~~~
   expected  quotes: `"* b"`, or the value itself in place of an alias
"#,
    );
    shows(
        "a: &x 1\nb: *x\n",
        r#"
s.yaml:1:4  a text cannot begin with `&`, which is an anchor in YAML
      a: &x 1
         ~~~~
   expected  quotes: `"&x 1"`, or the value without an anchor

s.yaml:2:4  a text cannot begin with `*`, which is an alias in YAML
      b: *x
         ~~
   expected  quotes: `"*x"`, or the value itself in place of an alias
"#,
    );
    shows(
        "a: &x\n  b: 1\n",
        r#"
s.yaml:1:4  a text cannot begin with `&`, which is an anchor in YAML
      a: &x
         ~~
   expected  quotes: `"&x"`, or the value without an anchor
"#,
    );
    shows(
        "a: [!x b, c]\n",
        r#"
s.yaml:1:5  a text cannot begin with `!`, which is a tag in YAML
      a: [!x b, c]
          ~~~~
   expected  quotes: `"!x b"`, or the value without a tag
"#,
    );
    shows(
        "a: !!float 3\n",
        r#"
s.yaml:1:4  a text cannot begin with `!`, which is a tag in YAML
      a: !!float 3
         ~~~~~~~~~
   expected  quotes: `"!!float 3"`, or the value without a tag
"#,
    );
    shows(
        "a: !x!y b\n",
        r#"
s.yaml:1:4  a text cannot begin with `!`, which is a tag in YAML
      a: !x!y b
         ~~~~~~
   expected  quotes: `"!x!y b"`, or the value without a tag
"#,
    );
    shows(
        "a: %b\n",
        r#"
s.yaml:1:4  a text cannot begin with `%` in YAML
      a: %b
         ~~
   expected  quotes: `"%b"`
"#,
    );
    shows(
        "a: @home \"x\"\n",
        r#"
s.yaml:1:4  a text cannot begin with `@` in YAML
      a: @home "x"
         ~~~~~~~~~
   expected  quotes: `'@home "x"'`
"#,
    );
    shows(
        "a: `b`\n",
        r#"
s.yaml:1:4  a text cannot begin with a backtick in YAML
      a: `b`
         ~~~
   expected  quotes: `"`b`"`
"#,
    );
    shows(
        "a: 1\n%x: 2\n",
        r#"
s.yaml:2:1  a text cannot begin with `%` in YAML
      %x: 2
      ~~~~~
   expected  quotes: `"%x: 2"`
"#,
    );
    shows(
        "a: | text\n  more\n",
        r#"
s.yaml:1:4  a text cannot begin with `|`, which opens a block of lines in YAML
      a: | text
         ~~~~~~
   expected  quotes: `"| text"`, or the text on the lines below, indented
"#,
    );
    shows(
        "a: > 200 nm\nb: 1\n",
        r#"
s.yaml:1:4  a text cannot begin with `>`, which opens a block of lines in YAML
      a: > 200 nm
         ~~~~~~~~
   expected  quotes: `"> 200 nm"`, or the text on the lines below, indented
"#,
    );
    shows(
        "a: >0\n  b\n",
        r#"
s.yaml:1:4  a text cannot begin with `>`, which opens a block of lines in YAML
      a: >0
         ~~
   expected  quotes: `">0"`, or the text on the lines below, indented
"#,
    );
    shows(
        "a: [| x]\n",
        r#"
s.yaml:1:5  a text cannot begin with `|`, which opens a block of lines in YAML
      a: [| x]
          ~~~
   expected  quotes: `"| x"`, or the text on the lines below, indented
"#,
    );
}

#[test]
fn what_the_format_leaves_out_of_yaml_is_refused() {
    shows(
        "%YAML 1.2\n---\na: 1\n",
        r#"
s.yaml:1:1  `%YAML` is a YAML directive, which is not read here
      %YAML 1.2
      ~~~~~~~~~
   expected  the document without it, or quotes around a text that begins with `%`
"#,
    );
    shows(
        "<<: {a: 1}\n\"<<\": 1\n",
        r#"
s.yaml:1:1  the key `<<` merges another map, which is not read here
      <<: {a: 1}
      ~~
   expected  the entries themselves
"#,
    );
    shows(
        "? [a]\n: 1\n",
        r#"
s.yaml:1:3  a key is a list
      ? [a]
        ~
   expected  a word or a text as key; quotes around a text that begins with a bracket
"#,
    );
    shows(
        "{a: b}: 1\n",
        r#"
s.yaml:1:1  a key is a map
      {a: b}: 1
      ~
   expected  a word or a text as key; quotes around a text that begins with a bracket
"#,
    );
    shows(
        ": 1\n",
        r#"
s.yaml:1:1  no key stands before the colon
      : 1
      ~
   expected  `key: value`, or quotes
"#,
    );
    shows(
        "{\"a\n b\": 1}\n",
        r#"
s.yaml:1:2  a key runs over several lines
      {"a
       ~~
   expected  a key on one line
"#,
    );
    shows(
        "a: \u{85}\n",
        r#"
s.yaml:1:4  the character U+0085 cannot stand in a YAML text
      a: <U+0085>
         ~~~~~~~~
   expected  visible characters, or `"\u0085"` in double quotes
"#,
    );
    shows(
        "a: \u{1b}[31m\n",
        r#"
s.yaml:1:4  the character U+001B cannot stand in a YAML text
      a: ␛[31m
         ~
   expected  visible characters, or `"\u001B"` in double quotes
"#,
    );
    shows(
        "a: 1\n... x\nb: 1\n",
        r#"
s.yaml:2:5  text follows the `...` that ends a document
      ... x
          ~
   expected  `...` alone on its line
"#,
    );
}

#[test]
fn repeated_keys_name_the_line_of_the_first() {
    shows(
        "a: 1\nb: {c: 1, 'c': 2}\na: 3\n",
        r#"
s.yaml:2:11  `c` is repeated; it first stands in line 2
      b: {c: 1, 'c': 2}
                ~~~
   expected  each key once in a map

s.yaml:3:1  `a` is repeated; it first stands in line 1
      a: 3
      ~
   expected  each key once in a map
"#,
    );
    shows(
        "- a: 1\n- a: 2\n  b: 3\n  \"a\": 4\n",
        r#"
s.yaml:4:3  `a` is repeated; it first stands in line 2
      "a": 4
      ~~~
   expected  each key once in a map
"#,
    );
}
