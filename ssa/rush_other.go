//go:build !amd64

package ssa

// wideRush gives nil: there are no rushes in assembly for this machine.
func (k *lookup) wideRush() rush { return nil }
