package export

import (
	"fmt"
	"strings"
)

// Everything below works on plain ASCII, where a byte is a column.

func rule(r rune) string { return strings.Repeat(string(r), sheetColumns) }

func pad(s string, columns int) string { return fmt.Sprintf("%-*s", columns, s) }

// spread puts one text at the left edge and one at the right. A left text that is too long is cut
// with three points: it stands in full elsewhere on the sheet. One column is left free for the form
// feed, which some programs count.
func spread(left, right string) string {
	const width = sheetColumns - 1
	left, right = ASCII(left), ASCII(right)
	room := width - len(right) - 1
	if len(left) > room {
		left = left[:room-3] + "..."
	}
	return left + strings.Repeat(" ", width-len(left)-len(right)) + right
}

// wrap breaks text between words so that no line is wider than the sheet; a word that is wider is
// broken anywhere. The first line begins with first, the others with rest.
func wrap(text, first, rest string) block {
	var b block
	line := first
	empty := true
	for _, word := range strings.Fields(ASCII(text)) {
		for {
			gap := 1
			if empty {
				gap = 0
			}
			if len(line)+gap+len(word) <= sheetColumns {
				line += strings.Repeat(" ", gap) + word
				empty = false
				break
			}
			if empty {
				room := sheetColumns - len(line)
				line += word[:room]
				word = word[room:]
			}
			b = append(b, line)
			line, empty = rest, true
		}
	}
	return append(b, line)
}

// Letters that have a plain spelling. What has none is written as its code point, so that two names
// never become one.
var spelled = strings.NewReplacer(
	"À", "A", "Á", "A", "Â", "A", "Ã", "A", "Ä", "A", "Å", "A", "Æ", "AE", "Ç", "C", "È", "E", "É", "E", "Ê", "E", "Ë", "E",
	"Ì", "I", "Í", "I", "Î", "I", "Ï", "I", "Ñ", "N", "Ò", "O", "Ó", "O", "Ô", "O", "Õ", "O", "Ö", "O", "Ø", "O", "Ù", "U",
	"Ú", "U", "Û", "U", "Ü", "U", "Ý", "Y", "ß", "ss", "à", "a", "á", "a", "â", "a", "ã", "a", "ä", "a", "å", "a", "æ", "ae",
	"ç", "c", "è", "e", "é", "e", "ê", "e", "ë", "e", "ì", "i", "í", "i", "î", "i", "ï", "i", "ñ", "n", "ò", "o", "ó", "o",
	"ô", "o", "õ", "o", "ö", "o", "ø", "o", "ù", "u", "ú", "u", "û", "u", "ü", "u", "ý", "y", "ÿ", "y",
	"Č", "C", "č", "c", "Ł", "L", "ł", "l", "Ő", "O", "ő", "o", "Š", "S", "š", "s", "Ž", "Z", "ž", "z",
	"–", "-", "—", "-", "−", "-", "‘", "'", "’", "'", "“", `"`, "”", `"`, "…", "...", "°", " deg", "µ", "u", "μ", "u",
	"×", "x", "·", ".", "±", "+-", "≤", "<=", "≥", ">=", "\u00a0", " ",
)

// ASCII gives text in printable ASCII: letters with marks lose them, the rest is written as code points.
func ASCII(s string) string {
	var b strings.Builder
	for _, r := range spelled.Replace(s) {
		switch {
		case r == '\n' || r == '\r' || r == '\t':
			b.WriteByte(' ')
		case r < ' ' || r > '~':
			fmt.Fprintf(&b, "<U+%04X>", r)
		default:
			b.WriteRune(r)
		}
	}
	return b.String()
}
