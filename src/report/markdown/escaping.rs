//! Text that Markdown shows as it stands: nothing in it becomes a link, a tag, an emphasis or a column.

/// Text within a paragraph or a list. What stands between single backticks becomes code; where backticks do not pair
/// one to one they are shown as such.
pub(super) fn inline(text: &str) -> String {
    escaped(text, false)
}

/// Text within a table's cell.
pub(super) fn cell(text: &str) -> String {
    escaped(text, true)
}

/// A block of code, fenced by more backticks than it holds in a row.
pub(super) fn block(kind: &str, text: &str) -> String {
    let longest = text.split(|c| c != '`').map(str::len).max().unwrap_or(0);
    let fence = "`".repeat(longest.max(2) + 1);
    format!("{fence}{kind}\n{text}\n{fence}\n")
}

fn escaped(text: &str, in_table: bool) -> String {
    let pairs = !text.contains("``") && text.matches('`').count().is_multiple_of(2);
    let mut out = String::with_capacity(text.len());
    let mut in_code = false;
    let begins_block = if in_table { None } else { beginning_of_block(text) };
    for (place, c) in text.char_indices() {
        let next = text[place + c.len_utf8()..].chars().next().unwrap_or(' ');
        let obeyed = match c {
            '`' if pairs => {
                in_code = !in_code;
                false
            }
            '|' => in_table,
            _ if in_code => false,
            '\\' | '`' | '*' | '_' | '[' | ']' | '~' | '$' => true,
            // Alone they are signs; before these they begin a tag or an entity.
            '<' => next.is_ascii_alphabetic() || matches!(next, '/' | '!' | '?'),
            '&' => next.is_ascii_alphabetic() || next == '#',
            _ => begins_block == Some(place),
        };
        if obeyed {
            out.push('\\');
        }
        out.push(c);
    }
    out
}

/// The place of the sign by which a paragraph would become a heading, a list or a quotation.
fn beginning_of_block(text: &str) -> Option<usize> {
    let digits = text.bytes().take_while(u8::is_ascii_digit).count();
    let mut after = text[digits..].chars();
    let (sign, blank_follows) = (after.next()?, after.next().is_none_or(|c| matches!(c, ' ' | '#')));
    match sign {
        '>' if digits == 0 => Some(0),
        '#' | '-' | '+' if digits == 0 && blank_follows => Some(0),
        '.' | ')' if digits > 0 && blank_follows => Some(digits),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::{block, cell, inline};

    #[test]
    fn signs_that_markdown_obeys_are_escaped_and_no_others() {
        assert_eq!(inline("<b>*x*</b> [a](b) a_b | #1"), "\\<b>\\*x\\*\\</b> \\[a\\](b) a\\_b | #1");
        assert_eq!(inline("< 0.1 & more, &amp; 5 > 3"), "< 0.1 & more, \\&amp; 5 > 3");
        assert_eq!(cell("a | b `c|d`"), "a \\| b `c\\|d`");
    }

    #[test]
    fn no_paragraph_becomes_a_block_of_another_kind() {
        assert_eq!(inline("# a"), "\\# a");
        assert_eq!(inline("> a"), "\\> a");
        assert_eq!(inline("- a-b"), "\\- a-b");
        assert_eq!(inline("12. a"), "12\\. a");
        for plain in ["1 number", "0.5 nm", "+0.3", "#1"] {
            assert_eq!(inline(plain), plain);
        }
    }

    #[test]
    fn code_keeps_its_text_only_where_backticks_pair_one_to_one() {
        assert_eq!(inline("`a_b` and c_d"), "`a_b` and c\\_d");
        assert_eq!(inline("a ` b `c_d`"), "a \\` b \\`c\\_d\\`");
        // Three backticks do not close one: read as code, the tag would be live.
        assert_eq!(inline("`<b>```"), "\\`\\<b>\\`\\`\\`");
    }

    #[test]
    fn a_block_is_fenced_by_more_backticks_than_it_holds() {
        assert_eq!(block("text", "a ``` b"), "````text\na ``` b\n````\n");
    }
}
