// Package campaigns reads, keeps and writes what a timing campaign is made of: campaign.toml with the
// files it includes, the logbook and the saved plans.
//
// Open and OpenDemo give a Folder, through which plans are saved and log entries appended; Load reads
// only the campaign. Faults in a file are Complaints: every fault of every file at once, each with its
// line, what was found and what is accepted.
//
// Instants are UTC, whole minutes where they bound a session or a slot. Positions are ICRS degrees,
// longitude is positive to the east, azimuth runs from north through east. Units stand in the names.
package campaigns
