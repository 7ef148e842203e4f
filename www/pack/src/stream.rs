//! How is a stream of LZMA choices written in fewer bits?
//!
//! LZMA guesses a byte from the three top bits of the one before. In the code of a wasm the byte before says much more: after
//! `local.get` comes the number of a local, after a load an alignment and an offset. So the choices that an LZMA encoder
//! made are read here and written again with odds by the [`Kind`] of place that comes next, and with [`Odds`] that learn at two
//! speeds; all else is LZMA's. Measured on this page: 4 % of the whole. `www/unpack.js` is the reader of what is written here, and follows the same kinds.
//! Source: Igor Pavlov, LZMA specification (2015, public domain); WebAssembly core specification 2.0, binary format.

use std::ops::Range;

// Where each kind of choice keeps its odds. The first six: per place and per state.
const IS_MATCH: usize = 0;
const IS_AGAIN: usize = 12;
const IS_AGAIN_0: usize = 24;
const IS_AGAIN_1: usize = 36;
const IS_AGAIN_2: usize = 48;
const IS_LONG_AGAIN_0: usize = 60;
const FLAGS: usize = 72;
const LENGTH: usize = FLAGS * PLACES;
const LENGTH_AGAIN: usize = LENGTH + 274;
const SLOT: usize = LENGTH_AGAIN + 274;
const LOW_DISTANCE: usize = SLOT + 4 * 64;
const ALIGN: usize = LOW_DISTANCE + 128;
const LITERAL: usize = ALIGN + 16;
const KINDS: usize = LITERAL + 768 * CONTEXTS;

/// Kinds of places in code, the last of them outside of code; contexts of literals.
const PLACES: usize = 35;
const OUTSIDE: usize = 34;
const CONTEXTS: usize = 8 + 2 * PLACES;

/// Where a byte stands. In code: 0 an operation, odd a later byte of the number that began at the even place before.
#[derive(Clone, Copy, Default)]
struct Kind {
    now: usize,
    /// The place of a second number that belongs to the same operation, or 0.
    then: usize,
    /// Bytes of a constant that are still to come.
    left: usize,
    before: usize,
}

const CONSTANT: usize = 30;

impl Kind {
    /// Walks over one byte of code.
    fn step(&mut self, byte: u8) {
        self.before = self.now;
        match self.now {
            0 => (self.now, self.then, self.left) = after(byte),
            CONSTANT => {
                self.left -= 1;
                self.now = if self.left == 0 { 0 } else { CONSTANT };
            }
            _ if byte > 127 => self.now |= 1,
            _ => (self.now, self.then) = (self.then, 0),
        }
    }
}

/// What comes after an operation. Heads of functions and rare operations are taken for others, which costs a few bits.
fn after(operation: u8) -> (usize, usize, usize) {
    match operation {
        0x28..=0x35 => (2, 6, 0),
        0x36..=0x3e => (4, 8, 0),
        0x20 => (10, 0, 0),
        0x21 => (12, 0, 0),
        0x22 => (14, 0, 0),
        0x23 | 0x24 => (16, 0, 0),
        0x02..=0x04 => (18, 0, 0),
        0x0c | 0x0d => (20, 0, 0),
        0x10 => (22, 0, 0),
        0x11 => (24, 24, 0),
        0x41 => (26, 0, 0),
        0x42 => (28, 0, 0),
        0x43 => (CONSTANT, 0, 4),
        0x44 => (CONSTANT, 0, 8),
        0xfc | 0xfd => (32, 0, 0),
        _ => (0, 0, 0),
    }
}

/// How often a choice was a zero. LZMA's own odds, of 2048, learn at one speed. Ours, of 32768, are the middle of two: one that
/// learns fast for good, and one that counts at first and then learns slowly; 1 % less of the whole.
#[derive(Clone, Copy)]
struct Odds {
    own: bool,
    fast: i32,
    slow: i32,
    seen: i32,
}

impl Odds {
    fn even(own: bool) -> Self {
        let middle = if own { 16384 } else { 1024 };
        Odds { own, fast: middle, slow: middle, seen: 0 }
    }

    /// The part of the range that belongs to a zero.
    fn bound(&self, range: u32) -> u32 {
        if self.own { (range >> 15) * ((self.fast + self.slow) >> 1) as u32 } else { (range >> 11) * self.fast as u32 }
    }

    fn learn(&mut self, bit: u32) {
        if self.own {
            // The very steps of www/unpack.js, in whole numbers: an arithmetic shift rounds down.
            self.fast += if bit == 0 { (32768 - self.fast) >> 4 } else { -(self.fast >> 4) };
            let target = if bit == 0 { 32768 } else { 0 };
            self.slow += ((target - self.slow) * (655_360 / (10 * self.seen + 16))) >> 16;
            self.seen += i32::from(self.seen < 126);
        } else if bit == 0 {
            self.fast += (2048 - self.fast) >> 5;
        } else {
            self.fast -= self.fast >> 5;
        }
    }
}

/// One side of a range coder: the reader says which bit comes, the writer is told.
trait Side {
    fn bit(&mut self, odds: &mut Odds, bit: u32) -> u32;
    fn even(&mut self, bit: u32) -> u32;
}

struct Reader<'a> {
    range: u32,
    code: u32,
    packed: std::slice::Iter<'a, u8>,
}

impl<'a> Reader<'a> {
    fn new(packed: &'a [u8]) -> Self {
        let mut reader = Reader { range: u32::MAX, code: 0, packed: packed.iter() };
        (0..5).for_each(|_| reader.code = reader.code << 8 | reader.next());
        reader
    }

    fn next(&mut self) -> u32 {
        self.packed.next().copied().unwrap_or(0).into()
    }

    fn refill(&mut self) {
        while self.range < 1 << 24 {
            self.range <<= 8;
            self.code = self.code << 8 | self.next();
        }
    }
}

impl Side for Reader<'_> {
    fn bit(&mut self, odds: &mut Odds, _: u32) -> u32 {
        let bound = odds.bound(self.range);
        let bit = u32::from(self.code >= bound);
        if bit == 0 {
            self.range = bound;
        } else {
            self.range -= bound;
            self.code -= bound;
        }
        odds.learn(bit);
        self.refill();
        bit
    }

    fn even(&mut self, _: u32) -> u32 {
        self.range >>= 1;
        let bit = u32::from(self.code >= self.range);
        self.code -= bit * self.range;
        self.refill();
        bit
    }
}

struct Writer {
    low: u64,
    range: u32,
    packed: Vec<u8>,
}

impl Writer {
    fn refill(&mut self) {
        // A carry runs back through the bytes that are written already.
        if self.low >> 32 != 0 {
            self.low &= u64::from(u32::MAX);
            for byte in self.packed.iter_mut().rev() {
                *byte = byte.wrapping_add(1);
                if *byte != 0 {
                    break;
                }
            }
        }
        while self.range < 1 << 24 {
            self.range <<= 8;
            self.packed.push((self.low >> 24) as u8);
            self.low = self.low << 8 & u64::from(u32::MAX);
        }
    }

    fn finish(mut self) -> Vec<u8> {
        self.packed.extend((self.low as u32).to_be_bytes());
        self.packed
    }
}

impl Side for Writer {
    fn bit(&mut self, odds: &mut Odds, bit: u32) -> u32 {
        let bound = odds.bound(self.range);
        if bit == 0 {
            self.range = bound;
        } else {
            self.range -= bound;
            self.low += u64::from(bound);
        }
        odds.learn(bit);
        self.refill();
        bit
    }

    fn even(&mut self, bit: u32) -> u32 {
        self.range >>= 1;
        self.low += u64::from(bit * self.range);
        self.refill();
        bit
    }
}

/// One choice: a byte, or so many bytes from so far back (less one); `again` is the rank of a latest distance that is taken.
#[derive(Clone, Copy, Default)]
struct Choice {
    byte: Option<u8>,
    again: Option<usize>,
    length: usize,
    distance: u32,
}

/// The odds and the choices so far; the same for both sides.
struct Model<S> {
    side: S,
    odds: Vec<Odds>,
    /// Whether the stream is one of ours: places in code have odds of their own.
    kinds: bool,
    code: Range<usize>,
    kind: Kind,
    latest: [u32; 4],
    state: usize,
}

impl<S: Side> Model<S> {
    fn new(side: S, kinds: bool, code: Range<usize>) -> Self {
        Model {
            side,
            odds: vec![Odds::even(kinds); KINDS],
            kinds,
            code,
            kind: Kind::default(),
            latest: [0; 4],
            state: 0,
        }
    }

    fn bit(&mut self, kind: usize, bit: u32) -> u32 {
        self.side.bit(&mut self.odds[kind], bit)
    }

    fn tree(&mut self, kinds: usize, bits: u32, value: usize) -> usize {
        let mut node = 1;
        for left in (0..bits).rev() {
            node = 2 * node + self.bit(kinds + node, (value >> left & 1) as u32) as usize;
        }
        node - (1 << bits)
    }

    fn reversed(&mut self, kinds: usize, bits: u32, value: u32) -> u32 {
        let (mut node, mut read) = (1, 0);
        for place in 0..bits {
            let bit = self.bit(kinds + node, value >> place & 1);
            node = 2 * node + bit as usize;
            read |= bit << place;
        }
        read
    }

    fn length(&mut self, kinds: usize, length: usize) -> usize {
        if self.bit(kinds, (length > 9).into()) == 0 {
            return 2 + self.tree(kinds + 2, 3, length.wrapping_sub(2));
        }
        match self.bit(kinds + 1, (length > 17).into()) {
            0 => 10 + self.tree(kinds + 10, 3, length.wrapping_sub(10)),
            _ => 18 + self.tree(kinds + 18, 8, length.wrapping_sub(18)),
        }
    }

    fn distance(&mut self, length: usize, distance: u32) -> u32 {
        let top = 31 - distance.max(1).leading_zeros();
        let slot = if distance < 4 { distance } else { 2 * top + (distance >> (top - 1) & 1) };
        let slot = self.tree(SLOT + 64 * (length - 2).min(3), 6, slot as usize) as u32;
        if slot < 4 {
            return slot;
        }
        let bits = (slot >> 1) - 1;
        let base = (2 | (slot & 1)) << bits;
        let rest = distance.wrapping_sub(base);
        if slot < 14 {
            return base + self.reversed(LOW_DISTANCE + (base - slot) as usize, bits, rest);
        }
        let high = (4..bits).rev().fold(0, |sum, place| 2 * sum + self.side.even(rest >> place & 1));
        base + (high << 4) + self.reversed(ALIGN, 4, rest)
    }

    fn literal(&mut self, out: &[u8], byte: u8) -> u8 {
        let before = out.last().map_or(0, |byte| usize::from(byte >> 5));
        let context = match (self.place(out.len()), self.kind.before) {
            (OUTSIDE, _) => before,
            (0, kind) => 8 + kind,
            (kind, _) => 8 + PLACES + kind,
        };
        let kinds = LITERAL + 768 * context;
        let (mut node, mut expected) =
            (1, if self.state > 6 { Some(out[out.len() - self.latest[0] as usize - 1]) } else { None });
        for place in (0..8).rev() {
            let foreseen = expected.map(|byte| u32::from(byte >> place & 1));
            let table = foreseen.map_or(0, |bit| 256 + 256 * bit as usize);
            let bit = self.bit(kinds + table + node, u32::from(byte >> place & 1));
            node = 2 * node + bit as usize;
            expected = expected.filter(|_| foreseen == Some(bit));
        }
        node as u8
    }

    fn place(&self, at: usize) -> usize {
        if self.kinds && self.code.contains(&at) { self.kind.now } else { OUTSIDE }
    }

    fn flag(&mut self, at: usize, flag: usize, bit: bool) -> bool {
        let kind = FLAGS * self.place(at) + flag + self.state;
        self.bit(kind, bit.into()) == 1
    }

    /// Walks over one choice and appends its bytes.
    fn choice(&mut self, out: &mut Vec<u8>, told: Choice) -> Choice {
        let (at, short) = (out.len(), told.length == 1);
        let mut choice = Choice::default();
        if !self.flag(at, IS_MATCH, told.byte.is_none()) {
            let byte = self.literal(out, told.byte.unwrap_or(0));
            choice.byte = Some(byte);
            out.push(byte);
            self.state = [0, 0, 0, 0, 1, 2, 3, 4, 5, 6, 4, 5][self.state];
        } else {
            let early = self.state < 7;
            if !self.flag(at, IS_AGAIN, told.again.is_some()) {
                choice.length = self.length(LENGTH, told.length);
                choice.distance = self.distance(choice.length, told.distance);
                self.latest.rotate_right(1);
                self.latest[0] = choice.distance;
                self.state = if early { 7 } else { 10 };
            } else {
                let rank = told.again.unwrap_or(0);
                let mut long = true;
                let again = if !self.flag(at, IS_AGAIN_0, rank > 0) {
                    long = self.flag(at, IS_LONG_AGAIN_0, !short);
                    0
                } else if !self.flag(at, IS_AGAIN_1, rank > 1) {
                    1
                } else {
                    2 + usize::from(self.flag(at, IS_AGAIN_2, rank > 2))
                };
                self.latest[..=again].rotate_right(1);
                choice.again = Some(again);
                choice.length = if long { self.length(LENGTH_AGAIN, told.length) } else { 1 };
                self.state = [[9, 8], [11, 11]][usize::from(!early)][usize::from(long)];
            }
            for _ in 0..choice.length {
                out.push(out[out.len() - self.latest[0] as usize - 1]);
            }
        }
        for (place, &byte) in out.iter().enumerate().skip(at) {
            if self.kinds && self.code.contains(&place) {
                self.kind.step(byte);
            }
        }
        choice
    }
}

/// A raw LZMA stream of `size` bytes (three bits of literal context, none of position), written again; `code` is where
/// the code of a wasm lies in the bytes.
pub fn rewritten(packed: &[u8], size: usize, code: Range<usize>) -> Vec<u8> {
    let mut reader = Model::new(Reader::new(packed), false, 0..0);
    // Like LZMA's own, a stream begins with a zero.
    let writer = Writer { low: 0, range: u32::MAX, packed: vec![0] };
    let mut writer = Model::new(writer, true, code);
    let (mut read, mut written) = (Vec::with_capacity(size), Vec::with_capacity(size));
    while read.len() < size {
        let choice = reader.choice(&mut read, Choice::default());
        writer.choice(&mut written, choice);
    }
    writer.side.finish()
}

/// Where the code section of a wasm lies in it; an empty range when there is none.
pub fn code_section(wasm: &[u8]) -> Range<usize> {
    let mut at = 8;
    while at < wasm.len() {
        let (section, mut size, mut shift) = (wasm[at], 0, 0);
        loop {
            at += 1;
            let Some(&byte) = wasm.get(at) else { return 0..0 };
            size |= usize::from(byte & 127) << shift;
            shift += 7;
            if byte < 128 {
                break;
            }
        }
        at += 1;
        if section == 10 {
            return at..(at + size).min(wasm.len());
        }
        at += size;
    }
    0..0
}

#[cfg(test)]
pub mod tests {
    use super::{Choice, Model, Reader, code_section};
    use std::ops::Range;

    /// The bytes of a stream that was written again.
    pub fn read_back(packed: &[u8], size: usize, code: Range<usize>) -> Vec<u8> {
        let mut reader = Model::new(Reader::new(packed), true, code);
        let mut read = Vec::new();
        while read.len() < size {
            reader.choice(&mut read, Choice::default());
        }
        read
    }

    #[test]
    fn the_code_of_a_wasm_is_found_behind_other_sections() {
        // A head, a type section of three bytes, a code section of two.
        let wasm = b"\0asm\x01\0\0\0\x01\x03abc\x0a\x82\0de";
        assert_eq!(code_section(wasm), 16..18);
        assert_eq!(code_section(b"no wasm at all"), 0..0);
        assert_eq!(code_section(b""), 0..0);
    }
}
