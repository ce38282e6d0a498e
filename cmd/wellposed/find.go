package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"sort"
	"strings"
)

// extension ends the names of model files.
const extension = ".bayes"

// findModels turns arguments (files, folders, globs) into model paths: each
// once, those of an argument in order of name. Folders are searched for model
// files, leaving out those that begin with a dot. An argument that leads to no
// model is an error; the rest is found nevertheless.
func findModels(args []string) (paths []string, trouble []error) {
	seen := map[string]bool{}
	add := func(path string) {
		if key := filepath.Clean(path); !seen[key] {
			seen[key] = true
			paths = append(paths, path)
		}
	}
	for _, arg := range args {
		if arg == "-" {
			add(arg)
			continue
		}
		info, err := os.Stat(arg)
		switch {
		case err == nil && info.IsDir():
			found, err := modelsUnder(arg)
			if err != nil {
				trouble = append(trouble, err)
			}
			if len(found) == 0 && err == nil {
				trouble = append(trouble, fmt.Errorf("%s: no model file (*%s) in this folder", arg, extension))
			}
			for _, p := range found {
				add(p)
			}
		case err == nil:
			add(arg)
		case isGlob(arg) && errors.Is(err, fs.ErrNotExist):
			found, err := glob(arg)
			switch {
			case err != nil:
				trouble = append(trouble, fmt.Errorf("%s: %w", arg, err))
			case len(found) == 0:
				trouble = append(trouble, fmt.Errorf("%s: no file matches", arg))
			}
			for _, p := range found {
				add(p)
			}
		default:
			// Reading it will say why it can't be read.
			add(arg)
		}
	}
	return paths, trouble
}

// modelsUnder lists the model files of a folder and its subfolders.
func modelsUnder(root string) ([]string, error) {
	var found []string
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		switch {
		case err != nil:
			return err
		case d.IsDir() && path != root && strings.HasPrefix(d.Name(), "."):
			return filepath.SkipDir
		case !d.IsDir() && strings.HasSuffix(d.Name(), extension):
			found = append(found, path)
		}
		return nil
	})
	return found, err
}

func isGlob(s string) bool { return strings.ContainsAny(s, "*?[") }

// glob expands a pattern; ** stands for any number of folders.
func glob(pattern string) ([]string, error) {
	before, after, deep := strings.Cut(pattern, "**")
	if !deep {
		found, err := filepath.Glob(pattern)
		return filesOnly(found), err
	}
	after = strings.TrimLeft(after, `/\`)
	if strings.Contains(after, "**") {
		return nil, errors.New("a pattern may hold ** once")
	}
	root := filepath.Clean("./" + before)
	if filepath.IsAbs(before) {
		root = filepath.Clean(before)
	}
	if _, err := filepath.Match(after, ""); err != nil {
		return nil, err
	}
	parts := strings.Count(filepath.ToSlash(after), "/") + 1
	var found []string
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		if d.IsDir() {
			if path != root && strings.HasPrefix(d.Name(), ".") {
				return filepath.SkipDir
			}
			return nil
		}
		segments := strings.Split(filepath.ToSlash(path), "/")
		if len(segments) >= parts {
			tail := filepath.FromSlash(strings.Join(segments[len(segments)-parts:], "/"))
			if ok, _ := filepath.Match(filepath.FromSlash(after), tail); ok {
				found = append(found, path)
			}
		}
		return nil
	})
	if errors.Is(err, fs.ErrNotExist) {
		err = nil
	}
	return found, err
}

func filesOnly(paths []string) []string {
	var files []string
	for _, p := range paths {
		if info, err := os.Stat(p); err == nil && !info.IsDir() {
			files = append(files, p)
		}
	}
	sort.Strings(files)
	return files
}
