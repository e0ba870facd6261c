//! Whether a graph can be drawn in the plane without crossings.
//!
//! The left-right test: de Fraysseix & Rosenstiehl (1985), in the form of Brandes, "The left-right
//! planarity test" (2009). A depth-first search orients the edges; a second one asks whether the
//! back edges can be put on the left or on the right of the tree so that no two of them cross.
//! Linear but for the sorting of edges; both searches keep their own stack.

/// True if the graph is planar. Loops and parallel edges do not matter.
pub fn is_planar(nodes: usize, edges: &[(u32, u32)]) -> bool {
    let mut simple: Vec<(u32, u32)> =
        edges.iter().filter(|(a, b)| a != b).map(|&(a, b)| (a.min(b), a.max(b))).collect();
    simple.sort_unstable();
    simple.dedup();
    // Euler: a simple planar graph has at most 3n - 6 edges.
    if nodes > 2 && simple.len() > 3 * nodes - 6 {
        return false;
    }
    let mut test = Test::new(nodes, &simple);
    test.orient();
    test.sort_by_nesting();
    test.sides_fit()
}

const UNSEEN: u32 = u32::MAX;

/// Back edges that go to the same side, by their highest and lowest return.
#[derive(Clone, Copy, Default)]
struct Interval {
    low: Option<usize>,
    high: Option<usize>,
}

impl Interval {
    fn is_empty(self) -> bool {
        self.high.is_none()
    }
}

/// Two intervals that must go to different sides.
#[derive(Clone, Copy, Default)]
struct Conflict {
    left: Interval,
    right: Interval,
}

struct Test {
    /// Incident edges of each node; after the orientation, outgoing edges only.
    incident: Vec<Vec<usize>>,
    ends: Vec<(u32, u32)>,
    /// Ends in the direction of the search.
    source: Vec<u32>,
    target: Vec<u32>,
    height: Vec<u32>,
    parent: Vec<Option<usize>>,
    /// Heights of the lowest and second lowest node that an edge returns to.
    low: Vec<u32>,
    second_low: Vec<u32>,
    nesting: Vec<u32>,
    roots: Vec<u32>,
    /// The next lower back edge of the same interval.
    below: Vec<Option<usize>>,
    lowest_return: Vec<usize>,
    conflicts: Vec<Conflict>,
    bottom: Vec<usize>,
}

impl Test {
    fn new(nodes: usize, edges: &[(u32, u32)]) -> Self {
        let mut incident = vec![Vec::new(); nodes];
        for (edge, &(a, b)) in edges.iter().enumerate() {
            incident[a as usize].push(edge);
            incident[b as usize].push(edge);
        }
        let count = edges.len();
        Self {
            incident,
            ends: edges.to_vec(),
            source: vec![UNSEEN; count],
            target: vec![UNSEEN; count],
            height: vec![UNSEEN; nodes],
            parent: vec![None; nodes],
            low: vec![0; count],
            second_low: vec![0; count],
            nesting: vec![0; count],
            roots: Vec::new(),
            below: vec![None; count],
            lowest_return: (0..count).collect(),
            conflicts: Vec::new(),
            bottom: vec![0; count],
        }
    }

    fn height_of(&self, node: u32) -> u32 {
        self.height[node as usize]
    }

    /// The first search: orients every edge and finds how far down it returns.
    fn orient(&mut self) {
        let mut next = vec![0_usize; self.incident.len()];
        for root in 0..self.incident.len() as u32 {
            if self.height_of(root) != UNSEEN {
                continue;
            }
            self.height[root as usize] = 0;
            self.roots.push(root);
            let mut stack = vec![root];
            while let Some(&node) = stack.last() {
                let Some(&edge) = self.incident[node as usize].get(next[node as usize]) else {
                    stack.pop();
                    continue;
                };
                let is_returning =
                    self.source[edge] == node && self.parent_of_target(edge) == Some(edge);
                if self.source[edge] != UNSEEN && !is_returning {
                    next[node as usize] += 1;
                    continue;
                }
                if !is_returning {
                    let (a, b) = self.ends[edge];
                    let other = if a == node { b } else { a };
                    (self.source[edge], self.target[edge]) = (node, other);
                    self.low[edge] = self.height_of(node);
                    self.second_low[edge] = self.height_of(node);
                    if self.height_of(other) == UNSEEN {
                        self.parent[other as usize] = Some(edge);
                        self.height[other as usize] = self.height_of(node) + 1;
                        stack.push(other);
                        // The edge is looked at again once its subtree is done.
                        continue;
                    }
                    self.low[edge] = self.height_of(other);
                }
                self.nest(node, edge);
                next[node as usize] += 1;
            }
        }
    }

    fn parent_of_target(&self, edge: usize) -> Option<usize> {
        self.parent[self.target[edge] as usize]
    }

    /// The nesting depth of a finished edge, and what it means for the edge above.
    fn nest(&mut self, node: u32, edge: usize) {
        let chordal = self.second_low[edge] < self.height_of(node);
        self.nesting[edge] = 2 * self.low[edge] + u32::from(chordal);
        let Some(above) = self.parent[node as usize] else { return };
        let (low, second) = (self.low[edge], self.second_low[edge]);
        if low < self.low[above] {
            self.second_low[above] = self.low[above].min(second);
            self.low[above] = low;
        } else if low > self.low[above] {
            self.second_low[above] = self.second_low[above].min(low);
        } else {
            self.second_low[above] = self.second_low[above].min(second);
        }
    }

    fn sort_by_nesting(&mut self) {
        for node in 0..self.incident.len() {
            let mut outgoing: Vec<usize> = self.incident[node]
                .iter()
                .copied()
                .filter(|&edge| self.source[edge] == node as u32)
                .collect();
            outgoing.sort_by_key(|&edge| self.nesting[edge]);
            self.incident[node] = outgoing;
        }
    }

    /// The second search: false where two back edges have no side left.
    fn sides_fit(&mut self) -> bool {
        let mut next = vec![0_usize; self.incident.len()];
        for root in self.roots.clone() {
            let mut stack = vec![(root, false)];
            while let Some((node, is_returning)) = stack.last_mut() {
                let node = *node;
                let Some(&edge) = self.incident[node as usize].get(next[node as usize]) else {
                    stack.pop();
                    if let Some(above) = self.parent[node as usize] {
                        self.trim(above);
                    }
                    continue;
                };
                if !std::mem::take(is_returning) {
                    self.bottom[edge] = self.conflicts.len();
                    if self.parent_of_target(edge) == Some(edge) {
                        *is_returning = true;
                        stack.push((self.target[edge], false));
                        continue;
                    }
                    let whole = Interval { low: Some(edge), high: Some(edge) };
                    self.conflicts.push(Conflict { left: Interval::default(), right: whole });
                }
                if self.low[edge] < self.height_of(node)
                    && let Some(above) = self.parent[node as usize]
                {
                    if next[node as usize] == 0 {
                        self.lowest_return[above] = self.lowest_return[edge];
                    } else if !self.constrain(edge, above) {
                        return false;
                    }
                }
                next[node as usize] += 1;
            }
        }
        true
    }

    fn conflicts_with(&self, interval: Interval, edge: usize) -> bool {
        interval.high.is_some_and(|high| self.low[high] > self.low[edge])
    }

    /// Joins the returns of `edge` with those of its earlier siblings.
    fn constrain(&mut self, edge: usize, above: usize) -> bool {
        let mut joined = Conflict::default();
        while self.conflicts.len() > self.bottom[edge] {
            let Some(mut top) = self.conflicts.pop() else { break };
            if !top.left.is_empty() {
                std::mem::swap(&mut top.left, &mut top.right);
            }
            if !top.left.is_empty() {
                return false;
            }
            let Some(lowest) = top.right.low else { continue };
            if self.low[lowest] > self.low[above] {
                match joined.right.low {
                    None => joined.right.high = top.right.high,
                    Some(low) => self.below[low] = top.right.high,
                }
                joined.right.low = top.right.low;
            } else {
                self.below[lowest] = Some(self.lowest_return[above]);
            }
        }
        while let Some(&(mut top)) = self.conflicts.last() {
            if !self.conflicts_with(top.left, edge) && !self.conflicts_with(top.right, edge) {
                break;
            }
            self.conflicts.pop();
            if self.conflicts_with(top.right, edge) {
                std::mem::swap(&mut top.left, &mut top.right);
            }
            if self.conflicts_with(top.right, edge) {
                return false;
            }
            if let Some(low) = joined.right.low {
                self.below[low] = top.right.high;
            }
            if top.right.low.is_some() {
                joined.right.low = top.right.low;
            }
            match joined.left.low {
                None => joined.left.high = top.left.high,
                Some(low) => self.below[low] = top.left.high,
            }
            joined.left.low = top.left.low;
        }
        if !joined.left.is_empty() || !joined.right.is_empty() {
            self.conflicts.push(joined);
        }
        true
    }

    fn lowest(&self, conflict: Conflict) -> u32 {
        let low = |interval: Interval| interval.low.map_or(UNSEEN, |edge| self.low[edge]);
        low(conflict.left).min(low(conflict.right))
    }

    /// Forgets the back edges that end where the edge `above` begins.
    fn trim(&mut self, above: usize) {
        let node = self.source[above];
        while self.conflicts.last().is_some_and(|&top| self.lowest(top) == self.height_of(node)) {
            self.conflicts.pop();
        }
        if let Some(mut top) = self.conflicts.pop() {
            let trimmed = |test: &Self, mut interval: Interval| {
                while let Some(high) = interval.high.filter(|&high| test.target[high] == node) {
                    interval.high = test.below[high];
                }
                interval
            };
            top.left = trimmed(self, top.left);
            if let (None, Some(low)) = (top.left.high, top.left.low) {
                self.below[low] = top.right.low;
                top.left.low = None;
            }
            top.right = trimmed(self, top.right);
            if let (None, Some(low)) = (top.right.high, top.right.low) {
                self.below[low] = top.left.low;
                top.right.low = None;
            }
            self.conflicts.push(top);
        }
        if self.low[above] < self.height_of(node)
            && let Some(top) = self.conflicts.last()
        {
            self.below[above] = match (top.left.high, top.right.high) {
                (Some(left), Some(right)) if self.low[left] > self.low[right] => Some(left),
                (left, None) => left,
                (_, right) => right,
            };
        }
    }
}

#[cfg(test)]
mod tests {
    use super::is_planar;
    use pretty_assertions::assert_eq;

    fn complete(nodes: u32) -> Vec<(u32, u32)> {
        (0..nodes).flat_map(|a| (0..a).map(move |b| (b, a))).collect()
    }

    #[test]
    fn known_graphs() {
        // Kuratowski (1930): K5 and K3,3.
        let k33: Vec<(u32, u32)> = (0..3).flat_map(|a| (3..6).map(move |b| (a, b))).collect();
        assert!(is_planar(4, &complete(4)));
        assert!(!is_planar(5, &complete(5)));
        assert!(is_planar(5, &complete(5)[1..]));
        assert!(!is_planar(6, &k33));
        assert!(is_planar(6, &k33[1..]));
        // Petersen's graph is not planar.
        let petersen: Vec<(u32, u32)> =
            (0..5).flat_map(|i| [(i, (i + 1) % 5), (i, i + 5), (i + 5, (i + 2) % 5 + 5)]).collect();
        assert!(!is_planar(10, &petersen));
        assert!(is_planar(0, &[]));
        assert!(is_planar(2, &[(0, 1), (1, 0), (0, 0)]));
    }

    #[test]
    fn grids_are_planar_and_long_paths_need_no_deep_stack() {
        let (width, height) = (30, 30);
        let grid: Vec<(u32, u32)> = (0..height)
            .flat_map(|y| (0..width).map(move |x| (x, y)))
            .flat_map(|(x, y)| {
                let here = y * width + x;
                let right = (x + 1 < width).then_some((here, here + 1));
                let down = (y + 1 < height).then_some((here, here + width));
                right.into_iter().chain(down)
            })
            .collect();
        assert!(is_planar(900, &grid));
        // Two handles across a grid tie its border to its middle.
        let mut tied = grid;
        tied.extend([(0, 465), (29, 434), (870, 436), (899, 404)]);
        assert!(!is_planar(900, &tied));
        let path: Vec<(u32, u32)> = (1..200_000).map(|node| (node - 1, node)).collect();
        assert!(is_planar(200_000, &path));
    }

    #[test]
    fn labelled_planar_graphs_are_as_many_as_they_should_be() {
        // The numbers of labelled planar graphs on n nodes: OEIS A066537 (from memory).
        for (nodes, expected) in [(3, 8), (4, 64), (5, 1023), (6, 32_071)] {
            let all = complete(nodes);
            let planar = (0_u32..1 << all.len())
                .filter(|choice| {
                    let edges: Vec<(u32, u32)> = (0_u32..)
                        .zip(&all)
                        .filter(|(bit, _)| choice >> bit & 1 == 1)
                        .map(|(_, &edge)| edge)
                        .collect();
                    is_planar(nodes as usize, &edges)
                })
                .count();
            assert_eq!(planar, expected, "{nodes} nodes");
        }
    }
}
