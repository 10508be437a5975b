package scenarios

import (
	"os"
	"syscall"
	"unsafe"
)

const madviseHugepage = 14 // MADV_HUGEPAGE of Linux, on every architecture

// adviseHuge marks the whole pages of s. It is advice: a refusal is no fault.
func adviseHuge[T any](s []T) {
	page := uintptr(os.Getpagesize())
	start := uintptr(unsafe.Pointer(unsafe.SliceData(s)))
	size := uintptr(len(s)) * unsafe.Sizeof(s[0])
	skip := (page - start%page) % page
	if size < skip+page {
		return
	}
	whole := unsafe.Slice((*byte)(unsafe.Pointer(unsafe.SliceData(s))), size)[skip:]
	_ = syscall.Madvise(whole[:uintptr(len(whole))/page*page], madviseHugepage)
}
