package weather

import (
	"bufio"
	"bytes"
	"compress/flate"
	"compress/gzip"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"syscall"
	"time"

	"quietslope/scenario/fault"
)

// Limits that keep a wrong file from filling the memory. They are far beyond any record of rain.
const (
	maxLine  = 64 << 10 // bytes of a line
	maxField = 256      // bytes of a field
	maxRows  = 60e6     // rows; 114 years of minutes
	maxBlank = 10_000   // blank lines one after another
)

// headRows is the number of rows from which the step is found.
const headRows = 1000

// blanks may stand around a cell.
const blanks = " \t"

// errStop ends reading; what is wrong has been noted.
var errStop = errors.New("stop")

// Read reads the record that src names and checks it whole. What is wrong with the file is returned as a *fault.Error for
// each problem, up to fault.Most of them, joined into one error. Trouble of the machine, such as a disk that cannot be
// read, is another error, and so is that of a context that is cancelled, upon which Read returns at once.
func Read(ctx context.Context, src Source) (*Record, error) {
	f, size, err := open(ctx, src)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	// A pipe can keep a read waiting for ever; closing it ends the wait.
	stop := context.AfterFunc(ctx, func() { f.Close() })
	defer stop()
	return read(ctx, src, f, size, maxRows)
}

// open opens the file of a record. The size is 0 when it is not known.
func open(ctx context.Context, src Source) (*os.File, int64, error) {
	type opened struct {
		f   *os.File
		err error
	}
	done := make(chan opened, 1)
	go func() { // a named pipe that nobody writes to blocks here
		f, err := os.Open(src.Path)
		done <- opened{f, err}
	}()
	var o opened
	select {
	case o = <-done:
	case <-ctx.Done():
		go func() {
			if o := <-done; o.err == nil {
				o.f.Close()
			}
		}()
		return nil, 0, fmt.Errorf("%s: %w", src.Name, context.Cause(ctx))
	}
	bad := func(text string) (*os.File, int64, error) {
		return nil, 0, &fault.Error{File: src.Name, Text: text}
	}
	switch {
	case errors.Is(o.err, fs.ErrNotExist):
		return bad("there is no such file; the path of a weather file starts at the folder of the study file" + meantFile(src))
	case errors.Is(o.err, fs.ErrInvalid), errors.Is(o.err, syscall.ENOTDIR), errors.Is(o.err, syscall.ENAMETOOLONG):
		return bad("this is not the path of a file")
	case o.err != nil:
		return nil, 0, fmt.Errorf("%s: %w", src.Name, cause(o.err))
	}
	info, err := o.f.Stat()
	switch {
	case err != nil:
		o.f.Close()
		return nil, 0, fmt.Errorf("%s: %w", src.Name, cause(err))
	case info.IsDir():
		o.f.Close()
		return bad("this is a folder, not a file")
	case !info.Mode().IsRegular():
		return o.f, 0, nil
	}
	return o.f, info.Size(), nil
}

// cause drops the path from an error of the file system: the user has named the file differently.
func cause(err error) error {
	if pe := (*fs.PathError)(nil); errors.As(err, &pe) {
		return pe.Err
	}
	return err
}

// reader is one reading of a record.
type reader struct {
	ctx     context.Context
	src     Source
	in      *bufio.Reader
	maxRows int
	size    int64 // of the plain text in bytes, 0 when not known

	line   int   // number of the line read last
	read   int64 // bytes of plain text up to here
	ended  bool  // the last line had no line end
	fields [][]byte
	quoted []byte // contents of quoted fields
	joined []byte // lines of a row with line ends in quotes

	columns
	layout   *layout
	missing  codes
	rainUnit Unit
	petUnit  Unit
	offset   int64  // of the first row from UTC, in s
	zone     string // the same as written

	problems []*fault.Error
	kinds    []*kind // of the problems in rows
	series
}

func read(ctx context.Context, src Source, raw io.Reader, size int64, maxRows int) (*Record, error) {
	r := &reader{ctx: ctx, src: src, maxRows: maxRows}
	sum := sha256.New()
	file := bufio.NewReaderSize(io.TeeReader(raw, sum), maxLine+len("\r\n"))
	err := r.all(file, size)
	if err == nil && len(r.problems) == 0 {
		_, err = io.Copy(io.Discard, file) // the hash is of all the bytes
	}
	switch {
	case ctx.Err() != nil:
		return nil, fmt.Errorf("%s: %w", src.Name, context.Cause(ctx))
	case err != nil && err != errStop:
		return nil, fmt.Errorf("%s: %w", src.Name, cause(err))
	case len(r.problems) > 0:
		return nil, r.report()
	}
	rec := &Record{
		Name: src.Name, SHA256: hex.EncodeToString(sum.Sum(nil)),
		Rain: r.rain, PET: r.pet,
		layout: r.layout, zone: r.zone, stampEnd: src.StampEnd, lastDays: r.lastDays,
	}
	in := time.UTC
	if r.offset != 0 {
		in = time.FixedZone("", int(r.offset))
	}
	if r.months {
		rec.First = startOfMonth(r.first, in)
	} else {
		rec.Step = time.Duration(r.step) * time.Second
		rec.First = time.Unix(r.first, 0).In(in)
		if src.StampEnd {
			rec.First = rec.First.Add(-rec.Step)
		}
	}
	if r.gapCount > 0 {
		r.fill(rec)
	}
	if len(r.problems) > 0 {
		return nil, r.report()
	}
	return rec, nil
}

// report puts the problems in the order of the file.
func (r *reader) report() error {
	for _, k := range r.kinds {
		k.problem.Text += k.more()
	}
	slices.SortStableFunc(r.problems, func(a, b *fault.Error) int { return a.Line - b.Line })
	var list fault.List
	for _, p := range r.problems[:min(len(r.problems), fault.Most)] {
		list.Add(p)
	}
	if len(r.problems) < fault.Most {
		return list.Err()
	}
	return errors.Join(list.Err(), &fault.Error{File: r.src.Name,
		Text: fmt.Sprintf("these are the first %d problems; there may be more", fault.Most)})
}

// problem notes what is wrong in a line, 0 for the whole file, and in a column where there is one.
func (r *reader) problem(line int, column, format string, args ...any) *fault.Error {
	p := &fault.Error{File: r.src.Name, Line: line, Text: fmt.Sprintf(format, args...)}
	if column != "" {
		p.Key = fmt.Sprintf("column %q", column)
	}
	r.problems = append(r.problems, p)
	return p
}

// fatal notes a problem after which nothing more can be said about the file.
func (r *reader) fatal(line int, format string, args ...any) error {
	r.problem(line, "", format, args...)
	return errStop
}

// all reads the file from its first byte to its last.
func (r *reader) all(file *bufio.Reader, size int64) error {
	if err := r.prepare(); err != nil {
		return err
	}
	r.in, r.size = file, size
	magic, err := file.Peek(2)
	switch {
	case len(magic) == 2 && magic[0] == 0x1f && magic[1] == 0x8b:
		plain, err := gzip.NewReader(file)
		if err != nil {
			return r.unreadable(err)
		}
		r.in, r.size = bufio.NewReaderSize(plain, maxLine+len("\r\n")), 0
	case err != nil && err != io.EOF:
		return err
	case strings.EqualFold(filepath.Ext(r.src.Path), ".gz") && len(magic) > 0:
		return r.fatal(0, "the name ends in .gz but the contents are not compressed by gzip; rename the file or compress it")
	}
	if err := r.header(); err != nil {
		return err
	}
	r.missing = newCodes(r.src.Missing, r.comma)
	if err := r.rows(); err != nil {
		return err
	}
	return r.end()
}

// prepare checks what the study says about the columns.
func (r *reader) prepare() error {
	var err error
	if r.layout, err = newLayout(r.src.Format); err != nil {
		r.problem(0, r.src.Time, "%v", err)
	} else if r.src.StampEnd && !r.layout.hasDay() {
		r.problem(0, r.src.Time, "the format %s names a month and no end of it; write weather.stamp: start, with which each row is of the month that it names", r.src.Format)
	}
	if err := checkGaps(r.src.Gaps); err != nil {
		r.problem(0, "", "%v", err)
	}
	if r.rainUnit, err = DepthUnit(r.src.Rain.Unit); err != nil {
		r.problem(0, r.src.Rain.Name, "%v", err)
	}
	if r.src.PET != nil {
		if r.petUnit, err = DepthUnit(r.src.PET.Unit); err != nil {
			r.problem(0, r.src.PET.Name, "%v", err)
		}
	}
	if len(r.problems) > 0 {
		return errStop
	}
	return nil
}

// unreadable turns an error of decompression into a problem of the file; others are handed on.
func (r *reader) unreadable(err error) error {
	var corrupt flate.CorruptInputError
	switch {
	case errors.Is(err, io.ErrUnexpectedEOF):
		return r.fatal(r.line, "the compressed file ends too early, so part of it is missing; fetch it again")
	case errors.Is(err, gzip.ErrHeader), errors.Is(err, gzip.ErrChecksum), errors.As(err, &corrupt):
		return r.fatal(r.line, "the compressed file is damaged after this line; fetch it again")
	}
	return err
}

// next returns the next line without its end, or io.EOF. It is valid until the next call.
func (r *reader) next() ([]byte, error) {
	if r.line&0xfff == 0 && r.ctx.Err() != nil {
		return nil, r.ctx.Err()
	}
	b, err := r.in.ReadSlice('\n')
	r.read += int64(len(b))
	switch {
	case err == nil:
		b = b[:len(b)-1]
	case err == io.EOF && len(b) == 0:
		return nil, io.EOF
	case err == io.EOF:
		r.ended = true
	case err != bufio.ErrBufferFull:
		return nil, r.unreadable(err)
	}
	r.line++
	if bytes.IndexByte(b, 0) >= 0 {
		return nil, r.fatal(r.line, "the file is not text: it has NUL bytes; %s", saveAsText)
	}
	if n := len(b); n > 0 && b[n-1] == '\r' {
		b = b[:n-1]
	}
	if len(b) > maxLine {
		return nil, r.fatal(r.line, "the line is longer than 64 kB; is this the right file?")
	}
	return b, nil
}

const saveAsText = "save the table as CSV text in UTF-8"

// row is one row as read.
type row struct {
	at              int64 // the stamp in s since 1970; once a month is placed, its monthNumber
	line            int
	time, rain, pet []byte // cells; valid until the next line is read
	rainV, petV     float64
	missing         uint8 // rainMissing, petMissing
	broken          bool  // the row before has no time, or could not be read
}

// rows reads all the rows.
func (r *reader) rows() error {
	var w row
	blank := 0 // number of the first of the blank lines before this one
	for n := 0; ; {
		b, err := r.next()
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return err
		}
		if r.isBlank(b) {
			if blank == 0 {
				blank = r.line
			}
			if r.line-blank > maxBlank {
				return r.fatal(blank, "from here on there are more than %d blank lines", maxBlank)
			}
			continue
		}
		if blank > 0 {
			r.inRow(blank, "", wrong("the line is blank, but rows follow in line %d; delete blank lines", r.line)).noun = "place"
			blank = 0
		}
		if n++; n > r.maxRows {
			return r.fatal(r.line, "there are more than %d rows; is this the right file?", r.maxRows)
		}
		if ok, err := r.parse(b, &w); err != nil {
			return err
		} else if !ok {
			r.unsure, r.broken = true, true
		} else if err := r.take(&w); err != nil {
			return err
		}
		if len(r.problems) >= fault.Most {
			return nil
		}
	}
}

// isBlank says whether a line has no contents; spreadsheets write such rows with all their separators.
func (r *reader) isBlank(b []byte) bool {
	for _, c := range b {
		if c != ' ' && c != '\t' && c != r.sep {
			return false
		}
	}
	return true
}

// parse reads a row's cells. It returns false when the row cannot be placed in time.
func (r *reader) parse(b []byte, w *row) (ok bool, err error) {
	w.line = r.line
	if ok, err := r.split(b); !ok || err != nil {
		return false, err
	}
	if len(r.fields) != r.width {
		r.wrongWidth(w.line)
		return false, nil
	}
	w.time = trim(r.fields[r.timeAt])
	if w.line == 2 && r.notValues() {
		r.inRow(w.line, "", wrong("this row has neither a time nor numbers; delete a second line of names or units below the header"))
		return false, nil
	}
	at, offset, ok := r.layout.parse(w.time)
	if !ok {
		r.inRow(w.line, r.src.Time, r.layout.explain(w.time))
	} else if w.at = at; r.layout.iso && r.zone == "" {
		r.offset, r.zone = offset, zoneOf(w.time)
	}
	w.missing = 0
	w.rain = trim(r.fields[r.rainAt])
	w.rainV = r.value(w, w.rain, r.src.Rain.Name, rainMissing)
	if r.petAt >= 0 {
		w.pet = trim(r.fields[r.petAt])
		w.petV = r.value(w, w.pet, r.src.PET.Name, petMissing)
	}
	return ok, nil
}

// notValues says whether none of the columns of a row has what belongs there.
func (r *reader) notValues() bool {
	if _, _, ok := r.layout.parse(trim(r.fields[r.timeAt])); ok {
		return false
	}
	at := []int{r.rainAt, r.petAt}
	if r.petAt < 0 {
		at = at[:1]
	}
	for _, i := range at {
		cell := trim(r.fields[i])
		if len(cell) == 0 || bytes.ContainsAny(cell, "0123456789") || r.missing.hasText(cell) {
			return false
		}
	}
	return true
}

// trim cuts the blanks off a cell. Most cells have none, and that is seen from their ends.
func trim(cell []byte) []byte {
	if n := len(cell); n > 0 && cell[0] > ' ' && cell[n-1] > ' ' {
		return cell
	}
	return bytes.Trim(cell, blanks)
}

func (r *reader) wrongWidth(line int) {
	hint := ""
	switch {
	case len(r.fields) > r.width && r.sep == ',':
		hint = "; numbers with a decimal comma need a point instead, or columns separated by ; or tabs"
	case len(r.fields) < r.width && r.ended:
		hint = "; it is the last line: the file may have been cut off"
	}
	r.inRow(line, "", wrong("the row has %s where the header has %d"+hint, fault.Count(len(r.fields), "field"), r.width))
}

// value reads a number or a missing code.
func (r *reader) value(w *row, cell []byte, column string, bit uint8) float64 {
	v, ok := parseNumber(cell, r.comma)
	switch {
	case ok && r.missing.hasNumber(v), !ok && r.missing.hasText(cell):
		w.missing |= bit
		return 0
	case !ok:
		r.badCell(w.line, column, cell, notNumber(cell, r.comma, r.src.Missing))
		return 0
	case v < 0 && bit == rainMissing:
		r.badCell(w.line, column, cell, wrong("%q is negative rain; a negative code for a missing value belongs in "+
			"weather.missing%s, and a trace of rain is written as 0", cell, r.listedCode(v)))
		return 0
	case v < 0:
		r.badCell(w.line, column, cell, wrong("%q is negative evapotranspiration; a negative code for a missing value "+
			"belongs in weather.missing%s, and dew is written as 0", cell, r.listedCode(v)))
		return 0
	}
	return v
}

// listedCode shows how a number that looks like a code is listed as missing.
func (r *reader) listedCode(v float64) string {
	if v > -9 || v != math.Trunc(v) {
		return ""
	}
	return listed(strconv.FormatFloat(v, 'f', -1, 64), r.src.Missing)
}

// trouble is what is wrong with a row. Troubles of one format are of one kind.
type trouble struct {
	format string
	args   []any
}

func wrong(format string, args ...any) *trouble { return &trouble{format, args} }

func (t *trouble) String() string { return fmt.Sprintf(t.format, t.args...) }

// kind is a kind of trouble in one column. It is one problem, however many rows have it.
type kind struct {
	column, format string
	problem        *fault.Error // about the first row that has it
	rows           int
	noun           string   // what rows counts
	cells          []string // that have it, of those that differ the first few; empty where they do not matter
}

// inRow notes what is wrong with a row, in a column where there is one.
func (r *reader) inRow(line int, column string, t *trouble) *kind {
	for _, k := range r.kinds {
		if k.column == column && k.format == t.format {
			k.rows++
			return k
		}
	}
	k := &kind{column: column, format: t.format, problem: r.problem(line, column, "%s", t), rows: 1, noun: "row"}
	r.kinds = append(r.kinds, k)
	return k
}

// mostCells is the number of further cells that a message names.
const mostCells = 3

// badCell is inRow for a cell that cannot be used.
func (r *reader) badCell(line int, column string, cell []byte, t *trouble) {
	k := r.inRow(line, column, t)
	if len(k.cells) < 2+mostCells && !slices.Contains(k.cells, string(cell)) {
		k.cells = append(k.cells, string(cell))
	}
}

// more says in how many more rows the trouble stands, and in which other cells.
func (k *kind) more() string {
	also := ""
	switch {
	case k.rows == 1:
		return ""
	case len(k.cells) > 1+mostCells:
		also = fmt.Sprintf("; also %s and others", quoteList(k.cells[1:1+mostCells]))
	case len(k.cells) > 1:
		also = "; also " + quoteList(k.cells[1:])
	}
	return fmt.Sprintf(" (and in %s%s)", fault.Count(k.rows-1, "more "+k.noun), also)
}
