package campaigns

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"time"

	"github.com/gofrs/flock"
	"github.com/google/renameio/v2"
)

// A save is whole or not at all, and it is only called saved when it survives the loss of power: a new
// file is written beside the old one, brought to the disk, put in the old one's place, and the folder
// is brought to the disk as well.

// lockFile is what programs lock that write into a campaign. It stays: removing it would let two
// programs hold two locks of the same name.
const lockFile = ".tallystick.lock"

// lockPatience is how long another program's save is waited for.
const lockPatience = 10 * time.Second

// disk is a campaign's folder on a disk.
type disk struct{ dir string }

func (d disk) path(name string) string { return filepath.Join(d.dir, filepath.FromSlash(name)) }

// read refuses what is not a plain file, since a pipe would be waited for, and what would fill the memory.
func (d disk) read(name string) ([]byte, error) {
	path := d.path(name)
	info, err := os.Stat(path)
	if err != nil {
		return nil, err
	}
	if !info.Mode().IsRegular() {
		return nil, &fs.PathError{Op: "read", Path: path, Err: errors.New("not a plain file")}
	}
	if info.Size() > largestLogbook {
		return nil, &fs.PathError{Op: "read", Path: path, Err: fmt.Errorf("larger than %d MB", largestLogbook>>20)}
	}
	return os.ReadFile(path)
}

// lock keeps other programs from saving until unlock is called.
func (d disk) lock() (unlock func(), err error) {
	path := d.path(lockFile)
	l := flock.New(path, flock.SetPermissions(0o666))
	patience, cancel := context.WithTimeout(context.Background(), lockPatience)
	defer cancel()
	if _, err := l.TryLockContext(patience, 10*time.Millisecond); err != nil {
		l.Close()
		if errors.Is(err, context.DeadlineExceeded) {
			return nil, fmt.Errorf("another program has been saving for %v (it holds %s); accepted: trying again when it has ended", lockPatience, path)
		}
		return nil, err
	}
	return func() { l.Close() }, nil
}

// replace puts a file with new content in the place of the old one, or where none was.
func (d disk) replace(name string, data []byte) error {
	path := d.path(name)
	if err := makeFolder(filepath.Dir(path)); err != nil {
		return err
	}
	return replaceFile(path, data)
}

// replaceFile follows links, keeps the mode, and does not replace what its owner has made read-only.
// The caller holds the lock of the folder, so files left by a save that was killed can be told and removed.
func replaceFile(path string, data []byte) error {
	if target, err := filepath.EvalSymlinks(path); err == nil {
		path = target
	}
	if err := writable(path); err != nil {
		return err
	}
	folder := filepath.Dir(path)
	removeStrays(path)
	f, err := renameio.NewPendingFile(path, renameio.WithTempDir(folder), renameio.WithPermissions(0o644), renameio.WithExistingPermissions())
	if err != nil {
		return err
	}
	defer f.Cleanup()
	if _, err := f.Write(data); err != nil {
		return err
	}
	if err := f.CloseAtomicallyReplace(); err != nil {
		return err
	}
	return syncFolder(folder)
}

// writable is an error when a file is there that may not be written. The mode counts even for a user
// whom it does not stop.
func writable(path string) error {
	info, err := os.Stat(path)
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	if err != nil {
		return err
	}
	if !info.Mode().IsRegular() {
		return &fs.PathError{Op: "replace", Path: path, Err: errors.New("not a plain file")}
	}
	if info.Mode().Perm()&0o222 == 0 {
		return &fs.PathError{Op: "replace", Path: path, Err: fs.ErrPermission}
	}
	f, err := os.OpenFile(path, os.O_WRONLY, 0)
	if err != nil {
		return err
	}
	return f.Close()
}

// removeStrays removes what saves of the same file left that were killed half way: a dot, the file's name, digits.
func removeStrays(path string) {
	folder, prefix := filepath.Dir(path), "."+filepath.Base(path)
	entries, err := os.ReadDir(folder)
	if err != nil {
		return
	}
	for _, e := range entries {
		number, ours := strings.CutPrefix(e.Name(), prefix)
		if ours && number != "" && strings.Trim(number, "0123456789") == "" && e.Type().IsRegular() {
			os.Remove(filepath.Join(folder, e.Name()))
		}
	}
}

// extend adds to the end of a file, in one write.
func (d disk) extend(name string, data []byte) error {
	path := d.path(name)
	_, err := os.Stat(path)
	isNew := errors.Is(err, fs.ErrNotExist)
	if !isNew {
		if err := writable(path); err != nil {
			return err
		}
	}
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_APPEND|os.O_CREATE, 0o644)
	if err != nil {
		return err
	}
	_, err = f.Write(data)
	if err == nil {
		err = f.Sync()
	}
	if e := f.Close(); err == nil {
		err = e
	}
	if err == nil && isNew {
		err = syncFolder(filepath.Dir(path))
	}
	return err
}

// makeFolder makes a folder and those above it, and brings them to the disk.
func makeFolder(path string) error {
	info, err := os.Stat(path)
	if err == nil {
		if !info.IsDir() {
			return &fs.PathError{Op: "mkdir", Path: path, Err: errors.New("not a folder")}
		}
		return nil
	}
	above := filepath.Dir(path)
	if above != path {
		if err := makeFolder(above); err != nil {
			return err
		}
	}
	if err := os.Mkdir(path, 0o755); err != nil && !errors.Is(err, fs.ErrExist) {
		return err
	}
	return syncFolder(above)
}

// syncFolder brings the names in a folder to the disk. Some file systems cannot, and need not.
func syncFolder(path string) error {
	f, err := os.Open(path)
	if err != nil {
		return err
	}
	err = f.Sync()
	if e := f.Close(); err == nil {
		err = e
	}
	if errors.Is(err, syscall.EINVAL) || errors.Is(err, syscall.ENOTSUP) {
		return nil
	}
	return err
}

// memory is a campaign's folder that is gone when the program ends.
type memory map[string][]byte

func (m memory) read(name string) ([]byte, error) {
	if data, ok := m[name]; ok {
		return data, nil
	}
	return nil, &fs.PathError{Op: "open", Path: name, Err: fs.ErrNotExist}
}

func (m memory) lock() (func(), error) { return func() {}, nil }

func (m memory) replace(name string, data []byte) error {
	m[name] = data
	return nil
}

func (m memory) extend(name string, data []byte) error {
	m[name] = append(m[name][:len(m[name]):len(m[name])], data...)
	return nil
}
