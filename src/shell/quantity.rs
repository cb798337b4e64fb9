//! Times and numbers as people write them.

use std::time::Duration;

/// Reads `500ms`, `60s`, `2.5s`, `2m`, `1h`. A time is more than nothing and at most a year.
pub fn parse_duration(text: &str) -> Option<Duration> {
    let digits = text
        .find(|c: char| !c.is_ascii_digit() && c != '.')
        .unwrap_or(text.len());
    let (number, unit) = text.split_at(digits);
    let unit = match unit {
        "ms" => 0.001,
        "s" => 1.0,
        "m" | "min" => 60.0,
        "h" => 3600.0,
        _ => return None,
    };
    let seconds = number.parse::<f64>().ok()? * unit;
    (seconds > 0.0 && seconds <= 366.0 * 86_400.0).then(|| Duration::from_secs_f64(seconds))
}

/// A time for reading: `0.4 ms`, `12 ms`, `2 s`, `2.3 s`, `1 min 5 s`, `2 h 3 min`.
pub fn show_duration(time: Duration) -> String {
    let milliseconds = time.as_secs_f64() * 1000.0;
    if milliseconds < 0.05 {
        return "under 0.1 ms".to_owned();
    }
    if milliseconds < 9.95 {
        return format!("{} ms", one_digit(milliseconds));
    }
    if milliseconds < 999.5 {
        return format!("{milliseconds:.0} ms");
    }
    let seconds = time.as_secs_f64();
    if seconds < 59.95 {
        return format!("{} s", one_digit(seconds));
    }
    let seconds = seconds.round() as u64;
    match (seconds / 3600, seconds / 60 % 60, seconds % 60) {
        (0, minutes, 0) => format!("{minutes} min"),
        (0, minutes, seconds) => format!("{minutes} min {seconds} s"),
        (hours, 0, _) => format!("{hours} h"),
        (hours, minutes, _) => format!("{hours} h {minutes} min"),
    }
}

fn one_digit(number: f64) -> String {
    let text = format!("{number:.1}");
    text.strip_suffix(".0").map_or(text.clone(), str::to_owned)
}

/// A number with a comma before every third digit.
pub fn number(number: impl TryInto<u128>) -> String {
    let digits = number.try_into().unwrap_or(0).to_string();
    let mut text = String::with_capacity(digits.len() * 4 / 3);
    for (place, digit) in digits.chars().enumerate() {
        if place > 0 && (digits.len() - place).is_multiple_of(3) {
            text.push(',');
        }
        text.push(digit);
    }
    text
}

/// `1 rule`, `2 rules`: the plural adds an s.
pub fn count(number_of: usize, thing: &str) -> String {
    let ending = if number_of == 1 { "" } else { "s" };
    format!("{} {thing}{ending}", number(number_of as u128))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn times_are_read() {
        let read = |text| parse_duration(text).map(|time| time.as_millis());
        assert_eq!(read("500ms"), Some(500));
        assert_eq!(read("2.5s"), Some(2500));
        assert_eq!(read("2m"), Some(120_000));
        assert_eq!(read("1h"), Some(3_600_000));
        for text in [
            "",
            "s",
            "2",
            "-1s",
            "0s",
            "1e9s",
            "1.2.3s",
            "2 s",
            "99999999h",
            "2d",
        ] {
            assert_eq!(parse_duration(text), None, "{text}");
        }
    }

    #[test]
    fn times_are_shown_short() {
        let shown = |micros| show_duration(Duration::from_micros(micros));
        assert_eq!(shown(10), "under 0.1 ms");
        assert_eq!(shown(400), "0.4 ms");
        assert_eq!(shown(2_000), "2 ms");
        assert_eq!(shown(9_960), "10 ms");
        assert_eq!(shown(340_000), "340 ms");
        assert_eq!(shown(999_700), "1 s");
        assert_eq!(shown(2_000_000), "2 s");
        assert_eq!(shown(2_340_000), "2.3 s");
        assert_eq!(shown(59_990_000), "1 min");
        assert_eq!(shown(61_000_000), "1 min 1 s");
        assert_eq!(shown(7_380_000_000), "2 h 3 min");
    }

    #[test]
    fn numbers_have_commas() {
        assert_eq!(number(0u32), "0");
        assert_eq!(number(999u32), "999");
        assert_eq!(number(48_120u64), "48,120");
        assert_eq!(number(1_000_000usize as u128), "1,000,000");
        assert_eq!(count(1, "rule"), "1 rule");
        assert_eq!(count(1200, "rule"), "1,200 rules");
    }
}
