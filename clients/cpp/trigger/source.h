// Where the events of a trigger node come from.
#pragma once

#include <chrono>
#include <cstddef>
#include <memory>
#include <string>
#include <vector>

#include "blockfile.h"
#include "kinegate/events.h"

namespace kinegate::trigger {

using Clock = std::chrono::steady_clock;

// Batch is a run of events that arrived, in arrays of the source, which stay until the next Take.
struct Batch {
  EventArrays arrays;
  std::size_t first = 0, count = 0;
  std::vector<Clock::time_point> arrived;  // of each event
};

// Source hands out events as they arrive.
class Source {
 public:
  virtual ~Source() = default;
  // Take waits until `most` events have arrived, or until the oldest has waited for `gather`, and
  // hands them out; false at the end.
  virtual bool Take(std::size_t most, std::chrono::microseconds gather, Batch* batch) = 0;
  // lost_count is how many events the source could not keep.
  virtual std::int64_t lost_count() const { return 0; }
};

// FromFile repeats the events of a file at a rate, as many as come in a time.
std::unique_ptr<Source> FromFile(const std::string& name, double rate_hz, std::chrono::seconds time);
// FromRing takes events from a ring in shared memory until its writer finishes.
std::unique_ptr<Source> FromRing(const std::string& name);

}  // namespace kinegate::trigger
