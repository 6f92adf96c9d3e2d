#include "history.h"

#include <algorithm>
#include <cstring>
#include <mutex>
#include <thread>
#include <utility>

namespace kinegate::testing {
namespace {

using Clock = std::chrono::steady_clock;
using std::chrono::milliseconds;

// Record is all that a verdict says on an event: equal strings are equal bits.
std::string Record(const Verdicts& verdicts, std::size_t event) {
  std::string record{static_cast<char>(verdicts.status(event)), verdicts.gate(event) ? '1' : '0'};
  for (int h = 0; h < verdicts.block().hypotheses_size(); ++h)
    record += verdicts.accepted(h, event) ? '1' : '0';
  for (const Entry& entry : verdicts.entries(event)) {
    record += "/" + std::to_string(entry.hypothesis) + "," + std::to_string(entry.beam_row) + "," +
              std::to_string(entry.status);
    for (std::int16_t object : entry.assignment) record += "," + std::to_string(object);
    for (double value : entry.observables) {
      char bytes[sizeof value];
      std::memcpy(bytes, &value, sizeof value);
      record.append(bytes, sizeof value);
    }
  }
  return record;
}

}  // namespace

History::History(const std::string& address, const v1::JudgeOpen& open, const Sample& sample)
    : sample_(sample) {
  constexpr std::size_t kPerBlock = 311;  // a size that no test uses
  JudgeStream stream(Gate(address), open);
  for (std::size_t first = 0; first < sample.ids.size(); first += kPerBlock) {
    const std::size_t count = std::min(kPerBlock, sample.ids.size() - first);
    const Verdicts verdicts = stream.Push(MakeBlock(sample.arrays(), first, count)).get();
    for (std::size_t i = 0; i < verdicts.event_count(); ++i) reference_.push_back(Record(verdicts, i));
  }
  stream.Finish();
}

std::string History::Answered(const Verdicts& verdicts, std::int64_t sequence, std::size_t first,
                              std::size_t count) const {
  const std::string block = "block " + std::to_string(sequence);
  if (verdicts.sequence() != sequence)
    return block + " was due, " + std::to_string(verdicts.sequence()) + " came";
  if (verdicts.event_count() != count)
    return block + " has " + std::to_string(verdicts.event_count()) + " events";
  for (std::size_t i = 0; i < count; ++i) {
    if (Record(verdicts, i) != reference_[first + i])
      return block + " has other bits in event " + std::to_string(i);
  }
  return "";
}

void History::Mark() {
  const std::lock_guard lock(mutex_);
  marked_ = Clock::now();
  waiting_ = true;
}

History::Outcome History::Check(const std::string& address, const v1::JudgeOpen& open, Run run) {
  Outcome outcome;
  run.options.on_break = [this, &outcome](const Error&) {
    const std::lock_guard lock(mutex_);
    if (!std::exchange(waiting_, false)) return;
    outcome.noticed = std::chrono::duration_cast<milliseconds>(Clock::now() - marked_);
  };
  JudgeStream stream(Gate(address), open, run.options);
  auto last = Clock::now();
  std::int64_t due = open.first_sequence();
  std::size_t pushed = 0;
  // Handlers run one after the other on one thread, and Finish comes after the last.
  const auto push = [&](std::size_t first, std::size_t count) {
    stream.Push(MakeBlock(sample_.arrays(), first, count), [&, first, count](const Verdicts& verdicts) {
      const auto now = Clock::now();
      outcome.longest_gap =
          std::max(outcome.longest_gap, std::chrono::duration_cast<milliseconds>(now - last));
      last = now;
      std::string fault = Answered(verdicts, due++, first, count);
      if (!fault.empty()) outcome.faults.push_back(std::move(fault));
    });
  };
  try {
    bool done = false;
    for (int round = 0; !done; ++round) {
      done = run.over != nullptr ? run.over->load() : round + 1 == run.rounds;
      for (std::size_t first = 0; first < sample_.ids.size(); first += run.per_block) {
        if (run.before) run.before(pushed);
        push(first, std::min(run.per_block, sample_.ids.size() - first));
        ++pushed;
        if (run.pause.count() > 0) std::this_thread::sleep_for(run.pause);
      }
    }
    stream.Finish();
  } catch (const Error& error) {
    stream.Close();
    try {
      stream.Finish();
    } catch (const Error&) {  // NOLINT: the first reason tells
    }
    outcome.faults.push_back(std::string("the stream ended: ") + error.what());
  }
  if (due - open.first_sequence() != static_cast<std::int64_t>(pushed)) {
    outcome.faults.push_back(std::to_string(due - open.first_sequence()) + " of " + std::to_string(pushed) +
                             " blocks were answered");
  }
  outcome.breaks = stream.break_count();
  return outcome;
}

}  // namespace kinegate::testing
