// Package ui is the terminal interface. Run is the only way in.
//
// One model owns the world (the session on the desk, its plan, the clock); a view owns its own cursor
// and scroll and is told everything else. A key becomes an action, and apply is the only place where
// an action changes the world. Files and planning run in commands, whose answers say what they answer.
package ui

import (
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"runtime"
	"runtime/debug"
	"strings"
	"sync/atomic"
	"syscall"
	"time"

	tea "github.com/charmbracelet/bubbletea"
	"github.com/charmbracelet/lipgloss"
	"github.com/charmbracelet/x/term"
	"github.com/muesli/termenv"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
	"example.org/tallystick/ui/theme"
)

// Config is what the interface is opened with.
type Config struct {
	Folder  *campaigns.Folder
	Session string           // a name, or "next"
	Now     func() time.Time // the present moment; nil: the folder's own, or the machine's clock
	Version string
	Mouse   bool // wheel and clicks from the start
	ASCII   bool // no sign beyond ASCII, whatever the locale says
	In      io.Reader
	Out     io.Writer

	// Export writes the slot list of a plan to a file, with its ceiling if it is a bound of a problem, and says what it
	// wrote, in one line.
	Export func(format, path string, p *campaigns.Prepared, plan sched.Plan, proved sched.Bound) (string, error)
	// Formats are the formats that Export knows; nil: text and csv.
	Formats []string
}

// ErrNoTerminal is returned where the interface has no terminal to run on.
var ErrNoTerminal = errors.New("this needs a terminal that can move its cursor")

// A SignalError is returned after a signal has ended the program. Unsaved work has been kept.
type SignalError struct {
	Signal int
	Drafts []string // what was kept, in words
}

func (e *SignalError) Error() string {
	text := fmt.Sprintf("ended by signal %d", e.Signal)
	for _, d := range e.Drafts {
		text += "\n" + d
	}
	return text
}

// ExitCode is 128 and the signal's number, as shells have it.
func (e *SignalError) ExitCode() int { return 128 + e.Signal }

// A PanicError is returned after a fault of the program itself. Unsaved work has been kept.
type PanicError struct {
	What   string
	Drafts []string
}

func (e *PanicError) Error() string {
	text := "a fault in the program: " + e.What
	for _, d := range e.Drafts {
		text += "\n" + d
	}
	return text
}

// A campaign of up to so many sources needs 45 MB while it is planned; left alone, the garbage collector would let
// that grow to twice as much before it looked.
const (
	smallCampaign = 80
	smallMemory   = 52 << 20
)

// staySmall keeps the memory of a small campaign small. A limit that the user has set stays.
func staySmall(c *campaigns.Campaign) {
	if len(c.Sources) <= smallCampaign && os.Getenv("GOMEMLIMIT") == "" {
		debug.SetMemoryLimit(smallMemory)
	}
}

// oneMoreCore lets keys be answered while planning keeps every core busy: the system then shares the cores out among
// threads at once, where Go's scheduler would let a key wait for its next turn.
func oneMoreCore() (restore func()) {
	cores := runtime.GOMAXPROCS(0)
	runtime.GOMAXPROCS(cores + 1)
	return func() { runtime.GOMAXPROCS(cores) }
}

// planners is how many goroutines plan at once.
func planners() int { return max(1, runtime.GOMAXPROCS(0)-1) }

// Run shows the interface until the user leaves it.
func Run(c Config) error {
	if c.In == nil {
		c.In = os.Stdin
	}
	if c.Out == nil {
		c.Out = os.Stdout
	}
	if err := needTerminal(c.In, c.Out, os.Getenv("TERM")); err != nil {
		return err
	}
	c.Mouse = c.Mouse && !readSettings().MouseOff
	r := lipgloss.NewRenderer(c.Out) // it finds colours only on the file itself
	if file, ok := c.Out.(*os.File); ok {
		c.Out = &outlet{File: file}
	}
	r.SetHasDarkBackground(theme.DarkFrom(os.Getenv("COLORFGBG")))
	st := theme.New(r, c.ASCII || !localeIsUTF8(os.Getenv))
	if r.ColorProfile() == termenv.ANSI && theme.HasEight(os.Getenv("TERM")) {
		st.Eight()
	}
	m := newModel(c, st)
	staySmall(c.Folder.Campaign)
	defer oneMoreCore()()

	options := []tea.ProgramOption{tea.WithAltScreen(), tea.WithInput(c.In), tea.WithOutput(c.Out), tea.WithoutSignalHandler(), tea.WithFPS(framesPerSecond)}
	if c.Mouse {
		options = append(options, tea.WithMouseCellMotion())
	}
	program := tea.NewProgram(trimmed{m}, options...)
	var ended atomic.Int32
	stop := watchSignals(func(n int) {
		ended.CompareAndSwap(0, int32(n))
		program.Send(signalMsg{})
	})
	defer stop()
	_, err := program.Run()
	if errors.Is(err, tea.ErrProgramPanic) {
		_ = program.ReleaseTerminal()
	}
	return m.outcome(int(ended.Load()), err)
}

// framesPerSecond is how often the screen library looks for something new to draw: what a key waits for.
const framesPerSecond = 120

// outcome keeps what is unsaved, and says how the program ended.
func (m *model) outcome(signal int, err error) error {
	m.stopPlanning()
	m.stopSeason()
	var drafts []string
	if !m.discard {
		drafts = m.keepDrafts()
	}
	switch {
	case m.fault != "":
		return &PanicError{m.fault, drafts}
	case errors.Is(err, tea.ErrProgramPanic):
		return &PanicError{"a command failed", drafts}
	case signal != 0:
		return &SignalError{signal, drafts}
	case err != nil:
		for _, d := range drafts {
			err = fmt.Errorf("%w\n%s", err, d)
		}
		return err
	}
	return nil
}

func watchSignals(got func(int)) (stop func()) {
	c := make(chan os.Signal, 4)
	signal.Notify(c, syscall.SIGINT, syscall.SIGTERM, syscall.SIGHUP)
	done := make(chan struct{})
	go func() {
		for {
			select {
			case s := <-c:
				if n, ok := s.(syscall.Signal); ok {
					got(int(n))
				}
			case <-done:
				return
			}
		}
	}()
	return func() { signal.Stop(c); close(done) }
}

func needTerminal(in io.Reader, out io.Writer, kind string) error {
	if kind == "" || kind == "dumb" {
		return fmt.Errorf("%w; TERM is %q", ErrNoTerminal, kind)
	}
	for _, f := range []any{in, out} {
		if file, ok := f.(term.File); !ok || !term.IsTerminal(file.Fd()) {
			return ErrNoTerminal
		}
	}
	return nil
}

// localeIsUTF8 reads the locale as the C library does: the first of these that is set counts.
func localeIsUTF8(getenv func(string) string) bool {
	for _, name := range []string{"LC_ALL", "LC_CTYPE", "LANG"} {
		if v := strings.ToLower(getenv(name)); v != "" {
			return strings.Contains(v, "utf-8") || strings.Contains(v, "utf8")
		}
	}
	return false
}
