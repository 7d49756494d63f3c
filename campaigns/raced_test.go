//go:build race

package campaigns

// raced tells that the race detector watches: tests that only compare numbers, one thing after another, then try fewer.
const raced = true
