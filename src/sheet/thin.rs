//! Leaving out vertices that the drawn line doesn't need.

/// How far the drawn line may lie from a vertex that was left out, in mm; what is left of 0.005 mm covers
/// the writer's rounding to whole micrometres.
const TOLERANCE: f64 = 0.004;
/// A trace keeps so many vertices where it has them.
const FEWEST: usize = 200;

/// Indices of the vertices to keep, first and last among them. `y` is in mm at equal steps of x; a vertex is
/// left out only where the line between its kept neighbours passes it within [`TOLERANCE`] vertically.
pub(super) fn kept(y: &[f64]) -> Vec<usize> {
    let last = y.len().saturating_sub(1);
    let longest = (last / (FEWEST + 10)).max(1);
    let mut kept = vec![0];
    let mut anchor = 0;
    // The slopes from the anchor that pass all vertices since it.
    let (mut low, mut high) = (f64::NEG_INFINITY, f64::INFINITY);
    let mut index = 1;
    while index <= last {
        let run = (index - anchor) as f64;
        let rise = y[index] - y[anchor];
        let slope = rise / run;
        if index - anchor > 1 && (slope < low || slope > high || index - anchor > longest) {
            anchor = index - 1;
            kept.push(anchor);
            (low, high) = (f64::NEG_INFINITY, f64::INFINITY);
            continue;
        }
        low = low.max((rise - TOLERANCE) / run);
        high = high.min((rise + TOLERANCE) / run);
        index += 1;
    }
    if last > 0 {
        kept.push(last);
    }
    kept
}

#[cfg(test)]
mod tests {
    use super::*;

    fn wave(samples: usize) -> Vec<f64> {
        (0..samples)
            .map(|n| {
                let t = n as f64 / 500.0;
                10.0 * (-((t % 0.8 - 0.4) / 0.012).powi(2)).exp() + (t * 7.0).sin() + 0.02 * (t * 900.0).sin()
            })
            .collect()
    }

    #[test]
    fn the_drawn_line_stays_within_its_tolerance_of_every_vertex() {
        let y = wave(5000);
        let kept = kept(&y);
        assert!(kept.len() < 4000 && kept.len() >= FEWEST, "{}", kept.len());
        for pair in kept.windows(2) {
            for index in pair[0]..=pair[1] {
                let part = (index - pair[0]) as f64 / (pair[1] - pair[0]) as f64;
                let drawn = y[pair[0]] + (y[pair[1]] - y[pair[0]]) * part;
                assert!((drawn - y[index]).abs() <= TOLERANCE + 1e-12);
            }
        }
    }

    #[test]
    fn a_flat_trace_keeps_enough_vertices_and_a_short_one_its_ends() {
        assert!(kept(&vec![1.0; 1250]).len() >= FEWEST);
        assert_eq!(kept(&vec![1.0; 201]).len(), 201);
        assert_eq!(kept(&[1.0]), [0]);
        assert_eq!(kept(&[1.0, 2.0]), [0, 1]);
    }
}
