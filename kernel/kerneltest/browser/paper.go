package browser

import (
	"bytes"
	"context"
	"fmt"
	"regexp"
	"testing"

	"github.com/chromedp/chromedp"
)

// Paper is a size of sheets.
type Paper struct {
	Name          string
	Width, Height float64 // inch
	box           string  // as a PDF states it, in points
}

// Papers are the sizes that a page must print well on.
var Papers = []Paper{
	{"A4", 8.27, 11.69, `/MediaBox \[0 0 59[45][.\d]* 84[12][.\d]*\]`},
	{"letter", 8.5, 11, `/MediaBox \[0 0 612[.\d]* 792[.\d]*\]`},
}

// Print prints the page to PDF, demands that the sheets have their size, and gives their number.
func Print(t *testing.T, ctx context.Context, p Paper) (sheets int) {
	t.Helper()
	pdf, err := chromedp.Run(ctx, chromedp.PrintToPDF(chromedp.PDFPaper(chromedp.PaperSize{Width: p.Width, Height: p.Height})))
	if err != nil {
		t.Fatal(err)
	}
	Keep(t, p.Name+".pdf", pdf)
	sheets = len(regexp.MustCompile(`/Type /Page\b`).FindAll(pdf, -1))
	if boxes := regexp.MustCompile(p.box).FindAll(pdf, -1); len(boxes) == 0 || !bytes.HasPrefix(pdf, []byte("%PDF")) {
		t.Errorf("%s: no sheet of that size: %q", p.Name, regexp.MustCompile(`/MediaBox [^\]]*\]`).FindAll(pdf, 3))
	}
	return sheets
}

// OnPaper lays the page out as it is printed, with margins of 16 mm, and lists what is wider than the sheet.
func OnPaper(t *testing.T, ctx context.Context, p Paper) []string {
	t.Helper()
	inside := int64((p.Width - 2*16/25.4) * 96)
	Run(t, ctx, Media("print", "dark"), chromedp.EmulateViewport(inside, 1000))
	return Ask[[]string](t, ctx, fmt.Sprintf(`[...document.querySelectorAll("main *, footer *")].filter(e => e.getBoundingClientRect().right > %d + 1 && !e.closest("math, svg"))
		.map(e => e.tagName + "." + e.getAttribute("class"))`, inside))
}
