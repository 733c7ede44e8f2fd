//! What a name looks like on paper, so that two names that a reader cannot tell apart are found.
//!
//! Canonical composition (Unicode Standard Annex 15), letters of the Cyrillic and Greek alphabets that are
//! drawn like Latin ones (a selection of Unicode Technical Standard 39), and spaces of any width as one.

use unicode_normalization::UnicodeNormalization;

/// Letters of other alphabets, each before the Latin letter that it is drawn like.
const TWINS: &str = "\
АAВBЕEЅSІIЈJКKМMНHОOРPСCТTУYХXаaеeоoрpсcуyхxѕsіiјjһhԁdԛqԝw\
ΑAΒBΕEΖZΗHΙIΚKΜMΝNΟOΡPΤTΥYΧXοoνvϲc";

/// The name with everything made alike that looks alike.
pub(super) fn look_of(name: &str) -> String {
    let shown: String = name.nfc().filter(|c| !is_unseen(*c)).map(drawn).collect();
    let words: Vec<&str> = shown.split_whitespace().collect();
    words.join(" ")
}

/// Characters without width: joiners, marks of direction, the soft hyphen.
const fn is_unseen(c: char) -> bool {
    matches!(
        c,
        '\u{ad}' | '\u{200b}'..='\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2060}'..='\u{2064}'
            | '\u{2066}'..='\u{2069}'
    )
}

/// The Latin letter, digit or hyphen that a character is drawn like; itself where there is none.
fn drawn(c: char) -> char {
    match c {
        '\u{ff01}'..='\u{ff5e}' => char::from_u32(u32::from(c) - 0xfee0).unwrap_or(c),
        '\u{2010}' | '\u{2011}' => '-',
        _ => {
            let mut pairs = TWINS.chars();
            while let (Some(other), Some(latin)) = (pairs.next(), pairs.next()) {
                if other == c {
                    return latin;
                }
            }
            c
        }
    }
}

#[cfg(test)]
mod tests {
    use super::look_of;

    #[test]
    fn names_that_look_alike_have_one_look() {
        #[rustfmt::skip]
        let rows = [
            ("A1",       "\u{410}1",      true),
            ("é",        "e\u{301}",      true),
            ("L 1",      "L\u{a0}1",      true),
            ("L1",       "L\u{200b}1",    true),
            ("L1",       "Ｌ１",           true),
            ("x-y",      "x\u{2011}y",    true),
            ("A1",       "a1",            false),
            ("L1",       "L 1",           false),
            ("m2",       "m²",            false),
            ("e",        "é",             false),
        ];
        for (one, other, alike) in rows {
            assert_eq!(look_of(one) == look_of(other), alike, "{one} {other}");
        }
    }
}
