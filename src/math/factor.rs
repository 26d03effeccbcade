//! The Cholesky factor of a correlation matrix.

/// The lower triangle, row by row, of the factor of the `n` by `n` matrix with ones on its diagonal and `coefficient(i, j)`
/// for j < i below it; `None` when that matrix is not positive definite.
///
/// # Formula
///
/// ```text
/// l_ij = (r_ij - Σ_k<j l_ik l_jk) / l_jj,    l_ii = sqrt(1 - Σ_k<i l_ik²)
/// ```
#[must_use]
pub fn cholesky(n: usize, coefficient: impl Fn(usize, usize) -> f64) -> Option<Vec<Vec<f64>>> {
    let mut lower: Vec<Vec<f64>> = Vec::with_capacity(n);
    for i in 0..n {
        let mut row = vec![0.0; i + 1];
        for j in 0..i {
            let done: f64 = (0..j).map(|k| row[k] * lower[j][k]).sum();
            row[j] = (coefficient(i, j) - done) / lower[j][j];
        }
        let rest = 1.0 - row[..i].iter().map(|part| part * part).sum::<f64>();
        // Also refuses what is not a number.
        if rest.is_nan() || rest <= 0.0 {
            return None;
        }
        row[i] = rest.sqrt();
        lower.push(row);
    }
    Some(lower)
}

#[cfg(test)]
mod tests {
    use super::cholesky;

    #[test]
    fn the_factor_of_two_is_known() {
        // [1, 0; r, sqrt(1 - r²)], by hand.
        let lower = cholesky(2, |_, _| 0.6).unwrap();
        assert_eq!(lower[0], [1.0]);
        assert_eq!(lower[1][0], 0.6);
        assert!((lower[1][1] - 0.8).abs() < 1e-15);
    }

    #[test]
    fn the_factor_times_its_transpose_is_the_matrix() {
        let r = [[1.0, 0.5, -0.2], [0.5, 1.0, 0.3], [-0.2, 0.3, 1.0]];
        let lower = cholesky(3, |i, j| r[i][j]).unwrap();
        for i in 0..3 {
            for j in 0..=i {
                let product: f64 = (0..=j).map(|k| lower[i][k] * lower[j][k]).sum();
                assert!((product - r[i][j]).abs() < 1e-15, "{i} {j}");
            }
        }
    }

    #[test]
    fn coefficients_that_contradict_each_other_have_no_factor() {
        // a with b and b with c almost equal, a with c opposite.
        let r = [[1.0, 0.9, -0.9], [0.9, 1.0, 0.9], [-0.9, 0.9, 1.0]];
        assert!(cholesky(3, |i, j| r[i][j]).is_none());
    }
}
