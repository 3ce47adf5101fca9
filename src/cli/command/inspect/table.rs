//! Columns of text that line up.

/// The widest line of a page.
pub const PAGE_WIDTH: usize = 100;

/// Lines of a table: the first column to the left, the others to the right unless `left` names them.
pub fn lines(head: &[&str], rows: &[Vec<String>], left: &[usize]) -> Vec<String> {
    let width = |column: usize| {
        let cells = rows.iter().map(|row| row[column].chars().count());
        cells.chain([head[column].chars().count()]).max().unwrap_or(0)
    };
    let widths: Vec<usize> = (0..head.len()).map(width).collect();
    let head: Vec<String> = head.iter().map(|word| word.to_string()).collect();
    let line = |row: &Vec<String>| {
        let cells = row.iter().enumerate().map(|(column, cell)| {
            let width = widths[column];
            if column == 0 || left.contains(&column) {
                format!("{cell:<width$}")
            } else {
                format!("{cell:>width$}")
            }
        });
        format!("  {}", cells.collect::<Vec<_>>().join("  ")).trim_end().to_string()
    };
    std::iter::once(&head).chain(rows).map(line).collect()
}

/// A name cut to `most` characters; its end is kept, where the letter of a planet stands.
pub fn short(name: &str, most: usize) -> String {
    let count = name.chars().count();
    if count <= most {
        return name.to_string();
    }
    std::iter::once('…').chain(name.chars().skip(count - most + 1)).collect()
}

/// A number with so many significant digits; far from 1 with an exponent.
pub fn significant(value: f64, digits: usize) -> String {
    if value == 0.0 || !value.is_finite() {
        return format!("{value}");
    }
    let decade = value.abs().log10().floor();
    if (-4.0..7.0).contains(&decade) {
        let decimals = (digits as f64 - 1.0 - decade).max(0.0) as usize;
        format!("{value:.decimals$}")
    } else {
        format!("{value:.*e}", digits - 1)
    }
}

/// Words after a lead, broken into lines of the page; later lines are set in to the width of the lead.
pub fn wrapped(lead: &str, words: &str) -> String {
    let indent = lead.chars().count();
    let mut text = lead.to_string();
    let mut column = indent;
    for word in words.split_whitespace() {
        let size = word.chars().count();
        if column > indent && column + 1 + size > PAGE_WIDTH {
            text.push('\n');
            text.push_str(&" ".repeat(indent));
            column = indent;
        } else if column > indent {
            text.push(' ');
            column += 1;
        }
        text.push_str(word);
        column += size;
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_keep_their_digits() {
        assert_eq!(significant(226.93, 6), "226.930");
        assert_eq!(significant(0.0972341, 4), "0.09723");
        assert_eq!(significant(1.5e-9, 3), "1.50e-9");
        assert_eq!(significant(123456.7, 4), "123457");
        assert_eq!(significant(0.0, 4), "0");
    }

    #[test]
    fn long_names_keep_their_letter() {
        assert_eq!(short("Kepler-11 b", 12), "Kepler-11 b");
        assert_eq!(short("OGLE-2006-BLG-109L c", 12).chars().count(), 12);
        assert!(short("OGLE-2006-BLG-109L c", 12).ends_with("L c"));
    }

    #[test]
    fn wrapping_stays_on_the_page_and_loses_no_word() {
        let text = "word ".repeat(60);
        let wrapped = wrapped("  lead  ", &text);
        assert!(wrapped.lines().all(|line| line.chars().count() <= PAGE_WIDTH));
        assert_eq!(wrapped.split_whitespace().count(), 61);
        assert!(wrapped.lines().skip(1).all(|line| line.starts_with("        word")));
    }

    #[test]
    fn columns_line_up() {
        let rows =
            vec![vec!["b".to_string(), "1.5".to_string()], vec!["long".to_string(), "12.25".to_string()]];
        assert_eq!(
            lines(&["name", "value"], &rows, &[]),
            ["  name  value", "  b       1.5", "  long  12.25"]
        );
    }
}
