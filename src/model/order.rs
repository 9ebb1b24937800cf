//! An order in which everything comes after what it needs.

/// An order in which everything comes after what it needs, or a ring.
///
/// # Errors
/// The members of a ring, in order.
pub fn order(needs: &[Vec<usize>]) -> Result<Vec<usize>, Vec<usize>> {
    #[derive(Clone, Copy, PartialEq)]
    enum Mark {
        New,
        Open,
        Done,
    }
    let mut marks = vec![Mark::New; needs.len()];
    let mut order = Vec::with_capacity(needs.len());
    // A stack of its own, since chains of definitions may be as long as a script.
    let mut stack: Vec<(usize, usize)> = Vec::new();
    for start in 0..needs.len() {
        if marks[start] != Mark::New {
            continue;
        }
        marks[start] = Mark::Open;
        stack.push((start, 0));
        while let Some((idx, next)) = stack.last_mut() {
            let idx = *idx;
            match needs[idx].get(*next).copied() {
                None => {
                    marks[idx] = Mark::Done;
                    order.push(idx);
                    stack.pop();
                }
                Some(needed) => {
                    *next += 1;
                    match marks[needed] {
                        Mark::Done => {}
                        Mark::New => {
                            marks[needed] = Mark::Open;
                            stack.push((needed, 0));
                        }
                        Mark::Open => {
                            let path = stack.iter().map(|(idx, _)| *idx);
                            return Err(path.skip_while(|idx| *idx != needed).collect());
                        }
                    }
                }
            }
        }
    }
    Ok(order)
}
