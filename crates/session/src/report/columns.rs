//! Columns of text that stand under one another.

/// Lines of cells, padded to the widest of each column; the first column to the left, the others to the right.
pub(super) fn aligned(rows: &[Vec<String>]) -> String {
    let count = rows.iter().map(Vec::len).max().unwrap_or(0);
    let widths: Vec<usize> = (0..count)
        .map(|column| {
            let cells = rows.iter().filter_map(|row| row.get(column));
            cells.map(|cell| cell.chars().count()).max().unwrap_or(0)
        })
        .collect();
    let mut text = String::new();
    for row in rows {
        let mut line = String::new();
        for (column, (cell, &width)) in row.iter().zip(&widths).enumerate() {
            if column == 0 {
                line.push_str(&format!("{cell:<width$}"));
            } else {
                line.push_str(&format!("  {cell:>width$}"));
            }
        }
        text.push_str(line.trim_end());
        text.push('\n');
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_stand_under_one_another_and_count_characters_not_bytes() {
        let rows =
            [["a", "−1", "x"], ["long", "≥ 10", ""]].map(|row| row.map(str::to_owned).into());
        assert_eq!(aligned(&rows), "a       −1  x\nlong  ≥ 10\n");
    }
}
