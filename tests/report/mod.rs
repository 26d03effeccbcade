//! What reports say, and what they never do.

mod fixtures;

use fixtures::{HOSTILE, failing, hostile, passing, unassessed};
use hypobiont::judge::Assessment;
use hypobiont::report::terminal::{self, Options};
use hypobiont::report::{csv, json, lines, markdown};
use unicode_width::UnicodeWidthStr;

use crate::snapshot::compare;

const WIDTHS: [usize; 5] = [50, 66, 80, 100, 140];
const COMMAND: &str = "hypobiont screen tarn/spheroids.yaml --format markdown --seed 1";

fn screen(assessments: &[Assessment], width: usize) -> String {
    terminal::report(assessments, Options { width, ..Options::default() })
}

/// Every format, named, with the screens at every width.
fn every_format(assessments: &[Assessment]) -> Vec<(String, String)> {
    let mut out: Vec<(String, String)> = WIDTHS
        .into_iter()
        .flat_map(|width| {
            let every = Options { width, every: true, ..Options::default() };
            [
                (format!("screen {width}"), screen(assessments, width)),
                (format!("screen {width} every"), terminal::report(assessments, every)),
                (format!("summary {width}"), terminal::summary(assessments, every)),
            ]
        })
        .collect();
    out.extend([
        ("lines".to_owned(), lines::report(assessments)),
        ("markdown".to_owned(), markdown::report(assessments, &format!("{COMMAND} {HOSTILE}"))),
        ("json".to_owned(), json::array(assessments)),
        ("csv".to_owned(), csv::table(assessments)),
    ]);
    out.extend(assessments.iter().map(|a| ("ndjson".to_owned(), json::line(a))));
    out
}

#[test]
fn screens_are_as_approved() {
    for width in WIDTHS {
        compare(&format!("screen/failing-{width}.txt"), &screen(&[failing()], width));
    }
    compare("screen/passing-100.txt", &screen(&[passing()], 100));
    compare("screen/unassessed-100.txt", &screen(&[unassessed()], 100));
    compare("screen/hostile-100.txt", &screen(&[hostile()], 100));
    let every = Options { every: true, ..Options::default() };
    compare("screen/failing-every-100.txt", &terminal::report(&[failing()], every));
}

#[test]
fn summaries_are_as_approved_and_come_worst_first() {
    let several = [passing(), unassessed(), hostile(), failing()];
    for width in WIDTHS {
        compare(
            &format!("screen/summary-{width}.txt"),
            &terminal::summary(&several, Options { width, ..Options::default() }),
        );
    }
    let rows = terminal::summary(&several, Options::default());
    let place = |name: &str| rows.find(name).unwrap_or_else(|| panic!("{name} is in the summary"));
    assert!(place("Spheroid T-3") < place("Grain T-11"));
    assert!(place("Grain T-11") < place("=T"));
    assert!(place("=T") < place("Rodlet T-9"));
}

#[test]
fn other_formats_are_as_approved() {
    for (name, a) in [("failing", failing()), ("passing", passing()), ("unassessed", unassessed())] {
        let a = [a];
        compare(&format!("lines/{name}.txt"), &lines::report(&a));
        compare(&format!("markdown/{name}.md"), &markdown::report(&a, COMMAND));
        compare(&format!("json/{name}.json"), &json::object(&a[0]));
    }
    compare("markdown/hostile.md", &markdown::report(&[hostile()], COMMAND));
    compare("csv/several.csv", &csv::table(&[failing(), passing(), unassessed()]));
}

#[test]
fn no_line_of_a_screen_is_wider_than_the_screen_or_ends_in_a_blank() {
    for width in WIDTHS {
        for every in [false, true] {
            let options = Options { width, every, ..Options::default() };
            let several = [failing(), passing(), unassessed(), hostile()];
            for line in terminal::report(&several, options).lines() {
                assert!(line.width() <= width, "{width}: {line}");
                assert_eq!(line, line.trim_end());
            }
        }
    }
}

#[test]
fn strange_numbers_and_widths_give_a_report_all_the_same() {
    let mut a = failing();
    for (result, strange) in a.constraints.iter_mut().zip([
        f64::NAN,
        f64::INFINITY,
        f64::NEG_INFINITY,
        f64::MAX,
        f64::MIN_POSITIVE,
        0.0,
    ]) {
        if let Some(numbers) = &mut result.assessed {
            (numbers.available, numbers.required, numbers.chance) = (strange, -strange, strange);
            (numbers.margin.median, numbers.margin.low, numbers.margin.high) = (strange, -strange, strange);
        }
    }
    for q in &mut a.quantities {
        (q.median, q.low, q.high) = (f64::NAN, f64::NEG_INFINITY, f64::INFINITY);
    }
    for width in [0, 1, 30, 41, 100_000] {
        let text = screen(&[a.clone(), hostile()], width);
        assert!(text.contains("Spheroid"), "{width}");
    }
    assert!(every_format(&[a]).iter().all(|(_, text)| text.contains("Spheroid") || text.contains("T-3")));
}

#[test]
fn nothing_that_a_terminal_obeys_passes_through_any_format() {
    for (format, text) in every_format(&[hostile()]) {
        assert!(
            text.contains("=T␛[2J") || format == "csv" || format.starts_with("screen"),
            "{format}: the name is shown"
        );
        let obeyed = |c: char| c != '\n' && c.is_control() || matches!(c, '\u{202e}' | '\u{2028}' | '\u{a0}');
        if let Some(place) = text.find(obeyed) {
            panic!("{format}: {:?}", &text[place.saturating_sub(20)..place + 4]);
        }
    }
}

#[test]
fn colour_adds_escapes_of_its_own_and_changes_no_word() {
    let a = [failing(), passing()];
    let plain = screen(&a, 100);
    let coloured = terminal::report(&a, Options { colour: true, ..Options::default() });
    assert!(coloured.contains("\u{1b}[1;31mFail\u{1b}[0m"));
    let mut stripped = String::new();
    for part in coloured.split('\u{1b}') {
        match part.strip_prefix('[').and_then(|part| part.split_once('m')) {
            Some((_, text)) => stripped.push_str(text),
            None => stripped.push_str(part),
        }
    }
    assert_eq!(stripped, plain);
}

#[test]
fn no_report_calls_anything_likely_and_every_report_carries_the_caution() {
    for (format, text) in every_format(&[failing(), passing(), unassessed()]) {
        assert!(!text.to_lowercase().contains("likely"), "{format}");
        let flowing = text.split_whitespace().collect::<Vec<_>>().join(" ");
        let for_people = !(format.starts_with("summary") || format == "csv" || format.contains("json"));
        if for_people {
            assert!(flowing.contains("A pass is never evidence of life"), "{format}");
            assert!(flowing.contains("planetary-protection policy"), "{format}");
        }
    }
    let flowing = screen(&[passing()], 100).split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(flowing.contains("Pass, on a biochemical basis, which is never evidence of life."));
}

#[test]
fn every_row_is_shown_when_asked_for_and_ample_passes_are_folded_otherwise() {
    let rows = |every| terminal::report(&[failing()], Options { every, ..Options::default() });
    assert!(rows(false).contains("Ample          3 limits with tenfold room or more"));
    assert!(rows(false).contains("Stress in the wall (from memory)"));
    assert!(!rows(true).contains("Ample"));
    assert!(rows(true).lines().any(|line| line.starts_with("Stress in the wall ")));
}

#[test]
fn json_has_its_keys_in_the_documented_order() {
    let text = json::object(&failing());
    let mut from = 0;
    for key in ["format", "tool", "candidate", "run", "overall", "constraints", "quantities", "warnings"] {
        let wanted = format!("\n  \"{key}\": ");
        let place = text[from..].find(&wanted).unwrap_or_else(|| panic!("`{key}` stands after the others"));
        from += place + wanted.len();
    }
    let one = json::line(&failing());
    let upkeep = &one[one.find("\"id\":\"upkeep-power\"").unwrap()..];
    let mut from = 0;
    for key in [
        "id",
        "title",
        "family",
        "basis",
        "verdict",
        "marginal",
        "chance",
        "chance_se",
        "unit",
        "available",
        "required",
        "margin_dex",
        "speaks_of",
        "not_a_number_share",
        "extrapolated",
        "sources",
    ] {
        let wanted = format!("\"{key}\":");
        let place = upkeep[from..].find(&wanted).unwrap_or_else(|| panic!("`{key}` stands after the others"));
        from += place + wanted.len();
    }
}

#[test]
fn json_numbers_are_in_the_unit_beside_them_and_infinities_are_null() {
    let value: serde_json::Value = serde_json::from_str(&json::object(&failing())).unwrap();
    assert_eq!(value["format"], 1);
    assert_eq!(value["run"]["settled"], false);
    let find = |list: &str, key: &str, name: &str| {
        let list = value[list].as_array().unwrap();
        list.iter().find(|entry| entry[key] == name).unwrap().clone()
    };
    let contents = find("constraints", "id", "contents-fit");
    assert_eq!(contents["unit"], "µm^3");
    let close =
        |value: &serde_json::Value, wanted: f64| (value.as_f64().unwrap() / wanted - 1.0).abs() < 1e-12;
    assert!(close(&contents["available"]["median"], 0.0021));
    assert!(close(&contents["chance"], 0.0004));
    assert!(close(&contents["speaks_of"]["value"], 210.0));
    assert_eq!(contents["extrapolated"], serde_json::json!([]));
    let lumen = find("constraints", "id", "lumen-left");
    assert_eq!(lumen["margin_dex"]["median"], serde_json::Value::Null);
    assert!(lumen["margin_dex"].as_object().unwrap().contains_key("low"));
    let leak = find("constraints", "id", "membrane-leak");
    assert_eq!(leak["verdict"], "not-assessed");
    assert_eq!(leak["missing"], serde_json::json!([["ionic_strength"]]));
    for key in ["chance", "available", "margin_dex", "marginal", "reason", "unit"] {
        assert!(leak.get(key).is_none(), "`{key}` does not apply");
    }
    let envelope = find("quantities", "name", "envelope_thickness");
    assert_eq!((&envelope["role"], &envelope["origin"]), (&"free".into(), &"default".into()));
    assert!(close(&envelope["chosen"], 6.0));
    assert_eq!(find("quantities", "name", "lumen_volume")["origin"], "relation:lumen-of-sphere");
    let fixed: serde_json::Value = serde_json::from_str(&json::line(&passing())).unwrap();
    assert!(fixed["run"].get("settled").is_none());
}

#[test]
fn many_assessments_are_an_array_or_a_line_each() {
    let several = [failing(), passing(), hostile()];
    let array: serde_json::Value = serde_json::from_str(&json::array(&several)).unwrap();
    assert_eq!(array.as_array().unwrap().len(), 3);
    for (a, value) in several.iter().zip(array.as_array().unwrap()) {
        let line = json::line(a);
        assert_eq!(line.matches('\n').count(), 1);
        let read: serde_json::Value = serde_json::from_str(&line).unwrap();
        assert_eq!(&read, value);
    }
}

#[test]
fn csv_has_a_row_for_each_limit_with_ascii_units_and_no_formulas() {
    let several = [failing(), passing(), hostile()];
    let text = csv::table(&several);
    let mut reader = ::csv::Reader::from_reader(text.as_bytes());
    let head = reader.headers().unwrap().clone();
    let column = |name: &str| head.iter().position(|column| column == name).unwrap();
    let rows: Vec<::csv::StringRecord> = reader.records().map(Result::unwrap).collect();
    assert_eq!(rows.len(), several.iter().map(|a| a.constraints.len()).sum::<usize>());
    for row in &rows {
        assert!(row[column("unit")].is_ascii() && row[column("speaks_of_unit")].is_ascii());
        assert!(!row[column("candidate")].starts_with('='));
    }
    let contents = rows.iter().find(|row| &row[column("id")] == "contents-fit").unwrap();
    assert_eq!(&contents[column("unit")], "um^3");
    assert!((contents[column("available")].parse::<f64>().unwrap() / 0.0021 - 1.0).abs() < 1e-12);
    assert_eq!(&contents[column("binding")], "true");
    let lumen = rows.iter().find(|row| &row[column("id")] == "lumen-left").unwrap();
    assert_eq!(&lumen[column("margin_dex_median")], "-inf");
}

#[test]
fn a_markdown_table_keeps_its_columns_whatever_the_texts_hold() {
    let text = markdown::report(&[hostile()], COMMAND);
    let bars = |line: &str| line.replace("\\|", "").matches('|').count();
    let mut table = 0;
    for line in text.lines() {
        if line.starts_with('|') {
            table = if table == 0 { bars(line) } else { table };
            assert_eq!(bars(line), table, "{line}");
        } else {
            table = 0;
        }
    }
    // Outside code, no tag stays alive.
    let mut fenced = false;
    for line in text.lines() {
        fenced ^= line.starts_with("```");
        let outside_code: String = line.replace("\\`", "").split('`').step_by(2).collect();
        assert!(fenced || !outside_code.replace("\\<", "").contains("<b>"), "{line}");
    }
}

#[test]
fn markdown_gives_the_formula_with_every_number_behind_it() {
    let text = markdown::report(&[failing()], COMMAND);
    for wanted in [
        "lumen_volume * macromolecule_fraction",
        "`pi / 6 * (diameter - 2 * envelope_thickness)^3`",
        "| `volume_per_base_pair`",
        "| `diameter`",
        "from memory",
        "(Disputed.)",
        "doi:10.0/tarn.7",
        COMMAND,
        "9f2c4e1ab07d55c3f0e1d2c3b4a5968778695a4b3c2d1e0f00112233445566aa",
    ] {
        assert!(text.contains(wanted), "{wanted}");
    }
}
