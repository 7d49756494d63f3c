//go:build !race

package sched

const raced = false
