//go:build !linux

package ledger

import "errors"

func mountTmpfs(string, string, bool) error { return errors.ErrUnsupported }

func unmount(string) error { return nil }
