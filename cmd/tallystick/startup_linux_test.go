package main

import (
	"bytes"
	"fmt"
	"io"
	"os"
	"os/exec"
	"syscall"
	"testing"
	"time"
	"unsafe"
)

// openPty makes a pseudo-terminal: what is written to slave can be read from master.
func openPty(t *testing.T) (master, slave *os.File) {
	t.Helper()
	master, err := os.OpenFile("/dev/ptmx", os.O_RDWR|syscall.O_NOCTTY, 0)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { master.Close() })
	var unlocked, number int32
	for request, value := range map[uintptr]*int32{syscall.TIOCSPTLCK: &unlocked, syscall.TIOCGPTN: &number} {
		if _, _, no := syscall.Syscall(syscall.SYS_IOCTL, master.Fd(), request, uintptr(unsafe.Pointer(value))); no != 0 {
			t.Fatal(no)
		}
	}
	slave, err = os.OpenFile(fmt.Sprintf("/dev/pts/%d", number), os.O_RDWR|syscall.O_NOCTTY, 0)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { slave.Close() })
	return master, slave
}

// The screen library asks the terminal for its colour when it is loaded and waits five seconds for an
// answer, unless it is told first; the order of the module paths decides. A terminal that answers
// nothing shows whether that holds: plain commands ask nothing and are done long before.
func TestPlainCommandsAskTheTerminalNothing(t *testing.T) {
	program, err := exec.LookPath("tallystick")
	if err != nil {
		t.Fatal(err)
	}
	for _, args := range [][]string{{"--version"}, {"--help"}, {"plan", "--help"}} {
		master, slave := openPty(t)
		c := exec.Command(program, args...)
		c.Stdin, c.Stdout, c.Stderr = slave, slave, slave
		c.Env = append(os.Environ(), "TERM=xterm-256color", "COLORFGBG=")
		c.SysProcAttr = &syscall.SysProcAttr{Setsid: true, Setctty: true}
		started := time.Now()
		if err := c.Start(); err != nil {
			t.Fatal(err)
		}
		said := make(chan []byte)
		go func() {
			data, _ := io.ReadAll(master) // ends with an error when the other side is closed
			said <- data
		}()
		err := c.Wait()
		took := time.Since(started)
		slave.Close()
		data := <-said
		if err != nil || len(data) == 0 {
			t.Errorf("%v: %v, said %q", args, err, data)
		}
		if bytes.ContainsRune(data, 0x1b) {
			t.Errorf("%v: escape codes in %q", args, data)
		}
		if took > 4*time.Second { // the wait that must not be is five
			t.Errorf("%v took %v: it waited for an answer", args, took)
		}
	}
}
