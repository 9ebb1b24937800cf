//! The ruler of decades: each size on one logarithmic scale, with a mark at its nominal
//! value and a bar over its range, so that the eye ranks them.

use crate::report::layout;
use crate::units::Range;

/// Most decades that are drawn; what lies further below stands at the edge.
const DECADES: i32 = 14;

/// A ruler for a set of sizes.
#[derive(Debug, Clone)]
pub struct Ruler {
    lowest: i32,
    decades: i32,
    /// Columns a decade.
    step: usize,
}

impl Ruler {
    /// A ruler over sizes, in so many columns.
    pub fn over(sizes: &[Range], columns: usize) -> Ruler {
        let log = |value: f64| value.abs().max(f64::MIN_POSITIVE).log10();
        let high = sizes
            .iter()
            .map(|size| log(size.high))
            .fold(f64::NEG_INFINITY, f64::max);
        let low = sizes
            .iter()
            .map(|size| log(size.low))
            .fold(f64::INFINITY, f64::min);
        let top = high.ceil() as i32;
        let most = DECADES.min((columns as i32 - 1) / 2).max(1);
        let lowest = (low.floor() as i32).max(top - most).min(top - 1);
        let decades = top - lowest;
        let step = ((columns.saturating_sub(1)) / decades as usize).clamp(1, 10);
        Ruler {
            lowest,
            decades,
            step,
        }
    }

    /// The columns it takes.
    pub fn width(&self) -> usize {
        self.step * self.decades as usize + 1
    }

    /// The powers of ten at which it has a mark.
    pub fn decades(&self) -> std::ops::RangeInclusive<i32> {
        self.lowest..=self.lowest + self.decades
    }

    /// How far along it a size stands, from 0 to 1; below 0 where it lies below the ruler.
    pub fn place(&self, size: f64) -> f64 {
        let log = size.abs().max(f64::MIN_POSITIVE).log10();
        ((log - f64::from(self.lowest)) / f64::from(self.decades)).min(1.0)
    }

    fn column(&self, size: f64) -> Option<usize> {
        let place =
            (size.abs().max(f64::MIN_POSITIVE).log10() - f64::from(self.lowest)) * self.step as f64;
        // A hair below the edge is the edge.
        (place > -0.5).then(|| (place.round().max(0.0) as usize).min(self.width() - 1))
    }

    /// The line of labels above it.
    pub fn head(&self) -> String {
        let mut line = String::new();
        let label = |decade: i32| format!("1e{}", self.lowest + decade);
        let widest = (0..=self.decades)
            .map(|decade| layout::width(&label(decade)))
            .max()
            .unwrap_or(1);
        let every = (widest + 1).div_ceil(self.step).max(1) as i32;
        let mut end = 0;
        for decade in (0..=self.decades).step_by(every as usize) {
            let at = decade as usize * self.step;
            let text = label(decade);
            // Labels begin at their decade; the last one may have to end there.
            let start = at.min((self.width() + 3).saturating_sub(layout::width(&text)));
            if start < end {
                continue;
            }
            line.push_str(&" ".repeat(start - layout::width(&line).min(start)));
            line.push_str(&text);
            end = start + layout::width(&text) + 1;
        }
        line
    }

    /// The line of one size: dots at the decades, a bar over its range, `●` at its nominal
    /// value; `◂` where it lies below the ruler.
    pub fn line(&self, size: &Range) -> String {
        let mut cells: Vec<char> = (0..self.width())
            .map(|column| if column % self.step == 0 { '.' } else { ' ' })
            .collect();
        let Some(high) = self.column(size.high) else {
            cells[0] = '◂';
            return cells.into_iter().collect();
        };
        let low = self.column(size.low);
        if !size.is_exact() {
            let start = low.unwrap_or(0);
            cells[start..=high].fill('─');
            cells[high] = '┤';
            cells[start] = if low.is_some() { '├' } else { '◂' };
        }
        match self.column(size.nominal) {
            Some(nominal) => cells[nominal] = '●',
            None => cells[0] = '◂',
        }
        cells.into_iter().collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn marks_stand_where_their_decades_do() {
        let sizes = [
            Range {
                low: 1e-5,
                nominal: 1e-4,
                high: 1e-3,
            },
            Range::exact(1e-7),
        ];
        let ruler = Ruler::over(&sizes, 41);
        assert_eq!(ruler.width(), 41);
        let line: Vec<char> = ruler.line(&sizes[0]).chars().collect();
        assert_eq!((line[20], line[30], line[40]), ('├', '●', '┤'));
        assert_eq!(ruler.line(&sizes[1]).chars().next(), Some('●'));
        assert!(ruler.head().starts_with("1e-7"));
    }

    #[test]
    fn what_lies_far_below_stands_at_the_edge() {
        let sizes = [Range::exact(1.0), Range::exact(1e-40)];
        let ruler = Ruler::over(&sizes, 30);
        assert!(ruler.line(&sizes[1]).starts_with('◂'));
        assert!(ruler.width() <= 30);
    }
}
