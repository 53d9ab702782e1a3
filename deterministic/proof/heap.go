package proof

import "slices"

// A heap is a cluster of boxes that could not be resolved, by its hull. Around a
// degenerate state rounding hides the rates in a region far wider than the least
// width, and to cover it with the smallest boxes would take very many. So a box
// that lies near a heap and is much smaller is given up as well, unless it can be
// excluded: the heap grows by a share of itself at a time.
type heap struct {
	hull  box
	boxes int
}

// absorbs tells whether b, which was not excluded, may be given up for its
// nearness to the heap: it lies within the heap's width of it and is at most a
// quarter as wide.
func (h heap) absorbs(b box) bool {
	for i, a := range h.hull {
		r := a.Width()
		if b[i].Width() > r/4 && b[i].Width() > 0 || b[i].Lo < a.Lo-r || b[i].Hi > a.Hi+r {
			return false
		}
	}
	return true
}

// pile adds a box to the heaps, and joins those that touch.
func pile(heaps []heap, b box) []heap {
	add := heap{b, 1}
	for i := 0; i < len(heaps); {
		if !touch(heaps[i].hull, add.hull) {
			i++
			continue
		}
		add = heap{add.hull.hull(heaps[i].hull), add.boxes + heaps[i].boxes}
		heaps = slices.Delete(slices.Clone(heaps), i, i+1)
		i = 0
	}
	return append(heaps, add)
}

// touch tells whether two boxes meet, or nearly so: within a quarter of the wider.
func touch(a, b box) bool {
	for i := range a {
		near := max(a[i].Width(), b[i].Width()) / 4
		if a[i].Hi+near < b[i].Lo || b[i].Hi+near < a[i].Lo {
			return false
		}
	}
	return true
}
