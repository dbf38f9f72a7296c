package mathml

import "strings"

// alphabet is a style of letters. MathML Core has no attribute for it; Unicode has letters of their own (the block
// Mathematical Alphanumeric Symbols, U+1D400 on).
type alphabet int

const (
	plain alphabet = iota // italic letters, as formulas have them
	roman
	bold
	italic
	boldItalic
	script
	doubleStruck
	fraktur
	sans
	mono
)

var alphabets = map[string]alphabet{
	`\mathrm`: roman, `\mathup`: roman, `\mathnormal`: plain, `\mathit`: italic, `\mathbf`: bold,
	`\boldsymbol`: boldItalic, `\bm`: boldItalic, `\mathcal`: script, `\mathscr`: script, `\mathbb`: doubleStruck,
	`\mathfrak`: fraktur, `\mathsf`: sans, `\mathtt`: mono,
}

// block is where an alphabet's A, a, 0, capital alpha and small alpha stand; 0: it has none.
type block struct{ upper, lower, digit, greekUpper, greekLower rune }

var blocks = map[alphabet]block{
	bold:         {0x1D400, 0x1D41A, 0x1D7CE, 0x1D6A8, 0x1D6C2},
	italic:       {0x1D434, 0x1D44E, 0, 0x1D6E2, 0x1D6FC},
	boldItalic:   {0x1D468, 0x1D482, 0x1D7CE, 0x1D71C, 0x1D736},
	script:       {0x1D49C, 0x1D4B6, 0, 0, 0},
	doubleStruck: {0x1D538, 0x1D552, 0x1D7D8, 0, 0},
	fraktur:      {0x1D504, 0x1D51E, 0, 0, 0},
	sans:         {0x1D5A0, 0x1D5BA, 0x1D7E2, 0, 0},
	mono:         {0x1D670, 0x1D68A, 0x1D7F6, 0, 0},
}

// older are letters that Unicode had before the block and left out of it.
var older = map[rune]rune{
	0x1D455: 'ℎ', 0x1D49D: 'ℬ', 0x1D4A0: 'ℰ', 0x1D4A1: 'ℱ', 0x1D4A3: 'ℋ', 0x1D4A4: 'ℐ', 0x1D4A7: 'ℒ', 0x1D4A8: 'ℳ',
	0x1D4AD: 'ℛ', 0x1D4BA: 'ℯ', 0x1D4BC: 'ℊ', 0x1D4C4: 'ℴ', 0x1D506: 'ℭ', 0x1D50B: 'ℌ', 0x1D50C: 'ℑ', 0x1D515: 'ℜ',
	0x1D51D: 'ℨ', 0x1D53A: 'ℂ', 0x1D53F: 'ℍ', 0x1D545: 'ℕ', 0x1D547: 'ℙ', 0x1D548: 'ℚ', 0x1D549: 'ℝ', 0x1D551: 'ℤ',
}

// apply gives the letters and digits of s in the alphabet; what it does not have stays.
func (a alphabet) apply(s string) string {
	b, ok := blocks[a]
	if !ok {
		return s
	}
	return strings.Map(func(r rune) rune {
		to := b.letter(r)
		if old, ok := older[to]; ok {
			return old
		}
		return to
	}, s)
}

func (b block) letter(r rune) rune {
	shift := func(first, to rune) rune {
		if to == 0 {
			return r
		}
		return to + r - first
	}
	switch {
	case r >= 'A' && r <= 'Z':
		return shift('A', b.upper)
	case r >= 'a' && r <= 'z':
		return shift('a', b.lower)
	case r >= '0' && r <= '9':
		return shift('0', b.digit)
	case r >= 'Α' && r <= 'Ω':
		return shift('Α', b.greekUpper)
	case r >= 'α' && r <= 'ω':
		return shift('α', b.greekLower)
	}
	return r
}
