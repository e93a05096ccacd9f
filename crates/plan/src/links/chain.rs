//! The states that follow each other from where the cloud starts.

use fluxloom_core::Atom;
use fluxloom_core::atom::{State, halves_text};

use super::{Legs, MOST};

/// Legs in their order, and the links between them.
pub(super) struct Chain {
    pub legs: Vec<State>,
    pub links: Vec<(State, State)>,
    /// Why there are fewer than asked for.
    pub remark: Option<String>,
}

impl Chain {
    /// The chain within the F of `start`: upwards in m from the lower half and
    /// the middle, downwards from the upper half, and to the other side where
    /// that ends too soon.
    pub(super) fn from(atom: &Atom, start: State, legs: Legs) -> Self {
        let upwards = start.twice_m() <= 0;
        let same_f = atom.manifold().states.iter().filter(|s| s.twice_f() == start.twice_f());
        let mut all: Vec<State> = same_f.copied().collect();
        all.sort_by_key(|state| if upwards { state.twice_m() } else { -state.twice_m() });
        let wanted = usize::try_from(legs.count.unwrap_or(MOST)).unwrap_or(usize::MAX);
        let here = all.iter().position(|state| *state == start).unwrap_or_default();
        let end = here.saturating_add(wanted).min(all.len());
        let begin = end.saturating_sub(wanted).min(here);
        let states: Vec<State> = all.get(begin..end).unwrap_or_default().to_vec();
        let is_short = legs.count.is_some() && states.len() < wanted;
        let remark = is_short.then(|| {
            let closing = if legs.closed { ", without a link that closes them" } else { "" };
            format!(
                "{wanted} legs asked for, but F = {} has {}: these are shown{closing}",
                halves_text(start.twice_f()),
                states.len()
            )
        });
        let mut links: Vec<(State, State)> =
            states.iter().copied().zip(states.iter().copied().skip(1)).collect();
        // With two legs the link back is the link there.
        if let ([first, _, .., last], true, false) = (states.as_slice(), legs.closed, is_short) {
            links.push((*last, *first));
        }
        Self { legs: states, links, remark }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn chain(start: &str, count: Option<u32>, closed: bool) -> Chain {
        let atom = Atom::new(if start.contains('/') { "40K" } else { "87Rb" }).unwrap();
        Chain::from(&atom, start.parse().unwrap(), Legs { count, closed })
    }

    fn text(chain: &Chain) -> String {
        let legs: Vec<String> = chain.legs.iter().map(ToString::to_string).collect();
        legs.join(" ")
    }

    #[test]
    fn it_goes_to_the_farther_end() {
        assert_eq!(text(&chain("9/2,-9/2", None, false)), "9/2,-9/2 9/2,-7/2 9/2,-5/2 9/2,-3/2");
        assert_eq!(text(&chain("7/2,1/2", Some(2), false)), "7/2,1/2 7/2,-1/2");
        assert_eq!(text(&chain("1,-1", None, false)), "1,-1 1,0 1,1");
        // Where one side ends, the other goes on.
        assert_eq!(text(&chain("1,0", None, false)), "1,-1 1,0 1,1");
        assert_eq!(text(&chain("1,0", Some(2), false)), "1,0 1,1");
        assert_eq!(text(&chain("9/2,7/2", Some(9), false)).split(' ').next(), Some("9/2,7/2"));
        assert_eq!(chain("9/2,7/2", Some(10), false).legs.len(), 10);
        assert_eq!(text(&chain("2,2", Some(1), false)), "2,2");
        assert_eq!(chain("2,2", Some(1), true).links.len(), 0);
    }

    #[test]
    fn a_tube_closes_and_too_many_legs_are_told() {
        let tube = chain("1,-1", Some(3), true);
        let (from, to) = tube.links[2];
        assert_eq!(
            (tube.links.len(), from.to_string(), to.to_string()),
            (3, "1,1".into(), "1,-1".into())
        );
        assert_eq!(chain("1,-1", Some(2), true).links.len(), 1);
        let long = chain("1,-1", Some(5), true);
        assert_eq!((long.legs.len(), long.links.len()), (3, 2));
        assert!(long.remark.unwrap().contains("F = 1 has 3: these are shown, without"));
    }
}
