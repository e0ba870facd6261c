//! The state of an elimination between two choices, for one graph, and its sign.
//!
//! A node is on the frontier from the first choice that touches it to the last. The state is an
//! array of labels over the frontier: 0 for the block of the reference node, else 1, 2, … by first
//! appearance. It stands for a determinant whose rows are, in order, the blocks by label and then
//! the nodes that have not entered, in the order of their entry; an entering node takes the label
//! after the largest. Merging is one step of Laplace's expansion along an incidence row, so each
//! has a sign; relabelling permutes rows, so it has the permutation's parity.

use rustc_hash::FxHashMap;
use smallvec::SmallVec;

use super::choice::Pair;

/// Labels over the frontier.
pub(crate) type Labels = SmallVec<[u8; 16]>;

/// The longest frontier that labels can number.
pub(crate) const LONGEST: usize = 250;

/// Position of the reference node in a merge.
const REFERENCE: u16 = u16::MAX;

/// What one choice does to the frontier of one graph.
#[derive(Clone, Debug)]
pub(crate) struct Level {
    /// Length of the frontier before the choice.
    before: usize,
    /// How many nodes enter; they stand behind the others.
    entering: usize,
    /// For each alternative its merges, as positions.
    merges: Vec<Vec<(u16, u16)>>,
    /// True for positions that leave afterwards.
    leaves: Vec<bool>,
}

impl Level {
    /// The longest array that this level handles.
    pub(crate) fn length(&self) -> usize {
        self.before + self.entering
    }
}

/// The levels of one graph, for the merges of each alternative of each choice in order.
///
/// Node 0 is the reference.
pub(crate) fn levels(choices: &[Vec<&[Pair]>], nodes: usize) -> Vec<Level> {
    let mut last = vec![0_usize; nodes];
    for (level, alternatives) in choices.iter().enumerate() {
        for node in touched(alternatives) {
            last[node as usize] = level;
        }
    }
    let mut seen = vec![false; nodes];
    let mut frontier: Vec<u32> = Vec::new();
    let mut all = Vec::with_capacity(choices.len());
    for (level, alternatives) in choices.iter().enumerate() {
        let before = frontier.len();
        for node in touched(alternatives) {
            if !std::mem::replace(&mut seen[node as usize], true) {
                frontier.push(node);
            }
        }
        let position = |node: u32| {
            if node == 0 {
                return REFERENCE;
            }
            frontier.iter().position(|&other| other == node).map_or(REFERENCE, |at| at as u16)
        };
        let merges = alternatives
            .iter()
            .map(|pairs| pairs.iter().map(|pair| (position(pair.0), position(pair.1))).collect())
            .collect();
        let leaves: Vec<bool> = frontier.iter().map(|&node| last[node as usize] == level).collect();
        all.push(Level { before, entering: frontier.len() - before, merges, leaves });
        frontier.retain(|&node| last[node as usize] != level);
    }
    all
}

/// The nodes of these merges, in order, without the reference; may repeat.
fn touched<'p>(alternatives: &'p [&[Pair]]) -> impl Iterator<Item = u32> + 'p {
    alternatives
        .iter()
        .flat_map(|pairs| pairs.iter().flat_map(|pair| [pair.0, pair.1]))
        .filter(|&node| node != 0)
}

/// The state after an alternative, and whether the term changes its sign; `None` when the term is 0.
pub(crate) fn step(labels: &[u8], level: &Level, alternative: usize) -> Option<(Labels, bool)> {
    let mut state: Labels = SmallVec::from_slice(labels);
    let mut blocks = labels.iter().copied().max().unwrap_or(0);
    for _ in 0..level.entering {
        blocks += 1;
        state.push(blocks);
    }
    let mut negative = false;
    for &(first, second) in &level.merges[alternative] {
        negative ^= merge(&mut state, first, second)?;
    }
    for position in 0..state.len() {
        let label = state[position];
        if level.leaves[position] && label != 0 {
            let stays = state
                .iter()
                .zip(&level.leaves)
                .enumerate()
                .any(|(other, (&l, &leaves))| l == label && (!leaves || other > position));
            if !stays {
                return None;
            }
        }
    }
    let mut position = 0;
    state.retain(|_| {
        position += 1;
        !level.leaves[position - 1]
    });
    negative ^= canonical(&mut state);
    Some((state, negative))
}

/// Merges the blocks at two positions; the sign, or `None` when they are one already.
fn merge(state: &mut Labels, first: u16, second: u16) -> Option<bool> {
    let label = |position: u16| {
        if position == REFERENCE { 0 } else { state[usize::from(position)] }
    };
    let (la, lb) = (label(first), label(second));
    if la == lb {
        return None;
    }
    // The row is e_la − e_lb. Expanding along column la gives (−1)^(la−1); where la is the
    // reference only −e_lb is left.
    let (gone, into, negative) =
        if la == 0 { (lb, 0, lb % 2 == 1) } else { (la, lb, la.is_multiple_of(2)) };
    let into = if into > gone { into - 1 } else { into };
    for label in state.iter_mut() {
        if *label == gone {
            *label = into;
        } else if *label > gone {
            *label -= 1;
        }
    }
    Some(negative)
}

/// Numbers the blocks by first appearance; true when the relabelling is an odd permutation.
fn canonical(state: &mut Labels) -> bool {
    let mut fresh: SmallVec<[u8; 32]> = SmallVec::new();
    // `fresh[k]` is the old label of the new label k + 1.
    for label in state.iter_mut() {
        if *label == 0 {
            continue;
        }
        let new = match fresh.iter().position(|&old| old == *label) {
            Some(index) => index,
            None => {
                fresh.push(*label);
                fresh.len() - 1
            }
        };
        *label = new as u8 + 1;
    }
    let mut odd = false;
    for (index, &old) in fresh.iter().enumerate() {
        odd ^= fresh[index + 1..].iter().filter(|&&later| later < old).count() % 2 == 1;
    }
    odd
}

/// The distinct states of a level, numbered in the order of their discovery.
#[derive(Default)]
pub(crate) struct States {
    index: FxHashMap<Labels, u32>,
    labels: Vec<Labels>,
}

impl States {
    pub(crate) fn intern(&mut self, labels: Labels) -> u32 {
        if let Some(&id) = self.index.get(&labels) {
            return id;
        }
        let id = self.labels.len() as u32;
        self.labels.push(labels.clone());
        self.index.insert(labels, id);
        id
    }

    pub(crate) fn all(&self) -> &[Labels] {
        &self.labels
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn merging_follows_the_expansion_of_an_incidence_row() {
        let check = |labels: &[u8], first: u16, second: u16, expect: Option<(&[u8], bool)>| {
            let mut state: Labels = SmallVec::from_slice(labels);
            let sign = merge(&mut state, first, second);
            assert_eq!(sign.map(|negative| (state.as_slice(), negative)), expect);
        };
        check(&[1, 2, 3], 0, 1, Some((&[1, 1, 2], false)));
        check(&[1, 2, 3], 1, 0, Some((&[1, 1, 2], true)));
        check(&[1, 2, 3], 1, REFERENCE, Some((&[1, 0, 2], true)));
        check(&[1, 2, 3], REFERENCE, 1, Some((&[1, 0, 2], false)));
        check(&[1, 2, 3], REFERENCE, 0, Some((&[0, 1, 2], true)));
        check(&[1, 1, 2], 0, 1, None);
        check(&[0, 1], 0, REFERENCE, None);
    }

    #[test]
    fn relabelling_has_the_parity_of_its_permutation() {
        let check = |labels: &[u8], expect: &[u8], odd: bool| {
            let mut state: Labels = SmallVec::from_slice(labels);
            assert_eq!(canonical(&mut state), odd, "{labels:?}");
            assert_eq!(state.as_slice(), expect);
        };
        check(&[1, 0, 2, 1], &[1, 0, 2, 1], false);
        check(&[2, 1, 3], &[1, 2, 3], true);
        check(&[3, 1, 2], &[1, 2, 3], false);
        check(&[3, 0, 2, 1], &[1, 0, 2, 3], true);
    }
}
