package campaigns

import "time"

// Accounts returns the accounts of one source at a moment, in the order of its aims.
func Accounts(c *Campaign, log *Logbook, source string, at time.Time) ([]AccountRow, error) {
	b := open(c, log, at)
	for i := range c.Sources {
		if c.Sources[i].Name == source {
			return b.accountsOf(&c.Sources[i])
		}
	}
	return nil, nil
}
