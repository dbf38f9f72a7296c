package clean

import "strings"

func set(words string) map[string]bool {
	m := map[string]bool{}
	for _, w := range strings.Fields(words) {
		m[w] = true
	}
	return m
}

// cased maps names in lower case to names as SVG writes them.
func cased(words string) map[string]string {
	m := map[string]string{}
	for _, w := range strings.Fields(words) {
		m[strings.ToLower(w)] = w
	}
	return m
}

var htmlElements = set(`a abbr b blockquote br caption cite code col colgroup dd del details dfn div dl dt em figcaption
	figure h1 h2 h3 h4 h5 h6 hr i img ins kbd li mark ol p pre q s samp section small span strong sub summary sup table
	tbody td tfoot th thead time tr u ul var wbr`)

var void = set("area base br col embed hr img input link meta param source track wbr")

var dropped = set(`script noscript iframe frame frameset noframes object embed applet template textarea select xmp plaintext
	noembed audio video canvas head style foreignobject metadata annotation-xml animate animatemotion animatetransform set
	handler listener`)

// textOnly are elements of SVG and MathML that hold words and nothing else.
var textOnly = set("title desc annotation")

var htmlAttributes = map[string]map[string]bool{
	"title": set("*"), "dir": set("*"), "role": set("*"),
	"open": set("details"), "cite": set(""), "datetime": set("time del ins"),
	"colspan": set("td th"), "rowspan": set("td th"), "scope": set("th"), "abbr": set("th"), "align": set("td th"),
	"span": set("col colgroup"), "start": set("ol"), "type": set("ol"), "reversed": set("ol"), "value": set("li"),
	"alt": set("img"), "width": set("img"), "height": set("img"),
}

var mathElements = set(`semantics annotation mrow mi mn mo ms mtext mspace mfrac msqrt mroot msub msup msubsup munder mover
	munderover mmultiscripts mprescripts mtable mtr mtd mstyle mpadded mphantom merror`)

var mathAttributes = set(`display mathvariant displaystyle scriptlevel stretchy symmetric fence separator form lspace rspace
	minsize maxsize movablelimits largeop accent accentunder linethickness width height depth voffset columnspan rowspan dir
	encoding`)

var svgElements = cased(`svg g defs symbol use path rect circle ellipse line polyline polygon text tspan textPath title desc
	marker pattern clipPath mask linearGradient radialGradient stop image`)

var svgAttributes = cased(`x y x1 y1 x2 y2 dx dy cx cy r rx ry fx fy d points width height viewBox preserveAspectRatio
	transform version role opacity fill fill-opacity fill-rule stroke stroke-width stroke-opacity stroke-linecap
	stroke-linejoin stroke-miterlimit stroke-dasharray stroke-dashoffset vector-effect color font-family font-size
	font-weight font-style font-variant letter-spacing word-spacing text-anchor dominant-baseline alignment-baseline
	baseline-shift text-decoration text-rendering shape-rendering image-rendering paint-order writing-mode rotate
	textLength lengthAdjust startOffset pathLength clip-path clip-rule clipPathUnits mask maskUnits maskContentUnits
	marker-start marker-mid marker-end markerWidth markerHeight markerUnits refX refY orient patternUnits
	patternContentUnits patternTransform gradientUnits gradientTransform spreadMethod offset stop-color stop-opacity
	overflow visibility display xml:space`)

var properties = set(`color background-color text-align vertical-align font-family font-size font-weight font-style
	font-variant font-variant-numeric line-height text-decoration text-transform white-space letter-spacing word-spacing
	width min-width max-width height padding padding-left padding-right padding-top padding-bottom margin margin-left
	margin-right margin-top margin-bottom border border-left border-right border-top border-bottom border-collapse opacity
	fill fill-opacity fill-rule stroke stroke-width stroke-opacity stroke-linecap stroke-linejoin stroke-miterlimit
	stroke-dasharray stroke-dashoffset text-anchor dominant-baseline alignment-baseline baseline-shift shape-rendering
	paint-order stop-color stop-opacity clip-path mask marker marker-start marker-mid marker-end`)
