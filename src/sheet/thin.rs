//! Leaving out vertices that the drawn line doesn't need.

/// How far the drawn line may pass a sample, in mm; what is left of 0.005 mm covers the writer's rounding
/// to whole units of 2.5 µm.
const TOLERANCE: f64 = 0.0037;
/// Heights are multiples of this, in mm, where the tolerance allows it: fewer digits make a smaller file.
const SHORT: f64 = 0.005;
/// A trace keeps so many vertices where it has them.
const FEWEST: usize = 200;

/// The vertices to draw, as index and height, first and last among them. `y` is in mm at equal steps of x;
/// the line through the vertices passes every sample within [`TOLERANCE`] vertically.
pub(super) fn kept(y: &[f64]) -> Vec<(usize, f64)> {
    let Some(&first) = y.first() else { return Vec::new() };
    let last = y.len() - 1;
    let longest = (last / (FEWEST + 10)).max(1);
    let mut kept = vec![(0, first)];
    let mut anchor = (0, first);
    while anchor.0 < last {
        // The slopes from the anchor that pass every sample so far, narrowed until none is left.
        let (mut low, mut high) = (f64::NEG_INFINITY, f64::INFINITY);
        let mut end = anchor.0;
        while end < last && end - anchor.0 < longest {
            let run = (end + 1 - anchor.0) as f64;
            let rise = y[end + 1] - anchor.1;
            let narrowed = (low.max((rise - TOLERANCE) / run), high.min((rise + TOLERANCE) / run));
            if narrowed.0 > narrowed.1 {
                break;
            }
            (low, high) = narrowed;
            end += 1;
        }
        let run = (end - anchor.0) as f64;
        anchor = (end, short(anchor.1 + low * run, y[end], anchor.1 + high * run));
        kept.push(anchor);
    }
    kept
}

/// The height between `low` and `high` that is written shortest: a multiple of [`SHORT`] near `wanted` if
/// there is one.
fn short(low: f64, wanted: f64, high: f64) -> f64 {
    let nearest = wanted.clamp(low, high);
    let rounded = (nearest / SHORT).round() * SHORT;
    if (low..=high).contains(&rounded) { rounded } else { nearest }
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
        assert!(kept.len() < y.len() && kept.len() >= FEWEST, "{}", kept.len());
        for pair in kept.windows(2) {
            let ((from, first), (to, last)) = (pair[0], pair[1]);
            for (index, value) in y.iter().enumerate().take(to + 1).skip(from) {
                let drawn = first + (last - first) * (index - from) as f64 / (to - from) as f64;
                assert!((drawn - value).abs() <= TOLERANCE + 1e-9);
            }
        }
    }

    #[test]
    fn a_flat_trace_keeps_enough_vertices_and_a_short_one_its_ends() {
        assert!(kept(&vec![1.0; 1250]).len() >= FEWEST);
        assert_eq!(kept(&vec![1.0; 201]).len(), 201);
        assert_eq!(kept(&[1.0]), [(0, 1.0)]);
        assert_eq!(kept(&[1.0, 2.0]), [(0, 1.0), (1, 2.0)]);
        assert!(kept(&[]).is_empty());
    }
}
