package report

import "embed"

// Schemas holds the JSON Schema documents of the machine formats: schema/report-1.json and so on.
//
//go:embed schema/*.json
var Schemas embed.FS
