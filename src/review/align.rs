//! Which of the new lines is which of the old ones.

/// Above this many cells of the table, what differs between the common beginning and end is taken as replaced.
const MOST_CELLS: usize = 4_000_000;

/// Below this likeness two different lines are not one line that was edited.
const LEAST_LIKE: f64 = 0.34;

/// Old and new lines in order, equal and edited ones side by side: indices into both.
pub(super) fn align(old: &[String], new: &[String]) -> Vec<(Option<usize>, Option<usize>)> {
    let head = old.iter().zip(new).take_while(|(one, other)| one == other).count();
    let rest = old.len().min(new.len()) - head;
    let tail = old.iter().rev().zip(new.iter().rev()).take(rest).take_while(|(one, other)| one == other).count();
    let mut aligned: Vec<(Option<usize>, Option<usize>)> = (0..head).map(|at| (Some(at), Some(at))).collect();
    let (old_end, new_end) = (old.len() - tail, new.len() - tail);
    let (middle_old, middle_new) = (old.get(head..old_end).unwrap_or_default(), new.get(head..new_end).unwrap_or_default());
    let mut gap = (Vec::new(), Vec::new());
    for (one, other) in common(middle_old, middle_new) {
        match (one, other) {
            (Some(one), Some(other)) => {
                aligned.extend(paired(std::mem::take(&mut gap), old, new));
                aligned.push((Some(head + one), Some(head + other)));
            }
            (one, other) => {
                gap.0.extend(one.map(|at| head + at));
                gap.1.extend(other.map(|at| head + at));
            }
        }
    }
    aligned.extend(paired(gap, old, new));
    aligned.extend((0..tail).map(|at| (Some(old_end + at), Some(new_end + at))));
    aligned
}

/// The longest common subsequence, with what stands between its members.
fn common(old: &[String], new: &[String]) -> Vec<(Option<usize>, Option<usize>)> {
    let apart = || (0..old.len()).map(|at| (Some(at), None)).chain((0..new.len()).map(|at| (None, Some(at)))).collect();
    let width = new.len() + 1;
    if (old.len() + 1).saturating_mul(width) > MOST_CELLS {
        return apart();
    }
    // How long the common subsequence of the ends is, for each pair of beginnings.
    let mut longest = vec![0usize; (old.len() + 1) * width];
    let at = |longest: &[usize], one: usize, other: usize| longest.get(one * width + other).copied().unwrap_or(0);
    for (one, old_line) in old.iter().enumerate().rev() {
        for (other, new_line) in new.iter().enumerate().rev() {
            let best = match old_line == new_line {
                true => 1 + at(&longest, one + 1, other + 1),
                false => at(&longest, one + 1, other).max(at(&longest, one, other + 1)),
            };
            if let Some(cell) = longest.get_mut(one * width + other) {
                *cell = best;
            }
        }
    }
    let (mut one, mut other) = (0, 0);
    let mut steps = Vec::new();
    while one < old.len() || other < new.len() {
        if one < old.len() && other < new.len() && old.get(one) == new.get(other) {
            steps.push((Some(one), Some(other)));
            one += 1;
            other += 1;
        } else if one < old.len() && (other == new.len() || at(&longest, one + 1, other) >= at(&longest, one, other + 1)) {
            steps.push((Some(one), None));
            one += 1;
        } else {
            steps.push((None, Some(other)));
            other += 1;
        }
    }
    steps
}

/// Lines of one gap: each old one beside the new one that is most like it, the others alone.
fn paired(gap: (Vec<usize>, Vec<usize>), old: &[String], new: &[String]) -> Vec<(Option<usize>, Option<usize>)> {
    let (olds, news) = gap;
    let mut partner: Vec<Option<usize>> = vec![None; news.len()];
    let mut alone = Vec::new();
    for one in olds {
        let text = old.get(one).map_or("", String::as_str);
        let like = |other: &usize| new.get(*other).map_or(0.0, |line| likeness(text, line));
        let free = news.iter().enumerate().filter(|(slot, _)| partner.get(*slot) == Some(&None));
        let best = free.map(|(slot, other)| (slot, like(other))).filter(|(_, like)| *like >= LEAST_LIKE);
        // The first of equally alike ones.
        match best.rev().max_by(|one, other| one.1.total_cmp(&other.1)).and_then(|(slot, _)| partner.get_mut(slot)) {
            Some(slot) => *slot = Some(one),
            None => alone.push((Some(one), None)),
        }
    }
    alone.into_iter().chain(news.iter().zip(partner).map(|(other, one)| (one, Some(*other)))).collect()
}

/// The share of words without digits that two lines have in common.
pub(super) fn likeness(one: &str, other: &str) -> f64 {
    let words = |line: &str| -> Vec<String> {
        let words = line.split_whitespace().map(|word| word.trim_matches(',').to_lowercase());
        words.filter(|word| !word.is_empty() && !word.contains(|character: char| character.is_ascii_digit())).collect()
    };
    let (mut left, right) = (words(one), words(other));
    let all = left.len() + right.len();
    let mut shared = 0;
    for word in &right {
        if let Some(at) = left.iter().position(|candidate| candidate == word) {
            left.swap_remove(at);
            shared += 1;
        }
    }
    if all == 0 { 0.0 } else { 2.0 * shared as f64 / all as f64 }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn lines(text: &str) -> Vec<String> {
        text.split('|').filter(|line| !line.is_empty()).map(str::to_owned).collect()
    }

    #[test]
    fn edited_lines_stand_beside_each_other() {
        let old = lines("1 kg water|5 g sodium chloride|2 g Tris|expect pH 7 to 8");
        let new = lines("1 kg water|3 g Tris|6 g sodium chloride|1 g urea|expect pH 7 to 8");
        let aligned = align(&old, &new);
        assert!(aligned.contains(&(Some(1), Some(2))), "{aligned:?}");
        assert!(aligned.contains(&(Some(2), Some(1))), "{aligned:?}");
        assert!(aligned.contains(&(None, Some(3))), "{aligned:?}");
        assert!(aligned.contains(&(Some(3), Some(4))), "{aligned:?}");
    }

    #[test]
    fn every_line_comes_once() {
        for (old, new) in [("", ""), ("a", ""), ("", "a"), ("a|b|c", "c|b|a"), ("a|a|b", "a|b|b"), ("x|a|y", "a")] {
            let (old, new) = (lines(old), lines(new));
            let aligned = align(&old, &new);
            let mut olds: Vec<usize> = aligned.iter().filter_map(|(one, _)| *one).collect();
            let mut news: Vec<usize> = aligned.iter().filter_map(|(_, other)| *other).collect();
            olds.sort_unstable();
            news.sort_unstable();
            assert_eq!(olds, (0..old.len()).collect::<Vec<_>>());
            assert_eq!(news, (0..new.len()).collect::<Vec<_>>());
        }
    }
}
