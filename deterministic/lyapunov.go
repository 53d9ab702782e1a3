package deterministic

// Lyapunov solves A C + C Aᵀ + D = 0 for the symmetric matrix C, all of them m×m in
// row-major order: the linear-noise covariance for the Jacobian A and the
// diffusion D (van Kampen, Stochastic Processes in Physics and Chemistry, ch. X).
// It is false where the equation has no single solution.
func Lyapunov(a, d []float64, m int) ([]float64, bool) { return lyapunov(a, d, m) }
