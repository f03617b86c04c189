//! Remaining life by corrosion rate, and its date.
//!
//! Source: API 510 7.2.1, API 570 7.1, API 653 4.3: remaining life = (actual - required thickness)
//! / rate. The corrosion allowance is deducted at most once: not at all towards the retirement
//! thickness, once towards the planned one, which keeps it.

use super::document::Life;
use jiff::ToSpan as _;
use jiff::civil::Date;

/// A year, s (365 days, as in rates).
const YEAR_S: f64 = 31_536_000.0;

/// A plate that corrodes.
#[derive(Clone, Copy, Debug)]
pub(super) struct Plate {
    pub(super) now_m: f64,
    pub(super) allowance_m: f64,
    pub(super) required_m: f64,
    pub(super) rate_m_s: f64,
}

impl Plate {
    fn years(self, spare_m: f64) -> Option<f64> {
        let rate_m_per_year = self.rate_m_s * YEAR_S;
        (rate_m_per_year > 0.0).then(|| spare_m.max(0.0) / rate_m_per_year)
    }

    /// Years to the retirement thickness: (thickness - required) / rate, zero when it is spent;
    /// `None` when the rate is zero.
    pub(super) fn to_retirement_years(self) -> Option<f64> {
        self.years(self.now_m - self.required_m)
    }

    /// Years to the planned thickness: (thickness - allowance - required) / rate.
    pub(super) fn to_planned_years(self) -> Option<f64> {
        self.years(self.now_m - self.allowance_m - self.required_m)
    }
}

/// The remaining life of a plate; its dates count from the day that the basis names.
pub(super) fn of(plate: Plate, basis: Option<&str>) -> Life {
    let from = basis.and_then(day_in);
    let (retirement, planned) = (plate.to_retirement_years(), plate.to_planned_years());
    let date = |years: Option<f64>| after(from?, years?).map(|date| date.to_string());
    Life {
        rate_m_per_year: plate.rate_m_s * YEAR_S,
        from: from.map(|date| date.to_string()),
        to_retirement_years: retirement,
        to_retirement_date: date(retirement),
        to_planned_years: planned,
        to_planned_date: date(planned),
    }
}

/// The day in a basis such as `surveyed 2026-05`: its first one where only a month or a year
/// stands.
pub(super) fn day_in(basis: &str) -> Option<Date> {
    basis.split(|c: char| !(c.is_ascii_digit() || c == '-')).find_map(|word| {
        let mut pieces = word.split('-');
        let year = pieces.next().filter(|year| year.len() == 4)?.parse::<i16>().ok()?;
        let mut number = || pieces.next().map_or(Some(1), |piece| piece.parse::<i8>().ok());
        let (month, day) = (number()?, number()?);
        let plausible = (1850..=2200).contains(&year) && pieces.next().is_none();
        plausible.then(|| Date::new(year, month, day).ok()).flatten()
    })
}

/// Whole days later, rounded down; `None` beyond the calendar.
fn after(from: Date, years: f64) -> Option<Date> {
    let days = (years * 365.0).floor();
    if days > 3.0e6 {
        return None;
    }
    #[expect(clippy::cast_possible_truncation, reason = "whole, and below three million")]
    let days = days as i32;
    from.checked_add(days.days()).ok()
}

#[cfg(test)]
mod tests {
    use super::{Plate, day_in, of};

    const YEAR_S: f64 = super::YEAR_S;

    fn near(got: Option<f64>, expected: f64, within: f64) {
        let got = got.expect("a number");
        assert!((got - expected).abs() < within, "{got} against {expected}");
    }

    #[test]
    fn the_allowance_is_deducted_once() {
        let rate_m_s = 0.1e-3 / YEAR_S;
        let plate = Plate { now_m: 5e-3, allowance_m: 1e-3, required_m: 3.5e-3, rate_m_s };
        near(plate.to_retirement_years(), 15.0, 1e-9);
        near(plate.to_planned_years(), 5.0, 1e-9);
        let spent = Plate { required_m: 4.5e-3, ..plate };
        near(spent.to_retirement_years(), 5.0, 1e-9);
        near(spent.to_planned_years(), 0.0, 1e-12);
        assert_eq!(Plate { rate_m_s: 0.0, ..plate }.to_retirement_years(), None);
    }

    #[test]
    fn days_count_from_that_of_the_survey() {
        let day = |text| day_in(text).map(|day| day.to_string());
        assert_eq!(day("surveyed 2026-05").as_deref(), Some("2026-05-01"));
        assert_eq!(day("surveyed 2026-05-17, spot 12").as_deref(), Some("2026-05-17"));
        assert_eq!(day("drawing 1204-7, 1987").as_deref(), Some("1987-01-01"));
        assert_eq!(day("surveyed 2026-13"), None);
        assert_eq!(day("drawing"), None);
        let rate_m_s = 0.1e-3 / YEAR_S;
        let plate = Plate { now_m: 4e-3, allowance_m: 0.0, required_m: 3.427e-3, rate_m_s };
        let life = of(plate, Some("surveyed 2026-01-01"));
        near(life.to_retirement_years, 5.73, 1e-3);
        // 2091 days and a part of one more.
        assert_eq!(life.to_retirement_date.as_deref(), Some("2031-09-23"));
        let long = Plate { rate_m_s: 1e-12 / YEAR_S, ..plate };
        assert_eq!(of(long, Some("surveyed 2026")).to_retirement_date, None);
    }
}
