package main

import (
	"runtime/debug"
	"strings"
)

// version is the module's version and the commit it was built from, as far as the build knows them.
func version() string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return "of an unknown build"
	}
	commit, changed := "", ""
	for _, s := range info.Settings {
		switch {
		case s.Key == "vcs.revision":
			commit = s.Value[:min(12, len(s.Value))]
		case s.Key == "vcs.modified" && s.Value == "true":
			changed = ", changed since"
		}
	}
	if commit == "" {
		commit = "unknown"
	}
	return released(info.Main.Version) + " (commit " + commit + changed + ")"
}

// released is the version of a release. Between releases the toolchain makes one up from the date and the commit,
// or says "(devel)"; the commit says it better.
func released(v string) string {
	if v == "(devel)" || strings.HasPrefix(v, "v0.0.0-") || strings.Contains(v, "-0.") {
		return "development"
	}
	return strings.TrimSuffix(v, "+dirty")
}
