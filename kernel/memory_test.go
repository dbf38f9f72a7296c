package kernel_test

import (
	"strings"
	"testing"

	"ampturn/kernel"
	"ampturn/kernel/kerneltest"
)

// A cell that takes more memory than the limit ends with an error; the kernel and its names stay.
func TestMemoryLimit(t *testing.T) {
	const limit = 400 << 20
	f, _ := kerneltest.MemoryKernel(t, kerneltest.NewToy(), &kernel.Options{Memory: limit})
	f.Run("keep = 41")
	e := f.Run("grow 20000000")
	if e.Reply.Content["ename"] != "OutOfMemory" || !strings.Contains(e.Reply.Content["evalue"].(string), "the limit is 419 MB") {
		t.Errorf("%v", e.Reply)
	}
	equal(t, "names are kept", f.Run("keep+1").Result(), "42")
}
