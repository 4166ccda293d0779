package report

import (
	"io"
	"net/url"
	"path"
	"path/filepath"
	"strings"

	"railproof/checks"
	"railproof/netlist"
)

// The parts of a SARIF 2.1.0 log that are written. Optional members are left out when they are empty.
type (
	sarifLog struct {
		Schema  string     `json:"$schema"`
		Version string     `json:"version"`
		Runs    []sarifRun `json:"runs"`
	}
	sarifRun struct {
		Tool        sarifTool                    `json:"tool"`
		Invocations []sarifInvocation            `json:"invocations"`
		BaseIDs     map[string]sarifArtifactBase `json:"originalUriBaseIds"`
		ColumnKind  string                       `json:"columnKind"`
		Results     []sarifResult                `json:"results"`
	}
	sarifTool struct {
		Driver sarifDriver `json:"driver"`
	}
	sarifDriver struct {
		Name    string      `json:"name"`
		Version string      `json:"version,omitempty"`
		Rules   []sarifRule `json:"rules"`
	}
	sarifRule struct {
		ID      string        `json:"id"`
		Short   sarifText     `json:"shortDescription"`
		Full    *sarifText    `json:"fullDescription,omitempty"`
		Help    *sarifText    `json:"help,omitempty"`
		Default sarifDefaults `json:"defaultConfiguration"`
	}
	sarifDefaults struct {
		Level string `json:"level"`
	}
	sarifText struct {
		Text string `json:"text"`
	}
	sarifArtifactBase struct {
		Description sarifText `json:"description"`
	}
	sarifInvocation struct {
		Successful    bool                `json:"executionSuccessful"`
		ExitCode      int                 `json:"exitCode"`
		Notifications []sarifNotification `json:"toolExecutionNotifications,omitempty"`
	}
	sarifNotification struct {
		Descriptor *sarifRuleReference `json:"associatedRule,omitempty"`
		Level      string              `json:"level"`
		Message    sarifText           `json:"message"`
		Locations  []sarifLocation     `json:"locations,omitempty"`
	}
	sarifRuleReference struct {
		ID    string `json:"id"`
		Index int    `json:"index"`
	}
	sarifResult struct {
		RuleID       string             `json:"ruleId"`
		RuleIndex    int                `json:"ruleIndex"`
		Kind         string             `json:"kind"`
		Level        string             `json:"level"`
		Message      sarifText          `json:"message"`
		Locations    []sarifLocation    `json:"locations,omitempty"`
		Fingerprints map[string]string  `json:"partialFingerprints"`
		Baseline     string             `json:"baselineState,omitempty"`
		Suppressions []sarifSuppression `json:"suppressions,omitempty"`
	}
	sarifSuppression struct {
		Kind          string         `json:"kind"`
		Justification string         `json:"justification"`
		Location      *sarifLocation `json:"location,omitempty"`
	}
	sarifLocation struct {
		Physical *sarifPhysical `json:"physicalLocation,omitempty"`
		Logical  []sarifLogical `json:"logicalLocations,omitempty"`
	}
	sarifPhysical struct {
		Artifact sarifArtifact `json:"artifactLocation"`
		Region   *sarifRegion  `json:"region,omitempty"`
	}
	sarifArtifact struct {
		URI    string `json:"uri"`
		BaseID string `json:"uriBaseId,omitempty"`
	}
	sarifRegion struct {
		Line   int `json:"startLine"`
		Column int `json:"startColumn,omitempty"`
	}
	sarifLogical struct {
		Name string `json:"fullyQualifiedName"`
		Kind string `json:"kind,omitempty"`
	}
)

const (
	sarifSchemaURI = "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"
	sourceRoot     = "%SRCROOT%"

	// fingerprintKey carries its version, so that a change of the recipe never matches old results.
	fingerprintKey = "railproof/v1"
)

// WriteSARIF writes SARIF 2.1.0. A violation is a `fail`, a conceded one a `fail` with a suppression, an
// unproven finding `open` with a notification; what is proven is not listed. There are no time stamps.
func (r *Report) WriteSARIF(w io.Writer) error {
	run := sarifRun{
		Tool:       sarifTool{sarifDriver{Name: "railproof", Version: r.Version}},
		BaseIDs:    map[string]sarifArtifactBase{sourceRoot: {sarifText{"the folder that railproof was run in"}}},
		ColumnKind: "unicodeCodePoints", Results: []sarifResult{},
	}
	for _, c := range Catalogue() {
		run.Tool.Driver.Rules = append(run.Tool.Driver.Rules, sarifRuleOf(c))
	}
	call := sarifInvocation{Successful: r.Exit != ExitBadInput, ExitCode: int(r.Exit)}
	for k := range r.Files {
		f := &r.Files[k]
		call.Notifications = append(call.Notifications, sarifFaults(f)...)
		for n := range f.Findings {
			x := &f.Findings[n]
			if x.Verdict == checks.Proven {
				continue
			}
			result := sarifResultOf(f, x)
			run.Results = append(run.Results, result)
			if x.Verdict == checks.Unproven {
				call.Notifications = append(call.Notifications, sarifNotification{
					&sarifRuleReference{result.RuleID, result.RuleIndex}, "warning", sarifText{"not proven: " + result.Message.Text}, result.Locations,
				})
			}
		}
	}
	run.Invocations = []sarifInvocation{call}
	return encode(w, sarifLog{Schema: sarifSchemaURI, Version: "2.1.0", Runs: []sarifRun{run}})
}

func sarifRuleOf(c *checks.Check) sarifRule {
	rule := sarifRule{ID: c.Name, Short: sarifText{c.Title}, Default: sarifDefaults{"warning"}}
	if c.Applies != "" {
		rule.Full = &sarifText{"On " + c.Applies + ". Stress: " + c.Stress + ". Rating: " + c.Rating + ". Severity: " + c.SeverityRule + "."}
	}
	if c.Source != "" {
		rule.Help = &sarifText{"Source: " + c.Source + ". Remedy: " + c.Remedy + "."}
	}
	return rule
}

func sarifResultOf(f *File, x *Finding) sarifResult {
	result := sarifResult{
		RuleID: x.Check, RuleIndex: x.rank, Kind: "fail", Level: "none", Message: sarifText{joined(printable(summary(x)), printable(detail(x)))},
		Locations:    []sarifLocation{sarifPlace(x.At, f.Name, x.Element)},
		Fingerprints: map[string]string{fingerprintKey: x.Fingerprint}, Baseline: string(x.State),
	}
	switch x.Verdict {
	case checks.Unproven:
		result.Kind = "open"
	default:
		result.Level = map[checks.Severity]string{checks.Critical: "error", checks.Major: "warning", checks.Minor: "note"}[x.Severity]
	}
	if c := x.Concession; c != nil {
		at := sarifPlace(c.At, f.Name, "")
		result.Suppressions = []sarifSuppression{{"external", printable("until " + c.Until + ", up to " + ceilingWords(c) + ": " + c.Reason), &at}}
	}
	return result
}

// sarifPlace names a place in the text and the element there.
func sarifPlace(at netlist.Position, file, element string) sarifLocation {
	var l sarifLocation
	if at.File == "" {
		at.File = file
	}
	l.Physical = &sarifPhysical{Artifact: sarifArtifactOf(at.File)}
	if at.Line > 0 {
		l.Physical.Region = &sarifRegion{at.Line, at.Column}
	}
	if element != "" {
		l.Logical = []sarifLogical{{printable(element), "element"}}
	}
	return l
}

// sarifArtifactOf turns a path into a URI, relative to the source root unless it is absolute.
func sarifArtifactOf(file string) sarifArtifact {
	absolute := filepath.IsAbs(file)
	file = path.Clean(slashed(file))
	if absolute {
		return sarifArtifact{URI: (&url.URL{Scheme: "file", Path: "/" + strings.TrimPrefix(file, "/")}).String()}
	}
	// A first segment with a colon would be read as a scheme, so String puts ./ before it.
	return sarifArtifact{URI: (&url.URL{Path: file}).String(), BaseID: sourceRoot}
}

func sarifFaults(f *File) []sarifNotification {
	var list []sarifNotification
	if f.Failure != "" {
		list = append(list, sarifNotification{nil, "error", sarifText{printable(f.Failure)}, []sarifLocation{sarifPlace(netlist.Position{}, f.Name, "")}})
	}
	for _, d := range f.Diagnostics {
		list = append(list, sarifNotification{nil, "error", sarifText{printable(d.Error())}, []sarifLocation{sarifPlace(d.At, f.Name, "")}})
	}
	return list
}
