//! In which order do things stand, and which stands under a number?
//!
//! Stable, by a rank or a number. Every kind of thing is put in order by the same few lines over plain numbers: the
//! standard library's sort is compiled anew for each kind, which costs the page 2 kB each time. A [`Shelf`] does the
//! same for its tree.

use std::collections::BTreeMap;
use std::ops::RangeInclusive;

/// Things by number.
#[derive(Clone, Debug)]
pub struct Shelf<T> {
    places: BTreeMap<i64, usize>,
    things: Vec<T>,
}

impl<T> Default for Shelf<T> {
    fn default() -> Self {
        Shelf { places: BTreeMap::new(), things: Vec::new() }
    }
}

impl<T> Shelf<T> {
    pub fn at(&self, number: i64) -> Option<&T> {
        self.places.get(&number).map(|&place| &self.things[place])
    }

    pub fn at_mut(&mut self, number: i64) -> Option<&mut T> {
        self.places.get(&number).map(|&place| &mut self.things[place])
    }

    /// What stands under a number, made where nothing does yet.
    pub fn at_or(&mut self, number: i64, make: impl FnOnce() -> T) -> &mut T {
        let next = self.things.len();
        let place = *self.places.entry(number).or_insert(next);
        if place == next {
            self.things.push(make());
        }
        &mut self.things[place]
    }

    /// Everything in a range, the lowest number first.
    pub fn between(&self, numbers: RangeInclusive<i64>) -> impl Iterator<Item = (i64, &T)> {
        self.places.range(numbers).map(|(number, &place)| (*number, &self.things[place]))
    }
}

/// Puts the lowest rank first; equal ranks keep their order.
pub fn by_rank<T>(items: &mut [T], rank: impl Fn(&T) -> u64) {
    let mut places = order(items.iter().map(rank).collect());
    // Each place says whose item belongs there; what has been moved away by then is found by following the moves.
    for at in 0..items.len() {
        let mut from = places[at];
        while from < at {
            from = places[from];
        }
        items.swap(at, from);
        places[at] = from;
    }
}

/// Puts the lowest number first, as [`f64::total_cmp`] does; equal numbers keep their order.
pub fn by_number<T>(items: &mut [T], number: impl Fn(&T) -> f64) {
    by_rank(items, |item| rank(number(item)));
}

/// Whole numbers that stand in the order of these.
fn rank(number: f64) -> u64 {
    let bits = number.to_bits();
    if number.is_sign_negative() { !bits } else { bits | 1 << 63 }
}

/// The indices of these ranks, the lowest rank first.
fn order(ranks: Vec<u64>) -> Vec<usize> {
    let mut numbered: Vec<(u64, usize)> = ranks.into_iter().enumerate().map(|(index, rank)| (rank, index)).collect();
    numbered.sort_unstable();
    numbered.into_iter().map(|(_, index)| index).collect()
}

#[cfg(test)]
mod tests {
    use super::{by_number, by_rank};

    #[test]
    fn things_stand_as_the_standard_library_sorts_them() {
        // A multiplier that is odd and a modulus that is small: a shuffle with many equals.
        let things: Vec<(u64, usize)> = (0..500_usize).map(|n| ((n as u64 * 7919) % 97, n)).collect();
        let (mut ours, mut theirs) = (things.clone(), things);
        by_rank(&mut ours, |thing| thing.0);
        theirs.sort_by_key(|thing| thing.0);
        assert_eq!(ours, theirs);
    }

    #[test]
    fn numbers_stand_in_the_total_order() {
        let mut ours = [3.5, -0.0, f64::INFINITY, 0.0, -2.0, f64::NEG_INFINITY, 1e-300, -1e300, f64::NAN, -2.0];
        let mut theirs = ours;
        by_number(&mut ours, |number| *number);
        theirs.sort_by(f64::total_cmp);
        assert_eq!(ours.map(f64::to_bits), theirs.map(f64::to_bits));
    }
}
