//go:build !race

package campaigns

const raced = false
