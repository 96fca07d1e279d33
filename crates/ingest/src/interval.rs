//! The usual time between neighboring frames.

/// Steps looked at: enough for a median, few enough to keep.
const STEPS: usize = 1024;

/// Finds the usual step of increasing times from the first 1024 steps.
#[derive(Default)]
pub(crate) struct UsualStep {
    last: Option<f64>,
    steps: Vec<f64>,
}

impl UsualStep {
    pub(crate) fn add(&mut self, time: f64) {
        if self.steps.len() < STEPS
            && let Some(last) = self.last.replace(time)
        {
            self.steps.push(time - last);
        }
    }

    /// The mean of the steps between half and one and a half times their median.
    ///
    /// The median passes over gaps; the mean evens out steps that look unequal because times are printed with few digits.
    pub(crate) fn find(mut self) -> Option<f64> {
        self.steps.sort_by(f64::total_cmp);
        let median = *self.steps.get(self.steps.len() / 2)?;
        let usual = self.steps.iter().filter(|step| (0.5 * median..=1.5 * median).contains(*step));
        let (sum, count) = usual.fold((0.0, 0_u32), |(sum, count), step| (sum + step, count + 1));
        (count > 0).then(|| sum / f64::from(count))
    }
}

#[cfg(test)]
#[expect(clippy::unwrap_used, reason = "a test may panic")]
mod tests {
    use super::UsualStep;

    fn found(times: impl IntoIterator<Item = f64>) -> Option<f64> {
        let mut usual = UsualStep::default();
        for time in times {
            usual.add(time);
        }
        usual.find()
    }

    #[test]
    fn a_gap_does_not_move_the_step() {
        let times = (3..40).chain(900..930).map(|frame| 0.25 * f64::from(frame));
        assert_eq!(found(times), Some(0.25));
    }

    #[test]
    fn a_step_finer_than_the_printed_digits_is_found() {
        // A step of 0.0025 printed with three decimals, rounded up at the half: 0.003, 0.005, 0.008, 0.010…
        let times = (1..=401).map(|frame| f64::from((frame * 25 + 5) / 10) / 1000.0);
        let step = found(times).unwrap();
        // 400 steps, each sum off by at most one unit in the last place of a value near 1.
        assert!((step - 0.0025).abs() < 400.0 * f64::EPSILON, "{step}");
    }

    #[test]
    fn a_single_frame_has_no_step() {
        assert_eq!(found([7.0]), None);
        assert_eq!(found([]), None);
    }
}
