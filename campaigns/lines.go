package campaigns

import (
	"strconv"
	"strings"
)

// The TOML library says on which line a key stands, but in arrays of tables it gives the line of the
// last table that has the key, whichever table is meant. So the lines are found here: one pass over a
// text that the library has accepted or will refuse, which knows just enough of the TOML grammar to
// tell keys from the insides of strings, comments, arrays and inline tables.

// lineIndex gives the line of every key, table and array element, by its place: `source[3].aim[0].kind`.
type lineIndex map[string]int

// What a campaign never needs and what would exhaust the library's parser, which calls itself once for
// each level.
const (
	deepestNesting = 24 // arrays and inline tables inside one another
	longestKey     = 12 // parts of a dotted key
)

// tooDeep says that a text nests deeper than is accepted.
type tooDeep struct {
	line int
	what string
}

// indexLines finds the lines of a TOML text. In a text that breaks the grammar they are good up to the
// first fault.
func indexLines(text string) (lineIndex, *tooDeep) {
	s := &lineScanner{text: strings.TrimPrefix(text, "\uFEFF"), line: 1, index: lineIndex{}, tables: map[string]int{}}
	s.document()
	return s.index, s.deep
}

type lineScanner struct {
	text   string
	at     int
	line   int
	index  lineIndex
	tables map[string]int // how many tables each array of tables has so far
	deep   *tooDeep
}

func (s *lineScanner) more() bool { return s.at < len(s.text) && s.deep == nil }

func (s *lineScanner) document() {
	place := ""
	for {
		s.blanks(true)
		if !s.more() {
			return
		}
		if s.text[s.at] == '[' {
			place = s.header()
		} else {
			s.assignment(place, 0)
		}
		s.restOfLine()
	}
}

// header reads [a.b] or [[a.b]] and returns the place of the table that it opens.
func (s *lineScanner) header() string {
	line := s.line
	s.at++
	another := s.more() && s.text[s.at] == '['
	if another {
		s.at++
	}
	parts := s.key()
	place := ""
	for i, part := range parts {
		place = placeOf(place, part)
		n := s.tables[place]
		switch {
		case another && i == len(parts)-1:
			s.tables[place]++
			s.mark(place, line)
			place = elementOf(place, n)
		case n > 0:
			place = elementOf(place, n-1)
		}
		s.mark(place, line)
	}
	for s.more() && s.text[s.at] == ']' {
		s.at++
	}
	return place
}

// assignment reads key = value.
func (s *lineScanner) assignment(place string, depth int) {
	s.blanks(false)
	line := s.line
	for _, part := range s.key() {
		place = placeOf(place, part)
		s.mark(place, line)
	}
	s.blanks(false)
	if s.more() && s.text[s.at] == '=' {
		s.at++
		s.value(place, depth)
	}
}

// mark keeps the first line: a table that is opened again by a dotted key stands where it began.
func (s *lineScanner) mark(place string, line int) {
	if _, ok := s.index[place]; !ok {
		s.index[place] = line
	}
}

func (s *lineScanner) key() []string {
	var parts []string
	for s.more() {
		s.blanks(false)
		if !s.more() {
			break
		}
		switch c := s.text[s.at]; c {
		case '"', '\'':
			parts = append(parts, s.quoted(c))
		default:
			from := s.at
			for s.more() && !strings.ContainsRune(" \t\r\n.=[]{}#,\"'", rune(s.text[s.at])) {
				s.at++
			}
			parts = append(parts, s.text[from:s.at])
		}
		if len(parts) > longestKey {
			s.deep = &tooDeep{s.line, "a key of more than " + strconv.Itoa(longestKey) + " parts"}
		}
		s.blanks(false)
		if !s.more() || s.text[s.at] != '.' {
			break
		}
		s.at++
	}
	return parts
}

func (s *lineScanner) value(place string, depth int) {
	s.blanks(false)
	if !s.more() {
		return
	}
	if depth > deepestNesting {
		s.deep = &tooDeep{s.line, "values nested more than " + strconv.Itoa(deepestNesting) + " deep"}
		return
	}
	switch c := s.text[s.at]; c {
	case '"', '\'':
		if three := strings.Repeat(string(c), 3); strings.HasPrefix(s.text[s.at:], three) {
			s.longString(three)
		} else {
			s.quoted(c)
		}
	case '[':
		s.array(place, depth)
	case '{':
		s.inlineTable(place, depth)
	default:
		for s.more() && !strings.ContainsRune(",]}#\n", rune(s.text[s.at])) {
			s.at++
		}
	}
}

func (s *lineScanner) array(place string, depth int) {
	s.at++
	for n := 0; s.more(); n++ {
		s.blanks(true)
		if !s.more() {
			return
		}
		if s.text[s.at] == ']' {
			s.at++
			return
		}
		from, element := s.at, elementOf(place, n)
		s.mark(element, s.line)
		s.value(element, depth+1)
		s.blanks(true)
		if s.more() && s.text[s.at] == ',' {
			s.at++
		} else if s.at == from {
			return // not TOML
		}
	}
}

func (s *lineScanner) inlineTable(place string, depth int) {
	s.at++
	for s.more() {
		s.blanks(true)
		if !s.more() {
			return
		}
		if s.text[s.at] == '}' {
			s.at++
			return
		}
		from := s.at
		s.assignment(place, depth+1)
		s.blanks(true)
		if s.more() && s.text[s.at] == ',' {
			s.at++
		} else if s.at == from {
			return // not TOML
		}
	}
}

// quoted reads a string of one line and returns what it says.
func (s *lineScanner) quoted(quote byte) string {
	from := s.at
	s.at++
	for s.more() {
		switch c := s.text[s.at]; {
		case c == '\n':
			return s.text[from+1 : s.at] // not TOML: let the next line be read
		case c == '\\' && quote == '"' && s.at+1 < len(s.text) && s.text[s.at+1] != '\n':
			s.at += 2
		case c == quote:
			s.at++
			if quote == '"' {
				if plain, err := strconv.Unquote(s.text[from:s.at]); err == nil {
					return plain
				}
			}
			return s.text[from+1 : s.at-1]
		default:
			s.at++
		}
	}
	return ""
}

// longString reads a string in three quotes. One or two quotes may stand before the closing three.
func (s *lineScanner) longString(quotes string) {
	s.at += 3
	for s.more() {
		switch {
		case strings.HasPrefix(s.text[s.at:], quotes):
			s.at += 3
			for range 2 {
				if s.more() && s.text[s.at] == quotes[0] {
					s.at++
				}
			}
			return
		case s.text[s.at] == '\\' && quotes[0] == '"' && s.at+1 < len(s.text) && s.text[s.at+1] != '\n':
			s.at += 2
		default:
			s.step()
		}
	}
}

// blanks skips white space and comments, within the line or across lines.
func (s *lineScanner) blanks(lines bool) {
	for s.more() {
		switch c := s.text[s.at]; {
		case c == ' ' || c == '\t' || c == '\r':
			s.at++
		case lines && c == '\n':
			s.step()
		case lines && c == '#':
			for s.more() && s.text[s.at] != '\n' {
				s.at++
			}
		default:
			return
		}
	}
}

func (s *lineScanner) restOfLine() {
	for s.more() && s.text[s.at] != '\n' {
		s.at++
	}
}

func (s *lineScanner) step() {
	if s.text[s.at] == '\n' {
		s.line++
	}
	s.at++
}

// placeOf is the place of a key in a table, and elementOf that of an element of an array.
func placeOf(table, key string) string {
	if strings.ContainsAny(key, `.[]"`) || key == "" {
		key = strconv.Quote(key)
	}
	if table == "" {
		return key
	}
	return table + "." + key
}

func elementOf(array string, n int) string {
	return array + "[" + strconv.Itoa(n) + "]"
}
