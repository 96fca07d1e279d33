//! The beginning of some text from a file, fit to stand in a message.

/// Characters shown of a field or a line.
const SHOWN: usize = 40;

/// Up to 40 characters; a longer text ends in `…`, control characters are written as escapes, invalid bytes as `�`.
pub(crate) fn excerpt(text: &[u8]) -> String {
    // Four bytes a character at most, so the cut never costs a character that would be shown.
    let head = text.get(..4 * (SHOWN + 1)).unwrap_or(text);
    let head = String::from_utf8_lossy(head);
    let mut shown = String::new();
    for (index, character) in head.trim_end_matches(['\r', ' ', '\t']).chars().enumerate() {
        if index == SHOWN {
            shown.push('…');
            break;
        }
        if character.is_control() {
            shown.extend(character.escape_default());
        } else {
            shown.push(character);
        }
    }
    shown
}

#[cfg(test)]
mod tests {
    use super::excerpt;

    #[test]
    fn control_characters_become_escapes() {
        assert_eq!(excerpt(b"a\x1b[31mb\tc"), "a\\u{1b}[31mb\\tc");
    }

    #[test]
    fn the_forty_first_character_is_replaced_by_an_ellipsis() {
        let exact = "å".repeat(40);
        assert_eq!(excerpt(exact.as_bytes()), exact);
        assert_eq!(excerpt(format!("{exact}b").as_bytes()), format!("{exact}…"));
    }
}
