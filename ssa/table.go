package ssa

// pageSize is the number of counts that a table is grown by.
const pageSize = 256

// tableLimit is the count from which on a table is not used: values there are
// worked out each time.
const tableLimit = 1 << 22

// A table holds a function of one species' count, filled page by page where
// counts are reached.
type table struct {
	f     func(n int64) float64
	pages [][]float64
}

// at gives f(n).
func (t *table) at(n int64) float64 {
	if p := uint64(n) / pageSize; p < uint64(len(t.pages)) && t.pages[p] != nil {
		return t.pages[p][n%pageSize]
	}
	return t.fill(n)
}

func (t *table) fill(n int64) float64 {
	if n >= tableLimit {
		return t.f(n)
	}
	p := n / pageSize
	for int64(len(t.pages)) <= p {
		t.pages = append(t.pages, nil)
	}
	page := make([]float64, pageSize)
	for i := range page {
		page[i] = t.f(p*pageSize + int64(i))
	}
	t.pages[p] = page
	return page[n%pageSize]
}
