#include "kinegate/verdicts.h"

#include <cstring>
#include <utility>

#include "kinegate/error.h"

namespace kinegate {
namespace {

constexpr std::size_t kBitsPerByte = 8;

// At reads entry i of a column, which may start at any address.
template <typename T>
T At(const std::string& column, std::size_t i) {
  T value;
  std::memcpy(&value, column.data() + i * sizeof(T), sizeof(T));
  return value;
}

bool Bit(const std::string& bits, std::size_t i) {
  return (static_cast<unsigned char>(bits[i / kBitsPerByte]) >> (i % kBitsPerByte) & 1U) != 0;
}

[[noreturn]] void Fail(const v1::VerdictBlock& block, const std::string& what) {
  throw Error("verdict block " + std::to_string(block.sequence()) + ": " + what);
}

// CheckIndex checks an index against how many there are.
template <typename T>
void CheckIndex(const v1::VerdictBlock& block, const char* what, T index, T count) {
  if (index < T{0} || index >= count) {
    Fail(block, std::string(what) + " " + std::to_string(index) + " of " + std::to_string(count));
  }
}

void CheckSize(const v1::VerdictBlock& block, const char* name, std::size_t size, std::size_t due) {
  if (size != due) {
    Fail(block, std::string(name) + " has " + std::to_string(size) + " bytes where " + std::to_string(due) +
                    " are due");
  }
}

// CheckOffsets checks that n + 1 offsets rise from 0, and returns the last of them.
std::size_t CheckOffsets(const v1::VerdictBlock& block, const char* name, const std::string& offsets,
                         std::size_t n) {
  CheckSize(block, name, offsets.size(), (n + 1) * sizeof(std::int32_t));
  std::int32_t last = 0;
  for (std::size_t i = 0; i <= n; ++i) {
    const auto offset = At<std::int32_t>(offsets, i);
    if (offset < last || (i == 0 && offset != 0)) Fail(block, std::string(name) + " does not rise from 0");
    last = offset;
  }
  return static_cast<std::size_t>(last);
}

void CheckEntries(const v1::VerdictBlock& block, std::size_t events) {
  const v1::EntryColumns& e = block.entries();
  const std::size_t rows = CheckOffsets(block, "entries.offsets", e.offsets(), events);
  CheckSize(block, "entries.hypothesis_indices", e.hypothesis_indices().size(), rows * sizeof(std::int16_t));
  CheckSize(block, "entries.beam_rows", e.beam_rows().size(), rows * sizeof(std::int16_t));
  CheckSize(block, "entries.weights", e.weights().size(), rows * sizeof(double));
  CheckSize(block, "entries.statuses", e.statuses().size(), rows);
  CheckSize(block, "entries.assignment_counts", e.assignment_counts().size(), rows * sizeof(std::int32_t));
  CheckSize(
      block, "entries.assignments", e.assignments().size(),
      CheckOffsets(block, "entries.assignment_offsets", e.assignment_offsets(), rows) * sizeof(std::int16_t));
  CheckSize(block, "entries.observables", e.observables().size(),
            CheckOffsets(block, "entries.observable_offsets", e.observable_offsets(), rows) * sizeof(double));
  if (e.has_observable_uncertainties()) {
    CheckSize(block, "entries.observable_uncertainties", e.observable_uncertainties().size(),
              e.observables().size());
  }
  if (!e.has_fits()) return;
  const v1::FitColumns& f = e.fits();
  CheckSize(block, "entries.fits.statuses", f.statuses().size(), rows);
  CheckSize(block, "entries.fits.chi_squares", f.chi_squares().size(), rows * sizeof(double));
  CheckSize(block, "entries.fits.degrees_of_freedom", f.degrees_of_freedom().size(),
            rows * sizeof(std::int16_t));
  CheckSize(block, "entries.fits.probabilities", f.probabilities().size(), rows * sizeof(double));
  CheckSize(block, "entries.fits.iteration_counts", f.iteration_counts().size(), rows * sizeof(std::int16_t));
}

// Status reads a status, which has one byte.
template <typename T>
T Status(const std::string& statuses, std::size_t i) {
  return static_cast<T>(static_cast<unsigned char>(statuses[i]));
}

Fit FitAt(const v1::FitColumns& f, std::size_t row) {
  Fit fit;
  fit.status = Status<v1::FitStatus>(f.statuses(), row);
  fit.chi_square = At<double>(f.chi_squares(), row);
  fit.degrees_of_freedom = At<std::int16_t>(f.degrees_of_freedom(), row);
  fit.probability = At<double>(f.probabilities(), row);
  fit.iteration_count = At<std::int16_t>(f.iteration_counts(), row);
  return fit;
}

template <typename T>
std::vector<T> Slice(const std::string& column, const std::string& offsets, std::size_t row) {
  const auto first = static_cast<std::size_t>(At<std::int32_t>(offsets, row));
  const auto last = static_cast<std::size_t>(At<std::int32_t>(offsets, row + 1));
  std::vector<T> values;
  values.reserve(last - first);
  for (std::size_t i = first; i < last; ++i) values.push_back(At<T>(column, i));
  return values;
}

}  // namespace

Verdicts::Verdicts(v1::VerdictBlock block, std::shared_ptr<const v1::SelectionOutline> outline)
    : block_(std::move(block)), outline_(std::move(outline)) {
  if (rejected()) {
    block_.set_event_count(0);
    return;
  }
  if (block_.event_count() < 0) Fail(block_, "a negative number of events");
  const std::size_t n = event_count();
  const std::size_t bits = (n + kBitsPerByte - 1) / kBitsPerByte;
  CheckSize(block_, "statuses", block_.statuses().size(), n);
  CheckSize(block_, "gate", block_.gate().size(), bits);
  for (const auto& h : block_.hypotheses()) CheckSize(block_, "hypotheses", h.accepted().size(), bits);
  for (const auto& g : block_.groups()) {
    CheckSize(block_, "groups", g.best().size(), n * sizeof(std::int16_t));
  }
  if (block_.has_entries()) CheckEntries(block_, n);
}

v1::EventStatus Verdicts::status(std::size_t event) const {
  CheckIndex(block_, "event", event, event_count());
  return Status<v1::EventStatus>(block_.statuses(), event);
}

bool Verdicts::gate(std::size_t event) const {
  CheckIndex(block_, "event", event, event_count());
  return Bit(block_.gate(), event);
}

bool Verdicts::accepted(int hypothesis, std::size_t event) const {
  CheckIndex(block_, "hypothesis", hypothesis, block_.hypotheses_size());
  CheckIndex(block_, "event", event, event_count());
  return Bit(block_.hypotheses(hypothesis).accepted(), event);
}

int Verdicts::best(int group, std::size_t event) const {
  CheckIndex(block_, "group", group, block_.groups_size());
  CheckIndex(block_, "event", event, event_count());
  return At<std::int16_t>(block_.groups(group).best(), event);
}

std::vector<Entry> Verdicts::entries(std::size_t event) const {
  CheckIndex(block_, "event", event, event_count());
  std::vector<Entry> found;
  if (!block_.has_entries()) return found;
  const v1::EntryColumns& e = block_.entries();
  const auto last = static_cast<std::size_t>(At<std::int32_t>(e.offsets(), event + 1));
  for (auto row = static_cast<std::size_t>(At<std::int32_t>(e.offsets(), event)); row < last; ++row) {
    Entry entry;
    entry.hypothesis = At<std::int16_t>(e.hypothesis_indices(), row);
    entry.beam_row = At<std::int16_t>(e.beam_rows(), row);
    entry.weight = At<double>(e.weights(), row);
    entry.status = Status<v1::EntryStatus>(e.statuses(), row);
    entry.assignment_count = At<std::int32_t>(e.assignment_counts(), row);
    entry.assignment = Slice<std::int16_t>(e.assignments(), e.assignment_offsets(), row);
    entry.observables = Slice<double>(e.observables(), e.observable_offsets(), row);
    if (e.has_observable_uncertainties()) {
      entry.uncertainties = Slice<double>(e.observable_uncertainties(), e.observable_offsets(), row);
    }
    if (e.has_fits()) entry.fit = FitAt(e.fits(), row);
    found.push_back(std::move(entry));
  }
  return found;
}

}  // namespace kinegate
