package dsl

import (
	"strings"

	"ampturn/dsl/doc"
	"ampturn/dsl/review"
	"ampturn/dsl/session"
	"ampturn/magcirc"
)

// Note puts a line into the document.
func Note(text string) { say("note", "", text) }

// Cite names the source of what follows.
func Cite(text string) { say("cite", "source: ", text) }

// Warn puts a warning into the document, which its reader cannot overlook.
func Warn(text string) { say("warn", "warning: ", text) }

func say(class, lead, text string) {
	if strings.TrimSpace(text) == "" {
		refuse(magcirc.BadValue, strings.ToUpper(class[:1])+class[1:], "has no text", "")
	}
	session.Display(doc.Bundle(lead+text, doc.Line(class, lead+text), ""))
}

// Revision states the revision of the document, its date and what changed. A date is what its author states, never the
// clock.
func Revision(name, date, change string) {
	if strings.TrimSpace(name) == "" || strings.TrimSpace(date) == "" || strings.TrimSpace(change) == "" {
		refuse(magcirc.BadValue, "Revision", "wants a name, a date and what changed", `write Revision("B", "2026-01-15", "gap from 0.75 to 0.8 mm")`)
	}
	say("revision", "revision ", name+", "+date+": "+change)
}

// SVG shows a picture of one's own.
func SVG(text string) *Figure {
	if !strings.Contains(text, "<svg") {
		refuse(magcirc.BadValue, "SVG", "is not a picture", "it wants text that begins with <svg")
	}
	return &Figure{svg: text, text: "a picture"}
}

// Clear clears what the cell has shown so far.
func Clear() { session.Clear(false) }

// Assumptions marks the place of the list of what results of the notebook rest on: defaults that nobody chose, each with
// the line that would change it, extrapolations, formulas outside their range, overrides; and of the cautions that the
// parts in it call for. The finished run fills it.
func Assumptions() { review.PlaceAssumptions() }

// Fragment is a piece of HTML of one's own.
type Fragment struct {
	html string
}

// HTML shows HTML of one's own. A page that is made of the notebook runs no script in it.
func HTML(text string) *Fragment { return &Fragment{text} }

// MIMEBundle shows the fragment.
func (f *Fragment) MIMEBundle() map[string]any {
	if f == nil {
		return nil
	}
	return doc.Bundle(f.html, f.html, "")
}
