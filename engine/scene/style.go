package scene

import "encoding/json"

// Style is the look of a [Class] on one kind of sheet. Lines, open polygons and
// rings are drawn with Stroke, Width and Dash; discs and rectangles are filled
// with Fill; texts are filled with Fill in the given size and weight. An empty
// colour means that nothing is painted.
type Style struct {
	Stroke string    `json:"stroke,omitempty"` // "#RRGGBB"
	Width  float64   `json:"width,omitempty"`  // mm
	Dash   []float64 `json:"dash,omitempty"`   // mm on, off, ...; none for solid
	Fill   string    `json:"fill,omitempty"`   // "#RRGGBB"
	Size   float64   `json:"size,omitempty"`   // text: em size as a multiple of [Scene.FontMM]
	Weight int       `json:"weight,omitempty"` // text: 400 or 700
}

// Palette is the colours of a sheet. Within one sheet every colour that text or
// strokes use has a contrast of at least 4.5:1 against the paper.
type Palette struct {
	Paper, Ink, Quiet, GridMinor, GridMajor string
	Atrium, Node, Purkinje, Accessory       string
	Device, Tint, Warning, Halo             string
	Lost, Found                             string // behind what one of two timelines has alone
}

// Light is the colours on paper, Dark those of the dark sheet.
var (
	Light = Palette{
		Paper: "#FBFAF6", Ink: "#1E2A30", Quiet: "#56666F", GridMinor: "#DCE4E7", GridMajor: "#BFCDD3",
		Atrium: "#0B6B72", Node: "#8A6100", Purkinje: "#7B2D5E", Accessory: "#2F6B3A",
		Device: "#3447B5", Tint: "#E3E7F5", Warning: "#B5361B", Halo: "#D3D9F6",
		Lost: "#F3CFC3", Found: "#C4E2CB",
	}
	Dark = Palette{
		Paper: "#141C20", Ink: "#E4EAEC", Quiet: "#9BABB3", GridMinor: "#1F2A30", GridMajor: "#31414A",
		Atrium: "#4EBFC6", Node: "#DBA63C", Purkinje: "#DD8CC0", Accessory: "#7CC78B",
		Device: "#9BA8FF", Tint: "#222B4A", Warning: "#FF8365", Halo: "#2D3770",
		Lost: "#5A2E22", Found: "#24492F",
	}
)

// PaletteFor is [Dark] or [Light].
func PaletteFor(dark bool) *Palette {
	if dark {
		return &Dark
	}
	return &Light
}

// Widths of lines in millimetres. At 96 dots an inch 0.26 mm is one pixel.
const (
	hair   = 0.13
	thin   = 0.22
	signal = 0.34
	stroke = 0.50
)

// Style is the look of the class on a sheet of these colours. Each class is also
// told by its place, its shape or its dashes.
func (p *Palette) Style(c Class) Style {
	line := func(colour string, width float64, dash ...float64) Style {
		return Style{Stroke: colour, Width: width, Dash: dash, Fill: colour}
	}
	text := func(colour string, size float64, weight int) Style {
		return Style{Fill: colour, Size: size, Weight: weight}
	}
	switch c {
	case GridMinor:
		return line(p.GridMinor, hair)
	case GridMajor, Second:
		return line(p.GridMajor, thin)
	case Trace:
		return line(p.Ink, signal)
	case LevelLine:
		return line(p.Quiet, hair, 0.6, 0.6)
	case Calibration:
		return line(p.Ink, thin)
	case AxisLine:
		return line(p.Ink, thin)
	case TierEdge:
		return line(p.GridMajor, thin)
	case Sinus:
		return line(p.Atrium, stroke, 1.3, 0.5)
	case Atrium:
		return line(p.Atrium, stroke)
	case Node:
		return line(p.Node, stroke)
	case NodeSlow:
		return line(p.Node, stroke, 1.3, 0.6)
	case His, BundleLeft:
		return line(p.Purkinje, stroke)
	case BundleRight:
		return line(p.Purkinje, stroke, 0.8, 0.45)
	case Ventricle:
		return line(p.Ink, stroke)
	case Accessory:
		return line(p.Accessory, stroke, 2, 0.6, 0.5, 0.6)
	case Block:
		return line(p.Warning, 0.7)
	case Tail:
		return line(p.Warning, 0.3, 0.3, 0.6)
	case Stimulus:
		return line(p.Device, 0.4)
	case Spike:
		return line(p.Ink, thin)
	case Signal, Timer:
		return line(p.Device, 0.3)
	case Window:
		return Style{Fill: p.Tint}
	case WindowEdge:
		return line(p.Device, hair)
	case WindowEnd:
		return line(p.Device, endMM)
	case Hatch:
		return line(p.Device, 0.16)
	case Held:
		return line(p.Device, 0.5, 0.3, 0.3)
	case WindowText:
		return text(p.Ink, 0.82, 400)
	case MarkerText:
		return text(p.Device, 0.85, 700)
	case Dim:
		return line(p.Quiet, 0.18)
	case Selected:
		return line(p.Halo, 2)
	case Gone:
		return line(p.Lost, 1.9, 0.9, 0.5)
	case New:
		return line(p.Found, 1.9)
	case Moved:
		return line(p.Device, 0.35)
	case Kept:
		return line(p.GridMajor, thin)
	case GoneText:
		return text(p.Warning, 1, 700)
	case NewText:
		return text(p.Accessory, 1, 700)
	case MovedText:
		return text(p.Device, 0.85, 400)
	case LaneLabel:
		return text(p.Ink, 1, 700)
	case Title:
		return text(p.Ink, 1.5, 700)
	case Statement:
		return text(p.Ink, 1.17, 400)
	case TierLabel, Note:
		return text(p.Quiet, 0.9, 400)
	case AxisText:
		return text(p.Quiet, 0.9, 400)
	case DimText:
		return text(p.Ink, 0.9, 400)
	case BlockLabel:
		return text(p.Warning, 0.9, 400)
	case Heading:
		return text(p.Ink, 1.1, 700)
	case Body:
		return text(p.Ink, 0.95, 400)
	case Strong:
		return text(p.Ink, 0.95, 700)
	case Rule:
		return line(p.GridMajor, thin)
	case Caution:
		return text(p.Warning, 0.9, 400)
	}
	return Style{}
}

// StylesJSON is the palette and all styles for a painter:
//
//	{"paper":"#FBFAF6","ink":"#1E2A30","quiet":"#56666F","device":"#3447B5","warning":"#B5361B",
//	 "classes":{"atrium":{"stroke":"#0B6B72","width":0.5,"fill":"#0B6B72"},...}}
func StylesJSON(dark bool) []byte {
	p := PaletteFor(dark)
	classes := map[string]Style{} // encoding/json sorts the keys
	for _, c := range Classes() {
		classes[c.String()] = p.Style(c)
	}
	b, err := json.Marshal(struct {
		Paper   string           `json:"paper"`
		Ink     string           `json:"ink"`
		Quiet   string           `json:"quiet"`
		Device  string           `json:"device"`
		Warning string           `json:"warning"`
		Classes map[string]Style `json:"classes"`
	}{p.Paper, p.Ink, p.Quiet, p.Device, p.Warning, classes})
	if err != nil {
		panic("scene: styles do not encode: " + err.Error())
	}
	return b
}
