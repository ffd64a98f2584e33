package table

import (
	"bufio"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"example.org/tailback/network/unit"
)

// sheet writes one CSV file (RFC 4180, UTF-8, lines ending in LF as GIS and notebook readers expect) field by
// field. The first failure is kept until close.
type sheet struct {
	file  *os.File
	w     *bufio.Writer
	line  []byte
	begun bool
}

// newSheet begins a file with its header.
func newSheet(dir, name string, header string) (*sheet, error) {
	f, err := os.Create(filepath.Join(dir, name))
	if err != nil {
		return nil, err
	}
	s := &sheet{file: f, w: bufio.NewWriterSize(f, 1<<16)}
	s.line = append(s.line, header...)
	s.end()
	return s, nil
}

func (s *sheet) comma() {
	if s.begun {
		s.line = append(s.line, ',')
	}
	s.begun = true
}

// text writes a field, quoted where it must be.
func (s *sheet) text(x string) {
	s.comma()
	if strings.ContainsAny(x, "\",\r\n") {
		s.line = append(s.line, '"')
		s.line = append(s.line, strings.ReplaceAll(x, `"`, `""`)...)
		s.line = append(s.line, '"')
		return
	}
	s.line = append(s.line, x...)
}

// number writes x with at most so many decimals, without trailing zeros; NaN is an empty field.
func (s *sheet) number(x float64, decimals int) {
	s.comma()
	if x != x {
		return
	}
	start := len(s.line)
	s.line = strconv.AppendFloat(s.line, x, 'f', decimals, 64)
	if decimals > 0 {
		for s.line[len(s.line)-1] == '0' {
			s.line = s.line[:len(s.line)-1]
		}
		if s.line[len(s.line)-1] == '.' {
			s.line = s.line[:len(s.line)-1]
		}
	}
	if string(s.line[start:]) == "-0" {
		s.line = append(s.line[:start], '0')
	}
}

// whole writes a whole number.
func (s *sheet) whole(x int) {
	s.comma()
	s.line = strconv.AppendInt(s.line, int64(x), 10)
}

// clock writes a time in seconds after midnight as HH:MM:SS; NaN is an empty field.
func (s *sheet) clock(seconds float64) {
	s.comma()
	if seconds == seconds {
		s.line = append(s.line, unit.Clock(seconds)...)
	}
}

// end ends the row.
func (s *sheet) end() {
	s.line = append(s.line, '\n')
	s.w.Write(s.line) // bufio keeps the first error for Flush
	s.line, s.begun = s.line[:0], false
}

// close writes what is buffered and closes the file.
func (s *sheet) close() error {
	err := s.w.Flush()
	if e := s.file.Close(); err == nil {
		err = e
	}
	return err
}
