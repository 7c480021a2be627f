//go:build !amd64

package lanes

func exp8(dst, x *float64, inside *uint8, groups int) bool { return false }
