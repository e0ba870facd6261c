//! Nodes and the wires that make several names one node.
//!
//! A union-find over the names (Galler & Fischer 1964); the first name in the file is the
//! one that is printed, and ground keeps its own.

use super::diagnostic::Span;
use super::names::is_ground;
use crate::circuit::{GROUND, Node, NodeId};
use rustc_hash::FxHashMap;

/// The nodes of a file, in the order of their first appearance; 0 is ground.
#[derive(Debug)]
pub(crate) struct Nodes {
    names: Vec<String>,
    places: Vec<Span>,
    index: FxHashMap<String, usize>,
    parent: Vec<usize>,
    /// Final numbers, by name; made by [`list`](Self::list).
    ids: Vec<NodeId>,
}

impl Default for Nodes {
    fn default() -> Self {
        Self {
            names: vec!["ground".to_owned()],
            places: vec![Span::default()],
            index: FxHashMap::default(),
            parent: vec![0],
            ids: Vec::new(),
        }
    }
}

impl Nodes {
    /// The node of that name, made if it is new.
    pub(crate) fn add(&mut self, name: &str, place: Span) -> usize {
        if let Some(node) = self.find(name) {
            return node;
        }
        let node = self.names.len();
        self.names.push(name.to_owned());
        self.places.push(place);
        self.index.insert(name.to_owned(), node);
        self.parent.push(node);
        node
    }

    /// The node of that name.
    pub(crate) fn find(&self, name: &str) -> Option<usize> {
        if is_ground(name) { Some(0) } else { self.index.get(name).copied() }
    }

    /// Where a node stood first.
    pub(crate) fn place(&self, node: usize) -> Span {
        self.places[node]
    }

    /// All names.
    pub(crate) fn names(&self) -> impl Iterator<Item = &str> {
        self.names.iter().map(String::as_str)
    }

    /// The printed name.
    pub(crate) fn name(&self, node: usize) -> &str {
        &self.names[self.root(node)]
    }

    /// True for the reference node and what is wired to it.
    pub(crate) fn is_ground(&self, node: usize) -> bool {
        self.root(node) == 0
    }

    /// Makes two nodes one.
    pub(crate) fn wire(&mut self, a: usize, b: usize) {
        let (a_root, b_root) = (self.root(a), self.root(b));
        // The earlier name stays, so ground does.
        let root = a_root.min(b_root);
        for node in [a, b, a_root, b_root] {
            self.parent[node] = root;
        }
    }

    fn root(&self, mut node: usize) -> usize {
        while self.parent[node] != node {
            node = self.parent[node];
        }
        node
    }

    /// The nodes of the circuit; numbers are given here.
    pub(crate) fn list(&mut self) -> Vec<Node> {
        let mut nodes: Vec<Node> = Vec::new();
        self.ids = vec![GROUND; self.names.len()];
        for node in 0..self.names.len() {
            // A parent always stands earlier, so its number is known.
            let parent = self.parent[node];
            if parent == node {
                self.ids[node] = NodeId(u32::try_from(nodes.len()).unwrap_or(u32::MAX));
                nodes.push(Node { name: self.names[node].clone(), aliases: Vec::new() });
            } else {
                self.ids[node] = self.ids[parent];
                nodes[self.ids[parent].0 as usize].aliases.push(self.names[node].clone());
            }
        }
        nodes
    }

    /// The number of a node, after [`list`](Self::list).
    pub(crate) fn id(&self, node: usize) -> NodeId {
        self.ids[node]
    }
}
