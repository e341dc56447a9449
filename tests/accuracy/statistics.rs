//! Mean, spread and median of errors.

/// Of errors in one unit.
#[derive(Clone, Debug, Default)]
pub struct Errors(Vec<f64>);

impl Errors {
    pub fn of(errors: impl IntoIterator<Item = f64>) -> Self {
        Self(errors.into_iter().collect())
    }

    pub fn push(&mut self, error: f64) {
        self.0.push(error);
    }

    pub fn count(&self) -> usize {
        self.0.len()
    }

    pub fn mean(&self) -> f64 {
        self.0.iter().sum::<f64>() / self.0.len() as f64
    }

    pub fn deviation(&self) -> f64 {
        let mean = self.mean();
        (self.0.iter().map(|error| (error - mean).powi(2)).sum::<f64>() / self.0.len() as f64).sqrt()
    }

    pub fn largest(&self) -> f64 {
        self.0.iter().map(|error| error.abs()).fold(0.0, f64::max)
    }

    pub fn median(&self) -> f64 {
        let mut sorted = self.0.clone();
        sorted.sort_by(f64::total_cmp);
        sorted.get(sorted.len() / 2).copied().unwrap_or(f64::NAN)
    }
}
