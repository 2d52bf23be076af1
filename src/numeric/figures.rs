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
        return format!("{}e{power}", trimmed(mantissa).replace('-', "−"));
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

/// Decimals at which a number of this size shows `digits` digits: 1 for 412.1 at 4 digits, 0 from
/// 1,000 up.
pub fn decimals_for(size: f64, digits: usize) -> usize {
    let size = size.abs();
    if size == 0.0 || !size.is_finite() {
        return 0;
    }
    let before_point = size.log10().floor() as i64 + 1;
    usize::try_from(digits as i64 - before_point).unwrap_or(0)
}

/// An amount as a person would write it: every digit where two decimals hold it, else to six
/// significant digits. `24,000,000`, `1,234.5`, `13.3333`.
pub fn amount(value: f64) -> String {
    const WRITTEN_OUT: f64 = 1e13;
    let to_the_cent = (0..=2).find(|&decimals| {
        let scale = 10f64.powi(decimals);
        value.abs() < WRITTEN_OUT && (value * scale).round() / scale == value
    });
    match to_the_cent {
        Some(decimals) => fixed(value, usize::try_from(decimals).unwrap_or(0)),
        None => figure(value, 6),
    }
}

/// A difference to the same decimals as the total that it belongs to, but to two digits at
/// least, so that a small one does not vanish.
pub fn difference(value: f64, total: f64, digits: usize) -> String {
    let shown = decimals_for(total, digits);
    let least = decimals_for(value, 2);
    if value == 0.0 || !(1e-6..1e15).contains(&value.abs()) {
        return figure(value, 2);
    }
    trimmed(&fixed(value, shown.max(least))).to_owned()
}

/// A share of one in percent, to three digits: `13.2 %`; `below 0.001 %` for less.
pub fn percent(share: f64) -> String {
    const LEAST: f64 = 1e-5;
    if share != 0.0 && share.abs() < LEAST {
        return format!("below {} %", figure(in_percent(LEAST), 3));
    }
    format!("{} %", figure(in_percent(share), 3))
}

/// A share of one as a number of percent.
pub fn in_percent(share: f64) -> f64 {
    share * 100.0
}

/// How many times one number is another, to two decimals below ten: `1.31×`, `0.80×`, `45×`.
pub fn times(ratio: f64) -> String {
    let size = ratio.abs();
    if size == 0.0 {
        "0×".to_owned()
    } else if (0.095..10.0).contains(&size) {
        format!("{}×", fixed(ratio, 2))
    } else {
        format!("{}×", figure(ratio, 2))
    }
}

/// How the numbers of one column are written, so that they align: to the same decimals, large
/// ones in millions.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ColumnFormat {
    divisor: f64,
    decimals: Option<usize>,
}

/// Beyond this, a column is written in millions.
const IN_MILLIONS_FROM: f64 = 1e9;

/// Decimals beyond which a column of small numbers is written each in its own way.
const MOST_DECIMALS: usize = 8;

/// Distance from a whole number that a column would not show.
const WHOLE: f64 = 1e-9;

impl ColumnFormat {
    /// The format in which the largest of `values` shows `digits` digits.
    pub fn of(values: impl Iterator<Item = f64>, digits: usize) -> Self {
        let values: Vec<f64> = values.filter(|value| value.is_finite()).collect();
        let largest = values.iter().copied().map(f64::abs).fold(0.0, f64::max);
        let divisor = if largest >= IN_MILLIONS_FROM {
            1e6
        } else {
            1.0
        };
        let most = decimals_for(largest / divisor, digits);
        if most > MOST_DECIMALS || largest / divisor >= 1e12 {
            return Self {
                divisor: 1.0,
                decimals: None,
            };
        }
        // Decimals that are zero in every row say nothing.
        let suffice = |&decimals: &usize| {
            let scale = 10f64.powi(decimals as i32) / divisor;
            let is_whole = |value: &f64| (value * scale - (value * scale).round()).abs() < WHOLE;
            values.iter().all(is_whole)
        };
        Self {
            divisor,
            decimals: Some((0..most).find(suffice).unwrap_or(most)),
        }
    }

    /// Whether the column is in millions.
    pub fn is_in_millions(&self) -> bool {
        self.divisor > 1.0
    }

    /// One cell: `~0` for a number that is not zero but would look so.
    pub fn cell(&self, value: f64) -> String {
        let scaled = value / self.divisor;
        match self.decimals {
            Some(_) if value == 0.0 => "0".to_owned(),
            Some(decimals) if value.is_finite() => {
                if scaled.abs() < 0.5 * 10f64.powi(-(decimals as i32)) {
                    "~0".to_owned()
                } else {
                    fixed(scaled, decimals)
                }
            }
            _ => figure(value, TABLE_DIGITS),
        }
    }

    /// One cell with its sign: `+214.0`, `−1.5`, `±0`.
    pub fn signed_cell(&self, value: f64) -> String {
        let written = self.cell(value.abs());
        if value == 0.0 {
            "±0".to_owned()
        } else if value < 0.0 {
            format!("−{written}")
        } else {
            format!("+{written}")
        }
    }
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

    #[test]
    fn an_amount_is_written_out_where_two_decimals_hold_it() {
        assert_eq!(amount(24_000_000.0), "24,000,000");
        assert_eq!(amount(1234.5), "1,234.5");
        assert_eq!(amount(0.07), "0.07");
        assert_eq!(amount(40.0 / 3.0), "13.3333");
        assert_eq!(amount(0.0), "0");
    }

    #[test]
    fn a_difference_has_the_decimals_of_its_total_but_never_vanishes() {
        assert_eq!(difference(214.26, 1842.4, 4), "214");
        assert_eq!(difference(0.31, 1842.4, 4), "0.31");
        assert_eq!(difference(3.0, 1842.4, 4), "3");
        assert_eq!(difference(1.5, 12.25, 4), "1.5");
        assert_eq!(difference(0.0, 12.25, 4), "0");
    }

    #[test]
    fn a_column_has_the_decimals_that_its_largest_number_needs() {
        let cells = |values: &[f64]| {
            let format = ColumnFormat::of(values.iter().copied(), 4);
            values
                .iter()
                .map(|&value| format.cell(value))
                .collect::<Vec<_>>()
        };
        assert_eq!(cells(&[412.16, 0.52, 0.0]), ["412.2", "0.5", "0"]);
        assert_eq!(cells(&[2.0, 12.0]), ["2", "12"]);
        assert_eq!(cells(&[1842.4, 0.01]), ["1,842", "~0"]);
        assert_eq!(cells(&[24e9, 1.2346e8]), ["24,000", "123"]);
        assert_eq!(
            ColumnFormat::of([3.0].into_iter(), 4).signed_cell(-1.0),
            "−1"
        );
    }

    #[test]
    fn ratios_and_shares_keep_their_sign_and_size() {
        assert_eq!(times(1.3149), "1.31×");
        assert_eq!(times(0.8), "0.80×");
        assert_eq!(times(45.2), "45×");
        assert_eq!(times(0.0123), "0.012×");
        assert_eq!(percent(0.1316), "13.2 %");
        assert_eq!(percent(8e-9), "below 0.001 %");
        assert_eq!(decimals_for(412.1, 4), 1);
        assert_eq!(decimals_for(24e6, 4), 0);
        assert_eq!(decimals_for(0.0311, 4), 5);
    }
}
