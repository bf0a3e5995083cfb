//! Elimination order: nested dissection by coordinates (George 1973), dense rows last.

/// Below this many unknowns a set is not cut further.
const LEAF: usize = 60;

/// The order: position k is taken by unknown `order[k]`.
///
/// `neighbours(i)` gives the couplings of an unknown; `tail` unknowns at the end go last.
pub fn dissect<'a>(
    places: &[[f64; 2]],
    tail: usize,
    neighbours: impl Fn(usize) -> &'a [usize],
) -> Vec<usize> {
    let n = places.len();
    let all: Vec<usize> = (0..n - tail).collect();
    let mut work = Work {
        places,
        side: vec![0; n],
        stamp: 0,
        order: Vec::with_capacity(n),
    };
    work.cut(all, &neighbours);
    work.order.extend(n - tail..n);
    work.order
}

struct Work<'a> {
    places: &'a [[f64; 2]],
    side: Vec<u32>,
    stamp: u32,
    order: Vec<usize>,
}

impl Work<'_> {
    fn cut<'a>(&mut self, mut set: Vec<usize>, neighbours: &impl Fn(usize) -> &'a [usize]) {
        if set.len() <= LEAF {
            self.order.extend(set);
            return;
        }
        let span = [0, 1].map(|a| {
            let (mut lo, mut hi) = (f64::INFINITY, f64::NEG_INFINITY);
            for &i in &set {
                lo = lo.min(self.places[i][a]);
                hi = hi.max(self.places[i][a]);
            }
            hi - lo
        });
        let axis = usize::from(span[1] > span[0]);
        let middle = set.len() / 2;
        set.select_nth_unstable_by(middle, |&a, &b| {
            (self.places[a][axis], a)
                .partial_cmp(&(self.places[b][axis], b))
                .unwrap_or(std::cmp::Ordering::Equal)
        });
        // right-hand unknowns that touch the left half separate the two
        self.stamp += 2;
        let (left, right) = (self.stamp, self.stamp + 1);
        for (k, &i) in set.iter().enumerate() {
            self.side[i] = if k < middle { left } else { right };
        }
        let (mut low, mut high, mut wall) = (Vec::new(), Vec::new(), Vec::new());
        for (k, &i) in set.iter().enumerate() {
            if k < middle {
                low.push(i);
            } else if neighbours(i).iter().any(|&j| self.side[j] == left) {
                wall.push(i);
            } else {
                high.push(i);
            }
        }
        if wall.len() >= set.len() / 2 {
            self.order.extend(set);
            return;
        }
        self.cut(low, neighbours);
        self.cut(high, neighbours);
        self.order.extend(wall);
    }
}
