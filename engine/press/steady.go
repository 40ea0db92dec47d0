package press

import (
	"bytes"
	"compress/zlib"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"regexp"
	"slices"
	"strconv"
)

// Package canvas writes the time of printing into a PDF twice: as its date, and in
// the head table of every embedded font, with the checksums that follow from it.
// steady takes both out, so that the same drawing gives the same bytes.

var (
	created   = regexp.MustCompile(`/CreationDate\(D:\d{14}(Z|[+-]\d{4})\)`)
	startXref = regexp.MustCompile(`startxref\n(\d+)\n%%EOF\n$`)
	entry     = regexp.MustCompile(`(?m)^(\d{10}) 00000 n $`)
	stream    = regexp.MustCompile(`/Length (\d+)>>stream\n`)
)

var errOddPDF = errors.New("press: the PDF is not written as expected")

// steady rewrites a PDF of package canvas, object by object, with a new table of
// their places.
func steady(file []byte) ([]byte, error) {
	m := startXref.FindSubmatch(file)
	if m == nil {
		return nil, errOddPDF
	}
	table, _ := strconv.Atoi(string(m[1]))
	if table > len(file) {
		return nil, errOddPDF
	}
	trailer := bytes.Index(file[table:], []byte("trailer\n"))
	if trailer < 0 {
		return nil, errOddPDF
	}
	var places []int // by object, from 1
	for _, e := range entry.FindAllSubmatch(file[table:table+trailer], -1) {
		at, _ := strconv.Atoi(string(e[1]))
		places = append(places, at)
	}
	order := slices.Clone(places)
	slices.Sort(order)
	if len(order) == 0 || order[len(order)-1] >= table {
		return nil, errOddPDF
	}
	out := bytes.NewBuffer(append([]byte(nil), file[:order[0]]...))
	for i, at := range order {
		end := table
		if i+1 < len(order) {
			end = order[i+1]
		}
		places[slices.Index(places, at)] = out.Len()
		object, err := timeless(file[at:end])
		if err != nil {
			return nil, err
		}
		out.Write(object)
	}
	start := out.Len()
	fmt.Fprintf(out, "xref\n0 %d\n0000000000 65535 f \n", len(places)+1)
	for _, at := range places {
		fmt.Fprintf(out, "%010d 00000 n \n", at)
	}
	out.Write(startXref.ReplaceAll(file[table+trailer:], []byte(fmt.Sprintf("startxref\n%d\n%%%%EOF\n", start))))
	return out.Bytes(), nil
}

// timeless is an object without the time it was made at.
func timeless(object []byte) ([]byte, error) {
	at := stream.FindSubmatchIndex(object)
	if at == nil {
		return created.ReplaceAll(object, []byte("/CreationDate(D:20000101000000Z)")), nil
	}
	n, _ := strconv.Atoi(string(object[at[2]:at[3]]))
	if at[1]+n > len(object) {
		return nil, errOddPDF
	}
	z, err := zlib.NewReader(bytes.NewReader(object[at[1] : at[1]+n]))
	if err != nil {
		return object, nil // not compressed
	}
	font, err := io.ReadAll(z)
	if err != nil || !bytes.HasPrefix(font, []byte{0, 1, 0, 0}) {
		return object, err // a page, or a table of letters
	}
	if err := stopClock(font); err != nil {
		return nil, err
	}
	var b bytes.Buffer
	w := zlib.NewWriter(&b)
	w.Write(font)
	w.Close()
	return slices.Concat(object[:at[2]], []byte(strconv.Itoa(b.Len())), object[at[3]:at[1]], b.Bytes(), object[at[1]+n:]), nil
}

// stopClock sets the time at which a TrueType font was changed to the time at which
// it was made, and its checksums to fit (OpenType specification 1.9, "Organization
// of an OpenType font" and "head").
func stopClock(font []byte) error {
	if len(font) < 12 {
		return errOddPDF
	}
	tables := int(binary.BigEndian.Uint16(font[4:]))
	for i := range tables {
		record := 12 + 16*i
		if record+16 > len(font) {
			return errOddPDF
		}
		if string(font[record:record+4]) != "head" {
			continue
		}
		at, n := int(binary.BigEndian.Uint32(font[record+8:])), int(binary.BigEndian.Uint32(font[record+12:]))
		if n < 54 || at+(n+3)&^3 > len(font) {
			return errOddPDF
		}
		head := font[at : at+(n+3)&^3]
		copy(head[28:36], head[20:28])
		binary.BigEndian.PutUint32(head[8:], 0)
		binary.BigEndian.PutUint32(font[record+4:], checksum(head))
		binary.BigEndian.PutUint32(head[8:], 0xB1B0AFBA-checksum(font))
		return nil
	}
	return errOddPDF
}

// checksum adds up big-endian words.
func checksum(b []byte) uint32 {
	sum := uint32(0)
	for ; len(b) >= 4; b = b[4:] {
		sum += binary.BigEndian.Uint32(b)
	}
	return sum
}
