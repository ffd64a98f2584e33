// Package testdata holds the demo study, for the command that writes it out and for tests.
package testdata

import "embed"

// Sedgarth is the folder of the demo study: its files stand under `sedgarth/`. Results that someone wrote beside
// them are not part of it.
//
//go:embed sedgarth/*.toml sedgarth/*.csv sedgarth/*.geojson sedgarth/README.md
var Sedgarth embed.FS
