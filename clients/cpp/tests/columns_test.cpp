// Columns of events and verdicts, without a server.
#include <gtest/gtest.h>

#include <cmath>
#include <cstring>
#include <functional>

#include "history.h"
#include "kinegate/error.h"
#include "kinegate/events.h"
#include "kinegate/verdicts.h"
#include "queue.h"
#include "sample.h"

namespace kinegate {
namespace {

template <typename T>
std::string Bytes(std::initializer_list<T> values) {
  std::string bytes(values.size() * sizeof(T), '\0');
  std::memcpy(bytes.data(), values.begin(), bytes.size());
  return bytes;
}

TEST(MakeBlock, SlicesMoveOffsetsAndKeepRows) {
  const testing::Sample sample(20);
  const v1::EventBlock whole = MakeBlock(sample.arrays());
  const v1::EventBlock part = MakeBlock(sample.arrays(), 5, 3);
  EXPECT_EQ(part.event_ids(), Bytes<std::int64_t>({5, 6, 7}));
  const auto first = static_cast<std::size_t>(sample.offsets[5]),
             last = static_cast<std::size_t>(sample.offsets[8]);
  EXPECT_EQ(part.object_classes().size(), last - first);
  EXPECT_EQ(part.momentum_angles().theta_rad(),
            whole.momentum_angles().theta_rad().substr(8 * first, 8 * (last - first)));
  std::int32_t offsets[4];
  std::memcpy(offsets, part.object_offsets().data(), sizeof offsets);
  EXPECT_EQ(offsets[0], 0);
  EXPECT_EQ(offsets[3], static_cast<std::int32_t>(last - first));
  EXPECT_FALSE(part.has_beam());
  EXPECT_FALSE(part.has_measured_mask());
  EXPECT_EQ(MakeBlock(sample.arrays(), 20, 0).event_ids().size(), 0U);
}

TEST(MakeBlock, OptionalColumnsArePresentWhenSet) {
  testing::Sample sample(2);
  EventArrays arrays = sample.arrays();
  const std::vector<std::int32_t> offsets{0, 0, 1};
  const std::vector<double> energy{1.5}, sigma{0.01}, time{-2}, zeros(2),
      covariance(6 * sample.classes.size());
  const std::vector<std::uint8_t> masks(sample.classes.size(), 6);
  arrays.beam = {offsets, energy, sigma, time};
  arrays.vertex = {zeros, zeros, zeros, {}};
  arrays.measured_mask = arrays.species_mask = masks;
  arrays.covariance = covariance;
  const v1::EventBlock block = MakeBlock(arrays);
  EXPECT_EQ(block.beam().energy_gev(), Bytes<double>({1.5}));
  EXPECT_EQ(block.measured_mask().masks().size(), masks.size());
  EXPECT_EQ(block.covariance().elements().size(), 8 * covariance.size());
  EXPECT_TRUE(block.has_vertex());
  EXPECT_FALSE(block.vertex().has_covariance_m2());
}

TEST(MakeBlock, FaultsNameColumnAndBothLengths) {
  const testing::Sample sample(3);
  const std::vector<double> one{1};
  const std::vector<std::int32_t> falling{0, 5, 3, static_cast<std::int32_t>(sample.classes.size())};
  const struct {
    const char* text;
    std::function<void(EventArrays*)> spoil;
  } cases[] = {
      {"theta has 1 entries", [&](EventArrays* a) { a->values[1] = one; }},
      {"phi has 0 entries", [&](EventArrays* a) { a->values[2] = {}; }},
      {"object_offsets has 0 entries where 4", [](EventArrays* a) { a->object_offsets = {}; }},
      {"covariance has 1 entries", [&](EventArrays* a) { a->covariance = one; }},
      {"beam.energy_gev has 1 entries where 0",
       [&](EventArrays* a) {
         static const std::vector<std::int32_t> none{0, 0, 0, 0};
         a->beam = {none, one, one, one};
       }},
  };
  for (const auto& c : cases) {
    EventArrays arrays = sample.arrays();
    c.spoil(&arrays);
    try {
      MakeBlock(arrays);
      ADD_FAILURE() << c.text;
    } catch (const Error& error) {
      EXPECT_NE(std::string(error.what()).find(c.text), std::string::npos) << error.what();
    }
  }
  EventArrays arrays = sample.arrays();
  arrays.object_offsets = falling;
  EXPECT_THROW(MakeBlock(arrays, 1, 1), Error);
  EXPECT_THROW(MakeBlock(sample.arrays(), 2, 2), Error);
}

TEST(MakeBlock, ASliceWhoseRowsLieBeyondTheTotalIsRefused) {
  const testing::Sample sample(3);
  const auto told = [](const EventArrays& arrays) -> std::string {
    try {
      MakeBlock(arrays, 1, 1);
      return "";
    } catch (const Error& error) {
      return error.what();
    }
  };
  EventArrays arrays = sample.arrays();
  std::vector<std::int32_t> beyond = sample.offsets;
  beyond[2] = beyond[3] + 1'000'000;
  arrays.object_offsets = beyond;
  EXPECT_NE(told(arrays).find("object_offsets runs to"), std::string::npos) << told(arrays);

  arrays = sample.arrays();
  const std::vector<std::int32_t> candidates{0, 0, 1'000'000, 1};
  const std::vector<double> one{1};
  arrays.beam = {candidates, one, one, one};
  EXPECT_NE(told(arrays).find("beam.offsets runs to"), std::string::npos) << told(arrays);
}

v1::VerdictBlock ThreeVerdicts(std::int64_t sequence) {
  v1::VerdictBlock block;
  block.set_sequence(sequence);
  block.set_event_count(3);
  block.set_statuses(std::string{1, 7, 1});
  block.set_gate(std::string{1});
  block.add_hypotheses()->set_accepted(std::string{5});
  block.add_groups()->set_best(Bytes<std::int16_t>({0, -1, 1}));
  v1::EntryColumns* e = block.mutable_entries();
  e->set_offsets(Bytes<std::int32_t>({0, 1, 1, 2}));
  e->set_hypothesis_indices(Bytes<std::int16_t>({0, 1}));
  e->set_beam_rows(Bytes<std::int16_t>({-1, 2}));
  e->set_weights(Bytes<double>({1, -0.5}));
  e->set_statuses(std::string{1, 2});
  e->set_assignment_counts(Bytes<std::int32_t>({1, 70'000}));
  e->set_assignment_offsets(Bytes<std::int32_t>({0, 1, 3}));
  e->set_assignments(Bytes<std::int16_t>({4, 0, -1}));
  e->set_observable_offsets(Bytes<std::int32_t>({0, 0, 1}));
  e->set_observables(Bytes<double>({0.25}));
  e->set_observable_uncertainties(Bytes<double>({0.125}));
  v1::FitColumns* f = e->mutable_fits();
  f->set_statuses(std::string{0, v1::FIT_STATUS_CONVERGED});
  f->set_chi_squares(Bytes<double>({Fit::kNone, 3.5}));
  f->set_degrees_of_freedom(Bytes<std::int16_t>({0, 5}));
  f->set_probabilities(Bytes<double>({Fit::kNone, 0.75}));
  f->set_iteration_counts(Bytes<std::int16_t>({0, 9}));
  return block;
}

TEST(Verdicts, ReadTheirColumns) {
  const Verdicts v(ThreeVerdicts(4));
  EXPECT_EQ(v.sequence(), 4);
  EXPECT_EQ(v.event_count(), 3U);
  EXPECT_TRUE(v.gate(0));
  EXPECT_FALSE(v.gate(1));
  EXPECT_TRUE(v.late(1));
  EXPECT_TRUE(v.accepted(0, 2));
  EXPECT_EQ(v.best(0, 1), -1);
  EXPECT_TRUE(v.entries(1).empty());
  const Entry entry = v.entries(2).at(0);
  EXPECT_EQ(entry.beam_row, 2);
  EXPECT_EQ(entry.weight, -0.5);
  EXPECT_EQ(entry.status, v1::ENTRY_STATUS_REJECTED);
  EXPECT_EQ(entry.assignment, (std::vector<std::int16_t>{0, -1}));
  EXPECT_EQ(entry.observables, std::vector<double>{0.25});
  EXPECT_EQ(entry.assignment_count, 70'000);
  EXPECT_EQ(entry.uncertainties, std::vector<double>{0.125});
  ASSERT_TRUE(entry.fit.has_value());
  EXPECT_EQ(entry.fit->status, v1::FIT_STATUS_CONVERGED);
  EXPECT_EQ(entry.fit->chi_square, 3.5);
  EXPECT_EQ(entry.fit->degrees_of_freedom, 5);
  EXPECT_EQ(entry.fit->probability, 0.75);
  EXPECT_EQ(entry.fit->iteration_count, 9);
  EXPECT_TRUE(std::isnan(v.entries(0).at(0).fit->chi_square));
}

TEST(Verdicts, UncertaintiesAndFitsMayBeAbsent) {
  v1::VerdictBlock block = ThreeVerdicts(4);
  block.mutable_entries()->clear_observable_uncertainties();
  block.mutable_entries()->clear_fits();
  const Entry entry = Verdicts(block).entries(2).at(0);
  EXPECT_EQ(entry.observables.size(), 1U);
  EXPECT_TRUE(entry.uncertainties.empty());
  EXPECT_FALSE(entry.fit.has_value());
}

using google::protobuf::Descriptor;
using google::protobuf::FieldDescriptor;
using google::protobuf::Message;

// ColumnCount counts the columns that a message and those in it may have.
int ColumnCount(const Descriptor* of) {
  int count = 0;
  for (int i = 0; i < of->field_count(); ++i) {
    const FieldDescriptor* field = of->field(i);
    if (field->message_type()) count += ColumnCount(field->message_type());
    if (field->type() == FieldDescriptor::TYPE_BYTES) ++count;
  }
  return count;
}

// EachColumn visits the columns of a message and of those in it.
void EachColumn(Message* message, const std::function<void(Message*, const FieldDescriptor*)>& visit) {
  const auto* reflection = message->GetReflection();
  std::vector<const FieldDescriptor*> fields;
  reflection->ListFields(*message, &fields);
  for (const FieldDescriptor* field : fields) {
    if (field->type() == FieldDescriptor::TYPE_BYTES) {
      visit(message, field);
    } else if (field->is_repeated()) {
      for (int i = 0; i < reflection->FieldSize(*message, field); ++i)
        EachColumn(reflection->MutableRepeatedMessage(message, field, i), visit);
    } else if (field->message_type()) {
      EachColumn(reflection->MutableMessage(message, field), visit);
    }
  }
}

// Records are the records of all events, or what is wrong with the block.
std::string Records(const v1::VerdictBlock& block) {
  try {
    const Verdicts verdicts(block);
    std::string records;
    for (std::size_t i = 0; i < verdicts.event_count(); ++i) records += testing::Record(verdicts, i) + "/";
    return records;
  } catch (const Error& error) {
    return error.what();
  }
}

TEST(Verdicts, RecordsHoldEveryByteOfEveryColumn) {
  v1::VerdictBlock block = ThreeVerdicts(0);
  const std::string due = Records(block);
  int columns = 0;
  EachColumn(&block, [&](Message* message, const FieldDescriptor* field) {
    ++columns;
    const auto* reflection = message->GetReflection();
    const std::string sound = reflection->GetString(*message, field);
    for (std::size_t i = 0; i < sound.size(); ++i) {
      std::string other = sound;
      other[i] = static_cast<char>(other[i] ^ 1);
      reflection->SetString(message, field, other);
      EXPECT_FALSE(Records(block) == due) << field->full_name() << " byte " << i;
    }
    reflection->SetString(message, field, sound);
  });
  EXPECT_EQ(columns, ColumnCount(v1::VerdictBlock::descriptor()));
}

TEST(Verdicts, EveryColumnMustHaveItsLength) {
  v1::VerdictBlock block = ThreeVerdicts(0);
  EachColumn(&block, [&](Message* message, const FieldDescriptor* field) {
    const auto* reflection = message->GetReflection();
    const std::string sound = reflection->GetString(*message, field);
    for (const std::string& other : {sound + sound, sound.substr(1)}) {
      reflection->SetString(message, field, other);
      EXPECT_THROW(Verdicts{block}, Error) << field->full_name() << " of " << other.size() << " bytes";
    }
    reflection->SetString(message, field, sound);
  });
}

TEST(Verdicts, IndicesOutOfRangeAreTold) {
  const Verdicts v(ThreeVerdicts(4));
  EXPECT_THROW(v.status(3), Error);
  EXPECT_THROW(v.late(3), Error);
  EXPECT_THROW(v.gate(3), Error);
  EXPECT_THROW(v.accepted(0, 3), Error);
  EXPECT_THROW(v.accepted(1, 0), Error);
  EXPECT_THROW(v.accepted(-1, 0), Error);
  EXPECT_THROW(v.best(0, 3), Error);
  EXPECT_THROW(v.best(1, 0), Error);
  EXPECT_THROW(v.entries(3), Error);
}

TEST(Verdicts, UnsoundBlocksAreRefused) {
  const std::function<void(v1::VerdictBlock*)> spoils[] = {
      [](v1::VerdictBlock* b) { b->set_event_count(4); },
      [](v1::VerdictBlock* b) { b->set_event_count(-1); },
      [](v1::VerdictBlock* b) {
        b->mutable_entries()->set_offsets(Bytes<std::int32_t>({0, 2, 1, 2}));
      },
      [](v1::VerdictBlock* b) {
        b->mutable_entries()->set_offsets(Bytes<std::int32_t>({0, 1, 1, 9}));
      },
  };
  for (const auto& spoil : spoils) {
    v1::VerdictBlock block = ThreeVerdicts(0);
    spoil(&block);
    EXPECT_THROW(Verdicts{block}, Error);
  }
}

// A queue with three blocks of which one was sent, to a server with credit for one.
class QueueRules : public ::testing::Test {
 protected:
  QueueRules() {
    queue_.SetLimit(4);
    for (int i = 0; i < 3; ++i) {
      v1::EventBlock block;
      block.set_event_ids(Bytes<std::int64_t>({1, 2, 3}));
      queue_.Push({&block, nullptr, nullptr}, true);
    }
    EXPECT_EQ(Begin(), 5);
    v1::Credit credit;
    credit.set_block_count(1);
    credit.set_byte_count(1 << 20);
    queue_.Announce(turn_, {});
    queue_.Grant(turn_, credit);
    EXPECT_EQ(Sent(), 5);
  }

  // Sent is the sequence of the block to send now, -1 for none.
  std::int64_t Sent() {
    const Queue::Next next = queue_.WaitNext(turn_, Clock::now());
    return next.step == Queue::Step::kBlock ? next.frame->block().sequence() : -1;
  }

  // Begin begins another turn and returns its first sequence.
  std::int64_t Begin() {
    const Queue::Turn turn = queue_.Begin();
    turn_ = turn.number;
    return turn.first_sequence;
  }

  Queue queue_{5, LatePolicy::kAccept};
  std::int64_t turn_ = 0;
};

TEST_F(QueueRules, CreditHoldsTheNextBlockBackUntilTheVerdict) {
  EXPECT_EQ(Sent(), -1);
  queue_.Settle(turn_, ThreeVerdicts(5));
  EXPECT_EQ(Sent(), 6);
}

TEST_F(QueueRules, VerdictsOutOfOrderAreRefused) {
  EXPECT_THROW(queue_.Settle(turn_, ThreeVerdicts(6)), Error);
  queue_.Settle(turn_, ThreeVerdicts(5));
  EXPECT_THROW(queue_.Settle(turn_, ThreeVerdicts(5)), Error);
  EXPECT_THROW(queue_.Settle(turn_, ThreeVerdicts(6)), Error) << "it was not sent";
}

TEST_F(QueueRules, AVerdictAnswersAsManyEventsAsTheBlockHas) {
  v1::VerdictBlock two;
  two.set_sequence(5);
  two.set_event_count(2);
  two.set_statuses(std::string{1, 1});
  two.set_gate(std::string{1});
  EXPECT_THROW(queue_.Settle(turn_, two), Error);
  v1::VerdictBlock refused;
  refused.set_sequence(5);
  refused.mutable_rejected()->set_reason("BLOCK_INVALID");
  queue_.Settle(turn_, refused);
  EXPECT_EQ(queue_.last_answered(), 5) << "a block that was rejected has no events";
}

TEST_F(QueueRules, ResumeBeginsWithTheFirstWithoutAVerdict) {
  queue_.Settle(turn_, ThreeVerdicts(5));
  EXPECT_EQ(Sent(), 6);
  EXPECT_EQ(Begin(), 6);
  EXPECT_EQ(Sent(), 6) << "it is sent again";
}

TEST_F(QueueRules, AnOlderConnectionHasNoSay) {
  const std::int64_t older = turn_;
  Begin();
  EXPECT_EQ(Sent(), 5);
  queue_.Settle(older, ThreeVerdicts(5));
  queue_.Interrupt(older);
  queue_.Drain(older);
  EXPECT_EQ(queue_.last_answered(), 4);
  EXPECT_EQ(queue_.WaitNext(older, Clock::now()).step, Queue::Step::kOver);
  EXPECT_EQ(queue_.WaitNext(turn_, Clock::now()).step, Queue::Step::kWait);
}

TEST_F(QueueRules, NothingIsSentToAServerThatLeaves) {
  queue_.Drain(turn_);
  queue_.Settle(turn_, ThreeVerdicts(5));
  EXPECT_EQ(Sent(), -1);
}

TEST_F(QueueRules, LateEventsPassByThePolicyAndAreCounted) {
  queue_.Settle(turn_, ThreeVerdicts(5));
  EXPECT_TRUE(queue_.Take()->verdicts.gate(1));
  EXPECT_EQ(queue_.late_count(), 1);
}

TEST_F(QueueRules, AFullQueueRefusesUntilAHandlerHasRun) {
  v1::EventBlock block;
  EXPECT_TRUE(queue_.Push({&block, nullptr, nullptr}, false));
  EXPECT_FALSE(queue_.Push({&block, nullptr, nullptr}, false));
  queue_.Settle(turn_, ThreeVerdicts(5));
  EXPECT_FALSE(queue_.Push({&block, nullptr, nullptr}, false));
  queue_.Take();
  queue_.Taken();
  EXPECT_TRUE(queue_.Push({&block, nullptr, nullptr}, false));
}

}  // namespace
}  // namespace kinegate
