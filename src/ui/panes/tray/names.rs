//! Names of granules in little room.

use unicode_width::UnicodeWidthStr;

use super::TrayRow;
use crate::ui::widgets::cut_front;

/// A name that is too long loses its extension, then the words that all names begin with, then its
/// beginning: the names of one day's granules begin alike.
pub fn abbreviated(name: &str, common: usize, width: usize, ascii: bool) -> String {
    if name.width() <= width {
        return name.to_string();
    }
    let stem = match name.rsplit_once('.') {
        Some((stem, _)) if !stem.is_empty() => stem,
        _ => name,
    };
    match stem.get(common..) {
        Some(rest) if common > 0 && stem.width() > width && rest.width() < width => {
            format!("{}{rest}", if ascii { '~' } else { '…' })
        }
        _ => cut_front(stem, width, ascii),
    }
}

/// The length in bytes of the whole words that all names begin with; 0 for a single name.
pub fn common_words(rows: &[TrayRow]) -> usize {
    let [first, others @ ..] = rows else { return 0 };
    let same = |name: &str| {
        let pairs = first.name.char_indices().zip(name.chars());
        let differs = pairs.clone().find(|((_, one), other)| one != other);
        differs.map_or(first.name.len().min(name.len()), |((at, _), _)| at)
    };
    let shortest = others.iter().map(|row| same(&row.name)).min().unwrap_or(0);
    let alike = first.name.get(..shortest).unwrap_or_default();
    alike.rfind(['_', '-', '.', '/']).map_or(0, |at| at + 1)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::panes::tray::TrayState;

    #[test]
    fn long_names_lose_the_words_that_all_begin_with() {
        let row = |name: &str| TrayRow {
            state: TrayState::Untouched,
            name: name.to_string(),
            shares: None,
            note: String::new(),
        };
        let rows = ["brindle_lowen_001.nc", "brindle_lowen_evening.nc"].map(row);
        let common = common_words(&rows);
        let short = |width| rows.each_ref().map(|row| abbreviated(&row.name, common, width, false));
        assert_eq!(short(12), ["…001", "…evening"]);
        assert_eq!(short(24), ["brindle_lowen_001.nc", "brindle_lowen_evening.nc"]);
        assert_eq!(common_words(&rows[..1]), 0);
    }
}
