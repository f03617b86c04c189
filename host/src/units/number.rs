//! The number part of a quantity: decimal, common fraction (`3/8`) or mixed (`5 1/2`).

use super::UnitError;

/// Splits a text into its number and its unit; either may come out empty.
///
/// # Errors
///
/// [`UnitError::NotANumber`] and [`UnitError::NotFinite`] when the text does not begin with a
/// number, [`UnitError::Separator`] when the number is broken by a comma or the like.
pub(super) fn split(text: &str) -> Result<(&str, &str), UnitError> {
    let mut end = decimal_len(text);
    if end == 0 {
        let word = text.split(' ').next().unwrap_or(text);
        if ["nan", "inf", "infinity"].contains(&bare_word(word).as_str()) {
            return Err(UnitError::NotFinite);
        }
        return Err(UnitError::NotANumber { text: word.to_owned() });
    }
    if text[end..].starts_with([',', '\'', '_']) {
        let word = text.split(' ').next().unwrap_or(text);
        return Err(UnitError::Separator { text: word.to_owned() });
    }
    // `3/8 in`, and `5 1/2 in`: the fraction follows a whole number.
    if let Some(more) = fraction_tail(&text[end..]) {
        end += more;
    } else if let Some(rest) = text[end..].strip_prefix(' ') {
        let whole = decimal_len(rest);
        if whole > 0
            && let Some(more) = fraction_tail(&rest[whole..])
        {
            end += 1 + whole + more;
        }
    }
    Ok((&text[..end], text[end..].trim_start()))
}

fn bare_word(word: &str) -> String {
    word.trim_start_matches(['-', '+']).to_ascii_lowercase()
}

/// Length of `/8` at the start of a text, if that is what stands there.
fn fraction_tail(text: &str) -> Option<usize> {
    let digits = text.strip_prefix('/')?.bytes().take_while(u8::is_ascii_digit).count();
    (digits > 0).then_some(digits + 1)
}

/// Length of the decimal number at the start of a text; 0 when there is none.
fn decimal_len(text: &str) -> usize {
    let bytes = text.as_bytes();
    let digits = |from: usize| bytes.iter().skip(from).take_while(|b| b.is_ascii_digit()).count();
    let sign = usize::from(matches!(bytes.first(), Some(b'-' | b'+')));
    let whole = digits(sign);
    let mut end = sign + whole;
    let mut fraction = 0;
    if bytes.get(end) == Some(&b'.') {
        fraction = digits(end + 1);
        end += 1 + fraction;
    }
    if whole + fraction == 0 {
        return 0;
    }
    if matches!(bytes.get(end), Some(b'e' | b'E')) {
        let signed = usize::from(matches!(bytes.get(end + 1), Some(b'-' | b'+')));
        let exponent = digits(end + 1 + signed);
        if exponent > 0 {
            end += 1 + signed + exponent;
        }
    }
    end
}

/// The value of a number that [`split`] found.
///
/// # Errors
///
/// [`UnitError::NotFinite`] and [`UnitError::ZeroDenominator`].
pub(super) fn value(number: &str) -> Result<f64, UnitError> {
    let (whole, fraction) = match number.split_once(' ') {
        Some((whole, fraction)) => (whole, Some(fraction)),
        None if number.contains('/') => ("", Some(number)),
        None => (number, None),
    };
    let base = if whole.is_empty() { 0.0 } else { decimal(whole)? };
    let Some(fraction) = fraction else { return Ok(base) };
    let (above, below) = fraction.split_once('/').unwrap_or((fraction, "1"));
    let below = decimal(below)?;
    if below == 0.0 {
        return Err(UnitError::ZeroDenominator);
    }
    let part = decimal(above)? / below;
    Ok(if whole.starts_with('-') { base - part } else { base + part })
}

fn decimal(text: &str) -> Result<f64, UnitError> {
    let value: f64 = text.parse().map_err(|_| UnitError::NotANumber { text: text.to_owned() })?;
    if value.is_finite() { Ok(value) } else { Err(UnitError::NotFinite) }
}

/// Splits `26 ft 3 1/2 in` into the texts `26` and `3 1/2`.
pub(super) fn split_feet(text: &str) -> Option<(&str, &str)> {
    let (feet, rest) = split(text).ok()?;
    let rest = rest.strip_prefix("ft")?.trim_start();
    let (inches, unit) = split(rest).ok()?;
    (unit == "in").then_some((feet, inches))
}
