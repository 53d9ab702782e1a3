//go:build !amd64

package sde

const wide = false

func addLanes(to, a, b []float64)                            { addPlain(to, a, b) }
func subLanes(to, a, b []float64)                            { subPlain(to, a, b) }
func mulLanes(to, a, b []float64)                            { mulPlain(to, a, b) }
func divLanes(to, a, b []float64)                            { divPlain(to, a, b) }
func sqrtLanes(to, a []float64)                              { sqrtPlain(to, a) }
func guardLanes(to, a []float64)                             { guardPlain(to, a) }
func cutLanes(to, a []float64)                               { cutPlain(to, a) }
func noiseLanes(to, drift, variance, z []float64, h float64) { noisePlain(to, drift, variance, z, h) }
func pairLanes(to, up, down, z []float64, h float64)         { pairPlain(to, up, down, z, h) }
func moveLanes(x, by []float64, v float64)                   { movePlain(x, by, v) }
func reflectLanes(x, by []float64, v, limit float64) (over bool) {
	return reflectPlain(x, by, v, limit)
}
func withinLanes(x []float64, low, high float64) (within bool) { return withinPlain(x, low, high) }
func columns(to []float64, room int, from []float64)           { columnsPlain(to, room, from) }
