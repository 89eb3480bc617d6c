//! A granule's shares, in words and in columns.

use super::{TrayRow, TrayShares};

/// The headings of the columns, each as wide as its column.
pub const HEADINGS: [&str; 4] = ["  flagged", "  no flag", "  not assessed", "  in doubt"];

/// The four shares in the order of the headings; one that is not known is empty.
pub fn columns(shares: &TrayShares) -> [String; 4] {
    [
        percent(shares.flagged),
        percent(shares.no_flag),
        percent(shares.not_assessed),
        shares.in_doubt.map(percent).unwrap_or_default(),
    ]
}

/// Four lines: the name of each share and its value.
pub fn lines(shares: &TrayShares) -> [(&'static str, String); 4] {
    let mut headings = HEADINGS.map(str::trim_start).into_iter();
    columns(shares).map(|value| (headings.next().unwrap_or_default(), value))
}

/// What there is room for beside a name: the number that is said instead, or the share in doubt.
pub fn mark(row: &TrayRow) -> String {
    if let Some(number) = row.note.split(' ').next().filter(|number| !number.is_empty()) {
        return number.to_owned();
    }
    let doubt = row.shares.and_then(|shares| shares.in_doubt);
    doubt.map_or(String::new(), |doubt| format!("?{}", percent(doubt)))
}

/// What is left to decide matters most, then what is flagged.
pub fn detail(row: &TrayRow, width: u16) -> String {
    if !row.note.is_empty() {
        return row.note.clone();
    }
    let Some(shares) = row.shares else { return row.state.words().to_string() };
    let doubt = shares.in_doubt.filter(|doubt| *doubt > 0.0);
    let mut parts = Vec::from_iter(doubt.map(|doubt| format!("{} in doubt", percent(doubt))));
    parts.push(format!("{} flagged", percent(shares.flagged)));
    parts.push(format!("{} not assessed", percent(shares.not_assessed)));
    parts.push(format!("{} no flag", percent(shares.no_flag)));
    let fits = |count: &usize| parts[..*count].join(", ").len() <= usize::from(width);
    let count = (1..=parts.len()).rev().find(fits).unwrap_or(1);
    parts[..count].join(", ")
}

/// A share in whole percent, of which 0% and 100% are exact.
fn percent(share: f64) -> String {
    let share = if share.is_nan() { 0.0 } else { 100.0 * share.clamp(0.0, 1.0) };
    if share > 0.0 && share < 1.0 {
        "<1%".to_string()
    } else if share > 99.0 && share < 100.0 {
        "99%".to_string()
    } else {
        format!("{share:.0}%")
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::panes::tray::TrayState;

    #[test]
    fn what_is_left_to_decide_comes_first() {
        let shares =
            TrayShares { flagged: 0.25, no_flag: 0.5, not_assessed: 0.25, in_doubt: Some(0.03) };
        let row = TrayRow {
            state: TrayState::InHand,
            name: String::new(),
            shares: Some(shares),
            note: String::new(),
        };
        assert_eq!(detail(&row, 30), "3% in doubt, 25% flagged");
        assert_eq!(mark(&row), "?3%");
        let row = TrayRow { note: "5 alike".to_string(), ..row };
        assert_eq!((detail(&row, 30), mark(&row)), ("5 alike".to_string(), "5".to_string()));
    }

    #[test]
    fn only_whole_shares_are_shown_as_whole() {
        assert_eq!(percent(0.0), "0%");
        assert_eq!(percent(0.0001), "<1%");
        assert_eq!(percent(0.9999), "99%");
        assert_eq!(percent(1.0), "100%");
    }
}
