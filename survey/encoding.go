package survey

import (
	"bufio"
	"bytes"
	"compress/flate"
	"compress/gzip"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io"
	"strings"
	"unicode/utf8"

	"github.com/klauspost/compress/zstd"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
	"golang.org/x/text/transform"
)

// headSize is how much of a file is looked at before anything is decided.
const headSize = 64 << 10

// zstdMagic are the first bytes of a zstd frame (RFC 8878, 3.1.1), and zstdWindow the largest window that is taken, bytes: the
// least upper limit that the standard recommends is 8 MiB, and the usual packers stay below this one.
const (
	zstdMagic  = "\x28\xb5\x2f\xfd"
	zstdWindow = 128 << 20
)

// source is an input as UTF-8 text with what was found out about its bytes.
type source struct {
	text     *bufio.Reader
	sum      hash.Hash
	raw      io.Reader // the bytes as received, through the hash
	encoding string
	guesses  []Guess
	close    func() // frees what unpacking holds, nil when there is nothing
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
	if err := noText(in, name); err != nil {
		return nil, err
	}
	if magic, _ := in.Peek(2); bytes.Equal(magic, []byte{0x1f, 0x8b}) {
		z, err := gzip.NewReader(in)
		if err != nil {
			return nil, &InputError{Problems: []Problem{{File: name, Line: 1, Expected: "a gzip file", Mend: "it looks cut off or damaged: fetch it again"}}}
		}
		in = bufio.NewReaderSize(z, headSize)
	} else if magic, _ := in.Peek(len(zstdMagic)); string(magic) == zstdMagic {
		z, err := zstd.NewReader(in, zstd.WithDecoderConcurrency(1), zstd.WithDecoderMaxWindow(zstdWindow))
		if err != nil {
			return nil, fmt.Errorf("%s: cannot read zstd: %w", name, err)
		}
		s.close = z.Close
		in = bufio.NewReaderSize(z, headSize)
	}
	head, err := in.Peek(headSize)
	if cutShort(err) && len(head) == 0 {
		return nil, &InputError{Problems: []Problem{{File: name, Line: 1, Expected: "the rest of the compressed file", Mend: "it looks cut off or damaged: fetch it again"}}}
	}
	if cutShort(err) {
		err = io.EOF // the reader of the rows tells it, with the line
	}
	if err != nil && err != io.EOF {
		return nil, fmt.Errorf("%s: cannot read: %w", name, err)
	}
	if len(head) == 0 {
		return nil, &InputError{Problems: []Problem{{File: name, Expected: "a survey or a table", Mend: "the file is empty"}}}
	}
	encoding = strings.ToLower(encoding)
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

// binaries are the first bytes of files that are often handed over in place of a text, and what to do about each.
var binaries = []struct{ magic, what, mend string }{
	{"PK\x03\x04", "a zip archive or a spreadsheet", "save the sheet as CSV, or unpack the archive"},
	{"\xd0\xcf\x11\xe0", "an old spreadsheet or document", "save the sheet as CSV"},
	{"%PDF", "a PDF", "ask for the table as CSV"},
	{"LASF", "a laser point file", "export the points as CSV"},
}

// noText refuses well-known binary files by name.
func noText(in *bufio.Reader, name string) error {
	for _, b := range binaries {
		if head, _ := in.Peek(len(b.magic)); string(head) == b.magic {
			return &InputError{Problems: []Problem{{File: name, Line: 1, Found: b.what, Expected: "text", Mend: b.mend}}}
		}
	}
	return nil
}

// cutShort reports whether an error is that of a compressed file that ends too early or is damaged.
func cutShort(err error) bool {
	var corrupt flate.CorruptInputError
	for _, damaged := range []error{zstd.ErrCRCMismatch, zstd.ErrMagicMismatch, zstd.ErrWindowSizeExceeded, zstd.ErrReservedBlockType, zstd.ErrCompressedSizeTooBig,
		zstd.ErrBlockTooSmall, zstd.ErrUnexpectedBlockSize, zstd.ErrFrameSizeMismatch, zstd.ErrFrameSizeExceeded, zstd.ErrDecoderSizeExceeded} {
		if errors.Is(err, damaged) {
			return true
		}
	}
	return errors.Is(err, io.ErrUnexpectedEOF) || errors.Is(err, gzip.ErrChecksum) || errors.Is(err, gzip.ErrHeader) || errors.As(err, &corrupt)
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
