//! Numbers and sentences for a person.

use nalgebra::Vector3;

/// Width of the text, characters.
const WIDTH: usize = 78;

/// A number with this many significant digits, without an exponent where it reads well.
pub(super) fn number(value: f64, digits: usize) -> String {
    if !value.is_finite() {
        return "—".to_owned();
    }
    if value.abs() < 1e-300 {
        return "0".to_owned();
    }
    #[expect(clippy::cast_possible_truncation, reason = "a decimal exponent is within ±308")]
    let exponent = value.abs().log10().floor() as i32;
    let places = i32::try_from(digits).unwrap_or(4) - 1 - exponent;
    if (-3..6).contains(&exponent) {
        return format!("{value:.*}", usize::try_from(places.max(0)).unwrap_or(0));
    }
    format!("{value:.*e}", digits.saturating_sub(1))
}

/// A share in percent.
pub(super) fn percent(share: f64) -> String {
    format!("{:.2} %", share * 100.0)
}

/// A vector with this many decimals.
pub(super) fn vector(v: &Vector3<f64>, decimals: usize) -> String {
    // `-0.000` reads as a sign that means something.
    let part = |x: f64| {
        let text = format!("{x:.decimals$}");
        if text.trim_start_matches(['-', '0', '.']).is_empty() { text.trim_start_matches('-').to_owned() } else { text }
    };
    format!("({}, {}, {})", part(v.x), part(v.y), part(v.z))
}

/// Breaks a sentence into lines, each after `indent`, the first after `first`.
pub(super) fn paragraph(first: &str, indent: &str, text: &str) -> String {
    let mut out = String::new();
    let mut line = first.to_owned();
    let mut empty = true;
    for word in text.split_whitespace() {
        let longer = line.chars().count() + usize::from(!empty) + word.chars().count();
        if longer > WIDTH && !empty {
            out.push_str(line.trim_end());
            out.push('\n');
            indent.clone_into(&mut line);
            empty = true;
        }
        if !empty {
            line.push(' ');
        }
        line.push_str(word);
        empty = false;
    }
    out.push_str(line.trim_end());
    out.push('\n');
    out
}

/// A heading of a section.
pub(super) fn heading(text: &str) -> String {
    format!("\n{text}\n{}\n", "─".repeat(text.chars().count()))
}

/// A word of machine-readable output as words: `wheel_unloading` to `wheel unloading`.
pub(super) fn plain(key: &str) -> String {
    key.replace('_', " ")
}

/// A name with its middle left out if it is longer than `most` characters.
pub(super) fn shortened(name: &str, most: usize) -> String {
    let letters: Vec<char> = name.chars().collect();
    if letters.len() <= most {
        return name.to_owned();
    }
    let kept = most.saturating_sub(1);
    let (front, back) = (kept.div_ceil(2), kept / 2);
    letters.iter().take(front).chain(std::iter::once(&'…')).chain(letters.iter().skip(letters.len() - back)).collect()
}
