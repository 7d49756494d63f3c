package export

import (
	"encoding/csv"
	"io"
	"strconv"
	"strings"

	"example.org/tallystick/campaigns"
)

// Columns is the header of the slot list in CSV. Scripts rely on it: new columns go at the end.
var Columns = []string{
	"session", "site", "slot", "source", "receiver", "start_utc", "end_utc", "ra_deg", "dec_deg",
	"azimuth_start_deg", "elevation_start_deg", "azimuth_end_deg", "elevation_end_deg",
	"lst_start_h", "lst_end_h", "orbital_phase_start", "orbital_phase_end", "snr", "toa_us",
	"worth", "pinned", "note",
}

// CSV writes the slots per RFC 4180: a header, CRLF, positions in decimal degrees. The azimuth is the
// mount's, within its travel. A cell is empty where nothing is known. Limits that a slot breaks stand
// in its note. The columns have no room for the advisory and for what the list was computed from;
// those stand in the other formats.
func CSV(w io.Writer, s Sheet) error {
	out := csv.NewWriter(w)
	out.UseCRLF = true
	if err := out.Write(Columns); err != nil {
		return err
	}
	for _, r := range s.Rows {
		if err := out.Write(csvRow(s, r)); err != nil {
			return err
		}
	}
	out.Flush()
	return out.Error()
}

func csvRow(s Sheet, r campaigns.SlotRow) []string {
	return []string{
		cell(s.Session.Name), cell(s.Site.Name), strconv.Itoa(r.Slot), cell(r.Source), cell(r.Receiver),
		utc(r.Start), utc(r.End), fixed(r.RADeg, 6), fixed(r.DecDeg, 6),
		fixed(r.AzStartDeg, 3), fixed(r.ElStartDeg, 3), fixed(r.AzEndDeg, 3), fixed(r.ElEndDeg, 3),
		fixed(r.LSTStartH, 5), fixed(r.LSTEndH, 5), phase(r.PhaseStart), phase(r.PhaseEnd),
		known(r.SNR, 1), known(r.ToaUs, 3), fixed(r.Worth, 6), strconv.FormatBool(r.Pinned), cell(noteWithBreaches(r)),
	}
}

// noteWithBreaches says in the only free column what limits a slot breaks: such a plan never leaves
// without that.
func noteWithBreaches(r campaigns.SlotRow) string {
	parts := []string{}
	if r.Note != "" {
		parts = append(parts, r.Note)
	}
	for _, b := range r.Breaches {
		parts = append(parts, "BREAKS A LIMIT: "+b)
	}
	return strings.Join(parts, "; ")
}

// cell keeps a spreadsheet from taking a name or a note for a formula: no text begins with a sign
// that starts one. Line ends become spaces, so that one slot is one line for every reader.
func cell(s string) string {
	s = strings.Join(strings.FieldsFunc(s, func(r rune) bool { return r == '\n' || r == '\r' }), " ")
	if s != "" && strings.ContainsRune("=@+-\t", rune(s[0])) {
		return " " + s
	}
	return s
}

// fixed never writes a minus before a zero.
func fixed(x float64, digits int) string {
	text := strconv.FormatFloat(x, 'f', digits, 64)
	if strings.Trim(text, "-0.") == "" {
		return strings.TrimPrefix(text, "-")
	}
	return text
}

func known(x float64, digits int) string {
	if x == 0 {
		return ""
	}
	return fixed(x, digits)
}

func phase(turns *float64) string {
	if turns == nil {
		return ""
	}
	return fixed(*turns, 4)
}
