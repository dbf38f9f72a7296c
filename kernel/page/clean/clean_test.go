package clean_test

import (
	"regexp"
	"strings"
	"testing"

	"ampturn/kernel/page/clean"
)

func TestHTML(t *testing.T) {
	for _, c := range []struct{ name, in, want string }{
		{"text", `a < b & c &lt; d "q"`, `a &lt; b &amp; c &lt; d &#34;q&#34;`},
		{"kept", `<p class="x">a<br>b</p>`, `<p class="x">a<br>b</p>`},
		{"unwrapped", `<blink>a</blink><form><b>c</b></form>`, `a<b>c</b>`},
		{"closed at the end", `<div><b>a`, `<div><b>a</b></div>`},
		{"crossed", `<b><i>a</b>c</i>`, `<b><i>a</i></b>c`},
		{"stray end", `</div></p>a`, `a`},
		{"comment, doctype, instruction", `<!doctype html><!-- <b> -->a<?xml x?>`, `a`},
		{"script", `a<script>alert("</b>")</script>b`, `ab`},
		{"script left open", `a<ScRipT x>alert(1)`, `a`},
		{"style", `<style>p{}</style>a`, `a`},
		{"title, textarea, noscript", `<title><b>x</title><textarea><b></textarea><noscript><p title="</noscript><img src=x onerror=1>"></noscript>a`,
			`<span class="at-missing">[picture not in this page: x]</span>&#34;&gt;a`},
		{"iframe, object", `<iframe srcdoc="<b>"></iframe><object data=x><embed src=y></object>a`, `a`},
		{"events", `<p onclick="x()" ONLOAD=y>a</p>`, `<p>a</p>`},
		{"event without blank", `<p/onclick=x()>a</p>`, `<p>a</p>`},
		{"script link", `<a href="javascript:x()">a</a><a href=" java&#10;script:x()">b</a><a href="JAVASCRIPT&colon;x">c</a><a href="data:text/html,x">d</a>`,
			`<a>a</a><a>b</a><a>c</a><a>d</a>`},
		{"links", `<a href="https://x.org/?a=1&amp;b">a</a><a href="b.html#c:d">b</a><a href="mailto:x@y">c</a><a href="?x:y">d</a>`,
			`<a href="https://x.org/?a=1&amp;b">a</a><a href="b.html#c:d">b</a><a href="mailto:x@y">c</a><a href="?x:y">d</a>`},
		{"style attribute", `<p style="color:#767676;position:fixed;background:url(//x);width:expression(x);text-align : right">a</p>`,
			`<p style="color:#767676;text-align:right">a</p>`},
		{"style escapes", `<p style="color:u\72l(x)">a</p>`, `<p>a</p>`},
		{"remote picture", `<img src="https://x/y.png" alt="y">`, `<span class="at-missing">[picture not in this page: y]</span>`},
		{"held picture", `<img src="data:image/png;base64,AAAA" onload=x width=3>`, `<img src="data:image/png;base64,AAAA" width="3" alt="">`},
		{"not a picture", `<img src="data:text/html;base64,AAAA">`, `<span class="at-missing">[picture not in this page: data:text/html;base64,AAAA]</span>`},
		{"attribute breakout", `<p title="&quot;><script>x</script>">a</p>`, `<p title="&#34;&gt;&lt;script&gt;x&lt;/script&gt;">a</p>`},
		{"two of the same", `<p class=a class=b>x</p>`, `<p class="a">x</p>`},
		{"table", `<table class="at"><tr><td>1<td>2</table>`,
			`<div class="at-scroll" role="group" tabindex="0" aria-label="table"><table class="at"><tr><td>1<td>2</td></td></tr></table></div>`},
		{"data attributes", `<td data-status="PASS" data-x"y=1>a</td>`, `<td data-status="PASS">a</td>`},
		{"control signs", "a\x00b\x1bc&#0;&#27;", "abc\uFFFD"},
		{"not UTF-8", "a\xff", "a\uFFFD"},
		{"details", `<details open><summary>s</summary>x</details>`, `<details open=""><summary>s</summary>x</details>`},
	} {
		if got := clean.HTML(c.in, clean.Options{}); got != c.want {
			t.Errorf("%s\n  in %s\n got %s\nwant %s", c.name, c.in, got, c.want)
		}
	}
}

func TestSVG(t *testing.T) {
	for _, c := range []struct{ name, in, want string }{
		{"drawing", `<?xml version="1.0"?><svg xmlns="http://www.w3.org/2000/svg" viewbox="0 0 1 1"><title>T</title><desc>D.</desc><g><path d="M0 0"/></g></svg>`,
			`<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 1 1" id="o1-drawing" role="img" aria-label="T. D."><title>T</title><desc>D.</desc><g><path d="M0 0"/></g></svg>`},
		{"ids", `<svg id="s" role="img"><defs><clipPath id="c"><rect/></clipPath></defs><use xlink:href="#c"/><path clip-path="url(#c)" style="fill:url('#c')"/></svg>`,
			`<svg id="o1-s" role="img"><defs><clipPath id="o1-c"><rect/></clipPath></defs><use href="#o1-c"/><path clip-path="url(#o1-c)" style="fill:url(#o1-c)"/></svg>`},
		{"far references", `<svg role="img" id="s"><use href="x.svg#c"/><image href="https://x/y.png"/><path fill="url(https://x/#c)"/></svg>`,
			`<svg role="img" id="o1-s"><use/><image/><path/></svg>`},
		{"script and events", `<svg role="img" id="s" onload="x()"><script>x()</script><a href="javascript:x"><text>t</text></a><animate onbegin="x"/><set/><foreignObject><p>x</p></foreignObject></svg>`,
			`<svg role="img" id="o1-s"><text>t</text></svg>`},
		{"HTML inside", `<svg role="img" id="s"><p><img src=x onerror=y></p></svg>`, `<svg role="img" id="o1-s"></svg>`},
		{"title holds words only", `<svg role="img" id="s"><title><b onclick=x>a</b></title></svg>`, `<svg role="img" id="o1-s"><title>a</title></svg>`},
		{"rules", `<svg role="img" id="s"><style>/* x */ .a{fill:red} @media print{.a{fill:blue}}</style></svg>`,
			`<svg role="img" id="o1-s"><style>#o1-s{.a{fill:red} @media print{.a{fill:blue}}}</style></svg>`},
		{"rules that reach out", `<svg role="img" id="s"><style>} body{display:none</style><style>@import "x";</style><style>a{b:url(x)}</style><style>a{b:"}"</style><style><![CDATA[a{}]]></style></svg>`,
			`<svg role="img" id="o1-s"><style>#o1-s{a{}}</style></svg>`},
		{"end tags do not reach out", `<b><svg role="img" id="s"></b><g></g></svg></b>`, `<b><svg role="img" id="o1-s"><g></g></svg></b>`},
		{"math", `<math display="block"><mi mathvariant="normal" onclick="x">a</mi><mtext><b>c</b></mtext><annotation-xml><p>x</p></annotation-xml><maction>d</maction></math>`,
			`<math display="block"><mi mathvariant="normal">a</mi><mtext>c</mtext>d</math>`},
		{"ids in HTML", `<p id="a">x</p><a href="#a">y</a><a href="#other">z</a>`, `<p id="o1-a">x</p><a href="#o1-a">y</a><a href="#other">z</a>`},
	} {
		if got := clean.HTML(c.in, clean.Options{Prefix: "o1-"}); got != c.want {
			t.Errorf("%s\n  in %s\n got %s\nwant %s", c.name, c.in, got, c.want)
		}
	}
}

func TestCaptionAndImage(t *testing.T) {
	opt := clean.Options{
		Caption: func(element string) string { return "Table 2" },
		Image:   func(src string) (string, bool) { return "data:image/png;base64,AAAA", src == "a.png" },
	}
	got := clean.HTML(`<caption>x</caption><img src="a.png" alt="p"><img src="b.png">`, opt)
	want := `<caption><span class="at-number">Table 2</span> x</caption><img src="data:image/png;base64,AAAA" alt="p">` +
		`<span class="at-missing">[picture not in this page: b.png]</span>`
	if got != want {
		t.Errorf("\n got %s\nwant %s", got, want)
	}
}

func TestText(t *testing.T) {
	if got := clean.Text(`<svg><title>L over <tspan>i</tspan> &amp;
	 T</title><title>no</title></svg>`, "title"); got != "L over i & T" {
		t.Errorf("got %q", got)
	}
}

var (
	tag       = regexp.MustCompile(`<(/?)([a-zA-Z][\w-]*)((?: [\w:-]+="[^"<>]*")*)(/?)>`)
	forbidden = regexp.MustCompile(`(?i)^(script|iframe|object|embed|form|input|button|meta|link|base|foreignobject|textarea|noscript)$`)
	event     = regexp.MustCompile(`(?i) (on\w+|srcdoc|formaction|action)=`)
	scheme    = regexp.MustCompile(`(?i)(href|src)="\s*(javascript|vbscript|data:text|file):`)
)

// FuzzHTML demands of every result: it is made of escaped text and whole tags, tags are balanced, and none of what can
// run or load is in it; cleaning it again changes nothing of that.
func FuzzHTML(f *testing.F) {
	for _, s := range []string{`<p onclick=x>a<script>b</script>`, `<svg><style>a{}</style><title><b></svg>`, `<math><mtext><table><mglyph><style>`,
		`<svg></p><style><a id="</style><img src=1 onerror=alert(1)>">`, `<a href="java&Tab;script:x">`, `<table><td><svg><desc><p>`, `<![CDATA[<b>]]>`, `<img src="data:image/png;base64,AA">`} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, src string) {
		got := clean.HTML(src, clean.Options{Prefix: "o1-"})
		var stack []string
		rest := regexp.MustCompile(`<style>#[^<\\]*</style>`).ReplaceAllString(got, "")
		for _, m := range tag.FindAllStringSubmatch(rest, -1) {
			name := strings.ToLower(m[2])
			switch {
			case forbidden.MatchString(name), event.MatchString(m[3]), scheme.MatchString(m[3]):
				t.Fatalf("%s in the result\n  in %q\n got %q", m[0], src, got)
			case m[1] == "/":
				if len(stack) == 0 || stack[len(stack)-1] != name {
					t.Fatalf("%s closes nothing\n  in %q\n got %q", m[0], src, got)
				}
				stack = stack[:len(stack)-1]
			case m[4] == "" && name != "br" && name != "hr" && name != "img" && name != "wbr" && name != "col":
				stack = append(stack, name)
			}
		}
		if bare := tag.ReplaceAllString(rest, ""); len(stack) > 0 || strings.ContainsAny(bare, `<>"`) {
			t.Fatalf("not whole tags and escaped text: open %v, left %q\n  in %q", stack, bare, src)
		}
	})
}
