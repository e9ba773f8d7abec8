//! What reads as an instant and what is refused.
//!
//! The form is that of RFC 3339 (a date `YYYY-MM-DD`; with a time of day, `Z` or an offset). Unix seconds are those of
//! GNU `date -u -d TEXT +%s`.

use couplet::environment::Epoch;

/// The refusal, which names the text.
fn refusal(text: &str) -> String {
    let message = Epoch::parse(text).expect_err(text).to_string();
    assert!(message.contains(&format!("`{text}`")), "{message}");
    message
}

/// Julian date of a Unix second: 1970-01-01 is 2440587.5 (Seidelmann, Explanatory Supplement).
fn assert_at_unix(text: &str, unix_s: f64) {
    let epoch = Epoch::parse(text).expect(text);
    let want = 2_440_587.5 + unix_s / 86_400.0;
    // Julian dates of this size resolve 40 µs; a second is 1.2e-5 d.
    assert!((epoch.julian_date_utc() - want).abs() < 1e-8, "{text}: {} is not {want}", epoch.julian_date_utc());
}

#[test]
fn dates_and_times_of_day_with_an_offset_are_read() {
    assert_at_unix("2028-03-01", 1_835_481_600.0);
    assert_at_unix(" 2028-03-01 ", 1_835_481_600.0);
    assert_at_unix("2028-03-01T12:00:00Z", 1_835_524_800.0);
    assert_at_unix("2028-03-01 12:00:00Z", 1_835_524_800.0);
    assert_at_unix("2028-03-01T12:00:00.25+01:00", 1_835_521_200.25);
    assert_at_unix("2028-02-29", 1_835_395_200.0);
}

/// As documented: the second before, for the calendar beneath has no leap second.
#[test]
fn a_leap_second_reads_as_the_second_before() {
    assert_at_unix("2016-12-31T23:59:60Z", 1_483_228_799.0);
}

#[test]
fn only_the_full_form_of_a_date_is_read() {
    for text in ["20280301", "-002028-01-01", "+002028-01-01", "2028-3-1", "28-03-01", "2028-060", "2028-W09-3", "2028/03/01", "2028-03"] {
        assert!(refusal(text).contains("`YYYY-MM-DD`"), "{text}");
    }
    for text in ["20280301T120000Z", "-002028-01-01T00:00:00Z", "2028-03-01Z", "2028-03-011", "２０２８-03-01"] {
        assert!(refusal(text).contains("`YYYY-MM-DD`"), "{text}");
    }
    for text in ["2028-02-30", "2028-13-01", "2027-02-29", "2028-03-01T25:00:00Z", "2028-03-01T"] {
        refusal(text);
    }
}

#[test]
fn a_zone_in_brackets_is_refused_with_a_remedy() {
    for text in
        ["2028-03-01[Europe/Paris]", "2028-03-01T12:00:00Z[UTC]", "2028-03-01T12:00:00+01:00[Europe/Paris]", "2028-03-01[u-ca=iso8601]"]
    {
        let message = refusal(text);
        assert!(message.contains("brackets") && message.contains("`Z`"), "{message}");
    }
}

#[test]
fn years_the_models_do_not_hold_for_are_refused() {
    for text in ["1899-12-31", "2201-01-01", "0028-03-01", "9999-12-31", "2200-12-31T23:30:00-01:00"] {
        assert!(refusal(text).contains("outside the years 1900 to 2200"), "{text}");
    }
    assert_at_unix("1900-01-01", -2_208_988_800.0);
    assert_at_unix("2200-12-31T23:59:59Z", 7_289_654_399.0);
    // It is the year in UTC that counts.
    assert_at_unix("1899-12-31T23:30:00-01:00", -2_208_987_000.0);
}
