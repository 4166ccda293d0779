package report

import (
	"fmt"
	"strings"

	"railproof/checks"
	"railproof/netlist"
)

// railDrawing is one rail as a block diagram, in units of the drawing.
type railDrawing struct {
	Width, Height int
	Words         string
	Wires         []string
	Stages        []stageDrawing
}

type stageDrawing struct {
	X, Y, W, H   int
	Class, Glyph string
	Lines        []drawnText
}

type drawnText struct {
	X, Y  int
	Class string
	Text  string
}

// sizes of the diagram.
const (
	stageWidth  = 138
	stageHeight = 112
	stageGap    = 26
	stagesInRow = 6
	rowGap      = 22
	lineLetters = 20 // letters that fit into a box
	roleLetters = 24 // of the small ones that name its role
)

// glyphs are the symbols of the stages after IEC 60617, drawn around (0,0) in 40 x 24.
var glyphs = map[netlist.StageRole]string{
	netlist.StageSource:      "M%[1]d %[2]dm-20 0c5 -16 15 -16 20 0s15 16 20 0",
	netlist.StageTransformer: "M%[1]d %[2]dm-6 -12c-8 0 -8 8 0 8c-8 0 -8 8 0 8c-8 0 -8 8 0 8m12 -24c8 0 8 8 0 8c8 0 8 8 0 8c8 0 8 8 0 8m-8 -24v24m4 -24v24",
	netlist.StageRectifier:   "M%[1]d %[2]dm-22 0h13m0 -10v20l18 -10zm18 0v20m0 -10h13",
	netlist.StageReservoir:   "M%[1]d %[2]dm-22 0h18m0 -11v22m8 -22v22m0 -11h18",
	netlist.StageFilter:      "M%[1]d %[2]dm-22 4h4c0 -10 9 -10 9 0c0 -10 9 -10 9 0c0 -10 9 -10 9 0c0 -10 9 -10 9 0h4",
	netlist.StageRegulator:   "M%[1]d %[2]dm-22 -2h8m0 -10h28v18h-28zm28 10h8m-22 8v8",
	netlist.StageSeries:      "M%[1]d %[2]dm-22 0h13m0 -8v16l18 -8zm18 0v16m0 -8h13",
	netlist.StageLoad:        "M%[1]d %[2]dm-24 0h8m0 -6h32v12h-32zm32 6h8",
}

// drawRails draws the rails of a file; each stage carries the worst verdict of its parts.
func drawRails(f *File) []railDrawing {
	worst := worstOf(f.Findings)
	var list []railDrawing
	for _, rail := range f.Rails {
		list = append(list, drawRail(rail, worst))
	}
	return list
}

// worstOf is the first finding of each element in the total order that is not proven.
func worstOf(list []Finding) map[string]*Finding {
	worst := map[string]*Finding{}
	for k := range list {
		f := &list[k]
		if f.Verdict != checks.Proven && worst[f.Element] == nil {
			worst[f.Element] = f
		}
	}
	return worst
}

func drawRail(rail netlist.RailChain, worst map[string]*Finding) railDrawing {
	n := len(rail.Stages)
	rows := (n + stagesInRow - 1) / stagesInRow
	inRow := min(n, stagesInRow)
	d := railDrawing{
		Width: inRow*(stageWidth+stageGap) - stageGap + 4, Height: rows*(stageHeight+rowGap) - rowGap + 4, Words: printable(rail.String()),
	}
	for k, s := range rail.Stages {
		x, y := 2+(k%stagesInRow)*(stageWidth+stageGap), 2+(k/stagesInRow)*(stageHeight+rowGap)
		d.Stages = append(d.Stages, drawStage(s, x, y, worst))
		middle := y + stageHeight/2
		switch {
		case k+1 == n:
		case (k+1)%stagesInRow == 0: // down and back to the beginning of the next row
			below := y + stageHeight + rowGap/2
			d.Wires = append(d.Wires, fmt.Sprintf("M%d %dV%dH%dV%d", x+stageWidth/2, y+stageHeight, below, 2+stageWidth/2, below+rowGap/2))
		default:
			d.Wires = append(d.Wires, fmt.Sprintf("M%d %dh%dm-6 -4l6 4l-6 4", x+stageWidth, middle, stageGap))
		}
	}
	return d
}

func drawStage(s netlist.RailStage, x, y int, worst map[string]*Finding) stageDrawing {
	d := stageDrawing{X: x, Y: y, W: stageWidth, H: stageHeight, Glyph: fmt.Sprintf(glyphs[s.Role], x+stageWidth/2, y+36)}
	if glyphs[s.Role] == "" {
		d.Glyph = ""
	}
	line := func(row int, class, text string) {
		letters := lineLetters
		if class == "role" {
			letters = roleLetters
		}
		d.Lines = append(d.Lines, drawnText{x + 8, y + row, class, clip(text, letters)})
	}
	title := string(s.Role)
	if s.Arrangement != "" && s.Role != netlist.StageSource {
		title = string(s.Arrangement)
	}
	line(15, "role", title)
	parts := strings.Join(foldNames(s.Names), " ")
	if parts == "" {
		parts = "none drawn"
	}
	line(66, "parts", parts)
	line(81, "note", s.Note)
	if s.Role != netlist.StageLoad {
		line(95, "node", "at "+s.NodeName)
	}
	if f := worstAmong(s.Names, worst); f != nil {
		d.Class = classOf(f)
		line(107, "mark", labelOf(f)+": "+f.Element)
	}
	return d
}

// worstAmong is the finding of the parts that comes first in the total order.
func worstAmong(names []string, worst map[string]*Finding) *Finding {
	var found *Finding
	for _, name := range names {
		if f := worst[name]; f != nil && (found == nil || rankOf(f) < rankOf(found)) {
			found = f
		}
	}
	return found
}

func rankOf(f *Finding) int { return 10*verdictRank(f.Verdict) + severityRank(f.Severity) }

// clip shortens a text to a number of letters.
func clip(text string, letters int) string {
	runes := []rune(printable(text))
	if len(runes) <= letters {
		return string(runes)
	}
	return string(runes[:letters-1]) + "…"
}
