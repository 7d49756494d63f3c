package ui

import "image"

// This file alone decides what goes where and what a small screen does without. Everything in it is
// a function of the width and the height.

// Smallest screen on which anything useful can be shown.
const (
	leastWidth  = 30
	leastHeight = 6
)

// Widths from which the title names every view, and from which it has room for the date too.
const (
	narrowTitle = 62
	wideTitle   = 104
)

// Width from which a view puts details beside its table.
const wideEnough = 110

// frame is the whole screen.
type frame struct {
	tooSmall                           bool
	title, worth, body, message, hints image.Rectangle
}

func row(y, w int) image.Rectangle { return image.Rect(0, y, w, y+1) }

func frameOf(w, h int) frame {
	if w < leastWidth || h < leastHeight {
		return frame{tooSmall: true}
	}
	return frame{
		title: row(0, w), worth: row(1, w),
		body:    image.Rect(0, 2, w, h-2),
		message: row(h-2, w), hints: row(h-1, w),
	}
}

// slateParts are the parts of the slate's body; an empty rectangle is left out.
type slateParts struct {
	now     image.Rectangle // where the session stands, while it is under way
	words   image.Rectangle // the chosen source's elevation and the Sun, in words
	plot    image.Rectangle // elevation curves
	bars    image.Rectangle // slots on the axis
	utc     image.Rectangle // axis in UTC
	second  image.Rectangle // axis in LST, local time or MJD
	table   image.Rectangle
	details image.Rectangle
	beside  bool // details stand beside the table, not below
}

// axisMargin is left of the plot and of the axes for their labels.
const axisMargin = 5

func slateLayout(w, h int, underWay bool) slateParts {
	var p slateParts
	y := 0
	full := h
	if underWay && h >= 3 {
		p.now = row(0, w)
		y, h = 1, h-1
	}
	take := func(n int) image.Rectangle {
		r := image.Rect(0, y, w, y+n)
		y += n
		return r
	}
	left := h
	if h >= 12 {
		left -= 4 // words, bars and two axes
		plot := max(left/3, 3)
		if w >= wideEnough {
			plot = max(left*2/5, 5)
		}
		if h < 14 {
			plot = 0
		}
		p.words = take(1)
		p.plot = take(plot)
		p.bars = take(1)
		p.utc, p.second = take(1), take(1)
	} else if h >= 9 {
		p.bars = take(1)
		p.utc = take(1)
	}
	left = full - y
	switch {
	case w >= wideEnough && left >= 6:
		p.beside = true
		table := max(w*11/20, min(w-72, 150))
		p.table = image.Rect(0, y, table, full)
		p.details = image.Rect(table+1, y, w, full)
	case left >= 9:
		details := max(left*2/5, 3)
		p.table = image.Rect(0, y, w, full-details)
		p.details = image.Rect(0, full-details, w, full)
	default:
		p.table = image.Rect(0, y, w, full)
	}
	return p
}

// tableParts are the parts of a view that is a table with details.
type tableParts struct {
	head, table, details image.Rectangle
	beside               bool
}

func tableLayout(w, h int) tableParts {
	p := tableParts{head: row(0, w)}
	switch {
	case w >= wideEnough+40 && h >= 8:
		p.beside = true
		p.table = image.Rect(0, 1, w*5/8, h)
		p.details = image.Rect(w*5/8+1, 1, w, h)
	case h >= 12:
		details := max(h*3/10, 4)
		p.table = image.Rect(0, 1, w, h-details)
		p.details = image.Rect(0, h-details, w, h)
	default:
		p.table = image.Rect(0, 1, w, h)
	}
	return p
}

// centred returns a box of at most w by h in the middle of a screen, with a rim left free where
// there is room.
func centred(screen image.Rectangle, w, h int) image.Rectangle {
	w, h = min(w, screen.Dx()), min(h, screen.Dy())
	x, y := screen.Min.X+(screen.Dx()-w)/2, screen.Min.Y+(screen.Dy()-h)/2
	return image.Rect(x, y, x+w, y+h)
}

// orbitParts are the parts of the orbits' body; an empty rectangle is left out.
type orbitParts struct {
	head, list, strip, shape, words image.Rectangle
	beside                          bool // the list stands beside the rest
}

// orbitListWidth is what the list of binaries takes beside the rest.
const orbitListWidth = 46

func orbitLayout(w, h int) orbitParts {
	p := orbitParts{head: row(0, w)}
	switch {
	case w >= wideEnough && h >= 14:
		p.beside = true
		x := orbitListWidth + 1
		p.list = image.Rect(0, 1, orbitListWidth, h)
		p.strip = image.Rect(x, 1, w, 7)
		shape := min((h-8)*2, (w-x)/2)
		p.shape = image.Rect(x, 8, x+shape, min(h, 8+shape/2+2))
		p.words = image.Rect(x+shape+1, 8, w, h)
	case h >= 16:
		list := max(h/4, 4)
		p.list = image.Rect(0, 1, w, 1+list)
		p.strip = image.Rect(0, 1+list, w, 7+list)
		p.words = image.Rect(0, 7+list, w, h)
		if shape := h - 7 - list; w >= 72 && shape >= 7 {
			p.shape = image.Rect(w-2*shape-8, 7+list, w, h)
			p.words.Max.X = p.shape.Min.X - 1
		}
	case h >= 6:
		strip := 2
		if h >= 9 {
			strip = 4
		}
		p.list = image.Rect(0, 1, w, h-strip)
		p.strip = image.Rect(0, h-strip, w, h)
	default:
		p.list = image.Rect(0, 1, w, h)
	}
	return p
}

// seasonParts are the parts of the season's body; an empty rectangle is left out.
type seasonParts struct {
	strip, head, table, details, hours image.Rectangle
}

func seasonLayout(w, h int) seasonParts {
	var p seasonParts
	y := 0
	if h >= 12 {
		p.strip = image.Rect(0, 0, w, 2)
		y = 2
	}
	p.head = image.Rect(0, y, w, y+1)
	y++
	right := w
	if w >= wideEnough+30 && h >= 16 {
		right = w * 5 / 8
		p.hours = image.Rect(right+1, y, w, h)
	}
	bottom := h
	if h >= 16 {
		bottom = h - max(h/4, 4)
		p.details = image.Rect(0, bottom, right, h)
	}
	p.table = image.Rect(0, y, right, bottom)
	return p
}
