package server

import (
	"os"
	"path"
	"strconv"
	"strings"
)

// controlGroups is where the limits of control groups are found.
const controlGroups = "/sys/fs/cgroup"

// adoptMemoryLimit takes the limit of the control group where memory_limit is 0, so
// that the sizes are checked against what the process really has.
func (o *Options) adoptMemoryLimit() {
	if o.MemoryLimit == 0 {
		membership, _ := os.ReadFile("/proc/self/cgroup") // none where there are no control groups
		o.MemoryLimit = groupMemory(os.ReadFile, string(membership))
	}
}

// HeapLimit is what the runtime should keep the process's memory to: a tenth below the
// limit, for what it does not count itself. It is 0 where there is no limit.
func (o *Options) HeapLimit() int64 {
	const part, whole = 9, 10
	own := *o
	own.adoptMemoryLimit()
	return int64(own.MemoryLimit) / whole * part
}

// groupMemory is the least memory limit of the control groups of a process, of either
// version, from its own up to the root; 0 for none. A container sees its own group as
// the root.
func groupMemory(read func(string) ([]byte, error), membership string) Bytes {
	least := Bytes(0)
	limit := func(file string) {
		data, err := read(file)
		if err != nil {
			return
		}
		// The first version writes a huge number for no limit, the second "max".
		n, err := strconv.ParseInt(strings.TrimSpace(string(data)), 10, 64)
		if err == nil && n > 0 && n < 1<<60 && (least == 0 || Bytes(n) < least) {
			least = Bytes(n)
		}
	}
	for line := range strings.Lines(membership) {
		fields := strings.SplitN(strings.TrimSpace(line), ":", 3)
		if len(fields) != 3 {
			continue
		}
		for group := path.Clean("/" + fields[2]); ; group = path.Dir(group) {
			switch fields[1] {
			case "":
				limit(path.Join(controlGroups, group, "memory.max"))
			case "memory":
				limit(path.Join(controlGroups, "memory", group, "memory.limit_in_bytes"))
			}
			if group == "/" {
				break
			}
		}
	}
	return least
}
