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
    /// Groups it spans, the level group among them.
    pub length: usize,
    /// Where in it the temperature group stands.
    pub air: Option<usize>,
    /// Where in it the wind group stands.
    pub wind: Option<usize>,
    /// How unlikely.
    pub cost: u32,
}

/// What a section may hold.
pub(super) trait Scheme {
    /// Number of groups at hand; the section ends somewhere before or at it.
    fn groups(&self) -> usize;
    /// Number of states; reading starts in state 0.
    fn states(&self) -> usize;
    /// Readings of the groups from `at`, the likeliest of equals first. Groups inside a block that are neither its level
    /// group nor one of its values are strays; their cost is the scheme's to add.
    fn blocks(&self, at: usize, state: usize, found: &mut Vec<Block>);
    /// Whether a level is left out when `slot` is read in this state.
    fn skips(&self, state: usize, slot: usize) -> bool;
    /// The cost of the section ending before group `at`; `None` where it can't.
    fn end(&self, at: usize) -> Option<u32>;
}

/// A level of the best reading.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Piece {
    /// Index of its level group.
    pub at: usize,
    /// The reading.
    pub block: Block,
    /// Groups it spans with a group too many right after it, when nothing else explains that one.
    pub span: usize,
}

/// The best reading of a section.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct Reading {
    /// Its levels in order.
    pub levels: Vec<Piece>,
    /// Groups that belong to no level, in order.
    pub strays: Vec<usize>,
    /// Index of the group after the section.
    pub end: usize,
}

/// Cost of a group that belongs to no level.
pub(super) const STRAY: u32 = 6;

/// Cost of one between the groups of a level: a little more, so that a level isn't stitched together from leftovers.
pub(super) const INSIDE: u32 = STRAY + 1;

/// Cost of a group that should be there and isn't. A garbled group costs less than either (up to 4).
pub(super) const MISSING: u32 = 5;

#[derive(Clone, Copy)]
enum Step {
    End,
    Stray,
    Level(Block),
}

/// The cheapest cost of reading on from each group, when the section starts there.
pub(super) fn costs(scheme: &impl Scheme) -> Vec<u32> {
    let table = table(scheme);
    let starts = table.chunks(scheme.states());
    starts
        .map(|states| states.first().map_or(0, |&(cost, _)| cost))
        .collect()
}

/// Cheapest cost and first step from each group and state, last groups first.
fn table(scheme: &impl Scheme) -> Vec<(u32, Step)> {
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
                if at + block.length <= groups
                    && let Some(after) = cost_after(at + block.length, block.next)
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
    best
}

/// The cheapest reading.
pub(super) fn align(scheme: &impl Scheme) -> Reading {
    let (groups, states) = (scheme.groups(), scheme.states());
    let best = table(scheme);
    let (mut at, mut state) = (0, 0);
    let mut levels: Vec<Piece> = Vec::new();
    let mut strays = Vec::new();
    while at < groups
        && let Some(&(_, step)) = best.get(at * states + state)
    {
        match step {
            Step::End => break,
            Step::Stray => {
                strays.push(at);
                at += 1;
            }
            Step::Level(block) => {
                let inner = (1..block.length)
                    .filter(|&offset| block.air != Some(offset) && block.wind != Some(offset));
                strays.extend(inner.map(|offset| at + offset));
                levels.push(Piece {
                    at,
                    block,
                    span: block.length,
                });
                at += block.length;
                state = block.next;
            }
        }
    }
    let starts: Vec<_> = levels
        .iter()
        .map(|piece| (piece.at, piece.block.slot))
        .collect();
    for (index, piece) in levels.iter_mut().enumerate() {
        // A level left out explains a group without one.
        let (next, skips) = starts.get(index + 1).map_or((at, false), |&(next, slot)| {
            (next, scheme.skips(piece.block.next, slot))
        });
        if next == piece.at + piece.span + 1 && !skips {
            piece.span += 1;
        }
    }
    Reading {
        levels,
        strays,
        end: at,
    }
}
