package main

import (
	"encoding/json"
	"math"
	"strconv"
	"strings"
)

// number is written to JSON with 17 significant digits, which every double
// survives, and as null when it is not finite, for which JSON has no word.
type number float64

func (n number) MarshalJSON() ([]byte, error) {
	f := float64(n)
	if math.IsNaN(f) || math.IsInf(f, 0) {
		return []byte("null"), nil
	}
	return strconv.AppendFloat(nil, f, 'g', 17, 64), nil
}

// writeJSON prints one indented object and a line end.
func writeJSON(io *streams, value any) error {
	text, err := json.MarshalIndent(value, "", "  ")
	if err != nil {
		return err
	}
	_, err = io.out.Write(append(text, '\n'))
	return err
}

// figure is a number for people: seven significant digits, at least two
// decimals for large ones, thousands set apart by commas.
func figure(f float64) string {
	size := math.Abs(f)
	switch {
	case math.IsNaN(f):
		return "-"
	case math.IsInf(f, 1):
		return "unlimited"
	case math.IsInf(f, -1):
		return "-unlimited"
	case size != 0 && size < 1e-3 || size >= 1e15:
		return strconv.FormatFloat(f, 'g', 7, 64)
	}
	decimals := 6
	for limit := 10.0; decimals > 2 && size >= limit; limit *= 10 {
		decimals--
	}
	text := strconv.FormatFloat(size, 'f', decimals, 64)
	whole, rest, _ := strings.Cut(text, ".")
	for at := len(whole) - 3; at > 0; at -= 3 {
		whole = whole[:at] + "," + whole[at:]
	}
	if f < 0 {
		whole = "-" + whole
	}
	return whole + "." + rest
}
