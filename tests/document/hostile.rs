//! Files that are broken, huge or made to do harm end in a message, soon and without a panic.

use std::time::{Duration, Instant};

use couplet::config::{Document, render_all};
use proptest::prelude::*;

use crate::{faults, read, refused};

/// Every case here takes a few tens of ms; a quadratic parser takes half a minute.
const SOON: Duration = Duration::from_secs(1);

fn soon(text: &str) -> String {
    let start = Instant::now();
    let shown = refused(text);
    assert!(start.elapsed() < SOON, "took {:?}", start.elapsed());
    assert!(shown.len() < 100_000, "{} bytes shown", shown.len());
    shown
}

#[test]
fn deep_nesting_is_refused_at_once() {
    let brackets = "[".repeat(100_000) + &"]".repeat(100_000);
    let indented: String = (0..2000).map(|depth| " ".repeat(depth) + "a:\n").collect();
    let texts = [
        brackets,
        "[".repeat(100_000),
        "{a: ".repeat(100_000),
        "- ".repeat(100_000),
        "? ".repeat(100_000),
        indented,
        "[".repeat(65) + &"]".repeat(65),
    ];
    for text in texts {
        let shown = soon(&text);
        assert!(shown.contains("nested more than 64 deep"), "{shown}");
    }
    let allowed = format!("a: {}{}", "[".repeat(63), "]".repeat(63));
    assert!(read(&allowed).is_ok());
}

#[test]
fn an_alias_bomb_is_refused_before_it_grows() {
    let level = |level: usize| {
        let items = vec![format!("*a{}", level - 1); 9].join(", ");
        format!("a{level}: &a{level} [{items}]\n")
    };
    let levels: Vec<String> = (1..20).map(level).collect();
    let bomb = format!("a0: &a0 [x, x, x, x, x, x, x, x, x]\n{}", levels.concat());
    assert!(soon(&bomb).starts_with("error: anchors (`&name`) and aliases (`*name`) are not allowed"));
}

#[test]
fn large_texts_end_soon() {
    soon(&format!("a: {}\nb: [", "x".repeat(3_000_000)));
    soon(&format!("a: \"{}", "\\x41".repeat(900_000)));
    soon(&format!("a: [{}]", "é, ".repeat(500_000)));
    soon(&"a: ".repeat(1_000_000));
    soon(&"&a ".repeat(1_000_000));
    soon(&"\n".repeat(4_000_000));
    soon(&format!("{{{}}}", "a, ".repeat(90_000)));
    let start = Instant::now();
    let scalar = read(&format!("a: {}\n", "x".repeat(3_000_000))).unwrap();
    assert!(scalar.value()["a"].as_str().unwrap().len() == 3_000_000 && start.elapsed() < SOON);
}

#[test]
fn too_many_values_are_refused() {
    let keys: Vec<String> = (0..100_001)
        .map(|key| {
            format!(
                "k{key}: 1
"
            )
        })
        .collect();
    let text = keys.concat();
    assert!(soon(&text).starts_with("error: there are more than 200000 keys and values"));
}

#[test]
fn files_that_cannot_be_text_are_refused_with_their_place() {
    let folder = tempfile::tempdir().unwrap();
    let shown = |name: &str, bytes: &[u8]| {
        let path = folder.path().join(name);
        std::fs::write(&path, bytes).unwrap();
        let faults = Document::load(&path, &[] as &[&str], &[] as &[&str]).unwrap_err();
        render_all(&faults, None, false).replace(&folder.path().display().to_string(), "")
    };
    assert_eq!(
        shown("latin.yaml", b"a: 1\nname: M\xFCnchen\n"),
        "\
error: `/latin.yaml` is not UTF-8 text
 --> /latin.yaml:2:8
  |
2 | name: M\u{FFFD}nchen
  |        ^ these bytes are no character
  |
  = help: save the file as UTF-8
"
    );
    assert!(shown("wide.yaml", b"\xFF\xFEa\0:\0").contains("is not UTF-8 text"));
    assert!(shown("nul.yaml", b"a: 1\0\nb: 2").contains("holds a control character, U+0000"));
    assert!(shown("large.yaml", &vec![b'#'; 10_000_000]).contains("larger than 4 MiB"));
    assert!(shown("empty.yaml", b"").contains("is empty"));
    assert!(shown("bom.yaml", b"\xEF\xBB\xBF").contains("is empty"));
}

#[test]
fn files_that_are_not_there_are_named_with_their_neighbour() {
    let folder = tempfile::tempdir().unwrap();
    std::fs::write(folder.path().join("mission.yaml"), "a: 1\n").unwrap();
    let shown = |name: &str| {
        let path = folder.path().join(name);
        let faults = Document::load(&path, &[] as &[&str], &[] as &[&str]).unwrap_err();
        render_all(&faults, None, false).replace(&folder.path().display().to_string(), "")
    };
    assert_eq!(shown("misson.yaml"), "error: `/misson.yaml` does not exist\n |\n = help: did you mean `/mission.yaml`?\n");
    assert!(shown("other.yaml").contains("help: check the path"));
    assert!(shown("").contains("is a directory, expected a YAML file"));
}

#[test]
fn terminal_codes_in_a_file_are_not_passed_on() {
    // U+001B begins a terminal code, U+009B does in some terminals.
    for (character, code) in [('\u{1b}', "001B"), ('\u{9b}', "009B"), ('\u{7f}', "007F")] {
        let message = format!("`mission.yaml` holds a control character, U+{code}");
        let text = format!("a: {character}[31m\n");
        assert_eq!(faults(&text), [(message, 1, 4)]);
        assert!(!refused(&text).contains(character));
    }
    // U+202E turns the direction of what follows; it is text, but it is not shown as it is.
    let shown = refused("\u{202e}a: 1\n\u{202e}a: 2\n");
    assert!(!shown.contains('\u{202e}'), "{shown:?}");
}

/// Texts of the signs that mean something in YAML, which arbitrary text seldom holds.
fn yamlish() -> impl Strategy<Value = String> {
    let piece = prop::sample::select(vec![
        "a", "b", "name", ": ", ":", "\n", "\n  ", "\n    ", "- ", "-", "[", "]", "{", "}", ", ", "\"", "'", "#", " #", "&a ", "*a", "!t ",
        "|\n", ">\n", "? ", "<<", "---\n", "...\n", "\t", "\r\n", "\r", "é", "漢", "\u{85}", "\u{2028}", "\u{FEFF}", "1", "-1.5", ".nan",
        "0x1", "~", "true", "%", "@", "`", "\\", "\\n", " ", "",
    ]);
    prop::collection::vec(piece, 0..40).prop_map(|pieces| pieces.concat())
}

/// Reads, shows what is wrong, and checks that every place lies in its source.
fn survives(text: &str, overlay: &str, setting: &str) -> Result<(), TestCaseError> {
    match Document::from_text("m.yaml", text, &[("o.yaml", overlay)], &[setting]) {
        Err(faults) => {
            prop_assert!(!faults.is_empty());
            for fault in &faults {
                prop_assert!(fault.help.is_some(), "no remedy: {}", fault.message);
            }
            let shown = render_all(&faults, None, false);
            prop_assert!(shown.starts_with("error"));
        }
        Ok(document) => {
            for (path, place) in document.leaves() {
                prop_assert!(place.source.text().get(place.range.clone()).is_some());
                prop_assert!(document.get(&path).is_some(), "{path}");
            }
            let found = crate::demo::check(&document);
            let shown = render_all(&found, Some(&document), true);
            prop_assert_eq!(found.is_empty(), shown.is_empty());
        }
    }
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn arbitrary_text_never_panics(text in any::<String>(), overlay in any::<String>()) {
        survives(&text, &overlay, &text)?;
    }

    #[test]
    fn signs_of_yaml_in_any_order_never_panic(text in yamlish(), overlay in yamlish(), setting in yamlish()) {
        survives(&text, "a: 1\n", &setting)?;
        survives("a: {b: [1, {name: x}]}\n", &overlay, &format!("a.{setting}"))?;
        survives(&format!("a: {{b: 1}}\nname: x\nc: {text}"), &overlay, &format!("a={setting}"))?;
    }

    #[test]
    fn a_broken_copy_of_a_good_file_never_panics(at in 0..crate::demo::GOOD.len(), piece in yamlish()) {
        let (before, after) = crate::demo::GOOD.split_at(at);
        survives(&format!("{before}{piece}{after}"), "name: x\n", "mission.orbits=3")?;
        survives(&format!("{before}{piece}"), "name: x\n", "mission.orbits=3")?;
    }
}
