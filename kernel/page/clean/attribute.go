package clean

import (
	"html"
	"regexp"
	"strings"
)

// attributes writes those that the element may have.
func (c *cleaner) attributes(t token, in space) {
	if in == inSVG && t.name == "svg" && c.outermost() {
		c.drawing(&t)
	}
	for _, a := range t.attrs {
		name, value, ok := c.attribute(t.name, a, in)
		if ok {
			c.out.WriteString(" " + name + `="` + html.EscapeString(value) + `"`)
		}
	}
}

func (c *cleaner) outermost() bool {
	for _, o := range c.stack {
		if o.name == "svg" {
			return false
		}
	}
	return true
}

// drawing makes a drawing one picture for those who hear the page: title and description are its words.
func (c *cleaner) drawing(t *token) {
	if !t.has("id") {
		t.set("id", "drawing")
	}
	c.svgID = c.opt.Prefix + idText(t.attr("id"))
	if !plainName.MatchString(c.svgID) {
		c.svgID = ""
	}
	if t.has("role") || t.has("aria-label") || t.has("aria-hidden") {
		return
	}
	rest := c.scan.src[c.scan.at:]
	if end := strings.Index(rest, "</svg"); end >= 0 {
		rest = rest[:end]
	}
	words := Text(rest, "title")
	if desc := Text(rest, "desc"); desc != "" {
		words = strings.TrimSpace(strings.TrimRight(words, ".") + ". " + desc)
	}
	t.set("role", "img")
	if words != "" {
		t.set("aria-label", strings.TrimPrefix(words, ". "))
	}
}

var plainName = regexp.MustCompile(`^[A-Za-z][\w-]*$`)

// attribute gives an attribute as it may be written.
func (c *cleaner) attribute(element string, a attribute, in space) (name, value string, ok bool) {
	switch {
	case a.name == "id":
		return "id", c.opt.Prefix + idText(a.value), idText(a.value) != "" && in != inMath
	case a.name == "style":
		value = c.style(a.value)
		return "style", value, value != ""
	case a.name == "class", a.name == "lang":
		return a.name, a.value, true
	case idLists[a.name]:
		return a.name, c.prefixed(a.value), true
	case strings.HasPrefix(a.name, "aria-"), strings.HasPrefix(a.name, "data-"):
		return a.name, a.value, plainName.MatchString(a.name)
	}
	switch in {
	case inSVG:
		return c.svgAttribute(element, a)
	case inMath:
		return a.name, a.value, mathAttributes[a.name]
	}
	switch {
	case a.name == "href" && element == "a":
		value, ok = c.link(a.value)
		return "href", value, ok
	case a.name == "src" && element == "img":
		return "src", a.value, true // checked before
	}
	return a.name, a.value, htmlAttributes[a.name]["*"] || htmlAttributes[a.name][element]
}

var idLists = map[string]bool{"aria-labelledby": true, "aria-describedby": true, "aria-details": true, "headers": true}

func idText(id string) string { return strings.Join(strings.Fields(id), "") }

// prefixed puts the prefix before each id of a list.
func (c *cleaner) prefixed(list string) string {
	ids := strings.Fields(list)
	for i, id := range ids {
		if c.ids[id] {
			ids[i] = c.opt.Prefix + id
		}
	}
	return strings.Join(ids, " ")
}

// link gives the address of a link: a place in the page, a file beside it, or http, https and mailto.
func (c *cleaner) link(href string) (string, bool) {
	href = strings.Map(func(r rune) rune {
		if r <= ' ' {
			return -1
		}
		return r
	}, href)
	if id, ok := strings.CutPrefix(href, "#"); ok {
		return "#" + c.prefixed(id), true
	}
	if i := strings.IndexAny(href, ":/?#"); i >= 0 && href[i] == ':' {
		switch strings.ToLower(href[:i]) {
		case "http", "https", "mailto":
		default:
			return "", false
		}
	}
	return href, true
}

var reference = regexp.MustCompile(`url\(\s*["']?#([^"'()\s]+)["']?\s*\)`)

func (c *cleaner) svgAttribute(element string, a attribute) (name, value string, ok bool) {
	switch a.name {
	case "href", "xlink:href":
		if id, ok := strings.CutPrefix(strings.TrimSpace(a.value), "#"); ok && element != "image" {
			return "href", "#" + c.opt.Prefix + idText(id), true
		}
		return "href", a.value, element == "image" && dataImage(a.value) && !strings.HasPrefix(a.value, "data:image/svg")
	case "xmlns":
		return "xmlns", "http://www.w3.org/2000/svg", true
	}
	value, ok = c.references(a.value)
	return svgAttributes[a.name], value, ok && svgAttributes[a.name] != ""
}

// references puts the prefix into url(#id); any other url is refused.
func (c *cleaner) references(value string) (string, bool) {
	rest := reference.ReplaceAllString(value, "")
	if strings.Contains(strings.ToLower(rest), "url") || strings.Contains(rest, `\`) {
		return "", false
	}
	return reference.ReplaceAllStringFunc(value, func(m string) string {
		return "url(#" + c.opt.Prefix + idText(reference.FindStringSubmatch(m)[1]) + ")"
	}), true
}

var plainValue = regexp.MustCompile(`^[\w\s.,%#()+*/'"-]*$`)

// style keeps the declarations whose property is in the list and whose value is plain.
func (c *cleaner) style(css string) string {
	var kept []string
	for _, declaration := range strings.Split(css, ";") {
		property, value, ok := strings.Cut(declaration, ":")
		property, value = strings.ToLower(strings.TrimSpace(property)), strings.TrimSpace(value)
		if !ok || !properties[property] || !plainValue.MatchString(value) {
			continue
		}
		if value, ok = c.references(value); ok && !strings.Contains(strings.ToLower(value), "expression") {
			kept = append(kept, property+":"+value)
		}
	}
	return strings.Join(kept, ";")
}

var (
	comment  = regexp.MustCompile(`(?s)/\*.*?\*/`)
	quoted   = regexp.MustCompile(`"[^"\n]*"|'[^'\n]*'`)
	atWord   = regexp.MustCompile(`@[\w-]*`)
	cdataEnd = regexp.MustCompile(`<!\[CDATA\[|\]\]>`)
)

// plainRules gives the rules of a drawing's style element; ok is false if they hold anything but plain rules and
// media conditions, or braces that do not match.
func plainRules(css string) (rules string, ok bool) {
	rules = comment.ReplaceAllString(cdataEnd.ReplaceAllString(clear(css), ""), "")
	bare := quoted.ReplaceAllString(rules, "")
	if strings.ContainsAny(rules, `<\`) || strings.ContainsAny(bare, `"'`) || strings.Contains(bare, "/*") {
		return "", false
	}
	low := strings.ToLower(bare)
	for _, word := range []string{"url", "expression", "image-set", "src(", "position", "behavior"} {
		if strings.Contains(low, word) {
			return "", false
		}
	}
	for _, at := range atWord.FindAllString(low, -1) {
		if at != "@media" {
			return "", false
		}
	}
	depth := 0
	for _, r := range bare {
		switch r {
		case '{':
			depth++
		case '}':
			depth--
		}
		if depth < 0 {
			return "", false
		}
	}
	return strings.TrimSpace(rules), depth == 0
}
