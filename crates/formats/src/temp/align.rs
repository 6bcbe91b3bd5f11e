//! Which group is which.
//!
//! Groups carry no names: a lost, doubled or garbled one shifts everything after it for a reader that only counts. So
//! the whole section is read in the way that needs the fewest faults. A scheme says which blocks (a level's groups) can
//! start at a group and how unlikely each reading is; the cheapest sequence of blocks and stray groups is taken.

/// One reading of the groups at a place: a level with its groups.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Block {
    /// Which level of the scheme.
    pub slot: usize,
    /// State the scheme is in afterwards.
    pub next: usize,
    /// A temperature group follows the level group.
    pub air: bool,
    /// A wind group follows.
    pub wind: bool,
    /// How unlikely.
    pub cost: u32,
}

impl Block {
    fn length(&self) -> usize {
        1 + usize::from(self.air) + usize::from(self.wind)
    }
}

/// What a section may hold.
pub(super) trait Scheme {
    /// Number of groups at hand; the section ends somewhere before or at it.
    fn groups(&self) -> usize;
    /// Number of states; reading starts in state 0.
    fn states(&self) -> usize;
    /// Readings of the groups from `at`, the likeliest of equals first.
    fn blocks(&self, at: usize, state: usize, found: &mut Vec<Block>);
    /// The cost of the section ending before group `at`; `None` where it can't.
    fn end(&self, at: usize) -> Option<u32>;
}

/// One piece of the best reading.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Piece {
    /// A level whose first group is at `at`.
    Level {
        /// Index of its level group.
        at: usize,
        /// The reading.
        block: Block,
    },
    /// A group that belongs to no level.
    Stray(usize),
}

/// Cost of a group that belongs to no level: dearer than any single fault inside a block.
const STRAY: u32 = 6;

#[derive(Clone, Copy)]
enum Step {
    End,
    Stray,
    Level(Block),
}

/// The cheapest reading, and the index of the group after the section.
pub(super) fn align(scheme: &impl Scheme) -> (Vec<Piece>, usize) {
    let (groups, states) = (scheme.groups(), scheme.states());
    let mut best = vec![(0_u32, Step::End); (groups + 1) * states];
    let mut found = Vec::new();
    for at in (0..groups).rev() {
        let end = scheme.end(at);
        for state in 0..states {
            let cost_after =
                |at: usize, state: usize| best.get(at * states + state).map(|&(cost, _)| cost);
            let mut choice = end.map(|cost| (cost, Step::End));
            let mut offer = |cost: u32, step: Step| {
                if choice.is_none_or(|(least, _)| cost < least) {
                    choice = Some((cost, step));
                }
            };
            found.clear();
            scheme.blocks(at, state, &mut found);
            for &block in &found {
                if at + block.length() <= groups
                    && let Some(after) = cost_after(at + block.length(), block.next)
                {
                    offer(block.cost.saturating_add(after), Step::Level(block));
                }
            }
            if let Some(after) = cost_after(at + 1, state) {
                offer(STRAY.saturating_add(after), Step::Stray);
            }
            if let (Some(entry), Some(choice)) = (best.get_mut(at * states + state), choice) {
                *entry = choice;
            }
        }
    }
    let (mut at, mut state) = (0, 0);
    let mut pieces = Vec::new();
    while at < groups
        && let Some(&(_, step)) = best.get(at * states + state)
    {
        match step {
            Step::End => break,
            Step::Stray => {
                pieces.push(Piece::Stray(at));
                at += 1;
            }
            Step::Level(block) => {
                pieces.push(Piece::Level { at, block });
                at += block.length();
                state = block.next;
            }
        }
    }
    (pieces, at)
}
