//! The enumeration of sets, depth first (what it leaves out, and why it may, stands in `sets`).

use super::bound::Bound;
use super::ending::Ending;
use super::kept::Kept;
use super::regrets::{Regrets, lesser_into, saved, sum};

/// A walk through all sets of at most so many sizes.
pub(super) struct Walk<'w, 'c, 'd> {
    pub(super) regrets: &'w Regrets,
    pub(super) price: f64,
    pub(super) most: usize,
    pub(super) bound: &'w Bound,
    pub(super) kept: &'w mut Kept<'c>,
    pub(super) ending: &'w Ending<'d>,
    /// Whether any one set will do.
    pub(super) any: bool,
}

/// A further size, with the sizes chosen before it.
#[derive(Clone, Copy)]
struct Member {
    size: usize,
    /// Its row of `near`.
    row: usize,
    /// g(l) less the price.
    gain: f64,
    score: f64,
}

/// What is known where some sizes are chosen.
struct Node {
    /// What the chosen regret in each area.
    cost: Vec<i32>,
    /// t'.
    t: Vec<i32>,
    /// What t' and the price of the chosen come to.
    base: f64,
    members: Vec<Member>,
    /// What each member regrets in each area with the chosen beside it, row by row.
    near: Vec<i32>,
}

impl Node {
    fn near(&self, member: &Member) -> &[i32] {
        let areas = self.cost.len();
        &self.near[member.row * areas..(member.row + 1) * areas]
    }
}

impl Walk<'_, '_, '_> {
    /// Offers every set that may rank; what no set left unseen is cheaper than.
    pub(super) fn run(&mut self) -> f64 {
        let (areas, sizes) = (self.regrets.areas(), self.regrets.sizes());
        let mut near = Vec::with_capacity(sizes * areas);
        for size in 0..sizes {
            near.extend_from_slice(self.regrets.of(size, size));
        }
        let t = self.bound.t.clone();
        let member = |size| Member { size, row: size, gain: self.gain(&t, self.regrets.of(size, size)), score: 0.0 };
        let members = (0..sizes).map(member).collect();
        let base = self.regrets.cost(sum(&t));
        let root = Node { cost: vec![self.regrets.most(); areas], t, base, members, near };
        self.extend(&mut Vec::with_capacity(self.most), root)
    }

    fn gain(&self, t: &[i32], near: &[i32]) -> f64 {
        self.regrets.money(saved(t, near)) - self.price
    }

    /// W(i, j).
    fn weight(&self, i: usize, j: usize) -> i32 {
        self.bound.pairs[i * self.regrets.sizes() + j]
    }

    /// Whether to look no further.
    fn is_over(&self) -> bool {
        self.ending.is_due() || (self.any && !self.kept.sets().is_empty())
    }

    /// Goes through the sets that begin with the chosen; what no set left unseen is cheaper than.
    fn extend(&mut self, chosen: &mut Vec<usize>, mut node: Node) -> f64 {
        let left = self.most - chosen.len();
        self.rank(&mut node.members, left);
        let mut unseen = f64::INFINITY;
        for at in 0..node.members.len() {
            let others = node.members[at + 1..].iter().take(left - 1).map(|member| member.score.max(0.0));
            let floor = node.base - node.members[at].score - others.sum::<f64>();
            if floor > self.kept.threshold() {
                break;
            }
            if self.is_over() {
                // Behind it the floors only rise.
                return unseen.min(floor);
            }
            chosen.push(node.members[at].size);
            unseen = unseen.min(self.branch(chosen, &node, at, left));
            chosen.pop();
        }
        unseen
    }

    /// Goes through the sets that begin with the chosen, the last of which is a member of the node, and go on behind it.
    fn branch(&mut self, chosen: &mut Vec<usize>, node: &Node, at: usize, left: usize) -> f64 {
        let mut cost = Vec::with_capacity(node.cost.len());
        lesser_into(&mut cost, &node.cost, node.near(&node.members[at]));
        self.offer(chosen, sum(&cost));
        match left {
            1 => f64::INFINITY,
            2 => {
                self.close(chosen, node, at, &cost);
                f64::INFINITY
            }
            _ => match self.child(chosen, node, at, cost) {
                Some(child) => self.extend(chosen, child),
                None => f64::INFINITY,
            },
        }
    }

    /// Offers the chosen with each member behind the last of them as last size.
    fn close(&mut self, chosen: &mut Vec<usize>, node: &Node, at: usize, cost: &[i32]) {
        let last = &node.members[at];
        for member in &node.members[at + 1..] {
            let both = self.regrets.money(self.weight(last.size, member.size));
            if node.base - last.gain - member.gain - both > self.kept.threshold() {
                continue;
            }
            let rows = cost.iter().zip(node.near(member)).zip(self.regrets.of(last.size, member.size));
            let regrets = rows.map(|((cost, near), both)| *cost.min(near).min(both)).sum();
            chosen.push(member.size);
            self.offer(chosen, regrets);
            chosen.pop();
        }
    }

    fn offer(&mut self, chosen: &[usize], regrets: i32) {
        if self.regrets.cost(regrets) + self.price * chosen.len() as f64 <= self.kept.threshold() {
            self.kept.offer(chosen);
        }
    }

    /// The members behind one that may stand in a set with it and the chosen; none where none may.
    fn child(&mut self, chosen: &[usize], node: &Node, at: usize, cost: Vec<i32>) -> Option<Node> {
        let left = self.most - chosen.len();
        let last = &node.members[at];
        let with_last = |member: &Member| {
            let both = self.regrets.money(self.weight(last.size, member.size));
            Member { gain: member.gain + both, ..*member }
        };
        let mut members: Vec<Member> = node.members[at + 1..].iter().map(with_last).collect();
        self.rank(&mut members, left);
        let others: f64 = members.iter().take(left - 1).map(|member| member.score.max(0.0)).sum();
        let (base, threshold) = (node.base - last.gain, self.kept.threshold());
        let may_stand = members.partition_point(|member| base - member.score - others <= threshold);
        members.truncate(may_stand);
        if members.is_empty() {
            return None;
        }
        let mut t = Vec::with_capacity(cost.len());
        lesser_into(&mut t, &node.t, &cost);
        let mut near = Vec::with_capacity(cost.len() * members.len());
        for (row, member) in members.iter_mut().enumerate() {
            lesser_into(&mut near, node.near(member), self.regrets.of(last.size, member.size));
            member.row = row;
            member.gain = self.gain(&t, &near[row * cost.len()..]);
        }
        let base = self.regrets.cost(sum(&t)) + self.price * chosen.len() as f64;
        Some(Node { cost, t, base, members, near })
    }

    /// Scores members for so many places left and puts them in order, the greatest score first.
    fn rank(&self, members: &mut [Member], left: usize) {
        let sizes: Vec<usize> = members.iter().map(|member| member.size).collect();
        let mut weights: Vec<i32> = Vec::with_capacity(sizes.len());
        for member in members.iter_mut() {
            weights.clear();
            weights.extend(sizes.iter().map(|&other| self.weight(member.size, other)));
            member.score = member.gain + self.greatest(&mut weights, left - 1) / 2.0;
        }
        members.sort_unstable_by(|a, b| b.score.total_cmp(&a.score).then(a.size.cmp(&b.size)));
    }

    /// The sum of the greatest of some weights.
    fn greatest(&self, weights: &mut [i32], count: usize) -> f64 {
        if count == 0 {
            return 0.0;
        }
        if count < weights.len() {
            weights.select_nth_unstable_by(count - 1, |a, b| b.cmp(a));
        }
        weights.iter().take(count).map(|&weight| self.regrets.money(weight)).sum()
    }
}
