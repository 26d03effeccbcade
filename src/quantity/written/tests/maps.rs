use std::fs;
use std::path::PathBuf;

use super::{Case, LENGTH, NUMBER, TEMPERATURE, close};
use crate::quantity::distribution::{Distribution, FreeRange};
use crate::quantity::written::Value;

#[test]
fn every_map_of_the_format_is_read() {
    assert_eq!(
        LENGTH.distribution("{ mean: 210 nm, sd: 30 nm }"),
        Distribution::Normal { mean: 2.1e-7, sd: 3e-8 }
    );
    assert_eq!(
        TEMPERATURE.distribution("{ mean: 55 °C, sd: 10 °C }"),
        Distribution::Normal { mean: 328.15, sd: 10.0 }
    );
    assert_eq!(
        LENGTH.distribution("{ median: 210 nm, factor: 1.5 }"),
        Distribution::Lognormal { median: 2.1e-7, factor: 1.5 }
    );
    assert_eq!(
        LENGTH.distribution("{ min: 180 nm, max: 0.24 µm }"),
        Distribution::Uniform { min: 1.8e-7, max: 2.4e-7 }
    );
    assert_eq!(
        LENGTH.distribution("{ min: 1 nm, max: 1 µm, scale: log }"),
        Distribution::LogUniform { min: 1e-9, max: 1e-6 }
    );
    assert_eq!(
        LENGTH.distribution("{ min: 180 nm, mode: 200 nm, max: 240 nm }"),
        Distribution::Triangular { min: 1.8e-7, mode: 2e-7, max: 2.4e-7 }
    );
    assert_eq!(
        NUMBER.distribution("{ values: [4, 1, 2], weights: [2, 1, 1] }"),
        Distribution::Discrete { values: [1.0, 2.0, 4.0].into(), cumulated: [0.25, 0.5, 1.0].into() }
    );
    assert_eq!(
        NUMBER.distribution("{ values: [1, 2] }"),
        Distribution::Discrete { values: [1.0, 2.0].into(), cumulated: [0.5, 1.0].into() }
    );
    assert_eq!(LENGTH.distribution("{ value: 210 nm }"), Distribution::Exact(2.1e-7));
}

#[test]
fn a_coverage_interval_is_read_with_equal_tails() {
    let Distribution::Normal { mean, sd } =
        LENGTH.distribution("{ low: 151 nm, high: 269 nm, coverage: 95 %, distribution: normal }")
    else {
        panic!("not normal");
    };
    close(mean, 2.1e-7, 1e-15);
    // 1.959964 is the 0.975 quantile of the normal, from any handbook table.
    close(sd, 59e-9 / 1.959_963_984_540, 1e-12);
    let lognormal =
        LENGTH.distribution("{ low: 100 nm, high: 400 nm, coverage: 0.9, distribution: lognormal }");
    close(lognormal.quantile(0.05), 1e-7, 1e-12);
    close(lognormal.quantile(0.95), 4e-7, 1e-12);
    close(lognormal.median(), 2e-7, 1e-12);
}

#[test]
fn a_remark_is_carried() {
    let reading = LENGTH.reading("{ value: 210 ± 30 nm, about: \"TEM, plate 3\" }");
    assert_eq!(reading.about.as_deref(), Some("TEM, plate 3"));
    assert_eq!(reading.unit.text(), "nm");
    let place = reading.place;
    assert_eq!(place.source.text.get(place.span.start..place.span.start + 2), Some("{ "));
    assert_eq!(LENGTH.reading("{ min: 1 nm, max: 2 nm, about: x }").about.as_deref(), Some("x"));
    assert_eq!(LENGTH.reading("210 nm").about, None);
}

#[test]
fn a_free_range_has_a_scale_and_a_typical_value() {
    let free = |text: &str| match LENGTH.reading(text).value {
        Value::Free(range) => range,
        other => panic!("{text}: {other:?}"),
    };
    let narrow = free("{ anywhere_in: [6 nm, 20 nm] }");
    assert_eq!(narrow, FreeRange { low: 6e-9, high: 2e-8, typical: 1.3e-8, logarithmic: false });
    let wide = free("{ anywhere_in: [1 nm, 100 nm] }");
    assert!(wide.logarithmic);
    close(wide.typical, 1e-8, 1e-15);
    let from_zero = free("{ anywhere_in: [0 nm, 100 nm] }");
    assert_eq!((from_zero.logarithmic, from_zero.typical), (false, 5e-8));
    let stated = free("{ anywhere_in: [1 nm, 100 nm], scale: linear, typical: 34 nm }");
    assert_eq!((stated.logarithmic, stated.typical), (false, 3.4e-8));
    LENGTH.refuses("{ anywhere_in: [6 nm, 20 nm], typical: 34 nm }", "34 nm", "outside the range", "between");
    LENGTH.refuses("{ anywhere_in: [20 nm, 6 nm] }", "[20 nm, 6 nm]", "not below", "lower first");
    LENGTH.refuses("{ anywhere_in: [20 nm] }", "[20 nm]", "two ends", "`[6 nm, 20 nm]`");
    LENGTH.refuses("{ anywhere_in: 20 nm }", "20 nm", "the text", "`[6 nm, 20 nm]`");
    LENGTH.refuses("{ anywhere_in: [0 nm, 20 nm], scale: log }", "0 nm", "above zero", "`scale: linear`");
    LENGTH.refuses("{ anywhere_in: [-1 nm, 20 nm] }", "-1 nm", "cannot be", "from 0 nm");
    LENGTH.refuses("{ anywhere_in: [6 nm, 20 nm], typcal: 7 nm }", "typcal", "not known", "typical");
    NUMBER.refuses(
        "{ anywhere_in: [1, 2] }",
        "[1, 2]",
        "not for the organism to choose",
        "`{ min: 1, max: 2 }`",
    );
}

#[test]
fn an_interval_without_coverage_is_refused_with_both_rewrites() {
    let map = "{ low: 150 nm, high: 270 nm }";
    LENGTH.refuses(map, map, "`coverage` is missing", "`{ min: 150 nm, max: 270 nm }`");
    LENGTH.refuses(
        map,
        map,
        "`coverage` is missing",
        "`{ low: 150 nm, high: 270 nm, coverage: 0.95, distribution: normal }`",
    );
    let map = "{ low: 150 nm, high: 270 nm, coverage: 0.95 }";
    LENGTH.refuses(map, map, "`distribution` is missing", "`distribution: lognormal`");
    LENGTH.refuses(
        "{ low: 1 nm, high: 2 nm, coverage: 95, distribution: normal }",
        "95",
        "between 0 and 1",
        "`0.95`",
    );
    LENGTH.refuses(
        "{ low: 1 nm, high: 2 nm, coverage: 0.95, distribution: lognomal }",
        "lognomal",
        "not known as a distribution",
        "lognormal",
    );
    LENGTH.refuses(
        "{ low: 0 nm, high: 2 nm, coverage: 0.95, distribution: lognormal }",
        "0 nm",
        "not above zero",
        "above zero",
    );
}

#[test]
fn wrong_maps_are_refused_at_the_key_or_value() {
    LENGTH.refuses("{ mean: 210 nm, sd: 30 }", "30", "unit is missing", "`30 nm`");
    LENGTH.refuses("{ mean: 210 nm, sd: 0 nm }", "0 nm", "not above zero", "exact");
    LENGTH.refuses("{ mean: 210 nm }", "{ mean: 210 nm }", "`sd` is missing", "");
    LENGTH.refuses("{ mean: 210 nm, sd: 30 nm, sdd: 1 }", "sdd", "not known", "sd");
    LENGTH.refuses("{ mean: 210 ± 5 nm, sd: 30 nm }", "±", "one number is expected", "`210 nm`");
    LENGTH.refuses("{ mean: 210(5) nm, sd: 30 nm }", "210(5)", "one number is expected", "`210 nm`");
    LENGTH.refuses("{ median: 210 nm, factor: 1 }", "1", "not above 1", "`1.5`");
    LENGTH.refuses("{ median: 210 nm, factor: 2 nm }", "2 nm", "a length", "a pure number");
    LENGTH.refuses("{ median: 0 nm, factor: 2 }", "0 nm", "above zero", "");
    LENGTH.refuses("{ min: 240 nm, max: 180 nm }", "180 nm", "not above `min`", "the lower end as the first");
    LENGTH.refuses("{ min: 180 nm, max: 180 nm }", "180 nm", "not above `min`", "the lower end as the first");
    LENGTH.refuses("{ min: 0 nm, max: 180 nm, scale: log }", "0 nm", "logarithm", "above zero");
    LENGTH.refuses("{ min: 1 nm, max: 180 nm, scale: lg }", "lg", "not known as a scale", "log");
    LENGTH.refuses("{ min: -1 nm, max: 180 nm }", "-1 nm", "cannot be `-1 nm`", "from 0 nm");
    LENGTH.refuses("{ min: 1 nm, max: 2 nm, mode: 3 nm }", "3 nm", "outside min and max", "between");
    LENGTH.refuses(
        "{ values: [1 nm, 2 nm], weights: [1] }",
        "[1]",
        "`weights` and `values` differ in length: 1 and 2",
        "one weight",
    );
    LENGTH.refuses("{ values: [1 nm, 2 nm], weights: [1, -1] }", "-1", "negative", "zero or more");
    LENGTH.refuses("{ values: [1 nm, 2 nm], weights: [0, 0] }", "[0, 0]", "add up", "[1, 2, 1]");
    LENGTH.refuses("{ values: [1 nm, -2 nm] }", "-2 nm", "cannot be", "from 0 nm");
    LENGTH.refuses("{ values: [] }", "[]", "empty", "one value");
    LENGTH.refuses("{ value: { min: 1 nm, max: 2 nm } }", "{ min: 1 nm, max: 2 nm }", "is a map", "a text");
    LENGTH.refuses("{ meen: 210 nm, sdd: 3 nm }", "{ meen: 210 nm, sdd: 3 nm }", "known forms", "mean");
    LENGTH.refuses("{}", "{}", "known forms", "`{ mean, sd }`");
    LENGTH.refuses("[210 nm]", "[210 nm]", "a list", "a length such as `1 nm`");
    TEMPERATURE.refuses("{ mean: 55 °C, sd: 5 m }", "m", "found a length", "a temperature such as `5 °C`");
}

#[test]
fn all_that_is_wrong_in_a_map_is_reported_at_once() {
    let (reading, problems, _) = LENGTH.try_read("diameter: { min: 5 s, max: x, skale: log, typical: 3 }\n");
    assert!(reading.is_none());
    assert_eq!(problems.len(), 4, "{problems:?}");
}

/// A folder of this test run that is removed at the end.
struct Folder(PathBuf);

impl Folder {
    fn new(name: &str, files: &[(&str, &[u8])]) -> Self {
        let path = std::env::temp_dir().join(format!("hypobiont-{name}-{}", std::process::id()));
        fs::create_dir_all(&path).expect("a folder for the test");
        for (file, content) in files {
            fs::write(path.join(file), content).expect("a file for the test");
        }
        Self(path)
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        // A folder that stays behind harms nothing.
        let _ = fs::remove_dir_all(&self.0);
    }
}

#[test]
fn a_sample_is_read_from_its_column() {
    let table = b"\xef\xbb\xbfname, width ,length\na, 180 ,1\nb,2.1e2,2\n\"c\",240,3\n";
    let folder = Folder::new("sample", &[("sizes.csv", table)]);
    let case = Case { folder: Some(&folder.0), ..LENGTH };
    let read = case.distribution("{ sample: sizes.csv, column: width, unit: nm }");
    let expected = Distribution::Sample {
        file: "sizes.csv".into(),
        column: "width".into(),
        values: [1.8e-7, 2.1e-7, 2.4e-7].into(),
    };
    assert_eq!(read, expected);
    assert_eq!(case.reading("{ sample: sizes.csv, column: width, unit: nm }").unit.text(), "nm");
    case.refuses("{ sample: sizes.csv, column: widht, unit: nm }", "widht", "no column", "width");
    case.refuses("{ sample: size.csv, column: width, unit: nm }", "size.csv", "does not exist", "sizes.csv");
    case.refuses("{ sample: ., column: width, unit: nm }", ".", "a folder", "a file");
    case.refuses(
        "{ sample: /etc/hostname, column: a, unit: nm }",
        "/etc/hostname",
        "candidate's folder",
        "sizes.csv",
    );
    // Every row that is wrong is named.
    let (_, problems, _) = case.try_read("diameter: { sample: sizes.csv, column: name, unit: nm }\n");
    let lines: Vec<_> = problems.iter().map(|problem| &problem.message[..6]).collect();
    assert_eq!(lines, ["line 2", "line 3", "line 4"]);
    case.refuses(
        "{ sample: sizes.csv, column: width, unit: s }",
        "s",
        "found a time",
        "a length such as `nm`",
    );
    let map = "{ sample: sizes.csv, column: width }";
    case.refuses(map, map, "`unit` is missing", "`unit: nm`");
    LENGTH.refuses(
        "{ sample: sizes.csv, column: width, unit: nm }",
        "sizes.csv",
        "cannot stand here",
        "mean",
    );
}

#[test]
fn a_sample_that_is_no_clean_column_is_refused_with_its_line() {
    let folder = Folder::new(
        "broken",
        &[
            ("empty.csv", b""),
            ("header.csv", b"width\n"),
            ("text.csv", b"width\n180\nn/a\n"),
            ("gap.csv", b"width,b\n180,1\n,2\n"),
            ("ragged.csv", b"width,b\n180,1\n190\n"),
            ("unit.csv", b"width\n180 nm\n"),
            ("comma.csv", b"width\n\"1,5\"\n"),
            ("negative.csv", b"width\n180\n-3\n"),
            ("twice.csv", b"width,width\n1,2\n"),
            ("huge.csv", b"width\n1e400\n"),
            ("binary.csv", b"width\n\xff\xfe\n"),
        ],
    );
    let case = Case { folder: Some(&folder.0), ..LENGTH };
    for (file, says) in [
        ("empty.csv", "`empty.csv` is empty"),
        ("header.csv", "no rows"),
        ("text.csv", "line 3 of `text.csv`: `n/a` is not a number"),
        ("gap.csv", "line 3 of `gap.csv`: `width` is empty"),
        ("ragged.csv", "line 3 of `ragged.csv` has 1 cells, the first line 2"),
        ("unit.csv", "line 2 of `unit.csv`: `180 nm` is not a number"),
        ("comma.csv", "decimal comma"),
        ("negative.csv", "line 3 of `negative.csv`: `diameter` cannot be `-3 nm`"),
        ("twice.csv", "more than one column"),
        ("huge.csv", "line 2 of `huge.csv`: `1e400` is larger"),
        ("binary.csv", "not UTF-8: byte 7, in line 2"),
    ] {
        let (reading, problems, _) =
            case.try_read(&format!("diameter: {{ sample: {file}, column: width, unit: nm }}\n"));
        assert!(reading.is_none(), "{file}");
        assert_eq!(problems.len(), 1, "{file}: {problems:?}");
        let message = &problems.iter().next().expect("there is one").message;
        assert!(message.contains(says), "{file}: {message}");
    }
}

#[test]
fn a_file_beyond_the_limit_is_refused() {
    let table = [b"width\n".as_slice(), "1\n".repeat(8 << 20).as_bytes()].concat();
    let folder = Folder::new("large", &[("large.csv", table.as_slice())]);
    let case = Case { folder: Some(&folder.0), ..LENGTH };
    case.refuses(
        "{ sample: large.csv, column: width, unit: m }",
        "large.csv",
        "larger than 16 MiB",
        "smaller",
    );
}
