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

constexpr double kMostRate = 1e9;     // of events a second
constexpr double kMostSeconds = 1e6;  // of a run

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
  // left_out_count is how many objects and beam candidates the source had no room for.
  virtual std::int64_t left_out_count() const { return 0; }
  // fault is why the end came too early; empty for a good end.
  virtual std::string fault() const { return ""; }
};

// FromFile repeats the events of a file at a rate, as many as come in a time.
std::unique_ptr<Source> FromFile(const std::string& name, double rate_hz, std::chrono::duration<double> time);
// FromRing takes events from a ring in shared memory until its writer finishes, or has been silent
// for a time, which is a fault.
std::unique_ptr<Source> FromRing(const std::string& name, std::chrono::duration<double> silence);

}  // namespace kinegate::trigger
