//! Whether a network falls to series and parallel steps alone.
//!
//! A graph is series-parallel exactly when no part of it is a bridge between four nodes (Duffin
//! 1965). Taking out dangling nodes and nodes with two neighbours one after the other ends with
//! nothing exactly then; parallel edges are one from the start. O(m log n).

use std::collections::BTreeSet;

/// True if series and parallel reductions take the whole graph away.
pub fn is_series_parallel(nodes: usize, edges: &[(u32, u32)]) -> bool {
    let mut neighbours: Vec<BTreeSet<u32>> = vec![BTreeSet::new(); nodes];
    for &(a, b) in edges.iter().filter(|(a, b)| a != b) {
        neighbours[a as usize].insert(b);
        neighbours[b as usize].insert(a);
    }
    let mut waiting: Vec<u32> = (0..nodes as u32).collect();
    let mut left = nodes;
    let mut gone = vec![false; nodes];
    while let Some(node) = waiting.pop() {
        if gone[node as usize] || neighbours[node as usize].len() > 2 {
            continue;
        }
        gone[node as usize] = true;
        left -= 1;
        let around: Vec<u32> = std::mem::take(&mut neighbours[node as usize]).into_iter().collect();
        for &other in &around {
            neighbours[other as usize].remove(&node);
        }
        if let [a, b] = around[..] {
            neighbours[a as usize].insert(b);
            neighbours[b as usize].insert(a);
        }
        waiting.extend(around);
    }
    left == 0
}

#[cfg(test)]
mod tests {
    use super::is_series_parallel;

    #[test]
    fn a_bridge_is_not_series_parallel() {
        let ladder = [(0, 1), (1, 2), (1, 0), (2, 3), (2, 0), (3, 0), (3, 0)];
        assert!(is_series_parallel(4, &ladder));
        // Wheatstone's bridge with its source: every two of four nodes are joined.
        let bridge = [(0, 1), (1, 2), (1, 3), (2, 0), (3, 0), (2, 3)];
        assert!(!is_series_parallel(4, &bridge));
        assert!(is_series_parallel(4, &bridge[..5]));
        assert!(is_series_parallel(0, &[]));
    }
}
