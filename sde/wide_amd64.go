package sde

import "golang.org/x/sys/cpu"

// wide tells whether the machine, and its operating system, has AVX2.
var wide = cpu.X86.HasAVX2

//go:noescape
func addWide(to, a, b *float64, n int)

//go:noescape
func subWide(to, a, b *float64, n int)

//go:noescape
func mulWide(to, a, b *float64, n int)

//go:noescape
func divWide(to, a, b *float64, n int)

//go:noescape
func sqrtWide(to, a *float64, n int)

//go:noescape
func guardWide(to, a *float64, n int)

//go:noescape
func cutWide(to, a *float64, n int)

//go:noescape
func noiseWide(to, drift, variance, z *float64, n int, h float64)

//go:noescape
func pairWide(to, up, down, z *float64, n int, h float64)

//go:noescape
func moveWide(x, by *float64, n int, v float64)

//go:noescape
func reflectWide(x, by *float64, n int, v, limit float64) (over bool)

//go:noescape
func withinWide(x *float64, n int, low, high float64) (within bool)

//go:noescape
func columnsWide(to *float64, room int, from *float64, n int)

func addLanes(to, a, b []float64) {
	if wide && inFours(to) {
		a, b = a[:len(to)], b[:len(to)]
		addWide(&to[0], &a[0], &b[0], len(to))
		return
	}
	addPlain(to, a, b)
}

func subLanes(to, a, b []float64) {
	if wide && inFours(to) {
		a, b = a[:len(to)], b[:len(to)]
		subWide(&to[0], &a[0], &b[0], len(to))
		return
	}
	subPlain(to, a, b)
}

func mulLanes(to, a, b []float64) {
	if wide && inFours(to) {
		a, b = a[:len(to)], b[:len(to)]
		mulWide(&to[0], &a[0], &b[0], len(to))
		return
	}
	mulPlain(to, a, b)
}

func divLanes(to, a, b []float64) {
	if wide && inFours(to) {
		a, b = a[:len(to)], b[:len(to)]
		divWide(&to[0], &a[0], &b[0], len(to))
		return
	}
	divPlain(to, a, b)
}

func sqrtLanes(to, a []float64) {
	if wide && inFours(to) {
		a = a[:len(to)]
		sqrtWide(&to[0], &a[0], len(to))
		return
	}
	sqrtPlain(to, a)
}

func guardLanes(to, a []float64) {
	if wide && inFours(to) {
		a = a[:len(to)]
		guardWide(&to[0], &a[0], len(to))
		return
	}
	guardPlain(to, a)
}

func cutLanes(to, a []float64) {
	if wide && inFours(to) {
		a = a[:len(to)]
		cutWide(&to[0], &a[0], len(to))
		return
	}
	cutPlain(to, a)
}

func noiseLanes(to, drift, variance, z []float64, h float64) {
	if wide && inFours(to) {
		drift, variance, z = drift[:len(to)], variance[:len(to)], z[:len(to)]
		noiseWide(&to[0], &drift[0], &variance[0], &z[0], len(to), h)
		return
	}
	noisePlain(to, drift, variance, z, h)
}

func pairLanes(to, up, down, z []float64, h float64) {
	if wide && inFours(to) {
		up, down, z = up[:len(to)], down[:len(to)], z[:len(to)]
		pairWide(&to[0], &up[0], &down[0], &z[0], len(to), h)
		return
	}
	pairPlain(to, up, down, z, h)
}

func moveLanes(x, by []float64, v float64) {
	if wide && inFours(x) {
		by = by[:len(x)]
		moveWide(&x[0], &by[0], len(x), v)
		return
	}
	movePlain(x, by, v)
}

func reflectLanes(x, by []float64, v, limit float64) (over bool) {
	if wide && inFours(x) {
		by = by[:len(x)]
		return reflectWide(&x[0], &by[0], len(x), v, limit)
	}
	return reflectPlain(x, by, v, limit)
}

func withinLanes(x []float64, low, high float64) (within bool) {
	if wide && inFours(x) {
		return withinWide(&x[0], len(x), low, high)
	}
	return withinPlain(x, low, high)
}

func columns(to []float64, room int, from []float64) {
	if wide && inFours(from[:len(from)/padding]) {
		_ = to[(len(from)/padding-1)*room+padding-1]
		columnsWide(&to[0], room, &from[0], len(from)/padding)
		return
	}
	columnsPlain(to, room, from)
}

// inFours tells whether lanes can be taken four at a time.
func inFours(lanes []float64) bool { return len(lanes) > 0 && len(lanes)%padding == 0 }
