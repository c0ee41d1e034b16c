//! Prose in lines of a width.

/// Words in lines no longer than `width`: the first starts at column `start`, others are
/// indented.
pub fn wrapped(words: &str, start: usize, indent: usize, width: usize) -> String {
    let mut text = String::new();
    let mut at = start;
    for word in words.split_whitespace() {
        let length = word.chars().count();
        if !text.is_empty() && at + 1 + length > width {
            text.push('\n');
            text.extend(std::iter::repeat_n(' ', indent));
            at = indent;
        } else if !text.is_empty() {
            text.push(' ');
            at += 1;
        }
        text += word;
        at += length;
    }
    text
}
