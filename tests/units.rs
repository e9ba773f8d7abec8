//! Quantities and spreads as users write them.

use couplet::uncertain::{Spread, parse_spread, parse_spread_triple, parse_triple};
use couplet::units::{Kind, kind, parse_kind};
use proptest::prelude::*;

fn close(got: f64, expected: f64) {
    // A conversion is one or two products: a few units in the last place.
    assert!((got - expected).abs() <= 1e-14 * expected.abs(), "got {got:e}, expected {expected:e}");
}

fn ok<K: Kind>(text: &str) -> f64 {
    parse_kind::<K>(text).unwrap_or_else(|error| panic!("`{text}`: {error}"))
}

/// NIST Special Publication 811 (2008), appendix B; the year is the Julian one of astronomy, 365.25 d.
#[test]
fn conversions() {
    close(ok::<kind::Force>("1 lbf"), 4.448_221_615_260_5);
    close(ok::<kind::Mass>("1 lb"), 0.453_592_37);
    close(ok::<kind::Mass>("1 oz"), 0.028_349_523_125);
    assert!((ok::<kind::Mass>("1 slug") - 14.593_90).abs() < 1e-5);
    close(ok::<kind::Length>("1 in"), 0.0254);
    close(ok::<kind::Length>("1 ft"), 0.3048);
    assert!((ok::<kind::Pressure>("1 psi") - 6894.757).abs() < 1e-3);
    assert!((ok::<kind::Torque>("1 lbf ft") - 1.355_818).abs() < 1e-6);
    assert!((ok::<kind::Torque>("1 lbf in") - 0.112_984_8).abs() < 1e-7);
    close(ok::<kind::Time>("7 yr"), 7.0 * 365.25 * 86_400.0);
    close(ok::<kind::AngularRate>("1 rpm"), std::f64::consts::PI / 30.0);
    close(ok::<kind::AngularRate>("1 deg/s"), std::f64::consts::PI / 180.0);
    close(ok::<kind::Number>("12 %"), 0.12);
    close(ok::<kind::Time>("20 ms"), 0.02);
    close(ok::<kind::Length>("600 km"), 6e5);
    close(ok::<kind::MassRate>("20 g/yr"), 0.02 / 31_557_600.0);
    close(ok::<kind::Price>("1.2 g/(N m s)"), 1.2e-3);
}

#[test]
fn spellings_of_the_same_quantity() {
    for text in [
        "12 N m s",
        "12 N·m·s",
        "12 N*m*s",
        "12 Nms",
        "12000 mN m s",
        "12 kg m2/s",
        "12 kg m^2 s^-1",
        "12 kg·m²·s⁻¹",
        "1.2e1 N m s",
        "+12 N m s",
    ] {
        close(ok::<kind::Momentum>(text), 12.0);
    }
    for text in ["0.6 A m2", "0.6 A·m²", "0.6 Am2", "600 mA m^2"] {
        close(ok::<kind::Dipole>(text), 0.6);
    }
    for text in ["-2 uN m", "−2 μN m", "-2 µN·m"] {
        close(ok::<kind::Torque>(text), -2e-6);
    }
}

/// Slips that some unit library turns into a wrong number without a word: each is an error or right here.
#[test]
fn slips_are_refused() {
    for text in [
        "1,5 N", "1/2 N", "1 N 2 kg", "1_000 N", "0x10 N", "nan N", "inf N", "1e999 N", "N", "", "1 N/", "1 N)", "1 (N", "1 N^9", "1 N^",
        "--1 N", "1 1 N",
    ] {
        assert!(parse_kind::<kind::Force>(text).is_err(), "{text}");
    }
    assert!(parse_kind::<kind::Torque>("1 oz in").is_err());
    close(ok::<kind::Inertia>("12 kg m2"), 12.0);
    close(ok::<kind::Dipole>("1e-3 A m2"), 1e-3);
    close(ok::<kind::AngularRate>("5 deg/h"), 5.0 * std::f64::consts::PI / 180.0 / 3600.0);
}

#[test]
fn messages_say_what_was_expected_and_how_to_mend_it() {
    let fault = |text: &str| parse_kind::<kind::Force>(text).unwrap_err();
    assert_eq!(fault("0.5").message, "the unit is missing: expected a force, such as `1 N`");
    assert!(fault("1 N m").message.contains("expected a force") && fault("1 N m").message.contains("N m (a torque)"));
    assert!(fault("1 lb").help.contains("lbf"));
    assert!(fault("1 Nn").help.contains("did you mean `N"));
    assert!(fault("1,5 N").help.contains("1.5"));
    assert!(parse_kind::<kind::AngularRate>("1 Hz").unwrap_err().help.contains("rate of turn"));
    assert_eq!(fault("1 lb").range, 2..4);
}

fn spread<K: Kind>(text: &str) -> Spread {
    parse_spread(text, K::DIMENSION, K::NAME, K::EXAMPLE).unwrap_or_else(|error| panic!("`{text}`: {error}"))
}

#[test]
fn spreads() {
    assert_eq!(spread::<kind::Number>("2.2 ± 0.2"), Spread::Normal { mean: 2.2, sigma: 0.2 });
    assert_eq!(spread::<kind::Number>("2.2 +/- 0.2"), spread::<kind::Number>("2.2±0.2"));
    assert_eq!(spread::<kind::Force>("1 ± 0.25 N"), spread::<kind::Force>("1 N ± 25 %"));
    assert_eq!(spread::<kind::Force>("1 N ± 250 mN"), spread::<kind::Force>("1 N ± 0.25 N"));
    assert_eq!(spread::<kind::Force>("0.5 .. 1.5 N"), Spread::Uniform { low: 0.5, high: 1.5 });
    assert_eq!(spread::<kind::Force>("500 mN..1.5 N"), Spread::Uniform { low: 0.5, high: 1.5 });
    assert_eq!(spread::<kind::Force>("1 N"), Spread::Fixed(1.0));
    assert_eq!(spread::<kind::Force>("1 N ± 0 N"), Spread::Fixed(1.0));
    let refused = |text: &str| parse_spread(text, kind::Force::DIMENSION, kind::Force::NAME, kind::Force::EXAMPLE).is_err();
    for text in [
        "1 ± 0.2",
        "1 .. 2",
        "2 .. 1 N",
        "1 N ± -0.1 N",
        "1 N ± 0.1 s",
        "1 s ± 0.1 N",
        "1 ± N",
        "± 1 N",
        "1 2 3 N",
        "1 N .. ",
        "1 .. 2 .. 3 N",
    ] {
        assert!(refused(text), "{text}");
    }
}

#[test]
fn triples() {
    let length = |text: &str| parse_triple(text, kind::Length::DIMENSION, "a length", "1 m");
    assert_eq!(length("0.01 0 0.74 m"), Ok([0.01, 0.0, 0.74]));
    assert_eq!(length("0.5, 0, 0.25 m"), Ok([0.5, 0.0, 0.25]));
    assert_eq!(parse_triple("0 0 -1", kind::Number::DIMENSION, "a direction", "0 0 1"), Ok([0.0, 0.0, -1.0]));
    for text in ["1 2 m", "1 2 3 4 m", "1 2 3", "1 2 3 N", "1 2 3 ± 1 m"] {
        assert!(length(text).is_err(), "{text}");
    }
    let dipole = |text: &str| parse_spread_triple(text, kind::Dipole::DIMENSION, "a dipole", "0.6 A m2").unwrap();
    let normal = |mean, sigma| Spread::Normal { mean, sigma };
    assert_eq!(dipole("0.5 0.25 -1 ± 0.5 A m2"), [normal(0.5, 0.5), normal(0.25, 0.5), normal(-1.0, 0.5)]);
    assert_eq!(dipole("0.5 0.25 -1 ± 0.5 0 0.25 A m2"), [normal(0.5, 0.5), Spread::Fixed(0.25), normal(-1.0, 0.25)]);
    assert_eq!(dipole("0.5 0.25 -1 A m2 ± 50 %"), [normal(0.5, 0.25), normal(0.25, 0.125), normal(-1.0, 0.5)]);
    assert_eq!(dipole("-1 0 0 .. 1 0 2 A m2")[1], Spread::Fixed(0.0));
}

proptest! {
    /// What is printed with its unit reads back as the same number.
    #[test]
    fn printed_numbers_read_back(x in -1e9_f64..1e9) {
        prop_assert_eq!(parse_kind::<kind::Force>(&format!("{x} N")).unwrap().to_bits(), x.to_bits());
        prop_assert_eq!(parse_kind::<kind::Force>(&format!("{x:e} N")).unwrap().to_bits(), x.to_bits());
    }

    /// No text makes the readers panic, and a fault stands inside its text at whole characters.
    #[test]
    fn any_text_is_read_or_refused(text in "\\PC{0,40}") {
        let faults = [
            parse_kind::<kind::Force>(&text).err(),
            parse_spread(&text, kind::Force::DIMENSION, "a force", "1 N").err(),
            parse_spread_triple(&text, kind::Number::DIMENSION, "a direction", "0 0 1").err(),
        ];
        for fault in faults.into_iter().flatten() {
            prop_assert!(text.get(fault.range.clone()).is_some(), "{:?} in {:?}", fault.range, text);
        }
    }

    /// The same with the signs that quantities are made of.
    #[test]
    fn near_misses_are_read_or_refused(text in "[-−+0-9.e±/%() ^²Nmskgdrpl·*,]{0,24}") {
        for fault in [
            parse_kind::<kind::Torque>(&text).err(),
            parse_spread(&text, kind::Torque::DIMENSION, "a torque", "1 N m").err(),
            parse_spread_triple(&text, kind::Torque::DIMENSION, "a torque", "1 N m").err(),
        ].into_iter().flatten() {
            prop_assert!(text.get(fault.range.clone()).is_some(), "{:?} in {:?}", fault.range, text);
        }
    }
}
