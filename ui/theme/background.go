package theme

import (
	"os"
	"strconv"
	"strings"

	"github.com/charmbracelet/lipgloss"
)

// The screen library asks the terminal for its background colour when it is loaded, and waits five
// seconds where nothing answers. An answer that is already there stops it. Packages that are ready
// are initialised in order of import path, so this one, which imports nothing of the screen library
// itself, comes before it.
func init() {
	lipgloss.SetHasDarkBackground(DarkFrom(os.Getenv("COLORFGBG")))
}

// DarkFrom reads the background out of a COLORFGBG value ("foreground;background" or
// "foreground;other;background", numbers of the 16 colours). What cannot be read counts as dark.
func DarkFrom(colorFgBg string) bool {
	parts := strings.Split(colorFgBg, ";")
	n, err := strconv.Atoi(parts[len(parts)-1])
	if err != nil || len(parts) < 2 {
		return true
	}
	return n != 7 && (n < 9 || n > 15)
}
