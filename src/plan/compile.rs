//! Formulas to nodes.

use std::collections::BTreeMap;

use super::graph::{Arithmetic, Graph, InputKind, NodeId, Op};
use super::resolve::{Producer, Resolver};
use crate::candidate::Candidate;
use crate::catalog::{ByAttribute, Catalog, Correlations, Entry};
use crate::formula::{Binary, Expr, ExprKind, Formula, Function, PowerSteps, power_steps};
use crate::math::kernels;
use crate::quantity::Distribution;
use crate::quantity::written::Value;

/// A number that the organism may set.
#[derive(Clone, Debug)]
pub struct FreeNumber {
    /// The quantity.
    pub name: String,
    /// Its node.
    pub node: NodeId,
}

/// Builds nodes for one candidate's shape.
pub(super) struct Compiler<'a, 'r> {
    pub(super) catalog: &'a Catalog,
    pub(super) candidate: &'a Candidate,
    pub(super) resolver: &'r mut Resolver<'a>,
    pub(super) graph: Graph,
    pub(super) free: Vec<FreeNumber>,
    /// Quantity to its node.
    pub(super) quantities: BTreeMap<String, NodeId>,
    /// Entry's joint stream to the node of the set taken.
    joints: BTreeMap<String, NodeId>,
    /// Scores of correlated inputs, by stream name.
    scores: BTreeMap<String, NodeId>,
    /// Quantities being compiled, outermost first, to show cycles.
    path: Vec<String>,
    pub(super) cycle: Option<Vec<String>>,
}

impl<'a, 'r> Compiler<'a, 'r> {
    pub(super) fn new(
        catalog: &'a Catalog,
        candidate: &'a Candidate,
        resolver: &'r mut Resolver<'a>,
    ) -> Self {
        Self {
            catalog,
            candidate,
            resolver,
            graph: Graph::default(),
            free: Vec::new(),
            quantities: BTreeMap::new(),
            joints: BTreeMap::new(),
            scores: BTreeMap::new(),
            path: Vec::new(),
            cycle: None,
        }
    }

    /// Couples correlated streams: each takes a normal score that is a mix of independent ones (a Gaussian copula),
    /// in name order. `stream` names the stream of a correlated name.
    pub(super) fn couple(&mut self, correlations: &Correlations, stream: impl Fn(&str) -> String) {
        let names: Vec<String> = correlations.names().iter().map(|name| stream(name)).collect();
        let independent: Vec<NodeId> = names
            .iter()
            .map(|name| {
                let uniform = self.graph.uniform(name);
                self.graph.node(Op::Score(uniform))
            })
            .collect();
        for (row, name) in correlations.lower().iter().zip(&names) {
            let mut sum: Option<NodeId> = None;
            for (coefficient, score) in
                row.iter().zip(&independent).filter(|(coefficient, _)| **coefficient != 0.0)
            {
                let coefficient = self.graph.constant(*coefficient);
                let term = self.binary(Arithmetic::Multiply, coefficient, *score);
                sum = Some(sum.map_or(term, |sum| self.binary(Arithmetic::Add, sum, term)));
            }
            if let Some(sum) = sum {
                self.scores.insert(name.clone(), sum);
            }
        }
    }

    /// The node of a distribution under a stream's name.
    fn sampled(&mut self, stream: &str, kind: InputKind) -> NodeId {
        let probability = match self.scores.get(stream) {
            Some(score) => {
                let score = *score;
                self.graph.node(Op::Probability(score))
            }
            None => self.graph.uniform(stream),
        };
        let input = self.graph.input(kind);
        self.graph.node(Op::Quantile(input, probability))
    }

    fn catalog_number(&mut self, stream: &str, distribution: &Distribution) -> NodeId {
        if let Distribution::Exact(value) = distribution {
            self.graph.constant(*value)
        } else {
            self.sampled(stream, InputKind::Catalog(distribution.clone()))
        }
    }

    /// The node of a quantity, compiled with all it needs.
    pub(super) fn quantity(&mut self, name: &str) -> NodeId {
        if let Some(node) = self.quantities.get(name) {
            return *node;
        }
        if let Some(start) = self.path.iter().position(|above| above == name) {
            let mut cycle = self.path[start..].to_vec();
            cycle.push(name.to_owned());
            self.cycle.get_or_insert(cycle);
            return self.graph.constant(f64::NAN);
        }
        self.path.push(name.to_owned());
        let node = match self.resolver.producer(name) {
            Some(Producer::Given | Producer::Habitat) => self.stated(name),
            Some(Producer::Relation(at)) => self.relation(at),
            Some(Producer::Default) => self.default(name),
            None => self.graph.constant(f64::NAN),
        };
        self.path.pop();
        self.quantities.insert(name.to_owned(), node);
        node
    }

    fn stated(&mut self, name: &str) -> NodeId {
        let Some(reading) = self.candidate.stated(name) else { return self.graph.constant(f64::NAN) };
        match &reading.value {
            Value::Free(_) => self.free_number(name),
            Value::Unknown(Distribution::Exact(_)) => {
                let input = self.graph.input(InputKind::Stated(name.to_owned()));
                self.graph.node(Op::Setting(input))
            }
            Value::Unknown(distribution) => {
                // Quantities resampled from one file take the same row.
                let stream =
                    distribution.file().map_or_else(|| name.to_owned(), |file| format!("{file}!row"));
                self.sampled(&stream, InputKind::Stated(name.to_owned()))
            }
        }
    }

    fn free_number(&mut self, name: &str) -> NodeId {
        let input = self.graph.input(InputKind::Free(self.free.len()));
        let node = self.graph.node(Op::Setting(input));
        self.free.push(FreeNumber { name: name.to_owned(), node });
        node
    }

    fn default(&mut self, name: &str) -> NodeId {
        let default = self.catalog.quantities.get(name).and_then(|quantity| quantity.default.as_ref());
        match default.map(|default| default.value.of(&self.candidate.attributes)) {
            Some(Ok(Value::Free(_))) => self.free_number(name),
            Some(Ok(Value::Unknown(distribution))) => self.catalog_number(name, distribution),
            _ => self.graph.constant(f64::NAN),
        }
    }

    fn relation(&mut self, at: usize) -> NodeId {
        let relation = &self.catalog.relations[at];
        self.scattered(&relation.entry, &relation.formula, relation.scatter.as_ref())
    }

    /// The node of an entry's formula with the residual spread about it.
    pub(super) fn scattered(
        &mut self,
        entry: &'a Entry,
        formula: &Formula,
        scatter: Option<&ByAttribute<f64>>,
    ) -> NodeId {
        let value = self.formula(entry, formula);
        match scatter.and_then(|scatter| scatter.of(&self.candidate.attributes).ok()) {
            // One factor per draw and organism: lognormal about 1.
            Some(dex) if *dex > 0.0 => {
                let factor = kernels::exp(dex * std::f64::consts::LN_10);
                let spread = Distribution::Lognormal { median: 1.0, factor };
                let factor = self.catalog_number(&format!("{}!scatter", entry.id), &spread);
                self.binary(Arithmetic::Multiply, value, factor)
            }
            _ => value,
        }
    }

    /// The node of an entry's formula.
    pub(super) fn formula(&mut self, entry: &'a Entry, formula: &Formula) -> NodeId {
        self.couple_entry(entry);
        self.expr(entry, formula.root())
    }

    fn couple_entry(&mut self, entry: &Entry) {
        let full = |name: &str| format!("{}.{name}", entry.id);
        let first = entry.correlations.names().first();
        if first.is_some_and(|first| !self.scores.contains_key(&full(first))) {
            self.couple(&entry.correlations, full);
        }
    }

    fn expr(&mut self, entry: &'a Entry, expr: &Expr) -> NodeId {
        match &expr.kind {
            ExprKind::Number { si, .. } => self.graph.constant(*si),
            ExprKind::Infinity => self.graph.constant(f64::INFINITY),
            ExprKind::Name(name) => self.name(entry, name),
            ExprKind::Negate(a) => {
                let a = self.expr(entry, a);
                self.fold(Op::Negate(a))
            }
            ExprKind::Not(a) => {
                let a = self.expr(entry, a);
                self.fold(Op::Not(a))
            }
            ExprKind::Binary(operation, a, b) => {
                let (a, b) = (self.expr(entry, a), self.expr(entry, b));
                match operation {
                    Binary::Add => self.binary(Arithmetic::Add, a, b),
                    Binary::Subtract => self.binary(Arithmetic::Subtract, a, b),
                    Binary::Multiply => self.binary(Arithmetic::Multiply, a, b),
                    Binary::Divide => self.binary(Arithmetic::Divide, a, b),
                    Binary::Power => self.binary(Arithmetic::Power, a, b),
                    Binary::Less => self.binary(Arithmetic::Less, a, b),
                    Binary::LessOrEqual => self.binary(Arithmetic::LessOrEqual, a, b),
                    Binary::Greater => self.binary(Arithmetic::Less, b, a),
                    Binary::GreaterOrEqual => self.binary(Arithmetic::LessOrEqual, b, a),
                    Binary::Equal => self.binary(Arithmetic::Equal, a, b),
                    Binary::And => self.binary(Arithmetic::And, a, b),
                    Binary::Or => self.binary(Arithmetic::Or, a, b),
                }
            }
            ExprKind::Power(base, exponent, _) => {
                let base = self.expr(entry, base);
                self.power(base, power_steps(*exponent))
            }
            ExprKind::Call(function, arguments) => {
                let arguments: Vec<NodeId> =
                    arguments.iter().map(|argument| self.expr(entry, argument)).collect();
                self.call(*function, &arguments)
            }
            ExprKind::Choose(condition, a, b) => {
                let (condition, a, b) =
                    (self.expr(entry, condition), self.expr(entry, a), self.expr(entry, b));
                self.fold(Op::Choose(condition, a, b))
            }
            ExprKind::Curve(name, argument) => {
                let argument = self.expr(entry, argument);
                let Some(curve) = entry.curves.get(name) else { return self.graph.constant(f64::NAN) };
                let known = self.graph.curves.iter().position(|known| std::sync::Arc::ptr_eq(known, curve));
                let position = known.unwrap_or_else(|| {
                    self.graph.curves.push(std::sync::Arc::clone(curve));
                    self.graph.curves.len() - 1
                });
                self.fold(Op::Curve(position, argument))
            }
        }
    }

    fn call(&mut self, function: Function, arguments: &[NodeId]) -> NodeId {
        let fold = |compiler: &mut Self, operation| {
            let (first, rest) = arguments.split_first().expect("the parser asks for two or more arguments");
            rest.iter().fold(*first, |sum, next| compiler.binary(operation, sum, *next))
        };
        match function {
            Function::Min => fold(self, Arithmetic::Min),
            Function::Max => fold(self, Arithmetic::Max),
            _ => self.fold(Op::Unary(function, arguments[0])),
        }
    }

    fn power(&mut self, base: NodeId, steps: PowerSteps) -> NodeId {
        super::power::nodes(&mut |op| self.fold(op), base, steps)
    }

    fn binary(&mut self, operation: Arithmetic, a: NodeId, b: NodeId) -> NodeId {
        self.fold(Op::Binary(operation, a, b))
    }

    /// The node of an operation; a constant when all its operands are.
    fn fold(&mut self, op: Op) -> NodeId {
        let operands = super::graph::operands(&op);
        let constant = |graph: &Graph, id: NodeId| match graph.nodes[id].op {
            Op::Constant(bits) => Some(f64::from_bits(bits)),
            _ => None,
        };
        if operands.iter().all(|id| constant(&self.graph, *id).is_some()) {
            let value =
                self.graph.scalar(&op, |id| constant(&self.graph, id).unwrap_or(f64::NAN), |_| f64::NAN);
            return self.graph.constant(value);
        }
        self.graph.node(op)
    }

    fn name(&mut self, entry: &'a Entry, name: &str) -> NodeId {
        if let Some(parameter) = entry.parameters.get(name) {
            let full = format!("{}.{name}", entry.id);
            if let Some(adopted) = self.candidate.adopted.get(&full)
                && let Value::Unknown(distribution) = &adopted.reading.value
            {
                return self.catalog_number(&full, distribution);
            }
            return match parameter.value.of(&self.candidate.attributes) {
                Ok(distribution) => self.catalog_number(&full, distribution),
                Err(_) => self.graph.constant(f64::NAN),
            };
        }
        if let Some(joint) = &entry.joint
            && let Some(values) = joint.values.get(name)
        {
            let positions: Vec<f64> = (0..values.len()).map(|at| at as f64).collect();
            let set = Distribution::Discrete {
                values: positions.into(),
                cumulated: joint.cumulated.clone().into(),
            };
            // One stream and one input per entry, so that all values come from the same set.
            let stream = format!("{}!joint", entry.id);
            let position = match self.joints.get(&stream) {
                Some(node) => *node,
                None => {
                    let node = self.catalog_number(&stream, &set);
                    self.joints.insert(stream, node);
                    node
                }
            };
            let known = self.graph.tables.iter().position(|table| table == values);
            let table = known.unwrap_or_else(|| {
                self.graph.tables.push(values.clone());
                self.graph.tables.len() - 1
            });
            return self.fold(Op::Lookup(table, position));
        }
        if let Some(constant) = self.catalog.constants.get(name) {
            return self.graph.constant(constant.value);
        }
        self.quantity(name)
    }
}
