// Checks what a caller saw against what must have happened: each event is answered exactly once,
// in order, with the bits of a run that was never interrupted.
#pragma once

#include <atomic>
#include <chrono>
#include <condition_variable>
#include <functional>
#include <mutex>
#include <string>
#include <vector>

#include "kinegate/judge_stream.h"
#include "sample.h"

namespace kinegate::testing {

// Record is all that a verdict says on an event: equal strings are equal bits.
std::string Record(const Verdicts& verdicts, std::size_t event);

// History knows the bits of a sample's events, whatever blocks they come in.
class History {
 public:
  // Learns from an uninterrupted stream.
  History(const std::string& address, const v1::JudgeOpen& open, const Sample& sample);

  // Run is a run of the sample's events through a stream, in blocks.
  struct Run {
    std::size_t per_block = 100;
    int rounds = 1;  // how often the sample is sent
    // Sends the sample over and over until this is set, and once more after it.
    const std::atomic<bool>* over = nullptr;
    std::chrono::milliseconds pause{0};       // between blocks
    std::function<void(std::size_t)> before;  // called before each block with its number
    JudgeOptions options;
  };
  // Outcome is what was seen in a run.
  struct Outcome {
    std::vector<std::string> faults;  // what was wrong; empty for a true history
    std::int64_t breaks = 0;
    std::chrono::milliseconds longest_gap{0};  // without a verdict
    std::chrono::milliseconds noticed{0};      // from the last Mark to the first break after it
  };
  Outcome Check(const std::string& address, const v1::JudgeOpen& open, Run run);
  // Mark notes the time at which something was broken.
  void Mark();
  // Back waits until a block that is pushed from now on has its verdict, and says how long that took.
  // Not for ever: half a minute says that it never came.
  std::chrono::milliseconds Back();

  // Answered checks one verdict block that answers events [first, first + count) and was due
  // as number `sequence`; returns what is wrong, empty for nothing.
  std::string Answered(const Verdicts& verdicts, std::int64_t sequence, std::size_t first,
                       std::size_t count) const;

 private:
  const Sample& sample_;
  std::vector<std::string> reference_;  // of each event
  std::mutex mutex_;                    // guards what follows
  std::condition_variable answers_;
  std::size_t pushed_ = 0, answered_ = 0;  // blocks of the run
  std::chrono::steady_clock::time_point marked_{};
  bool waiting_ = false;
};

}  // namespace kinegate::testing
