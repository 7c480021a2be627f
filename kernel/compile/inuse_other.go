//go:build !unix

package compile

func hold(string) {}

func held(string) bool { return false }
