//! The little linear algebra that the search needs: symmetric matrices, stored row by row.

/// Eigenvalues and eigenvectors of a symmetric matrix; row `k` of the vectors belongs to value `k`.
///
/// Householder's reduction to three diagonals, then QL with implicit shifts (Bowdler, Martin, Reinsch
/// and Wilkinson, Numer Math 1968;11:293; from memory of the published procedure).
pub(super) fn eigen(matrix: &[f64], n: usize) -> (Vec<f64>, Vec<f64>) {
    let (mut diagonal, mut beside, mut vectors) = tridiagonal(matrix.to_vec(), n);
    for low in 0..n {
        // Thirty turns have never been needed; the bound keeps a matrix of NaN from turning for ever.
        for _ in 0..30 {
            let mut high = low;
            while high + 1 < n {
                let scale = diagonal[high].abs() + diagonal[high + 1].abs();
                if beside[high].abs() <= f64::EPSILON * scale {
                    break;
                }
                high += 1;
            }
            if high == low {
                break;
            }
            turn(&mut diagonal, &mut beside, &mut vectors, n, low, high);
        }
    }
    (diagonal, vectors)
}

/// One QL step on the block from `low` to `high`.
fn turn(diagonal: &mut [f64], beside: &mut [f64], vectors: &mut [f64], n: usize, low: usize, high: usize) {
    let half = (diagonal[low + 1] - diagonal[low]) / (2.0 * beside[low]);
    let root = half.hypot(1.0).copysign(half);
    let mut g = diagonal[high] - diagonal[low] + beside[low] / (half + root);
    let (mut sine, mut cosine, mut shift) = (1.0, 1.0, 0.0);
    for index in (low..high).rev() {
        let (f, b) = (sine * beside[index], cosine * beside[index]);
        let length = f.hypot(g);
        beside[index + 1] = length;
        if length == 0.0 {
            diagonal[index + 1] -= shift;
            beside[high] = 0.0;
            return;
        }
        (sine, cosine) = (f / length, g / length);
        g = diagonal[index + 1] - shift;
        let r = (diagonal[index] - g) * sine + 2.0 * cosine * b;
        shift = sine * r;
        diagonal[index + 1] = g + shift;
        g = cosine * r - b;
        let (upper, lower) = vectors.split_at_mut((index + 1) * n);
        for (a, b) in upper[index * n..].iter_mut().zip(&mut lower[..n]) {
            (*a, *b) = (cosine * *a - sine * *b, sine * *a + cosine * *b);
        }
    }
    diagonal[low] -= shift;
    beside[low] = g;
    beside[high] = 0.0;
}

/// Diagonal, what stands beside it (its last entry unused), and the rows that turn the matrix into that form.
fn tridiagonal(mut a: Vec<f64>, n: usize) -> (Vec<f64>, Vec<f64>, Vec<f64>) {
    let mut rows = vec![0.0; n * n];
    for index in 0..n {
        rows[index * n + index] = 1.0;
    }
    let mut beside = vec![0.0; n];
    let mut v = vec![0.0; n];
    let mut p = vec![0.0; n];
    for column in 0..n.saturating_sub(1) {
        let first = column + 1;
        let norm = (first..n).map(|row| a[row * n + column].powi(2)).sum::<f64>().sqrt();
        let head = a[first * n + column];
        let target = if head > 0.0 { -norm } else { norm };
        beside[column] = target;
        for row in first..n {
            v[row] = a[row * n + column];
        }
        v[first] -= target;
        let square: f64 = v[first..].iter().map(|value| value * value).sum();
        if square <= f64::MIN_POSITIVE {
            continue;
        }
        // A − v wᵀ − w vᵀ on the part that is left, with w from A v.
        for row in first..n {
            p[row] = 2.0 / square * dot(&a[row * n + first..(row + 1) * n], &v[first..]);
        }
        let half = dot(&p[first..], &v[first..]) / square;
        for row in first..n {
            p[row] -= half * v[row];
        }
        for row in first..n {
            let (vr, pr) = (v[row], p[row]);
            for (slot, (vc, pc)) in
                a[row * n + first..(row + 1) * n].iter_mut().zip(v[first..].iter().zip(&p[first..]))
            {
                *slot -= vr * pc + pr * vc;
            }
        }
        // The rows are turned by the same reflection.
        p[..n].fill(0.0);
        for row in first..n {
            for (slot, value) in p.iter_mut().zip(&rows[row * n..(row + 1) * n]) {
                *slot += v[row] * value;
            }
        }
        for row in first..n {
            let factor = 2.0 / square * v[row];
            for (slot, value) in rows[row * n..(row + 1) * n].iter_mut().zip(&p) {
                *slot -= factor * value;
            }
        }
    }
    let diagonal = (0..n).map(|index| a[index * n + index]).collect();
    (diagonal, beside, rows)
}

/// The scalar product.
pub(super) fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

/// The factor L of a positive definite matrix A = L Lᵀ, in place of its lower half; `None` when it is not.
pub(super) fn cholesky(a: &mut [f64], n: usize) -> Option<()> {
    for row in 0..n {
        for column in 0..=row {
            let sum =
                a[row * n + column] - dot(&a[row * n..row * n + column], &a[column * n..column * n + column]);
            if row == column {
                if sum <= 0.0 || !sum.is_finite() {
                    return None;
                }
                a[row * n + row] = sum.sqrt();
            } else {
                a[row * n + column] = sum / a[column * n + column];
            }
        }
    }
    Some(())
}

/// The logarithm of the determinant, from the factor.
pub(super) fn log_determinant(factor: &[f64], n: usize) -> f64 {
    2.0 * (0..n).map(|index| factor[index * n + index]).product::<f64>().ln()
}

/// Solves A x = b from the factor, in place of b.
pub(super) fn solve(factor: &[f64], n: usize, b: &mut [f64]) {
    for row in 0..n {
        b[row] = (b[row] - dot(&factor[row * n..row * n + row], &b[..row])) / factor[row * n + row];
    }
    for row in (0..n).rev() {
        let sum: f64 = (row + 1..n).map(|below| factor[below * n + row] * b[below]).sum();
        b[row] = (b[row] - sum) / factor[row * n + row];
    }
}

/// The inverse of a positive definite matrix; `None` when it is not.
pub(super) fn inverse(a: &[f64], n: usize) -> Option<Vec<f64>> {
    let mut factor = a.to_vec();
    cholesky(&mut factor, n)?;
    let mut inverse = vec![0.0; n * n];
    for (row, slots) in inverse.chunks_exact_mut(n).enumerate() {
        slots[row] = 1.0;
        solve(&factor, n, slots);
    }
    Some(inverse)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn rebuilt(values: &[f64], vectors: &[f64], n: usize) -> Vec<f64> {
        let mut matrix = vec![0.0; n * n];
        for (value, vector) in values.iter().zip(vectors.chunks_exact(n)) {
            for row in 0..n {
                for column in 0..n {
                    matrix[row * n + column] += value * vector[row] * vector[column];
                }
            }
        }
        matrix
    }

    // Source: the definition of an eigenvector, on a kernel like the search's own and on a diagonal matrix.
    #[test]
    fn eigenvectors_rebuild_the_matrix_and_are_orthonormal() {
        for n in [1, 2, 8, 60] {
            let kernel: Vec<f64> = (0..n * n)
                .map(|at| {
                    (-0.02 * ((at / n) as f64 - (at % n) as f64).powi(2)).exp() + f64::from(at / n == at % n)
                })
                .collect();
            let diagonal: Vec<f64> =
                (0..n * n).map(|at| if at / n == at % n { at as f64 } else { 0.0 }).collect();
            for matrix in [kernel, diagonal] {
                let (values, vectors) = eigen(&matrix, n);
                let size = matrix.iter().fold(1.0f64, |high, value| high.max(value.abs()));
                for (own, wanted) in rebuilt(&values, &vectors, n).iter().zip(&matrix) {
                    assert!((own - wanted).abs() < 1e-10 * size, "{n}: {own} {wanted}");
                }
                let identity = rebuilt(&vec![1.0; n], &vectors, n);
                for (at, value) in identity.iter().enumerate() {
                    assert!((value - f64::from(at / n == at % n)).abs() < 1e-10);
                }
            }
        }
    }

    #[test]
    fn a_factor_solves_and_what_is_not_positive_has_none() {
        let a = [4.0, 2.0, 2.0, 3.0];
        let inverse = inverse(&a, 2).expect("positive");
        for (own, wanted) in inverse.iter().zip([0.375, -0.25, -0.25, 0.5]) {
            assert!((own - wanted).abs() < 1e-12);
        }
        assert_eq!(cholesky(&mut [1.0, 2.0, 2.0, 1.0], 2), None);
        let mut factor = a;
        cholesky(&mut factor, 2).expect("positive");
        assert!((log_determinant(&factor, 2) - 8.0f64.ln()).abs() < 1e-12);
    }
}
