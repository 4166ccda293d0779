package main

import (
	"slices"
	"sync"
)

// fileList is a set of paths that several runs at once add to.
type fileList struct {
	mutex sync.Mutex
	paths []string
}

func (l *fileList) add(path string) {
	l.mutex.Lock()
	defer l.mutex.Unlock()
	if k, there := slices.BinarySearch(l.paths, path); !there {
		l.paths = slices.Insert(l.paths, k, path)
	}
}

// list is the paths in order.
func (l *fileList) list() []string {
	l.mutex.Lock()
	defer l.mutex.Unlock()
	return slices.Clone(l.paths)
}
