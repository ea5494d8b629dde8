//! Numbers and paragraphs in words.

/// Columns of text, fit for a terminal of 80.
pub(super) const WIDTH: usize = 79;

/// A count with commas between thousands.
pub(super) fn count(value: u64) -> String {
    let digits = value.to_string();
    let mut text = String::with_capacity(digits.len() + digits.len() / 3);
    for (place, digit) in digits.chars().enumerate() {
        if place > 0 && (digits.len() - place).is_multiple_of(3) {
            text.push(',');
        }
        text.push(digit);
    }
    text
}

/// A number of replicates.
pub(super) fn replicates(number: usize) -> String {
    let plural = if number == 1 { "" } else { "s" };
    format!("{} replicate{plural}", count(number as u64))
}

/// A number of generations: whole, with commas; below 10 with one decimal.
pub(super) fn generations(value: f64) -> String {
    if value < 10.0 {
        return format!("{value:.1}");
    }
    // Rounding in text is exact for any size, and cannot overflow.
    format!("{value:.0}").parse().map_or_else(|_| format!("{value:.3e}"), count)
}

/// A share or an index, two decimals.
pub(super) fn share(value: f64) -> String {
    format!("{value:.2}")
}

/// A large number in words: 12.3 million.
pub(super) fn magnitude(value: f64) -> String {
    const STEPS: [(f64, &str); 3] = [(1e9, " billion"), (1e6, " million"), (1e3, " thousand")];
    STEPS
        .iter()
        .find(|(size, _)| value >= *size)
        .map_or_else(|| format!("{value:.0}"), |(size, word)| format!("{:.1}{word}", value / size))
}

/// `text` broken into lines of at most [`WIDTH`] columns; every line, also the first, leaves
/// `indent` columns free, which the first leaves to what the caller puts before it.
///
/// A word longer than a line stays whole. Columns are counted in characters.
pub(super) fn wrap(text: &str, indent: usize) -> String {
    let mut lines = String::new();
    let mut column = indent;
    for word in text.split_whitespace() {
        let width = word.chars().count();
        if column > indent && column + 1 + width > WIDTH {
            lines.push('\n');
            lines.push_str(&" ".repeat(indent));
            column = indent;
        } else if column > indent {
            lines.push(' ');
            column += 1;
        }
        lines.push_str(word);
        column += width;
    }
    lines
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers() {
        assert_eq!(
            (count(0), count(999), count(1_000)),
            ("0".into(), "999".into(), "1,000".into())
        );
        assert_eq!(count(1_234_567), "1,234,567");
        assert_eq!(generations(1_499.6), "1,500");
        assert_eq!(generations(7.25), "7.2");
        assert_eq!(
            (magnitude(999.0), magnitude(12_340_000.0)),
            ("999".into(), "12.3 million".into())
        );
    }

    #[test]
    fn paragraphs_keep_within_the_width() {
        let text = "lantern algae ".repeat(20);
        let wrapped = wrap(&text, 4);
        assert!(wrapped.lines().skip(1).all(|line| line.chars().count() <= WIDTH));
        assert!(wrapped.lines().next().is_some_and(|line| line.chars().count() <= WIDTH - 4));
        assert!(
            wrapped
                .lines()
                .skip(1)
                .all(|line| line.starts_with("    ") && !line.starts_with("     "))
        );
        assert_eq!(wrapped.split_whitespace().count(), 40);
        assert_eq!(wrap("", 4), "");
    }
}
