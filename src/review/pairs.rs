//! Which definition of the new state is which of the old one: by name in the same file, by document number, by name elsewhere,
//! by what it says.

use std::collections::{BTreeMap, BTreeSet};

use super::align::align;
use super::values::Renamed;
use crate::model::{Block, BlockRole, Body};
use crate::syntax::tree::{BlockKind, Content, Line, TokenKind};
use crate::text::FileId;
use crate::workspace::Snapshot;

/// Below this share of equal lines two definitions are not the same one under another name.
const LEAST_EQUAL: f64 = 0.5;

/// With more candidates than this, what has no name in common is not compared line by line.
const MOST_COMPARED: usize = 40_000;

/// A definition in both states, or in one of them: file and index of the block.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct Pair {
    pub new: Option<(FileId, usize)>,
    pub old: Option<(FileId, usize)>,
}

/// A definition that waits for its partner.
struct Single<'a> {
    at: (FileId, usize),
    kind: BlockKind,
    block: &'a Block,
}

/// What a line says: without comment, white space run together.
pub(super) fn words(line: &Line) -> String {
    let comment = line.tokens.iter().find(|token| token.kind == TokenKind::Comment).map_or(line.text.len(), |token| token.span.start);
    line.text.get(..comment).unwrap_or(&line.text).split_whitespace().collect::<Vec<_>>().join(" ")
}

/// The words of a block's lines below the header, with their indices; blank lines and comments left out.
pub(super) fn body(block: &Block) -> Vec<(usize, String)> {
    let first = usize::from(!matches!(block.role, BlockRole::Head));
    let lines = block.lines.iter().enumerate().skip(first).filter(|(_, line)| !matches!(line.content, Content::Blank));
    lines.map(|(index, line)| (index, words(line))).collect()
}

/// The block at a place.
pub(super) fn block_at(snapshot: &Snapshot, at: (FileId, usize)) -> Option<&Block> {
    snapshot.files.get(&at.0)?.model.blocks.get(at.1).map(AsRef::as_ref)
}

/// Every definition of both states, in the order of paths and places of the new one, those that vanished last.
pub(super) fn pairs(old: &Snapshot, new: &Snapshot) -> Vec<Pair> {
    let (mut olds, mut news) = (singles(old), singles(new));
    let mut pairs = Vec::new();
    let file = |single: &Single| Some((single.at.0, single.kind, single.block.name.as_ref()?.key.clone()));
    take(&mut olds, &mut news, &mut pairs, file);
    let document = |single: &Single| match &single.block.body {
        Body::Solution(recipe) => Some(recipe.document.as_ref()?.value.code.clone()),
        _ => None,
    };
    take(&mut olds, &mut news, &mut pairs, document);
    let name = |single: &Single| Some((single.kind, single.block.name.as_ref()?.key.clone()));
    take(&mut olds, &mut news, &mut pairs, name);
    let said = |single: &Single| Some((single.kind, body(single.block))).filter(|(_, body)| !body.is_empty());
    take(&mut olds, &mut news, &mut pairs, said);
    take_alike(&mut olds, &mut news, &mut pairs);
    pairs.extend(news.iter().map(|single| Pair { new: Some(single.at), old: None }));
    pairs.extend(olds.iter().map(|single| Pair { new: None, old: Some(single.at) }));
    let path = |snapshot: &Snapshot, at: Option<(FileId, usize)>| {
        at.and_then(|(file, index)| Some((snapshot.files.get(&file)?.path.clone(), index)))
    };
    pairs.sort_by_cached_key(|pair| (pair.new.is_none(), path(new, pair.new), path(old, pair.old)));
    pairs
}

/// What definitions that are in both states were called, with what they are called now.
pub(super) fn renamed(pairs: &[Pair], old: &Snapshot, new: &Snapshot) -> Renamed {
    let names = |pair: &Pair| {
        let name = |snapshot, at: Option<(FileId, usize)>| at.and_then(|at| block_at(snapshot, at)).and_then(|block| block.name.clone());
        name(old, pair.old).zip(name(new, pair.new))
    };
    pairs.iter().filter_map(names).filter(|(before, now)| before.key != now.key).map(|(before, now)| (before.key, now.text)).collect()
}

/// The named definitions in the order of paths and places.
fn singles(snapshot: &Snapshot) -> Vec<Single<'_>> {
    let mut files: Vec<_> = snapshot.files.values().collect();
    files.sort_by(|one, other| one.path.cmp(&other.path));
    let blocks = files.into_iter().flat_map(|file| file.model.blocks.iter().enumerate().map(move |(index, block)| ((file.id, index), block)));
    let named = blocks.filter(|(_, block)| block.name.is_some());
    named.filter_map(|(at, block)| Some(Single { at, kind: block.kind()?, block: block.as_ref() })).collect()
}

/// Pairs those that have the same key where it is the only one on its side.
fn take<K: Ord>(olds: &mut Vec<Single>, news: &mut Vec<Single>, pairs: &mut Vec<Pair>, key: impl Fn(&Single) -> Option<K>) {
    let index = |singles: &[Single]| {
        let mut index: BTreeMap<K, Vec<(FileId, usize)>> = BTreeMap::new();
        singles.iter().for_each(|single| {
            if let Some(key) = key(single) {
                index.entry(key).or_default().push(single.at);
            }
        });
        index
    };
    let of_old = index(olds);
    let (mut gone, mut come) = (BTreeSet::new(), BTreeSet::new());
    for (key, at) in index(news) {
        if let ([new], Some([old])) = (at.as_slice(), of_old.get(&key).map(Vec::as_slice)) {
            pairs.push(Pair { new: Some(*new), old: Some(*old) });
            gone.insert(*old);
            come.insert(*new);
        }
    }
    olds.retain(|single| !gone.contains(&single.at));
    news.retain(|single| !come.contains(&single.at));
}

/// Pairs those of one kind whose lines are mostly equal, the likest first.
fn take_alike(olds: &mut Vec<Single>, news: &mut Vec<Single>, pairs: &mut Vec<Pair>) {
    if olds.len().saturating_mul(news.len()) > MOST_COMPARED {
        return;
    }
    let mut likely = Vec::new();
    for new in news.iter() {
        for old in olds.iter().filter(|old| old.kind == new.kind) {
            let share = equal_share(old.block, new.block);
            if share >= LEAST_EQUAL {
                likely.push((share, old.at, new.at));
            }
        }
    }
    likely.sort_by(|one, other| other.0.total_cmp(&one.0).then(one.2.cmp(&other.2)).then(one.1.cmp(&other.1)));
    for (_, old, new) in likely {
        if olds.iter().any(|single| single.at == old) && news.iter().any(|single| single.at == new) {
            pairs.push(Pair { new: Some(new), old: Some(old) });
            olds.retain(|single| single.at != old);
            news.retain(|single| single.at != new);
        }
    }
}

fn equal_share(old: &Block, new: &Block) -> f64 {
    let lines = |block: &Block| -> Vec<String> { body(block).into_iter().map(|(_, words)| words).collect() };
    let (old, new) = (lines(old), lines(new));
    let is_equal = |(one, other): &(Option<usize>, Option<usize>)| one.zip(*other).is_some_and(|(one, other)| old.get(one) == new.get(other));
    let equal = align(&old, &new).into_iter().filter(is_equal).count();
    let all = old.len().max(new.len());
    if all == 0 { 0.0 } else { equal as f64 / all as f64 }
}
