//go:build !amd64

package lattice

func useVector(bool) {}
