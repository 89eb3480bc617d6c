//! Time coordinates: "seconds since …", with the calendars that can be told in real time.

use jiff::Timestamp;
use jiff::civil::DateTime;
use jiff::tz::Offset;

/// How a time coordinate counts.
#[derive(Debug, Clone, PartialEq)]
pub struct TimeUnit {
    seconds_per_unit: f64,
    /// The epoch in seconds since 1970, leap seconds not counted.
    epoch: f64,
    scale: TimeScale,
}

/// Which seconds are counted.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum TimeScale {
    /// Days of 86400 seconds: leap seconds are not counted.
    Civil,
    /// Elapsed seconds from an epoch that is given in UTC.
    ElapsedSinceUtc,
    /// Elapsed seconds from an epoch that is given in TAI.
    Tai,
}

/// The days (year, month) on whose first a new difference TAI - UTC began, in s.
/// Source: IERS Bulletin C; no leap second has followed that of the end of 2016.
const LEAP_SECONDS: [(i16, i8, f64); 28] = [
    (1972, 1, 10.0),
    (1972, 7, 11.0),
    (1973, 1, 12.0),
    (1974, 1, 13.0),
    (1975, 1, 14.0),
    (1976, 1, 15.0),
    (1977, 1, 16.0),
    (1978, 1, 17.0),
    (1979, 1, 18.0),
    (1980, 1, 19.0),
    (1981, 7, 20.0),
    (1982, 7, 21.0),
    (1983, 7, 22.0),
    (1985, 7, 23.0),
    (1988, 1, 24.0),
    (1990, 1, 25.0),
    (1991, 1, 26.0),
    (1992, 7, 27.0),
    (1993, 7, 28.0),
    (1994, 7, 29.0),
    (1996, 1, 30.0),
    (1997, 7, 31.0),
    (1999, 1, 32.0),
    (2006, 1, 33.0),
    (2009, 1, 34.0),
    (2012, 7, 35.0),
    (2015, 7, 36.0),
    (2017, 1, 37.0),
];

/// 1972-01-01 in seconds since 1970.
const FIRST_LEAP: f64 = 63_072_000.0;

impl TimeUnit {
    /// Reads a unit such as `seconds since 2000-01-01 00:00:00`, with its calendar. `says_tai` tells
    /// whether the file speaks of TAI anywhere else.
    ///
    /// # Errors
    /// In words: no such unit, or a calendar whose days are not real ones.
    pub fn parse(units: &str, calendar: Option<&str>, says_tai: bool) -> Result<Self, String> {
        let lower = units.to_lowercase();
        let (unit, epoch) = lower.split_once(" since ").ok_or_else(|| {
            format!("unit {units:?} is not of the form `seconds since 2000-01-01`")
        })?;
        let seconds_per_unit = match unit.trim() {
            "s" | "sec" | "secs" | "second" | "seconds" => 1.0,
            "ms" | "msec" | "msecs" | "millisecond" | "milliseconds" => 1e-3,
            "us" | "microsecond" | "microseconds" => 1e-6,
            "min" | "mins" | "minute" | "minutes" => 60.0,
            "h" | "hr" | "hrs" | "hour" | "hours" => 3600.0,
            "d" | "day" | "days" => 86_400.0,
            other => {
                return Err(format!(
                    "{other:?} is no unit of time that can be counted from an epoch"
                ));
            }
        };
        let scale = match calendar.map(str::to_lowercase).as_deref() {
            Some("tai") => TimeScale::Tai,
            Some("utc") => TimeScale::ElapsedSinceUtc,
            // Before there were leap seconds an epoch of TAI can only be one in TAI.
            _ if says_tai_at(&lower, says_tai) && epoch_seconds(epoch) < Some(FIRST_LEAP) => {
                TimeScale::Tai
            }
            _ if says_tai_at(&lower, says_tai) => TimeScale::ElapsedSinceUtc,
            None | Some("standard" | "gregorian" | "proleptic_gregorian" | "") => TimeScale::Civil,
            Some(other) => return Err(format!("calendar {other:?} does not count real days")),
        };
        let epoch = epoch_seconds(epoch).ok_or_else(|| format!("{epoch:?} is no date"))?;
        Ok(Self { seconds_per_unit, epoch, scale })
    }

    /// Seconds since 1970-01-01T00:00:00Z, leap seconds not counted, of a value in this unit.
    pub fn to_unix(&self, value: f64) -> f64 {
        let plain = self.epoch + value * self.seconds_per_unit;
        match self.scale {
            TimeScale::Civil => plain,
            TimeScale::ElapsedSinceUtc => utc_of_tai(plain + tai_minus_utc(self.epoch)),
            TimeScale::Tai => utc_of_tai(plain),
        }
    }

    /// Which seconds are counted.
    pub fn scale(&self) -> TimeScale {
        self.scale
    }
}

fn says_tai_at(unit: &str, elsewhere: bool) -> bool {
    elsewhere || unit.contains("tai")
}

fn tai_minus_utc(unix: f64) -> f64 {
    let began = |&&(year, month, _): &&(i16, i8, f64)| month_start(year, month) <= unix;
    LEAP_SECONDS.iter().rev().find(began).map_or(10.0, |&(.., seconds)| seconds)
}

fn utc_of_tai(tai: f64) -> f64 {
    let began =
        |&&(year, month, seconds): &&(i16, i8, f64)| month_start(year, month) + seconds <= tai;
    tai - LEAP_SECONDS.iter().rev().find(began).map_or(10.0, |&(.., seconds)| seconds)
}

fn month_start(year: i16, month: i8) -> f64 {
    unix_of(jiff::civil::date(year, month, 1).to_datetime(jiff::civil::Time::midnight()))
}

fn unix_of(time: DateTime) -> f64 {
    // A civil time of jiff always lies in the range of its time stamps for UTC.
    Offset::UTC.to_timestamp(time).map_or(f64::NAN, |stamp: Timestamp| stamp.as_second() as f64)
}

/// An epoch as files write it: date, perhaps a time, perhaps a zone; one-digit months are met.
fn epoch_seconds(text: &str) -> Option<f64> {
    let text = with_blank_for_t(text);
    let mut words = text.split_whitespace();
    let mut date = words.next()?.split('-');
    let year: i16 = date.next()?.parse().ok()?;
    let month: i8 = date.next()?.parse().ok()?;
    let day: i8 = date.next()?.parse().ok()?;
    let date = jiff::civil::Date::new(year, month, day).ok().filter(|_| date.next().is_none())?;
    let mut seconds = unix_of(date.to_datetime(jiff::civil::Time::midnight()));
    for word in words {
        let word = word.trim_end_matches('z');
        if word.is_empty() || ["utc", "gmt", "tai"].contains(&word) {
            continue;
        }
        seconds += match word.strip_prefix(['+', '-']) {
            Some(offset) => zone(offset)? * if word.starts_with('-') { 1.0 } else { -1.0 },
            None => clock(word)?,
        };
    }
    Some(seconds)
}

/// `2000-01-01t00:00` with a blank between date and time.
fn with_blank_for_t(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    let mut characters = text.trim().chars().peekable();
    while let Some(character) = characters.next() {
        let before = out.chars().next_back().is_some_and(|last| last.is_ascii_digit());
        let behind = characters.peek().is_some_and(char::is_ascii_digit);
        out.push(if character == 't' && before && behind { ' ' } else { character });
    }
    out
}

/// `01:30`, `0130` or `1` east of Greenwich in seconds.
fn zone(text: &str) -> Option<f64> {
    let digits = text.len() == 4 && text.bytes().all(|byte| byte.is_ascii_digit());
    match digits {
        true => clock(&format!("{}:{}", &text[..2], &text[2..])),
        false => clock(text),
    }
}

/// `12:30:15.5` or a part of it in seconds.
fn clock(text: &str) -> Option<f64> {
    let mut total = 0.0;
    let mut worth = 3600.0;
    for part in text.split(':') {
        let value: f64 = part.parse().ok()?;
        let most = if worth > 60.0 { 24.0 } else { 60.0 };
        if !(0.0..=most).contains(&value) || worth < 1.0 {
            return None;
        }
        total += value * worth;
        worth /= 60.0;
    }
    Some(total)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn unix(units: &str, calendar: Option<&str>, value: f64) -> f64 {
        TimeUnit::parse(units, calendar, false).unwrap().to_unix(value)
    }

    #[test]
    fn epochs_are_read_as_files_write_them() {
        // Source: 2000-01-01T00:00:00Z is 946684800 in every Unix time table.
        for epoch in [
            "2000-01-01",
            "2000-1-1 00:00:00",
            "2000-01-01T00:00:00Z",
            "2000-01-01 00:00:00.0 UTC",
            "2000-01-01 01:00 +01:00",
        ] {
            assert_eq!(
                unix(&format!("seconds since {epoch}"), None, 5.0),
                946_684_805.0,
                "{epoch}"
            );
        }
        assert_eq!(unix("days since 1970-01-01", Some("standard"), 1.5), 129_600.0);
    }

    #[test]
    fn elapsed_seconds_lose_the_leap_seconds_since_their_epoch() {
        // Between 1993-01-01 (TAI - UTC = 27 s) and 2020-01-01 (37 s) lie 10 leap seconds.
        let start = unix("seconds since 2020-01-01", None, 0.0);
        let elapsed = start - unix("seconds since 1993-01-01", None, 0.0) + 10.0;
        let unit = TimeUnit::parse("seconds since 1993-01-01", None, true).unwrap();
        assert_eq!(unit.scale(), TimeScale::ElapsedSinceUtc);
        assert_eq!(unit.to_unix(elapsed), start);
        // The same count from a TAI epoch begins 27 s earlier.
        assert_eq!(unix("seconds since 1993-01-01", Some("tai"), elapsed + 27.0), start);
    }

    #[test]
    fn zones_are_read_with_and_without_a_colon() {
        let noon = unix("seconds since 1970-01-02 12:00:00", None, 0.0);
        for zone in ["+01:00", "+0100", "+1", "+01"] {
            let units = format!("seconds since 1970-01-02 12:00:00 {zone}");
            assert_eq!(unix(&units, None, 0.0), noon - 3600.0, "{zone}");
        }
        assert_eq!(unix("seconds since 1970-01-02 12:00 -0330", None, 0.0), noon + 12_600.0);
    }

    #[test]
    fn counts_of_tai_agree_with_a_general_purpose_library() {
        // Source: astropy 8.0.2, differences of Time in scale utc and tai, for 2006-01-01 and
        // 2020-06-01: seconds since 1970, since 1993-01-01 UTC, since 1958-01-01 TAI.
        for (seconds, since_1993, since_1958) in [
            (1_136_073_600.0, 410_227_206.0, 1_514_764_833.0),
            (1_590_969_600.0, 865_123_210.0, 1_969_660_837.0),
        ] {
            let tai = |units: &str, value: f64| {
                TimeUnit::parse(units, None, true).unwrap().to_unix(value)
            };
            assert_eq!(tai("seconds since 1993-01-01", since_1993), seconds);
            assert_eq!(tai("seconds since 1958-01-01", since_1958), seconds);
            let in_unit = unix("seconds since 1958-01-01 00:00:00 TAI", None, since_1958);
            assert_eq!(in_unit, seconds);
        }
    }

    #[test]
    fn senseless_units_and_calendars_are_refused() {
        for (units, calendar) in [
            ("seconds", None),
            ("months since 2000-01-01", None),
            ("seconds since yesterday", None),
            ("seconds since 2000-13-01", None),
            ("seconds since 2000-01-01 25:61:61", None),
            ("seconds since 2000-01-01 60:00", None),
            ("seconds since 2000-01-01 00:00 +9900", None),
            ("days since 2000-01-01", Some("360_day")),
            ("days since 2000-01-01", Some("noleap")),
        ] {
            assert!(TimeUnit::parse(units, calendar, false).is_err(), "{units} {calendar:?}");
        }
    }
}
