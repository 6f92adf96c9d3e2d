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

// Add adds the bits of a value.
template <typename T>
void Add(std::string* record, T value) {
  char bytes[sizeof value];
  std::memcpy(bytes, &value, sizeof value);
  record->append(bytes, sizeof value);
}

// Add adds values with their number.
template <typename T>
void Add(std::string* record, const std::vector<T>& values) {
  Add(record, values.size());
  for (const T value : values) Add(record, value);
}

}  // namespace

std::string Record(const Verdicts& verdicts, std::size_t event) {
  std::string record;
  Add(&record, verdicts.status(event));
  Add(&record, verdicts.gate(event));
  for (int h = 0; h < verdicts.block().hypotheses_size(); ++h) Add(&record, verdicts.accepted(h, event));
  for (int g = 0; g < verdicts.block().groups_size(); ++g) Add(&record, verdicts.best(g, event));
  for (const Entry& entry : verdicts.entries(event)) {
    Add(&record, entry.hypothesis);
    Add(&record, entry.beam_row);
    Add(&record, entry.weight);
    Add(&record, entry.status);
    Add(&record, entry.assignment_count);
    Add(&record, entry.assignment);
    Add(&record, entry.observables);
    Add(&record, entry.uncertainties);
    Add(&record, entry.fit.has_value());
    if (!entry.fit) continue;
    Add(&record, entry.fit->status);
    Add(&record, entry.fit->chi_square);
    Add(&record, entry.fit->degrees_of_freedom);
    Add(&record, entry.fit->probability);
    Add(&record, entry.fit->iteration_count);
  }
  return record;
}

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

milliseconds History::Back() {
  constexpr std::chrono::seconds kLongest{30};
  const auto begun = Clock::now();
  std::unique_lock lock(mutex_);
  const std::size_t next = pushed_;
  answers_.wait_for(lock, kLongest, [&] { return answered_ > next; });
  return std::chrono::duration_cast<milliseconds>(Clock::now() - begun);
}

History::Outcome History::Check(const std::string& address, const v1::JudgeOpen& open, Run run) {
  Outcome outcome;
  {
    const std::lock_guard lock(mutex_);
    pushed_ = answered_ = 0;
  }
  run.options.on_break = [this, &outcome](const Error&) {
    const std::lock_guard lock(mutex_);
    if (!std::exchange(waiting_, false)) return;
    outcome.noticed = std::chrono::duration_cast<milliseconds>(Clock::now() - marked_);
  };
  JudgeStream stream(Gate(address), open, run.options);
  auto last = Clock::now();
  std::int64_t due = open.first_sequence();
  // Handlers run one after the other on one thread, and Finish comes after the last.
  const auto push = [&](std::size_t first, std::size_t count) {
    stream.Push(MakeBlock(sample_.arrays(), first, count), [&, first, count](const Verdicts& verdicts) {
      const auto now = Clock::now();
      outcome.longest_gap =
          std::max(outcome.longest_gap, std::chrono::duration_cast<milliseconds>(now - last));
      last = now;
      std::string fault = Answered(verdicts, due++, first, count);
      if (!fault.empty()) outcome.faults.push_back(std::move(fault));
      const std::lock_guard lock(mutex_);
      ++answered_;
      answers_.notify_all();
    });
    const std::lock_guard lock(mutex_);
    ++pushed_;
  };
  try {
    bool done = false;
    for (int round = 0; !done; ++round) {
      done = run.over != nullptr ? run.over->load() : round + 1 == run.rounds;
      for (std::size_t first = 0; first < sample_.ids.size(); first += run.per_block) {
        if (run.before) run.before(pushed_);
        push(first, std::min(run.per_block, sample_.ids.size() - first));
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
  if (answered_ != pushed_) {
    outcome.faults.push_back(std::to_string(answered_) + " of " + std::to_string(pushed_) +
                             " blocks were answered");
  }
  outcome.breaks = stream.break_count();
  return outcome;
}

}  // namespace kinegate::testing
