//! The name that was probably meant.

use strsim::damerau_levenshtein;

/// The nearest of `names` to `found`: at most one edit for every three characters, case aside. The first of equals.
pub(super) fn nearest<'n>(found: &str, names: impl IntoIterator<Item = &'n str>) -> Option<&'n str> {
    let found = found.to_lowercase();
    let allowed = (found.chars().count() / 3).max(1);
    names
        .into_iter()
        .map(|name| (damerau_levenshtein(&found, &name.to_lowercase()), name))
        .filter(|&(edits, name)| edits <= allowed && edits < name.chars().count())
        .min_by_key(|&(edits, _)| edits)
        .map(|(_, name)| name)
}

/// Names in backticks with commas between them, at most twelve.
pub(super) fn list<'n>(names: impl IntoIterator<Item = &'n str>) -> String {
    let names: Vec<&str> = names.into_iter().collect();
    let shown: Vec<String> = names.iter().take(LISTED).map(|name| format!("`{name}`")).collect();
    match names.len().saturating_sub(LISTED) {
        0 => shown.join(", "),
        more => format!("{} and {more} more", shown.join(", ")),
    }
}

const LISTED: usize = 12;

#[cfg(test)]
mod tests {
    use super::{list, nearest};

    #[test]
    fn two_swapped_letters_are_one_edit() {
        assert_eq!(nearest("centre", ["force_constant", "center", "kind"]), Some("center"));
    }

    #[test]
    fn case_does_not_count() {
        assert_eq!(nearest("NEWTON", ["l-bfgs", "newton"]), Some("newton"));
    }

    #[test]
    fn nothing_is_suggested_for_a_word_that_is_unlike_all() {
        assert_eq!(nearest("restraint", ["harmonic", "linear", "none"]), None);
    }

    #[test]
    fn a_name_of_one_letter_is_not_suggested_for_another() {
        assert_eq!(nearest("y", ["x"]), None);
    }

    #[test]
    fn a_long_list_is_cut_at_twelve() {
        let names: Vec<String> = (0..15).map(|i| format!("w{i}")).collect();
        let shown = list(names.iter().map(String::as_str));
        assert!(shown.ends_with("`w11` and 3 more"), "{shown}");
    }
}
