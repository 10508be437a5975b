//go:build !linux

package scenarios

func adviseHuge[T any]([]T) {}
