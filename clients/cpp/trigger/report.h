// What a trigger node has seen.
#pragma once

#include <chrono>
#include <cstdint>
#include <ostream>
#include <string>
#include <vector>

#include "kinegate/verdicts.h"
#include "source.h"

namespace kinegate::trigger {

// Report gathers latencies, from the arrival of an event to its verdict in the node, and counts.
class Report {
 public:
  // Add takes the verdicts on events that arrived at given times.
  void Add(const Verdicts& verdicts, const std::vector<Clock::time_point>& arrived);
  // Print prints latency percentiles in microseconds, the counts, and why the first block that was
  // rejected was.
  void Print(std::ostream& out, const Source& source, std::int64_t breaks,
             std::chrono::duration<double> time);
  // rejected_blocks is how many blocks were rejected.
  std::int64_t rejected_blocks() const { return rejected_blocks_; }

 private:
  std::vector<double> latencies_;  // in us
  std::int64_t accepted_ = 0, late_ = 0, unsound_ = 0, rejected_blocks_ = 0, blocks_ = 0;
  std::string first_rejection_;
};

}  // namespace kinegate::trigger
