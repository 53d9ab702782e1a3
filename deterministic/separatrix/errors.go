package separatrix

import "fmt"

// A DimensionError says that the class has not the two dimensions in which a
// separatrix is a curve.
type DimensionError struct {
	// Dimension is that of the compatibility class: species less conserved totals.
	Dimension int
}

// Error gives the message, one sentence.
func (e *DimensionError) Error() string {
	return fmt.Sprintf("a separatrix is a curve where two amounts are free; here %d are", e.Dimension)
}

// A SaddleError says why the manifold of a point cannot be traced.
type SaddleError struct {
	Amounts []float64
	Problem string
}

// Error gives the message, one sentence.
func (e *SaddleError) Error() string { return fmt.Sprintf("at %.6g: %s", e.Amounts, e.Problem) }

// A BoxError says what is wrong with a box of amounts.
type BoxError struct {
	Species   string
	Low, High float64
	Problem   string
}

// Error gives the message, one sentence.
func (e *BoxError) Error() string {
	return fmt.Sprintf("box of %s from %g to %g: %s", e.Species, e.Low, e.High, e.Problem)
}
