// Package demo holds the demonstration campaign that is built into the program.
//
// Everything in it is invented: the observatory, its dish and receivers, every source with its
// position, ephemeris and flux, every session and every line of the logbook. No value describes a
// real telescope or a real pulsar, and nothing here may be used as an ephemeris. What is kept true is
// the physics: orbits obey their mass functions, sensitivities the radiometer equation, and the
// logbook holds only observations that the site could have made.
//
// The files are written by campaigns/demo/generate; run it again after changing the scenario there.
package demo

import (
	"embed"
	"time"
)

// Files is the campaign folder: campaign.toml, sources/*.toml and logbook.csv.
//
//go:embed campaign.toml sources/*.toml logbook.csv
var Files embed.FS

// Now is the demonstration's own present moment, three hours before its first coming session. It is
// fixed, so that the demonstration never goes stale and always shows the same plan.
func Now() time.Time { return time.Date(2026, 12, 3, 15, 0, 0, 0, time.UTC) }
