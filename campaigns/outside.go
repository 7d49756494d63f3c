package campaigns

import "os"

// WriteFile puts data in the place of a file outside a campaign, whole or not at all, with the care that
// the campaign's own files are given. What is no plain file, such as /dev/stdout, is written to.
func WriteFile(path string, data []byte) error {
	if info, err := os.Stat(path); err == nil && !info.Mode().IsRegular() && !info.IsDir() {
		f, err := os.OpenFile(path, os.O_WRONLY, 0)
		if err != nil {
			return err
		}
		if _, err := f.Write(data); err != nil {
			f.Close()
			return err
		}
		return f.Close()
	}
	return replaceFile(path, data)
}

// Nearest returns the candidate that was probably meant by what was written, or "" when none looks like it.
func Nearest(written string, candidates []string) string {
	if near := nearest(written, candidates, 1); len(near) > 0 {
		return near[0]
	}
	return ""
}
