// Package chart draws the study's pictures as SVG text: no script, no style
// attributes, every colour and weight a class of the one style sheet.
package chart

import (
	"encoding/xml"
	"strconv"
	"strings"
)

// svg collects the elements of one picture.
type svg struct {
	b             strings.Builder
	width, height float64
}

// begin opens the picture. title and description are read to those who cannot
// see it; id makes their ids unique on the page.
func begin(id, title, description string, width, height float64) *svg {
	s := &svg{width: width, height: height}
	s.b.WriteString(`<svg class="chart" role="img" viewBox="0 0 ` + num(width) + ` ` + num(height) +
		`" aria-labelledby="` + escape(id) + `-title ` + escape(id) + `-desc"><title id="` + escape(id) + `-title">` + escape(title) +
		`</title><desc id="` + escape(id) + `-desc">` + escape(description) + `</desc>`)
	return s
}

func (s *svg) end() string {
	s.b.WriteString(`</svg>`)
	return s.b.String()
}

// clip opens a group whose contents stay inside a rectangle.
func (s *svg) clip(id string, x, y, w, h float64) {
	s.b.WriteString(`<clipPath id="` + escape(id) + `"><rect x="` + num(x) + `" y="` + num(y) + `" width="` + num(w) + `" height="` + num(h) +
		`"/></clipPath><g clip-path="url(#` + escape(id) + `)">`)
}

func (s *svg) endGroup() { s.b.WriteString(`</g>`) }

// line draws a polyline; points alternate x and y.
func (s *svg) line(class string, points ...float64) { s.poly("polyline", class, points) }

// polygon draws a filled outline.
func (s *svg) polygon(class string, points ...float64) { s.poly("polygon", class, points) }

func (s *svg) poly(element, class string, points []float64) {
	s.b.WriteString(`<` + element + ` class="` + class + `" points="`)
	var buffer [24]byte
	for i, v := range points {
		if i > 0 {
			s.b.WriteByte(" ,"[i%2])
		}
		s.b.Write(appendNum(buffer[:0], v))
	}
	s.b.WriteString(`"/>`)
}

// mark draws a small disc; tip is shown on hover, if any.
func (s *svg) mark(class string, x, y, r float64, tip string) {
	s.b.WriteString(`<circle class="` + class + `" cx="` + num(x) + `" cy="` + num(y) + `" r="` + num(r))
	if tip == "" {
		s.b.WriteString(`"/>`)
		return
	}
	s.b.WriteString(`"><title>` + escape(tip) + `</title></circle>`)
}

// text writes one line; class carries the anchor.
func (s *svg) text(class string, x, y float64, text string) {
	s.b.WriteString(`<text class="` + class + `" x="` + num(x) + `" y="` + num(y) + `">` + escape(text) + `</text>`)
}

// upright writes a line turned to read upwards.
func (s *svg) upright(class string, x, y float64, text string) {
	s.b.WriteString(`<text class="` + class + `" transform="translate(` + num(x) + ` ` + num(y) + `) rotate(-90)">` + escape(text) + `</text>`)
}

func num(v float64) string { return string(appendNum(nil, v)) }

// appendNum writes a coordinate to a tenth of a unit.
func appendNum(to []byte, v float64) []byte {
	to = strconv.AppendFloat(to, v, 'f', 1, 64)
	if n := len(to); to[n-1] == '0' {
		to = to[:n-2]
	}
	return to
}

func escape(text string) string {
	if !strings.ContainsAny(text, `&<>"'`) {
		return text
	}
	var b strings.Builder
	if err := xml.EscapeText(&b, []byte(text)); err != nil {
		return "" // a strings.Builder never fails
	}
	return b.String()
}
