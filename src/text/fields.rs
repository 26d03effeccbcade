//! The keys of a map, taken one by one, so that every missing or unknown one is reported.

use super::node::{Kind, Node};
use super::problems::{Problem, Problems, nearest};
use super::rendering::shortened;

/// The keys of a map, taken one by one; `finish` reports those that nobody took.
#[derive(Debug)]
pub struct Fields<'a> {
    node: &'a Node,
    entries: &'a [(Node, Node)],
    what: String,
    asked: Vec<&'static str>,
    rest_taken: bool,
}

impl<'a> Fields<'a> {
    /// The map's fields; adds a problem and gives `None` when `node` is no map. `what` names it: "a relation".
    pub fn of(node: &'a Node, what: &str, problems: &mut Problems) -> Option<Self> {
        let entries = node.map(what, "a map", problems)?;
        Some(Self { node, entries, what: what.to_owned(), asked: Vec::new(), rest_taken: false })
    }
    /// The value of a key, if it stands there.
    pub fn take(&mut self, key: &'static str) -> Option<&'a Node> {
        if !self.asked.contains(&key) {
            self.asked.push(key);
        }
        self.entries.iter().find(|(k, _)| key_text(k) == Some(key)).map(|(_, value)| value)
    }
    /// The value of a key; adds a problem when it is missing.
    pub fn require(&mut self, key: &'static str, problems: &mut Problems) -> Option<&'a Node> {
        self.take(key).or_else(|| {
            problems.push(self.missing(key));
            None
        })
    }
    /// The value of a key; adds a problem that shows how to write it when it is missing.
    pub fn require_like(
        &mut self,
        key: &'static str,
        example: &str,
        problems: &mut Problems,
    ) -> Option<&'a Node> {
        self.take(key).or_else(|| {
            problems.push(self.missing(key).expected(example));
            None
        })
    }
    fn missing(&self, key: &str) -> Problem {
        let name = ["a ", "an "].iter().find_map(|article| self.what.strip_prefix(article));
        let whole = name.map_or(self.what.clone(), |name| format!("the {name}"));
        Problem::at(self.node.place(), format!("`{key}` is missing in {whole}"))
    }
    /// The entries that were not asked for so far, key and value; `finish` then reports nothing.
    pub fn rest(&mut self) -> Vec<(&'a Node, &'a Node)> {
        self.rest_taken = true;
        let unasked = |key: &Node| key_text(key).is_some_and(|text| !self.asked.contains(&text));
        self.entries.iter().filter(|(key, _)| unasked(key)).map(|(key, value)| (key, value)).collect()
    }
    /// Reports every key that was not asked for, with the nearest that was.
    pub fn finish(self, problems: &mut Problems) {
        self.finish_or(|_| None, problems);
    }
    /// The same, but `elsewhere` may say where a key belongs.
    pub fn finish_or(mut self, elsewhere: impl Fn(&str) -> Option<String>, problems: &mut Problems) {
        if self.rest_taken {
            return;
        }
        for (key, _) in self.rest() {
            let Some(text) = key_text(key) else { continue };
            let problem = Problem::at(key.place(), format!("`{}` is not known here", shortened(text, 60)));
            problems.push(match elsewhere(text) {
                Some(expected) => problem.expected(expected),
                None => problem
                    .expected(format!("one of {}", self.asked.join(", ")))
                    .nearest(nearest(text, self.asked.iter().copied())),
            });
        }
    }
}

fn key_text(key: &Node) -> Option<&str> {
    match &key.kind {
        Kind::Scalar(scalar) => Some(&scalar.text),
        Kind::Null | Kind::List(_) | Kind::Map(_) => None,
    }
}

/// `diameter: 210 nm` for `diameter:210 nm`: YAML takes a colon without a blank after it for a part of the text. None when
/// the text does not begin with a name and a colon, and for an address (`https://`).
pub(super) fn with_blank(text: &str) -> Option<String> {
    let (name, value) = text.split_once(':')?;
    let is_name = name.starts_with(|c: char| c.is_alphabetic() || c == '_')
        && name.chars().all(|c| c.is_alphanumeric() || matches!(c, '_' | '-' | '.'));
    let is_value =
        !value.starts_with(|c: char| c.is_whitespace() || matches!(c, '/' | ':')) && !value.is_empty();
    (is_name && is_value).then(|| format!("{name}: {}", shortened(value, 60)))
}

/// `diameter: 210 nm` for what was meant as an entry but is not one: a colon without a blank or of another alphabet, a blank
/// that YAML does not know, an equals sign, no sign at all before a number.
pub(super) fn as_entry(text: &str) -> Option<String> {
    let length = text.find(|c: char| !(c.is_alphanumeric() || matches!(c, '_' | '-' | '.')))?;
    let (name, rest) = text.split_at(length);
    let after = rest.trim_start();
    let value = match after.strip_prefix([':', '\u{ff1a}', '=']) {
        Some(value) => value.trim_start(),
        None if after.starts_with(|c: char| c.is_ascii_digit()) => after,
        None => return None,
    };
    let is_entry =
        name.starts_with(char::is_alphabetic) && !value.is_empty() && !value.starts_with([':', '/']);
    is_entry.then(|| format!("{name}: {}", shortened(value, 60)))
}

#[cfg(test)]
mod tests {
    use super::{Fields, as_entry, with_blank};
    use crate::text::{Problems, Source, yaml};

    #[test]
    fn missing_and_unknown_keys_are_all_reported() {
        let text = "\
gives: metabolic_power
formul: mass * 2
{}: 1
\"\\a\": 2
organism:
  diameter:210 nm
habitat: {widht: 3 nm, temperature: 5 °C}
"
        .replace("{}", "length:4 m");
        let mut problems = Problems::new();
        let found = yaml::documents(&Source::new("s.yaml", text), &mut problems);
        let mut fields = Fields::of(&found[0].1, "a relation", &mut problems).unwrap();
        assert!(fields.take("gives").is_some() && fields.take("basis").is_none());
        assert!(fields.require("formula", &mut problems).is_none());
        let organism = fields.require("organism", &mut problems).unwrap();
        assert!(Fields::of(organism, "the organism", &mut problems).is_none());
        let habitat = fields.take("habitat").unwrap();
        let mut inner = Fields::of(habitat, "the habitat", &mut problems).unwrap();
        assert!(inner.take("temperature").is_some() && inner.take("width").is_none());
        inner.finish(&mut problems);
        fields.finish(&mut problems);
        assert_eq!(
            problems.to_string(),
            "\
s.yaml:1:1  `formula` is missing in the relation
      gives: metabolic_power
      ~~~~~~~~~~~~~~~~~~~~~~

s.yaml:2:1  `formul` is not known here
      formul: mass * 2
      ~~~~~~
   expected  one of gives, basis, formula, organism, habitat
   nearest   formula

s.yaml:3:1  `length:4 m` is not known here
      length:4 m: 1
      ~~~~~~~~~~
   expected  one of gives, basis, formula, organism, habitat

s.yaml:4:1  `␇` is not known here
      \"\\a\": 2
      ~~~~
   expected  one of gives, basis, formula, organism, habitat

s.yaml:6:3  the organism is the text `diameter:210 nm`
      diameter:210 nm
      ~~~~~~~~~~~~~~~
   expected  a map, here `diameter: 210 nm`

s.yaml:7:11  `widht` is not known here
      habitat: {widht: 3 nm, temperature: 5 °C}
                ~~~~~
   expected  one of temperature, width
   nearest   width
"
        );
    }

    #[test]
    fn the_rest_of_a_map_can_be_taken_whatever_its_keys() {
        let mut problems = Problems::new();
        let source = Source::new("s.yaml", "{by: form, sphere: 1, 'rod': 2, 7: 3}");
        let found = yaml::documents(&source, &mut problems);
        let mut fields = Fields::of(&found[0].1, "a value", &mut problems).unwrap();
        assert!(fields.take("by").is_some());
        let keys: Vec<_> = fields.rest().iter().filter_map(|(key, _)| super::key_text(key)).collect();
        assert_eq!(keys, ["sphere", "rod", "7"]);
        fields.finish(&mut problems);
        assert!(problems.is_empty(), "{problems}");
    }

    #[test]
    fn a_blank_is_missed_after_names_only() {
        assert_eq!(with_blank("diameter:210 nm").as_deref(), Some("diameter: 210 nm"));
        assert_eq!(with_blank("a-law.slope:[1, 2]").as_deref(), Some("a-law.slope: [1, 2]"));
        for other in ["https://a.org", "1:30", "a b:c", "a:", "a: b", "a::b", ""] {
            assert_eq!(with_blank(other), None, "{other}");
        }
    }

    #[test]
    fn what_was_meant_as_an_entry_is_shown_as_one() {
        for text in [
            "diameter:210 nm",
            "diameter = 210 nm",
            "diameter 210 nm",
            "diameter:\u{a0}210 nm",
            "diameter：210 nm",
        ] {
            assert_eq!(as_entry(text).as_deref(), Some("diameter: 210 nm"), "{text}");
        }
        for other in
            ["a sphere of 210 nm", "https://a.org", "veskar-spring", "210 nm", "a:", "a::b", "diameter", ""]
        {
            assert_eq!(as_entry(other), None, "{other}");
        }
    }
}
