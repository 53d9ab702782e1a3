package model

// A Program is a rate law compiled for fast evaluation at many amounts. It gives
// the same bits as the tree it was made from. A Program is immutable and safe for
// concurrent use.
//
// The law becomes a chain of small functions, each specialised for the kinds of
// its operands. Up to two sub-trees that occur several times and are costly, such
// as the power in x^n/(half^n + x^n), are evaluated once.
type Program struct {
	root evaluator
	// first and second give the values of the sub-trees that are shared; nil where
	// there are none. second may use the value of first.
	first, second evaluator
}

// evaluator gives a value at amounts x, with the values a and b of the two shared
// sub-trees.
type evaluator func(x []float64, a, b float64) float64

// Eval gives the law's value at amounts x, one per species.
func (p *Program) Eval(x []float64) float64 {
	if p.first == nil {
		return p.root(x, 0, 0)
	}
	return p.shared(x)
}

func (p *Program) shared(x []float64) float64 {
	a, b := p.first(x, 0, 0), 0.0
	if p.second != nil {
		b = p.second(x, a, 0)
	}
	return p.root(x, a, b)
}

// Compile makes a program of a tree whose constants are bound.
func Compile(n *Node) *Program {
	c := newCompiler(n)
	p := &Program{}
	if c.first = c.best(n); c.first >= 0 {
		p.first = c.fresh(c.nodes[c.first])
		if c.second = c.best(n); c.second >= 0 {
			p.second = c.fresh(c.nodes[c.second])
		}
	}
	p.root = c.emit(n)
	return p
}
