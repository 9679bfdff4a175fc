package storage

import "spillway/severity/claims"

// stored writes a date as 20250630, 0 for none: readable in the database and
// in the order of time.
func stored(d claims.Date) int64 {
	year, month, day := d.Civil()
	return int64(year*10000 + month*100 + day)
}

func dateOf(stored int64) claims.Date {
	if stored == 0 {
		return 0
	}
	d, err := claims.NewDate(int(stored/10000), int(stored/100%100), int(stored%100))
	if err != nil {
		return 0 // the schema's writers store no such day
	}
	return d
}
