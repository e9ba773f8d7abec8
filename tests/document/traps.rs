//! Each known trap of YAML parsers: read right, or refused where it stands.

use crate::demo::{check, mutated};
use crate::{faults, positions, read, refused};

fn value(text: &str) -> serde_json::Value {
    read(text).expect(text).json()
}

#[test]
fn equal_keys_are_refused_in_every_map_with_both_places() {
    let shown = refused("é漢: 1\nmaps:\n  x: 1\n  y: 2\n  x: 3\né漢: 2\n");
    assert_eq!(
        shown,
        "\
error: the key `x` stands twice in this map
 --> mission.yaml:5:3
  |
3 |   x: 1
  |   - first here
4 |   y: 2
5 |   x: 3
  |   ^ again here
  |
  = help: delete or rename one of them

error: the key `é漢` stands twice in this map
 --> mission.yaml:6:1
  |
1 | é漢: 1
  | --- first here
...
6 | é漢: 2
  | ^^^ again here
  |
  = help: delete or rename one of them
"
    );
    assert_eq!(faults("{a: 1, \"a\": 2}").len(), 1);
    assert_eq!(faults("true: 1\ntrue: 2\n").len(), 1);
    // One number in two spellings: one parser sees two keys, the other one.
    assert_eq!(faults("1: a\n0x1: b\n").len(), 1);
}

#[test]
fn a_syntax_error_in_mid_sequence_is_reported_as_such() {
    let text = "thrusters:\n  - name: é漢\n   thrust: 1 N\n";
    let message = "this is not valid YAML: this line aligns with a list but does not begin with `- `";
    assert_eq!(faults(text), [(message.to_owned(), 3, 4)]);
}

#[test]
fn positions_are_right_after_characters_of_several_bytes() {
    let message = "this is not valid YAML: expected `,` or `]`";
    assert_eq!(faults("é: 漢字\nb: [é, 漢字}\n"), [(message.to_owned(), 2, 10)]);
    let document = read("é: 漢字\nb: {é: 漢字, c: 2}\n").unwrap();
    let (_, place) = document.leaves()[2].clone();
    assert_eq!((place.text(), place.source.line_column(place.range.start)), ("2", (2, 15)));
}

#[test]
fn a_byte_order_mark_and_crlf_change_nothing() {
    let plain = read("a: 1\nb:\n  - x y\n").unwrap();
    let windows = read("\u{FEFF}a: 1\r\nb:\r\n  - x y\r\n").unwrap();
    assert_eq!(plain.sha256(), windows.sha256());
    assert_eq!(faults("\u{FEFF}a: 1\r\nb: .inf\r\n"), [("`.inf` is not a finite number".to_owned(), 2, 4)]);
}

#[test]
fn tabs_are_refused_where_they_stand() {
    let message = "this is not valid YAML: a tab cannot stand here".to_owned();
    assert_eq!(faults("a: 1\n\tb: 2\n"), [(message.clone(), 2, 1)]);
    assert_eq!(faults("a:\n\tb: 2\n")[0].0, message);
}

#[test]
fn a_second_document_is_refused() {
    assert_eq!(faults("a: 1\n---\nb: 2\n"), [("a second YAML document starts here".to_owned(), 2, 1)]);
    assert_eq!(value("---\na: 1\n...\n"), value("a: 1\n"));
}

#[test]
fn anchors_aliases_merge_keys_and_tags_are_refused() {
    let anchors = "anchors (`&name`) and aliases (`*name`) are not allowed".to_owned();
    assert_eq!(faults("a: &x 1\nb: *x\n"), [(anchors.clone(), 1, 4), (anchors, 2, 4)]);
    assert_eq!(faults("a: *x\n")[0].1, 1);
    let merge = "merge keys (`<<`) are not allowed".to_owned();
    assert_eq!(faults("a:\n  <<: {b: 1}\n"), [(merge, 2, 3)]);
    let tags = "tags (`!name`) are not allowed".to_owned();
    assert_eq!(faults("a: !!float 1\nb: !x {c: 1}\n"), [(tags.clone(), 1, 4), (tags, 2, 4)]);
}

#[test]
fn numbers_are_decimal_and_finite_or_text() {
    for text in [".nan", ".inf", "-.inf", ".NaN", "+.INF"] {
        assert_eq!(faults(&format!("a: [{text}]\n")), [(format!("`{text}` is not a finite number"), 1, 5)]);
    }
    for text in ["0x10", "0o17", "0b11", "-0x1"] {
        assert_eq!(faults(&format!("a: {text}\n")), [(format!("`{text}` is not a decimal number"), 1, 4)]);
    }
    // Text, so that a key that asks for a number refuses it below.
    for text in ["1e999", "1_000", "1:30", "1,5", "0123", "yes", "2027-03-01"] {
        assert_eq!(value(&format!("a: {text}\n")), serde_json::json!({"a": text}));
    }
    for text in ["1e999", "1_000", "1:30", "1,5", "\"0.2\"", "yes"] {
        let shown = mutated("margin: 0.2", &format!("margin: {text}"));
        assert!(shown.starts_with("error: `mission.margin` must be a number, got the text"), "{shown}");
    }
    let shown = mutated("name: Larch", "name: ~");
    assert!(shown.starts_with("error: `name` must be text, got nothing"), "{shown}");
}

#[test]
fn keys_are_text() {
    assert_eq!(value("1: a\ntrue: b\n0123: c\n"), serde_json::json!({"1": "a", "true": "b", "0123": "c"}));
    assert_eq!(faults("? [a]\n: x\n"), [("a key must be text".to_owned(), 1, 3)]);
    assert_eq!(faults(": x\n"), [("a key is missing before `:`".to_owned(), 1, 1)]);
}

#[test]
fn faults_inside_enums_stand_at_their_own_line() {
    let text = crate::demo::GOOD.replace("feed: {blowdown: {start: 22.0, end: 5.5}}", "feed:\n  blowdown:\n    start: 22.0\n    end: low");
    let text = text.replace("axis: [0, 0, 1]}", "\n    axis: [0, 0, up]}");
    let document = read(&text).unwrap();
    let found = positions(&check(&document), Some(&document));
    assert_eq!(
        found,
        [
            ("`mission.attitude.axis[2]` must be a number, got the text `up`".to_owned(), 8, 18),
            ("`feed.blowdown.end` must be a number, got the text `low`".to_owned(), 19, 10),
        ]
    );
}

#[test]
fn a_line_break_that_only_one_parser_knows_is_refused() {
    // U+0085 ends a line in YAML 1.1 and does not in YAML 1.2.
    assert_eq!(faults("a: 'x\u{85}y'\n")[0].0, "this YAML can be read in two ways");
}

#[test]
fn the_root_must_be_a_map() {
    assert!(refused("hello\n").contains("`mission.yaml` must be a map of keys, got text"));
    assert!(refused("- a\n").contains("got a list"));
    for text in ["", "# only a comment\n", "\n\n"] {
        assert!(refused(text).starts_with("error: `mission.yaml` is empty\n --> mission.yaml:1:1"));
    }
}
