// Package sched plans an observing session: what is owed, what a minute is worth, which plan is best.
//
// The calls most readers need: [Solve] finds a plan for a [Problem], [Verify] judges any plan,
// [Explain] and [LeftOut] say why, [MoveSlot] and its neighbours edit, and [CadenceRule.Balance] keeps the
// account of a source.
//
// A Problem, the search and the judge are three things. A Problem is plain data; Solve is a pure
// function of it; Verify shares nothing with the search but the definition of worth (worth.go) and of
// the time between two slots (setup.go).
//
// Conventions: minutes count from the start of the session and are instants, so a slot from 3 to 5 lasts
// two minutes; worth is in integer millionths ([Micro]), so that the same problem has the same plan on
// every processor. Nothing here reads a clock, a file or an unseeded random number.
package sched
