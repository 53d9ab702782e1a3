package kramers

import "math"

// Rate gives Kramers' rate of escape, 1/time, of the overdamped motion
// dx = −V′(x)dt + √(2D)dW: √(well·|top|)/2π·e^{−barrier/D}, from the curvatures V″ of
// the well and of the top of the barrier, both 1/time, and the barrier's height over the noise
// D (Kramers, Physica 7 (1940) 284; Hänggi, Talkner, Borkovec, Rev. Mod. Phys. 62
// (1990) 251). It is the leading term for high barriers: at a
// barrier of 5 D it is some 10 % high for a well of the fourth degree.
func Rate(well, top, barrier float64) float64 {
	return math.Sqrt(well*math.Abs(top)) / (2 * math.Pi) * math.Exp(-barrier)
}
