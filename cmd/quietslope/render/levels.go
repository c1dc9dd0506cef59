package render

import (
	"bufio"
	"encoding/csv"
	"io"
	"strconv"
	"strings"

	"quietslope/scenario"
)

// Levels writes the replayed series as CSV: time, rain_mm, then recharge_mm, cover_m and deep_m of every option, all
// numbers as the shortest text that reads back to the same float64.
func Levels(w io.Writer, s *scenario.LevelSeries) error {
	b := bufio.NewWriterSize(w, 1<<16)
	head := []string{"time", "rain_mm"}
	for _, o := range s.Options {
		head = append(head, o+"/recharge_mm", o+"/cover_m", o+"/deep_m")
	}
	h := csv.NewWriter(b)
	if err := h.Write(head); err != nil {
		return err
	}
	if h.Flush(); h.Error() != nil {
		return h.Error()
	}
	var row []byte
	for i := range s.Rows {
		row = append(row[:0], quoted(s.Time(i))...)
		row = number(row, s.Rain[i])
		for k := range s.Options {
			row = number(row, s.Recharge[k][i])
			row = number(row, s.Cover[k][i])
			row = number(row, s.Deep[k][i])
		}
		if _, err := b.Write(append(row, '\n')); err != nil {
			return err
		}
	}
	return b.Flush()
}

func number(row []byte, x float64) []byte {
	return strconv.AppendFloat(append(row, ','), x, 'g', -1, 64)
}

// quoted is a field as CSV wants it.
func quoted(text string) string {
	if strings.ContainsAny(text, ",\"\n\r") {
		return `"` + strings.ReplaceAll(text, `"`, `""`) + `"`
	}
	return text
}
