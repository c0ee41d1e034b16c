//! Exact elimination, against plain checks of what its results mean.

use lyate::problem::elimination::{
    Solution, SparseRow, dependence, express, independent_rows, null_space, rank, solve,
};
use num_bigint::BigInt;
use num_rational::{BigRational, Rational64};
use proptest::prelude::*;

type Row = Vec<(usize, Rational64)>;

fn r(n: i64) -> Rational64 {
    Rational64::from(n)
}

fn row(entries: &[i64]) -> Row {
    entries.iter().enumerate().filter(|(_, n)| **n != 0).map(|(c, n)| (c, r(*n))).collect()
}

fn slices(rows: &[Row]) -> Vec<SparseRow<'_>> {
    rows.iter().map(Vec::as_slice).collect()
}

#[test]
fn solves_a_small_system() {
    let rows = [row(&[1, 1]), row(&[1, -1])];
    assert_eq!(solve(&slices(&rows), &[r(3), r(1)], 2), Ok(Solution::Unique(vec![r(2), r(1)])));
    let rows = [row(&[1, 1]), row(&[2, 2])];
    assert_eq!(solve(&slices(&rows), &[r(3), r(1)], 2), Ok(Solution::None { equation: 1 }));
    assert_eq!(
        solve(&slices(&rows), &[r(3), r(6)], 2),
        Ok(Solution::Many { particular: vec![r(3), r(0)], free: vec![1] })
    );
    assert_eq!(solve(&[], &[], 0), Ok(Solution::Unique(vec![])));
}

#[test]
fn names_the_row_that_depends_and_on_what() {
    let rows = [row(&[1, 2, 0]), row(&[0, 1, 1]), row(&[2, 7, 3]), row(&[0, 0, 5])];
    let (index, combination) = dependence(&slices(&rows)).unwrap().unwrap();
    assert_eq!((index, combination), (2, vec![(0, r(2)), (1, r(3))]));
    assert_eq!(independent_rows(&slices(&rows)), [0, 1, 3]);
    assert_eq!(dependence(&slices(&rows[..2])), Ok(None));
    assert_eq!(dependence(&[&[]]), Ok(Some((0, vec![]))), "a row of zeros depends on nothing");
}

/// Hilbert-like rows whose elimination needs far more than 64 bits on the way.
#[test]
fn goes_over_to_large_numbers_and_back() {
    let n = 14;
    let rows: Vec<Row> = (0..n)
        .map(|i| (0..n).map(|j| (j, Rational64::new(1, (i + j + 1) as i64))).collect())
        .collect();
    assert_eq!(rank(&slices(&rows)), n);
    // The right side is the sum of each row: the solution is all ones.
    let sums: Vec<Rational64> = rows.iter().map(|row| row.iter().map(|(_, x)| *x).sum()).collect();
    assert_eq!(solve(&slices(&rows), &sums, n), Ok(Solution::Unique(vec![r(1); n])));
    // A unit right side has entries of 10¹⁵ and more, which do not fit or do: no panic.
    let mut unit = vec![r(0); n];
    unit[n - 1] = r(1);
    let _ = solve(&slices(&rows), &unit, n);
    let extreme = [vec![(0, r(i64::MIN)), (1, r(i64::MAX))], vec![(0, r(i64::MAX)), (1, r(3))]];
    assert_eq!(rank(&slices(&extreme)), 2);
    let _ = solve(&slices(&extreme), &[r(i64::MIN), r(1)], 2);
}

fn big(x: Rational64) -> BigRational {
    BigRational::new(BigInt::from(*x.numer()), BigInt::from(*x.denom()))
}

fn matrix() -> impl Strategy<Value = Vec<Row>> {
    (1_usize..7, 1_usize..7).prop_flat_map(|(rows, columns)| {
        let entry =
            prop_oneof![3 => Just(0_i64), 5 => -4_i64..5, 1 => any::<i32>().prop_map(i64::from)];
        prop::collection::vec(prop::collection::vec(entry, columns), rows)
            .prop_map(|rows| rows.iter().map(|entries| row(entries)).collect())
    })
}

proptest! {
    /// Rank and null space add up to the number of columns; the null space is annulled;
    /// rows left out are combinations of those kept.
    #[test]
    fn rank_and_null_space_fit(rows in matrix()) {
        let columns = 6;
        let kept = independent_rows(&slices(&rows));
        if let Ok(space) = null_space(&slices(&rows), columns) {
            prop_assert_eq!(kept.len() + space.len(), columns);
            for vector in &space {
                for row in &rows {
                    let sum: BigRational =
                        row.iter().map(|(c, x)| big(*x) * big(vector[*c])).sum();
                    prop_assert_eq!(sum, BigRational::from(BigInt::from(0)));
                }
            }
        }
        let basis: Vec<Row> = kept.iter().map(|i| rows[*i].clone()).collect();
        for row in &rows {
            if let Ok(solution) = express(row, &slices(&basis)) {
                let factors = solution.unique().expect("a combination of the kept rows");
                for column in 0..columns {
                    let entry = |row: &Row| row.iter().find(|(c, _)| *c == column).map_or(r(0), |e| e.1);
                    let sum: BigRational =
                        basis.iter().zip(&factors).map(|(b, f)| big(entry(b)) * big(*f)).sum();
                    prop_assert_eq!(sum, big(entry(row)));
                }
            }
        }
    }

    /// A system made from a known solution has it, or has it among many.
    #[test]
    fn solutions_solve(rows in matrix(), values in prop::collection::vec(-9_i64..10, 6)) {
        let right: Vec<BigRational> = rows.iter().map(|row| {
            row.iter().map(|(c, x)| big(*x) * big(r(values[*c]))).sum()
        }).collect();
        let right64: Vec<Rational64> = rows.iter().map(|row| {
            row.iter().map(|(c, x)| *x * r(values[*c])).sum()
        }).collect();
        let found = match solve(&slices(&rows), &right64, 6) {
            Ok(Solution::Unique(found)) => found,
            Ok(Solution::Many { particular, .. }) => particular,
            Ok(Solution::None { .. }) => { prop_assert!(false, "it has a solution"); return Ok(()) }
            Err(_) => return Ok(()),
        };
        for (row, right) in rows.iter().zip(right) {
            let sum: BigRational = row.iter().map(|(c, x)| big(*x) * big(found[*c])).sum();
            prop_assert_eq!(sum, right);
        }
    }
}
