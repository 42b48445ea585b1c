package ledger

import "syscall"

func mountTmpfs(dir, options string, readOnly bool) error {
	var flags uintptr
	if readOnly {
		flags = syscall.MS_REMOUNT | syscall.MS_RDONLY
	}
	return syscall.Mount("tmpfs", dir, "tmpfs", flags, options)
}

func unmount(dir string) error { return syscall.Unmount(dir, 0) }
