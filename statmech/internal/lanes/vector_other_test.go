//go:build !amd64

package lanes

func useVector(bool) {}
