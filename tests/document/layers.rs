//! Overlays and settings: what merges, what replaces, what is refused, and where it came from.

use couplet::config::{Document, Path, render_all};
use proptest::prelude::*;
use serde_json::json;

use crate::demo::{GOOD, check};

fn over(base: &str, overlay: &str) -> serde_json::Value {
    Document::from_text("base.yaml", base, &[("over.yaml", overlay)], &[] as &[&str]).expect("readable").json()
}

fn set(base: &str, settings: &[&str]) -> serde_json::Value {
    Document::from_text("base.yaml", base, &[], settings).expect("readable").json()
}

fn set_refused(base: &str, setting: &str) -> String {
    let faults = Document::from_text("base.yaml", base, &[], &[setting]).expect_err("refused");
    render_all(&faults, None, false)
}

const BASE: &str = "\
wheels: {count: 4, capacity: 8 N m s}
thrusters:
  - {name: A1, thrust: 1 N, push: [1, 0, 0]}
  - {name: A2, thrust: 1 N, push: [0, 1, 0]}
numbers: [1, 2, 3]
mission:
  phases:
    - {name: transfer, duration: 5 d}
    - {name: science, duration: 3 yr}
";

#[test]
fn maps_merge_key_by_key() {
    let merged = over("a: {b: 1, c: {d: 2, e: 3}}\nf: 4\n", "a: {c: {e: 5, g: 6}}\nh: 7\n");
    assert_eq!(merged, json!({"a": {"b": 1, "c": {"d": 2, "e": 5, "g": 6}}, "f": 4, "h": 7}));
}

#[test]
fn named_lists_merge_by_name_and_keep_their_order() {
    let merged = over(BASE, "thrusters:\n  - {name: B1, thrust: 2 N}\n  - {name: A2, thrust: 5 N}\n");
    assert_eq!(
        merged["thrusters"],
        json!([
            {"name": "A1", "thrust": "1 N", "push": [1, 0, 0]},
            {"name": "A2", "thrust": "5 N", "push": [0, 1, 0]},
            {"name": "B1", "thrust": "2 N"},
        ])
    );
    // A number as a name is compared as text.
    assert_eq!(over("a: [{name: 1, b: 2}]", "a: [{name: '1', b: 3}]")["a"][0]["b"], 3);
}

#[test]
fn other_values_replace() {
    assert_eq!(over("a: [1, 2, 3]", "a: [4]")["a"], json!([4]));
    assert_eq!(over("a: {b: 1}", "a: 2")["a"], json!(2));
    assert_eq!(over("a: {b: 1}", "a: null")["a"], json!(null));
    assert_eq!(over(BASE, "thrusters: []")["thrusters"], json!([]));
    assert_eq!(over("a: [{name: x}, 1]", "a: [{name: x, b: 2}]")["a"], json!([{"name": "x", "b": 2}]));
}

#[test]
fn later_layers_win() {
    let overlays = [("one.yaml", "a: 2\nb: 2\n"), ("two.yaml", "a: 3\n")];
    let document = Document::from_text("base.yaml", "a: 1\nb: 1\nc: 1\n", &overlays, &["c=4"]).unwrap();
    assert_eq!(document.json(), json!({"a": 3, "b": 2, "c": 4}));
    let from = |key: &str| document.place(&Path::root().key(key)).unwrap().source.name().to_owned();
    assert_eq!([from("a"), from("b"), from("c")], ["two.yaml", "one.yaml", "command line"]);
}

#[test]
fn a_name_twice_in_an_overlay_is_refused() {
    let overlay = "thrusters:\n  - {name: A1, thrust: 2 N}\n  - {name: A1, thrust: 3 N}\n";
    let faults = Document::from_text("base.yaml", BASE, &[("over.yaml", overlay)], &[] as &[&str]).unwrap_err();
    assert_eq!(
        render_all(&faults, None, false),
        "\
error: the overlay names `A1` twice in this list
 --> over.yaml:3:5
  |
2 |   - {name: A1, thrust: 2 N}
  |     ----------------------- first here
3 |   - {name: A1, thrust: 3 N}
  |     ^^^^^^^^^^^^^^^^^^^^^^^ again here
  |
  = help: join the two items into one
"
    );
}

#[test]
fn faults_of_all_files_are_reported_together() {
    let faults = Document::from_text("base.yaml", "a: .nan\n", &[("over.yaml", "b: [\n")], &["c=1"]).unwrap_err();
    let shown = render_all(&faults, None, false);
    let first = shown.find("--> base.yaml:1:4").unwrap();
    assert!(first < shown.find("--> over.yaml:1:4").unwrap(), "{shown}");
}

#[test]
fn settings_reach_keys_items_and_names() {
    assert_eq!(set(BASE, &["wheels.capacity=12 N m s"])["wheels"]["capacity"], "12 N m s");
    assert_eq!(set(BASE, &["thrusters[A2].thrust=3 N"])["thrusters"][1]["thrust"], "3 N");
    assert_eq!(set(BASE, &["thrusters[0].push=[0, 0, -1]"])["thrusters"][0]["push"], json!([0, 0, -1]));
    assert_eq!(set(BASE, &["mission.phases[science].duration=5 yr"])["mission"]["phases"][1]["duration"], "5 yr");
    assert_eq!(set(BASE, &["numbers[2]=-1.5e3"])["numbers"], json!([1, 2, -1500.0]));
    assert_eq!(set(BASE, &["wheels.new=true"])["wheels"]["new"], true);
    assert_eq!(set(BASE, &["wheels={count: 3}"])["wheels"], json!({"count": 3}));
    assert_eq!(set("a: {b.c: {d e: 1}}", &["a[b.c].d e=2"])["a"]["b.c"]["d e"], 2);
    assert_eq!(set("a: [{name: '1'}, {name: '0'}]", &["a[0].b=2"])["a"][1]["b"], 2);
    assert_eq!(set("a: {b: 1}", &["a.b=x=y"])["a"]["b"], "x=y");
    assert_eq!(set("a: {b: 1}", &["a.b=null"])["a"]["b"], json!(null));
    assert_eq!(set("a: 1", &["a={b: 1}", "a.c=2"])["a"], json!({"b": 1, "c": 2}));
}

#[test]
fn a_setting_beside_the_configuration_names_the_nearest_key() {
    assert_eq!(
        set_refused(BASE, "weels.capacity=8 N m s"),
        "\
error: `--set` names `weels`, which is not in the configuration
 --> command line:1:7
  |
1 | --set weels.capacity=8 N m s
  |       ^^^^^ not found
  |
  = help: did you mean `wheels`?
"
    );
    let help = |setting: &str| {
        let shown = set_refused(BASE, setting);
        shown.split("help: ").nth(1).unwrap().trim_end().to_owned()
    };
    assert_eq!(help("thrusters[A3].thrust=1 N"), "did you mean `A1`?");
    assert_eq!(help("thrusters[17].thrust=1 N"), "known here: `A1`, `A2`; or give a name, or a position from 0 to 1");
    assert_eq!(help("numbers[3]=1"), "give a name, or a position from 0 to 2");
    // A section that is not there is begun; whether the configuration knows it is told when its keys are checked.
    assert_eq!(set(BASE, &["monte_carlo.seed=1"])["monte_carlo"]["seed"], 1);
    assert_eq!(help("wheels.count.x=1"), "the value is a number; set it as a whole");
    for setting in ["wheels.capacity", "=8", "wheels.capacity=", " = "] {
        assert_eq!(help(setting), "write it as `--set wheels.capacity=\"8 N m s\"`");
    }
    assert_eq!(help("a=b #c"), "put the value in quotes: `--set 'KEY=\"a #b\"'`");
    assert!(set_refused(BASE, "a=[1, 2").contains("--> command line:1:13\n"));
    assert!(set_refused(BASE, "a=&x 1").contains("anchors"));
    assert!(set_refused(BASE, "a=.inf").contains("`.inf` is not a finite number"));
}

#[test]
fn a_fault_points_to_the_layer_that_wrote_the_value() {
    let overlay = "mission:\n  mode: zenith\n  orbit: 3\nthrusters:\n  - name: A2\n    thrust: 3 lb\n";
    let settings = ["thrusters[A1].thrust=1 kg", "mission.margn=2"];
    let document = Document::from_text("base.yaml", GOOD, &[("over.yaml", overlay)], &settings).unwrap();
    assert_eq!(
        render_all(&check(&document), Some(&document), false),
        "\
error: `mission.mode` must be one of `sun_pointing`, `nadir`, got `zenith`
 --> over.yaml:2:9
  |
2 |   mode: zenith
  |         ^^^^^^ unknown word
  |
  = help: write one of these words

error: unknown key `orbit` in `mission`
 --> over.yaml:3:3
  |
3 |   orbit: 3
  |   ^^^^^ not known here
  |
  = help: did you mean `orbits`?

error: `thrusters[1].thrust` must be a force, got `3 lb`
 --> over.yaml:6:15
  |
6 |     thrust: 3 lb
  |               ^^ not a unit of force
  |
  = help: write it in newtons: `1 N`

error: `thrusters[0].thrust` must be a force, got `1 kg`
 --> command line:1:30
  |
1 | --set thrusters[A1].thrust=1 kg
  |                              ^^ not a unit of force
  |
  = help: write it in newtons: `1 N`

error: unknown key `margn` in `mission`
 --> command line:1:15
  |
1 | --set mission.margn=2
  |               ^^^^^ not known here
  |
  = help: did you mean `margin`?
"
    );
}

#[test]
fn the_hash_depends_on_values_alone() {
    let hash = |text: &str| crate::read(text).unwrap().sha256();
    // `printf '{"a":[1,"x"],"b":0.5}' | sha256sum`, GNU coreutils.
    let expected = EXPECTED_SHA256;
    assert_eq!(hash("a: [1, x]\nb: 0.5\n"), expected);
    assert_eq!(hash("# comment\nb: 5e-1\na:\n- 1\n- \"x\"\n"), expected);
    assert_ne!(hash("a: [1, x]\nb: 0.25\n"), expected);
    assert_ne!(hash("a: ['1', x]\nb: 0.5\n"), expected);
    let layered = Document::from_text("m", "a: 0\n", &[("o", "b: 0.5\n")], &["a=[1, x]"]).unwrap();
    assert_eq!(layered.sha256(), expected);
}

const EXPECTED_SHA256: &str = "a577ea80d6b4f8ecd6fabc7d64587a88ee0f7514a9d4341192ffab72538b098f";

/// Configurations of maps, lists, named lists and scalars.
fn tree() -> impl Strategy<Value = serde_json::Value> {
    let leaf = prop_oneof![any::<i32>().prop_map(|number| json!(number)), "[a-z ]{0,4}".prop_map(|text| json!(text)), Just(json!(null)),];
    leaf.prop_recursive(3, 24, 4, |inner| {
        prop_oneof![
            prop::collection::vec(inner.clone(), 0..4).prop_map(|items| json!(items)),
            prop::collection::btree_map("[a-d]", inner.clone(), 0..4).prop_map(|map| json!(map)),
            prop::collection::btree_map("[x-z]", inner, 1..4)
                .prop_map(|items| { json!(items.into_iter().map(|(name, v)| json!({"name": name, "v": v})).collect::<Vec<_>>()) }),
        ]
    })
}

fn root() -> impl Strategy<Value = String> {
    prop::collection::btree_map("[a-d]", tree(), 1..4).prop_map(|map| json!(map).to_string())
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn laying_a_layer_twice_is_laying_it_once(base in root(), layer in root()) {
        let twice = [("o", layer.as_str()), ("o", layer.as_str())];
        let read = |overlays: &[(&str, &str)]| Document::from_text("m", &base, overlays, &[] as &[&str]).unwrap();
        prop_assert_eq!(read(&twice).json(), read(&twice[..1]).json());
    }

    #[test]
    fn a_layer_over_itself_changes_nothing(base in root()) {
        prop_assert_eq!(over(&base, &base), serde_json::from_str::<serde_json::Value>(&base).unwrap());
    }

    #[test]
    fn every_leaf_set_to_its_own_text_changes_nothing(base in root()) {
        let document = Document::from_text("m", &base, &[], &[] as &[&str]).unwrap();
        let settings: Vec<String> =
            document.leaves().iter().map(|(path, place)| format!("{path}={}", place.text())).collect();
        let set = Document::from_text("m", &base, &[], &settings).unwrap();
        prop_assert_eq!(set.json(), document.json());
    }
}
