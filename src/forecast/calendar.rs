//! Days and calendar periods.
//!
//! Days count from 00:00 of the first day; an event's date is the calendar day that holds it.

use super::{Every, Period, PeriodSpec};
use jiff::ToSpan;
use jiff::civil::Date;

/// Whole days from `start` to `date`.
pub fn days_between(start: Date, date: Date) -> f64 {
    start.until((jiff::Unit::Day, date)).map_or(0.0, |span| f64::from(span.get_days()))
}

/// The calendar day that holds the instant `days` after `start`.
pub fn date_at(start: Date, days: f64) -> Date {
    // An instant located a rounding error before midnight belongs to the day that begins.
    let whole = (days + 1e-6).floor().clamp(0.0, 4_000_000.0);
    start.checked_add((whole as i64).days()).unwrap_or(start)
}

/// The calendar periods from start to end. The first and the last may be cut by the start and the end of the forecast.
pub fn periods(spec: &PeriodSpec) -> Vec<Period> {
    let mut list = Vec::new();
    let mut from = spec.start;
    while from < spec.end {
        let to = next_boundary(from, spec.every).filter(|d| *d > from).map_or(spec.end, |d| d.min(spec.end));
        let (start_days, end_days) = (days_between(spec.start, from), days_between(spec.start, to));
        list.push(Period { start: from, end: to, start_days, end_days, run_days: end_days });
        from = to;
    }
    list
}

/// The first day of the next calendar period after `date`.
fn next_boundary(date: Date, every: Every) -> Option<Date> {
    let first = match every {
        Every::Month => date.first_of_month(),
        Every::Quarter => Date::new(date.year(), (date.month() - 1) / 3 * 3 + 1, 1).ok()?,
        Every::Year => date.first_of_year(),
    };
    let months = match every {
        Every::Month => 1,
        Every::Quarter => 3,
        Every::Year => 12,
    };
    first.checked_add(months.months()).ok()
}

#[cfg(test)]
mod tests {
    use super::*;
    use jiff::civil::date;

    #[test]
    fn months_quarters_and_years_follow_the_calendar() {
        let spec = PeriodSpec { start: date(2027, 11, 15), end: date(2028, 3, 10), every: Every::Month };
        let months = periods(&spec);
        assert_eq!(months.len(), 5);
        assert_eq!((months[0].end, months[0].end_days), (date(2027, 12, 1), 16.0));
        // 2028 is a leap year.
        assert_eq!(months[3].end_days - months[3].start_days, 29.0);
        assert_eq!(months[4].end, date(2028, 3, 10));
        let quarters = periods(&PeriodSpec { every: Every::Quarter, ..spec });
        assert_eq!(quarters.iter().map(|p| p.end).collect::<Vec<_>>(), vec![date(2028, 1, 1), date(2028, 3, 10)]);
        assert_eq!(periods(&PeriodSpec { every: Every::Year, ..spec }).len(), 2);
    }

    #[test]
    fn an_instant_belongs_to_the_day_that_holds_it() {
        assert_eq!(date_at(date(2027, 1, 1), 31.99), date(2027, 2, 1));
        assert_eq!(date_at(date(2027, 1, 1), 0.0), date(2027, 1, 1));
        assert_eq!(days_between(date(2028, 2, 1), date(2028, 3, 1)), 29.0);
    }
}
