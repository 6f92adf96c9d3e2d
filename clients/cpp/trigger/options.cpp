#include "options.h"

#include <cmath>
#include <cstdlib>
#include <sstream>
#include <utility>

#include "kinegate/error.h"

namespace kinegate::trigger {
namespace {

[[noreturn]] void Fail(const std::string& message) {
  throw Error(message, grpc::StatusCode::INVALID_ARGUMENT);
}

// Read reads a number; NaN where the text is none.
double Read(const std::string& text) {
  char* end = nullptr;
  const double number = std::strtod(text.c_str(), &end);
  return text.empty() || *end != '\0' ? std::nan("") : number;
}

}  // namespace

Options::Options(int argc, char** argv, std::map<std::string, std::string> known)
    : values_(known), defaults_(std::move(known)) {
  for (int i = 1; i < argc; i += 2) {
    const std::string name = argv[i];
    if (name == "--help") {
      help_ = true;
      return;
    }
    const auto flag = name.substr(0, 2) == "--" ? values_.find(name.substr(2)) : values_.end();
    if (flag == values_.end()) Fail(name + " is no flag; there are" + usage());
    if (i + 1 == argc) Fail(name + " needs a value; there are" + usage());
    flag->second = argv[i + 1];
  }
}

std::string Options::usage() const {
  std::string all;
  for (const auto& [name, value] : defaults_) all += " --" + name + (value.empty() ? "" : " (" + value + ")");
  return all;
}

double Options::number(const std::string& name, double most) const {
  const double number = Read(text(name));
  if (!(number > 0 && number <= most)) {
    std::ostringstream message;
    message << "--" << name << " " << text(name) << " is no number above 0 and at most " << most;
    Fail(message.str());
  }
  return number;
}

std::int64_t Options::whole(const std::string& name, std::int64_t least, std::int64_t most) const {
  const double number = Read(text(name));
  if (!(number >= static_cast<double>(least) && number <= static_cast<double>(most)) ||
      number != std::trunc(number)) {
    Fail("--" + name + " " + text(name) + " is no whole number from " + std::to_string(least) + " to " +
         std::to_string(most));
  }
  return static_cast<std::int64_t>(number);
}

}  // namespace kinegate::trigger
