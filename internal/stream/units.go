package stream

// Units is a block of numbers uniform on the multiples of 2⁻⁵² in [0, 1).
type Units [256]float64

// FillUnits overwrites dst, each number made of one of as many calls of Uint64. The
// loop steps the source in registers, two numbers at a time, as Draws.Fill does.
func (s *Stream) FillUnits(dst *Units) {
	high, low := s.words()
	for i := 0; i+1 < len(dst); i += 2 {
		h, l := oneAndTwo[0].advance(high, low)
		high, low = oneAndTwo[1].advance(high, low)
		dst[i], dst[i+1] = unit(output(h, l)), unit(output(high, low))
	}
	s.setWords(high, low)
}
