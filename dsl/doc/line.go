package doc

// Line is one line of text as an HTML paragraph of a class.
func Line(class, text string) string {
	return `<p class="` + escape(class) + `">` + escape(text) + `</p>`
}
