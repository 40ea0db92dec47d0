// Package link carries a whole plan in the fragment of a web address: JSON, deflated
// with a checksum (zlib, RFC 1950), base64url without padding (RFC 4648, section 5).
// A fragment never reaches a server. The page has the same code in site/model/link.js;
// the tests read each other's.
//
// It stands apart from package plan so that the page's engine does not carry a
// compressor that the browser already has.
package link

import (
	"bytes"
	"compress/zlib"
	"encoding/base64"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"strings"

	"escapement/engine/plan"
)

// Prefix stands before the plan in a fragment.
const Prefix = "#plan="

// MaxBytes is the largest plan that a link unpacks to. A few kilobytes of a hostile
// link could unpack to gigabytes.
const MaxBytes = 1 << 20

const letters = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789-_"

// Encode is the fragment of a plan, from "#" on.
func Encode(p *plan.Plan) (string, error) {
	var text bytes.Buffer
	if err := json.Compact(&text, p.Encode()); err != nil {
		return "", err
	}
	if text.Len() > MaxBytes {
		return "", fmt.Errorf("a plan of %d bytes is too large for a link; allowed: up to %d", text.Len(), MaxBytes)
	}
	var packed bytes.Buffer
	z, err := zlib.NewWriterLevel(&packed, zlib.BestCompression)
	if err != nil {
		return "", err
	}
	if _, err := z.Write(text.Bytes()); err != nil {
		return "", err
	}
	if err := z.Close(); err != nil {
		return "", err
	}
	return Prefix + base64.RawURLEncoding.EncodeToString(packed.Bytes()), nil
}

// Is tells whether a text is meant as a link: a fragment, or an address with one.
func Is(text string) bool { return strings.Contains(text, Prefix) }

// Decode reads the plan in a fragment or in an address with one. The error, a
// [plan.Diagnoses], tells what is wrong with the link or with the plan in it.
func Decode(text string) (*plan.Plan, error) {
	data, err := Text(text)
	if err != nil {
		return nil, err
	}
	return plan.Decode(data)
}

// Text is the plan file in a fragment or in an address with one, unread.
func Text(text string) ([]byte, error) {
	_, body, ok := strings.Cut(text, Prefix)
	if !ok {
		return nil, wrong("no plan", "an address that goes on with "+Prefix+" and the plan")
	}
	if body == "" {
		return nil, wrong("nothing after "+Prefix, "a plan")
	}
	if i := strings.IndexFunc(body, func(r rune) bool { return !strings.ContainsRune(letters, r) }); i >= 0 {
		return nil, wrong(fmt.Sprintf("%q at place %d", []rune(body[i:])[0], i+1), "letters, digits, - and _")
	}
	packed, err := base64.RawURLEncoding.DecodeString(body)
	if err != nil {
		return nil, wrong(fmt.Sprintf("%d letters, which no text is packed to", len(body)), "a link that is whole")
	}
	rest := bytes.NewReader(packed)
	z, err := zlib.NewReader(rest)
	if err != nil {
		return nil, damaged()
	}
	data, err := io.ReadAll(io.LimitReader(z, MaxBytes+1))
	if len(data) > MaxBytes {
		return nil, wrong(fmt.Sprintf("a plan of more than %d bytes", MaxBytes), fmt.Sprintf("up to %d bytes", MaxBytes))
	}
	if err != nil || rest.Len() > 0 {
		return nil, damaged()
	}
	return data, nil
}

func damaged() error {
	return wrong("a plan that is cut off or changed on its way", "a link that is whole")
}

func wrong(found, allowed string) error {
	return plan.Diagnoses{{Path: "link", Found: found, Allowed: allowed}}
}

// IsDamage tells whether an error is about a link and not about the plan in it.
func IsDamage(err error) bool {
	var ds plan.Diagnoses
	return errors.As(err, &ds) && len(ds) == 1 && ds[0].Path == "link"
}
