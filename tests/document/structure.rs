//! The walk against a schema from `schemars`, and decoding.

use couplet::config::{decode, render_all};

use crate::demo::{Attitude, Demo, Feed, GOOD, Mode, Target, check, mutated};
use crate::read;

#[test]
fn a_configuration_without_fault_is_decoded() {
    let document = read(GOOD).unwrap();
    assert_eq!(check(&document), []);
    let demo: Demo = decode(&document).unwrap();
    assert_eq!(demo.mission.mode, Mode::SunPointing);
    assert_eq!(demo.mission.attitude, Some(Attitude::Inertial { axis: [0.0, 0.0, 1.0] }));
    assert_eq!(demo.feed, Some(Feed::Blowdown { start: 22.0, end: 5.5 }));
    assert_eq!(demo.target, Some(Target::Point([0.0, 0.0, 1.0])));
    assert_eq!(demo.thrusters.len(), 2);
}

/// Message, marked text and help of the only fault after a replacement.
fn fault(from: &str, to: &str) -> [String; 3] {
    assert!(GOOD.contains(from), "`{from}` is not in the configuration");
    let document = read(&GOOD.replacen(from, to, 1)).expect("there");
    let faults = check(&document);
    assert_eq!(faults.len(), 1, "{}", render_all(&faults, Some(&document), false));
    let place = faults[0].place(Some(&document)).expect("there");
    [faults[0].message.clone(), place.text().to_owned(), faults[0].help.clone().expect("there")]
}

const FEED: &str = "{blowdown: {start: 22.0, end: 5.5}}";

#[test]
fn unknown_keys() {
    // A misspelt key that must be there is one fault, not two.
    assert_eq!(fault("thrusters:", "thrsters:"), ["unknown key `thrsters`", "thrsters", "did you mean `thrusters`?"]);
    assert_eq!(
        fault("feed: ", "fuel: 3\nfeed: "),
        ["unknown key `fuel`", "fuel", "known here: `conjectures`, `feed`, `mission`, `name`, `target`, `thrusters`"]
    );
    let message = "unknown key `factr` in `conjectures.solar maximum`";
    assert_eq!(fault("factor", "factr"), [message, "factr", "did you mean `factor`?"]);
    assert_eq!(fault("{blowdown:", "{blowdwn:"), ["unknown key `blowdwn` in `feed`", "blowdwn", "did you mean `blowdown`?"]);
}

#[test]
fn missing_keys_say_what_they_mean_and_how_they_look() {
    assert_eq!(
        fault("  start: 2027-03-01T00:00:00Z\n", ""),
        [
            "`mission.start` is missing",
            "mission",
            "add `start`: Instant at which the mission starts; for example `start: 2027-03-01T00:00:00Z`"
        ]
    );
    assert_eq!(
        fault("    thrust: 1 N\n", ""),
        ["`thrusters[0].thrust` is missing", "name: A1", "add `thrust`: a force; for example `thrust: 1 N`"]
    );
    assert_eq!(fault("name: Larch\n", ""), ["`name` is missing", "mission", "add `name`: Name of the spacecraft"]);
    assert_eq!(fault(", end: 5.5", ""), ["`feed.blowdown.end` is missing", "blowdown", "add `end`: a number"]);
    assert_eq!(
        fault("kind: inertial, ", ""),
        ["`mission.attitude.kind` is missing", "attitude", "add `kind`, one of `inertial`, `spinning`"]
    );
}

/// What is replaced, by what, and the message.
const WRONG_KINDS: [(&str, &str, &str); 19] = [
    ("orbits: 15", "orbits: 1.5", "`mission.orbits` must be a whole number, got the number `1.5`"),
    ("orbits: 15", "orbits: many", "`mission.orbits` must be a whole number, got the text `many`"),
    ("orbits: 15", "orbits:", "`mission.orbits` must be a whole number, got nothing"),
    ("orbits: 15", "orbits: 0", "`mission.orbits` must be at least 1, got 0"),
    ("orbits: 15", "orbits: -1", "`mission.orbits` must be at least 1, got -1"),
    ("name: Larch", "name: 12", "`name` must be text, got the number `12`"),
    ("name: Larch", "name: {a: 1}", "`name` must be text, got a map"),
    ("name: Larch", "name: true", "`name` must be text, got `true`"),
    ("push: [1, 0, 0]", "push: 1", "`thrusters[0].push` must be a list, got the number `1`"),
    ("push: [1, 0, 0]", "push: [1, 0]", "`thrusters[0].push` must have 3 items, got 2"),
    ("push: [1, 0, 0]", "push: [1, 0, z]", "`thrusters[0].push[2]` must be a number, got the text `z`"),
    ("margin: 0.2", "eclipse: 1", "`mission.eclipse` must be `true` or `false`, got the number `1`"),
    ("target: [0, 0, 1]", "target: {a: 1}", "`target` must be a list or text, got a map"),
    ("target: [0, 0, 1]", "target: [0, 0]", "`target` must have 3 items, got 2"),
    ("thrust: 1 N", "thrust: [1, 2]", "`thrusters[0].thrust` must be a force, got a list"),
    ("thrust: 1 N", "thrust:", "`thrusters[0].thrust` must be a force, got nothing"),
    ("thrust: 1 N", "thrust: 1 lb", "`thrusters[0].thrust` must be a force, got `1 lb`"),
    (FEED, "[1]", "`feed` must be a map or `ideal`, got a list"),
    ("{factor: 1.5}", "1.5", "`conjectures.solar maximum` must be a map, got the number `1.5`"),
];

#[test]
fn wrong_kinds() {
    for (from, to, message) in WRONG_KINDS {
        assert_eq!(fault(from, to)[0], message);
    }
}

#[test]
fn remedies_fit_the_slip() {
    let help = |from: &str, to: &str| fault(from, to)[2].clone();
    assert_eq!(help("name: Larch", "name: 12"), "put it in quotes: `\"12\"`");
    assert_eq!(help("margin: 0.2", "eclipse: yes"), "write `true`");
    assert_eq!(help("margin: 0.2", "eclipse: Off"), "write `false`");
    assert_eq!(help("orbits: 15", "orbits: 1.5"), "write a number without a fraction");
    assert_eq!(help("orbits: 15", "orbits: 0"), "write a number that is at least 1");
    assert_eq!(help("margin: 0.2", "margin: 1,5"), "write digits, with a decimal point if need be, without quotes and unit");
    assert_eq!(help("thrust: 1 N", "thrust: [1]"), "write it as `1 N`");
    let shown = mutated("  - name: A2\n    thrust: {nominal: 1 N, sd: 3 %}\n", "  - A2\n");
    assert!(shown.contains("write it as `key: value`; known here: `group`, `name`, `push`, `thrust`"), "{shown}");
}

#[test]
fn words_of_enums() {
    let message = |got: &str| format!("`mission.mode` must be one of `sun_pointing`, `nadir`, got `{got}`");
    let [said, marked, help] = fault("sun_pointing", "sun-pointng");
    assert_eq!([said, marked, help], [&message("sun-pointng"), "sun-pointng", "did you mean `sun_pointing`?"]);
    assert_eq!(fault("sun_pointing", "zenith")[2], "write one of these words");
    assert_eq!(fault("mode: sun_pointing", "mode: 3")[0], "`mission.mode` must be `sun_pointing` or `nadir`, got the number `3`");
    assert_eq!(
        fault("group: main", "group: mian"),
        ["`thrusters[0].group` must be one of `main`, `backup`, got `mian`", "mian", "did you mean `main`?"]
    );
    assert_eq!(
        fault("kind: inertial", "kind: inertal"),
        ["`mission.attitude.kind` must be one of `inertial`, `spinning`, got `inertal`", "inertal", "did you mean `inertial`?"]
    );
}

#[test]
fn enums_with_data() {
    assert_eq!(mutated(FEED, "ideal"), "");
    assert_eq!(mutated(FEED, "null"), "");
    assert_eq!(
        fault(FEED, "blowdown"),
        ["`feed` must give the keys of `blowdown`, got only the word", "blowdown", "write `blowdown: {…}` on the next line"]
    );
    assert_eq!(fault(FEED, "blow")[0], "`feed` must be one of `ideal`, `regulated`, `blowdown`, got `blow`");
    assert_eq!(fault(FEED, "{}"), ["`feed` must have exactly one key, got 0", "{}", "write one of `regulated`, `blowdown`"]);
    assert_eq!(fault(FEED, "{regulated: {pressure: 1}, blowdown: {}}")[0], "`feed` must have exactly one key, got 2");
    // Another variant has other keys: one is missing, one is unknown.
    let shown = mutated("kind: inertial", "kind: spinning");
    assert!(shown.contains("`mission.attitude.rate` is missing"), "{shown}");
    assert!(shown.contains("unknown key `axis` in `mission.attitude`"), "{shown}");
}

#[test]
fn all_faults_are_found_in_one_run() {
    let text = "nam: Larch\nmission: {orbits: x, mode: y}\nthrusters: [{name: 1}, 2]\nfeed: {}\n";
    let document = read(text).unwrap();
    // nam, start, orbits, mode, thrust of the first, its name, the second, feed.
    assert_eq!(check(&document).len(), 8);
    let many: Vec<String> = (0..2000)
        .map(|key| {
            format!(
                "key{key}: 1
"
            )
        })
        .collect();
    let document = read(&format!("{GOOD}{}", many.concat())).unwrap();
    assert_eq!(check(&document).len(), 500);
}

#[test]
fn a_value_that_only_serde_refuses_is_still_located() {
    let document = read(&GOOD.replace("factor: 1.5", "factor: high")).unwrap();
    let faults = decode::<Demo>(&document).unwrap_err();
    assert_eq!(
        render_all(&faults, Some(&document), false),
        "\
error: `conjectures.solar maximum.factor` cannot be used: invalid type: string \"high\", expected f64
  --> mission.yaml:17:27
   |
17 |   solar maximum: {factor: high}
   |                           ^^^^
   |
   = help: `couplet schema` prints what each key takes
"
    );
}
