// Package browser drives a headless Chromium for tests of pages.
package browser

import (
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/log"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/page"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"
)

// Where AMPTURN_LOOK names a folder, the tests leave there what they saw: pictures and sheets to look at.

// Start starts a headless Chromium: the one that AMPTURN_CHROMIUM names, or one in PATH.
func Start(t *testing.T) context.Context {
	t.Helper()
	exe := os.Getenv("AMPTURN_CHROMIUM")
	for _, name := range []string{"chromium", "chromium-browser", "google-chrome"} {
		if exe == "" {
			exe, _ = exec.LookPath(name) // not found: the next name
		}
	}
	if exe == "" {
		t.Skip("no Chromium: AMPTURN_CHROMIUM is not set and PATH has none")
	}
	opts := append(chromedp.DefaultExecAllocatorOptions[:], chromedp.ExecPath(exe), chromedp.NoSandbox, chromedp.DisableGPU,
		chromedp.UserDataDir(t.TempDir()), chromedp.Flag("disable-quic", true), chromedp.Flag("disable-component-update", true),
		chromedp.Flag("hide-scrollbars", true), chromedp.WSURLReadTimeout(time.Minute))
	ctx, stop := chromedp.NewExecAllocator(t.Context(), opts...)
	t.Cleanup(stop)
	ctx, stop = chromedp.NewContext(ctx)
	t.Cleanup(stop)
	if err := chromedp.Do(ctx); err != nil {
		t.Fatalf("%s does not start: %v", exe, err)
	}
	ctx, stop = context.WithTimeout(ctx, 2*time.Minute)
	t.Cleanup(stop)
	return ctx
}

// Watched collects what a page must not do.
type Watched struct {
	mu   sync.Mutex
	list []string
}

// List gives what was seen so far.
func (w *Watched) List() []string {
	w.mu.Lock()
	defer w.mu.Unlock()
	return append([]string(nil), w.list...)
}

func (w *Watched) add(format string, args ...any) {
	w.mu.Lock()
	defer w.mu.Unlock()
	w.list = append(w.list, fmt.Sprintf(format, args...))
}

// Watch notes each request, script error, message and dialog of the pages to come; own is the page's own address.
func Watch(t *testing.T, ctx context.Context, own string) *Watched {
	t.Helper()
	w := &Watched{}
	err := chromedp.Listen(ctx, func(event any) {
		switch e := event.(type) {
		case *network.EventRequestWillBeSent:
			if u := e.Request.URL; u != own && !strings.HasPrefix(u, "data:image/") && u != "about:blank" {
				w.add("request %s", u)
			}
		case *runtime.EventExceptionThrown:
			w.add("script error %s", e.ExceptionDetails.Text)
		case *runtime.EventConsoleAPICalled:
			w.add("console %s", e.Type)
		case *log.EventEntryAdded:
			w.add("log %s: %s", e.Entry.Level, e.Entry.Text)
		case *page.EventJavascriptDialogOpening:
			w.add("dialog %s", e.Message)
			go func() { // the dialog is the failure; closing it only lets the test go on
				_, _ = chromedp.Call(ctx, page.HandleJavaScriptDialog, page.HandleJavaScriptDialogParams{Accept: true})
			}()
		}
	})
	for _, enable := range []Step{
		Command(network.Enable, network.EnableParams{}), Command(log.Enable, cdp.Empty{}), Command(page.Enable, page.EnableParams{}),
	} {
		Run(t, ctx, enable)
	}
	if err != nil {
		t.Fatal(err)
	}
	return w
}

// Step is a step of the browser.
type Step = chromedp.Action[chromedp.Void]

// Run does steps.
func Run(t *testing.T, ctx context.Context, steps ...Step) {
	t.Helper()
	if err := chromedp.Do(ctx, steps...); err != nil {
		t.Fatal(err)
	}
}

// Command is a step that sends one command of the browser's protocol.
func Command[P, R any](c cdp.Command[P, R], params P) Step {
	return chromedp.Func(func(ctx context.Context, target *chromedp.Target) error {
		_, err := cdp.Call(ctx, target, c, params)
		return err
	})
}

// Ask evaluates an expression in the page.
func Ask[T any](t *testing.T, ctx context.Context, js string) T {
	t.Helper()
	v, err := chromedp.Run(ctx, chromedp.Evaluate[T](js))
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// Keep leaves data in the folder that AMPTURN_LOOK names.
func Keep(t *testing.T, name string, data []byte) {
	t.Helper()
	if dir := os.Getenv("AMPTURN_LOOK"); dir != "" {
		name = strings.ReplaceAll(t.Name(), "/", "-") + "-" + name
		if err := os.WriteFile(filepath.Join(dir, name), data, 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// Shoot leaves a picture of the whole page there.
func Shoot(t *testing.T, ctx context.Context, name string) {
	t.Helper()
	if os.Getenv("AMPTURN_LOOK") == "" {
		return
	}
	png, err := chromedp.Run(ctx, chromedp.FullScreenshot(100))
	if err != nil {
		t.Fatal(err)
	}
	Keep(t, name, png)
}

// Media sets the medium ("" for screen, or "print") and the colours that the reader prefers.
func Media(medium, colours string) Step {
	return Command(emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{Media: medium,
		Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: colours}}})
}
