//! The order of computing, and which register holds which column.

use std::collections::BTreeSet;

use super::graph::{Graph, Level, NodeId, operands};

/// One column to compute.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Step {
    /// The node.
    pub node: NodeId,
    /// The register that takes it.
    pub register: usize,
}

/// Columns in order of computing. Registers are reused once nothing needs what they hold.
#[derive(Clone, Debug, Default)]
pub struct Schedule {
    /// Columns that all cases share, computed once a block.
    pub shared: Vec<Step>,
    /// Columns of each case.
    pub case: Vec<Step>,
    /// Of each node, the register that holds it (when it is a column).
    pub register_of: Vec<Option<usize>>,
    /// How many registers there are.
    pub registers: usize,
}

impl Schedule {
    /// The schedule of everything that `outputs` need; outputs keep their registers to the end.
    #[must_use]
    pub fn new(graph: &Graph, outputs: &BTreeSet<NodeId>) -> Self {
        let mut needed = vec![false; graph.nodes.len()];
        for id in outputs {
            needed[*id] = true;
        }
        for id in (0..graph.nodes.len()).rev() {
            if needed[id] {
                for operand in operands(&graph.nodes[id].op) {
                    needed[operand] = true;
                }
            }
        }
        let columns = |level: Level| -> Vec<NodeId> {
            (0..graph.nodes.len()).filter(|id| needed[*id] && graph.nodes[*id].level == level).collect()
        };
        let (shared, case) = (columns(Level::Shared), columns(Level::Case));

        // The last step of the list that needs a node; shared columns that a case needs must outlive every case.
        let last_use = |nodes: &[NodeId]| {
            let mut last = vec![None; graph.nodes.len()];
            for (step, id) in nodes.iter().enumerate() {
                for operand in operands(&graph.nodes[*id].op) {
                    last[operand] = Some(step);
                }
            }
            last
        };
        let (last_shared, last_case) = (last_use(&shared), last_use(&case));
        let kept = |id: NodeId| outputs.contains(&id);

        let mut pool = Pool::default();
        let mut register_of = vec![None; graph.nodes.len()];
        let mut assign = |nodes: &[NodeId], may_free: &dyn Fn(NodeId, usize) -> bool| -> Vec<Step> {
            nodes
                .iter()
                .enumerate()
                .map(|(step, id)| {
                    // The result never takes the register of an operand of its own step.
                    let register = pool.take();
                    register_of[*id] = Some(register);
                    let mut freed: Vec<NodeId> = operands(&graph.nodes[*id].op);
                    freed.sort_unstable();
                    freed.dedup();
                    for operand in freed {
                        if let Some(held) = register_of[operand]
                            && may_free(operand, step)
                        {
                            pool.give(held);
                        }
                    }
                    Step { node: *id, register }
                })
                .collect()
        };
        let shared_steps = assign(&shared, &|operand, step| {
            last_shared[operand] == Some(step) && last_case[operand].is_none() && !kept(operand)
        });
        let case_steps = assign(&case, &|operand, step| {
            graph.nodes[operand].level == Level::Case && last_case[operand] == Some(step) && !kept(operand)
        });
        Self { shared: shared_steps, case: case_steps, register_of, registers: pool.size }
    }
}

/// Registers that are free to be taken, lowest first.
#[derive(Default)]
struct Pool {
    free: BTreeSet<usize>,
    size: usize,
}

impl Pool {
    fn take(&mut self) -> usize {
        self.free.pop_first().unwrap_or_else(|| {
            self.size += 1;
            self.size - 1
        })
    }

    fn give(&mut self, register: usize) {
        self.free.insert(register);
    }
}
