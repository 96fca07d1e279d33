//! Second derivatives of interpolating cubic splines at their rows
//! (C. de Boor, *A Practical Guide to Splines*, Springer 1978, chapter IV).
//!
//! With hᵢ the step and sᵢ the slope of the chord after row i, continuity of the slope at row i reads
//! hᵢ₋₁ Mᵢ₋₁ + 2 (hᵢ₋₁ + hᵢ) Mᵢ + hᵢ Mᵢ₊₁ = 6 (sᵢ − sᵢ₋₁). The matrix is symmetric and diagonally
//! dominant, so elimination without pivoting is stable.

/// The spline without curvature at its ends. Takes 3 rows or more, at strictly increasing positions.
pub(super) fn natural(positions: &[f64], energies: &[f64]) -> Vec<f64> {
    let (steps, chords) = steps_and_chords(positions, energies);
    let diagonal: Vec<f64> = steps.windows(2).map(|pair| 2.0 * (pair[0] + pair[1])).collect();
    let right: Vec<f64> = chords.windows(2).map(|pair| 6.0 * (pair[1] - pair[0])).collect();
    let inner = solve_tridiagonal(&diagonal, &steps[1..steps.len() - 1], &right);
    let mut curvatures = vec![0.0];
    curvatures.extend(inner);
    curvatures.push(0.0);
    curvatures
}

/// The spline whose slope and curvature agree at its two ends, where the energies must agree already.
/// Takes 3 rows or more, at strictly increasing positions, the last being the first one period on.
pub(super) fn periodic(positions: &[f64], energies: &[f64]) -> Vec<f64> {
    let (steps, chords) = steps_and_chords(positions, energies);
    let n = steps.len();
    let before = |row: usize| (row + n - 1) % n;
    let mut diagonal: Vec<f64> = (0..n).map(|row| 2.0 * (steps[before(row)] + steps[row])).collect();
    let right: Vec<f64> = (0..n).map(|row| 6.0 * (chords[row] - chords[before(row)])).collect();
    let mut curvatures = if n == 2 {
        // Both neighbors of either row are the other one, and by symmetry M₁ = −M₀.
        let curvature = right[0] / (steps[0] + steps[1]);
        vec![curvature, -curvature]
    } else {
        // The two corner elements are taken out as a rank-one change (Sherman & Morrison 1950).
        let corner = steps[n - 1];
        let shift = -diagonal[0];
        diagonal[0] -= shift;
        diagonal[n - 1] -= corner * corner / shift;
        let mut change = vec![0.0; n];
        change[0] = shift;
        change[n - 1] = corner;
        let plain = solve_tridiagonal(&diagonal, &steps[..n - 1], &right);
        let response = solve_tridiagonal(&diagonal, &steps[..n - 1], &change);
        let project = |vector: &[f64]| vector[0] + corner / shift * vector[n - 1];
        let factor = project(&plain) / (1.0 + project(&response));
        plain.iter().zip(&response).map(|(plain, response)| plain - factor * response).collect()
    };
    curvatures.push(curvatures[0]);
    curvatures
}

fn steps_and_chords(positions: &[f64], energies: &[f64]) -> (Vec<f64>, Vec<f64>) {
    let steps: Vec<f64> = positions.windows(2).map(|pair| pair[1] - pair[0]).collect();
    let chords = energies.windows(2).zip(&steps).map(|(pair, step)| (pair[1] - pair[0]) / step).collect();
    (steps, chords)
}

/// The solution of a symmetric tridiagonal system with `diagonal`, and `off_diagonal` beside it.
fn solve_tridiagonal(diagonal: &[f64], off_diagonal: &[f64], right: &[f64]) -> Vec<f64> {
    let mut pivots = diagonal.to_vec();
    let mut solution = right.to_vec();
    for (row, &coupling) in off_diagonal.iter().enumerate() {
        let factor = coupling / pivots[row];
        pivots[row + 1] -= factor * coupling;
        solution[row + 1] -= factor * solution[row];
    }
    for row in (0..solution.len()).rev() {
        let later = match off_diagonal.get(row) {
            Some(coupling) => coupling * solution[row + 1],
            None => 0.0,
        };
        solution[row] = (solution[row] - later) / pivots[row];
    }
    solution
}
