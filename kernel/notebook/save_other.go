//go:build !unix

package notebook

func ignoreSizeSignal() {}
