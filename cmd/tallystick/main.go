// Command tallystick schedules a pulsar-timing campaign from a terminal.
//
// Every file here is one command: flags in, a table out. What is computed is computed elsewhere; see
// DEVELOPERS.md for where.
package main

import (
	"errors"
	"fmt"
	"io"
	"os"
	"runtime/debug"
	"strings"
	"syscall"
	"time"

	"example.org/tallystick/ui"
)

// Exit codes: scripts rely on them.
const (
	exitDone  = 0
	exitNo    = 1 // the answer is no, or an operation failed
	exitUsage = 2 // the command line was not understood
)

// memoryLimit is what the garbage collector keeps the program's memory near: 2,000 sources and half a million log lines
// fit in it, and a usual campaign never comes near. A limit that the user has set stays.
const memoryLimit = 448 << 20

func main() {
	if os.Getenv("GOMEMLIMIT") == "" {
		debug.SetMemoryLimit(memoryLimit)
	}
	p := &program{stdin: os.Stdin, stdout: os.Stdout, stderr: os.Stderr, now: time.Now}
	os.Exit(p.run(os.Args[1:]))
}

// A program is one run of the command line. Nothing else in this package touches the process: not its
// streams, not its clock.
type program struct {
	stdin          io.Reader
	stdout, stderr io.Writer
	now            func() time.Time

	flags flags
}

func (p *program) run(args []string) int {
	root := p.root()
	root.SetArgs(args)
	err := root.Execute()
	var usage usageError
	var code exitCode
	var signal *ui.SignalError
	switch {
	case err == nil, errors.Is(err, syscall.EPIPE): // whoever was reading has seen enough
		return exitDone
	case errors.As(err, &code): // everything has been said
		return int(code)
	case errors.As(err, &signal):
		p.say("%s", err)
		return signal.ExitCode()
	case errors.As(err, &usage):
		p.sayWrapped(usage.text)
		return exitUsage
	}
	p.say("%s", err)
	return exitNo
}

// say tells the person something that is not the answer: on standard error, every line named.
func (p *program) say(form string, a ...any) {
	for line := range strings.Lines(fmt.Sprintf(form, a...)) {
		fmt.Fprintf(p.stderr, "tallystick: %s\n", strings.TrimSuffix(line, "\n"))
	}
}

// sayWrapped says a remark of words, in 80 columns.
func (p *program) sayWrapped(text string) {
	for line := range strings.Lines(text) {
		fmt.Fprint(p.stderr, hanging("tallystick: ", line))
	}
}

// exitCode ends the program with a code when all there is to say has been said.
type exitCode int

func (c exitCode) Error() string { return fmt.Sprintf("exit %d", int(c)) }
