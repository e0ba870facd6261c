//! What a graph hangs together by: bridges and cut nodes (Hopcroft & Tarjan 1973).
//!
//! A bridge is an edge whose loss takes its part apart; no loop goes through it, so by the current
//! law it carries nothing. A cut node is a node with that property. Linear, with a stack of its own.

/// Bridges and cut nodes, ascending.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Articulation {
    /// Indices of edges.
    pub bridges: Vec<usize>,
    /// Nodes.
    pub cut_nodes: Vec<u32>,
}

/// Finds bridges and cut nodes; parallel edges are no bridges, loops do not matter.
pub fn articulation(nodes: usize, edges: &[(u32, u32)]) -> Articulation {
    let mut incident: Vec<Vec<(usize, u32)>> = vec![Vec::new(); nodes];
    for (edge, &(a, b)) in edges.iter().enumerate().filter(|(_, (a, b))| a != b) {
        incident[a as usize].push((edge, b));
        incident[b as usize].push((edge, a));
    }
    let mut entered = vec![0_usize; nodes];
    let mut low = vec![0_usize; nodes];
    let mut next = vec![0_usize; nodes];
    let mut cuts = vec![false; nodes];
    let mut bridges = Vec::new();
    let mut clock = 0;
    for root in 0..nodes {
        if entered[root] != 0 {
            continue;
        }
        clock += 1;
        (entered[root], low[root]) = (clock, clock);
        let mut branches_of_root = 0;
        let mut stack = vec![(root, usize::MAX)];
        while let Some(&(node, came_by)) = stack.last() {
            if let Some(&(edge, other)) = incident[node].get(next[node]) {
                next[node] += 1;
                let other = other as usize;
                if entered[other] == 0 {
                    clock += 1;
                    (entered[other], low[other]) = (clock, clock);
                    stack.push((other, edge));
                } else if edge != came_by {
                    low[node] = low[node].min(entered[other]);
                }
                continue;
            }
            stack.pop();
            let Some(&(above, _)) = stack.last() else { continue };
            low[above] = low[above].min(low[node]);
            if low[node] > entered[above] {
                bridges.push(came_by);
            }
            if above == root {
                branches_of_root += 1;
            } else if low[node] >= entered[above] {
                cuts[above] = true;
            }
        }
        cuts[root] = branches_of_root > 1;
    }
    bridges.sort_unstable();
    let cut_nodes = (0_u32..).zip(&cuts).filter(|(_, cut)| **cut).map(|(node, _)| node).collect();
    Articulation { bridges, cut_nodes }
}

#[cfg(test)]
mod tests {
    use super::{Articulation, articulation};
    use pretty_assertions::assert_eq;

    #[test]
    fn two_loops_that_share_a_node_and_a_tail() {
        let edges = [(0, 1), (1, 2), (2, 0), (2, 3), (3, 4), (4, 2), (4, 5), (6, 7), (6, 7)];
        let expected = Articulation { bridges: vec![6], cut_nodes: vec![2, 4] };
        assert_eq!(articulation(8, &edges), expected);
        assert_eq!(articulation(0, &[]), Articulation::default());
    }
}
