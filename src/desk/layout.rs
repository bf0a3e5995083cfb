//! Which part of the screen is whose.

use ratatui::layout::Rect;

/// The smallest screen the desk fits on.
pub const SMALLEST: (u16, u16) = (60, 18);

/// The parts of the main view.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Layout {
    /// Title and state.
    pub head: Rect,
    /// All levels.
    pub ladder: Rect,
    /// The map.
    pub plate: Rect,
    /// Scale bar and legend.
    pub caption: Rect,
    /// Figures.
    pub slip: Rect,
    /// Ladder, plate and slip together, for views that take all.
    pub body: Rect,
    /// Messages and questions.
    pub notice: Rect,
    /// Keys.
    pub foot: Rect,
}

/// Divides a screen; `None` when it is too small.
pub fn divide(width: u16, height: u16) -> Option<Layout> {
    if width < SMALLEST.0 || height < SMALLEST.1 {
        return None;
    }
    let margin = if width >= 120 { 2 } else { 1 };
    let gap = if width >= 120 { 4 } else { 2 };
    let inner = width - 2 * margin;
    let ladder = (width / 6 + 1).clamp(12, 34);
    let slip = (width * 3 / 10).clamp(25, 40);
    let plate = inner - ladder - slip - 2 * gap;
    let top = 2;
    let tall = height - top - 2;
    let x = margin + ladder + gap;
    Some(Layout {
        head: Rect::new(margin, 0, inner, 1),
        ladder: Rect::new(margin, top, ladder, tall),
        plate: Rect::new(x, top, plate, tall - 2),
        caption: Rect::new(x, top + tall - 1, plate, 1),
        slip: Rect::new(x + plate + gap, top, slip, tall),
        body: Rect::new(margin, top, inner, tall),
        notice: Rect::new(margin, height - 2, inner, 1),
        foot: Rect::new(margin, height - 1, inner, 1),
    })
}

/// Tiles of the sheet.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Tiles {
    /// Tiles across.
    pub across: usize,
    /// Tiles down.
    pub down: usize,
    /// Cells across one plate.
    pub width: u16,
    /// Cells down one plate, without its label.
    pub height: u16,
}

impl Tiles {
    /// As many plates of the shape's proportions (width over height, in cells) as stay readable.
    pub fn arrange(body: Rect, proportion: f64) -> Self {
        let least = (body.height / 4).clamp(5, 12);
        let down = ((body.height + 1) / (least + 2)).max(1);
        let height = ((body.height + 1) / down).saturating_sub(2).max(1);
        let width = f64::from(height) * proportion;
        let width = width.round().clamp(12.0, f64::from(body.width.max(12))) as u16;
        Self {
            across: usize::from((body.width + 2) / (width + 2)).max(1),
            down: usize::from(down),
            width,
            height,
        }
    }

    /// Tiles on a page.
    pub fn page(&self) -> usize {
        self.across * self.down
    }

    /// Where tile `k` of a page lies, its label in the last row.
    pub fn place(&self, body: Rect, k: usize) -> Rect {
        let (i, j) = ((k % self.across) as u16, (k / self.across) as u16);
        let (w, h) = (self.width + 2, self.height + 2);
        Rect::new(body.x + i * w, body.y + j * h, self.width, self.height + 1)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn parts_never_leave_the_screen_nor_overlap() {
        for w in 60..320 {
            for h in 18..120 {
                let l = divide(w, h).expect("large enough");
                for r in [
                    l.head, l.ladder, l.plate, l.caption, l.slip, l.notice, l.foot,
                ] {
                    assert!(r.right() <= w && r.bottom() <= h, "{w} {h} {r:?}");
                    assert!(r.width >= 10 || r.height == 1);
                }
                assert!(l.ladder.right() < l.plate.x && l.plate.right() < l.slip.x);
                for p in [0.2, 1.0, 2.0, 30.0] {
                    let t = Tiles::arrange(l.body, p);
                    let last = t.place(l.body, t.page() - 1);
                    assert!(last.right() <= l.body.right() && last.bottom() <= l.body.bottom());
                }
            }
        }
        assert!(divide(59, 40).is_none() && divide(100, 17).is_none());
    }
}
