package model

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
)

// Loader reads the data files of a model.
type Loader interface {
	// Load returns the content of a data file. model is the path of the model
	// file, name the data file as the model writes it; path is where it was read.
	Load(model, name string) (content []byte, path string, err error)
}

// Disk reads data files relative to the model file.
type Disk struct {
	// Root, when set, is the folder that data files must not leave.
	Root string
	// MaxBytes bounds one file; 0 means MaxTableBytes.
	MaxBytes int64
}

// Load implements Loader. Pipes, devices and folders are refused, and a file
// that changes its size while it is read is an error.
func (d Disk) Load(model, name string) ([]byte, string, error) {
	path := name
	if !filepath.IsAbs(path) {
		path = filepath.Join(filepath.Dir(model), name)
	}
	if d.Root != "" {
		if err := within(d.Root, path); err != nil {
			return nil, path, err
		}
	}
	info, err := os.Stat(path)
	if err != nil {
		return nil, path, plain(err)
	}
	limit := d.MaxBytes
	if limit <= 0 {
		limit = MaxTableBytes
	}
	switch {
	case info.IsDir():
		return nil, path, errors.New("this is a folder")
	case !info.Mode().IsRegular():
		return nil, path, errors.New("this is no regular file; pipes and devices are not read")
	case info.Size() > limit:
		return nil, path, fmt.Errorf("the file has %d MB; at most %d MB are read", info.Size()>>20, limit>>20)
	}
	f, err := os.Open(path)
	if err != nil {
		return nil, path, plain(err)
	}
	defer f.Close()
	content := make([]byte, info.Size())
	if _, err := io.ReadFull(f, content); err != nil {
		return nil, path, errors.New("the file changed while it was read; check again")
	}
	if n, _ := f.Read(make([]byte, 1)); n > 0 {
		return nil, path, errors.New("the file changed while it was read; check again")
	}
	return content, path, nil
}

// within refuses a path that leaves a folder, links followed.
func within(root, path string) error {
	base, err := filepath.EvalSymlinks(root)
	if err != nil {
		return plain(err)
	}
	full, err := filepath.EvalSymlinks(path)
	if err != nil {
		return plain(err)
	}
	rel, err := filepath.Rel(base, full)
	if err != nil || rel == ".." || strings.HasPrefix(rel, ".."+string(filepath.Separator)) {
		return errors.New("the path leaves the workspace")
	}
	return nil
}

// plain drops the operation and the path from an error.
func plain(err error) error {
	var p *fs.PathError
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return errors.New("there is no such file")
	case errors.Is(err, fs.ErrPermission):
		return errors.New("there is no permission to read it")
	case errors.As(err, &p):
		return p.Err
	}
	return err
}

// Memory is a Loader over a map from names to contents.
type Memory map[string]string

// Load implements Loader.
func (m Memory) Load(_, name string) ([]byte, string, error) {
	content, ok := m[name]
	if !ok {
		return nil, name, errors.New("there is no such file")
	}
	return []byte(content), name, nil
}

// hash is the SHA-256 of a content with line ends normalised.
func hash(content string) string {
	if strings.IndexByte(content, '\r') >= 0 {
		content = strings.ReplaceAll(strings.ReplaceAll(content, "\r\n", "\n"), "\r", "\n")
	}
	sum := sha256.Sum256([]byte(content))
	return hex.EncodeToString(sum[:])
}
