package theme

// Glyphs are the signs the screen is drawn with. Every one takes a single cell; beyond the box lines
// none is of ambiguous East Asian width (Unicode UAX #11), which some terminals draw two cells wide.
type Glyphs struct {
	Curve               [5]string // the chosen source, from the top of a cell to its bottom
	Other               string    // other sources
	OnSource            string    // where the chosen source is being observed
	OtherOnSource       string    // where another is being observed
	Limit               string    // lowest elevation allowed
	Now                 string    // the present moment, upright
	Cursor              string    // the minute under the cursor
	Rule, Upright       string    // lines between panes
	Tick                string    // on the axis
	Axis                string
	SlotFrom, SlotTo    string // ends of a slot on the axis
	Slot                string // between them
	Break               string // a break in the session
	Eclipse             string // the source is behind its companion
	NearSun             string // the source is closer to the Sun than it may be
	Sun                 string // where the Sun stands
	Full, Half, Nothing string // debt bars
	Up, Down            string // which way a column is sorted
	Mark                string // the chosen row
}

var drawn = Glyphs{
	// Three heights: the scan lines of the old terminals would give five, but many fonts do not have them.
	Curve: [5]string{"¯", "¯", "─", "_", "_"},
	Other: "∙", OnSource: "━", OtherOnSource: "═",
	Limit: "╌", Now: "┊", Cursor: "▴",
	Rule: "─", Upright: "│", Tick: "┴", Axis: "─",
	SlotFrom: "┝", SlotTo: "┥", Slot: "━",
	Break: "░", Eclipse: "x", NearSun: "o", Sun: "S",
	Full: "▰", Half: "▱", Nothing: " ",
	Up: "▴", Down: "▾", Mark: "›",
}

var typed = Glyphs{
	Curve: [5]string{"*", "*", "*", "*", "*"},
	Other: ".", OnSource: "#", OtherOnSource: "=",
	Limit: "_", Now: "|", Cursor: "^",
	Rule: "-", Upright: "|", Tick: "+", Axis: "-",
	SlotFrom: "[", SlotTo: "]", Slot: "=",
	Break: ":", Eclipse: "x", NearSun: "o", Sun: "S",
	Full: "#", Half: "-", Nothing: " ",
	Up: "^", Down: "v", Mark: ">",
}

// All returns every glyph, for checks.
func (g Glyphs) All() []string {
	return append(g.Curve[:], g.Other, g.OnSource, g.OtherOnSource, g.Limit, g.Now, g.Cursor, g.Rule, g.Upright,
		g.Tick, g.Axis, g.SlotFrom, g.SlotTo, g.Slot, g.Break, g.Eclipse, g.NearSun, g.Sun, g.Full, g.Half, g.Nothing, g.Up, g.Down, g.Mark)
}
