//! Text out of files, made safe to show.

/// Replaces what could steer a terminal or mislead a reader.
///
/// Control characters, bidirectional overrides, zero-width characters and byte-order marks become
/// U+FFFD; newlines and tabs become a blank. Everything else stays as it is.
pub fn clean_text(text: &str) -> String {
    text.chars().map(clean_character).collect()
}

fn clean_character(character: char) -> char {
    match character {
        '\n' | '\r' | '\t' => ' ',
        _ if character.is_control() || is_invisible_or_reordering(character) => '\u{FFFD}',
        _ => character,
    }
}

/// Format characters without a width of their own: two texts that differ in them look the same, and
/// the bidirectional ones show text in another order than it has.
fn is_invisible_or_reordering(character: char) -> bool {
    matches!(character,
        '\u{00AD}' | '\u{034F}' | '\u{061C}' | '\u{180E}'
        | '\u{200B}'..='\u{200F}'
        | '\u{2028}'..='\u{202E}'
        | '\u{2060}'..='\u{206F}'
        | '\u{FE00}'..='\u{FE0F}'
        | '\u{FEFF}'
        | '\u{FFF9}'..='\u{FFFB}'
        | '\u{E0000}'..='\u{E0FFF}')
}

#[cfg(test)]
mod tests {
    use super::clean_text;

    #[test]
    fn ordinary_text_stays() {
        assert_eq!(
            clean_text("mW m-2 sr-1 (cm-1)-1, 15 µm, ν2, 東"),
            "mW m-2 sr-1 (cm-1)-1, 15 µm, ν2, 東"
        );
    }

    #[test]
    fn escape_sequences_lose_their_escape() {
        assert_eq!(clean_text("a\x1b[31mb\u{9b}2Jc\u{7f}"), "a\u{FFFD}[31mb\u{FFFD}2Jc\u{FFFD}");
    }

    #[test]
    fn line_ends_and_tabs_become_blanks() {
        assert_eq!(clean_text("a\tb\r\nc"), "a b  c");
    }

    #[test]
    fn reordering_and_zero_width_characters_are_replaced() {
        for character in ['\u{202E}', '\u{2066}', '\u{200B}', '\u{FEFF}', '\u{E0041}'] {
            assert_eq!(clean_text(&character.to_string()), "\u{FFFD}");
        }
    }
}
