package kerneltest

import (
	"bytes"
	"context"
	"fmt"
	"runtime"
	"strconv"
	"strings"
	"time"

	"ampturn/kernel"
)

// toyCall is one command with what it may use.
type toyCall struct {
	ctx  context.Context
	cell kernel.Cell
	out  kernel.Sink
	rest string
}

// text gives the rest of the line, unquoted if it is quoted.
func (c toyCall) text() string {
	if s, err := strconv.Unquote(c.rest); err == nil {
		return s
	}
	return c.rest
}

// number takes a number off the rest of the line.
func (c *toyCall) number() int {
	word, rest, _ := strings.Cut(c.rest, " ")
	n, err := strconv.Atoi(word)
	if err != nil {
		panic(fmt.Sprintf("a number is wanted, not %q", word))
	}
	c.rest = rest
	return n
}

func (c *toyCall) millis() time.Duration { return time.Duration(c.number()) * time.Millisecond }

func (c toyCall) write(name, text string) error {
	c.out(kernel.Output{Kind: kernel.Stream, Name: name, Text: text})
	return nil
}

func (c toyCall) display(kind kernel.Kind, id, mime, text string) error {
	c.out(kernel.Output{Kind: kind, ID: id, Data: map[string]any{mime: text}})
	return nil
}

func (c toyCall) ask(hidden bool) error {
	got, err := c.cell.Ask(c.ctx, c.text(), hidden)
	if err != nil {
		return err
	}
	return c.write("stdout", "got "+got+"\n")
}

var commands = map[string]func(c toyCall) error{
	"print":  func(c toyCall) error { return c.write("stdout", c.text()+"\n") },
	"warn":   func(c toyCall) error { return c.write("stderr", c.text()+"\n") },
	"raw":    func(c toyCall) error { return c.write("stdout", c.text()) },
	"fail":   func(c toyCall) error { return &toyError{"ToyFailure", c.text()} },
	"panic":  func(c toyCall) error { panic(c.text()) },
	"loop":   func(c toyCall) error { return spin(c.ctx, -1) },
	"spin":   func(c toyCall) error { return spin(c.ctx, c.millis()) },
	"ask":    func(c toyCall) error { return c.ask(false) },
	"secret": func(c toyCall) error { return c.ask(true) },
	"length": func(c toyCall) error { return result(c.out, strconv.Itoa(len(c.text()))) },
	"repeat": func(c toyCall) error {
		n := c.number()
		return c.write("stdout", strings.Repeat(c.text(), n)+"\n")
	},
	"lines": func(c toyCall) error {
		for i := range c.number() {
			c.write("stdout", fmt.Sprintf("line %d\n", i))
			if c.ctx.Err() != nil {
				break
			}
		}
		return nil
	},
	"sleep": func(c toyCall) error {
		select {
		case <-time.After(c.millis()):
			return nil
		case <-c.ctx.Done():
			return c.ctx.Err()
		}
	},
	"show": func(c toyCall) error {
		mime, text, _ := strings.Cut(c.rest, " ")
		return c.display(kernel.Display, "", mime, text)
	},
	"page": func(c toyCall) error { return c.display(kernel.Page, "", "text/plain", c.text()) },
	"place": func(c toyCall) error {
		id, text, _ := strings.Cut(c.rest, " ")
		return c.display(kernel.Display, id, "text/plain", text)
	},
	"update": func(c toyCall) error {
		id, text, _ := strings.Cut(c.rest, " ")
		return c.display(kernel.Update, id, "text/plain", text)
	},
	"chunks": func(c toyCall) error {
		n := c.number()
		text := strings.Repeat("z", c.number())
		for range n {
			c.display(kernel.Display, "", "text/plain", text)
		}
		return nil
	},
	"clear": func(c toyCall) error {
		c.out(kernel.Output{Kind: kernel.Clear, Wait: c.rest == "wait"})
		return nil
	},
	"late": func(c toyCall) error {
		d := c.millis()
		time.AfterFunc(d, func() { c.write("stdout", c.text()+"\n") })
		return nil
	},
	"hoard": func(c toyCall) error {
		c.out(kernel.Output{Kind: kernel.Result, Data: map[string]any{"text/plain": strconv.Itoa(len(make([]byte, c.number())))}})
		return nil
	},
	"grow": func(c toyCall) error {
		var kept [][]byte
		for step := c.number(); c.ctx.Err() == nil; time.Sleep(10 * time.Millisecond) {
			kept = append(kept, bytes.Repeat([]byte{1}, step))
		}
		runtime.KeepAlive(kept)
		return c.ctx.Err()
	},
	"overflow": func(c toyCall) error { return fmt.Errorf("%d", deeper(0)) },
}

// deeper never returns.
func deeper(n int) int {
	if n < 0 {
		return n
	}
	return deeper(n+1) + 1
}
