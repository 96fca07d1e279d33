//! Some of the windows of an ensemble, alone.

use super::{Ensemble, Points, Stream, Window};

impl Ensemble {
    /// The ensemble of the given windows only (numbers in increasing order), on the points that they visited.
    ///
    /// Used where groups of windows share no samples that link them: each is then a problem of its own.
    #[must_use]
    pub fn restricted_to(&self, windows: &[usize]) -> Self {
        let mut weights = vec![0.0; self.points.len()];
        for &k in windows {
            let window = &self.windows[k];
            for &(point, count) in &window.counts {
                weights[point as usize] += window.weight * count as f64;
            }
        }
        let kept: Vec<usize> = (0..self.points.len()).filter(|&point| weights[point] > 0.0).collect();
        let mut new_number = vec![0_u32; self.points.len()];
        for (number, &point) in (0_u32..).zip(&kept) {
            new_number[point] = number;
        }
        let points = Points::new(
            self.axes.len(),
            kept.iter().flat_map(|&point| self.points.position(point)).copied().collect(),
            kept.iter().map(|&point| self.points.bins[point]).collect(),
            kept.iter().map(|&point| weights[point]).collect(),
        );
        let streams = self.streams.iter().filter_map(|stream| {
            let window = windows.binary_search(&stream.window).ok()?;
            let groups = stream.groups.iter().map(|group| group.renumbered(&new_number)).collect();
            Some(Stream { window, groups, ..stream.clone() })
        });
        let windows = windows.iter().map(|&k| {
            let window = &self.windows[k];
            let counts = window.counts.iter().map(|&(point, count)| (new_number[point as usize], count)).collect();
            Window { counts, ..window.clone() }
        });
        Self {
            axes: self.axes.clone(),
            bins: self.bins,
            windows: windows.collect(),
            points,
            streams: streams.collect(),
        }
    }
}
