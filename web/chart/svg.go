// Package chart draws the study's pictures as SVG text: no script, no style
// attributes, every colour and weight a class of the one style sheet.
package chart

import (
	"encoding/xml"
	"math"
	"strconv"
	"strings"
)

// svg collects the elements of one picture.
type svg struct{ b []byte }

// begin opens the picture. title and description are read to those who cannot
// see it; id makes their ids unique on the page.
func begin(id, title, description string, width, height float64) *svg {
	s := &svg{b: make([]byte, 0, 1<<16)}
	s.write(`<svg class="chart" role="img" viewBox="0 0 ` + num(width) + ` ` + num(height) +
		`" aria-labelledby="` + escape(id) + `-title ` + escape(id) + `-desc"><title id="` + escape(id) + `-title">` + escape(title) +
		`</title><desc id="` + escape(id) + `-desc">` + escape(description) + `</desc>`)
	return s
}

func (s *svg) end() string {
	s.write(`</svg>`)
	return string(s.b)
}

func (s *svg) write(text string) { s.b = append(s.b, text...) }

// clip opens a group whose contents stay inside a rectangle.
func (s *svg) clip(id string, x, y, w, h float64) {
	s.write(`<clipPath id="` + escape(id) + `"><rect x="` + num(x) + `" y="` + num(y) + `" width="` + num(w) + `" height="` + num(h) +
		`"/></clipPath><g clip-path="url(#` + escape(id) + `)">`)
}

func (s *svg) endGroup() { s.write(`</g>`) }

// line draws a polyline; points alternate x and y.
func (s *svg) line(class string, points ...float64) { s.poly("polyline", class, points) }

// polygon draws a filled outline.
func (s *svg) polygon(class string, points ...float64) { s.poly("polygon", class, points) }

func (s *svg) poly(element, class string, points []float64) {
	s.write(`<` + element + ` class="` + class + `" points="`)
	for i, v := range points {
		if i > 0 {
			s.b = append(s.b, " ,"[i%2])
		}
		s.b = appendNum(s.b, v)
	}
	s.write(`"/>`)
}

// markPair draws a small disc that says on hover what two values it stands for.
func (s *svg) markPair(class string, x, y, r float64, first string, v1 float64, second string, v2 float64) {
	s.write(`<circle class="` + class + `" cx="`)
	s.b = appendNum(s.b, x)
	s.write(`" cy="`)
	s.b = appendNum(s.b, y)
	s.write(`" r="`)
	s.b = appendNum(s.b, r)
	s.write(`"><title>` + first + ` `)
	s.b = appendShort(s.b, v1)
	s.write(`, ` + second + ` `)
	s.b = appendShort(s.b, v2)
	s.write(`</title></circle>`)
}

// text writes one line; class carries the anchor.
func (s *svg) text(class string, x, y float64, text string) {
	s.write(`<text class="` + class + `" x="` + num(x) + `" y="` + num(y) + `">` + escape(text) + `</text>`)
}

// upright writes a line turned to read upwards.
func (s *svg) upright(class string, x, y float64, text string) {
	s.write(`<text class="` + class + `" transform="translate(` + num(x) + ` ` + num(y) + `) rotate(-90)">` + escape(text) + `</text>`)
}

func num(v float64) string { return string(appendNum(nil, v)) }

// appendNum writes a coordinate to a tenth of a unit.
func appendNum(to []byte, v float64) []byte {
	tenths := int64(math.Round(v * 10))
	if tenths < 0 {
		to, tenths = append(to, '-'), -tenths
	}
	to = strconv.AppendInt(to, tenths/10, 10)
	if d := tenths % 10; d != 0 {
		to = append(to, '.', byte('0'+d))
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
