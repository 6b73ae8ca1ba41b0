package survey

import (
	"bufio"
	"bytes"
	"compress/gzip"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"hash"
	"io"
	"unicode/utf8"

	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
	"golang.org/x/text/transform"
)

// headSize is how much of a file is looked at before anything is decided.
const headSize = 64 << 10

// source is an input as UTF-8 text with what was found out about its bytes.
type source struct {
	text     *bufio.Reader
	sum      hash.Hash
	raw      io.Reader // the bytes as received, through the hash
	encoding string
	guesses  []Guess
}

// hashed is the SHA-256 of all bytes as received; what is left unread is read first.
func (s *source) hashed() (string, error) {
	if _, err := io.Copy(io.Discard, s.raw); err != nil {
		return "", err
	}
	return hex.EncodeToString(s.sum.Sum(nil)), nil
}

// open finds compression and encoding and returns the text.
func open(r io.Reader, name, encoding string) (*source, error) {
	s := &source{sum: sha256.New()}
	s.raw = io.TeeReader(r, s.sum)
	in := bufio.NewReaderSize(s.raw, headSize)
	if magic, _ := in.Peek(2); bytes.Equal(magic, []byte{0x1f, 0x8b}) {
		z, err := gzip.NewReader(in)
		if err != nil {
			return nil, fmt.Errorf("%s: cannot unpack: %w", name, err)
		}
		in = bufio.NewReaderSize(z, headSize)
	}
	head, err := in.Peek(headSize)
	if err != nil && err != io.EOF {
		return nil, fmt.Errorf("%s: cannot read: %w", name, err)
	}
	if len(head) == 0 {
		return nil, &InputError{Problems: []Problem{{File: name, Expected: "a survey or a table", Mend: "the file is empty"}}}
	}
	if encoding == "" {
		encoding, s.guesses = guessEncoding(head)
	}
	s.encoding = encoding
	switch encoding {
	case "utf-8":
		if bytes.HasPrefix(head, []byte("\xef\xbb\xbf")) {
			in.Discard(3)
		}
		if i := bytes.IndexByte(head, 0); i >= 0 {
			return nil, &InputError{Problems: []Problem{{File: name, Line: 1 + bytes.Count(head[:i], []byte("\n")), Expected: "text",
				Mend: "the file holds NUL bytes: it is not a text file, or it is UTF-16 without a mark (say --encoding utf-16le)"}}}
		}
		s.text = in
	case "utf-16le", "utf-16be":
		order := unicode.LittleEndian
		if encoding == "utf-16be" {
			order = unicode.BigEndian
		}
		s.text = bufio.NewReaderSize(transform.NewReader(in, unicode.UTF16(order, unicode.UseBOM).NewDecoder()), headSize)
	case "windows-1252":
		s.text = bufio.NewReaderSize(charmap.Windows1252.NewDecoder().Reader(in), headSize)
	default:
		return nil, fmt.Errorf("%s: unknown encoding %s, expected utf-8, utf-16le, utf-16be or windows-1252", name, quote(encoding))
	}
	return s, nil
}

// guessEncoding goes by the byte-order mark, then by whether the head is valid UTF-8.
func guessEncoding(head []byte) (string, []Guess) {
	switch {
	case bytes.HasPrefix(head, []byte{0xff, 0xfe}):
		return "utf-16le", nil
	case bytes.HasPrefix(head, []byte{0xfe, 0xff}):
		return "utf-16be", nil
	case bytes.HasPrefix(head, []byte("\xef\xbb\xbf")), validHead(head):
		return "utf-8", nil
	}
	return "windows-1252", []Guess{{What: "encoding", Taken: "windows-1252", Why: "the bytes are not UTF-8 and there is no byte-order mark", SetBy: "--encoding"}}
}

// validHead is UTF-8 validity of a head that may end inside a character.
func validHead(head []byte) bool {
	if len(head) == headSize {
		for cut := 0; cut < utf8.UTFMax; cut++ {
			if utf8.Valid(head[:len(head)-cut]) {
				return true
			}
		}
		return false
	}
	return utf8.Valid(head)
}
