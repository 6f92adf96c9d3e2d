// Verdicts on one block of events, read from their columns.
#pragma once

#include <cstddef>
#include <cstdint>
#include <limits>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "kinegate/v1/fit.pb.h"
#include "kinegate/v1/selection.pb.h"
#include "kinegate/v1/verdict.pb.h"

namespace kinegate {

// Fit is the constrained fit of an entry's assignment.
struct Fit {
  v1::FitStatus status = v1::FIT_STATUS_UNSPECIFIED;  // how it ended; unspecified: the hypothesis has none
  double chi_square = kNone;                          // the minimum only where the fit converged
  int degrees_of_freedom = 0;                         // constraints less the unmeasured parameters
  double probability = kNone;  // of a larger chi-square; NaN unless converged with a degree of freedom
  int iteration_count = 0;     // steps

  static constexpr double kNone = std::numeric_limits<double>::quiet_NaN();
};

// Entry is one accepted, or possible, combination of event, hypothesis and beam candidate.
struct Entry {
  int hypothesis = 0;  // index in the selection
  int beam_row = -1;   // candidate within the event; -1: the hypothesis uses none
  double weight = 1;   // 1, or that of the candidate's time window
  v1::EntryStatus status = v1::ENTRY_STATUS_UNSPECIFIED;
  int assignment_count = 0;              // assignments tried for the hypothesis
  std::vector<std::int16_t> assignment;  // object of each product; -1: none stands for it
  std::vector<double> observables;       // recorded values; NaN: not computed
  std::vector<double> uncertainties;     // their standard deviations, NaN: none; empty: no hypothesis asks
  std::optional<Fit> fit;                // absent: no hypothesis of the selection has one
};

// Verdicts is a verdict block. It answers for the events of one event block, in their order. An
// index of an event, hypothesis or group that is out of range throws Error, which names it and how
// many there are.
class Verdicts {
 public:
  // Throws Error where the columns do not fit together.
  explicit Verdicts(v1::VerdictBlock block, std::shared_ptr<const v1::SelectionOutline> outline = nullptr);

  // sequence is that of the event block.
  std::int64_t sequence() const { return block_.sequence(); }
  // rejected says that the block as a whole was refused; rejection() says why, and there are
  // no events then.
  bool rejected() const { return block_.has_rejected(); }
  const v1::Rejection& rejection() const { return block_.rejected(); }
  // outline is that of the selection that judged: the names of its hypotheses and groups, and what
  // entries hold. It is empty where the block did not come over a stream.
  const v1::SelectionOutline& outline() const {
    return outline_ ? *outline_ : v1::SelectionOutline::default_instance();
  }
  // digest names the selection that judged.
  const std::string& digest() const { return block_.selection_digest(); }

  std::size_t event_count() const { return static_cast<std::size_t>(block_.event_count()); }
  // status says whether an event could be judged.
  v1::EventStatus status(std::size_t event) const;
  // late says that an event was not judged because the latency budget was used up.
  bool late(std::size_t event) const { return status(event) == v1::EVENT_STATUS_EXPIRED; }
  // gate is the decision, after the stream's policy for late events.
  bool gate(std::size_t event) const;
  // accepted says whether a hypothesis accepts an event, before prescale, veto and shadow.
  bool accepted(int hypothesis, std::size_t event) const;
  // best is the best hypothesis of a declared group, -1 for none.
  int best(int group, std::size_t event) const;
  // entries are those of an event; none where the stream did not ask for them.
  std::vector<Entry> entries(std::size_t event) const;

  // block is the message.
  const v1::VerdictBlock& block() const { return block_; }

 private:
  v1::VerdictBlock block_;
  std::shared_ptr<const v1::SelectionOutline> outline_;
};

}  // namespace kinegate
