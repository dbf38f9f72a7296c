// Package kerneltest has what tests of a kernel need: a [Front], which is a front end that sends requests and collects
// what belongs to each, in memory ([Memory]) or over the sockets of a running kernel ([Dial]); and a [Toy], a small
// engine whose cells do one thing a line, so that every kind of output, error and interrupt can be provoked.
//
//	f := kerneltest.Memory(t, kerneltest.NewToy())
//	got := f.Run("print hello")   // got.Text("stdout") == "hello\n"
//
// The client side of the sockets is written here from the ZeroMQ documents (RFC 23), apart from the kernel's own, so
// that one checks the other.
package kerneltest
