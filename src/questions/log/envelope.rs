//! A long row of values as few columns, each with its least and greatest value, so that no extreme is lost.

/// Columns of a drawing at most; there are at least half as many once there were that many rows.
const MOST_COLUMNS: usize = 2000;

/// Some neighbouring rows.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Column {
    /// The first and the last row, counted from 1.
    pub(super) rows: (usize, usize),
    /// The first and the last time, s; nothing where no row has one.
    pub(super) times: Option<(f64, f64)>,
    /// The least and the greatest value; nothing where no row has one.
    pub(super) ends: Option<(f64, f64)>,
}

impl Column {
    fn joined(self, next: Column) -> Column {
        let times = match (self.times, next.times) {
            (Some((first, _)), Some((_, last))) => Some((first, last)),
            (one, other) => one.or(other),
        };
        let ends = match (self.ends, next.ends) {
            (Some((low, high)), Some((other_low, other_high))) => {
                Some((low.min(other_low), high.max(other_high)))
            }
            (one, other) => one.or(other),
        };
        Column { rows: (self.rows.0, next.rows.1), times, ends }
    }
}

/// Gathers rows into columns in one pass, though it is not known how many will come: when there are too many columns,
/// each two neighbours become one.
#[derive(Debug)]
pub(super) struct Envelope {
    columns: Vec<Column>,
    open: Option<Column>,
    rows_a_column: usize,
}

impl Envelope {
    pub(super) fn new() -> Envelope {
        Envelope { columns: Vec::with_capacity(MOST_COLUMNS), open: None, rows_a_column: 1 }
    }

    /// Takes the next row, whether it has a value or not.
    pub(super) fn add(&mut self, row: usize, time_s: Option<f64>, value: Option<f64>) {
        let own = Column {
            rows: (row, row),
            times: time_s.map(|time| (time, time)),
            ends: value.map(|value| (value, value)),
        };
        let column = self.open.take().map_or(own, |open| open.joined(own));
        if column.rows.1 - column.rows.0 + 1 < self.rows_a_column {
            self.open = Some(column);
            return;
        }
        self.columns.push(column);
        if self.columns.len() == MOST_COLUMNS {
            self.rows_a_column *= 2;
            let join = |pair: &[Column]| pair.iter().copied().reduce(Column::joined);
            self.columns = self.columns.chunks(2).filter_map(join).collect();
        }
    }

    /// The columns, the last of which may hold fewer rows.
    pub(super) fn columns(mut self) -> Vec<Column> {
        self.columns.extend(self.open);
        self.columns
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Expected: the values that were put in, by the definition of least and greatest.
    #[test]
    fn no_extreme_is_lost_and_the_rows_are_parted_evenly() {
        for rows in [1, 2, 1999, 2000, 2001, 3999, 100_003] {
            let mut envelope = Envelope::new();
            let value = |row: usize| ((row * 7919) % 10_007) as f64;
            for row in 1..=rows {
                envelope.add(row, Some(row as f64), Some(value(row)).filter(|_| row % 5 != 0));
            }
            let columns = envelope.columns();
            assert!(
                columns.len() <= MOST_COLUMNS && (rows < 2000 || columns.len() >= MOST_COLUMNS / 2),
                "{rows}"
            );
            let mut next = 1;
            for column in columns {
                assert_eq!(column.rows.0, next, "{rows}");
                next = column.rows.1 + 1;
                let own = (column.rows.0..=column.rows.1).filter(|row| row % 5 != 0).map(value);
                let ends = own.fold(None, |ends: Option<(f64, f64)>, value| {
                    Some(ends.map_or((value, value), |(low, high)| (low.min(value), high.max(value))))
                });
                assert_eq!(column.ends, ends, "{rows}");
            }
            assert_eq!(next, rows + 1);
        }
    }
}
