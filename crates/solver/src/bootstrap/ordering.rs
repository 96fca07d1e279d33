//! An order of the windows in which those that overlap stand close together.

/// Windows in an order that keeps the envelope of their overlaps narrow, from the windows that each overlaps with (reverse
/// Cuthill–McKee: George 1971): layer by layer from a window with few overlaps, the sequence then turned round.
pub(super) fn narrow_order(neighbors: &[Vec<u32>]) -> Vec<usize> {
    let n = neighbors.len();
    let mut order: Vec<usize> = Vec::with_capacity(n);
    let mut seen = vec![false; n];
    let mut starts: Vec<usize> = (0..n).collect();
    starts.sort_by_key(|&k| (neighbors[k].len(), k));
    for start in starts {
        if seen[start] {
            continue;
        }
        let mut next = order.len();
        seen[start] = true;
        order.push(start);
        while next < order.len() {
            let mut found: Vec<usize> =
                neighbors[order[next]].iter().map(|&k| k as usize).filter(|&k| !seen[k]).collect();
            found.sort_by_key(|&k| (neighbors[k].len(), k));
            for &k in &found {
                seen[k] = true;
            }
            order.extend(found);
            next += 1;
        }
    }
    order.reverse();
    order
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_scattered_chain_of_windows_comes_out_in_its_order() {
        // Window k of the chain has number 5 k mod 12; each overlaps with two on either side.
        let number = |k: usize| 5 * k % 12;
        let mut neighbors = vec![Vec::new(); 12];
        for k in 0..12_usize {
            for other in k.saturating_sub(2)..(k + 3).min(12) {
                if other != k {
                    neighbors[number(k)].push(u32::try_from(number(other)).unwrap_or(0));
                }
            }
        }
        let order = narrow_order(&neighbors);
        let mut place = [0; 12];
        for (at, &window) in order.iter().enumerate() {
            place[window] = at;
        }
        let widest = (0..12_usize).flat_map(|k| {
            let place = &place;
            neighbors[k].iter().map(move |&other| place[k].abs_diff(place[other as usize]))
        });
        assert_eq!(widest.max(), Some(2));
    }

    #[test]
    fn windows_apart_are_all_there() {
        let mut order = narrow_order(&[vec![2], vec![], vec![0], vec![]]);
        order.sort_unstable();
        assert_eq!(order, [0, 1, 2, 3]);
    }
}
