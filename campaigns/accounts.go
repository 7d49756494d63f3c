package campaigns

import "time"

// Accounts returns the accounts of one source at a moment, in the order of its aims.
func Accounts(c *Campaign, log *Logbook, source string, at time.Time) ([]AccountRow, error) {
	b := open(c, log, at)
	var rows []AccountRow
	for i := range c.Sources {
		if c.Sources[i].Name != source {
			continue
		}
		k, err := newKnowledge(&c.Sources[i], b.frames)
		if err != nil {
			return nil, err
		}
		for j := range c.Sources[i].Aims {
			row, err := b.accountRow(k, &c.Sources[i].Aims[j])
			if err != nil {
				return nil, err
			}
			rows = append(rows, row)
		}
	}
	return rows, nil
}
