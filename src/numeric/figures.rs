//! Numbers written for people: thousands apart, no more digits than mean something.

/// Digits that a figure in a table keeps.
pub const TABLE_DIGITS: usize = 4;

/// A number with thousands apart by commas: whole where it has at least `digits` digits before
/// the point, else to `digits` significant digits without trailing zeros. `1842`, `0.031`,
/// `24,000,000`; beyond 1e15 and below 1e-6 in powers of ten, `3.2e-9`.
pub fn figure(value: f64, digits: usize) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    if !value.is_finite() {
        return if value.is_nan() {
            "not a number".to_owned()
        } else if value > 0.0 {
            "without end".to_owned()
        } else {
            "minus without end".to_owned()
        };
    }
    let size = value.abs();
    if !(1e-6..1e15).contains(&size) {
        let written = format!("{value:.*e}", digits.saturating_sub(1));
        let (mantissa, power) = written.split_once('e').unwrap_or((&written, "0"));
        return format!("{}e{power}", trimmed(mantissa));
    }
    let before_point = size.log10().floor() as i64 + 1;
    let decimals = usize::try_from(digits as i64 - before_point).unwrap_or(0);
    let written = format!("{value:.decimals$}");
    separated(if decimals > 0 {
        trimmed(&written)
    } else {
        &written
    })
}

/// A number to a fixed count of decimals, thousands apart, for columns that must align.
pub fn fixed(value: f64, decimals: usize) -> String {
    separated(&format!("{value:.decimals$}"))
}

/// The same as [`figure`], with the sign always written; `±0` for zero.
pub fn signed(value: f64, digits: usize) -> String {
    if value == 0.0 {
        return "±0".to_owned();
    }
    let written = figure(value.abs(), digits);
    format!("{}{written}", if value < 0.0 { "−" } else { "+" })
}

/// `written` without zeros at its end, and without a point that they leave.
fn trimmed(written: &str) -> &str {
    if written.contains('.') {
        written.trim_end_matches('0').trim_end_matches('.')
    } else {
        written
    }
}

/// Commas between the thousands of a plain decimal number.
fn separated(written: &str) -> String {
    let (sign, rest) = match written.strip_prefix('-') {
        Some(rest) => ("−", rest),
        None => ("", written),
    };
    let (whole, decimals) = rest
        .split_once('.')
        .map_or((rest, None), |(w, d)| (w, Some(d)));
    let mut out = String::with_capacity(written.len() + whole.len() / 3 + 2);
    out.push_str(sign);
    for (i, digit) in whole.char_indices() {
        if i > 0 && (whole.len() - i) % 3 == 0 {
            out.push(',');
        }
        out.push(digit);
    }
    if let Some(decimals) = decimals {
        out.push('.');
        out.push_str(decimals);
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn figures_keep_the_digits_that_mean_something() {
        let written = |value| figure(value, TABLE_DIGITS);
        assert_eq!(written(24_000_000.0), "24,000,000");
        assert_eq!(written(1842.4), "1,842");
        assert_eq!(written(0.031), "0.031");
        assert_eq!(written(0.0310452), "0.03105");
        assert_eq!(written(-12.5), "−12.5");
        assert_eq!(written(999.96), "1,000");
        assert_eq!(written(3.2e-9), "3.2e-9");
        assert_eq!(written(0.0), "0");
        assert_eq!(written(f64::INFINITY), "without end");
        assert_eq!(signed(214.0, 4), "+214");
        assert_eq!(signed(-0.5, 4), "−0.5");
        assert_eq!(fixed(1234567.891, 1), "1,234,567.9");
    }
}
