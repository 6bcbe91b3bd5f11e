//! What the repairs cost on the working profile, within what a frame allows.

use crate::sounding::{Amendments, Numbers};
use crate::trust::{
    Cost, Finding, Priced, applied_repair, price, rank, with_repair, without_repair,
};
use crate::{Analysed, Card};

/// Cards in the order of the findings, and the order in which they are shown.
pub(crate) struct Pricing {
    pub cards: Vec<Card>,
    pub ranked: Vec<usize>,
}

impl Pricing {
    /// Prices everything.
    pub(crate) fn full(analysed: &Analysed, amendments: &Amendments, working: &Numbers) -> Self {
        let priced = price(
            &analysed.findings,
            &analysed.profile,
            amendments,
            analysed.daylight,
            working,
        );
        Self {
            ranked: rank(&priced, at_least(working)),
            cards: priced.iter().map(Card::of).collect(),
        }
    }

    /// Prices the headline repair of every finding, and others as long as no more than `affordable` are priced; the rest
    /// keep the cost they had, marked stale. What the headline is doesn't change meanwhile.
    pub(crate) fn in_frame(
        analysed: &Analysed,
        amendments: &Amendments,
        working: &Numbers,
        previous: &[Card],
        affordable: usize,
    ) -> Self {
        let all: usize = analysed
            .findings
            .iter()
            .map(|finding| finding.repairs.len())
            .sum();
        if all <= affordable || previous.len() != analysed.findings.len() {
            return Self::full(analysed, amendments, working);
        }
        let headlines = previous
            .iter()
            .filter(|card| card.headline.is_some())
            .count();
        let mut left = affordable.saturating_sub(headlines);
        let cards: Vec<Card> = analysed
            .findings
            .iter()
            .zip(previous)
            .map(|(finding, before)| {
                let mut card = Card {
                    applied: applied_repair(amendments, finding),
                    ..before.clone()
                };
                card.stale.resize(card.costs.len(), false);
                for (index, (cost, stale)) in card.costs.iter_mut().zip(&mut card.stale).enumerate()
                {
                    // What has no cost has none whatever is dragged.
                    if cost.is_none() {
                        continue;
                    }
                    let headline = card.headline == Some(index);
                    if !headline && left == 0 {
                        *stale = true;
                        continue;
                    }
                    if !headline {
                        left -= 1;
                    }
                    *cost = cost_of(analysed, amendments, working, finding, index, card.applied);
                    *stale = false;
                }
                card
            })
            .collect();
        let priced: Vec<Priced> = analysed
            .findings
            .iter()
            .zip(&cards)
            .map(|(finding, card)| Priced {
                finding,
                costs: card.costs.clone(),
                headline: card.headline,
                applied: card.applied,
            })
            .collect();
        Self {
            ranked: rank(&priced, at_least(working)),
            cards,
        }
    }
}

/// Cost of one repair, as [`price`] has it.
fn cost_of(
    analysed: &Analysed,
    amendments: &Amendments,
    working: &Numbers,
    finding: &Finding,
    index: usize,
    applied: Option<usize>,
) -> Option<Cost> {
    let repair = finding.repairs.get(index)?;
    let numbers = |amendments: &Amendments| {
        Numbers::of(
            &amendments
                .apply(&analysed.profile, analysed.daylight)
                .profile,
        )
    };
    if applied == Some(index) {
        Cost::between(
            working,
            &numbers(&without_repair(amendments, finding, repair)),
        )
    } else {
        Cost::between(&numbers(&with_repair(amendments, finding, repair)), working)
    }
}

/// Any of the three is a lower limit only.
fn at_least(numbers: &Numbers) -> bool {
    [&numbers.surface, &numbers.mixed, &numbers.most_unstable]
        .into_iter()
        .flatten()
        .any(|ascent| ascent.at_least)
}
