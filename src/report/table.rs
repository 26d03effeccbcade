//! Plain columns for lists: a head, a rule, rows; and labelled lines.

use super::cleaning;
use super::page::{Column, GAP, Page, Paint, widest};

/// The least width of a column that wraps.
const LEAST: usize = 12;

/// A table whose last column takes what the others leave and wraps.
pub(super) fn columns(head: &[&str], rows: Vec<Vec<String>>, width: usize) -> String {
    let rows: Vec<Vec<String>> =
        rows.into_iter().map(|row| row.iter().map(|cell| cleaning::text(cell)).collect()).collect();
    let last = head.len().saturating_sub(1);
    let mut columns: Vec<Column> = (0..last)
        .map(|at| {
            let cells = rows.iter().map(|row| row[at].as_str()).chain([head[at]]);
            // A column of long texts leaves room for the others.
            Column { width: widest(cells).min(width / 3), right: false }
        })
        .collect();
    let taken: usize = columns.iter().map(|column| column.width + GAP).sum();
    columns.push(Column { width: width.saturating_sub(taken).max(LEAST), right: false });
    let mut page = Page::new(width, false);
    page.table_head(&columns, head, "", Paint::Strong);
    for row in &rows {
        let cells: Vec<&str> = row.iter().map(String::as_str).collect();
        page.row(&columns, &cells);
    }
    page.finish()
}

/// Lines of a label and a text, the text wrapped beside the label.
pub(super) fn labelled(lines: Vec<Vec<String>>, width: usize) -> String {
    let mut page = Page::new(width, false);
    for line in lines {
        if let [label, text] = line.as_slice() {
            page.labelled(label, &cleaning::text(text), None);
        }
    }
    page.finish()
}
