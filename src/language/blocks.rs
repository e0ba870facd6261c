//! Own blocks: their definitions, and putting them in where they are used.
//!
//! Putting in is a rewriting of statements, done before anything is built: a line of a block is copied
//! with its names behind that of the use ([`Scope`]). What a use would grow to is counted beforehand,
//! innermost blocks first, so that doubling blocks are refused before they fill the memory, and the nesting
//! is bounded, so that recursion is safe.

use super::diagnostic::{Diagnostic, Span};
use super::names::nearest;
use super::scope::{Scope, names_of};
use super::syntax::{Block, Content, Device, Item, Name, Statement, StatementKind};
use super::walks::node_fault;
use rustc_hash::{FxHashMap, FxHashSet};

/// Elements that blocks may expand into.
const MOST_ELEMENTS: usize = 200_000;
/// Bytes that the names of these elements may fill.
const MOST_BYTES: usize = 200_000_000;
/// Blocks may use each other this deep.
const DEEPEST: usize = 100;

/// A block with its lines.
struct Definition {
    head: Block,
    body: Vec<Statement>,
    /// Names that belong to the block: elements, devices, parameters.
    own: FxHashSet<String>,
    /// Names of two-terminal elements.
    elements: FxHashSet<String>,
}

/// What a block grows to.
#[derive(Clone, Copy, Default)]
struct Size {
    elements: usize,
    names: usize,
    bytes: usize,
    depth: usize,
}

/// The statements with all blocks put in; definitions vanish.
pub(crate) fn put_in(statements: Vec<Statement>, faults: &mut Vec<Diagnostic>) -> Vec<Statement> {
    let (outside, blocks) = definitions(statements, faults);
    let index: FxHashMap<&str, usize> =
        blocks.iter().zip(0..).map(|(block, at)| (block.head.name.text.as_str(), at)).collect();
    let sizes = sizes(&blocks, &index, faults);
    let mut expander = Expander { blocks: &blocks, index: &index, faults, out: Vec::new() };
    let mut total = 0_usize;
    for statement in outside {
        let StatementKind::Use(device) = statement.kind else {
            expander.out.push(statement);
            continue;
        };
        let Some(at) = expander.find(&device.kind) else { continue };
        // A block in a circle has no size, and its own error.
        let Some(size) = sizes[at] else { continue };
        total = total.saturating_add(size.elements);
        if size.depth > DEEPEST {
            expander.faults.push(
                Diagnostic::error(
                    "nesting",
                    device.kind.span,
                    format!("blocks are used more than {DEEPEST} deep"),
                )
                .help("use fewer levels of blocks"),
            );
        } else if total > MOST_ELEMENTS || size.bytes > MOST_BYTES {
            expander.faults.push(
                Diagnostic::error(
                    "too-large",
                    device.kind.span,
                    format!("the blocks expand into more than {MOST_ELEMENTS} elements"),
                )
                .help("a block that uses another twice doubles it at each level"),
            );
            break;
        } else {
            expander.instantiate(at, &device, statement.span, None);
        }
    }
    expander.out
}

/// Sorts statements into those outside of blocks and the blocks.
fn definitions(
    statements: Vec<Statement>,
    faults: &mut Vec<Diagnostic>,
) -> (Vec<Statement>, Vec<Definition>) {
    let mut outside = Vec::new();
    let mut blocks: Vec<Definition> = Vec::new();
    let mut places: FxHashMap<String, Span> = FxHashMap::default();
    let mut open: Option<(Block, Vec<Statement>)> = None;
    for statement in statements {
        let span = statement.span;
        match (statement.kind, &mut open) {
            (StatementKind::BlockStart(block), None) => {
                check_head(&block, faults);
                if let Some(first) = places.insert(block.name.text.clone(), block.name.span) {
                    let message = format!("a second block `{}`", block.name.text);
                    let fault = Diagnostic::error("duplicate", block.name.span, message);
                    faults.push(fault.label(first, "the first one"));
                }
                open = Some((block, Vec::new()));
            }
            (StatementKind::BlockEnd, Some(_)) => {
                if let Some((head, body)) = open.take() {
                    blocks.push(Definition::new(head, body));
                }
            }
            (StatementKind::BlockEnd, None) => faults.push(
                Diagnostic::error("block-end", span, "`end` closes no block")
                    .help("a block begins with `block NAME(a, b; R, C)`"),
            ),
            (
                kind @ (StatementKind::Walk(_)
                | StatementKind::Device(_)
                | StatementKind::Let(..)
                | StatementKind::Use(_)),
                Some((_, body)),
            ) => body.push(Statement { kind, span, used: None }),
            (_, Some((block, _))) => faults.push(
                Diagnostic::error("block-statement", span, "this line has no place in a block")
                    .label(block.name.span, "the block begins here")
                    .help("close the block with `end` before it"),
            ),
            (kind, None) => outside.push(Statement { kind, span, used: None }),
        }
    }
    if let Some((head, body)) = open {
        faults.push(
            Diagnostic::error(
                "block-end",
                head.name.span,
                format!("the block `{}` is never closed", head.name.text),
            )
            .help("write `end` after its last line"),
        );
        blocks.push(Definition::new(head, body));
    }
    (outside, blocks)
}

fn check_head(block: &Block, faults: &mut Vec<Diagnostic>) {
    let mut seen: FxHashMap<&str, Span> = FxHashMap::default();
    for name in block.terminals.iter().chain(block.parameters.iter().map(|(name, _)| name)) {
        if let Some(first) = seen.insert(&name.text, name.span) {
            let message = format!("`{}` stands twice", name.text);
            let fault = Diagnostic::error("duplicate", name.span, message);
            faults.push(fault.label(first, "here first"));
        }
        faults.extend(node_fault(name, false));
        if super::names::is_reserved(&name.text) {
            let message = format!("`{}` is a word of the language", name.text);
            faults.push(Diagnostic::error("reserved", name.span, message));
        }
    }
}

impl Definition {
    fn new(head: Block, body: Vec<Statement>) -> Self {
        let mut own: FxHashSet<String> =
            head.parameters.iter().map(|(name, _)| name.text.clone()).collect();
        let mut elements = FxHashSet::default();
        for statement in &body {
            match &statement.kind {
                StatementKind::Walk(steps) => {
                    for part in steps.iter().skip(1).step_by(2).flat_map(|step| &step.parts) {
                        elements.extend(part.words.last().map(|name| name.text.clone()));
                    }
                }
                StatementKind::Device(device) | StatementKind::Use(device) => {
                    own.insert(device.name.text.clone());
                }
                StatementKind::Let(name, _) => {
                    own.insert(name.text.clone());
                }
                _ => {}
            }
        }
        own.extend(elements.iter().cloned());
        Self { head, body, own, elements }
    }

    /// The uses in it.
    fn uses(&self) -> impl Iterator<Item = &Device> {
        self.body.iter().filter_map(|statement| match &statement.kind {
            StatementKind::Use(device) => Some(device),
            _ => None,
        })
    }
}

/// What each block grows to; `None` for blocks in a circle, which are reported.
fn sizes(
    blocks: &[Definition],
    index: &FxHashMap<&str, usize>,
    faults: &mut Vec<Diagnostic>,
) -> Vec<Option<Size>> {
    let mut sizes: Vec<Option<Size>> = vec![None; blocks.len()];
    let mut begun = vec![false; blocks.len()];
    let inner = |at: usize| -> Vec<(usize, Span)> {
        let known =
            |device: &Device| Some((*index.get(device.kind.text.as_str())?, device.kind.span));
        blocks[at].uses().filter_map(known).collect()
    };
    for root in 0..blocks.len() {
        if begun[root] {
            continue;
        }
        begun[root] = true;
        let mut stack = vec![(root, inner(root))];
        while let Some((at, rest)) = stack.last_mut() {
            let at = *at;
            let Some((next, span)) = rest.pop() else {
                sizes[at] = size(&blocks[at], index, &sizes);
                stack.pop();
                continue;
            };
            if !begun[next] {
                begun[next] = true;
                stack.push((next, inner(next)));
            } else if stack.iter().any(|(open, _)| *open == next) {
                let name = &blocks[next].head.name;
                faults.push(
                    Diagnostic::error(
                        "circular",
                        span,
                        format!("the block `{}` uses itself", name.text),
                    )
                    .label(name.span, "the block")
                    .help("a block may use others that do not use it"),
                );
            }
        }
    }
    sizes
}

fn size(
    block: &Definition,
    index: &FxHashMap<&str, usize>,
    sizes: &[Option<Size>],
) -> Option<Size> {
    let mut total = Size { depth: 1, ..Size::default() };
    for statement in &block.body {
        total.elements = total.elements.saturating_add(match &statement.kind {
            StatementKind::Walk(steps) => {
                steps.iter().skip(1).step_by(2).map(|step| step.parts.len()).sum()
            }
            _ => 1,
        });
        total.names = total.names.saturating_add(names_of(statement));
        total.bytes = total.bytes.saturating_add(statement.span.end - statement.span.start);
    }
    for device in block.uses() {
        let Some(at) = index.get(device.kind.text.as_str()) else { continue };
        let inner = sizes[*at]?;
        // Each name inside grows by that of the use, or becomes the node of a terminal.
        let roles = device.items.iter().filter_map(|item| match item {
            Item::Role(words) => words.last().map(|name| name.text.len()),
            _ => None,
        });
        let longest = roles.chain([device.name.text.len() + 1]).max().unwrap_or_default();
        total.elements = total.elements.saturating_add(inner.elements);
        total.names = total.names.saturating_add(inner.names);
        total.bytes = total
            .bytes
            .saturating_add(inner.bytes)
            .saturating_add(inner.names.saturating_mul(longest));
        total.depth = total.depth.max(inner.depth + 1);
    }
    Some(total)
}

/// Puts blocks in.
struct Expander<'b> {
    blocks: &'b [Definition],
    index: &'b FxHashMap<&'b str, usize>,
    faults: &'b mut Vec<Diagnostic>,
    out: Vec<Statement>,
}

impl Expander<'_> {
    fn find(&mut self, name: &Name) -> Option<usize> {
        let found = self.index.get(name.text.as_str()).copied();
        if found.is_none() {
            let fault = Diagnostic::error(
                "unknown-block",
                name.span,
                format!("there is no block `{}`", name.text),
            );
            let known = self.blocks.iter().map(|block| block.head.name.text.as_str());
            self.faults.push(match nearest(&name.text, known) {
                Some(near) => fault.help(format!("is it `{near}`?")),
                None => fault.help(format!("define it: `block {}(a, b; R)` … `end`", name.text)),
            });
        }
        found
    }

    /// Copies a block's lines for a use; `outer` is the scope of the use, and `used` the place of the
    /// outermost one. Recursion is bounded by the depth that was counted.
    fn instantiate(&mut self, at: usize, device: &Device, used: Span, outer: Option<&Scope<'_>>) {
        let blocks = self.blocks;
        let block = &blocks[at];
        let Some((terminals, mut given)) = self.bind(block, device) else { return };
        let name = outer.map_or_else(|| device.name.clone(), |scope| scope.name(&device.name));
        let terminals = terminals
            .into_iter()
            .map(|(own, node)| {
                let node = outer.map_or_else(|| node.text.clone(), |scope| scope.node(&node).text);
                (own, node)
            })
            .collect();
        let scope = Scope { prefix: name.text.clone(), terminals, own: &block.own };
        let push = |out: &mut Vec<Statement>, kind| {
            out.push(Statement { kind, span: used, used: outer.map(|_| used) });
        };
        push(&mut self.out, StatementKind::Instance(name));
        let mut values: FxHashMap<&str, Option<Content>> = FxHashMap::default();
        for (parameter, default) in &block.head.parameters {
            // What the use gives belongs to its own scope, a default to the block's.
            let value = match given.remove(&parameter.text) {
                Some(value) => value.map(|value| match outer {
                    Some(outer) => outer.content(&value),
                    None => value,
                }),
                None => default.as_ref().map(|value| scope.content(value)),
            };
            if block.elements.contains(&parameter.text) {
                values.insert(&parameter.text, value);
            } else {
                let kind = StatementKind::Let(scope.name(parameter), value.map(Box::new));
                self.out.push(Statement { kind, span: parameter.span, used: Some(used) });
            }
        }
        for statement in &block.body {
            match &statement.kind {
                StatementKind::Use(inner) => {
                    if let Some(at) = self.find(&inner.kind) {
                        self.instantiate(at, inner, used, Some(&scope));
                    }
                }
                kind => {
                    let kind = scope.statement(kind, &values, self.faults);
                    self.out.push(Statement { kind, span: statement.span, used: Some(used) });
                }
            }
        }
    }

    /// Sorts the items of a use into terminals and parameters.
    #[expect(clippy::type_complexity, reason = "a pair of tables, taken apart at once")]
    fn bind(
        &mut self,
        block: &Definition,
        device: &Device,
    ) -> Option<(Vec<(String, Name)>, FxHashMap<String, Option<Content>>)> {
        let before = self.faults.len();
        let mut terminals: Vec<(String, Name)> = Vec::new();
        let mut given: FxHashMap<String, Option<Content>> = FxHashMap::default();
        let is_terminal = |name: &Name| block.head.terminals.iter().any(|t| t.text == name.text);
        for item in &device.items {
            let (name, value) = match item {
                Item::Bias(quantity) => {
                    self.faults.push(
                        Diagnostic::error("bias", quantity.span, "`at` means nothing for a block")
                            .help("give the device in the block its bias"),
                    );
                    continue;
                }
                Item::Binding(name, value) => (name, Some(value.clone())),
                Item::Role(words) => match words.as_slice() {
                    [name, node] if is_terminal(name) => {
                        self.faults.extend(node_fault(node, false));
                        if terminals.iter().any(|(known, _)| *known == name.text) {
                            self.twice(name);
                        }
                        terminals.push((name.text.clone(), node.clone()));
                        continue;
                    }
                    [name] if !is_terminal(name) => (name, None),
                    [name, ..] if is_terminal(name) => {
                        let message = format!("`{}` takes one node", name.text);
                        self.faults.push(
                            Diagnostic::error("role", name.span, message)
                                .help(format!("write `{} node`, and a comma", name.text)),
                        );
                        continue;
                    }
                    [name, ..] => (name, None),
                    [] => continue,
                },
            };
            if !block.head.parameters.iter().any(|(own, _)| own.text == name.text) {
                self.unknown_item(block, name);
            } else if given.insert(name.text.clone(), value).is_some() {
                self.twice(name);
            }
        }
        let missing: Vec<&str> = block
            .head
            .terminals
            .iter()
            .map(|terminal| terminal.text.as_str())
            .filter(|terminal| !terminals.iter().any(|(known, _)| known == terminal))
            .collect();
        if !missing.is_empty() && self.faults.len() == before {
            let message =
                format!("`{}` has no node for `{}`", device.name.text, missing.join("`, `"));
            self.faults.push(
                Diagnostic::error("missing-role", device.name.span, message)
                    .label(block.head.name.span, "the block")
                    .help(format!("write `{} node`", missing[0])),
            );
        }
        (self.faults.len() == before).then_some((terminals, given))
    }

    fn twice(&mut self, name: &Name) {
        let message = format!("`{}` is given twice", name.text);
        self.faults.push(Diagnostic::error("duplicate", name.span, message));
    }

    fn unknown_item(&mut self, block: &Definition, name: &Name) {
        let head = &block.head;
        let message =
            format!("`{}` is no terminal and no parameter of `{}`", name.text, head.name.text);
        let fault = Diagnostic::error("unknown-item", name.span, message);
        let terminals = head.terminals.iter().map(|name| name.text.as_str());
        let parameters = head.parameters.iter().map(|(name, _)| name.text.as_str());
        self.faults.push(match nearest(&name.text, terminals.clone().chain(parameters.clone())) {
            Some(near) => fault.help(format!("is it `{near}`?")),
            None => fault.help(format!(
                "terminals: {}; parameters: {}",
                terminals.collect::<Vec<_>>().join(", "),
                parameters.collect::<Vec<_>>().join(", ")
            )),
        });
    }
}
