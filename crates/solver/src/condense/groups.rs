//! Counts on cells, kept apart for up to 128 stretches of a run.

use serde::Serialize;

/// Most groups kept; when one more would start, neighbors merge and the group length doubles.
pub const MAX_GROUPS: usize = 128;

/// Samples that wait to be counted; bounds the memory of a group whatever its length.
const BUFFER: usize = 8192;

/// Counts of one contiguous stretch of a run.
#[derive(Debug, Clone, PartialEq, Eq, Default, Serialize)]
pub struct Group {
    /// Samples in the stretch.
    pub n_samples: u64,
    /// Cell number and its count, increasing in cell number, no count zero.
    pub entries: Vec<(u32, u32)>,
}

impl Group {
    fn absorb(&mut self, entries: &[(u32, u32)], n_samples: u64) {
        self.entries = merge_sorted(&self.entries, entries);
        self.n_samples += n_samples;
    }

    /// The same counts under new cell numbers, `new_number[old]`; several old cells may share a new one.
    #[must_use]
    pub fn renumbered(&self, new_number: &[u32]) -> Self {
        let mut entries: Vec<(u32, u32)> =
            self.entries.iter().map(|&(cell, count)| (new_number[cell as usize], count)).collect();
        entries.sort_unstable();
        Self { n_samples: self.n_samples, entries: add_up_equal(&entries) }
    }
}

/// Groups of a run that is still streaming past. Lengths are powers of two counted from the first sample.
#[derive(Debug, Clone)]
pub(super) struct GroupCounts {
    group_length: u64,
    complete: Vec<Group>,
    current: Group,
    waiting: Vec<u32>,
}

impl GroupCounts {
    pub(super) fn new() -> Self {
        Self { group_length: 1, complete: Vec::new(), current: Group::default(), waiting: Vec::new() }
    }

    pub(super) fn push(&mut self, cell: u32) {
        self.waiting.push(cell);
        let full = self.current.n_samples + self.waiting.len() as u64 >= self.group_length;
        if full || self.waiting.len() >= BUFFER {
            self.count_waiting();
        }
        if full {
            self.complete.push(std::mem::take(&mut self.current));
            if self.complete.len() > MAX_GROUPS {
                self.double_group_length();
            }
        }
    }

    fn count_waiting(&mut self) {
        self.waiting.sort_unstable();
        let entries = add_up_equal(&self.waiting.iter().map(|&cell| (cell, 1)).collect::<Vec<_>>());
        self.current.absorb(&entries, self.waiting.len() as u64);
        self.waiting.clear();
    }

    fn double_group_length(&mut self) {
        let mut old = std::mem::take(&mut self.complete).into_iter();
        while let Some(mut earlier) = old.next() {
            if let Some(later) = old.next() {
                earlier.absorb(&later.entries, later.n_samples);
                self.complete.push(earlier);
            } else {
                self.current = earlier;
            }
        }
        self.group_length *= 2;
    }

    /// All groups; samples after the last complete one join it, so that every batch holds at least one whole group.
    pub(super) fn finish(mut self) -> Vec<Group> {
        self.count_waiting();
        let rest = self.current;
        if rest.n_samples > 0 {
            match self.complete.last_mut() {
                Some(last) => last.absorb(&rest.entries, rest.n_samples),
                None => self.complete.push(rest),
            }
        }
        self.complete
    }
}

fn merge_sorted(a: &[(u32, u32)], b: &[(u32, u32)]) -> Vec<(u32, u32)> {
    let mut merged = Vec::with_capacity(a.len() + b.len());
    let (mut i, mut j) = (0, 0);
    while i < a.len() && j < b.len() {
        match a[i].0.cmp(&b[j].0) {
            std::cmp::Ordering::Less => {
                merged.push(a[i]);
                i += 1;
            }
            std::cmp::Ordering::Greater => {
                merged.push(b[j]);
                j += 1;
            }
            std::cmp::Ordering::Equal => {
                merged.push((a[i].0, a[i].1 + b[j].1));
                i += 1;
                j += 1;
            }
        }
    }
    merged.extend_from_slice(&a[i..]);
    merged.extend_from_slice(&b[j..]);
    merged
}

fn add_up_equal(sorted: &[(u32, u32)]) -> Vec<(u32, u32)> {
    let mut summed: Vec<(u32, u32)> = Vec::new();
    for &(cell, count) in sorted {
        match summed.last_mut() {
            Some(last) if last.0 == cell => last.1 += count,
            _ => summed.push((cell, count)),
        }
    }
    summed
}
