package export

import (
	"encoding/json"
	"io"
	"strconv"

	"example.org/tallystick/campaigns"
)

// JSONFormat is the value of "format" in the JSON export; it rises when a reader must change.
const JSONFormat = 1

// The JSON names of a slot are those of the CSV columns, followed by what CSV has no room for.
type jsonSheet struct {
	Format   int    `json:"format"`
	Version  string `json:"version"`
	Advisory string `json:"advisory"`
	Campaign string `json:"campaign"`
	Session  string `json:"session"`
	Site     struct {
		Name         string  `json:"name"`
		LatitudeDeg  float64 `json:"latitude_deg"`
		LongitudeDeg float64 `json:"longitude_deg"`
		HeightM      float64 `json:"height_m"`
	} `json:"site"`
	StartUTC string      `json:"start_utc"`
	EndUTC   string      `json:"end_utc"`
	Breaks   [][2]string `json:"breaks"`
	MadeUTC  string      `json:"made_utc"`
	Saved    bool        `json:"saved"`
	Sources  int         `json:"sources"`
	Entries  int         `json:"logbook_entries"`
	Worth    number      `json:"worth"`
	Ceiling  *number     `json:"ceiling"`
	GridMin  int         `json:"grid_min"`
	Rounds   int         `json:"rounds"`
	Missing  []string    `json:"missing"`
	Slots    []jsonSlot  `json:"slots"`
	LeftOut  []LeftOut   `json:"left_out"`
}

type jsonSlot struct {
	Slot       int      `json:"slot"`
	Source     string   `json:"source"`
	Receiver   string   `json:"receiver"`
	StartUTC   string   `json:"start_utc"`
	EndUTC     string   `json:"end_utc"`
	RADeg      number   `json:"ra_deg"`
	DecDeg     number   `json:"dec_deg"`
	AzStart    number   `json:"azimuth_start_deg"`
	ElStart    number   `json:"elevation_start_deg"`
	AzEnd      number   `json:"azimuth_end_deg"`
	ElEnd      number   `json:"elevation_end_deg"`
	LSTStart   number   `json:"lst_start_h"`
	LSTEnd     number   `json:"lst_end_h"`
	PhaseStart *number  `json:"orbital_phase_start"`
	PhaseEnd   *number  `json:"orbital_phase_end"`
	SNR        *number  `json:"snr"`
	ToaUs      *number  `json:"toa_us"`
	Worth      number   `json:"worth"`
	Pinned     bool     `json:"pinned"`
	Note       string   `json:"note"`
	Turn       int      `json:"cable_turn"`
	MoveSec    int      `json:"move_s"`
	SetUpSec   int      `json:"set_up_s"`
	WaitSec    int      `json:"wait_s"`
	Breaches   []string `json:"breaks_limits"`
}

// JSON writes the sheet as one object, indented. Unknown values are null, empty lists are [].
func JSON(w io.Writer, s Sheet) error {
	out := jsonSheet{
		Format: JSONFormat, Version: s.Version, Advisory: Safety,
		Campaign: s.Campaign, Session: s.Session.Name,
		StartUTC: utc(s.Session.Start), EndUTC: utc(s.Session.End), Breaks: [][2]string{},
		MadeUTC: utc(s.MadeAt), Saved: s.Saved, Sources: s.SourceCount, Entries: s.Entries,
		Worth: numberOf(s.Worth, 6), GridMin: s.GridMin, Rounds: s.Rounds,
		Missing: append([]string{}, s.Missing...),
		Slots:   []jsonSlot{}, LeftOut: append([]LeftOut{}, s.LeftOut...),
	}
	out.Site.Name = s.Site.Name
	out.Site.LatitudeDeg, out.Site.LongitudeDeg, out.Site.HeightM = s.Site.LatitudeDeg, s.Site.LongitudeDeg, s.Site.HeightM
	for _, b := range s.Session.Breaks {
		out.Breaks = append(out.Breaks, [2]string{utc(b[0]), utc(b[1])})
	}
	if s.HasCeiling {
		c := numberOf(s.Ceiling, 6)
		out.Ceiling = &c
	}
	for _, r := range s.Rows {
		out.Slots = append(out.Slots, jsonSlotOf(r))
	}
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(out)
}

func jsonSlotOf(r campaigns.SlotRow) jsonSlot {
	return jsonSlot{
		Slot: r.Slot, Source: r.Source, Receiver: r.Receiver, StartUTC: utc(r.Start), EndUTC: utc(r.End),
		RADeg: numberOf(r.RADeg, 6), DecDeg: numberOf(r.DecDeg, 6),
		AzStart: numberOf(r.AzStartDeg, 3), ElStart: numberOf(r.ElStartDeg, 3),
		AzEnd: numberOf(r.AzEndDeg, 3), ElEnd: numberOf(r.ElEndDeg, 3),
		LSTStart: numberOf(r.LSTStartH, 5), LSTEnd: numberOf(r.LSTEndH, 5),
		PhaseStart: phaseNumber(r.PhaseStart), PhaseEnd: phaseNumber(r.PhaseEnd),
		SNR: knownNumber(r.SNR, 1), ToaUs: knownNumber(r.ToaUs, 3), Worth: numberOf(r.Worth, 6),
		Pinned: r.Pinned, Note: r.Note, Turn: r.Turn,
		MoveSec: r.MoveSec, SetUpSec: r.OverheadSec, WaitSec: r.WaitSec,
		Breaches: append([]string{}, r.Breaches...),
	}
}

// A number is written with as many digits as it deserves and no more: the same everywhere.
type number float64

func numberOf(x float64, digits int) number {
	rounded, _ := strconv.ParseFloat(fixed(x, digits), 64) // fixed writes what ParseFloat reads
	return number(rounded)
}

func knownNumber(x float64, digits int) *number {
	if x == 0 {
		return nil
	}
	n := numberOf(x, digits)
	return &n
}

func phaseNumber(turns *float64) *number {
	if turns == nil {
		return nil
	}
	n := numberOf(*turns, 4)
	return &n
}
