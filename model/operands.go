package model

// operandKind is what an operand is, for the choice of an evaluator.
type operandKind uint8

const (
	general operandKind = iota // any tree: call f
	amount                     // the amount of a species: read x[index]
	literal                    // a number: value
)

// operand is one operand of + − * /.
type operand struct {
	kind  operandKind
	index int
	value float64
	f     evaluator
}

// ordered puts the operands of a commutative operator in one order: a number
// first, then a species, then what is general.
func ordered(l, r operand) (operand, operand) {
	if r.kind > l.kind {
		return r, l
	}
	return l, r
}

func sumOf(l, r operand) evaluator {
	l, r = ordered(l, r)
	v, i, j, f, g := l.value, l.index, r.index, l.f, r.f
	switch {
	case l.kind == literal && r.kind == amount:
		return func(x []float64, _, _ float64) float64 { return v + x[j] }
	case l.kind == literal:
		return func(x []float64, a, b float64) float64 { return v + g(x, a, b) }
	case l.kind == amount && r.kind == amount:
		return func(x []float64, _, _ float64) float64 { return x[i] + x[j] }
	case l.kind == amount:
		return func(x []float64, a, b float64) float64 { return x[i] + g(x, a, b) }
	}
	return func(x []float64, a, b float64) float64 { return f(x, a, b) + g(x, a, b) }
}

func productOf(l, r operand) evaluator {
	l, r = ordered(l, r)
	v, i, j, f, g := l.value, l.index, r.index, l.f, r.f
	switch {
	case l.kind == literal && r.kind == amount:
		return func(x []float64, _, _ float64) float64 { return v * x[j] }
	case l.kind == literal:
		return func(x []float64, a, b float64) float64 { return v * g(x, a, b) }
	case l.kind == amount && r.kind == amount:
		return func(x []float64, _, _ float64) float64 { return x[i] * x[j] }
	case l.kind == amount:
		return func(x []float64, a, b float64) float64 { return x[i] * g(x, a, b) }
	}
	return func(x []float64, a, b float64) float64 { return f(x, a, b) * g(x, a, b) }
}

func differenceOf(l, r operand) evaluator {
	if r.kind == literal { // exactly the same
		return sumOf(l, operand{kind: literal, value: -r.value, f: number64(-r.value)})
	}
	v, i, j, f, g := l.value, l.index, r.index, l.f, r.f
	switch {
	case l.kind == literal:
		return func(x []float64, a, b float64) float64 { return v - g(x, a, b) }
	case l.kind == amount && r.kind == amount:
		return func(x []float64, _, _ float64) float64 { return x[i] - x[j] }
	case l.kind == amount:
		return func(x []float64, a, b float64) float64 { return x[i] - g(x, a, b) }
	case r.kind == amount:
		return func(x []float64, a, b float64) float64 { return f(x, a, b) - x[j] }
	}
	return func(x []float64, a, b float64) float64 { return f(x, a, b) - g(x, a, b) }
}

func quotientOf(l, r operand) evaluator {
	v, w, i, j, f, g := l.value, r.value, l.index, r.index, l.f, r.f
	switch {
	case l.kind == literal:
		return func(x []float64, a, b float64) float64 { return v / g(x, a, b) }
	case r.kind == literal && l.kind == amount:
		return func(x []float64, _, _ float64) float64 { return x[i] / w }
	case r.kind == literal:
		return func(x []float64, a, b float64) float64 { return f(x, a, b) / w }
	case r.kind == amount && l.kind == amount:
		return func(x []float64, _, _ float64) float64 { return x[i] / x[j] }
	case r.kind == amount:
		return func(x []float64, a, b float64) float64 { return f(x, a, b) / x[j] }
	}
	return func(x []float64, a, b float64) float64 { return f(x, a, b) / g(x, a, b) }
}
