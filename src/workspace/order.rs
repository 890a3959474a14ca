//! The order in which solutions are evaluated: stocks before what is made from them, cycles told apart.

/// The nodes of a graph in waves: each wave needs only what earlier waves hold, and its members can be worked out side by
/// side. Nodes that are in a cycle, or wait for one that is, come with the cycle that they stand in.
#[derive(Debug, Default, PartialEq, Eq)]
pub struct Order {
    /// The waves.
    pub waves: Vec<Vec<usize>>,
    /// The members of cycles, each cycle in the order of its nodes.
    pub cycles: Vec<Vec<usize>>,
}

/// Orders nodes `0..needs.len()`, where `needs[n]` are the nodes that `n` needs. Tarjan's strongly connected components
/// without recursion, so that a deep chain of stocks cannot exhaust the stack.
pub fn order(needs: &[Vec<usize>]) -> Order {
    let components = components(needs);
    let mut wave_of = vec![0usize; needs.len()];
    let mut result = Order::default();
    // Components come out with what they need before them.
    for component in components {
        let is_cycle = match component.as_slice() {
            [one] => needs.get(*one).is_some_and(|needed| needed.contains(one)),
            _ => true,
        };
        let wave = component
            .iter()
            .flat_map(|node| needs.get(*node).into_iter().flatten())
            .filter(|needed| !component.contains(needed))
            .filter_map(|needed| wave_of.get(*needed))
            .map(|wave| wave + 1)
            .max()
            .unwrap_or(0);
        for node in &component {
            if let Some(slot) = wave_of.get_mut(*node) {
                *slot = wave;
            }
            if result.waves.len() <= wave {
                result.waves.resize(wave + 1, Vec::new());
            }
            if let Some(members) = result.waves.get_mut(wave) {
                members.push(*node);
            }
        }
        if is_cycle {
            let mut members = component;
            members.sort_unstable();
            result.cycles.push(members);
        }
    }
    for wave in &mut result.waves {
        wave.sort_unstable();
    }
    result.cycles.sort();
    result
}

fn components(needs: &[Vec<usize>]) -> Vec<Vec<usize>> {
    const NEW: usize = usize::MAX;
    let mut number = vec![NEW; needs.len()];
    let mut lowest = vec![NEW; needs.len()];
    let mut on_stack = vec![false; needs.len()];
    let mut stack = Vec::new();
    let mut next = 0;
    let mut found = Vec::new();
    for start in 0..needs.len() {
        if number.get(start) != Some(&NEW) {
            continue;
        }
        let mut path: Vec<(usize, usize)> = vec![(start, 0)];
        while let Some((node, edge)) = path.pop() {
            if edge == 0 {
                set(&mut number, node, next);
                set(&mut lowest, node, next);
                set(&mut on_stack, node, true);
                stack.push(node);
                next += 1;
            }
            let needed = needs.get(node).and_then(|needed| needed.get(edge)).copied();
            match needed {
                Some(needed) => {
                    path.push((node, edge + 1));
                    if number.get(needed) == Some(&NEW) {
                        path.push((needed, 0));
                    } else if on_stack.get(needed) == Some(&true) {
                        lower(&mut lowest, node, number.get(needed).copied().unwrap_or(NEW));
                    }
                }
                None => {
                    let own = lowest.get(node).copied().unwrap_or(NEW);
                    if number.get(node) == Some(&own) {
                        let mut component = Vec::new();
                        while let Some(member) = stack.pop() {
                            set(&mut on_stack, member, false);
                            component.push(member);
                            if member == node {
                                break;
                            }
                        }
                        found.push(component);
                    }
                    if let Some((parent, _)) = path.last() {
                        lower(&mut lowest, *parent, own);
                    }
                }
            }
        }
    }
    found
}

fn set<T>(values: &mut [T], index: usize, value: T) {
    if let Some(slot) = values.get_mut(index) {
        *slot = value;
    }
}

fn lower(values: &mut [usize], index: usize, value: usize) {
    if let Some(slot) = values.get_mut(index) {
        *slot = (*slot).min(value);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_needed_comes_first() {
        let order = order(&[vec![1], vec![2], vec![], vec![2]]);
        assert_eq!(order.waves, [vec![2], vec![1, 3], vec![0]]);
        assert!(order.cycles.is_empty());
    }

    #[test]
    fn cycles_are_told_apart_from_those_that_wait_for_them() {
        let order = order(&[vec![1], vec![0], vec![0], vec![3]]);
        assert_eq!(order.cycles, [vec![0, 1], vec![3]]);
        assert!(order.waves.concat().contains(&2));
    }

    #[test]
    fn a_deep_chain_does_not_exhaust_the_stack() {
        let needs: Vec<Vec<usize>> = (0..200_000).map(|node| if node == 0 { vec![] } else { vec![node - 1] }).collect();
        assert_eq!(order(&needs).waves.len(), 200_000);
    }
}
