package config

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
)

// MaxBytes bounds the size of a configuration file.
const MaxBytes = 1 << 20

// Find looks for the nearest file, from a folder upwards. It returns "" when
// there is none, and the folders that it looked into, nearest first.
func Find(folder string) (file string, looked []string, err error) {
	folder, err = filepath.Abs(folder)
	if err != nil {
		return "", nil, err
	}
	for {
		looked = append(looked, folder)
		candidate := filepath.Join(folder, Name)
		info, err := os.Stat(candidate)
		switch {
		case err == nil && info.Mode().IsRegular():
			return candidate, looked, nil
		case err != nil && !errors.Is(err, fs.ErrNotExist) && !errors.Is(err, fs.ErrPermission):
			return "", looked, err
		}
		parent := filepath.Dir(folder)
		if parent == folder {
			return "", looked, nil
		}
		folder = parent
	}
}
