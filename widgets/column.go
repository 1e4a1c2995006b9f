package widgets

import "fyne.io/fyne/v2"

// A column stacks objects at full width, less a margin on the right. It reads an object's least height
// after giving it its width, since wrapped text depends on it.
type column struct{ gap, right float32 }

// Layout implements fyne.Layout.
func (c column) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	y := float32(0)
	size.Width = max(size.Width-c.right, 0)
	for _, o := range objects {
		if !o.Visible() {
			continue
		}
		o.Resize(fyne.NewSize(size.Width, o.MinSize().Height))
		height := o.MinSize().Height
		o.Resize(fyne.NewSize(size.Width, height))
		o.Move(fyne.NewPos(0, y))
		if height > 0 {
			y += height + c.gap
		}
	}
}

// MinSize implements fyne.Layout.
func (c column) MinSize(objects []fyne.CanvasObject) fyne.Size {
	var s fyne.Size
	for _, o := range objects {
		if !o.Visible() {
			continue
		}
		m := o.MinSize()
		s.Width = max(s.Width, m.Width)
		if m.Height > 0 {
			s.Height += m.Height + c.gap
		}
	}
	s.Height = max(s.Height-c.gap, 0)
	s.Width += c.right
	return s
}
