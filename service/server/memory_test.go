package server

import (
	"os"
	"testing"
)

func TestGroupMemory(t *testing.T) {
	for name, c := range map[string]struct {
		membership string
		files      map[string]string
		want       Bytes
	}{
		"no groups": {"", nil, 0},
		"a container of version 2": {
			"0::/\n", map[string]string{"/sys/fs/cgroup/memory.max": "268435456\n"}, 256 * mebi,
		},
		"no limit": {"0::/\n", map[string]string{"/sys/fs/cgroup/memory.max": "max\n"}, 0},
		"the least up to the root": {
			"0::/a/b\n",
			map[string]string{"/sys/fs/cgroup/a/b/memory.max": "max\n", "/sys/fs/cgroup/a/memory.max": "1073741824\n"},
			gibi,
		},
		"version 1": {
			"9:name=systemd:/\n4:memory:/x\n0::/\n",
			map[string]string{
				"/sys/fs/cgroup/memory/x/memory.limit_in_bytes": "536870912\n",
				"/sys/fs/cgroup/memory/memory.limit_in_bytes":   "9223372036854771712\n",
			},
			512 * mebi,
		},
		"garbage": {"x\n0::/\n", map[string]string{"/sys/fs/cgroup/memory.max": "much\n"}, 0},
	} {
		t.Run(name, func(t *testing.T) {
			read := func(path string) ([]byte, error) {
				if text, ok := c.files[path]; ok {
					return []byte(text), nil
				}
				return nil, os.ErrNotExist
			}
			if got := groupMemory(read, c.membership); got != c.want {
				t.Errorf("got %s, want %s", got, c.want)
			}
		})
	}
	o := Options{MemoryLimit: 1000}
	if got := o.HeapLimit(); got != 900 {
		t.Errorf("heap limit %d", got)
	}
}
