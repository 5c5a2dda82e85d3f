//! Tables read back from comma-separated text as `csv` writes it.

/// A table: its header and its rows, all as text.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Table {
    /// Names of the columns.
    pub header: Vec<String>,
    /// Rows; each has as many cells as the header.
    pub rows: Vec<Vec<String>>,
}

impl Table {
    /// Reads a table; cells may be quoted.
    ///
    /// # Errors
    /// The number of a row whose cells are not as many as the header's.
    pub fn parse(text: &str) -> Result<Table, usize> {
        let mut rows = rows(text);
        if rows.is_empty() {
            return Ok(Table::default());
        }
        let header = rows.remove(0);
        match rows.iter().position(|row| row.len() != header.len()) {
            Some(n) => Err(n + 2),
            None => Ok(Table { header, rows }),
        }
    }

    /// Position of a column.
    pub fn column(&self, name: &str) -> Option<usize> {
        self.header.iter().position(|h| h == name)
    }

    /// A column's numbers; `None` where there is none.
    pub fn numbers(&self, name: &str) -> Vec<Option<f64>> {
        let column = self.column(name);
        let number = |row: &Vec<String>| row.get(column?)?.parse::<f64>().ok();
        self.rows.iter().map(number).map(|v| v.filter(|v| v.is_finite())).collect()
    }
}

fn rows(text: &str) -> Vec<Vec<String>> {
    let (mut rows, mut row, mut cell) = (Vec::new(), Vec::new(), String::new());
    let mut quoted = false;
    let mut letters = text.chars().peekable();
    while let Some(c) = letters.next() {
        match c {
            '"' if quoted && letters.peek() == Some(&'"') => {
                letters.next();
                cell.push('"');
            }
            '"' => quoted = !quoted,
            ',' if !quoted => row.push(std::mem::take(&mut cell)),
            '\n' if !quoted => {
                row.push(std::mem::take(&mut cell));
                rows.push(std::mem::take(&mut row));
            }
            '\r' if !quoted => {}
            c => cell.push(c),
        }
    }
    if !cell.is_empty() || !row.is_empty() {
        row.push(cell);
        rows.push(row);
    }
    rows
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    #[test]
    fn quoted_cells_and_missing_numbers_come_back() {
        let table = Table::parse("name,a\n\"x, \"\"y\"\"\",1.5\nz,\n").unwrap();
        assert_eq!(table.rows[0][0], "x, \"y\"");
        assert_eq!(table.numbers("a"), [Some(1.5), None]);
        assert_eq!(table.numbers("b"), [None, None]);
        assert_eq!(Table::parse("a,b\n1,2\n3\n"), Err(3));
        assert_eq!(Table::parse("").unwrap(), Table::default());
    }
}
