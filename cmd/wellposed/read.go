package main

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"

	"wellposed/parser"
)

// readModel reads a model file, or standard input for "-". The name is what the
// findings call it.
func readModel(stdin io.Reader, path, stdinName string) (raw []byte, name string, err error) {
	if path == "-" {
		name = stdinName
		if name == "" {
			name = "standard input"
		}
		raw, err = limited(stdin)
		return raw, name, err
	}
	info, err := os.Stat(path)
	if err != nil {
		return nil, path, plainError(err)
	}
	if info.IsDir() {
		return nil, path, errors.New("this is a folder")
	}
	if info.Size() > parser.MaxText {
		return nil, path, tooLarge(info.Size())
	}
	f, err := os.Open(path)
	if err != nil {
		return nil, path, plainError(err)
	}
	defer f.Close()
	raw, err = limited(f)
	return raw, path, err
}

// limited reads to the end, but not beyond the bound: a pipe has no size.
func limited(r io.Reader) ([]byte, error) {
	raw, err := io.ReadAll(io.LimitReader(r, parser.MaxText+1))
	if err != nil {
		return nil, plainError(err)
	}
	if len(raw) > parser.MaxText {
		return nil, tooLarge(int64(len(raw)))
	}
	return raw, nil
}

func tooLarge(size int64) error {
	return fmt.Errorf("the file has %d MB or more; a model file may have %d MB (data belong in a table)", max(size>>20, parser.MaxText>>20), parser.MaxText>>20)
}

// plainError drops the operation and the path, which are said elsewhere.
func plainError(err error) error {
	var p *fs.PathError
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return errors.New("no such file")
	case errors.Is(err, fs.ErrPermission):
		return errors.New("no permission to read it")
	case errors.As(err, &p):
		return p.Err
	}
	return err
}
