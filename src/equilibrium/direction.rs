//! The two Newton steps: on the logarithms of the balances, and on the convex function
//! whose gradient they are.

use nalgebra::{Cholesky, DMatrix, DVector, LU};

use super::coordinates::Coordinates;
use super::point::Point;

/// `J[j][l] = ∂ ln(P_j/N_j)/∂u_l`.
pub(super) fn log_jacobian(at: &Coordinates, point: &Point, out: &mut DMatrix<f64>) {
    out.fill(0.0);
    let height = out.nrows();
    // Column after column.
    let entries = out.as_mut_slice();
    for i in 0..at.species.len() {
        let c = point.concentrations[i];
        let row = at.row(i);
        for &(j, value) in row {
            let j = j as usize;
            let side = if value > 0.0 { point.positive[j] } else { point.negative[j] };
            let weight = c * value / side;
            for &(l, other) in row {
                entries[l as usize * height + j] += weight * other;
            }
        }
    }
}

/// Solves in place; false where the matrix is singular.
pub(super) fn solve_square(matrix: DMatrix<f64>, side: &mut DVector<f64>) -> bool {
    // The library cannot solve for no unknowns at all.
    side.is_empty() || (LU::new(matrix).solve_mut(side) && side.iter().all(|s| s.is_finite()))
}

/// The step that would close `ln(P/N)` in every row to first order; false where the
/// equations do not determine one.
pub(super) fn log_step(at: &Coordinates, point: &Point, step: &mut [f64]) -> bool {
    let size = step.len();
    let mut matrix = DMatrix::zeros(size, size);
    log_jacobian(at, point, &mut matrix);
    let rows = point.positive.iter().zip(&point.negative);
    let mut side = DVector::from_iterator(size, rows.map(|(p, n)| (n / p).ln()));
    let solved = solve_square(matrix, &mut side);
    step.copy_from_slice(side.as_slice());
    solved
}

/// The Newton step of the convex function, its matrix scaled to a unit diagonal; where
/// that fails in floating point, or no longer descends once it is cut to `longest` in
/// every unknown, each unknown by its own diagonal, which always descends.
pub(super) fn convex_step(at: &Coordinates, point: &Point, longest: f64, step: &mut [f64]) {
    let size = step.len();
    let mut matrix = DMatrix::<f64>::zeros(size, size);
    for i in 0..at.species.len() {
        let c = point.concentrations[i];
        let row = at.row(i);
        for &(j, value) in row {
            for &(l, other) in row {
                if l >= j {
                    matrix[(l as usize, j as usize)] += c * value * other;
                }
            }
        }
    }
    let scales: Vec<f64> = (0..size).map(|j| matrix[(j, j)].sqrt().recip()).collect();
    for j in 0..size {
        for l in j..size {
            matrix[(l, j)] *= scales[j] * scales[l];
        }
    }
    let rows = point.positive.iter().zip(&point.negative);
    let side: Vec<f64> = rows.zip(&scales).map(|((p, n), scale)| (n - p) * scale).collect();
    if let Some(factor) = Cholesky::new(matrix) {
        let mut solved = DVector::from_column_slice(&side);
        if size > 0 {
            factor.solve_mut(&mut solved);
        }
        for j in 0..size {
            step[j] = (solved[j] * scales[j]).clamp(-longest, longest);
        }
        if point.slope(step) < 0.0 {
            return;
        }
    }
    for j in 0..size {
        step[j] = (side[j] * scales[j]).clamp(-longest, longest);
    }
}
