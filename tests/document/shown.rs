//! How faults look: text, colour, JSON, order, and what is marked when the value does not exist.

use couplet::config::{Diagnostic, Document, Path, Severity, Site, render_all, sort, to_json};
use serde_json::json;

use crate::demo::GOOD;
use crate::read;

fn at(path: &str) -> Diagnostic {
    Diagnostic::error(Path::parse(path), format!("`{path}` is wrong"))
}

/// Line, column and text of what is marked for a fault of the good configuration.
fn marked(fault: &Diagnostic) -> (usize, usize, String) {
    let document = read(GOOD).expect("readable");
    let place = fault.place(Some(&document)).expect("a place");
    let (line, column) = place.source.line_column(place.range.start);
    (line, column, place.text().to_owned())
}

#[test]
fn a_fault_is_shown_with_its_line_and_remedy() {
    let document = read("mass: 1 kg\nthrust: -0.5 N # oops\n").unwrap();
    let fault = Diagnostic::error(Path::parse("thrust"), "`thrust` must be above zero, got -0.5 N")
        .label("not above zero")
        .help("turn the direction around instead");
    assert_eq!(
        fault.render(Some(&document), false),
        "\
error: `thrust` must be above zero, got -0.5 N
 --> mission.yaml:2:9
  |
2 | thrust: -0.5 N # oops
  |         ^^^^^^ not above zero
  |
  = help: turn the direction around instead"
    );
    let styled = fault.render(Some(&document), true);
    assert!(styled.contains("\u{1b}[") && styled.contains("mission.yaml:2:9"));
}

#[test]
fn a_warning_carries_the_name_that_silences_it() {
    let document = read("inertia: 0.2\n").unwrap();
    let fault = Diagnostic::warning("inertia-magnitude", Path::parse("inertia"), "`inertia` is very small");
    assert!(fault.render(Some(&document), false).starts_with("warning[inertia-magnitude]: `inertia` is"));
}

#[test]
fn part_of_a_scalar_is_marked_if_it_stands_there_as_it_reads() {
    let text = "a: é 1 lb\nb: \"1 lb\"\nc: '1 lb'\nd: \"1\\x20lb\"\ne: >\n  1\n  lb\nf: 3\n";
    let document = Document::from_text("m", text, &[], &["g=1 lb"]).unwrap();
    let marked = |path: &str, bytes: std::ops::Range<usize>| {
        let place = at(path).within(bytes).place(Some(&document)).unwrap();
        (place.source.line_column(place.range.start), place.text().to_owned())
    };
    assert_eq!(marked("a", 5..7), ((1, 8), "lb".to_owned()));
    assert_eq!(marked("b", 2..4), ((2, 7), "lb".to_owned()));
    assert_eq!(marked("c", 2..4), ((3, 7), "lb".to_owned()));
    assert_eq!(marked("g", 2..4), ((1, 11), "lb".to_owned()));
    // An escape or a folded line shifts the text: all of it is marked.
    assert_eq!(marked("d", 2..4).1, "\"1\\x20lb\"");
    assert_eq!(marked("e", 2..4).1, "1\n  lb\n");
    // So it is for bytes that are not there, or lie inside a character.
    assert_eq!(marked("f", 2..9).1, "3");
    assert_eq!(marked("a", 1..2).1, "é 1 lb");
}

#[test]
fn what_does_not_exist_is_marked_at_what_holds_it() {
    assert_eq!(marked(&at("mission.stop")), (2, 1, "mission".to_owned()));
    assert_eq!(marked(&at("thrusters[0].burn")), (9, 5, "name: A1".to_owned()));
    assert_eq!(marked(&at("thrusters[9]")), (8, 1, "thrusters".to_owned()));
    assert_eq!(marked(&at("mission.orbits.x.y")), (4, 11, "15".to_owned()));
    assert_eq!(marked(&at("nothing")), (1, 1, "name".to_owned()));
    assert_eq!(marked(&at("mission.stop").at_key()), (2, 1, "mission".to_owned()));
}

#[test]
fn maps_and_lists_are_marked_whole_on_one_line_and_by_their_key_on_several() {
    assert_eq!(marked(&at("thrusters[0].push")), (11, 11, "[1, 0, 0]".to_owned()));
    assert_eq!(marked(&at("mission")), (2, 1, "mission".to_owned()));
    assert_eq!(marked(&at("thrusters[1]")), (13, 5, "name: A2".to_owned()));
    assert_eq!(marked(&at("mission.mode").at_key()), (6, 3, "mode".to_owned()));
}

#[test]
fn an_empty_value_is_marked_at_its_key() {
    let document = read("a:\n  b:\n  c: 1\n").unwrap();
    let place = at("a.b").place(Some(&document)).unwrap();
    assert_eq!((place.text(), place.source.line_column(place.range.start)), ("b", (2, 3)));
}

#[test]
fn related_places_are_shown_near_and_far() {
    let near = read("a: 1\nb: 2\n").unwrap();
    let fault = at("b").label("this").also(Path::parse("a"), "and this").help("mend it");
    let shown = fault.render(Some(&near), false);
    assert!(shown.contains("1 | a: 1\n  |    - and this\n2 | b: 2\n  |    ^ this\n"), "{shown}");
    let far = read(&format!("a: 1\n{}b: 2\n", "# far\n".repeat(5000))).unwrap();
    let shown = fault.render(Some(&far), false);
    assert!(shown.contains("--> mission.yaml:5002:4") && shown.contains("mission.yaml:1:4"), "{shown}");
    assert!(shown.len() < 1000, "{shown}");
}

#[test]
fn faults_are_shown_in_file_order() {
    let document = Document::from_text("m", "a: 1\nb: 2\n", &[("o", "c: 3\n")], &["d=4", "e=5"]).unwrap();
    let nowhere = Diagnostic::new(Severity::Error, Site::Nowhere, "a file is missing");
    let mut faults = vec![at("e"), at("c"), at("b"), at("d"), nowhere, at("a")];
    sort(&mut faults, Some(&document));
    let keys: Vec<String> = faults.iter().map(Diagnostic::key).collect();
    assert_eq!(keys, ["", "a", "b", "c", "d", "e"]);
}

#[test]
fn many_faults_are_counted() {
    let document = read("a: 1\n").unwrap();
    let shown = render_all(&vec![at("a"); 103], Some(&document), false);
    assert_eq!(shown.matches("error: ").count(), 100);
    assert!(shown.ends_with("\n\n… and 3 more\n"));
    assert_eq!(render_all(&[], None, false), "");
}

#[test]
fn faults_as_json_have_file_line_column_and_key() {
    let document = Document::from_text("m.yaml", "é: 1\nt: [{x: 1}]\n", &[], &["é=é 2"]).unwrap();
    let faults = [at("é").help("mend it").label("here"), at("t[0].x"), { Diagnostic::new(Severity::Warning, Site::Nowhere, "no place") }];
    assert_eq!(
        to_json(&faults, Some(&document)),
        json!([
            {"severity": "warning", "name": null, "message": "no place", "file": null, "line": null,
             "column": null, "key": null, "label": null, "help": null},
            {"severity": "error", "name": null, "message": "`t[0].x` is wrong", "file": "m.yaml", "line": 2,
             "column": 9, "key": "t[0].x", "label": null, "help": null},
            {"severity": "error", "name": null, "message": "`é` is wrong", "file": "command line", "line": 1,
             "column": 9, "key": "é", "label": "here", "help": "mend it"},
        ])
    );
}

#[test]
fn a_long_line_is_cut() {
    let document = read(&format!("a: [{}1 lb, 2]\n", "1, ".repeat(20_000))).unwrap();
    let shown = at("a[20000]").help("mend it").render(Some(&document), false);
    assert!(shown.contains("mission.yaml:1:60005\n") && shown.len() < 2000, "{shown}");
}
