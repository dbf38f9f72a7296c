// Command toykernel serves the toy engine of kerneltest, to try front ends on the kernel without its language.
//
//	toykernel kernel FILE      serves the sockets of a connection file
//	toykernel install PREFIX   installs itself as "ampturn-toy" below PREFIX
package main

import (
	"context"
	"fmt"
	"os"

	"ampturn/kernel"
	"ampturn/kernel/kerneltest"
	"ampturn/kernel/spec"
)

func main() {
	if err := run(os.Args[1:]); err != nil {
		fmt.Fprintln(os.Stderr, "toykernel:", err)
		os.Exit(1)
	}
}

func run(args []string) error {
	switch {
	case len(args) == 2 && args[0] == "kernel":
		o := &kernel.Options{Name: "ampturn-toy", Version: "1"}
		if os.Getenv("TOYKERNEL_LOG") != "" {
			o.Log = func(format string, a ...any) { fmt.Fprintf(os.Stderr, format+"\n", a...) }
		}
		return kernel.Serve(context.Background(), args[1], kerneltest.NewToy(), o)
	case len(args) == 2 && args[0] == "install":
		binary, err := os.Executable()
		if err != nil {
			return err
		}
		dir, err := spec.Install(spec.Entry{
			Name: "ampturn-toy", Display: "ampturn toy", Language: "toy", Binary: binary,
		}, spec.Place{Prefix: args[1]})
		fmt.Println(dir)
		return err
	}
	return fmt.Errorf("wants: kernel FILE, or install PREFIX")
}
