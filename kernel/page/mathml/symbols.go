package mathml

// letters are set as identifiers: small Greek italic, capital Greek and the signs of upright as they are.
var letters = map[string]string{
	`\alpha`: "α", `\beta`: "β", `\gamma`: "γ", `\delta`: "δ", `\epsilon`: "ϵ", `\varepsilon`: "ε", `\zeta`: "ζ",
	`\eta`: "η", `\theta`: "θ", `\vartheta`: "ϑ", `\iota`: "ι", `\kappa`: "κ", `\varkappa`: "ϰ", `\lambda`: "λ", `\mu`: "μ",
	`\nu`: "ν", `\xi`: "ξ", `\omicron`: "ο", `\pi`: "π", `\varpi`: "ϖ", `\rho`: "ρ", `\varrho`: "ϱ", `\sigma`: "σ",
	`\varsigma`: "ς", `\tau`: "τ", `\upsilon`: "υ", `\phi`: "ϕ", `\varphi`: "φ", `\chi`: "χ", `\psi`: "ψ", `\omega`: "ω",
	`\Gamma`: "Γ", `\Delta`: "Δ", `\Theta`: "Θ", `\Lambda`: "Λ", `\Xi`: "Ξ", `\Pi`: "Π", `\Sigma`: "Σ", `\Upsilon`: "Υ",
	`\Phi`: "Φ", `\Psi`: "Ψ", `\Omega`: "Ω",
	`\infty`: "∞", `\partial`: "∂", `\nabla`: "∇", `\ell`: "ℓ", `\hbar`: "ℏ", `\Re`: "ℜ", `\Im`: "ℑ", `\aleph`: "ℵ",
	`\emptyset`: "∅", `\varnothing`: "∅", `\imath`: "ı", `\jmath`: "ȷ", `\degree`: "°", `\angle`: "∠", `\triangle`: "△",
	`\bot`: "⊥", `\top`: "⊤", `\square`: "□", `\prime`: "′", `\dag`: "†",
}

var upright = set(`\Gamma`, `\Delta`, `\Theta`, `\Lambda`, `\Xi`, `\Pi`, `\Sigma`, `\Upsilon`, `\Phi`, `\Psi`, `\Omega`,
	`\infty`, `\nabla`, `\Re`, `\Im`, `\aleph`, `\emptyset`, `\varnothing`, `\degree`, `\angle`, `\triangle`, `\bot`, `\top`,
	`\square`, `\prime`, `\dag`)

// operators are binary operators, relations, arrows, dots and logic.
var operators = map[string]string{
	`\pm`: "±", `\mp`: "∓", `\times`: "×", `\div`: "÷", `\cdot`: "⋅", `\ast`: "∗", `\star`: "⋆", `\circ`: "∘", `\bullet`: "∙",
	`\oplus`: "⊕", `\ominus`: "⊖", `\otimes`: "⊗", `\odot`: "⊙", `\wedge`: "∧", `\vee`: "∨", `\cap`: "∩", `\cup`: "∪",
	`\setminus`: "∖", `\parallel`: "∥", `\perp`: "⊥", `\mid`: "∣", `\land`: "∧", `\lor`: "∨", `\neg`: "¬", `\lnot`: "¬",
	`\le`: "≤", `\leq`: "≤", `\ge`: "≥", `\geq`: "≥", `\leqslant`: "⩽", `\geqslant`: "⩾", `\ll`: "≪", `\gg`: "≫", `\ne`: "≠",
	`\neq`: "≠", `\equiv`: "≡", `\approx`: "≈", `\sim`: "∼", `\simeq`: "≃", `\cong`: "≅", `\propto`: "∝", `\doteq`: "≐",
	`\lesssim`: "≲", `\gtrsim`: "≳", `\triangleq`: "≜", `\lt`: "<", `\gt`: ">",
	`\in`: "∈", `\notin`: "∉", `\ni`: "∋", `\subset`: "⊂", `\supset`: "⊃", `\subseteq`: "⊆", `\supseteq`: "⊇",
	`\forall`: "∀", `\exists`: "∃", `\therefore`: "∴", `\because`: "∵",
	`\to`: "→", `\rightarrow`: "→", `\leftarrow`: "←", `\gets`: "←", `\leftrightarrow`: "↔", `\Rightarrow`: "⇒",
	`\Leftarrow`: "⇐", `\Leftrightarrow`: "⇔", `\implies`: "⟹", `\iff`: "⟺", `\mapsto`: "↦", `\uparrow`: "↑",
	`\downarrow`: "↓", `\updownarrow`: "↕", `\longrightarrow`: "⟶", `\longleftarrow`: "⟵", `\nearrow`: "↗", `\searrow`: "↘",
	`\rightleftharpoons`: "⇌",
	`\ldots`:             "…", `\dots`: "…", `\cdots`: "⋯", `\vdots`: "⋮", `\ddots`: "⋱", `\colon`: ":",
}

// large are the operators that grow in display style; all but the integrals take limits above and below.
var large = map[string]string{
	`\sum`: "∑", `\prod`: "∏", `\coprod`: "∐", `\bigcup`: "⋃", `\bigcap`: "⋂", `\bigoplus`: "⨁", `\bigotimes`: "⨂",
	`\bigvee`: "⋁", `\bigwedge`: "⋀", `\int`: "∫", `\iint`: "∬", `\iiint`: "∭", `\oint`: "∮", `\oiint`: "∯",
}

var functions = named("sin", "cos", "tan", "cot", "sec", "csc", "arcsin", "arccos", "arctan", "sinh", "cosh", "tanh",
	"coth", "exp", "ln", "log", "lg", "lim", "liminf", "limsup", "max", "min", "sup", "inf", "det", "arg", "dim", "ker", "gcd",
	"Pr", "deg", "hom")

var underName = set("lim", "liminf", "limsup", "max", "min", "sup", "inf", "det", "gcd", "Pr")

var spaces = map[string]string{
	`\,`: "0.1667em", `\:`: "0.2222em", `\>`: "0.2222em", `\;`: "0.2778em", `\!`: "-0.1667em", `\ `: "0.25em",
	`\quad`: "1em", `\qquad`: "2em", `\enspace`: "0.5em", `\thinspace`: "0.1667em", `\enskip`: "0.5em",
}

// escapes are signs that stand for themselves behind a backslash, or have a name.
var escapes = map[string]string{
	`\{`: "{", `\}`: "}", `\|`: "‖", `\%`: "%", `\$`: "$", `\#`: "#", `\&`: "&", `\_`: "_", `\lbrace`: "{", `\rbrace`: "}",
	`\langle`: "⟨", `\rangle`: "⟩", `\lvert`: "|", `\rvert`: "|", `\vert`: "|", `\lVert`: "‖", `\rVert`: "‖", `\Vert`: "‖",
	`\lfloor`: "⌊", `\rfloor`: "⌋", `\lceil`: "⌈", `\rceil`: "⌉", `\lbrack`: "[", `\rbrack`: "]", `\backslash`: "\\",
}

// fences are signs that have another meaning as a delimiter.
var fences = map[string]string{"<": "⟨", ">": "⟩", `\lgroup`: "⟮", `\rgroup`: "⟯"}

// accentSign is a sign over or under its argument; label: scripts of the whole stand above or below it.
type accentSign struct {
	sign               string
	under, wide, label bool
}

var accents = map[string]accentSign{
	`\hat`: {sign: "^"}, `\check`: {sign: "ˇ"}, `\tilde`: {sign: "~"}, `\acute`: {sign: "´"}, `\grave`: {sign: "`"},
	`\dot`: {sign: "˙"}, `\ddot`: {sign: "¨"}, `\dddot`: {sign: "⃛"}, `\breve`: {sign: "˘"}, `\bar`: {sign: "¯"},
	`\vec`: {sign: "→"}, `\mathring`: {sign: "˚"},
	`\widehat`: {sign: "^", wide: true}, `\widetilde`: {sign: "~", wide: true},
	`\overrightarrow`: {sign: "→", wide: true}, `\overleftarrow`: {sign: "←", wide: true},
	`\overbrace`:  {sign: "⏞", wide: true, label: true},
	`\underbrace`: {sign: "⏟", under: true, wide: true, label: true},
}

func set(names ...string) map[string]bool {
	m := make(map[string]bool, len(names))
	for _, n := range names {
		m[n] = true
	}
	return m
}

func named(names ...string) map[string]string {
	m := make(map[string]string, len(names))
	for _, n := range names {
		m[`\`+n] = n
	}
	return m
}
